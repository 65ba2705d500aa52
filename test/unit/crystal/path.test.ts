import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { listedPoints, type SegmentLength, segmentSteps } from '../../../server/src/crystal/path.ts'

const lengths = (...all: number[]): SegmentLength[] => all.map(length => ({ length }))

describe('by spacing', () => {
  test('the step is never longer than asked', () => {
    expect(segmentSteps(lengths(1, 0.41, 0.39), { kind: 'spacing', spacing: 0.2 })).toEqual([5, 3, 2])
  })
  test('a whole number of steps is not raised by rounding', () => {
    expect(segmentSteps(lengths(0.1 + 0.2), { kind: 'spacing', spacing: 0.1 })).toEqual([3])
  })
  test('a segment of no length has one step', () => {
    expect(segmentSteps(lengths(0), { kind: 'spacing', spacing: 0.1 })).toEqual([1])
  })
})

test('a segment’s own number wins over every rule', () => {
  const segments: SegmentLength[] = [{ length: 1, own: 7 }, { length: 1 }]
  expect(segmentSteps(segments, { kind: 'steps', steps: 4 })).toEqual([7, 4])
  expect(segmentSteps(segments, { kind: 'spacing', spacing: 0.5 })).toEqual([7, 2])
  expect(segmentSteps(segments, { kind: 'total', total: 10 })).toEqual([7, 3])
})

describe('by total', () => {
  test('shares are proportional to length', () => {
    expect(segmentSteps(lengths(1, 2, 1), { kind: 'total', total: 40 })).toEqual([10, 20, 10])
  })
  test('the largest remainders get the rest', () => {
    // Quotas 10·(0.35, 0.33, 0.32) = 3.5, 3.3, 3.2: one step is left and goes to the first (by hand).
    expect(segmentSteps(lengths(0.35, 0.33, 0.32), { kind: 'total', total: 10 })).toEqual([4, 3, 3])
    // Quotas 2.2, 3.6, 4.2.
    expect(segmentSteps(lengths(2.2, 3.6, 4.2), { kind: 'total', total: 10 })).toEqual([2, 4, 4])
  })
  test('equal remainders: the first segment wins', () => {
    expect(segmentSteps(lengths(1, 1, 1), { kind: 'total', total: 7 })).toEqual([3, 2, 2])
  })
  test('a short segment has one step, the others share what is left', () => {
    expect(segmentSteps(lengths(0.001, 1, 1), { kind: 'total', total: 11 })).toEqual([1, 5, 5])
    expect(segmentSteps(lengths(0, 0), { kind: 'total', total: 11 })).toEqual([1, 1])
  })

  test('the sum is the total unless there are more segments than steps', () => {
    const length = fc.double({ min: 0, max: 1e3, noNaN: true })
    fc.assert(
      fc.property(
        fc.array(length, { minLength: 1, maxLength: 12 }),
        fc.integer({ min: 1, max: 500 }),
        (all, total) => {
          const steps = segmentSteps(lengths(...all), { kind: 'total', total })
          const sum = steps.reduce((a, b) => a + b, 0)
          if (all.some(x => x > 0)) expect(sum).toBe(Math.max(total, all.length))
          for (const n of steps) expect(n).toBeGreaterThanOrEqual(1)
        },
      ),
      { numRuns: 2000 },
    )
  })

  test('a longer segment never has fewer steps than a shorter one', () => {
    const length = fc.double({ min: 0.01, max: 10, noNaN: true })
    fc.assert(
      fc.property(
        fc.array(length, { minLength: 2, maxLength: 8 }),
        fc.integer({ min: 1, max: 200 }),
        (all, total) => {
          const steps = segmentSteps(lengths(...all), { kind: 'total', total })
          for (const [i, a] of all.entries())
            for (const [j, b] of all.entries())
              if (a > b * (1 + 1e-6)) expect(steps[i]).toBeGreaterThanOrEqual(steps[j])
        },
      ),
    )
  })

  test('the counts do not depend on the unit of length', () => {
    fc.assert(
      fc.property(
        fc.array(fc.integer({ min: 1, max: 50 }), { minLength: 1, maxLength: 8 }),
        fc.integer({ min: 1, max: 200 }),
        (all, total) => {
          const counts = (s: number) =>
            segmentSteps(lengths(...all.map(x => x * s)), { kind: 'total', total })
          expect(counts(1e-9)).toEqual(counts(1))
          expect(counts(1e9)).toEqual(counts(1))
        },
      ),
    )
  })
})

test('joints are listed once, both ends of a break', () => {
  expect(listedPoints([[10]])).toBe(11)
  expect(listedPoints([[10, 10]])).toBe(21)
  expect(listedPoints([[10], [10]])).toBe(22)
  expect(listedPoints([])).toBe(0)
})
