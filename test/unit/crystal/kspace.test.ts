import { describe, expect, test } from 'vitest'
import {
  BRAVAIS,
  BRAVAIS_TYPES_2D,
  BRAVAIS_TYPES_3D,
  type BravaisType,
} from '../../../server/src/crystal/bravais.ts'
import {
  areEquivalent,
  areEquivalentSegments,
  fixedDimensions,
  freedom,
  K_TOLERANCE,
  kRotations,
  littleCoGroup,
  segmentSymmetry,
  star,
  symmetryPoints,
} from '../../../server/src/crystal/kspace.ts'
import type { Lattice } from '../../../server/src/crystal/lattice.ts'
import { latticeType } from '../../../server/src/crystal/symmetry.ts'
import {
  add,
  apply,
  combine,
  determinant,
  IDENTITY,
  inverse,
  type Mat3,
  mapMatrix,
  multiply,
  norm,
  subtract,
  type Vec3,
} from '../../../server/src/crystal/vector.ts'
import { buildZone, fold, placeInZone, type Zone } from '../../../server/src/crystal/zone.ts'
import { between, fromCell, randomLattice, seeded, skewed, unimodular } from './zone-lattices.ts'

interface KSpace {
  readonly lattice: Lattice
  readonly zone: Zone
  /** The lattice's own k-group. */
  readonly group: Mat3[]
}

function kSpaceOf(lattice: Lattice): KSpace {
  const { primitive, reciprocal, dimension } = lattice
  const type = latticeType(primitive, dimension, 1e-6)!
  return {
    lattice,
    zone: buildZone(reciprocal, dimension),
    group: kRotations(type.holohedry, true, dimension),
  }
}

const CF = kSpaceOf(fromCell('cF', { a: 4 }))
const CI = kSpaceOf(fromCell('cI', { a: 4 }))
const HP = kSpaceOf(fromCell('hP', { a: 4, c: 6 }))

const half = 1 / 2
const third = 1 / 3
const quarter = 1 / 4

describe('the k-group', () => {
  test('acts on k as W⁻ᵀ: phases of a rotated k at a rotated place are the same', () => {
    const random = seeded(2)
    const { primitive } = randomLattice('hR', random)
    for (const W of latticeType(primitive, 3, 1e-6)!.holohedry) {
      const [R] = kRotations([W], false, 3).slice(-1)
      const k: Vec3 = [0.1, 0.23, -0.31]
      const x: Vec3 = [0.4, -0.2, 0.15]
      const phase = (q: Vec3, y: Vec3) => q[0] * y[0] + q[1] * y[1] + q[2] * y[2]
      expect(phase(apply(R, k), apply(W, x))).toBeCloseTo(phase(k, x), 12)
    }
  })

  test('time reversal joins −1, and only where it is missing', () => {
    const polar = [
      IDENTITY,
      mapMatrix(
        [
          [-1, 0, 0],
          [0, -1, 0],
          [0, 0, 1],
        ],
        x => x,
      ),
    ]
    expect(kRotations(polar, false, 3)).toHaveLength(2)
    expect(kRotations(polar, true, 3)).toHaveLength(4)
    expect(kRotations(kRotations(polar, true, 3), true, 3)).toHaveLength(4)
  })

  test('of a sheet: matrices that differ along the normal only are one', () => {
    const mirror: Mat3 = [
      [1, 0, 0],
      [0, 1, 0],
      [0, 0, -1],
    ]
    expect(kRotations([IDENTITY, mirror], false, 2)).toEqual([IDENTITY])
    expect(kRotations([IDENTITY, mirror], true, 2)).toEqual([
      IDENTITY,
      [
        [-1, 0, 0],
        [0, -1, 0],
        [0, 0, 1],
      ],
    ])
  })
})

describe('well-known points (common practice)', () => {
  const X: Vec3 = [half, 0, half]
  const L: Vec3 = [half, half, half]
  const W: Vec3 = [half, quarter, 3 / 4]
  const K: Vec3 = [3 / 8, 3 / 8, 3 / 4]
  test.each<[string, KSpace, Vec3, number, 0 | 1 | 2 | 3]>([
    ['Γ of cF', CF, [0, 0, 0], 1, 0],
    ['X of cF', CF, X, 3, 0],
    ['L of cF', CF, L, 4, 0],
    ['W of cF', CF, W, 6, 0],
    ['K of cF, on the line Σ', CF, K, 12, 1],
    ['U of cF, the same line', CF, [5 / 8, quarter, 5 / 8], 12, 1],
    ['the middle of Γ–X of cF, Δ', CF, [quarter, 0, quarter], 6, 1],
    ['a point of the plane Γ–X–W of cF', CF, [0.3, 0.1, 0.4], 24, 2],
    ['a general point of cF', CF, [0.11, 0.23, 0.37], 48, 3],
    ['H of cI', CI, [half, -half, half], 1, 0],
    ['P of cI', CI, [quarter, quarter, quarter], 2, 0],
    ['N of cI', CI, [0, 0, half], 6, 0],
    ['A of hP', HP, [0, 0, half], 1, 0],
    ['K of hP', HP, [third, third, 0], 2, 0],
    ['H of hP', HP, [third, third, half], 2, 0],
    ['M of hP', HP, [half, 0, 0], 3, 0],
    ['L of hP', HP, [half, 0, half], 3, 0],
    ['a point of K–H of hP', HP, [third, third, 0.2], 4, 1],
  ])('%s', (_, { group, lattice }, k, arms, free) => {
    expect(star(k, group)).toHaveLength(arms)
    expect(littleCoGroup(k, group)).toHaveLength(group.length / arms)
    expect(freedom(k, group, lattice.dimension)).toBe(free)
  })

  test('the star of X of cF without fourfold axes is split: a tetragonal crystal on a cubic lattice', () => {
    const fourfold = CF.group.filter(R => {
      const axis = inverseApply(CF.lattice.reciprocal, [0, 0, 1])
      const moved = apply(R, axis)
      return norm(subtract(moved, axis)) < 1e-9 || norm(add(moved, axis)) < 1e-9
    })
    expect(fourfold).toHaveLength(16)
    expect(
      [
        [half, 0, half],
        [half, half, 0],
        [0, half, half],
      ]
        .map(k => star(k as unknown as Vec3, fourfold).length)
        .sort(),
    ).toEqual([1, 2, 2])
  })
})

const inverseApply = (rows: Mat3, v: Vec3): Vec3 => combine(v, inverse(rows))

describe('tolerance of k', () => {
  test('six digits of a third are K, five are not', () => {
    expect(freedom([0.333333, 0.333333, 0], HP.group, 3)).toBe(0)
    expect(freedom([0.33333, 0.33333, 0], HP.group, 3)).not.toBe(0)
    expect(K_TOLERANCE).toBeLessThan(3e-6)
  })
  test('a wider one can be asked for', () => {
    expect(freedom([0.333, 0.333, 0], HP.group, 3, 2e-3)).toBe(0)
  })
})

const TYPES = [...BRAVAIS_TYPES_3D, ...BRAVAIS_TYPES_2D]

/**
 * Inequivalent symmetry points and lines of each type: the points and the lines of C. J. Bradley and A. P. Cracknell
 * (1972), table 3.6, counted (from memory); aP has the eight halves and no line. Plane lattices: common practice.
 */
const COUNTS: Partial<Record<BravaisType, number>> = {
  cP: 4,
  cF: 4,
  cI: 4,
  tP: 6,
  tI: 5,
  oP: 8,
  oC: 6,
  oF: 5,
  oI: 6,
  hP: 6,
  hR: 4,
  mP: 8,
  mC: 6,
  aP: 8,
  tp: 3,
  op: 4,
  oc: 3,
  hp: 3,
  mp: 4,
}

describe.each(TYPES)('symmetry points and lines of %s', type => {
  const random = seeded(TYPES.indexOf(type) + 1)
  const { dimension } = BRAVAIS[type]
  const cases = Array.from({ length: 4 }, () =>
    kSpaceOf(skewed(randomLattice(type, random), unimodular(random, dimension, 3))),
  )

  test('the order of a star times that of the little co-group is the order of the k-group', () => {
    for (const { group, zone } of cases) {
      const points: Vec3[] = symmetryPoints(group, zone).map(({ fraction }) => fraction)
      for (let i = 0; i < 40; i++) {
        const twelfth = () => Math.floor(random() * 24) / 12
        points.push([twelfth(), twelfth(), dimension === 3 ? twelfth() : 0])
      }
      for (const k of points) {
        const little = littleCoGroup(k, group)
        expect(little.length * star(k, group).length).toBe(group.length)
        const known = new Set(little.map(String))
        expect(little.every(R => little.every(S => known.has(String(multiply(R, S)))))).toBe(true)
      }
    }
  })

  test('points: as many as the tables have, in the zone, none equivalent to another, none free', () => {
    for (const { group, zone } of cases) {
      const points = symmetryPoints(group, zone)
      if (COUNTS[type]) expect(points).toHaveLength(COUNTS[type])
      expect(points[0]).toEqual({ fraction: [0, 0, 0], littleCoGroup: group.length, star: 1 })
      for (const [i, p] of points.entries()) {
        expect(placeInZone(zone, combine(p.fraction, zone.reciprocal)).place).not.toBe('outside')
        expect(freedom(p.fraction, group, dimension)).toBe(0)
        expect(p.littleCoGroup).toBe(littleCoGroup(p.fraction, group).length)
        expect(p.star * p.littleCoGroup).toBe(group.length)
        for (const q of points.slice(0, i))
          expect(areEquivalent(p.fraction, q.fraction, group)).toBeUndefined()
      }
    }
  })

  test('points: a finer grid has no others', () => {
    const { group, zone } = cases[0]
    const points = symmetryPoints(group, zone)
    // Denominators 16 and 10 have factors that twelfths have not.
    for (const n of [10, 16])
      for (let i = 0; i < n ** dimension; i++) {
        const k: Vec3 = [(i % n) / n, (Math.floor(i / n) % n) / n, Math.floor(i / n ** 2) / n]
        if (freedom(k, group, dimension) > 0) continue
        expect(points.some(({ fraction }) => areEquivalent(fraction, k, group))).toBe(true)
      }
  })
})

describe('equivalence', () => {
  test('tells the rotation and the reciprocal vector', () => {
    const random = seeded(31)
    for (let i = 0; i < 200; i++) {
      const k: Vec3 = [between(random, -1, 1), between(random, -1, 1), between(random, -1, 1)]
      const R = CF.group[Math.floor(random() * 48)]
      const G: Vec3 = [
        Math.floor(between(random, -3, 4)),
        Math.floor(between(random, -3, 4)),
        Math.floor(between(random, -3, 4)),
      ]
      const other = add(apply(R, k), G)
      const found = areEquivalent(k, other, CF.group)!
      expect(norm(subtract(add(apply(found.rotation, k), found.G), other))).toBeLessThan(1e-5)
      expect(areEquivalent(k, add(other, [0.01, 0, 0]), CF.group)).toBeUndefined()
    }
  })

  test('prefers a reciprocal vector alone', () => {
    expect(areEquivalent([half, 0, half], [-half, 1, half], CF.group)).toEqual({
      rotation: IDENTITY,
      G: [-1, 1, 0],
    })
  })

  test('U and K of cF are one point of one star (common practice)', () => {
    expect(areEquivalent([5 / 8, quarter, 5 / 8], [3 / 8, 3 / 8, 3 / 4], CF.group)).toBeDefined()
  })

  test('segments: as a whole, in either sense; like ends alone do not make like segments', () => {
    const gamma: Vec3 = [0, 0, 0]
    const X: Vec3 = [half, 0, half]
    const Y: Vec3 = [half, half, 0]
    expect(areEquivalentSegments([gamma, X], [gamma, Y], CF.group)).toMatchObject({ reversed: false })
    expect(areEquivalentSegments([gamma, X], [Y, gamma], CF.group)).toMatchObject({ reversed: true })
    // Γ to X straight on, or through K to the X of the next zone.
    expect(areEquivalentSegments([gamma, X], [gamma, [1, half, half]], CF.group)).toBeUndefined()
    // U–X and K–X′ are pieces of one line; so are U–W and K–W of the square and the hexagonal face's edge.
    const U: Vec3 = [5 / 8, quarter, 5 / 8]
    const K: Vec3 = [3 / 8, 3 / 8, 3 / 4]
    const W: Vec3 = [half, quarter, 3 / 4]
    expect(areEquivalentSegments([U, W], [K, W], CF.group)).toMatchObject({ reversed: false })
  })
})

describe('segments', () => {
  const gamma: Vec3 = [0, 0, 0]
  test.each<[string, KSpace, Vec3, Vec3, number, number]>([
    ['Γ–X of cF, Δ', CF, gamma, [half, 0, half], 1, 8],
    ['Γ–L of cF, Λ', CF, gamma, [half, half, half], 1, 6],
    ['Γ–K of cF, Σ', CF, gamma, [3 / 8, 3 / 8, 3 / 4], 1, 4],
    ['X–W of cF, Z', CF, [half, 0, half], [half, quarter, 3 / 4], 1, 4],
    ['L–W of cF, Q', CF, [half, half, half], [half, quarter, 3 / 4], 1, 2],
    ['W–K of cF, in a plane', CF, [half, quarter, 3 / 4], [3 / 8, 3 / 8, 3 / 4], 2, 2],
    ['a segment of nowhere in particular', CF, [0.1, 0.2, 0.33], [0.17, 0.4, 0.05], 3, 1],
    ['K–H of hP, P', HP, [third, third, 0], [third, third, half], 1, 6],
    ['a segment of no length at X', CF, [half, 0, half], [half, 0, half], 0, 16],
  ])('%s', (_, { group }, from, to, free, order) => {
    const found = segmentSymmetry([from, to], group, 3)
    expect(found.freedom).toBe(free)
    expect(found.group).toHaveLength(order)
  })
})

test('dimensions that a group leaves alone', () => {
  const mirror: Mat3 = [
    [1, 0, 0],
    [0, 1, 0],
    [0, 0, -1],
  ]
  const turn: Mat3 = [
    [-1, 0, 0],
    [0, -1, 0],
    [0, 0, 1],
  ]
  expect(fixedDimensions([IDENTITY], 3)).toBe(3)
  expect(fixedDimensions([IDENTITY, mirror], 3)).toBe(2)
  expect(fixedDimensions([IDENTITY, turn], 3)).toBe(1)
  expect(fixedDimensions([IDENTITY, turn], 2)).toBe(0)
  expect(fixedDimensions([IDENTITY], 1)).toBe(1)
})

test('a chain: Γ and the end of the zone', () => {
  const reciprocal: Mat3 = [
    [2, 0, 0],
    [0, 2 * Math.PI, 0],
    [0, 0, 2 * Math.PI],
  ]
  const zone = buildZone(reciprocal, 1)
  const group = kRotations([IDENTITY], true, 1)
  expect(group).toHaveLength(2)
  expect(symmetryPoints(group, zone).map(({ fraction }) => Math.abs(fraction[0]))).toEqual([0, half])
})

test('everything is exact twelfths, in any basis', () => {
  const random = seeded(8)
  const { group, zone } = kSpaceOf(skewed(fromCell('hP', { a: 3, c: 5 }), unimodular(random, 3, 3)))
  for (const { fraction } of symmetryPoints(group, zone))
    for (const x of fraction) expect(x * 12).toBeCloseTo(Math.round(x * 12), 9)
  expect(Math.abs(determinant(group[1]))).toBe(1)
  expect(fold(zone, symmetryPoints(group, zone)[1].fraction).place).toBe('boundary')
})
