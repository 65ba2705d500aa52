import { describe, expect, test } from 'vitest'
import {
  type BravaisType,
  completeCell,
  type GivenParameters,
  hexagonalFromRhombohedral,
  PARAMETER_TOLERANCE,
  rhombohedralFromHexagonal,
} from '../../../server/src/crystal/bravais.ts'

const names = (type: BravaisType, given: GivenParameters) => {
  const result = completeCell(type, given)
  return 'contradictions' in result ? result.contradictions.map(c => [c.name, c.given, c.expected]) : result
}

describe('the free parameters make the cell', () => {
  test.each([
    ['cF', { a: 5 }, { a: 5, b: 5, c: 5, alpha: 90, beta: 90, gamma: 90 }],
    ['tI', { a: 5, c: 7 }, { a: 5, b: 5, c: 7, alpha: 90, beta: 90, gamma: 90 }],
    ['oA', { a: 5, b: 6, c: 7 }, { a: 5, b: 6, c: 7, alpha: 90, beta: 90, gamma: 90 }],
    ['hP', { a: 5, c: 7 }, { a: 5, b: 5, c: 7, alpha: 90, beta: 90, gamma: 120 }],
    ['hR', { a: 5, c: 7 }, { a: 5, b: 5, c: 7, alpha: 90, beta: 90, gamma: 120 }],
    ['mC', { a: 5, b: 6, c: 7, beta: 99 }, { a: 5, b: 6, c: 7, alpha: 90, beta: 99, gamma: 90 }],
    [
      'aP',
      { a: 5, b: 6, c: 7, alpha: 80, beta: 99, gamma: 70 },
      { a: 5, b: 6, c: 7, alpha: 80, beta: 99, gamma: 70 },
    ],
    ['tp', { a: 5 }, { a: 5, b: 5, c: 1, alpha: 90, beta: 90, gamma: 90 }],
    ['oc', { a: 5, b: 6 }, { a: 5, b: 6, c: 1, alpha: 90, beta: 90, gamma: 90 }],
    ['hp', { a: 5 }, { a: 5, b: 5, c: 1, alpha: 90, beta: 90, gamma: 120 }],
    ['mp', { a: 5, b: 6, gamma: 80 }, { a: 5, b: 6, c: 1, alpha: 90, beta: 90, gamma: 80 }],
  ] as [BravaisType, GivenParameters, object][])('%s', (type, given, cell) => {
    expect(completeCell(type, given)).toMatchObject({ cell, axes: 'conventional', contradictions: [] })
  })

  test('rhombohedral axes become hexagonal ones', () => {
    // a_h = 2a sin(α/2), c_h = a√(3(1 + 2cos α)), written out for α = 90°: √2 a and √3 a.
    const result = completeCell('hR', { a: 5, alpha: 90 })
    expect(result).toMatchObject({ axes: 'rhombohedral', contradictions: [] })
    if (!('cell' in result)) throw new Error('no cell')
    expect(result.cell.a).toBeCloseTo(5 * Math.SQRT2, 12)
    expect(result.cell.c).toBeCloseTo(5 * Math.sqrt(3), 12)
    expect(result.cell.gamma).toBe(120)
  })

  test('hexagonal and rhombohedral axes there and back', () => {
    for (const alpha of [1, 24.16, 60, 90, 109, 119.999]) {
      const { a, c } = hexagonalFromRhombohedral(7, alpha)
      const back = rhombohedralFromHexagonal(a, c)
      expect(back.a).toBeCloseTo(7, 10)
      expect(back.alpha).toBeCloseTo(alpha, 8)
    }
  })
})

describe('what is missing is named', () => {
  test.each([
    ['cF', {}, ['a'], [['a']]],
    ['cF', { b: 5 }, ['a'], [['a']]],
    ['tP', { a: 5 }, ['c'], [['c']]],
    ['hR', { a: 5 }, ['c'], [['c'], ['alpha']]],
    ['hR', { alpha: 50 }, ['a'], [['a', 'c'], ['a']]],
    ['mP', { a: 1, b: 2, c: 3 }, ['beta'], [['beta'], ['gamma'], ['alpha']]],
    ['mB', { a: 1, b: 2, c: 3 }, ['gamma'], [['gamma'], ['alpha']]],
    ['mP', { a: 1, b: 2, c: 3, alpha: 90, gamma: 90 }, ['beta'], [['beta']]],
    ['mC', { a: 1, c: 3, beta: 95 }, ['b'], [['b']]],
    ['mC', { a: 1, b: 2, c: 3, gamma: 90 }, ['beta'], [['beta'], ['alpha']]],
    ['mp', { a: 5, b: 6 }, ['gamma'], [['gamma']]],
  ] as [BravaisType, GivenParameters, string[], string[][]][])(
    '%s %j',
    (type, given, missing, alternatives) => {
      expect(completeCell(type, given)).toEqual({ missing, alternatives })
    },
  )
})

describe('what is stated beyond them is checked', () => {
  test.each([
    ['cF', { a: 5, b: 5, c: 5, alpha: 90, beta: 90, gamma: 90 }, []],
    ['cF', { a: 5, b: 5.1 }, [['b', 5.1, 5]]],
    ['cF', { a: 5, alpha: 60 }, [['alpha', 60, 90]]],
    [
      'hP',
      { a: 5, b: 6, c: 7, gamma: 60 },
      [
        ['b', 6, 5],
        ['gamma', 60, 120],
      ],
    ],
    ['hR', { a: 5, b: 5, c: 7, alpha: 90, beta: 90, gamma: 120 }, []],
    ['hR', { a: 5, b: 5, c: 5, alpha: 50, beta: 50, gamma: 50 }, []],
    ['hR', { a: 5, alpha: 50, beta: 51 }, [['beta', 51, 50]]],
    ['mP', { a: 1, b: 2, c: 3, alpha: 90, beta: 95, gamma: 90 }, []],
    ['mP', { a: 1, b: 2, c: 3, alpha: 91, beta: 95 }, [['alpha', 91, 90]]],
    ['mP', { a: 1, b: 2, c: 3, alpha: 90, beta: 90, gamma: 90 }, []],
    ['mC', { a: 1, b: 2, c: 3, gamma: 95 }, [['gamma', 95, 90]]],
    ['mC', { a: 1, b: 2, c: 3, beta: 95, gamma: 95 }, [['gamma', 95, 90]]],
    ['hp', { a: 5, b: 5, gamma: 120 }, []],
    ['hp', { a: 5, c: 20 }, [['c', 20, undefined]]],
  ] as [BravaisType, GivenParameters, unknown[]][])('%s %j', (type, given, expected) => {
    expect(names(type, given)).toEqual(expected)
  })

  test('rounding is no contradiction, a digit is', () => {
    expect(names('cF', { a: 5, b: 5 * (1 + PARAMETER_TOLERANCE / 2) })).toEqual([])
    expect(names('cF', { a: 5.431, b: 5.4311 })).toHaveLength(1)
  })

  test('the size of the unit does not matter', () => {
    for (const size of [1e-9, 1, 1e9])
      expect(names('tP', { a: size, b: 1.001 * size, c: size })).toHaveLength(1)
  })
})

test.each([
  ['mP', { beta: 99 }, 'b'],
  ['mP', { gamma: 99 }, 'c'],
  ['mP', { alpha: 99 }, 'a'],
  ['mP', { alpha: 90, beta: 90, gamma: 99 }, 'c'],
  ['mA', { gamma: 99 }, 'c'],
  ['mB', { alpha: 99 }, 'a'],
  ['mI', { alpha: 99 }, 'a'],
  ['mC', { alpha: 99 }, 'a'],
] as [BravaisType, GivenParameters, string][])(
  '%s %j has its unique axis along %s',
  (type, given, uniqueAxis) => {
    expect(completeCell(type, { a: 1, b: 2, c: 3, ...given })).toMatchObject({
      uniqueAxis,
      contradictions: [],
    })
  },
)

test.each([
  ['mA', 'alpha'],
  ['mB', 'beta'],
  ['mC', 'gamma'],
] as [BravaisType, 'alpha' | 'beta' | 'gamma'][])(
  '%s with its angle at %s is no type, but still a cell',
  (type, angle) => {
    const result = completeCell(type, { a: 1, b: 2, c: 3, [angle]: 99 })
    expect(result).toMatchObject({
      cell: { [angle]: 99 },
      contradictions: [{ name: angle, given: 99, expected: 90 }],
    })
  },
)

test('a rhombohedral angle that no cell has', () => {
  expect(completeCell('hR', { a: 5, alpha: 120 })).toMatchObject({ miss: { reason: 'sum', by: 0 } })
  expect(completeCell('hR', { a: 5, alpha: 130 })).toMatchObject({ miss: { reason: 'sum', by: 30 } })
  expect(completeCell('hR', { a: 5, alpha: -3 })).toMatchObject({ miss: { reason: 'range', by: 3 } })
})
