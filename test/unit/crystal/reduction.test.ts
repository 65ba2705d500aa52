import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { BRAVAIS_TYPES, type BravaisType } from '../../../server/src/crystal/bravais.ts'
import { latticeFromVectors } from '../../../server/src/crystal/lattice.ts'
import {
  type Dimension,
  PAIRS,
  reduce,
  shortBasis,
  SKEWED,
  skewness,
} from '../../../server/src/crystal/reduction.ts'
import { determinant, dot, type Mat3, norm, type Vec3 } from '../../../server/src/crystal/vector.ts'
import {
  between,
  fromCell,
  lattice,
  randomLattice,
  recombine,
  seeded,
  skewed,
  turned,
  unimodular,
  vectorsWithin,
  wholeBetween,
} from './zone-lattices.ts'

const anyType = fc.constantFrom(...BRAVAIS_TYPES)
const anySize = fc.constantFrom(1e-9, 1, 1e9)

/** Determinant of whole numbers, without rounding. */
const wholeDeterminant = (m: Mat3): bigint => {
  const [[a, b, c], [d, e, f], [g, h, i]] = m.map(row => row.map(BigInt))
  return a * (e * i - f * h) - b * (d * i - f * g) + c * (d * h - e * g)
}

describe('an obtuse superbase', () => {
  test('of any lattice on any basis at any size', () => {
    fc.assert(
      fc.property(fc.integer(), anyType, anySize, fc.constantFrom(1, 5, 30), (seed, type, size, most) => {
        const random = seeded(seed)
        const own = randomLattice(type, random, 30)
        const l = skewed(own, unimodular(random, own.dimension, most), size)
        const r = reduce(l.primitive, l.dimension)
        const n = l.dimension

        expect(r.superbase).toHaveLength(n + 1)
        const scale = Math.max(...r.superbase.map(norm))
        for (let x = 0; x < 3; x++)
          expect(Math.abs(r.superbase.reduce((sum, v) => sum + v[x], 0))).toBeLessThan(1e-12 * scale)
        PAIRS[n].forEach(([i, j], k) => {
          expect(r.products[k]).toBe(-dot(r.superbase[i], r.superbase[j]))
          expect(r.products[k] / (norm(r.superbase[i]) * norm(r.superbase[j]))).toBeGreaterThan(-1e-8)
        })

        // The basis is the lattice's own, of the same handedness, and its change is whole.
        const d = wholeDeterminant(r.change)
        expect(d).toBe(1n)
        r.change.slice(0, n).forEach((row, i) => {
          const made = recombine([row, row, row], l.primitive, 1)[0]
          expect(norm([0, 1, 2].map(x => made[x] - r.basis[i][x]) as unknown as Vec3)).toBeLessThan(
            1e-10 * scale,
          )
        })
        expect(Math.sign(determinant(r.basis))).toBe(l.handedness)
        expect(r.volume / own.volume / size ** n).toBeCloseTo(1, 9)
        for (let i = 1; i < n; i++) expect(norm(r.basis[i])).toBeGreaterThan(0.999999 * norm(r.basis[i - 1]))
      }),
      { numRuns: 300 },
    )
  })

  test('its type does not depend on basis, orientation and size', () => {
    fc.assert(
      fc.property(fc.integer(), anyType, anySize, (seed, type, size) => {
        const random = seeded(seed)
        const own = randomLattice(type, random, 10)
        const { kind } = reduce(own.primitive, own.dimension)
        const other = skewed(own, unimodular(random, own.dimension, 5), size)
        const n = own.dimension
        const rows = n === 3 ? turned(other.primitive, random) : other.primitive.slice(0, n)
        expect(reduce(lattice(latticeFromVectors(rows)).primitive, n).kind).toBe(kind)
      }),
      { numRuns: 300 },
    )
  })

  test('its sums are the shortest vectors of their classes modulo 2', () => {
    // The theorem of Voronoi: a vector bounds the cell only if it is shortest in its class of L/2L (Conway and Sloane 1992).
    fc.assert(
      fc.property(fc.integer(), anyType, (seed, type) => {
        const random = seeded(seed)
        const own = randomLattice(type, random)
        const l = skewed(own, unimodular(random, own.dimension, 3))
        const { voronoi } = reduce(l.primitive, l.dimension)
        const parity = (u: Vec3) => u.map(x => Math.abs(x % 2)).join()
        const longest = Math.max(...voronoi.map(v => norm(v.vector)))
        const shortest = new Map<string, number>()
        for (const { index, distance } of vectorsWithin(
          l.primitive,
          l.reciprocal,
          l.dimension,
          [0, 0, 0],
          longest * 1.001,
        ))
          shortest.set(parity(index), Math.min(distance, shortest.get(parity(index)) ?? Infinity))
        expect(new Set(voronoi.map(v => parity(v.coefficients))).size).toBe(2 ** l.dimension - 1)
        for (const { vector, coefficients } of voronoi)
          expect(norm(vector) / shortest.get(parity(coefficients))!).toBeCloseTo(1, 8)
      }),
    )
  })

  test.each([
    [
      'a shear of millions',
      [
        [1, 0, 0],
        [1000000.3, 1, 0],
        [0.4, 777777.7, 1],
      ],
    ],
    [
      'a shear of both ways',
      [
        [1, 54321, 0],
        [98765, 5364880000, 1],
        [0, 1, 0],
      ],
    ],
    [
      'a needle',
      [
        [1, 0, 0],
        [0.3, 1, 0],
        [4321.3, 999.2, 1e6],
      ],
    ],
    [
      'a plate',
      [
        [1e5, 3, 0],
        [-7e4, 1e5, 1],
        [5e5, 3e5, 1],
      ],
    ],
    [
      'a chain of golden quotients',
      [
        [1, 0, 0],
        [1.6180339887498949, 1e-9, 0],
        [0, 0, 1],
      ],
    ],
  ])('ends on %s', (_, rows) => {
    for (const size of [1e-9, 1, 1e9]) {
      const m = (rows as number[][]).map(r => r.map(x => x * size)) as unknown as Mat3
      const r = reduce(m, 3)
      expect(Math.abs(Number(wholeDeterminant(r.change)))).toBe(1)
      const volume = norm(r.basis[0]) * norm(r.basis[1]) * norm(r.basis[2])
      // A reduced basis is nearly straight: Hermite's constant in space is √2 (C. F. Gauss, 1831).
      expect(volume).toBeLessThanOrEqual(2 * r.volume)
      for (const p of r.products) expect(p).toBeGreaterThan(-1e-9 * norm(r.superbase[3]) ** 2)
    }
  })

  test('whole coefficients carry no rounding', () => {
    // Exact in doubles: Z³ on a basis sheared by millions.
    const r = reduce(
      [
        [1, 0, 0],
        [1234567, 1, 0],
        [7654321, 2345678, 1],
      ],
      3,
    )
    expect(r.basis.flat().map(Math.abs).sort()).toEqual([0, 0, 0, 0, 0, 0, 1, 1, 1])
    expect(r.kind).toBe('cuboid')
    expect(r.volume).toBe(1)
  })

  test('flat or endless vectors are a fault of the caller', () => {
    expect(() =>
      reduce(
        [
          [1, 0, 0],
          [0, 1, 0],
          [1, 1, 0],
        ],
        3,
      ),
    ).toThrow(RangeError)
    expect(() =>
      reduce(
        [
          [1, 0, 0],
          [0, Number.NaN, 0],
          [1, 1, 0],
        ],
        3,
      ),
    ).toThrow(RangeError)
  })
})

describe('the type of the Voronoi cell', () => {
  test.each([
    // The five parallelohedra of E. S. Fedorov (1885) and lattices that have them: Conway and Sloane 1992; from memory.
    ['cP', { a: 4 }, 'cuboid'],
    ['tP', { a: 4, c: 9 }, 'cuboid'],
    ['oP', { a: 4, b: 6, c: 9 }, 'cuboid'],
    ['hP', { a: 4, c: 9 }, 'hexagonal prism'],
    ['mP', { a: 4, b: 6, c: 9, beta: 99 }, 'hexagonal prism'],
    ['cF', { a: 4 }, 'rhombic dodecahedron'],
    ['cI', { a: 4 }, 'truncated octahedron'],
    // The square faces of the body-centred cell vanish when c reaches √2 a.
    ['tI', { a: 4, c: 5.6 }, 'truncated octahedron'],
    ['tI', { a: 4, c: 5.7 }, 'elongated dodecahedron'],
    ['tI', { a: 4, c: 4 * Math.SQRT2 }, 'rhombic dodecahedron'],
    // A rhombohedral cell changes its type at the simple cube.
    ['hR', { a: 4, alpha: 70 }, 'rhombic dodecahedron'],
    ['hR', { a: 4, alpha: 100 }, 'truncated octahedron'],
    ['hR', { a: 4, alpha: 90 }, 'cuboid'],
    ['tp', { a: 4 }, 'rectangle'],
    ['op', { a: 4, b: 5 }, 'rectangle'],
    ['oc', { a: 4, b: 5 }, 'hexagon'],
    ['hp', { a: 4 }, 'hexagon'],
    ['mp', { a: 4, b: 5, gamma: 80 }, 'hexagon'],
  ] as [BravaisType, object, string][])('of %s %j', (type, given, kind) => {
    const l = fromCell(type, given)
    expect(reduce(l.primitive, l.dimension).kind).toBe(kind)
  })

  test('of a chain', () => {
    const l = lattice(latticeFromVectors([[3, 0, 0]]))
    const r = reduce(l.primitive, 1)
    expect([r.kind, r.voronoi.length, r.products, r.edges]).toEqual(['segment', 2, [9], [[3, 0, 0]]])
  })

  test('a rounding off the higher type is the higher type, a visible step is not', () => {
    for (const type of ['cP', 'cF', 'cI', 'hP', 'tP'] as const) {
      const l = fromCell(type, { a: 4, c: 6 })
      const kind = reduce(l.primitive, 3).kind
      for (let seed = 1; seed <= 20; seed++) {
        const random = seeded(seed)
        const shaken = (by: number) =>
          l.primitive.map(row => row.map(x => x + by * between(random, -4, 4))) as unknown as Mat3
        expect(reduce(shaken(1e-12), 3).kind).toBe(kind)
        expect(reduce(shaken(1e-8), 3).kind).toBe(kind)
        // A general lattice is a truncated octahedron: no product vanishes.
        expect(reduce(shaken(1e-2), 3).kind).toBe('truncated octahedron')
      }
    }
  })
})

describe('the shortest basis', () => {
  test('reaches the successive minima, of the same lattice and handedness', () => {
    fc.assert(
      fc.property(fc.integer(), anyType, anySize, (seed, type, size) => {
        const random = seeded(seed)
        const own = randomLattice(type, random)
        const n = own.dimension
        const l = skewed(own, unimodular(random, n, 3), size)
        const s = shortBasis(l.primitive, n)
        expect(wholeDeterminant(s.change)).toBe(1n)
        const all = [...vectorsWithin(l.primitive, l.reciprocal, n, [0, 0, 0], s.lengths[n - 1] * 1.0001)]
          .filter(v => v.index.some(x => x !== 0))
          .sort((u, v) => u.distance - v.distance)
        const independent: Vec3[] = []
        for (const { G, distance } of all) {
          if (
            independent.length === n ||
            contentOf([...independent, G]) < 1e-6 * contentOf(independent) * distance
          )
            continue
          expect(s.lengths[independent.length] / distance).toBeCloseTo(1, 9)
          independent.push(G)
        }
        expect(independent).toHaveLength(n)
      }),
    )
  })

  /** Length, area or volume that vectors span. */
  function contentOf(vectors: readonly Vec3[]): number {
    const g = vectors.map(u => vectors.map(v => dot(u, v)))
    if (g.length === 0) return 1
    if (g.length === 1) return Math.sqrt(g[0][0])
    if (g.length === 2) return Math.sqrt(Math.max(0, g[0][0] * g[1][1] - g[0][1] ** 2))
    return Math.sqrt(Math.max(0, determinant(g as unknown as Mat3)))
  }

  test('has its angles between 60° and 120°, in space all acute or none', () => {
    fc.assert(
      fc.property(fc.integer(), fc.constantFrom('aP', 'mC', 'oF', 'hR', 'tI', 'mp'), (seed, type) => {
        const random = seeded(seed)
        const own = randomLattice(type, random)
        const { basis } = shortBasis(
          skewed(own, unimodular(random, own.dimension, 4)).primitive,
          own.dimension,
        )
        const cosines = (
          own.dimension === 3
            ? [
                [0, 1],
                [0, 2],
                [1, 2],
              ]
            : [[0, 1]]
        ).map(([i, j]) => dot(basis[i], basis[j]) / norm(basis[i]) / norm(basis[j]))
        for (const c of cosines) expect(Math.abs(c)).toBeLessThan(0.5 + 1e-7)
        if (own.dimension === 3) {
          const acute = cosines.filter(c => c > 1e-7).length
          const obtuse = cosines.filter(c => c < -1e-7).length
          expect(acute === 0 || obtuse === 0).toBe(true)
        }
      }),
    )
  })
})

describe('a needlessly skewed basis', () => {
  test('is none of the cells that the table of centrings makes', () => {
    const long = { a: 3, b: 4, c: 31, beta: 93, alpha: 40 }
    for (const type of BRAVAIS_TYPES) {
      if (type === 'aP' || type === 'mp') continue
      for (const given of [long, { ...long, a: 31, c: 3 }, { ...long, b: 29 }]) {
        const free = type === 'hR' ? { a: given.a, c: given.c } : given
        const l = fromCell(type, pick(type, free))
        expect([type, skewness(l.primitive, l.dimension).skewed]).toEqual([type, false])
      }
    }
    expect(skewness(fromCell('hR', { a: 10.47, alpha: 24.16 }).primitive, 3).skewed).toBe(false)
    expect(skewness(fromCell('hR', { a: 10.47, alpha: 24.16 }).primitive, 3).ratio).toBeGreaterThan(SKEWED)
  })

  const pick = (type: BravaisType, given: Record<string, number>) => {
    const names = {
      c: ['a'],
      t: ['a', 'c'],
      h: ['a', 'c'],
      o: ['a', 'b', 'c'],
      m: ['a', 'b', 'c', type === 'mB' ? 'alpha' : 'beta'],
    }
    const wanted =
      type[1] === type[1].toUpperCase()
        ? names[type[0] as 'c']
        : type === 'op' || type === 'oc'
          ? ['a', 'b']
          : ['a']
    return Object.fromEntries(wanted.map(n => [n, n === 'alpha' ? 93 : given[n]]))
  }

  test('nor such a cell in another order or with other signs', () => {
    const { primitive } = fromCell('tI', { a: 3, c: 40 })
    const [u, v, w] = primitive
    const minus = (x: Vec3): Vec3 => [-x[0], -x[1], -x[2]]
    expect(skewness([w, minus(u), v], 3)).toMatchObject({ skewed: false })
    expect(skewness(primitive, 3).ratio).toBeGreaterThan(SKEWED)
  })

  test('is one that shears make, and its proposal is not', () => {
    fc.assert(
      fc.property(fc.integer(), anySize, (seed, size) => {
        const random = seeded(seed)
        const [a, b, c] = [between(random, 4, 5), between(random, 5, 6), between(random, 6, 7)]
        const shear = wholeBetween(random, 1, 3)
        const rows = recombine(
          [
            [1, 0, 0],
            [0, 1, 0],
            [2 * shear, -shear, 1],
          ],
          [
            [a, 0, 0],
            [0.3, b, 0.1],
            [0.2, 0.4, c],
          ],
          3,
          size,
        )
        const found = skewness(rows as unknown as Mat3, 3)
        expect(found.skewed).toBe(true)
        const again = skewness(found.short.basis, 3)
        expect(again.skewed).toBe(false)
        expect(again.ratio).toBeCloseTo(1, 9)
      }),
    )
  })

  test('cells on customary axes are let be', () => {
    // A monoclinic cell with the angle of a glide plane (invented): the product of the lengths differs by a fifth.
    const steep = fromCell('mP', { a: 5.68, b: 15.2, c: 6.52, beta: 127 })
    const { ratio, skewed: isSkewed } = skewness(steep.primitive, 3)
    expect(ratio).toBeGreaterThan(1.1)
    expect(isSkewed).toBe(false)
    // Hexagonal cells with 60° as with 120°.
    expect(
      skewness(
        [
          [3, 0, 0],
          [1.5, 1.5 * Math.sqrt(3), 0],
          [0, 0, 9],
        ],
        3,
      ).ratio,
    ).toBeCloseTo(1, 12)
  })

  test('in the plane', () => {
    const plane = (rows: Vec3[]) => lattice(latticeFromVectors(rows)).primitive
    expect(
      skewness(
        plane([
          [1, 0, 0],
          [3, 1, 0],
        ]),
        2,
      ),
    ).toMatchObject({ skewed: true })
    expect(
      skewness(
        plane([
          [1, 0, 0],
          [0.5, 1, 0],
        ]),
        2,
      ).ratio,
    ).toBeCloseTo(1, 12)
    // Centred rectangular by the table, however narrow.
    expect(
      skewness(
        plane([
          [0.5, -4, 0],
          [0.5, 4, 0],
        ]),
        2,
      ),
    ).toMatchObject({ skewed: false })
    expect(skewness(plane([[7, 0, 0]]), 1)).toMatchObject({ skewed: false, ratio: 1 })
  })
})

test('the edges are those of the Voronoi cell', () => {
  // Of the cube: three edges of length a along the axes.
  const edges = reduce(
    [
      [4, 0, 0],
      [0, 4, 0],
      [0, 0, 4],
    ],
    3,
  ).edges.filter(e => norm(e) > 0)
  expect(edges.map(e => norm(e))).toEqual([4, 4, 4])
  // Of the body-centred cube with edge a: all edges a/(2√2) (truncated octahedron between squares a/2 apart; closed formula).
  const { primitive } = fromCell('cI', { a: 4 })
  for (const e of reduce(primitive, 3).edges) expect(norm(e)).toBeCloseTo(4 / (2 * Math.SQRT2), 12)
  // Of the plane hexagonal lattice: all sides a/√3.
  const plane = fromCell('hp', { a: 4 })
  for (const e of reduce(plane.primitive, 2 as Dimension).edges)
    expect(norm(e)).toBeCloseTo(4 / Math.sqrt(3), 12)
})
