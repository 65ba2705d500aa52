import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { branchesAlong, energyAlong, levelsAt, pointsInBall } from '../../../server/src/crystal/bands.ts'
import { HBAR2_OVER_2M, IN_ANGSTROM } from '../../../server/src/crystal/units.ts'
import {
  add,
  combine,
  type Mat3,
  norm,
  scale,
  subtract,
  type Vec3,
} from '../../../server/src/crystal/vector.ts'
import { buildZone } from '../../../server/src/crystal/zone.ts'
import { randomLattice, randomType, seeded } from './zone-lattices.ts'

const seed = fc.integer({ min: 1, max: 1e6 })
const numbers = fc.double({ min: -3, max: 3, noNaN: true })

/** By brute force over a block of indices that is large enough for these lattices. */
function allLengths(reciprocal: Mat3, dimension: number, k: Vec3, reach = 8): number[] {
  const range = (axis: number) =>
    axis < dimension ? Array.from({ length: 2 * reach + 1 }, (_, i) => i - reach) : [0]
  return range(0)
    .flatMap(i => range(1).flatMap(j => range(2).map(l => norm(add(k, combine([i, j, l], reciprocal))))))
    .sort((a, b) => a - b)
}

describe('levels', () => {
  test('are the shortest of all |k + G|, in any lattice', () => {
    fc.assert(
      fc.property(seed, numbers, numbers, numbers, (n, x, y, z) => {
        const { reciprocal, dimension } = (random => randomLattice(randomType(random), random, 2))(seeded(n))
        const zone = buildZone(reciprocal, dimension)
        const fraction: Vec3 = [x, dimension > 1 ? y : 0, dimension > 2 ? z : 0]
        const expected = allLengths(reciprocal, dimension, combine(fraction, reciprocal)).slice(0, 12)
        const { energies } = levelsAt(zone, fraction, 12, 1)
        expect(energies).toHaveLength(12)
        for (const [i, energy] of energies.entries())
          expect(Math.sqrt(energy / HBAR2_OVER_2M)).toBeCloseTo(expected[i], 8)
      }),
      { numRuns: 60, seed: 7 },
    )
  })

  // A free electron of wavelength 2 Å: k = π Å⁻¹, E = h²/2mλ² = 150.412 eV Å²/λ² (CODATA; common practice).
  test('the scale is that of a free electron, in each unit of length', () => {
    for (const unit of ['angstrom', 'nm', 'bohr'] as const) {
      const g = 2 * Math.PI * IN_ANGSTROM[unit]
      const zone = buildZone(
        [
          [g, 0, 0],
          [0, 1, 0],
          [0, 0, 1],
        ],
        1,
      )
      const { energies, degeneracies } = levelsAt(zone, [0.5, 0, 0], 2, IN_ANGSTROM[unit])
      expect(energies[0]).toBeCloseTo(150.412 / 4, 3)
      expect(degeneracies).toEqual([2, 2])
    }
  })

  test('a level that the count cuts is still counted in full', () => {
    const zone = buildZone(
      [
        [1, 0, 0],
        [0, 1, 0],
        [0, 0, 1],
      ],
      3,
    )
    expect(levelsAt(zone, [0, 0, 0], 3, 1).degeneracies).toEqual([1, 6, 6])
    expect(levelsAt(zone, [0.5, 0.5, 0.5], 1, 1).degeneracies).toEqual([8])
  })
})

test('points of a ball: all of them, each once', () => {
  // The sums of three squares up to 4: 1 + 6 + 12 + 8 + 6 (common practice).
  const cube = buildZone(
    [
      [1, 0, 0],
      [0, 1, 0],
      [0, 0, 1],
    ],
    3,
  )
  expect(new Set(pointsInBall(cube, [0, 0, 0], 2).map(String)).size).toBe(33)
  // The same lattice by a skewed basis.
  const skewed = buildZone(
    [
      [1, 0, 0],
      [7, 1, 0],
      [-5, 9, 1],
    ],
    3,
  )
  expect(pointsInBall(skewed, [0, 0, 0], 2)).toHaveLength(33)
})

describe('branches of a segment', () => {
  test('give the levels at each of its points', () => {
    fc.assert(
      fc.property(
        seed,
        fc.array(numbers, { minLength: 6, maxLength: 6 }),
        fc.double({ min: 0, max: 1, noNaN: true }),
        (n, x, t) => {
          const { reciprocal, dimension } = (random => randomLattice(randomType(random), random, 2))(
            seeded(n),
          )
          const zone = buildZone(reciprocal, dimension)
          const inside = (v: Vec3) =>
            combine(v.map((c, i) => (i < dimension ? c / 3 : 0)) as unknown as Vec3, reciprocal)
          const [from, to] = [inside([x[0], x[1], x[2]]), inside([x[3], x[4], x[5]])]
          const k = add(from, scale(subtract(to, from), t))
          const expected = allLengths(reciprocal, dimension, k).map(length => HBAR2_OVER_2M * length ** 2)
          const top = expected[9]
          const states = branchesAlong(zone, from, to, top * 1.000001, 1)
            .flatMap(branch => Array<number>(branch.degeneracy).fill(energyAlong(branch, t)))
            .sort((a, b) => a - b)
          for (let i = 0; i < 10; i++) expect(states[i]).toBeCloseTo(expected[i], 6)
        },
      ),
      { numRuns: 60, seed: 11 },
    )
  })

  test('those that coincide are one, and counted', () => {
    const zone = buildZone(
      [
        [1, 0, 0],
        [0, 1, 0],
        [0, 0, 1],
      ],
      3,
    )
    // From Γ to X of the cube: the four G = (0, ±1, 0), (0, 0, ±1) stay together, (±1, 0, 0) part.
    const low = branchesAlong(zone, [0, 0, 0], [0.5, 0, 0], 1.01 * HBAR2_OVER_2M, 1)
    expect(low.map(({ degeneracy }) => degeneracy).sort()).toEqual([1, 1, 1, 4])
  })
})
