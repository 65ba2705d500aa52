/** Neighbours against a plain sum over images, and against distances of known structures. */
import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import {
  emptySlab,
  forEachPair,
  heightAlong,
  type Sites,
  tightestContact,
} from '../../../server/src/crystal/neighbours.ts'
import type { Dimension } from '../../../server/src/crystal/reduction.ts'
import {
  combine,
  IDENTITY,
  type Mat3,
  multiply,
  norm,
  type Vec3,
} from '../../../server/src/crystal/vector.ts'

/** A pair that stands at the reach itself may count or not: rounding decides. */
const AT_REACH = 1e-6

const pairsOf = (sites: Sites, reach: number): string[] => {
  const pairs: string[] = []
  forEachPair(sites, reach, (first, second, distance) => {
    if (reach - distance > AT_REACH) pairs.push(`${first} ${second} ${distance.toFixed(6)}`)
    return undefined
  })
  return pairs.sort()
}

/** Every image within a box that is large enough for these cells, without bins and without reduction. */
function plainSum({ basis, positions, dimension }: Sites, reach: number): string[] {
  const most = [0, 1, 2].map(i =>
    i < dimension ? Math.ceil(reach / heightAlong(basis, i as 0 | 1 | 2)) + 3 : 0,
  )
  const pairs: string[] = []
  for (let i = 0; i < positions.length; i++)
    for (let j = i; j < positions.length; j++)
      for (let x = -most[0]; x <= most[0]; x++)
        for (let y = -most[1]; y <= most[1]; y++)
          for (let z = -most[2]; z <= most[2]; z++) {
            const own = i === j
            if (own && !(x > 0 || (x === 0 && (y > 0 || (y === 0 && z > 0))))) continue
            const [p, q] = [positions[i], positions[j]]
            const away = norm(combine([q[0] - p[0] + x, q[1] - p[1] + y, q[2] - p[2] + z], basis))
            if (reach - away > AT_REACH) pairs.push(`${i} ${j} ${away.toFixed(6)}`)
          }
  return pairs.sort()
}

const CUBE: Mat3 = [
  [4, 0, 0],
  [0, 4.3, 0],
  [0.2, 0, 4.9],
]
/** A cell of the same lattice that is far from reduced, or the cell itself. */
const skews: Mat3[] = [
  IDENTITY,
  [
    [1, 0, 0],
    [3, 1, 0],
    [-2, 4, 1],
  ],
]
const position = fc.tuple(
  fc.double({ min: -1, max: 2, noNaN: true }),
  fc.double({ min: -1, max: 2, noNaN: true }),
  fc.double({ min: -1, max: 2, noNaN: true }),
) as fc.Arbitrary<Vec3>

describe('pairs within a reach', () => {
  test('are those of a plain sum over images, in skewed cells too', () =>
    fc.assert(
      fc.property(
        fc.array(position, { minLength: 1, maxLength: 9 }),
        fc.constantFrom(...skews),
        fc.double({ min: 0.3, max: 5.5, noNaN: true }),
        (positions, skew, reach) => {
          const sites: Sites = { dimension: 3, basis: multiply(skew, CUBE), positions }
          expect(pairsOf(sites, reach)).toEqual(plainSum(sites, reach))
        },
      ),
      { numRuns: 60, seed: 7 },
    ))

  test.each([1, 2] as Dimension[])('are those of a plain sum in %i dimensions', dimension =>
    fc.assert(
      fc.property(
        fc.array(position, { minLength: 1, maxLength: 9 }),
        fc.double({ min: 0.3, max: 9, noNaN: true }),
        (positions, reach) => {
          const basis = (
            [
              [3, 0, 0],
              [2.9, 4, 0],
              [0, 0, 1],
            ] as const
          ).map((row, i) => (i < dimension ? row : IDENTITY[i])) as unknown as Mat3
          const sites: Sites = { dimension, basis, positions }
          expect(pairsOf(sites, reach)).toEqual(plainSum(sites, reach))
        },
      ),
      { numRuns: 60, seed: 7 },
    ),
  )

  test('stop where the visitor says so', () => {
    let seen = 0
    const sites: Sites = {
      dimension: 3,
      basis: CUBE,
      positions: [
        [0, 0, 0],
        [0.5, 0.5, 0.5],
      ],
    }
    expect(forEachPair(sites, 6, () => ++seen < 3)).toBe(false)
    expect(seen).toBe(3)
  })

  test('are twelve nearest neighbours in a face-centred cubic lattice: six pairs an atom', () => {
    const a = 4.05
    const positions: Vec3[] = [
      [0, 0, 0],
      [0, 0.5, 0.5],
      [0.5, 0, 0.5],
      [0.5, 0.5, 0],
    ]
    const basis: Mat3 = [
      [a, 0, 0],
      [0, a, 0],
      [0, 0, a],
    ]
    // Coordination number 12 (common practice), each pair counted once.
    expect(pairsOf({ dimension: 3, basis, positions }, 0.75 * a)).toHaveLength((4 * 12) / 2)
  })
})

describe('the tightest contact', () => {
  test('of diamond is √3/4 of the edge', () => {
    const basis: Mat3 = [
      [0, 0.5, 0.5],
      [0.5, 0, 0.5],
      [0.5, 0.5, 0],
    ]
    const found = tightestContact(
      {
        dimension: 3,
        basis,
        positions: [
          [0, 0, 0],
          [0.25, 0.25, 0.25],
        ],
      },
      [0.2, 0.2],
    )
    expect(found?.distance).toBeCloseTo(Math.sqrt(3) / 4, 12)
    expect(found?.ratio).toBeCloseTo(Math.sqrt(3) / 4 / 0.4, 12)
  })

  test('is the one with the smallest ratio, not the shortest', () => {
    // Large atoms 2.4 apart (ratio 0.8), small ones 1.5 apart (ratio 1.5).
    const sites: Sites = {
      dimension: 1,
      basis: [
        [20, 0, 0],
        [0, 1, 0],
        [0, 0, 1],
      ],
      positions: [
        [0, 0, 0],
        [0.12, 0, 0],
        [0.5, 0, 0],
        [0.575, 0, 0],
      ],
    }
    const found = tightestContact(sites, [1.5, 1.5, 0.5, 0.5])
    expect(found).toMatchObject({ first: 0, second: 1 })
    expect(found?.ratio).toBeCloseTo(0.8, 12)
  })

  test('of a single atom is its own nearest copy', () => {
    const found = tightestContact({ dimension: 3, basis: CUBE, positions: [[0.1, 0.2, 0.3]] }, [1])
    expect(found).toMatchObject({ first: 0, second: 0 })
    expect(found?.distance).toBeCloseTo(4, 12)
  })
})

describe('the empty slab along an axis', () => {
  const slab = (heights: number[], c = 30): number | undefined =>
    emptySlab(
      {
        dimension: 3,
        basis: [
          [3, 0, 0],
          [0, 3, 0],
          [0.5, 0.5, c],
        ],
        positions: heights.map(z => [0, 0, z]),
      },
      2,
    )

  test('is what a layer leaves of the period, copies across the cell wall counted', () => {
    expect(slab([0.1, 0.3])).toBeCloseTo(0.8 * 30, 12)
    expect(slab([-0.05, 0.05])).toBeCloseTo(0.9 * 30, 12)
    expect(slab([0.5])).toBeCloseTo(30, 12)
  })
  test('is not there without atoms', () => expect(slab([])).toBeUndefined())
})
