import { describe, expect, test } from 'vitest'
import { TextDocument } from 'vscode-languageserver-textdocument'
import { appendToPathEdits } from '../../../server/src/language/append-to-path.ts'
import { checked } from '../exchange/support.ts'

const LATTICE = 'lattice: {bravais: cF, a: 4}\n'

/** The file after labels were picked; undefined where it cannot be written to. */
function after(path: string, labels: readonly string[], newPiece = false): string | undefined {
  const text = LATTICE + path
  const { snapshot } = checked(text)
  const edits = appendToPathEdits(snapshot, snapshot.documents[0], labels, newPiece)
  return edits
    ? TextDocument.applyEdits(TextDocument.create('a:b', 'x', 0, text), edits).slice(LATTICE.length)
    : undefined
}

describe('a label goes on from the last point', () => {
  test.each([
    ['path: Γ – X\n', 'path: Γ – X – W\n'],
    ['path: Γ-X', 'path: Γ-X-W'],
    ['path: Γ - X   # to the face\n', 'path: Γ - X - W   # to the face\n'],
    ['path: Γ → X | U → L\n', 'path: Γ → X | U → L → W\n'],
    ['path: "Γ – X"\n', 'path: "Γ – X – W"\n'],
    ['path: Γ –(40)– X\n', 'path: Γ –(40)– X – W\n'],
    ['path: [Γ – X, U – L]\n', 'path: [Γ – X, U – L – W]\n'],
    [
      'path:\n  - Γ – X\n  - U – L # last\nmesh: {divisions: [2, 2, 2]}\n',
      'path:\n  - Γ – X\n  - U – L – W # last\nmesh: {divisions: [2, 2, 2]}\n',
    ],
    ['path:\n  Γ – X\n  – L\n', 'path:\n  Γ – X\n  – L – W\n'],
  ])('%j', (before, expected) => expect(after(before, ['W'])).toBe(expected))
})

describe('two labels begin a piece', () => {
  test.each([
    ['path: Γ – X\n', 'path: Γ – X | U – L\n'],
    ['path: "Γ-X"\n', 'path: "Γ-X | U-L"\n'],
    ['path: [Γ – X]\n', 'path: [Γ – X, U – L]\n'],
    ['path:\n  - Γ – X # first\n', 'path:\n  - Γ – X # first\n  - U – L\n'],
    ['path:\n- Γ – X', 'path:\n- Γ – X\n- U – L'],
  ])('%j', (before, expected) => expect(after(before, ['U', 'L'], true)).toBe(expected))
})

describe('a path that is not there, or not of the file', () => {
  test.each([
    ['', 'path: Γ – X₁\n'],
    ['path:\n', 'path: Γ – X₁\n'],
    ['path: recommended\n', 'path: Γ – X₁\n'],
  ])('%j', (before, expected) => expect(after(before, ['Γ', 'X1'], true)).toBe(expected))
})

test('subscripts are written as the file writes them', () => {
  expect(after('points: {X1: [0, 0, 1/2]}\npath: Γ – X1\n', ['X1'])).toContain('Γ – X1 – X1')
  expect(after('points: {X1: [0, 0, 1/2]}\npath: Γ – X₁\n', ['X1'])).toContain('Γ – X₁ – X₁')
})

test('a path behind an alias stays as it is', () => {
  expect(after('title: &p Γ – X\npath: *p\n', ['W'])).toBeUndefined()
})
