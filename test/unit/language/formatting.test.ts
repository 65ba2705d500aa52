import { describe, expect, test } from 'vitest'
import type { TextEdit } from 'vscode-languageserver-types'
import { applyEdits } from '../../../server/src/format/edits.ts'
import { formatting, formattingOnType } from '../../../server/src/language/formatting.ts'
import { DEFAULT_EDITOR_SETTINGS, readEditorSettings } from '../../../server/src/language/settings.ts'
import { snapshotOf } from '../checks/harness.ts'
import { atCursor } from './marks.ts'

const OPTIONS = { tabSize: 2, columns: true, enDash: true }

function applied(text: string, edits: readonly TextEdit[]): string {
  const snapshot = snapshotOf(text)
  return applyEdits(
    text,
    edits.map(({ range: { start, end }, newText }) => ({
      at: [snapshot.offsetOf(start), snapshot.offsetOf(end)],
      text: newText,
    })),
  )
}

test('a text with faults of YAML is left alone', () => {
  const text = 'lattice:   {bravais: cF, a: 4\npath:   Γ - X\n'
  expect(formatting(snapshotOf(text), OPTIONS)).toEqual([])
})

test('a text with other faults is formatted', () => {
  const text = 'latice:   {bravais: cF,a: 4}\n'
  expect(applied(text, formatting(snapshotOf(text), OPTIONS))).toBe('latice: {bravais: cF, a: 4}\n')
})

test('a selection of whole lines does not touch the next one', () => {
  const text = 'unit:   nm\nlabels:   none\n'
  const range = { start: { line: 0, character: 0 }, end: { line: 1, character: 0 } }
  expect(applied(text, formatting(snapshotOf(text), OPTIONS, range))).toBe('unit: nm\nlabels:   none\n')
})

/** What is left of the text after the last sign before `$0` has been typed. */
function typed(source: string, options = OPTIONS): string {
  const { text, offset } = atCursor(source)
  const snapshot = snapshotOf(text)
  return applied(text, formattingOnType(snapshot, snapshot.positionOf(offset), text[offset - 1], options))
}

describe('while typing', () => {
  test('a dash after a label becomes an en dash', () =>
    expect(typed('lattice: {bravais: cF, a: 4}\npath: Γ – X -$0')).toBe(
      'lattice: {bravais: cF, a: 4}\npath: Γ – X –',
    ))
  test('in a list of pieces too', () =>
    expect(typed('path:\n  - Γ – X\n  - Γ -$0\n')).toBe('path:\n  - Γ – X\n  - Γ –\n'))
  test.each([
    ['the dash of a list', 'path:\n  -$0\n'],
    ['a dash that no blank parts from its label', 'path: Γ-$0\n'],
    ['a number', 'points: {Q: [1/2 -$0]}\n'],
    ['a comment', 'path: Γ – X # X -$0\n'],
    ['a title', 'title: A -$0\n'],
  ])('%s stays', (_, source) => expect(typed(source)).toBe(source.replace('$0', '')))
  test('nothing happens where en dashes are not asked for', () =>
    expect(typed('path: Γ -$0\n', { ...OPTIONS, enDash: false })).toBe('path: Γ -\n'))
  test('after a line break the line before is put right, and no other', () =>
    expect(typed('lattice: {bravais: cF, a: 4}\natoms:\n  - Pb: [1/2,0,0]\n  - O:  [0,0,0]\n$0')).toBe(
      'lattice: {bravais: cF, a: 4}\natoms:\n  - Pb: [1/2,0,0]\n  - O:  [  0, 0, 0]\n',
    ))
})

describe('settings', () => {
  test('are read one by one; what is no truth value is passed over', () =>
    expect(
      readEditorSettings({
        codeLens: false,
        format: { enDash: true, alignColumns: 'no', more: true },
        inlayHints: [1],
      }),
    ).toEqual({
      ...DEFAULT_EDITOR_SETTINGS,
      codeLens: false,
      format: { ...DEFAULT_EDITOR_SETTINGS.format, enDash: true },
    }))
  test.each([undefined, null, 3, 'x', []])('%j says nothing', section =>
    expect(readEditorSettings(section)).toEqual(DEFAULT_EDITOR_SETTINGS),
  )
})
