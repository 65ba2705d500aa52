import { readFileSync } from 'node:fs'
import { describe, expect, test } from 'vitest'

interface Rule {
  pattern: string
  flags?: string
}
const configuration = JSON.parse(
  readFileSync(new URL('../../syntaxes/language-configuration.json', import.meta.url), 'utf8'),
) as { wordPattern: Rule; indentationRules: { increaseIndentPattern: string; decreaseIndentPattern: string } }

const words = (text: string) =>
  text.match(new RegExp(configuration.wordPattern.pattern, `g${configuration.wordPattern.flags}`)) ?? []

describe('what a double click selects', () => {
  test.each([
    ['path: Γ – X | U-K1', ['path', 'Γ', 'X', 'U', 'K1']],
    ["Σ1 → H' → X_1 → Y₁", ['Σ1', "H'", 'X_1', 'Y₁']],
    ['[-1/3, .25, 1e-3]', ['1', '3', '.25', '1e-3']],
    ['2pi/a', ['2', 'pi', 'a']],
    ['time-reversal: no', ['time-reversal', 'no']],
    ['labels: setyawan-curtarolo-2010', ['labels', 'setyawan-curtarolo-2010']],
    ['# braggline: allow point-outside-zone', ['braggline', 'allow', 'point-outside-zone']],
  ])('%s', (text, expected) => expect(words(text)).toEqual(expected))

  test('never nothing', () => {
    expect(new RegExp(`^(?:${configuration.wordPattern.pattern})$`, 'u').test('')).toBe(false)
  })
})

describe('where a new line begins', () => {
  const increase = new RegExp(configuration.indentationRules.increaseIndentPattern)
  const decrease = new RegExp(configuration.indentationRules.decreaseIndentPattern)

  test.each(['lattice:', 'points: # two', 'atoms: [', 'mesh: {', 'path: |', 'title: >-'])(
    'further in after "%s"',
    line => expect(increase.test(line)).toBe(true),
  )
  test.each(['unit: bohr', '  - Pb: [0, 0, 0]', '# points:', ''])('no further in after "%s"', line =>
    expect(increase.test(line)).toBe(false),
  )
  test.each(['  ]', '}', '  },'])('further out with "%s"', line => expect(decrease.test(line)).toBe(true))
})
