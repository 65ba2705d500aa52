import { beforeAll, describe, expect, test } from 'vitest'
import {
  BRAVAIS,
  BRAVAIS_TYPES_2D,
  BRAVAIS_TYPES_3D,
  type BravaisType,
  CENTRING_TABLES,
} from '../../../server/src/crystal/bravais.ts'
import { reduce } from '../../../server/src/crystal/reduction.ts'
import {
  findSymmetry,
  type LatticeType,
  latticeType,
  symmetriseBasis,
} from '../../../server/src/crystal/symmetry.ts'
import {
  determinant,
  dot,
  type Mat3,
  mapMatrix,
  multiply,
  norm,
  subtract,
  transpose,
} from '../../../server/src/crystal/vector.ts'
import { loadSymmetryFromDisk } from '../../../server/src/symmetry-node.ts'
import { fromCell, randomLattice, recombine, seeded, turned, unimodular } from './zone-lattices.ts'

const TOLERANCE = 1e-4

/** Order of the holohedry of each type (International Tables for Crystallography, vol. A, table 2.1.2.1; from memory). */
const ORDER: Record<string, number> = {
  ...{ c: 48, h: 24, t: 16, o: 8, m: 4, a: 2 },
}
const PLANE_ORDER: Record<string, number> = { tp: 8, op: 4, oc: 4, hp: 12, mp: 2 }
const orderOf = (type: BravaisType): number => PLANE_ORDER[type] ?? (type === 'hR' ? 12 : ORDER[type[0]])

/** One name for the types that differ by the choice of axes only. */
const oneName = (type: BravaisType): BravaisType =>
  /^o[AB]$/.test(type) ? 'oC' : /^m[ABI]$/.test(type) ? 'mC' : type

const typeOf = (rows: Mat3, dimension: 1 | 2 | 3 = 3, tolerance = TOLERANCE): LatticeType => {
  const type = latticeType(rows, dimension, tolerance)
  if (!type) throw new Error('no lattice')
  return type
}

/** A random basis of a random lattice of the type, turned in space (a plane one in its plane). */
function disguised(type: BravaisType, random: () => number): Mat3 {
  const { primitive, dimension } = randomLattice(type, random)
  const rows = recombine(unimodular(random, dimension, 4), primitive, dimension)
  return (dimension === 3 ? turned(rows, random) : [...rows, [0, 0, 1]]) as unknown as Mat3
}

beforeAll(loadSymmetryFromDisk)

describe.each([...BRAVAIS_TYPES_3D, ...BRAVAIS_TYPES_2D])(
  'random lattices of type %s in random bases',
  type => {
    const { dimension, centring } = BRAVAIS[type]
    const random = seeded(BRAVAIS_TYPES_3D.indexOf(type as never) + 40)
    const cases = Array.from({ length: 25 }, () => disguised(type, random))

    test('the type and the order of the holohedry come out', () => {
      for (const rows of cases) {
        const found = typeOf(rows, dimension)
        expect(found.bravais).toBe(oneName(type))
        expect(found.holohedry).toHaveLength(orderOf(type))
        expect(found.misfit).toBeLessThan(1e-8)
        expect(found.toleranceLowered).toBe(false)
      }
    })

    test('the holohedry is a group of matrices that keep the metric, identity first', () => {
      for (const rows of cases.slice(0, 5)) {
        const { holohedry } = typeOf(rows, dimension)
        const metric = multiply(rows, transpose(rows))
        const known = new Set(holohedry.map(String))
        expect(String(holohedry[0])).toBe('1,0,0,0,1,0,0,0,1')
        for (const W of holohedry) {
          expect(Math.abs(determinant(W))).toBe(1)
          const moved = multiply(multiply(transpose(W), metric), W).flat()
          moved.forEach((x, i) => {
            expect(x).toBeCloseTo(metric.flat()[i], 6)
          })
          expect(holohedry.every(V => known.has(String(multiply(V, W))))).toBe(true)
        }
      }
    })

    test('the conventional cell is right-handed, with the centring of the type and its right angles', () => {
      for (const rows of cases) {
        const { conventional, conventionalFromPrimitive, cell } = typeOf(rows, dimension)
        const { numerators, denominator, points } =
          CENTRING_TABLES[centring === 'A' || centring === 'B' || type === 'mI' ? 'C' : centring]
        expect(determinant(conventional)).toBeGreaterThan(0)
        expect(Math.abs(determinant(conventionalFromPrimitive))).toBe(points)
        const primitive = multiply(numerators, conventionalFromPrimitive).flat()
        expect(primitive.every(x => x % denominator === 0)).toBe(true)
        const { a, b, c, alpha, beta, gamma } = cell
        const near = (x: number, y: number) => expect(x).toBeCloseTo(y, 5)
        const [system] = type
        if (dimension === 3 && system !== 'a') near(alpha, 90)
        if (dimension === 3 && system !== 'a' && system !== 'm') near(beta, 90)
        if (system === 'c' || system === 't') near(a, b)
        if (system === 'c') near(b, c)
        if (system === 'h') near(a, b)
        if (system === 'h') near(gamma, 120)
        else if (type !== 'mp' && system !== 'a') near(gamma, 90)
        if (type === 'mp') expect(gamma).toBeGreaterThanOrEqual(90)
        if (dimension === 3 && system === 'm') expect(beta).toBeGreaterThanOrEqual(90)
        if (/^o[PIF]$/.test(type)) expect(a <= b && b <= c).toBe(true)
        if (type === 'oC' || type === 'op' || type === 'oc') expect(a).toBeLessThanOrEqual(b)
      }
    })

    if (dimension === 3)
      test('the symmetry library sees the same type and rotations for one atom in the cell', () => {
        for (const rows of cases.slice(0, 5)) {
          const symmetry = findSymmetry({
            dimension,
            primitive: rows,
            positions: [],
            species: [],
            tolerance: TOLERANCE,
          })
          if ('failed' in symmetry) throw new Error(symmetry.failed)
          expect(symmetry.bravais).toBe(oneName(type))
          expect(symmetry.latticeBravais).toBe(oneName(type))
          const sorted = (matrices: readonly Mat3[]) => matrices.map(String).sort()
          expect(sorted(symmetry.rotations)).toEqual(sorted(typeOf(rows).holohedry))
          expect(sorted(symmetry.rotations)).toEqual(sorted(symmetry.holohedry))
        }
      })
  },
)

test.each([1e-9, 1, 1e9])('the type does not depend on the unit of length (× %d)', factor => {
  for (const type of BRAVAIS_TYPES_3D) {
    const { primitive } = randomLattice(type, seeded(5))
    const rows = recombine(unimodular(seeded(6), 3, 4), primitive, 3, factor) as unknown as Mat3
    expect(typeOf(rows, 3, TOLERANCE * factor).bravais).toBe(oneName(type))
  }
})

test('a holohedry may need the entry ±2 in an obtuse superbase: a cuboid on the chain a, b − a, c − b', () => {
  const rows: Mat3 = [
    [-4, 5, 0],
    [0, -5, 6],
    [0, 0, -6],
  ]
  expect(reduce(rows, 3).products.filter(p => p > 1)).toHaveLength(3)
  expect(typeOf(rows)).toMatchObject({ bravais: 'oP', cell: { a: 4, b: 5, c: 6 } })
})

describe('lattices more symmetric than their description (common practice)', () => {
  const root2 = Math.SQRT2
  test.each([
    ['tI with c = a', fromCell('tI', { a: 4, c: 4 }), 'cI'],
    ['tI with c = √2 a', fromCell('tI', { a: 4, c: 4 * root2 }), 'cF'],
    ['tP with c = a', fromCell('tP', { a: 4, c: 4 }), 'cP'],
    ['hR with α = 60°', fromCell('hR', { a: 4, alpha: 60 }), 'cF'],
    ['hR with α = 90°', fromCell('hR', { a: 4, alpha: 90 }), 'cP'],
    ['hR with α = 109.47°', fromCell('hR', { a: 4, alpha: (Math.acos(-1 / 3) * 180) / Math.PI }), 'cI'],
    ['oC with b = √3 a', fromCell('oC', { a: 4, b: 4 * Math.sqrt(3), c: 5 }), 'hP'],
    ['oF with a = b', fromCell('oF', { a: 4, b: 4, c: 5 }), 'tI'],
    ['oC with a = b', fromCell('oC', { a: 4, b: 4, c: 5 }), 'tP'],
    ['mP with β = 90°', fromCell('mP', { a: 4, b: 5, c: 6, beta: 90 }), 'oP'],
    ['oc with b = √3 a', fromCell('oc', { a: 4, b: 4 * Math.sqrt(3) }), 'hp'],
    ['op with a = b', fromCell('op', { a: 4, b: 4 }), 'tp'],
    ['mp with γ = 120°, a = b', fromCell('mp', { a: 4, b: 4, gamma: 120 }), 'hp'],
  ] as const)('%s is %s', (_, { primitive, dimension }, type) => {
    expect(typeOf(primitive, dimension).bravais).toBe(type)
  })
})

describe('tolerance', () => {
  const nearly = fromCell('tP', { a: 4, c: 4.0005 }).primitive

  test('is a length: what it lets through, by how much it misses', () => {
    expect(typeOf(nearly, 3, 1e-3)).toMatchObject({ bravais: 'cP', toleranceLowered: false })
    expect(typeOf(nearly, 3, 1e-3).misfit).toBeCloseTo(5e-4, 9)
    expect(typeOf(nearly, 3, 1e-4)).toMatchObject({ bravais: 'tP' })
    expect(typeOf(nearly, 3, 1e-4).misfit).toBeLessThan(1e-12)
  })

  test('the conventional cell is told as it is, not idealised', () => {
    const { a, b, c } = typeOf(nearly, 3, 1e-3).cell
    expect([a, b, c].sort()).toEqual([4, 4, 4.0005])
  })

  test('counts angles by the displacement that they make', () => {
    // A mirror doubles the 0.005°; 0.01° of a vector of 5 Å is 0.87 mÅ.
    const { primitive } = fromCell('mP', { a: 5, b: 4, c: 5, beta: 90.005 })
    expect(typeOf(primitive, 3, 1e-3).bravais).toBe('tP')
    expect(typeOf(primitive, 3, 8e-4).bravais).not.toBe('tP')
  })

  test('what is within it but no group gives the largest group inside, and says so', () => {
    // a and b may change places, b and c may, a and c may not.
    const { primitive } = fromCell('oP', { a: 4, b: 4.0008, c: 4.0016 })
    expect(typeOf(primitive, 3, 1e-3).toleranceLowered).toBe(true)
    expect(typeOf(primitive, 3, 2e-3)).toMatchObject({ bravais: 'cP', toleranceLowered: false })
  })

  test('beyond a part of the shortest vector it counts no more', () => {
    expect(typeOf(fromCell('oP', { a: 4, b: 5, c: 6 }).primitive, 3, 100).bravais).toBe('oP')
  })
})

test('a symmetrised basis has the mean metric, and is not turned', () => {
  const { primitive } = fromCell('mP', { a: 4, b: 5, c: 6, beta: 90.02 })
  const { holohedry } = typeOf(primitive, 3, 5e-3)
  expect(holohedry).toHaveLength(8)
  const exact = symmetriseBasis(primitive, holohedry, 3)
  expect(typeOf(exact, 3, 1e-9).bravais).toBe('oP')
  // The strain between the two is symmetric: no rotation was added.
  const strain = multiply(inverseOf(primitive), exact)
  for (const [i, j] of [
    [0, 1],
    [0, 2],
    [1, 2],
  ])
    expect(strain[i][j]).toBeCloseTo(strain[j][i], 9)
  exact.forEach((row, i) => {
    expect(norm(subtract(row, primitive[i]))).toBeLessThan(3e-3)
  })
  expect(dot(exact[0], exact[2])).toBeCloseTo(0, 9)
})

const inverseOf = (m: Mat3): Mat3 => {
  const d = determinant(m)
  const cofactor = (i: number, j: number) => {
    const [p, q] = [0, 1, 2].filter(x => x !== j)
    const [r, s] = [0, 1, 2].filter(x => x !== i)
    return ((i + j) % 2 ? -1 : 1) * (m[p][r] * m[q][s] - m[p][s] * m[q][r])
  }
  return [0, 1, 2].map(i => [0, 1, 2].map(j => cofactor(i, j) / d)) as unknown as Mat3
}

test('a chain has no Bravais type and two symmetries', () => {
  const found = typeOf(
    [
      [3, 0, 0],
      [0, 1, 0],
      [0, 0, 1],
    ],
    1,
  )
  expect(found.bravais).toBeUndefined()
  expect(found.holohedry).toHaveLength(2)
})

test.each([
  [
    'flat',
    [
      [1, 0, 0],
      [0, 1, 0],
      [1, 1, 0],
    ],
  ],
  [
    'not finite',
    [
      [1, 0, 0],
      [0, Number.NaN, 0],
      [1, 1, 1],
    ],
  ],
  [
    'zero',
    [
      [0, 0, 0],
      [0, 1, 0],
      [0, 0, 1],
    ],
  ],
])('vectors that are %s have no type', (_, rows) => {
  expect(latticeType(rows as unknown as Mat3, 3, TOLERANCE)).toBeUndefined()
})

test('vectors that are nothing but large or small numbers of one lattice are still that lattice', () => {
  const rows = mapMatrix(fromCell('cF', { a: 5 }).primitive, x => x * 1e-12)
  expect(typeOf(rows, 3, 1e-16).bravais).toBe('cF')
})
