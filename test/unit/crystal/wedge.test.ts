import { describe, expect, test } from 'vitest'
import {
  BRAVAIS,
  BRAVAIS_TYPES_2D,
  BRAVAIS_TYPES_3D,
  type BravaisType,
} from '../../../server/src/crystal/bravais.ts'
import { kRotations } from '../../../server/src/crystal/kspace.ts'
import { groupOnLattice, latticeType, namedSpaceGroup } from '../../../server/src/crystal/symmetry.ts'
import {
  apply,
  combine,
  dot,
  IDENTITY,
  inverse,
  type Mat3,
  multiply,
  norm,
  scale,
  subtract,
  transpose,
  type Vec3,
} from '../../../server/src/crystal/vector.ts'
import { irreducibleWedge, type Wedge } from '../../../server/src/crystal/wedge.ts'
import { buildZone, placeInZone, type Zone } from '../../../server/src/crystal/zone.ts'
import { loadSymmetryFromDisk } from '../../../server/src/symmetry-node.ts'
import { between, fromCell, randomLattice, seeded, skewed, unimodular } from './zone-lattices.ts'

loadSymmetryFromDisk()

const TOLERANCE = 1e-6

function caseOf(type: BravaisType, random: () => number): { zone: Zone; group: Mat3[] } {
  const { dimension } = BRAVAIS[type]
  const { primitive, reciprocal } = skewed(randomLattice(type, random), unimodular(random, dimension, 3))
  const { holohedry } = latticeType(primitive, dimension, TOLERANCE)!
  return { zone: buildZone(reciprocal, dimension), group: kRotations(holohedry, true, dimension) }
}

/** Rotations as they act on Cartesian columns. */
function inSpace(group: readonly Mat3[], { reciprocal }: Zone): Mat3[] {
  const columns = transpose(reciprocal)
  return group.map(R => multiply(multiply(columns, R), inverse(columns)))
}

const someDirection = (random: () => number, { dimension }: Zone): Vec3 => [
  between(random, -1, 1),
  dimension > 1 ? between(random, -1, 1) : 0,
  dimension > 2 ? between(random, -1, 1) : 0,
]

/** Nearer to g than to each of its images; 0 on the border, negative outside. */
const depth = ({ direction }: Wedge, rotations: readonly Mat3[], k: Vec3): number =>
  Math.min(...rotations.slice(1).map(R => dot(subtract(direction, apply(R, direction)), k)))

function checkWedge(wedge: Wedge, zone: Zone, group: readonly Mat3[]): void {
  const { vertices, edges, faces, dimension } = wedge
  expect(zone.volume / wedge.volume).toBeCloseTo(group.length, 6)
  const rotations = inSpace(group, zone)
  const margin = TOLERANCE * zone.circumradius
  for (const v of vertices) {
    expect(placeInZone(zone, v).excess).toBeLessThan(margin)
    if (group.length > 1) expect(depth(wedge, rotations, v)).toBeGreaterThan(-margin)
  }
  if (dimension === 3) {
    expect(vertices.length - edges.length + faces.length).toBe(2)
    const sides = faces.flatMap(({ vertices: f }) => f.map((i, at) => `${i},${f[(at + 1) % f.length]}`))
    expect(new Set(sides).size).toBe(sides.length)
    for (const [i, j] of edges) expect(sides.includes(`${i},${j}`) && sides.includes(`${j},${i}`)).toBe(true)
    expect(sides).toHaveLength(2 * edges.length)
  }
  if (dimension === 2) expect(edges).toHaveLength(vertices.length)
  for (const { vertices: f } of faces) expect(f.length).toBeGreaterThanOrEqual(dimension)
}

describe.each([...BRAVAIS_TYPES_3D, ...BRAVAIS_TYPES_2D])('the wedge of a lattice of type %s', type => {
  const random = seeded(BRAVAIS_TYPES_3D.indexOf(type as never) + 60)
  const cases = Array.from({ length: 5 }, () => caseOf(type, random))

  test('is a convex solid in the zone with the zone’s volume over the order of the group', () => {
    for (const { zone, group } of cases)
      for (let i = 0; i < 4; i++)
        checkWedge(irreducibleWedge(zone, group, someDirection(random, zone)), zone, group)
  })

  test('holds an image of every k of the zone, and of no general one two', () => {
    for (const { zone, group } of cases) {
      const wedge = irreducibleWedge(zone, group, someDirection(random, zone))
      const rotations = inSpace(group, zone)
      for (let i = 0; i < 60; i++) {
        const k = scale(someDirection(random, zone), zone.circumradius)
        if (placeInZone(zone, k).place === 'outside') continue
        const depths = rotations.map(R => depth(wedge, rotations, apply(R, k)))
        expect(depths.some(d => d >= -1e-9)).toBe(true)
        expect(depths.filter(d => d > 1e-9).length).toBeLessThanOrEqual(1)
      }
    }
  })

  test('lies around the direction asked for, where that is general', () => {
    for (const { zone, group } of cases) {
      const asked = someDirection(random, zone)
      const unit = scale(asked, 1 / norm(asked))
      const separation = Math.min(
        ...inSpace(group, zone)
          .slice(1)
          .map(R => norm(subtract(unit, apply(R, unit)))),
      )
      const { direction } = irreducibleWedge(zone, group, asked)
      if (separation > 0.06) expect(norm(subtract(direction, unit))).toBeLessThan(1e-9)
      expect(norm(direction)).toBeCloseTo(1, 12)
    }
  })

  test('is whole too where the direction asked for is a symmetry axis, or none', () => {
    for (const { zone, group } of cases) {
      for (const wall of zone.walls) checkWedge(irreducibleWedge(zone, group, wall.G), zone, group)
      checkWedge(irreducibleWedge(zone, group, [0, 0, 0]), zone, group)
    }
  })
})

describe('groups without reflections, and small ones', () => {
  test.each([
    ['P3', 'hP', { a: 4, c: 6 }],
    ['P321', 'hP', { a: 4, c: 6 }],
    ['R3', 'hR', { a: 4, c: 12 }],
    ['I4', 'tI', { a: 4, c: 6 }],
    ['F23', 'cF', { a: 4 }],
    ['P432', 'cP', { a: 4 }],
    ['Ia-3', 'cI', { a: 4 }],
    ['P222', 'oP', { a: 4, b: 5, c: 6 }],
    ['P1', 'aP', { a: 4, b: 5, c: 6, alpha: 80, beta: 85, gamma: 95 }],
  ] as const)('%s', (name, type, cell) => {
    const { primitive, reciprocal } = fromCell(type, cell)
    const zone = buildZone(reciprocal, 3)
    const rotations = groupOnLattice(namedSpaceGroup(name)!, latticeType(primitive, 3, TOLERANCE)!)!
    const random = seeded(3)
    for (const timeReversal of [true, false]) {
      const group = kRotations(rotations, timeReversal, 3)
      for (let i = 0; i < 5; i++)
        checkWedge(irreducibleWedge(zone, group, someDirection(random, zone)), zone, group)
    }
  })
})

test('of the face-centred cubic lattice has the corners Γ, X, L, W, K and U (common practice)', () => {
  const { primitive, reciprocal } = fromCell('cF', { a: 2 * Math.PI })
  const zone = buildZone(reciprocal, 3)
  const group = kRotations(latticeType(primitive, 3, TOLERANCE)!.holohedry, true, 3)
  // Cartesian in units of 2π/a = 1; x ≥ y ≥ z ≥ 0.
  const { vertices, faces } = irreducibleWedge(zone, group, [1, 0.6, 0.3])
  const corners = [
    [0, 0, 0],
    [1, 0, 0],
    [0.5, 0.5, 0.5],
    [1, 0.5, 0],
    [0.75, 0.75, 0],
    [1, 0.25, 0.25],
  ] as const
  expect(vertices).toHaveLength(6)
  for (const corner of corners)
    expect(
      vertices.some(v => norm(subtract(v, corner)) < 1e-9),
      corner.join(),
    ).toBe(true)
  expect(faces.filter(({ onZone }) => onZone)).toHaveLength(2)
  expect(faces.filter(({ onZone }) => !onZone)).toHaveLength(3)
})

test('of the hexagonal plane lattice is the triangle Γ, M, K (common practice)', () => {
  const { primitive, reciprocal } = fromCell('hp', { a: 2 * Math.PI })
  const zone = buildZone(reciprocal, 2)
  const group = kRotations(latticeType(primitive, 2, TOLERANCE)!.holohedry, true, 2)
  const { vertices } = irreducibleWedge(zone, group, combine([0.4, 0.1, 0], reciprocal))
  expect(vertices).toHaveLength(3)
  for (const corner of [
    [0, 0, 0],
    [1 / 2, 0, 0],
    [1 / 3, 1 / 3, 0],
  ] as const)
    expect(vertices.some(v => norm(subtract(v, combine(corner, reciprocal))) < 1e-9)).toBe(true)
})

test('of a chain is half of it', () => {
  const reciprocal: Mat3 = [
    [2, 0, 0],
    [0, 2 * Math.PI, 0],
    [0, 0, 2 * Math.PI],
  ]
  const zone = buildZone(reciprocal, 1)
  const wedge = irreducibleWedge(zone, kRotations([IDENTITY], true, 1), [1, 0, 0])
  expect(wedge.volume).toBeCloseTo(1, 12)
  expect(wedge.vertices.map(v => v[0]).sort()).toEqual([0, 1])
  expect(wedge.edges).toHaveLength(1)
})
