import { describe, expect, test } from 'vitest'
import { applyEdits } from '../../../server/src/format/edits.ts'
import { definition, highlights, references } from '../../../server/src/language/references.ts'
import { prepareRename, rename } from '../../../server/src/language/rename.ts'
import { snapshotOf } from '../checks/harness.ts'
import { atCursor, bracketed } from './marks.ts'

/** The marked text says what is found of the name at `$0`. */
function find(feature: 'definition' | 'references' | 'mentions', source: string): void {
  const plain = source.replace(/[⟦⟧]/g, '')
  const { text, offset } = atCursor(plain)
  const snapshot = snapshotOf(text)
  const found =
    feature === 'definition'
      ? definition(snapshot, 'file:///x', offset)
      : references(snapshot, 'file:///x', offset, feature === 'references')
  expect(
    bracketed(
      text,
      found.map(({ range }) => range),
    ),
  ).toBe(source.replace('$0', ''))
}

function renamed(source: string, name: string): string {
  const { text, offset } = atCursor(source)
  const snapshot = snapshotOf(text)
  const edits = rename(snapshot, offset, name)
  if (!edits) return 'nothing'
  if ('refused' in edits) return `refused: ${edits.refused}`
  return applyEdits(
    text,
    edits.map(({ range: { start, end }, newText }) => ({
      at: [snapshot.offsetOf(start), snapshot.offsetOf(end)],
      text: newText,
    })),
  )
}

function prepared(source: string): string {
  const { text, offset } = atCursor(source)
  const answer = prepareRename(snapshotOf(text), offset)
  if (!answer) return 'nothing'
  if ('refused' in answer) return `refused: ${answer.refused}`
  return `${bracketed(text, [answer.range])} as ${answer.placeholder}`
}

describe('a label', () => {
  test('is defined under points', () =>
    find(
      'definition',
      `lattice: {bravais: cP, a: 4}
points:
  ⟦Q1⟧: [1/4, 0, 0]
  M2: {between: [Q1, X], at: 0.5}
path: Γ – Q_1$0 – X
`,
    ))

  test('is one label in all its spellings', () =>
    find(
      'references',
      `lattice: {bravais: cP, a: 4}
points:
  ⟦"Q₁"⟧: [1/4, 0, 0]
  M2: {between: [⟦Q_1⟧, X], at: 0.5}
path: Γ – ⟦Q1⟧$0 – X | Q – ⟦Q₁⟧
`,
    ))

  test('Γ is Gamma, and an escape', () =>
    find(
      'references',
      'lattice: {bravais: cP, a: 4}\npath:\n  - ⟦Γ⟧$0 – X\n  - "⟦\\u0393⟧ – M"\n  - X –(3)– ⟦Gamma⟧\n',
    ))

  test('of the book has no definition in the text', () =>
    find('definition', 'lattice: {bravais: cP, a: 4}\npath: Γ – X$0\n'))

  test('is looked for in its own document', () =>
    find(
      'mentions',
      `lattice: {bravais: cP, a: 4}
points: {Q: [1/4, 0, 0]}
path: Γ – Q
---
lattice: {bravais: cP, a: 4}
points: {Q$0: [1/4, 0, 0]}
path: Γ – ⟦Q⟧
`,
    ))

  test('is written where it is defined and read elsewhere', () => {
    const { text, offset } = atCursor(
      'lattice: {bravais: cP, a: 4}\npoints: {Q: [1/4, 0, 0]}\npath: Γ – Q$0\n',
    )
    // 3 is Write, 2 is Read (Language Server Protocol 3.17, DocumentHighlightKind).
    expect(highlights(snapshotOf(text), offset).map(({ kind }) => kind)).toEqual([3, 2])
  })
})

describe('an anchor', () => {
  const ANCHORS = `lattice: {bravais: cP, a: 4}
points:
  Q: &⟦half⟧ [1/4, 0, 0]
  R: *half$0
`
  test('is the definition of its alias', () => find('definition', ANCHORS))

  test('and its aliases are found', () =>
    find(
      'references',
      'lattice: {bravais: cP, a: 4}\npoints:\n  Q: &⟦q⟧$0 [1/4, 0, 0]\n  R: *⟦q⟧\n  S: &q [0, 0, 1/4]\n  T: *q\n',
    ))

  test('is renamed with them', () =>
    expect(renamed(ANCHORS.replace(/[⟦⟧]/g, ''), 'quarter')).toContain(
      '&quarter [1/4, 0, 0]\n  R: *quarter\n',
    ))
})

describe('renaming', () => {
  const FILE = `lattice: {bravais: cP, a: 4}
points:
  Q: [1/4, 0, 0] # Q stays here
  S: {between: [Q, X], at: 0.5}
path: ['Γ – Q', X – Q$0, "Q – S"]
`
  test('goes through points, between and path', () =>
    expect(renamed(FILE, 'Q1')).toBe(`lattice: {bravais: cP, a: 4}
points:
  Q1: [1/4, 0, 0] # Q stays here
  S: {between: [Q1, X], at: 0.5}
path: ['Γ – Q1', X – Q1, "Q1 – S"]
`))

  test('quotes what older readers take for a truth value, but not in a path', () =>
    expect(renamed(FILE, 'N')).toBe(`lattice: {bravais: cP, a: 4}
points:
  "N": [1/4, 0, 0] # Q stays here
  S: {between: ["N", X], at: 0.5}
path: ['Γ – N', X – N, "N – S"]
`))

  test('minds the quotes of a prime', () =>
    expect(renamed(FILE, "Q'")).toContain(`path: ['Γ – Q''', X – Q', "Q' – S"]`))

  test.each([
    ['S', 'refused: S is defined in this document already.'],
    ['X', 'refused: X stands in this document already, and means another point.'],
    ['Gamma', 'refused: Γ stands in this document already, and means another point.'],
    [
      '1Q',
      'refused: `1Q` is no label: a label is a letter, then letters, digits and primes; digits at the end are a subscript.',
    ],
    [
      '',
      'refused: `` is no label: a label is a letter, then letters, digits and primes; digits at the end are a subscript.',
    ],
  ])('to %s is refused', (name, answer) => expect(renamed(FILE, name)).toBe(answer))

  test('a label of the book is refused, with what to do', () =>
    expect(prepared('lattice: {bravais: cP, a: 4}\npath: Γ$0 – X\n')).toBe(
      'refused: Γ is a label of the book; define it under points to rename it.',
    ))

  test('an unknown label can be mended everywhere', () =>
    expect(renamed('lattice: {bravais: cP, a: 4}\npath: Γ – Q$0 – M | Q – R\n', 'X')).toBe(
      'lattice: {bravais: cP, a: 4}\npath: Γ – X – M | X – R\n',
    ))

  test('what an alias repeats is refused', () =>
    expect(
      prepared(
        'lattice: {bravais: cP, a: 4}\npoints:\n  Q: [1/4, 0, 0]\n  S: &s {between: [Γ, Q$0], at: 0.5}\n  T: *s\n',
      ),
    ).toBe('refused: Q is also meant by an alias: what stands behind it would not be renamed.'))

  test('another spelling of the same label is fine', () =>
    expect(renamed('lattice: {bravais: cP, a: 4}\npoints: {Q1$0: [1/4, 0, 0]}\npath: Γ – Q_1\n', 'Q₁')).toBe(
      'lattice: {bravais: cP, a: 4}\npoints: {Q₁: [1/4, 0, 0]}\npath: Γ – Q₁\n',
    ))

  test('nothing stands on a number', () =>
    expect(prepared('lattice: {bravais: cP, a: 4$0}\n')).toBe('nothing'))

  test('the place is the label without its quotes', () =>
    expect(prepared('lattice: {bravais: cP, a: 4}\npoints: {"N$0": [1/4, 0, 0]}\n')).toBe(
      'lattice: {bravais: cP, a: 4}\npoints: {"⟦N⟧": [1/4, 0, 0]}\n as N',
    ))
})
