/** Expressions against JavaScript's own arithmetic, and exact fractions against whole numbers of any size. */
import fc from 'fast-check'
import { expect, test } from 'vitest'
import {
  type Evaluated,
  evaluate,
  formatFraction,
  formatNumber,
  recogniseFraction,
} from '../../server/src/format/numbers.ts'

/** An expression with its value in JavaScript and, where it has one, as a fraction of big integers. */
interface Sample {
  readonly text: string
  readonly value: number
  readonly p?: bigint
  readonly q?: bigint
}

const whole = fc
  .integer({ min: 0, max: 99 })
  .map((n): Sample => ({ text: String(n), value: n, p: BigInt(n), q: 1n }))
const decimal = fc
  .tuple(fc.integer({ min: 0, max: 999 }), fc.integer({ min: 1, max: 3 }))
  .map(([n, digits]): Sample => {
    const text = (n / 10 ** digits).toFixed(digits)
    return { text, value: Number(text), p: BigInt(n), q: 10n ** BigInt(digits) }
  })

const binary = (left: Sample, operator: string, right: Sample): Sample => {
  const text = `(${left.text}) ${operator} (${right.text})`
  const { p: a = 0n, q: b = 1n } = left
  const { p: c = 0n, q: d = 1n } = right
  switch (operator) {
    case '+':
      return { text, value: left.value + right.value, p: a * d + c * b, q: b * d }
    case '-':
      return { text, value: left.value - right.value, p: a * d - c * b, q: b * d }
    case '*':
      return { text, value: left.value * right.value, p: a * c, q: b * d }
    default:
      return { text, value: left.value / right.value, p: a * d, q: b * c }
  }
}

const { expression } = fc.letrec<{ expression: Sample }>(tie => ({
  expression: fc.oneof(
    { maxDepth: 4, withCrossShrink: true },
    whole,
    decimal,
    tie('expression').map(
      ({ text, value, p = 0n, q }): Sample => ({ text: `-(${text})`, value: -value, p: -p, q }),
    ),
    fc
      .tuple(tie('expression'), fc.constantFrom('+', '-', '*', '/'), tie('expression'))
      .map(([left, operator, right]) => binary(left, operator, right)),
  ),
}))

test('value and exact fraction are right', () => {
  let exact = 0
  fc.assert(
    fc.property(expression, ({ text, value, p = 0n, q = 1n }) => {
      fc.pre(text.length < 900 && !(Math.abs(value) > 1e12))
      const result = evaluate(text)
      if (!('number' in result)) {
        expect(text).toContain('/') // Only a division by zero has no value here.
        return
      }
      const { number } = result
      fc.pre(q !== 0n)
      expect(number.value).toBeCloseTo(value, 6)
      if (!number.exact) return
      exact++
      expect(BigInt(number.exact.p) * q).toBe(p * BigInt(number.exact.q))
      expect(number.exact.q).toBeGreaterThan(0)
    }),
    { numRuns: 3000 },
  )
  expect(exact).toBeGreaterThan(1000)
})

test('any text is a number, a fault inside the text, or neither of its own doing', () => {
  const signs = fc
    .array(
      fc.constantFrom(
        '1',
        '.',
        'e',
        '+',
        '-',
        '−',
        '*',
        '/',
        '^',
        '(',
        ')',
        ' ',
        'pi',
        'a',
        'sqrt',
        'tan',
        '90',
        ',',
        'Å',
        '0x',
        '\ud800',
        '½',
        '_',
        '9',
      ),
      { maxLength: 12 },
    )
    .map(parts => parts.join(''))
  fc.assert(
    fc.property(fc.oneof(signs, fc.string({ unit: 'binary', maxLength: 20 })), text => {
      const result = evaluate(text, () => ({ value: 3 }))
      if ('number' in result) expect(Number.isFinite(result.number.value)).toBe(true)
      else if ('fault' in result) {
        const { from, to, message, replacement } = result.fault
        expect(0 <= from && from <= to && to <= text.length, text).toBe(true)
        expect(message).toMatch(/^\S.*[.?]$/s)
        if (replacement !== undefined) expect(from < to || replacement !== '').toBe(true)
      } else expect.fail('No parameter was pending.')
    }),
    { numRuns: 5000 },
  )
})

const same = (left: Evaluated, right: Evaluated) =>
  expect({ ...left, decimals: undefined }).toEqual({ ...right, decimals: undefined })

test('plain decimals are read as the nearest double, however many their digits', () => {
  fc.assert(
    fc.property(fc.stringMatching(/^-?\d{0,12}(\.\d{0,18})?$/), text => {
      fc.pre(/\d/.test(text))
      const result = evaluate(text)
      if (!('number' in result)) return expect.fail(text)
      expect(result.number.value).toBe(Number(text) + 0)
      // In parentheses the same text goes the long way.
      const long = evaluate(`(${text})`)
      if ('number' in long) same(result.number, long.number)
    }),
    { numRuns: 3000 },
  )
})

test('what is written back reads as what it was', () => {
  fc.assert(
    fc.property(fc.integer({ min: -200, max: 200 }), fc.integer({ min: 1, max: 24 }), (p, q) => {
      const found = recogniseFraction(p / q, 1e-9)!
      const result = evaluate(formatFraction(found))
      expect('number' in result && result.number.value).toBe(p / q + 0)
    }),
  )
  fc.assert(
    fc.property(fc.double({ min: -1e12, max: 1e12, noNaN: true }), x => {
      const result = evaluate(formatNumber(x))
      const error = Math.abs(('number' in result ? result.number.value : Number.NaN) - x)
      expect(error).toBeLessThanOrEqual(5.1e-7 + Math.abs(x) * Number.EPSILON)
    }),
  )
})
