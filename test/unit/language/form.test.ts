/** Folding, selection, links, symbols and colours. */
import { describe, expect, test } from 'vitest'
import { decode } from '../../../server/src/format/decode.ts'
import { foldingRanges } from '../../../server/src/language/folding.ts'
import { documentLinks } from '../../../server/src/language/links.ts'
import { selectionRanges } from '../../../server/src/language/selection.ts'
import { LEGEND, semanticTokens, tokenEdits } from '../../../server/src/language/semantic-tokens.ts'
import { workspaceSymbols } from '../../../server/src/language/workspace-symbols.ts'
import { generatedFile } from '../../bench/generate.ts'
import { snapshotOf } from '../checks/harness.ts'
import { atCursor, bracketed } from './marks.ts'

/** The text with the numbers of the line that each fold ends at, and its kind. */
function folded(text: string, lineFoldingOnly = true, limit?: number): string {
  const ranges = foldingRanges(snapshotOf(text), { lineFoldingOnly, limit })
  const ends = new Map(
    ranges.map(({ startLine, endLine, kind }) => [startLine, `${endLine}${kind ? ` ${kind}` : ''}`]),
  )
  return text
    .split('\n')
    .map((line, i) => (ends.has(i) ? `${line} ⟶ ${ends.get(i)}` : line))
    .join('\n')
}

describe('folding', () => {
  const MARKED = `# One ⟶ 1 comment
# and two
lattice: ⟶ 9
  a: 4
  vectors: ⟶ 9
    - - a ⟶ 7
      - 0
      - 0
    - [0, a, 0]
    - [0, 0, a]
points: { ⟶ 12
  Q: [0, 0, 1/4],
  R: [0, 0, 1/3]
}
path: |- ⟶ 17

  Γ – X
  # no comment, but a label is missing
# the end`
  const plain = MARKED.replace(/ ⟶ .*$/gm, '')

  test('blocks, lists, comment runs and texts; a bracket that closes keeps its line', () =>
    expect(folded(plain)).toBe(MARKED))

  test('to the bracket where the client folds characters', () =>
    expect(folded(plain, false)).toBe(MARKED.replace('{ ⟶ 12', '{ ⟶ 13')))

  test('the widest within the limit of the client', () =>
    expect(folded(plain, true, 1)).toBe(plain.replace('lattice:', 'lattice: ⟶ 9')))

  test('documents, and regions', () =>
    expect(folded('unit: nm\n# region A\nlattice: {}\n# endregion\n---\nlattice:\n  a: 1\n---\n')).toBe(
      'unit: nm ⟶ 3\n# region A ⟶ 3 region\nlattice: {}\n# endregion\n--- ⟶ 7\nlattice: ⟶ 6\n  a: 1\n---\n',
    ))

  test('a list of atoms that is read the short way', () => {
    const text = generatedFile(100)
    const start = text.split('\n').indexOf('atoms:')
    const end = text.split('\n').indexOf('points:') - 1
    expect(foldingRanges(snapshotOf(text), { lineFoldingOnly: true })).toContainEqual({
      startLine: start,
      endLine: end,
    })
  })
})

/** What is selected step by step from the cursor. */
function selected(source: string): string[] {
  const { text, offset } = atCursor(source)
  const snapshot = snapshotOf(text)
  const [found] = selectionRanges(snapshot, [snapshot.positionOf(offset)])
  const steps: string[] = []
  for (let step: typeof found | undefined = found; step; step = step.parent)
    steps.push(text.slice(snapshot.offsetOf(step.range.start), snapshot.offsetOf(step.range.end)))
  return steps
}

describe('selection', () => {
  test('from a number to its document', () => {
    const text = 'lattice:\n  a: 4\n  vectors: [[a, 0, 0], [0, 1/2 + $0a, 0]]\ntitle: T\n'
    expect(selected(text)).toEqual([
      'a',
      '1/2 + a',
      '[0, 1/2 + a, 0]',
      '[[a, 0, 0], [0, 1/2 + a, 0]]',
      'vectors: [[a, 0, 0], [0, 1/2 + a, 0]]',
      'a: 4\n  vectors: [[a, 0, 0], [0, 1/2 + a, 0]]',
      'lattice:\n  a: 4\n  vectors: [[a, 0, 0], [0, 1/2 + a, 0]]',
      'lattice:\n  a: 4\n  vectors: [[a, 0, 0], [0, 1/2 + a, 0]]\ntitle: T',
      'lattice:\n  a: 4\n  vectors: [[a, 0, 0], [0, 1/2 + a, 0]]\ntitle: T\n',
    ])
  })

  test('from a label to its piece and its path', () =>
    expect(selected('lattice: {bravais: cF, a: 4}\npath: Γ – X$0 – W | L – Γ\n').slice(0, 4)).toEqual([
      'X',
      'Γ – X – W',
      'Γ – X – W | L – Γ',
      'path: Γ – X – W | L – Γ',
    ]))

  test('an atom of a long list', () => {
    const rows = Array.from({ length: 20 }, (_, i) => `  - Si: [0, 0, 0.${i + 10}]`)
    rows[9] = '  - Fe: {at: [1/2, 0$0, 0.3], name: up}'
    expect(selected(`lattice: {bravais: cP, a: 9}\natoms:\n${rows.join('\n')}\n`).slice(0, 5)).toEqual([
      '0',
      '[1/2, 0, 0.3]',
      '{at: [1/2, 0, 0.3], name: up}',
      'Fe: {at: [1/2, 0, 0.3], name: up}',
      '- Fe: {at: [1/2, 0, 0.3], name: up}',
    ])
  })
})

test('links go to the pages of rules that there are', () => {
  const text = `lattice: {bravais: cP, a: 4}
points:
  Q: [1/4, 0, 0] # braggline: allow point-unnamed, no-such-rule
checks:
  path-misses: off
  point-foo: off
`
  const links = documentLinks(snapshotOf(text), 'file:///rules', new Set(['point-unnamed', 'path-misses']))
  expect(
    bracketed(
      text,
      links.map(({ range }) => range),
    ),
  ).toBe(text.replace('point-unnamed', '⟦point-unnamed⟧').replace('path-misses', '⟦path-misses⟧'))
  expect(links.map(({ target }) => target).sort()).toEqual([
    'file:///rules/path-misses.md',
    'file:///rules/point-unnamed.md',
  ])
  expect(documentLinks(snapshotOf(text), undefined, new Set(['path-misses']))).toEqual([])
})

describe('symbols of the workspace', () => {
  const files = [
    {
      uri: 'file:///w/pb%20te.lattice.yaml',
      text: 'lattice: {bravais: cF, a: 6}\npoints: {X1: [1/4, 0, 0]}\n',
    },
    { uri: 'file:///w/b.lattice.yaml', text: 'title: Lead telluride\n---\nlattice: {bravais: cP, a: 4}\n' },
  ].map(({ uri, text }) => ({
    uri,
    decoded: decode(text),
    rangeOf: ([start, end]: readonly [number, number]) => ({
      start: snapshotOf(text).positionOf(start),
      end: snapshotOf(text).positionOf(end),
    }),
  }))
  const names = (query: string) =>
    workspaceSymbols(files, query).map(({ name, containerName }) => `${name} in ${containerName}`)

  test('are crystals and the points of the file', () =>
    expect(names('')).toEqual([
      'pb te in pb te.lattice.yaml',
      'X₁ in pb te',
      'Lead telluride in b.lattice.yaml',
      'b, crystal 2 in b.lattice.yaml',
    ]))
  test.each([
    ['x1', ['X₁ in pb te']],
    ['LTD', ['Lead telluride in b.lattice.yaml']],
    ['zz', []],
  ])('%s', (query, found) => expect(names(query)).toEqual(found))
})

/** The text with each token in brackets, followed by its modifiers. */
function coloured(text: string): string {
  const snapshot = snapshotOf(text)
  const data = semanticTokens(snapshot)
  const tokens: { at: number; length: number; modifiers: string }[] = []
  let [line, character] = [0, 0]
  for (let i = 0; i < data.length; i += 5) {
    line += data[i]
    character = data[i] > 0 ? data[i + 1] : character + data[i + 1]
    const modifiers = LEGEND.tokenModifiers.filter((_, bit) => data[i + 4] & (1 << bit)).join(' ')
    tokens.push({ at: snapshot.offsetOf({ line, character }), length: data[i + 2], modifiers })
  }
  return tokens.reduceRight(
    (marked, { at, length, modifiers }) =>
      `${marked.slice(0, at)}⟦${marked.slice(at, at + length)}⟧(${modifiers})${marked.slice(at + length)}`,
    text,
  )
}

describe('colours of labels', () => {
  test('tell file, book, unknown and outside apart', () => {
    // Simple cubic: (0.75, 0, 0) lies beyond the wall at 1/2.
    const text = `lattice: {bravais: cP, a: 4}
points:
  Q: [0.75, 0, 0]
  "S": {between: [Γ, Q], at: 0.1}
path: Γ – Q – Nowhere
`
    expect(coloured(text)).toBe(`lattice: {bravais: cP, a: 4}
points:
  ⟦Q⟧(declaration outside): [0.75, 0, 0]
  "⟦S⟧(declaration)": {between: [⟦Γ⟧(defaultLibrary), ⟦Q⟧(outside)], at: 0.1}
path: ⟦Γ⟧(defaultLibrary) – ⟦Q⟧(outside) – ⟦Nowhere⟧(unknown)
`)
  })

  test('say nothing where there is no lattice', () =>
    expect(coloured('lattice: {bravais: cP}\npath: Γ – Foo\n')).toBe(
      'lattice: {bravais: cP}\npath: ⟦Γ⟧() – ⟦Foo⟧()\n',
    ))

  test('leave aliases alone', () =>
    expect(
      coloured('lattice: {bravais: cP, a: 4}\npoints:\n  Q: &q {between: [Γ, X], at: 0.3}\n  S: *q\n'),
    ).toContain('⟦S⟧(declaration): *q\n'))

  test.each([
    [[], [1, 2, 3]],
    [
      [1, 2, 3, 4],
      [1, 9, 4],
    ],
    [
      [1, 1, 1],
      [1, 1],
    ],
    [
      [1, 2],
      [1, 2],
    ],
    [[1, 2], []],
  ])('the difference from %j to %j leads from one to the other', (before, after) => {
    const next = [...before]
    for (const { start, deleteCount, data = [] } of tokenEdits(before, after))
      next.splice(start, deleteCount, ...data)
    expect(next).toEqual(after)
  })
})
