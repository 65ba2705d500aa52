import { describe, expect, test } from 'vitest'
import type { ParameterName } from '../../../server/src/format/model.ts'
import {
  evaluate,
  formatCoordinate,
  formatFraction,
  formatNumber,
  formatVector,
  type ParameterValue,
  recogniseFraction,
  recogniseSurd,
} from '../../../server/src/format/numbers.ts'

/** A lattice with a = 4 and c = 6 whose `b` cannot be read. */
function parameters(name: ParameterName): ParameterValue {
  if (name === 'b') return 'pending'
  const value = { a: 4, c: 6, gamma: 120 }[name as 'a' | 'c' | 'gamma']
  return value === undefined ? { fault: 'has no value here' } : { value }
}

function numberOf(text: string) {
  const result = evaluate(text, parameters)
  if (!('number' in result)) throw new Error(`${text}: ${JSON.stringify(result)}`)
  return result.number
}

function faultOf(text: string) {
  const result = evaluate(text, parameters)
  if (!('fault' in result)) throw new Error(`${text}: ${JSON.stringify(result)}`)
  const { from, to, message, replacement } = result.fault
  return { at: text.slice(from, to), message, replacement }
}

describe('expressions', () => {
  test.each([
    ['12', 12],
    ['-3', -3],
    ['+.5', 0.5],
    ['−.5', -0.5],
    ['1.', 1],
    ['1e-3', 0.001],
    ['2.5E+2', 250],
    ['1e−3', 0.001],
    ['6.462(3)', 6.462],
    ['100(2)/4', 25],
    ['1/3', 1 / 3],
    ['1 - 1/3 - 2/3', 0],
    ['2*3+4*5', 26],
    ['2-3-4', -5],
    ['12/2/3', 2],
    ['2*(3+4)', 14],
    ['--3', 3],
    ['2*-3', -6],
    ['-2^2', -4], // The power binds before the sign.
    ['2^-1', 0.5],
    ['2^3^2', 512], // To the right: 2⁹.
    ['(-8)^3', -512],
    ['4^0.5', 2],
    ['0^0', 1],
    ['pi', Math.PI],
    ['2pi', 2 * Math.PI],
    ['2*pi', 2 * Math.PI],
    ['2pi^2', 2 * Math.PI ** 2],
    ['2pi/a', Math.PI / 2],
    ['-2pi', -2 * Math.PI],
    ['sqrt(3)/2', Math.sqrt(3) / 2],
    ['sin(30)', 1 / 2], // Exactly, as all of these.
    ['cos(60)', 1 / 2],
    ['cos(90)', 0],
    ['sin(180)', 0],
    ['tan(180)', 0],
    ['sin(-30)', -1 / 2],
    ['cos(gamma)', -1 / 2],
    ['1/2 + a^2/(4*c^2)', 1 / 2 + 16 / 144],
    [' ( 1 )\n', 1],
  ])('%s = %d', (text, value) => expect(numberOf(text).value).toBe(value))

  test('tan(45) is 1 up to rounding', () => expect(numberOf('tan(45)').value).toBeCloseTo(1, 15))

  test('what it is built of decides how exactly it is known', () => {
    expect(numberOf('1/3').exact).toEqual({ p: 1, q: 3 })
    expect(numberOf('0.1 + 0.2').exact).toEqual({ p: 3, q: 10 })
    expect(numberOf('0.1 + 0.2').value).toBe(0.3) // In floating point 0.30000000000000004.
    expect(numberOf('-0.125').exact).toEqual({ p: -1, q: 8 })
    expect(numberOf('(2/3)^-2').exact).toEqual({ p: 9, q: 4 })
    expect(numberOf('1e-3').exact).toEqual({ p: 1, q: 1000 })
    expect(numberOf('-0').exact).toEqual({ p: 0, q: 1 })
    expect(numberOf('sqrt(4)').exact).toBeUndefined()
    expect(numberOf('pi/2').exact).toBeUndefined()
    expect(numberOf('a/2').exact).toBeUndefined()
    expect(numberOf('4^0.5').exact).toBeUndefined()
  })

  test('a fraction that outgrows the safe integers is given up, its value is not', () => {
    const { value, exact } = numberOf('9007199254740991/9007199254740881 + 1/3')
    expect(exact).toBeUndefined()
    expect(value).toBeCloseTo(4 / 3, 12)
    expect(numberOf('0.12345678901234567').exact).toBeUndefined()
    expect(numberOf('3^40/3^35').exact).toBeUndefined()
    expect(numberOf('3^40/3^35').value).toBeCloseTo(243, 9)
  })

  test('digits after the point are known of plain decimals only', () => {
    const decimals = (text: string) => numberOf(text).decimals
    expect(['0.333', '-.50', '12', '1.', '6.462(3)', '0.1234567890123456789'].map(decimals)).toEqual([
      3, 2, 0, 0, 3, 19,
    ])
    expect(['1/3', '1e-3', '(0.5)', '0.5+0', 'a', '--1'].map(decimals)).toEqual(Array(6).fill(undefined))
  })

  test('the parameters used are told, each once', () => {
    expect(numberOf('c/a + c').uses).toEqual(['c', 'a'])
    expect(numberOf('1/2').uses).toEqual([])
  })

  test('a parameter that cannot be read leaves no other fault behind', () => {
    expect(evaluate('1/(b - b)', parameters)).toEqual({ pending: true })
    expect(evaluate('sqrt(0-b)^0.5 + tan(b)', parameters)).toEqual({ pending: true })
    expect(faultOf('b + q').at).toBe('q')
  })
})

describe('faults stand on their own characters', () => {
  test.each([
    ['', '', 'A number is missing.'],
    ['1 +', '+', 'Something is missing after `+`.'],
    ['-', '-', 'Something is missing after `-`.'],
    ['1/0', '0', 'This is a division by zero.'],
    ['1/(a - 4)', '(a - 4)', 'This is a division by zero.'],
    ['0^-1', '0^-1', 'This is a division by zero.'],
    ['(1 + 2', '(1 + 2', 'A closing parenthesis is missing.'],
    ['1)', ')', 'This parenthesis was not opened.'],
    ['[1]', '[', 'Only round parentheses stand in a number.'],
    ['2a', 'a', 'An operator is missing before `a`, such as `2*a`.'],
    ['2 a', 'a', 'An operator or a comma is missing before `a`.'],
    ['2 pi', 'pi', 'An operator or a comma is missing before `pi`.'],
    ['2(3', '(', 'An operator is missing before `(`.'],
    ['1..2', '.2', 'An operator is missing before `.2`.'],
    ['1/2pi', '2pi', '`/2pi` can be read in two ways: write `/(2*pi)` or `/2*pi`.'],
    ['sqrt 3', 'sqrt', '`sqrt` needs its argument in parentheses: `sqrt(…)`.'],
    ['sqrt(-1)', 'sqrt(-1)', 'The square root of -1 is no real number.'],
    ['(-8)^(1/3)', '(-8)^(1/3)', 'A fractional power of a negative number is no real number.'],
    ['tan(90)', 'tan(90)', 'tan(90) is infinite.'],
    ['1e400', '1e400', 'This number is too large to be computed with.'],
    ['9^999', '9^999', 'This number is too large to be computed with.'],
    ['1e13', '1e13', 'This number is beyond 10¹²: no length, fraction or count of a crystal is.'],
    ['-2e12', '-2e12', 'This number is beyond 10¹²: no length, fraction or count of a crystal is.'],
    ['.inf', '.inf', 'Numbers must be finite: `.inf` is not read.'],
    ['NaN', 'NaN', 'Numbers must be finite: `NaN` is not read.'],
    ['1 + Infinity', 'Infinity', 'Numbers must be finite: `Infinity` is not read.'],
    ['0x1A', '0x1A', 'Numbers are decimal: hexadecimal, octal and binary ones are not read.'],
    ['1e', 'e', 'The power of ten after `e` is missing.'],
    ['beta', 'beta', '`beta` has no value here.'],
    ['$', '$', '`$` cannot stand in a number.'],
  ])('%s', (text, at, message) => expect(faultOf(text)).toMatchObject({ at, message }))

  test.each([
    ['1,5', '.'],
    ['3.8O', '0'],
    ['5.4l', '1'],
    ['2**3', '^'],
    ['2×3', '*'],
    ['1÷2', '/'],
    ['½', '1/2'],
    ['2π', 'pi'],
    ['alph', 'alpha'],
    ['5.43 Å', ''],
    ['5.43 A', ''],
    ['5.43 angstrom', ''],
    ['90°', ''],
    ['90 deg', ''],
  ])('what is meant by %s is offered', (text, replacement) =>
    expect(faultOf(text).replacement).toBe(replacement),
  )

  test('depth and length are bounded', () => {
    expect(faultOf('('.repeat(200)).message).toBe('An expression is nested over 64 levels deep.')
    expect(faultOf(`${'2^'.repeat(200)}2`).message).toBe('An expression is nested over 64 levels deep.')
    expect(faultOf('1+'.repeat(600)).message).toBe('A number of over 1000 characters is not read.')
    expect(numberOf(`${'-'.repeat(998)}1`).value).toBe(1)
  })
})

describe('numbers written back', () => {
  test.each([
    [0, '0'],
    [-0, '0'],
    [1e-17, '0'],
    [0.5, '0.5'],
    [1 / 3, '0.333333'],
    [-2 / 3, '-0.666667'],
    [12, '12'],
    [1200, '1200'],
    [0.1 + 0.2, '0.3'],
    [5.4300001, '5.43'],
    [0.00001234567, '0.0000123457'],
    [1.5e-9, '1.5e-9'],
    [1e12, '1000000000000'],
  ])('%d as %s', (x, text) => {
    expect(formatNumber(x)).toBe(text)
    expect(numberOf(text).value).toBeCloseTo(x, 6)
  })

  test('numbers beyond all use, as powers of ten', () => expect(formatNumber(1.5e21)).toBe('1.5e+21'))

  test('with a number of digits', () => {
    expect(formatNumber(1 / 3, 2)).toBe('0.33')
    expect(formatNumber(0.004, 2)).toBe('0')
    expect(formatNumber(-0.004, 2)).toBe('0')
    expect(formatNumber(12.5, 0)).toBe('13')
    expect(formatNumber(120, 0)).toBe('120')
  })

  test('fractions and roots are recognised', () => {
    expect(recogniseFraction(0.25, 1e-9)).toEqual({ p: 1, q: 4 })
    expect(recogniseFraction(-2 / 3, 1e-9)).toEqual({ p: -2, q: 3 })
    expect(recogniseFraction(0.333, 0.001)).toEqual({ p: 1, q: 3 })
    expect(recogniseFraction(0.333, 1e-4)).toBeUndefined()
    expect(recogniseFraction(1e-12, 1e-9)).toEqual({ p: 0, q: 1 })
    expect(recogniseFraction(1 / 7, 1e-9, 6)).toBeUndefined()
    expect(recogniseSurd(Math.sqrt(3) / 2, 1e-9)).toBe('sqrt(3)/2')
    expect(recogniseSurd((-2 * Math.sqrt(2)) / 3, 1e-9)).toBe('-2*sqrt(2)/3')
    expect(recogniseSurd(-Math.sqrt(3), 1e-9)).toBe('-sqrt(3)')
    expect(recogniseSurd(0.5, 1e-9)).toBeUndefined()
    expect(formatFraction({ p: -1, q: 2 })).toBe('-1/2')
    expect(formatFraction({ p: 3, q: 1 })).toBe('3')
    expect(formatCoordinate(1 / 3)).toBe('1/3')
    expect(formatCoordinate(0.3333)).toBe('0.3333')
    expect(formatVector([0.5, 0, -0.123456789])).toBe('[1/2, 0, -0.123457]')
  })
})
