/** How combinations of a file's numbers are written. */
import { expect, test } from 'vitest'
import type { Fraction, NumberValue } from '../../../server/src/format/model.ts'
import { evaluate } from '../../../server/src/format/numbers.ts'
import { plusWhole, rational, sumOf, writeSum } from '../../../server/src/meaning/combinations.ts'

function number(text: string): NumberValue {
  const read = evaluate(text, () => ({ value: 4 }))
  if (!('number' in read)) throw new Error(text)
  return { ...read.number, text, at: [0, text.length] }
}
const fractions: Record<string, Fraction> = {
  '1': { p: 1, q: 1 },
  '-1': { p: -1, q: 1 },
  '1/2': { p: 1, q: 2 },
  '1/3': { p: 1, q: 3 },
}
const combination = (terms: Record<string, string>, whole = 0, stays = true): string =>
  writeSum(
    plusWhole(
      sumOf(
        Object.keys(terms).map(number),
        Object.values(terms).map(by => fractions[by]),
      ),
      whole,
    ),
    () => stays,
  )

test.each([
  // One number alone keeps its spelling.
  [{ '1 / 3': '1' }, '1 / 3'],
  [{ '0.250': '1' }, '0.250'],
  [{ '6.462(3)': '1' }, '6.462(3)'],
  [{ '0.25': '-1' }, '-0.25'],
  [{ '-1/4': '-1' }, '1/4'],
  [{ '\u22120.5': '-1' }, '0.5'],
  [{ 'sqrt(3)/2': '-1' }, '-(sqrt(3)/2)'],
  [{ '0': '-1' }, '0'],
  // Sums stay exact, in the style of what they are made of.
  [{ '1/3': '1', '1/6': '1' }, '1/2'],
  [{ '0.1': '1', '0.25': '-1' }, '-0.15'],
  [{ '0.1': '1/2', '0.3': '1/2' }, '0.2'],
  [{ '0.5': '1/3' }, '1/6'],
  [{ '0.2345': '1/3' }, '0.0781666667'],
  [{ '1/7': '1', '0.5': '1' }, '9/14'],
  [{ 'sqrt(2)': '1', '1': '1' }, '2.4142135624'],
] as const)('%o is written %s', (terms, text) => expect(combination(terms)).toBe(text))

test('a whole number more', () => {
  expect(combination({ '-1/3': '1' }, 1)).toBe('2/3')
  expect(combination({ '0.7312': '-1' }, 1)).toBe('0.2688')
  expect(combination({ '5/2': '1' }, -2)).toBe('1/2')
})

test('an expression whose parameters change their value becomes a number', () => {
  expect(combination({ '1/a': '1' })).toBe('1/a')
  expect(combination({ '1/a': '1' }, 0, false)).toBe('0.25')
})

test('entries of a matrix are recognised, others refused', () => {
  expect(rational(-2 / 3)).toEqual({ p: -2, q: 3 })
  expect(rational(0)).toEqual({ p: 0, q: 1 })
  expect(() => rational(Math.SQRT2)).toThrow(RangeError)
})
