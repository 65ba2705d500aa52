/** Supercells against brute force: every reciprocal vector and every translation in a box is looked at. */
import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { isLattice, type Lattice, latticeFromVectors } from '../../../server/src/crystal/lattice.ts'
import {
  integerDeterminant,
  landingOf,
  landsOnGamma,
  nearestImageOf,
  supercellFraction,
  supercellOf,
  translationsIn,
  unfoldedFrom,
} from '../../../server/src/crystal/supercell.ts'
import {
  combine,
  determinant,
  distance,
  inverse,
  type Mat3,
  multiply,
  norm,
  subtract,
  type Vec3,
} from '../../../server/src/crystal/vector.ts'

const lattice = (...rows: Vec3[]): Lattice => {
  const made = latticeFromVectors(rows)
  if (!isLattice(made)) throw new Error('no lattice')
  return made
}
const CUBIC = lattice([4, 0, 0], [0, 4, 0], [0, 0, 4])
const FACE_CENTRED = lattice([0, 2, 2], [2, 0, 2], [2, 2, 0])
const SKEW = lattice([3.1, 0.2, -0.4], [1.3, 4.2, 0.3], [-2.2, 0.7, 5.3])
const SHEET = lattice([2.46, 0, 0], [-1.23, 2.13042249331, 0])
const CHAIN = lattice([2.5, 0, 0])

const isWhole = (x: number): boolean => Math.abs(x - Math.round(x)) < 1e-9

/** Entries small enough that a box of ±40 holds what belongs to the cell. */
const entry = fc.integer({ min: -3, max: 3 })
const matrices = (dimension: number) =>
  fc
    .array(entry, { minLength: 9, maxLength: 9 })
    .map(
      x =>
        [0, 1, 2].map(i =>
          [0, 1, 2].map(j => (i < dimension && j < dimension ? x[3 * i + j] : Number(i === j))),
        ) as unknown as Mat3,
    )
    .filter(m => Math.abs(determinant(m)) > 0.5)
const cases = fc.oneof(
  ...[CUBIC, FACE_CENTRED, SKEW, SHEET, CHAIN].map(base =>
    matrices(base.dimension).map(matrix => ({ base, matrix })),
  ),
)

describe('A supercell', () => {
  test('has |det M| times the volume, and every M of either hand spans one', () => {
    fc.assert(
      fc.property(cases, ({ base, matrix }) => {
        const cell = supercellOf(base, matrix)!
        expect(cell.fold).toBe(Math.round(Math.abs(determinant(matrix))))
        expect(cell.lattice.volume).toBeCloseTo(cell.fold * base.volume, 8)
        expect(cell.lattice.dimension).toBe(base.dimension)
      }),
    )
  })

  test('is none where the determinant vanishes, an entry is no whole number or is too large to be exact', () => {
    const rows = (...m: number[]) => [m.slice(0, 3), m.slice(3, 6), m.slice(6)] as unknown as Mat3
    expect(supercellOf(CUBIC, rows(1, 1, 0, 2, 2, 0, 0, 0, 1))).toBeUndefined()
    expect(supercellOf(CUBIC, rows(1, 0, 0, 0, 1.5, 0, 0, 0, 1))).toBeUndefined()
    expect(supercellOf(CUBIC, rows(2 ** 60, 0, 0, 0, 1, 0, 0, 0, 1))).toBeUndefined()
    // What stands across a plane does not count.
    expect(supercellOf(SHEET, rows(2, 0, 0, 0, 2, 0, 0, 0, 5))?.fold).toBe(4)
  })

  test('a determinant is exact where doubles are not', () => {
    // (2²⁷ + 1)² − 2²⁷·(2²⁷ + 2) = 1: both products are beyond 2⁵³.
    const n = 2 ** 27
    const m: Mat3 = [
      [n + 1, n, 0],
      [n + 2, n + 1, 0],
      [0, 0, 1],
    ]
    expect(integerDeterminant(m)).toBe(1n)
  })
})

describe('Folding', () => {
  test('differs from the primitive point by a reciprocal vector of the supercell', () => {
    const fraction = fc.tuple(fc.integer({ min: -24, max: 24 }), entry, entry)
    fc.assert(
      fc.property(cases, fraction, ({ base, matrix }, [x, y, z]) => {
        const k: Vec3 = [x / 12, base.dimension > 1 ? y / 4 : 0, base.dimension > 2 ? z / 6 : 0]
        const { lattice: made } = supercellOf(base, matrix)!
        const before = combine(k, base.reciprocal)
        // Before it is brought into the first cell it is the same place in space.
        expect(distance(combine(supercellFraction(matrix, k), made.reciprocal), before)).toBeLessThan(1e-9)
        const landed = combine(landingOf(matrix, k), made.reciprocal)
        const G = combine(subtract(before, landed), inverse(made.reciprocal))
        expect(G.every(isWhole)).toBe(true)
      }),
    )
  })

  test('from Γ unfold exactly the reciprocal vectors of the supercell, modulo those of the primitive lattice', () => {
    fc.assert(
      fc.property(cases, ({ base, matrix }) => {
        const { lattice: made, fold } = supercellOf(base, matrix)!
        const found = unfoldedFrom(matrix, [0, 0, 0])!
        expect(found.length).toBe(fold)
        // Brute force: all G of the supercell in a box, in primitive fractions, brought into [0, 1).
        const toFractions = multiply(made.reciprocal, inverse(base.reciprocal))
        const seen = new Set<string>()
        const side = (i: number) => (i < base.dimension ? Math.min(fold, 12) : 0)
        for (let i = -side(0); i <= side(0); i++)
          for (let j = -side(1); j <= side(1); j++)
            for (let k = -side(2); k <= side(2); k++)
              seen.add(numerators(combine([i, j, k], toFractions), fold))
        const ours = new Set(found.map(k => numerators(k, fold)))
        expect(ours.size).toBe(fold)
        for (const key of seen) expect(ours.has(key)).toBe(true)
        for (const k of found) {
          expect(landsOnGamma(matrix, k)).toBe(true)
          expect(k.every(x => x >= 0 && x < 1)).toBe(true)
        }
      }),
      { numRuns: 60 },
    )
  })

  test('what unfolds from a point folds back onto it, each once', () => {
    const fraction = fc.tuple(entry, entry, entry)
    fc.assert(
      fc.property(cases, fraction, ({ base, matrix }, [x, y, z]) => {
        const k: Vec3 = [x / 5, base.dimension > 1 ? y / 7 : 0, base.dimension > 2 ? z / 4 : 0]
        const landed = landingOf(matrix, k)
        const found = unfoldedFrom(matrix, landed)!
        expect(new Set(found.map(each => each.map(c => c.toFixed(8)).join())).size).toBe(found.length)
        for (const each of found) {
          const back = subtract(landingOf(matrix, each), landed)
          expect(back.every(isWhole)).toBe(true)
        }
        expect(found.some(each => subtract(each, k).every(isWhole))).toBe(true)
      }),
    )
  })

  test('of the conventional cubic cell of a face-centred lattice: Γ and the three X', () => {
    // Closed form: the eight corners of the reciprocal cube are body-centred in fcc's reciprocal lattice; 4 of them differ.
    const conventional: Mat3 = [
      [-1, 1, 1],
      [1, -1, 1],
      [1, 1, -1],
    ]
    expect(unfoldedFrom(conventional, [0, 0, 0])).toEqual([
      [0, 0, 0],
      [0, 0.5, 0.5],
      [0.5, 0, 0.5],
      [0.5, 0.5, 0],
    ])
    // L = (½, ½, ½) lies on the corner R of the cube's zone.
    expect(landingOf(conventional, [0.5, 0.5, 0.5])).toEqual([0.5, 0.5, 0.5])
  })

  test('of √3 × √3 in a hexagonal plane: K lies on Γ, M does not', () => {
    // common practice: charge-density waves and Kekulé order at K make the cell √3 × √3.
    const root3: Mat3 = [
      [2, 1, 0],
      [-1, 1, 0],
      [0, 0, 1],
    ]
    expect(landsOnGamma(root3, [1 / 3, 1 / 3, 0])).toBe(true)
    expect(landsOnGamma(root3, [1 / 2, 0, 0])).toBe(false)
    expect(unfoldedFrom(root3, [0, 0, 0])?.length).toBe(3)
  })

  test('is not listed beyond reason', () => {
    const large: Mat3 = [
      [1000, 0, 0],
      [0, 1000, 0],
      [0, 0, 1],
    ]
    expect(unfoldedFrom(large, [0, 0, 0])).toBeUndefined()
    expect(translationsIn(large)).toBeUndefined()
  })
})

/** Whole multiples of 1/fold, modulo 1. */
const numerators = (k: Vec3, fold: number): string =>
  k.map(x => ((Math.round(x * fold) % fold) + fold) % fold).join()

describe('Translations', () => {
  test('are as many as there are primitive cells, none a translation of the supercell', () => {
    fc.assert(
      fc.property(cases, ({ base, matrix }) => {
        const { fold } = supercellOf(base, matrix)!
        const found = translationsIn(matrix)!
        expect(found.length).toBe(fold)
        expect(found[0]).toEqual([0, 0, 0])
        const back = inverse(matrix)
        const cells = new Set(
          found.map(n =>
            combine(n, back)
              .map(x => (x - Math.floor(x + 1e-9)).toFixed(6))
              .join(),
          ),
        )
        expect(cells.size).toBe(fold)
      }),
    )
  })

  test('the nearest image is the shortest of all translations in a box', () => {
    fc.assert(
      fc.property(cases, ({ base, matrix }) => {
        const { lattice: made } = supercellOf(base, matrix)!
        const { distance: found, translation } = nearestImageOf(made)
        expect(norm(combine(translation, made.primitive))).toBeCloseTo(found, 9)
        // The primitive vectors of a superlattice of fold n are within n steps; a box of primitive translations does.
        const back = inverse(matrix)
        let shortest = Number.POSITIVE_INFINITY
        const side = (i: number) => (i < base.dimension ? 15 : 0)
        for (let i = -side(0); i <= side(0); i++)
          for (let j = -side(1); j <= side(1); j++)
            for (let k = -side(2); k <= side(2); k++) {
              if ((i === 0 && j === 0 && k === 0) || !combine([i, j, k], back).every(isWhole)) continue
              shortest = Math.min(shortest, norm(combine([i, j, k], base.primitive)))
            }
        expect(found).toBeCloseTo(shortest, 9)
      }),
      { numRuns: 30 },
    )
  })
})
