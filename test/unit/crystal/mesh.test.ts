import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import {
  countOrbits,
  divisionsForSpacing,
  isSymmetricMesh,
  keptRotations,
  type Mesh,
  meshOrbits,
  meshPoints,
  symmetricDivisions,
  symmetricShifts,
} from '../../../server/src/crystal/mesh.ts'
import {
  apply,
  inverse,
  type Mat3,
  mapMatrix,
  multiply,
  type Vec3,
} from '../../../server/src/crystal/vector.ts'
import known from '../../reference/special-sets.json' with { type: 'json' }

/** Primitive vectors of the cubic lattices, a = 1, and of a hexagonal one. */
const PRIMITIVE: Record<string, Mat3> = {
  sc: [
    [1, 0, 0],
    [0, 1, 0],
    [0, 0, 1],
  ],
  fcc: [
    [0, 0.5, 0.5],
    [0.5, 0, 0.5],
    [0.5, 0.5, 0],
  ],
  bcc: [
    [-0.5, 0.5, 0.5],
    [0.5, -0.5, 0.5],
    [0.5, 0.5, -0.5],
  ],
  hexagonal: [
    [1, 0, 0],
    [-0.5, Math.sqrt(0.75), 0],
    [0, 0, 1.6],
  ],
}

/** All products of some Cartesian rotations. */
function generated(generators: readonly Mat3[]): Mat3[] {
  const group: Mat3[] = [mapMatrix(generators[0], x => x)]
  const key = (m: Mat3) =>
    m
      .flat()
      .map(x => Math.round(x * 1e6))
      .join()
  const seen = new Set(group.map(key))
  for (let i = 0; i < group.length; i++)
    for (const g of generators) {
      const product = multiply(group[i], g)
      if (!seen.has(key(product))) {
        seen.add(key(product))
        group.push(product)
      }
    }
  return group
}

const FOURFOLD: Mat3 = [
  [0, -1, 0],
  [1, 0, 0],
  [0, 0, 1],
]
const THREEFOLD: Mat3 = [
  [0, 0, 1],
  [1, 0, 0],
  [0, 1, 0],
]
const INVERSION: Mat3 = [
  [-1, 0, 0],
  [0, -1, 0],
  [0, 0, -1],
]
const SIXFOLD: Mat3 = [
  [0.5, -Math.sqrt(0.75), 0],
  [Math.sqrt(0.75), 0.5, 0],
  [0, 0, 1],
]
const MIRROR: Mat3 = [
  [-1, 0, 0],
  [0, 1, 0],
  [0, 0, 1],
]
const CUBIC = generated([FOURFOLD, THREEFOLD, INVERSION])
const HEXAGONAL = generated([SIXFOLD, MIRROR, INVERSION])

/** Cartesian rotations as matrices on columns of fractions of the reciprocal vectors: k = Bᵀκ. */
function onFractions(group: readonly Mat3[], primitive: Mat3): Mat3[] {
  const columns = inverse(primitive) // Bᵀ without 2π: one reciprocal vector a column.
  return group.map(rotation => mapMatrix(multiply(inverse(columns), multiply(rotation, columns)), Math.round))
}
const GROUPS: Record<string, Mat3[]> = Object.fromEntries(
  Object.entries(PRIMITIVE).map(([name, rows]) => [
    name,
    onFractions(name === 'hexagonal' ? HEXAGONAL : CUBIC, rows),
  ]),
)
const even = (q: number, shift: Vec3 = [0, 0, 0]): Mesh => ({ divisions: [q, q, q], shift })
/** Monkhorst–Pack: (2r − q − 1)/2q is a mesh through Γ for odd q and half a step off it for even q. */
const monkhorstPack = (q: number): Mesh => even(q, q % 2 ? [0, 0, 0] : [0.5, 0.5, 0.5])

test('the groups of the tests have 48 and 24 elements', () => {
  expect(CUBIC).toHaveLength(48)
  expect(HEXAGONAL).toHaveLength(24)
})

// Published check values: see the source in the file.
describe.each(Object.keys(PRIMITIVE))('%s', lattice => {
  const group = GROUPS[lattice]
  const table = known as unknown as Record<string, Record<string, (number | boolean)[]>>

  test.each(table.gammaCentredIrreducible[lattice].map((count, i) => [i + 1, count]))(
    'through Γ, %i divisions have %i irreducible points',
    (q, count) => {
      expect(isSymmetricMesh(even(q as number), group)).toBe(true)
      expect(countOrbits(even(q as number), group)).toBe(count)
      expect(meshOrbits(even(q as number), group)!.sizes).toHaveLength(count as number)
    },
  )

  test.each(table.stars[lattice].map((stars, i) => [i + 1, stars, table.invariant[lattice][i]]))(
    'the Monkhorst–Pack mesh of %i divisions touches %i stars, and is symmetric: %s',
    (q, stars, invariant) => {
      const mesh = monkhorstPack(q as number)
      expect(isSymmetricMesh(mesh, group)).toBe(invariant)
      // The stars of a mesh that the rotations map onto itself are its orbits; of another they merge some.
      if (invariant) expect(countOrbits(mesh, group)).toBe(stars)
      else expect(countOrbits(mesh, group)).toBeGreaterThanOrEqual(stars as number)
    },
  )
})

// D. J. Chadi and M. L. Cohen, Phys. Rev. B 8, 5747 (1973): one and four points of the simple cubic lattice.
test('special points of the simple cubic lattice and their weights', () => {
  expect([...meshOrbits(monkhorstPack(2), GROUPS.sc)!.sizes]).toEqual([8])
  const four = meshOrbits(monkhorstPack(4), GROUPS.sc)!
  expect([...four.sizes].sort((a, b) => a - b).map(n => n / 64)).toEqual([1 / 8, 1 / 8, 3 / 8, 3 / 8])
})

// Half-step shifts that keep every rotation with equal divisions (worked out by hand from R′s − s).
test.each([
  ['fcc', [0.5, 0.5, 0.5], false],
  ['fcc', [0.5, 0, 0], false],
  ['bcc', [0.5, 0.5, 0.5], true],
  ['bcc', [0.5, 0, 0], false],
  ['sc', [0.5, 0.5, 0.5], true],
  ['sc', [0, 0, 0.5], false],
  ['hexagonal', [0, 0, 0.5], true],
  ['hexagonal', [0.5, 0, 0], false],
  ['hexagonal', [0.5, 0.5, 0], false],
] as [string, Vec3, boolean][])('%s with shift %j: symmetric is %s', (lattice, shift, symmetric) => {
  expect(isSymmetricMesh(even(6, shift), GROUPS[lattice])).toBe(symmetric)
})

test('unequal divisions along equivalent vectors keep the rotations that do not mix them', () => {
  // The group of the cube that maps (x, y, z) onto itself up to signs has 8 elements; with x and y equal, 16.
  expect(keptRotations({ divisions: [2, 3, 5], shift: [0, 0, 0] }, GROUPS.sc)).toHaveLength(8)
  expect(keptRotations({ divisions: [4, 4, 5], shift: [0, 0, 0] }, GROUPS.sc)).toHaveLength(16)
})

const lattices = fc.constantFrom(...Object.keys(PRIMITIVE))
const divisions = fc.tuple(
  fc.integer({ min: 1, max: 9 }),
  fc.integer({ min: 1, max: 9 }),
  fc.integer({ min: 1, max: 9 }),
)
const shifts = fc.tuple(...[0, 1, 2].map(() => fc.constantFrom(0, 1 / 2, 1 / 3, 1 / 4))) as fc.Arbitrary<
  [number, number, number]
>
/** Another primitive basis of the same lattice: a product of shears. */
const skews = fc.array(fc.tuple(fc.constantFrom(0, 1, 2), fc.constantFrom(1, 2), fc.constantFrom(-1, 1)), {
  maxLength: 3,
})

/** The group in the reciprocal basis that goes with a sheared primitive basis. */
function sheared(lattice: string, steps: readonly (readonly [number, number, number])[]): Mat3[] {
  const rows = PRIMITIVE[lattice].map(row => [...row])
  for (const [i, by, sign] of steps) for (let j = 0; j < 3; j++) rows[i][j] += sign * rows[(i + by) % 3][j]
  return onFractions(lattice === 'hexagonal' ? HEXAGONAL : CUBIC, rows as unknown as Mat3)
}

test('counting and listing agree, the orbits fill the mesh, and each lists one of its own points', () => {
  fc.assert(
    fc.property(lattices, skews, divisions, shifts, (lattice, steps, divisions, shift) => {
      const group = sheared(lattice, steps)
      const mesh = { divisions, shift }
      const { points, sizes } = meshOrbits(mesh, group)!
      expect(countOrbits(mesh, group)).toBe(sizes.length)
      expect(sizes.reduce((a, b) => a + b, 0)).toBe(meshPoints(mesh))
      expect(points).toHaveLength(3 * sizes.length)
    }),
    { numRuns: 300 },
  )
})

test('points of one orbit are images of each other, by plain arithmetic on fractions', () => {
  fc.assert(
    fc.property(lattices, divisions, shifts, (lattice, divisions, shift) => {
      const mesh = { divisions, shift }
      const kept = keptRotations(mesh, GROUPS[lattice])
      const { points, sizes } = meshOrbits(mesh, GROUPS[lattice])!
      const mod1 = (x: number) => Math.round((((x % 1) + 1) % 1) * 1e8) % 1e8
      sizes.forEach((size, i) => {
        const k = [0, 1, 2].map(j => (points[3 * i + j] + shift[j]) / divisions[j]) as unknown as Vec3
        const star = new Set(kept.map(rotation => apply(rotation, k).map(mod1).join()))
        expect(star.size).toBe(size)
      })
    }),
    { numRuns: 60 },
  )
})

test('a mesh too large to list is still counted', () => {
  const mesh = even(1200)
  expect(meshOrbits(mesh, GROUPS.sc)).toBeUndefined()
  // With even q through Γ the irreducible points of the simple cubic lattice are the 0 ≤ l ≤ m ≤ n ≤ q/2.
  expect(countOrbits(mesh, GROUPS.sc)).toBe((601 * 602 * 603) / 6)
  expect(countOrbits(even(2 ** 27), GROUPS.sc)).toBeUndefined()
})

describe('divisions for a spacing', () => {
  test('are the least that keep the spacing', () => {
    // |bᵢ| = 2π for a = 1: 2π/0.5 = 12.57.
    const reciprocal = mapMatrix(PRIMITIVE.sc, x => 2 * Math.PI * x)
    expect(divisionsForSpacing(reciprocal, 3, 0.5, GROUPS.sc)).toEqual([13, 13, 13])
    expect(
      divisionsForSpacing(
        reciprocal,
        2,
        0.5,
        GROUPS.sc.filter(m => m[2][2] !== 0),
      ),
    ).toEqual([13, 13, 1])
  })

  test('a whole number of spacings is not raised by rounding', () => {
    const b = 0.1 + 0.2
    const reciprocal: Mat3 = [
      [b, 0, 0],
      [0, b, 0],
      [0, 0, b],
    ]
    expect(divisionsForSpacing(reciprocal, 3, 0.1, GROUPS.sc)).toEqual([3, 3, 3])
  })

  test.each([
    ['sc', [4, 5, 6], [6, 6, 6]],
    ['hexagonal', [7, 8, 3], [8, 8, 3]],
    ['hexagonal', [8, 8, 5], [8, 8, 5]],
  ] as [string, Vec3, Vec3][])('%s: %j is raised to %j', (lattice, least, raised) => {
    expect(symmetricDivisions(least, GROUPS[lattice])).toEqual(raised)
  })

  test('an oblique axis that repeats with another ties the two one way only', () => {
    // Two-fold rotation along b₃ in a basis with b₁ → −b₁ + b₃: N₁ must divide N₃ (by hand).
    const twofold: Mat3 = [
      [-1, 0, 0],
      [0, -1, 0],
      [1, 0, 1],
    ]
    const group: Mat3[] = [
      [
        [1, 0, 0],
        [0, 1, 0],
        [0, 0, 1],
      ],
      twofold,
    ]
    expect(symmetricDivisions([5, 4, 38], group)).toEqual([5, 4, 40])
    expect(symmetricDivisions([5, 4, 40], group)).toEqual([5, 4, 40])
  })

  test('are symmetric, no smaller than asked, and no larger than the equal ones', () => {
    fc.assert(
      fc.property(lattices, skews, divisions, (lattice, steps, least) => {
        const group = sheared(lattice, steps)
        const raised = symmetricDivisions(least, group)
        expect(isSymmetricMesh({ divisions: raised, shift: [0, 0, 0] }, group)).toBe(true)
        raised.forEach((n, i) => {
          expect(n).toBeGreaterThanOrEqual(least[i])
        })
        expect(meshPoints({ divisions: raised, shift: [0, 0, 0] })).toBeLessThanOrEqual(
          Math.max(...least) ** 3,
        )
      }),
    )
  })
})

describe('shifts near a given one that keep every rotation', () => {
  test.each([
    ['fcc', [0.5, 0.5, 0.5], [0, 0, 0]],
    ['bcc', [0.5, 0.5, 0], [0.5, 0.5, 0.5]],
    ['bcc', [0.5, 0, 0], [0, 0, 0]],
    ['hexagonal', [0.5, 0.5, 0.5], [0, 0, 0.5]],
    ['sc', [1.5, 0.5, 0.5], [1.5, 0.5, 0.5]],
  ] as [string, Vec3, Vec3][])('%s: %j gives %j', (lattice, shift, nearest) => {
    expect(symmetricShifts(even(6, shift), GROUPS[lattice])[0]).toEqual(nearest)
  })
  test('none where the divisions break the symmetry', () => {
    expect(symmetricShifts({ divisions: [4, 4, 5], shift: [0, 0, 0] }, GROUPS.sc)).toEqual([])
  })
  test('all are symmetric, from the nearest to the farthest', () => {
    fc.assert(
      fc.property(lattices, divisions, shifts, (lattice, [n], shift) => {
        const apart = (other: Vec3) =>
          other.reduce((sum, s, i) => sum + Math.abs(s - shift[i] - Math.round(s - shift[i])), 0)
        const found = symmetricShifts(even(n, shift), GROUPS[lattice])
        found.forEach((other, i) => {
          expect(isSymmetricMesh(even(n, other), GROUPS[lattice])).toBe(true)
          if (i > 0) expect(apart(other)).toBeGreaterThanOrEqual(apart(found[i - 1]) - 1e-12)
        })
        expect(found.length).toBeGreaterThan(0)
      }),
      { numRuns: 40 },
    )
  })
})
