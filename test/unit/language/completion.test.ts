import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import {
  type CompletionItem,
  InsertReplaceEdit,
  InsertTextFormat,
  type TextEdit,
} from 'vscode-languageserver-types'
import { BRAVAIS_TYPES } from '../../../server/src/crystal/bravais.ts'
import { completion, resolved } from '../../../server/src/language/completion.ts'
import type { Abilities } from '../../../server/src/language/completion/item.ts'
import { signature } from '../../../server/src/language/signature.ts'
import { filledIn } from '../../../server/src/language/skeletons.ts'
import { findingsOf, snapshotOf } from '../checks/harness.ts'
import { atCursor, DEMO_FILES } from './marks.ts'

const MODERN: Abilities = {
  snippets: true,
  insertReplace: true,
  labelDetails: true,
  indents: true,
  asksAgain: true,
}

function at(text: string, offset: number, abilities = MODERN): CompletionItem[] {
  const snapshot = snapshotOf(text)
  return completion(snapshot, snapshot.positionOf(offset), abilities)
}

function offered(source: string, abilities = MODERN): CompletionItem[] {
  const { text, offset } = atCursor(source)
  return at(text, offset, abilities)
}

/** Labels in the order in which an editor shows them. */
const labels = (source: string): string[] =>
  offered(source)
    .sort((p, q) => ((p.sortText ?? '') < (q.sortText ?? '') ? -1 : 1))
    .map(({ label }) => label)

/** The text after an item was taken, as an editor with snippets makes it, each stop at its default. */
function take(text: string, offset: number, item: CompletionItem): string {
  const snapshot = snapshotOf(text)
  const edit = item.textEdit!
  const range = InsertReplaceEdit.is(edit) ? edit.insert : (edit as TextEdit).range
  const [start, end] = [snapshot.offsetOf(range.start), snapshot.offsetOf(range.end)]
  expect(end).toBe(offset)
  const line = text.lastIndexOf('\n', start - 1) + 1
  const blanks = /^[ \t]*/.exec(text.slice(line, start))![0]
  const plain = item.insertTextFormat === InsertTextFormat.Snippet ? filledIn(edit.newText) : edit.newText
  return text.slice(0, start) + plain.replaceAll('\n', `\n${blanks}`) + text.slice(end)
}

/** The text after the item of this label was taken at `$0`. */
function taken(source: string, label: string, abilities = MODERN): string {
  const { text, offset } = atCursor(source)
  const items = at(text, offset, abilities)
  const item = items.find(each => [each.label, each.labelDetails?.description, each.detail].includes(label))
  if (!item) throw new Error(`${label} is not among ${items.map(each => each.label).join(', ')}`)
  return take(text, offset, item)
}

const CELL = 'lattice: {bravais: cP, a: 4}\n'

describe('keys', () => {
  test('those of the mapping that are not there yet, above or below', () => {
    const found = labels(`lattice:\n  bravais: tI\n  $0\n  c: 9.3\npath: recommended\n`)
    expect(found).toContain('a')
    expect(found).not.toContain('bravais')
    expect(found).not.toContain('c')
    expect(found).not.toContain('path')
  })

  test('beside each stands what it takes, in words without Markdown, and once', () => {
    const beside = (label: string, abilities?: Abilities) =>
      offered('lattice: {bravais: cP, a: 4}\n$0', abilities).find(item => item.label === label)!
    expect(beside('unit').labelDetails?.description).toBe('angstrom, nm, bohr')
    expect(beside('points').labelDetails?.description).toBe('mapping LABEL: [k1, k2, k3]')
    expect(beside('unit').detail).toBeUndefined()
    expect(beside('unit', { ...MODERN, labelDetails: false }).detail).toBe('angstrom, nm, bohr')
  })

  test('the parameters that the type leaves free come first', () =>
    expect(labels('lattice:\n  bravais: mP\n  $0\n').slice(0, 3)).toEqual(['a', 'b', 'c']))

  test('none that has no place in the plane, or in space', () => {
    expect(labels('lattice: {bravais: hp, a: 2.46}\n$0')).not.toContain('space-group')
    expect(labels('lattice:\n  bravais: hp\n  $0\n')).toContain('height')
    expect(labels('lattice:\n  bravais: hP\n  $0\n')).not.toContain('height')
  })

  test('in braces: without a line break, and no skeleton of a block', () =>
    expect(taken('lattice: {bravais: cP, $0}\n', 'a')).toBe('lattice: {bravais: cP, a: }\n'))

  test('a key whose colon stands already is only renamed', () =>
    expect(taken('uni$0: bohr\n', 'unit')).toBe('unit: bohr\n'))

  test('in each document of a file its own', () => {
    const found = labels(`${CELL}path: Γ – X\n---\n${CELL}p$0\n`)
    expect(found).toContain('path')
    expect(found).not.toContain('lattice')
  })

  test('where an atom, a point and a mesh are mappings', () => {
    expect(labels('atoms:\n  - Pb: {$0}\n')).toEqual(['at', 'name'])
    expect(labels('points:\n  Q: {between: [Γ, X], $0}\n')).toEqual(['at'])
    expect(labels('mesh:\n  coarse:\n    $0\n')).toEqual(['divisions', 'spacing', 'shift'])
  })

  test('a key whose values are listed opens their list', () => {
    const item = offered('lat$0').find(({ label }) => label === 'lattice')
    expect(item?.command).toBeDefined()
    expect(taken('lat$0', 'lattice')).toBe('lattice:\n  bravais: ')
    expect(taken('lat$0', 'lattice', { ...MODERN, asksAgain: false })).toBe(
      'lattice:\n  bravais: cF\n  a: 5.43',
    )
  })

  test('the long text comes by resolving', () => {
    const item = offered('lattice:\n  $0\n').find(({ label }) => label === 'a')!
    expect(item.documentation).toBeUndefined()
    expect(JSON.stringify(resolved(item).documentation)).toContain('in the unit of the file')
  })
})

describe('the Bravais type', () => {
  test('asks for exactly the parameters that are missing', () => {
    expect(taken('lattice:\n  bravais: $0\n', 'hexagonal: a, c')).toBe(
      'lattice:\n  bravais: hP\n  a: 3.2\n  c: 4.6\n',
    )
    expect(taken('lattice:\n  bravais: h$0\n  a: 3.25\n', 'hexagonal: c')).toBe(
      'lattice:\n  bravais: hP\n  c: 4.6\n  a: 3.25\n',
    )
    expect(taken('lattice: {bravais: $0}\n', 'rhombohedral, rhombohedral axes: a, alpha')).toBe(
      'lattice: {bravais: hR, a: 4.1, alpha: 55}\n',
    )
  })

  test('beside vectors it is a claim and asks for nothing', () =>
    expect(taken('lattice:\n  vectors: [[4, 0, 0], [0, 4, 0], [0, 0, 4]]\n  bravais: $0\n', 'cP')).toContain(
      '  bravais: cP\n',
    ))

  test('in the unit of the file', () =>
    // 3.2 Å = 0.32 nm.
    expect(taken('unit: nm\nlattice:\n  bravais: $0\n', 'simple cubic: a')).toContain('a: 0.32\n'))

  test('all of them', () =>
    expect(new Set(labels('lattice:\n  bravais: $0\n'))).toEqual(new Set(BRAVAIS_TYPES)))

  test('an editor without snippets gets the word alone', () =>
    expect(taken('lattice:\n  bravais: $0\n', 'hexagonal: a, c', { ...MODERN, snippets: false })).toBe(
      'lattice:\n  bravais: hP\n',
    ))

  test('right behind the colon a blank is added', () => {
    expect(taken('unit:$0\n', 'nm')).toBe('unit: nm\n')
    expect(taken('unit:n$0\n', 'nm')).toBe('unit: nm\n')
    expect(taken('lattice: {bravais:$0}\n', 'simple cubic: a')).toBe('lattice: {bravais: cP, a: 3.2}\n')
  })
})

describe('a path', () => {
  // Setyawan and Curtarolo 2010, simple cubic: Γ–X–M–Γ–R–X|M–R.
  test('empty: the book’s own by name, written out, then its first point', () =>
    expect(labels(`${CELL}path: $0`).slice(0, 3)).toEqual([
      'recommended',
      'Γ – X – M – Γ – R – X | M – R',
      'Γ',
    ]))

  test('behind a dash: where the book goes on comes first and is selected, where one stands last', () => {
    const found = labels(`${CELL}path: Γ – $0`)
    expect(found[0]).toBe('X')
    expect(found.at(-1)).toBe('Γ')
    const next = offered(`${CELL}path: Γ – X – $0`).find(({ preselect }) => preselect)
    expect(next?.label).toBe('M')
    // |XM| = π/a = 0.7854 Å⁻¹ with a = 4 Å.
    expect(next?.labelDetails?.description).toBe('[1/2, 1/2, 0], 0.7854 Å⁻¹ from X')
  })

  test('what has been walked is not what comes next', () =>
    expect(labels(`${CELL}path: Γ – X – M – Γ – $0`)[0]).toBe('R'))

  test('behind a label the dash is added', () =>
    expect(taken(`${CELL}path: Γ $0`, 'X')).toBe(`${CELL}path: Γ – X`))

  test('behind a dash without a blank the blank is added', () =>
    expect(taken(`${CELL}path: Γ –$0`, 'X')).toBe(`${CELL}path: Γ – X`))

  test('the rest of the book’s path', () =>
    expect(taken(`${CELL}path: Γ – X – $0`, 'the rest of the label book’s own path')).toBe(
      `${CELL}path: Γ – X – M – Γ – R – X | M – R`,
    ))

  test('Greek letters are found by their names', () => {
    const gamma = offered(`${CELL}path: Ga$0`).find(({ label }) => label === 'Γ')
    expect(gamma?.filterText).toBe('Gamma')
  })

  test('as a list, on a further line, in quotes', () => {
    expect(taken(`${CELL}path:\n  - Γ – X\n  - M – $0`, 'R')).toContain('  - M – R')
    expect(taken(`${CELL}path: Γ – X –\n  $0`, 'M')).toContain('X –\n  M')
    expect(taken(`${CELL}path: "Γ – $0"\n`, 'X')).toContain('"Γ – X"')
    expect(taken(`${CELL}path: [Γ – X, M – $0]\n`, 'R')).toContain('[Γ – X, M – R]')
  })

  test('labels as ends of `between`', () =>
    expect(taken(`${CELL}points:\n  Q: {between: [Γ, $0], at: 1/2}\n`, 'X')).toContain('[Γ, X]'))

  test('in a text that is broken elsewhere', () =>
    expect(labels(`${CELL}points: {Q: [1,\nmes\n---\n${CELL}"x\npath: Γ – $0`)).toContain('X'))
})

describe('other words', () => {
  test('elements, with a dash where there is none, those of the file first', () => {
    expect(taken('atoms:\n  $0\n', 'Pb')).toBe('atoms:\n  - Pb: [0, 0, 0]\n')
    expect(taken('atoms:\n  - P$0\n', 'Pb')).toBe('atoms:\n  - Pb: [0, 0, 0]\n')
    expect(labels('atoms:\n  - Te: [0, 0, 0]\n  - $0\n')[0]).toBe('Te')
  })

  test('space groups: those of the lattice’s own type first', () => {
    const found = labels('lattice: {bravais: cF, a: 5.4}\nspace-group: $0\n')
    // F23 is the first space group with a face-centred cubic lattice (International Tables A, no. 196).
    expect(found[0]).toBe('F23')
    expect(found).toHaveLength(230)
    expect(labels('lattice: {bravais: cF, a: 5.4}\nspace-group: 22$0\n')).toContain('225')
  })

  test('rules and severities under `checks` and in comments', () => {
    expect(taken('checks:\n  path-mis$0\n', 'path-misses')).toBe('checks:\n  path-misses: off\n')
    expect(labels('checks:\n  path-misses: $0\n')).toEqual(['off', 'info', 'warning', 'error'])
    expect(taken(`${CELL}path: Γ – X # braggline: allow $0\n`, 'path-misses')).toContain(
      'allow path-misses\n',
    )
    expect(labels(`# braggline: allow path-misses, $0`)).not.toContain('path-misses')
    expect(taken('# br$0', 'braggline: allow')).toBe('# braggline: allow ')
  })

  test.each(['# $0', '# units are $0', `${CELL}# path: Γ – $0`, `${CELL}path: Γ – X # to $0`, 'title: $0'])(
    'nothing at %j',
    source => expect(labels(source)).toEqual([]),
  )
})

test('a list that opens by itself behind `lattice:` does not catch the Enter of a new line', () => {
  const snapshot = snapshotOf('lattice:')
  const end = snapshot.positionOf(8)
  expect(completion(snapshot, end, MODERN, true)).toEqual([])
  expect(completion(snapshot, end, MODERN).length).toBeGreaterThan(BRAVAIS_TYPES.length)
})

describe('an empty file', () => {
  test.each(['$0', '# A crystal.\n$0', `${CELL}---\n$0`])('%j is offered whole files', source => {
    const text = taken(source, 'tetragonal: a, c')
    expect(findingsOf(text).map(({ rule }) => rule)).toEqual([])
  })
})

describe('the signature of a list', () => {
  const signed = (source: string) => {
    const { text, offset } = atCursor(source)
    const snapshot = snapshotOf(text)
    const help = signature(snapshot, snapshot.positionOf(offset))
    if (!help) return undefined
    const [{ label, documentation }] = help.signatures
    return [label, help.activeParameter, documentation]
  }
  test.each([
    ['atoms:\n  - Pb: [0, $0', ['[x, y, z]', 1, 'fractions of the conventional cell a, b, c']],
    ['unit: nm\nlattice:\n  vectors:\n    - [$0', ['[x, y, z]', 0, 'Cartesian, in nm']],
    [
      `${CELL}frames: {points: cartesian}\npoints:\n  Q: [0, 0, $0]\n`,
      ['[kx, ky, kz]', 2, 'Cartesian, in Å⁻¹ with the factor 2π'],
    ],
    [
      'lattice: {bravais: hp, a: 2.46}\nmesh:\n  divisions: [8, $0]\n',
      ['[n1, n2]', 1, 'number of points along each primitive reciprocal vector'],
    ],
    [
      `${CELL}supercell: [[1, 1, 0], [$0`,
      ['row 2: [n1, n2, n3]', 0, 'whole multiples of the primitive vectors'],
    ],
    [`${CELL}path: [$0`, undefined],
  ] as const)('%j', (source, expected) => expect(signed(source)).toEqual(expected))
})

const FORM = new Set(['yaml-syntax', 'key-unknown', 'key-repeated'])
const formProblems = (text: string): number => {
  const { documents, problems } = snapshotOf(text).decoded
  return [...problems, ...documents.flatMap(document => document.problems)].filter(({ rule }) =>
    FORM.has(rule),
  ).length
}

test.each(DEMO_FILES)('everything offered in %s keeps the form of the text', (_, text) => {
  const before = formProblems(text)
  for (let offset = 0; offset <= text.length; offset += 7) {
    const items = at(text, offset)
    const few = items.filter((__, i) => i % 17 === offset % 17)
    for (const item of few) {
      const after = take(text, offset, item)
      const word = `${text.slice(0, offset)}⟨$0⟩${text.slice(offset)}`
      // Inside a word the item stands before the rest of it, which an editor keeps or overwrites as it is told.
      if (/^[^\s,\]}]/.test(text.slice(offset))) continue
      expect(
        formProblems(after),
        `${word.slice(Math.max(0, offset - 60), offset + 60)}\n${item.label}\n${after}`,
      ).toBeLessThanOrEqual(before)
    }
  }
})

test('nothing that is typed makes it throw', () =>
  fc.assert(
    fc.property(
      fc.constantFrom(...DEMO_FILES.map(([, text]) => text)),
      fc.nat(),
      fc.nat({ max: 40 }),
      (text, place, gap) => {
        const offset = place % (text.length + 1)
        const cut = text.slice(0, offset) + text.slice(offset + gap)
        const snapshot = snapshotOf(cut)
        for (const item of completion(snapshot, snapshot.positionOf(offset), MODERN))
          expect(JSON.stringify(resolved(item))).not.toMatch(/undefined|NaN/)
        signature(snapshot, snapshot.positionOf(offset))
      },
    ),
    { numRuns: 300 },
  ))
