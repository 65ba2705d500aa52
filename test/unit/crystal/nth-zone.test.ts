import { describe, expect, test } from 'vitest'
import { LAST_DRAWN_ZONE, nthZone } from '../../../server/src/crystal/nth-zone.ts'
import { add, cross, dot, norm, scale, subtract, type Vec3 } from '../../../server/src/crystal/vector.ts'
import { buildZone, zoneNumber } from '../../../server/src/crystal/zone.ts'
import { BRAVAIS_TYPES } from '../../../server/src/crystal/bravais.ts'
import { fromCell, randomLattice, seeded } from './zone-lattices.ts'

const centre = (corners: readonly Vec3[]): Vec3 => scale(corners.reduce(add), 1 / corners.length)

describe.each(BRAVAIS_TYPES)('%s', type => {
  const { reciprocal, dimension } = randomLattice(type, seeded(41), 1.6)
  const zone = buildZone(reciprocal, dimension)

  // Every zone has the volume of the first (common practice).
  test.each([2, 3, 6])('zone %i: its volume, its points, its faces', n => {
    const drawn = nthZone(zone, n)!
    expect(drawn.volume / zone.volume).toBeCloseTo(1, 6)
    for (const { faces } of drawn.pieces) {
      const middle = centre(faces.map(centre))
      expect(zoneNumber(zone, middle)).toBe(n)
      if (dimension < 3) continue
      const outward = faces.every(
        ([u, v, w]) => dot(cross(subtract(v, u), subtract(w, v)), subtract(u, middle)) > 0,
      )
      expect(outward).toBe(true)
    }
  })
})

// The second zone of the square lattice is four triangles; of the face-centred cubic lattice, pyramids on all 14 faces
// (Ashcroft and Mermin 1976, figures 9.4 and 9.8; from memory).
test('the second zones of the textbooks', () => {
  const square = fromCell('tp', { a: 1 })
  const second = nthZone(buildZone(square.reciprocal, 2), 2)!
  expect(second.pieces.map(({ faces }) => faces[0].length)).toEqual([3, 3, 3, 3])
  const fcc = fromCell('cF', { a: 1 })
  const cap = nthZone(buildZone(fcc.reciprocal, 3), 2)!
  expect(cap.pieces).toHaveLength(14)
})

test('the first zone is the zone', () => {
  const { reciprocal } = fromCell('cF', { a: 1 })
  const zone = buildZone(reciprocal, 3)
  const [piece, ...others] = nthZone(zone, 1)!.pieces
  expect(others).toEqual([])
  expect(piece.faces).toHaveLength(14)
  const radii = piece.faces.flat().map(norm)
  expect(Math.max(...radii)).toBeCloseTo(zone.circumradius, 9)
})

test('a needle is refused, not waited for', () => {
  const zone = buildZone(
    [
      [1, 0, 0],
      [0, 1, 0],
      [0, 0, 1e-4],
    ],
    3,
  )
  expect(nthZone(zone, 2)).toBeUndefined()
})

test.each([0, 1.5, LAST_DRAWN_ZONE + 1])('no zone %d', n => {
  const zone = buildZone(
    [
      [1, 0, 0],
      [0, 1, 0],
      [0, 0, 1],
    ],
    3,
  )
  expect(() => nthZone(zone, n)).toThrow(RangeError)
})
