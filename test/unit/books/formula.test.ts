import { describe, expect, test } from 'vitest'
import {
  combineForms,
  compileFormula,
  evaluateForm,
  formText,
  fractionText,
  isFixed,
  linearForm,
} from '../../../server/src/books/formula.ts'

describe('formulas', () => {
  // Ordinary arithmetic.
  test.each([
    ['2 + 3*4', 14],
    ['2*3^2', 18],
    ['-2^2', -4],
    ['2^3^2', 512],
    ['2^-1', 0.5],
    ['1 - 2 - 3', -4],
    ['8/4/2', 1],
    ['(1 + x^2/y^2)/4', 0.3125],
    ['sqrt(y)*cos(π)', -2],
    ['tan(π/4) + sin(π/2)', 2],
    ['-(x - y)', 2],
  ])('%s', (text, value) => expect(compileFormula(text, ['x', 'y'])([2, 4])).toBeCloseTo(value, 12))

  test.each(['1 +', '(1', '1)', 'q', '2 2', '', 'sin 2', '1 $ 2', 'constructor(1)'])('%j is refused', text =>
    expect(() => compileFormula(text, ['x'])).toThrow(SyntaxError),
  )
})

describe('linear forms', () => {
  test('a fraction and multiples of parameters', () => {
    const form = linearForm('1/2 - ζ + 2*η', ['ζ', 'η'])
    expect(evaluateForm(form, [0.1, 0.3])).toBeCloseTo(1, 12)
    expect(isFixed(form)).toBe(false)
    expect(formText(form, ['ζ', 'η'])).toBe('1/2 − ζ + 2η')
  })

  test.each([
    ['3/8', '3/8'],
    ['-1/3', '-1/3'],
    ['0', '0'],
    ['1', '1'],
    ['-(1/2)', '-1/2'],
  ])('%s stays exact', (text, exact) => {
    const form = linearForm(text, [])
    expect(fractionText(form)).toBe(exact)
    expect(isFixed(form)).toBe(true)
  })

  test('combinations carry the parameters along', () => {
    const [x, y] = [linearForm('η', ['η']), linearForm('1/2 - η', ['η'])]
    expect(formText(combineForms([-1, 0], [x, y]), ['η'])).toBe('−η')
    expect(formText(combineForms([0, -1], [x, y]), ['η'])).toBe('−1/2 + η')
    expect(fractionText(combineForms([1, 1], [x, y]))).toBe('1/2')
    expect(isFixed(combineForms([1, 1], [x, y]))).toBe(true)
  })

  test.each(['ζ^2', '1/ζ', '1/7', 'π'])('%s is none', text =>
    expect(() => linearForm(text, ['ζ'])).toThrow(SyntaxError),
  )
})
