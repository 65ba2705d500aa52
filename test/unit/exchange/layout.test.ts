import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { displayWidth, harmless, inColumns, wrap } from '../../../server/src/exchange/layout.ts'

// Widths by Unicode Standard Annex 11: ideographs are wide, combining marks have none.
test.each([
  ['abc', 3],
  ['Γ – Σ₁', 6],
  ['鉛', 2],
  ['e\u0301', 1],
  ['', 0],
])('%j is %i columns wide', (text, width) => expect(displayWidth(text)).toBe(width))

describe('harmless', () => {
  test('escape sequences, line breaks and turned writing do not reach the terminal', () => {
    expect(harmless('\u001b[31mred\r\n\u202eabc\u009b1m')).toBe('�[31mred���abc�1m')
  })
  test('a tab is one blank', () => expect(harmless('a\tb')).toBe('a b'))
  test('nothing that it lets through steers a terminal', () => {
    fc.assert(
      fc.property(fc.string({ unit: 'binary' }), text => {
        for (const character of harmless(text)) {
          const code = character.codePointAt(0)!
          expect(code < 0x20 || (code >= 0x7f && code < 0xa0)).toBe(false)
        }
      }),
    )
  })
})

test('columns are aligned by what shows, and lines have no blanks at their end', () => {
  expect(
    inColumns(
      [
        ['鉛', '1', ''],
        ['tin', '10', 'x'],
      ],
      ['left', 'right', 'left'],
    ),
  ).toEqual(['鉛    1', 'tin  10  x'])
})

test('paragraphs are broken at blanks', () => {
  expect(wrap('one two  three\nfour', 9)).toEqual(['one two', 'three', 'four'])
  expect(wrap('overlong-word it is', 5)).toEqual(['overlong-word', 'it is'])
})
