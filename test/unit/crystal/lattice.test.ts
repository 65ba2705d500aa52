import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { BRAVAIS, BRAVAIS_TYPES, CENTRINGS, type Centring } from '../../../server/src/crystal/bravais.ts'
import {
  anglesPossible,
  atomToConventional,
  atomToPrimitive,
  cellParameters,
  cosDegrees,
  fractionFromK,
  fractionFromPosition,
  kFromFraction,
  kToConventional,
  kToPrimitive,
  latticeFromCell,
  latticeFromVectors,
  positionFromFraction,
  sinDegrees,
} from '../../../server/src/crystal/lattice.ts'
import { determinant, dot, type Mat3, multiply, norm, type Vec3 } from '../../../server/src/crystal/vector.ts'
import { fromCell, lattice, randomLattice, recombine, seeded, skewed, unimodular } from './zone-lattices.ts'

const TWO_PI = 2 * Math.PI
const CELL = { a: 4, b: 5, c: 7, alpha: 80, beta: 95, gamma: 103 }

describe('the primitive cell of each centring', () => {
  /** The table of the lattice file's format, applied to conventional vectors a, b, c. */
  const table: Record<Centring, (a: Vec3, b: Vec3, c: Vec3) => number[][]> = {
    P: (a, b, c) => [[...a], [...b], [...c]],
    F: (a, b, c) => [mean(2, [b, c]), mean(2, [a, c]), mean(2, [a, b])],
    I: (a, b, c) => [mean(2, [neg(a), b, c]), mean(2, [a, neg(b), c]), mean(2, [a, b, neg(c)])],
    C: (a, b, c) => [mean(2, [a, neg(b)]), mean(2, [a, b]), [...c]],
    A: (a, b, c) => [[...a], mean(2, [b, neg(c)]), mean(2, [b, c])],
    B: (a, b, c) => [mean(2, [a, neg(c)]), [...b], mean(2, [a, c])],
    R: (a, b, c) => [mean(3, [a, a, b, c]), mean(3, [neg(a), b, c]), mean(3, [neg(a), neg(b), neg(b), c])],
  }
  const points: Record<Centring, number> = { P: 1, A: 2, B: 2, C: 2, I: 2, F: 4, R: 3 }
  const neg = (u: Vec3): Vec3 => [-u[0], -u[1], -u[2]]
  const mean = (over: number, us: readonly Vec3[]) =>
    [0, 1, 2].map(x => us.reduce((s, u) => s + u[x], 0) / over)

  test.each(CENTRINGS)('%s', centring => {
    const l = lattice(latticeFromCell(CELL, centring, 3))
    const [a, b, c] = l.conventional
    table[centring](a, b, c).forEach((row, i) => {
      row.forEach((x, j) => {
        expect(l.primitive[i][j]).toBeCloseTo(x, 12)
      })
    })
    expect(determinant(l.conventional) / l.volume).toBeCloseTo(points[centring], 10)
    expect(determinant(l.conventionalFromPrimitive)).toBe(points[centring])
    const back = multiply(l.conventionalFromPrimitive, l.primitive)
    back.flat().forEach((x, i) => {
      expect(x).toBeCloseTo(l.conventional.flat()[i], 12)
    })
    expect(l.handedness).toBe(1)
  })

  test('halves are exact', () => {
    expect(fromCell('cF', { a: 5.43 }).primitive).toEqual([
      [0, 2.715, 2.715],
      [2.715, 0, 2.715],
      [2.715, 2.715, 0],
    ])
    expect(fromCell('cI', { a: 3 }).primitive).toEqual([
      [-1.5, 1.5, 1.5],
      [1.5, -1.5, 1.5],
      [1.5, 1.5, -1.5],
    ])
    expect(fromCell('oc', { a: 3, b: 4 }).primitive.slice(0, 2)).toEqual([
      [1.5, -2, 0],
      [1.5, 2, 0],
    ])
  })
})

describe('a conventional cell in space', () => {
  test('a along x, b in the xy-plane with positive y, c right-handed', () => {
    fc.assert(
      fc.property(fc.integer(), seed => {
        const { conventional, handedness } = randomLattice('aP', seeded(seed))
        const [a, b] = conventional
        expect(a[1]).toBe(0)
        expect(a[2]).toBe(0)
        expect(b[1]).toBeGreaterThan(0)
        expect(b[2]).toBe(0)
        expect(handedness).toBe(1)
      }),
    )
  })

  test('where symmetry gives zeros they are zeros', () => {
    const hex = fromCell('hP', { a: 2, c: 5 })
    expect(hex.conventional).toEqual([
      [2, 0, 0],
      [-1, Math.sqrt(3), 0],
      [0, 0, 5],
    ])
    expect(hex.reciprocal[0][2]).toBe(0)
    expect([hex.reciprocal[1][0], hex.reciprocal[1][2]]).toEqual([0, 0])
    expect(hex.reciprocal[2].slice(0, 2)).toEqual([0, 0])
    const mono = fromCell('mP', { a: 4, b: 5, c: 6, beta: 101.3 })
    expect(mono.conventional[1]).toEqual([0, 5, 0])
    expect(mono.conventional[2][1]).toBe(0)
    expect(mono.reciprocal[1]).toEqual([0, expect.any(Number), 0])
    const unique = fromCell('mP', { a: 4, b: 5, c: 6, alpha: 101.3 })
    expect(unique.conventional[0]).toEqual([4, 0, 0])
    expect(unique.conventional[2][0]).toBe(0)
    const ortho = fromCell('oP', { a: 4, b: 5, c: 6 })
    expect(ortho.conventional).toEqual([
      [4, 0, 0],
      [0, 5, 0],
      [0, 0, 6],
    ])
    for (const row of fromCell('cF', { a: 5.43 }).conventionalReciprocal)
      expect(row.filter(x => x !== 0)).toHaveLength(1)
  })

  test('no zero is negative', () => {
    for (const type of BRAVAIS_TYPES) {
      const l = randomLattice(type, seeded(3))
      for (const m of [l.primitive, l.conventional, l.reciprocal, l.conventionalReciprocal])
        for (const x of m.flat()) expect(Object.is(x, -0)).toBe(false)
    }
  })

  test('cell to vectors and back', () => {
    fc.assert(
      fc.property(fc.integer(), seed => {
        const random = seeded(seed)
        const l = randomLattice('aP', random, 100)
        const back = cellParameters(l.conventional)
        for (const [name, x] of Object.entries(l.parameters))
          expect(back[name as keyof typeof back] / x).toBeCloseTo(1, 11)
      }),
    )
    expect(cellParameters(fromCell('hP', { a: 2.46, c: 6.7 }).conventional)).toMatchObject({
      alpha: 90,
      beta: 90,
      gamma: 120,
    })
    expect(cellParameters(fromCell('cF', { a: 5.43 }).primitive)).toMatchObject({
      alpha: 60,
      beta: 60,
      gamma: 60,
    })
  })

  test('the volume of a triclinic cell', () => {
    // International Tables for Crystallography, vol. B, ch. 1.1: V² = a²b²c² (1 − Σcos² + 2Πcos); from memory.
    const { a, b, c, alpha, beta, gamma } = CELL
    const [x, y, z] = [alpha, beta, gamma].map(t => Math.cos((t * Math.PI) / 180))
    const volume = a * b * c * Math.sqrt(1 - x * x - y * y - z * z + 2 * x * y * z)
    expect(fromCell('aP', CELL).volume).toBeCloseTo(volume, 10)
  })

  test('a nearly flat cell keeps its digits', () => {
    // α = β + γ − 10⁻⁶°: V/abc = 2 √(sin s sin(s−α) sin(s−β) sin(s−γ)) with s − α = 5·10⁻⁷° (the same formula factored).
    const rad = Math.PI / 180
    const l = fromCell('aP', { a: 1, b: 1, c: 1, alpha: 100 - 1e-6, beta: 60, gamma: 40 })
    const small = Math.sin(5e-7 * rad)
    const expected = 2 * Math.sqrt(Math.sin(100 * rad) * small * Math.sin(40 * rad) * Math.sin(60 * rad))
    expect(l.volume / expected).toBeCloseTo(1, 6)
  })
})

describe('rhombohedral axes', () => {
  test('become the primitive vectors of the hexagonal cell', () => {
    fc.assert(
      fc.property(fc.double({ min: 5, max: 119, noNaN: true }), alpha => {
        const l = fromCell('hR', { a: 4, alpha })
        const { a, b, c, ...angles } = cellParameters(l.primitive)
        for (const length of [a, b, c]) expect(length).toBeCloseTo(4, 10)
        for (const angle of Object.values(angles)) expect(angle).toBeCloseTo(alpha, 8)
        // The three-fold axis is along z: all three rise by the same.
        expect(l.primitive[1][2]).toBe(l.primitive[0][2])
        expect(l.primitive[2][2]).toBe(l.primitive[0][2])
      }),
    )
  })

  test.each([
    // a_h = 2a sin(α/2), c_h = a√(3(1 + 2cos α)): c/a is √6 for the face-centred cube, √(3/2) for the simple one and
    // √6/4 for the body-centred one (closed formula).
    [60, Math.sqrt(6)],
    [90, Math.sqrt(3 / 2)],
    [(Math.acos(-1 / 3) * 180) / Math.PI, Math.sqrt(6) / 4],
  ])('α = %d° is a cube', (alpha, ratio) => {
    const { a, c } = fromCell('hR', { a: 3, alpha }).parameters
    expect(c / a).toBeCloseTo(ratio, 12)
  })
})

describe('the reciprocal lattice', () => {
  test('bᵢ·aⱼ = 2π δᵢⱼ on any basis, at any size', () => {
    fc.assert(
      fc.property(
        fc.integer(),
        fc.constantFrom(...BRAVAIS_TYPES),
        fc.constantFrom(1e-9, 1, 1e9),
        (seed, type, size) => {
          const random = seeded(seed)
          const own = randomLattice(type, random, 1000)
          const l = skewed(own, unimodular(random, own.dimension, 5), size)
          for (const [direct, reciprocal] of [
            [l.primitive, l.reciprocal],
            [l.conventional, l.conventionalReciprocal],
          ])
            for (let i = 0; i < 3; i++)
              for (let j = 0; j < 3; j++) {
                const off = dot(reciprocal[i], direct[j]) - (i === j ? TWO_PI : 0)
                expect(Math.abs(off)).toBeLessThan(1e-14 * norm(reciprocal[i]) * norm(direct[j]) + 1e-12)
              }
        },
      ),
      { numRuns: 300 },
    )
  })

  test('of a skewed basis is as exact as that of a straight one', () => {
    // Rows that doubles hold exactly: a lattice of unit cubes, so the reciprocal one consists of multiples of 2π.
    const rows: Vec3[] = [
      [1, 0, 0],
      [1234567, 1, 0],
      [7654321, 2345678, 1],
    ]
    const l = lattice(latticeFromVectors(rows))
    // The inverse of a triangular whole matrix, in whole numbers.
    const expected = [
      [1, -1234567, 1234567 * 2345678 - 7654321],
      [0, 1, -2345678],
      [0, 0, 1],
    ]
    l.reciprocal.forEach((row, i) => {
      row.forEach((x, j) => {
        expect(Math.abs(x / TWO_PI - expected[i][j])).toBeLessThanOrEqual(1e-15 * Math.abs(expected[i][j]))
      })
    })
    expect(l.volume).toBe(1)
  })

  test('of face-centred is body-centred with a cube of 4π/a', () => {
    // Ashcroft and Mermin, Solid State Physics (1976), ch. 5; from memory.
    const { reciprocal } = fromCell('cF', { a: 5 })
    const half = TWO_PI / 5
    reciprocal.forEach((row, i) => {
      row.forEach((x, j) => {
        expect(x).toBeCloseTo(i === j ? -half : half, 14)
      })
    })
  })

  test('of hexagonal is hexagonal with 4π/(√3 a) and 2π/c, turned by 30°', () => {
    // Ashcroft and Mermin, Solid State Physics (1976), ch. 5; from memory.
    const { reciprocal, conventional } = fromCell('hP', { a: 2.46, c: 6.7 })
    expect(norm(reciprocal[0])).toBeCloseTo((4 * Math.PI) / (Math.sqrt(3) * 2.46), 12)
    expect(norm(reciprocal[2])).toBeCloseTo(TWO_PI / 6.7, 12)
    const cosine = dot(reciprocal[0], conventional[0]) / norm(reciprocal[0]) / norm(conventional[0])
    expect(cosine).toBeCloseTo(Math.cos(Math.PI / 6), 12)
  })
})

describe('two and one dimensions', () => {
  test('a plane is completed by its normal, either way round', () => {
    const l = lattice(
      latticeFromVectors([
        [2, 0, 0],
        [-1, Math.sqrt(3), 0],
      ]),
    )
    expect(l.primitive[2]).toEqual([0, 0, 1])
    expect(l.reciprocal[2]).toEqual([0, 0, TWO_PI])
    expect([l.dimension, l.handedness]).toEqual([2, 1])
    expect(l.volume).toBeCloseTo(2 * Math.sqrt(3), 14)
    const clockwise = lattice(
      latticeFromVectors([
        [-1, Math.sqrt(3), 0],
        [2, 0, 0],
      ]),
    )
    expect(clockwise.primitive[2]).toEqual([0, 0, 1])
    expect(clockwise.handedness).toBe(-1)
    expect(clockwise.reciprocal[2]).toEqual([0, 0, TWO_PI])
    expect(clockwise.volume).toBeCloseTo(2 * Math.sqrt(3), 14)
  })

  test('a chain is completed by y and z', () => {
    for (const sign of [1, -1]) {
      const l = lattice(latticeFromVectors([[sign * 2.5, 0, 0]]))
      expect(l.primitive).toEqual([
        [sign * 2.5, 0, 0],
        [0, 1, 0],
        [0, 0, 1],
      ])
      expect(l.reciprocal).toEqual([
        [(sign * TWO_PI) / 2.5, 0, 0],
        [0, TWO_PI, 0],
        [0, 0, TWO_PI],
      ])
      expect([l.volume, l.handedness, l.dimension]).toEqual([2.5, sign, 1])
    }
  })

  test('a plane or a chain may stand anywhere', () => {
    for (const rows of [
      [
        [0, 3, 0],
        [0, 0, 4],
      ],
      [
        [1, 2, 3],
        [-3, 1, 2],
      ],
      [[0, 0, 2]],
      [[0, -2, 0]],
      [[1, 1, 1]],
    ] as Vec3[][]) {
      const l = lattice(latticeFromVectors(rows))
      for (let i = rows.length; i < 3; i++) {
        expect(norm(l.primitive[i])).toBeCloseTo(1, 14)
        for (let j = 0; j < i; j++) expect(dot(l.primitive[i], l.primitive[j])).toBeCloseTo(0, 14)
      }
    }
  })

  test('the size of the cell does not touch the normal', () => {
    const small = lattice(
      latticeFromVectors([
        [2e-9, 0, 0],
        [1e-9, 3e-9, 0],
      ]),
    )
    expect(small.primitive[2]).toEqual([0, 0, 1])
    expect(small.volume / 6e-18).toBeCloseTo(1, 12)
  })
})

describe('what is no lattice', () => {
  test.each([
    [
      'a + b again',
      [
        [1, 2, 3],
        [4, 5, 6],
        [5, 7, 9],
      ],
    ],
    [
      '0.1 and its like',
      [
        [0.1, 0.2, 0.3],
        [0.4, 0.5, 0.6],
        [0.7, 0.8, 0.9],
      ],
    ],
    [
      'a zero vector',
      [
        [1, 0, 0],
        [0, 0, 0],
        [0, 0, 1],
      ],
    ],
    [
      'parallel in the plane',
      [
        [0.1, 0.3, 0],
        [0.3, 0.9, 0],
      ],
    ],
    ['a chain of nothing', [[0, 0, 0]]],
  ])('flat: %s', (_, rows) => {
    for (const size of [1e-9, 1, 1e9]) {
      const scaled = (rows as number[][]).map(r => r.map(x => x * size)) as unknown as Vec3[]
      expect(latticeFromVectors(scaled)).toMatchObject({ fault: 'flat' })
    }
  })

  test('a needle of 1:1000 on a skewed basis is not flat', () => {
    const rows = recombine(
      [
        [1, 5, 5],
        [5, 26, 30],
        [-5, -20, -4],
      ],
      [
        [1, 0, 0],
        [0, 1, 0],
        [0, 0, 1000],
      ],
      3,
    )
    const found = latticeFromVectors(rows)
    const d = determinant([
      [1, 5, 5],
      [5, 26, 30],
      [-5, -20, -4],
    ])
    expect(lattice(found).volume / (1000 * Math.abs(d))).toBeCloseTo(1, 12)
  })

  test('lengths that are none', () => {
    expect(latticeFromCell({ ...CELL, b: 0 }, 'P', 3)).toEqual({ fault: 'lengths', vectors: [1] })
    expect(latticeFromCell({ ...CELL, a: -4, c: Number.NaN }, 'P', 3)).toEqual({
      fault: 'lengths',
      vectors: [0, 2],
    })
    expect(
      latticeFromVectors([
        [1e300, 0, 0],
        [0, 1, 0],
        [0, 0, 1],
      ]),
    ).toEqual({ fault: 'lengths', vectors: [0] })
    expect(latticeFromCell({ ...CELL, c: 0, b: 0 }, 'P', 1)).toMatchObject({ dimension: 1, volume: 4 })
  })

  test('angles that are none', () => {
    expect(latticeFromCell({ ...CELL, alpha: 10, beta: 90, gamma: 120 }, 'P', 3)).toMatchObject({
      fault: 'angles',
      miss: { reason: 'one', name: 'gamma', value: 120, limit: 100, by: 20 },
    })
    expect(latticeFromCell({ ...CELL, gamma: 180 }, 'P', 2)).toMatchObject({
      fault: 'angles',
      miss: { reason: 'range' },
    })
  })

  test('centrings that a plane cannot have', () => {
    expect(
      latticeFromVectors(
        [
          [1, 0, 0],
          [0, 2, 0],
        ],
        'F',
      ),
    ).toEqual({ fault: 'centring', centring: 'F' })
    expect(latticeFromVectors([[1, 0, 0]], 'C')).toEqual({ fault: 'centring', centring: 'C' })
    expect(
      lattice(
        latticeFromVectors(
          [
            [1, 0, 0],
            [0, 2, 0],
          ],
          'C',
        ),
      ).volume,
    ).toBe(1)
  })
})

describe('anglesPossible', () => {
  test.each([
    [[90, 90, 90], { possible: true }],
    [[60, 60, 119.9], { possible: true }],
    [[119.9, 119.9, 119.9], { possible: true }],
    [[60, 60, 120], { reason: 'one', name: 'gamma', by: 0, limit: 120 }],
    [[120, 120, 120], { reason: 'sum', by: 0, limit: 360 }],
    [[130, 130, 110], { reason: 'sum', by: 10, value: 370 }],
    [[150, 40, 80], { reason: 'one', name: 'alpha', by: 30, limit: 120 }],
    [[0, 90, 90], { reason: 'range', name: 'alpha', by: 0, limit: 0 }],
    [[90, -20, 90], { reason: 'range', name: 'beta', by: 20, limit: 0 }],
    [[90, 90, 190], { reason: 'range', name: 'gamma', by: 10, limit: 180 }],
    [[90, Number.NaN, 90], { reason: 'range', name: 'beta' }],
  ] as [[number, number, number], object][])('%j', (angles, expected) => {
    expect(anglesPossible(...angles)).toMatchObject(expected)
  })

  test('agrees with the sign of the metric determinant', () => {
    const angle = fc.double({ min: 1, max: 179, noNaN: true })
    fc.assert(
      fc.property(angle, angle, angle, (alpha, beta, gamma) => {
        const [x, y, z] = [alpha, beta, gamma].map(t => Math.cos((t * Math.PI) / 180))
        const square = 1 - x * x - y * y - z * z + 2 * x * y * z
        fc.pre(Math.abs(square) > 1e-9)
        expect(anglesPossible(alpha, beta, gamma).possible).toBe(square > 0)
      }),
      { numRuns: 2000 },
    )
  })
})

test('sine and cosine of degrees', () => {
  fc.assert(
    fc.property(fc.double({ min: -1000, max: 1000, noNaN: true }), t => {
      expect(cosDegrees(t)).toBeCloseTo(Math.cos((t * Math.PI) / 180), 12)
      expect(sinDegrees(t)).toBeCloseTo(Math.sin((t * Math.PI) / 180), 12)
    }),
  )
  expect([0, 60, 90, 120, 180, 270, -60, 300].map(cosDegrees)).toEqual([1, 0.5, 0, -0.5, -1, 0, 0.5, 0.5])
  expect([0, 30, 90, 150, 180, 270, -30].map(sinDegrees)).toEqual([0, 0.5, 1, 0.5, 0, -1, -0.5])
  expect(sinDegrees(120)).toBe(Math.sqrt(3) / 2)
})

describe('fractions', () => {
  const coordinate = fc.double({ min: -3, max: 3, noNaN: true })
  const vector = fc.tuple(coordinate, coordinate, coordinate)
  test('there and back', () => {
    fc.assert(
      fc.property(fc.integer(), fc.constantFrom(...BRAVAIS_TYPES), vector, (seed, type, x) => {
        const l = randomLattice(type, seeded(seed))
        const close = (u: Vec3, v: Vec3) => {
          u.forEach((y, i) => {
            expect(y).toBeCloseTo(v[i], 10)
          })
        }
        close(fractionFromPosition(positionFromFraction(x, l.primitive), l.reciprocal), x)
        close(fractionFromK(kFromFraction(x, l.reciprocal), l.primitive), x)
        // The same place in space, from either cell.
        close(
          positionFromFraction(atomToPrimitive(x, l), l.primitive),
          positionFromFraction(x, l.conventional),
        )
        close(atomToConventional(atomToPrimitive(x, l), l), x)
        close(kFromFraction(kToPrimitive(x, l), l.reciprocal), kFromFraction(x, l.conventionalReciprocal))
        close(kToConventional(kToPrimitive(x, l), l), x)
      }),
    )
  })

  test('X of the face-centred cube', () => {
    // X is (0, 0, 2π/a): 0 0 1 of the cube, ½ ½ 0 of the primitive cell (W. Setyawan and S. Curtarolo 2010, up to a
    // permutation of the axes).
    const l = fromCell('cF', { a: 4 })
    expect(kToPrimitive([0, 0, 1], l)).toEqual([0.5, 0.5, 0])
    expect(kFromFraction([0.5, 0.5, 0], l.reciprocal)).toEqual([0, 0, TWO_PI / 4])
  })
})

test('every Bravais type says what it is', () => {
  for (const type of BRAVAIS_TYPES) {
    const { dimension, words, centring } = BRAVAIS[type]
    expect(dimension).toBe(type[1] === type[1].toUpperCase() ? 3 : 2)
    expect(words).not.toBe('')
    if (dimension === 3) expect(centring).toBe(type[1])
  }
  expect(new Set(BRAVAIS_TYPES.map(t => BRAVAIS[t].words)).size).toBe(BRAVAIS_TYPES.length)
})

test('a left-handed set stays left-handed', () => {
  const rows: Mat3 = [
    [0, 1, 0],
    [1, 0, 0],
    [0, 0, 1],
  ]
  const l = lattice(latticeFromVectors(rows))
  expect(l.handedness).toBe(-1)
  expect(l.primitive).toEqual(rows)
  expect(l.volume).toBe(1)
})
