import { describe, expect, test } from 'vitest'
import { type AtomicCell, findPrimitiveCell, PositionGrid } from '../../../server/src/crystal/translations.ts'
import {
  add,
  combine,
  determinant,
  IDENTITY,
  inverse,
  type Mat3,
  multiply,
  norm,
  scale,
  subtract,
  type Vec3,
} from '../../../server/src/crystal/vector.ts'
import { between, randomLattice, seeded, unimodular, wholeBetween } from './zone-lattices.ts'

const TOLERANCE = 1e-3

/** Atoms of a primitive cell repeated over a supercell, in an order of their own, each moved by up to `noise` along each axis. */
function supercell(cell: AtomicCell, matrix: Mat3, random: () => number, noise = 0): AtomicCell {
  const toLarge = inverse(matrix)
  const basis = multiply(matrix, cell.basis)
  const toFractions = inverse(basis)
  const atoms: { x: Vec3; kind: number; order: number }[] = []
  for (const point of pointsOf(matrix, cell.dimension))
    cell.positions.forEach((x, i) => {
      const moved: Vec3 = [
        between(random, -noise, noise),
        between(random, -noise, noise),
        between(random, -noise, noise),
      ]
      const place = add(combine(add(x, point), toLarge), combine(moved, toFractions))
      atoms.push({ x: place, kind: cell.species[i], order: random() })
    })
  atoms.sort((p, q) => p.order - q.order)
  return {
    dimension: cell.dimension,
    basis,
    positions: atoms.map(({ x }) => x),
    species: atoms.map(({ kind }) => kind),
  }
}

/** The whole vectors modulo the rows of a whole matrix, by trying all in a box around the cell. */
function pointsOf(matrix: Mat3, dimension: number): Vec3[] {
  const back = inverse(matrix)
  const reach = Math.max(...matrix.flat().map(Math.abs)) * dimension
  const range = Array.from({ length: 2 * reach + 1 }, (_, i) => i - reach)
  const points = range.flatMap(i =>
    (dimension > 1 ? range : [0]).flatMap(j => (dimension > 2 ? range : [0]).map((k): Vec3 => [i, j, k])),
  )
  const inside = points.filter(p =>
    combine(p, back).every((x, i) => i >= dimension || (x > -1e-9 && x < 1 - 1e-9)),
  )
  expect(inside).toHaveLength(Math.abs(determinant(matrix)))
  return inside
}

function randomMatrix(random: () => number, dimension: number, most: number): Mat3 {
  for (;;) {
    const matrix = IDENTITY.map((row, i) =>
      row.map((x, j) => (i < dimension && j < dimension ? wholeBetween(random, -2, 2) : x)),
    ) as unknown as Mat3
    const size = Math.abs(determinant(matrix))
    if (size >= 1 && size <= most) return matrix
  }
}

/** Atoms on general positions, of kinds that repeat, so that nothing but the lattice repeats them. */
function randomCell(random: () => number, dimension: 1 | 2 | 3): AtomicCell {
  const basis: Mat3 =
    dimension === 1
      ? [
          [between(random, 3, 6), 0, 0],
          [0, 1, 0],
          [0, 0, 1],
        ]
      : randomLattice(dimension === 2 ? 'mp' : 'aP', random).primitive
  const count = wholeBetween(random, 1, 5)
  const positions = Array.from(
    { length: count },
    (_, i): Vec3 => [
      (i + between(random, 0.1, 0.9)) / count,
      dimension > 1 ? random() : between(random, -2, 2),
      dimension > 2 ? random() : between(random, -2, 2),
    ],
  )
  return { dimension, basis, positions, species: positions.map(() => wholeBetween(random, 1, 2)) }
}

describe.each([1, 2, 3] as const)('random supercells in %d dimensions', dimension => {
  const random = seeded(dimension)
  const cases = Array.from({ length: 40 }, () => {
    const cell = randomCell(random, dimension)
    const matrix = randomMatrix(random, dimension, 12)
    return { cell, matrix, large: supercell(cell, matrix, random, 0.2 * TOLERANCE) }
  })

  test('the fold, the primitive lattice and its atoms come back', () => {
    for (const { cell, matrix, large } of cases) {
      const found = findPrimitiveCell(large, TOLERANCE)
      expect(found.fold).toBe(Math.abs(determinant(matrix)))
      // The two bases span one lattice.
      const change = multiply(found.basis, inverse(cell.basis))
      change.flat().forEach(x => {
        expect(x).toBeCloseTo(Math.round(x), 9)
      })
      expect(Math.abs(determinant(change))).toBeCloseTo(1, 9)
      expect(found.positions).toHaveLength(cell.positions.length)
      expect([...found.species].sort()).toEqual([...cell.species].sort())
      expect(determinant(found.basis) * determinant(large.basis)).toBeGreaterThan(0)
    }
  })

  test('each stated atom is the primitive atom that it is said to be, within the tolerance', () => {
    for (const { large } of cases) {
      const found = findPrimitiveCell(large, TOLERANCE)
      const toPrimitive = inverse(found.primitiveFromStated)
      large.positions.forEach((x, i) => {
        const atom = found.atomOf[i]
        expect(found.species[atom]).toBe(large.species[i])
        const d = subtract(combine(x, toPrimitive), found.positions[atom])
        const rest = d.map((c, axis) => (axis < dimension ? c - Math.round(c) : c)) as unknown as Vec3
        expect(norm(combine(rest, found.basis))).toBeLessThanOrEqual(TOLERANCE)
      })
    }
  })

  test('the translations are a group of that order, zero first, in [0, 1), none along a normal', () => {
    for (const { large } of cases) {
      const { translations, fold, primitiveFromStated } = findPrimitiveCell(large, TOLERANCE)
      const name = (t: Vec3) =>
        t.map((x, i) => (i < dimension ? ((Math.round(x * fold) % fold) + fold) % fold : x)).join()
      const known = new Set(translations.map(name))
      expect(translations[0]).toEqual([0, 0, 0])
      expect(known.size).toBe(fold)
      for (const t of translations) {
        expect(t.every((x, i) => (i < dimension ? x >= 0 && x < 1 : x === 0))).toBe(true)
        expect(translations.every(s => known.has(name(add(s, t))))).toBe(true)
      }
      for (const x of primitiveFromStated.flat()) expect(x * fold).toBeCloseTo(Math.round(x * fold), 9)
    }
  })
})

describe('no translation', () => {
  const cubic: Mat3 = [
    [4, 0, 0],
    [0, 4, 0],
    [0, 0, 4],
  ]
  const cell = (
    positions: Vec3[],
    species: number[],
    dimension: 1 | 2 | 3 = 3,
    basis = cubic,
  ): AtomicCell => ({
    dimension,
    basis,
    positions,
    species,
  })
  const body: Vec3[] = [
    [0, 0, 0],
    [0.5, 0.5, 0.5],
  ]

  test.each<[string, AtomicCell]>([
    ['between unlike atoms', cell(body, [1, 2])],
    [
      'that fits all atoms but one',
      cell(
        [...body, [0.25, 0.25, 0.25], [0.7501, 0.75, 0.75]].map(x => x as Vec3),
        [1, 1, 2, 2],
      ),
    ],
    [
      'along the normal of a sheet',
      cell(
        [
          [0, 0, 0],
          [0, 0, 2],
        ],
        [1, 1],
        2,
        [cubic[0], cubic[1], [0, 0, 1]],
      ),
    ],
    [
      'across a chain',
      cell(
        [
          [0, 0, 0],
          [0, 1, 0],
        ],
        [1, 1],
        1,
        [cubic[0], [0, 1, 0], [0, 0, 1]],
      ),
    ],
    [
      'in a sheet whose atoms differ in height',
      cell(
        [
          [0, 0, 0],
          [0.5, 0.5, 0.01],
        ],
        [1, 1],
        2,
        [cubic[0], cubic[1], [0, 0, 1]],
      ),
    ],
  ])('%s', (_, atoms) => {
    const found = findPrimitiveCell(atoms, 1e-4)
    expect(found).toMatchObject({ fold: 1, translations: [[0, 0, 0]], primitiveFromStated: IDENTITY })
    expect(found.basis).toBe(atoms.basis)
    expect(found.positions).toBe(atoms.positions)
  })

  test('counts beyond the tolerance, a length', () => {
    const moved = cell([body[0], [0.5, 0.5, 0.5 + 0.001]], [1, 1])
    // 0.001 of 4 Å is 4 mÅ.
    expect(findPrimitiveCell(moved, 3e-3).fold).toBe(1)
    expect(findPrimitiveCell(moved, 1e-2).fold).toBe(2)
  })
})

test('what passes step by step but not on the whole is not taken, and the tolerance is lowered', () => {
  // Each quarter is 0.9 of the tolerance longer than the one before: the last misses the first by far.
  const step = 0.9 * TOLERANCE
  const places = [0, 2.5, 5 + step, 7.5 + 2 * step].map((x): Vec3 => [x / 10, 0, 0])
  const basis: Mat3 = [
    [10, 0, 0],
    [0, 1, 0],
    [0, 0, 1],
  ]
  const found = findPrimitiveCell(
    { dimension: 1, basis, positions: places, species: [1, 1, 1, 1] },
    TOLERANCE,
  )
  expect(found.fold).toBe(1)
})

test('a very skewed cell of many atoms', () => {
  const random = seeded(17)
  const cell = randomCell(random, 3)
  const large = supercell(
    cell,
    [
      [6, 0, 0],
      [0, 5, 0],
      [0, 1, 4],
    ],
    random,
  )
  const change = unimodular(random, 3, 30)
  const back = inverse(change)
  const skewed = {
    ...large,
    basis: multiply(change, large.basis),
    positions: large.positions.map(x => combine(x, back)),
  }
  expect(findPrimitiveCell(skewed, TOLERANCE).fold).toBe(120)
})

test('four thousand atoms', () => {
  const n = 16
  const positions = Array.from(
    { length: n ** 3 },
    (_, i): Vec3 => scale([Math.floor(i / n ** 2), Math.floor(i / n) % n, i % n], 1 / n),
  )
  const basis: Mat3 = [
    [48, 0, 0],
    [0, 48, 0],
    [0, 0, 48],
  ]
  expect(
    findPrimitiveCell({ dimension: 3, basis, positions, species: positions.map(() => 1) }, TOLERANCE).fold,
  ).toBe(n ** 3)
})

test('the grid finds the same nearest atom as a search through all', () => {
  const random = seeded(23)
  for (let i = 0; i < 30; i++) {
    const { primitive: basis } = randomLattice('aP', random, 1.5)
    const positions = Array.from(
      { length: 60 },
      (): Vec3 => [between(random, -2, 2), between(random, -2, 2), between(random, -2, 2)],
    )
    const cell: AtomicCell = { dimension: 3, basis, positions, species: positions.map((_, j) => j % 3) }
    const reach = between(random, 0.1, 0.9)
    const grid = new PositionGrid(cell, reach)
    for (let j = 0; j < 30; j++) {
      const x: Vec3 = [between(random, -2, 2), between(random, -2, 2), between(random, -2, 2)]
      const kind = j % 2 ? j % 3 : undefined
      const away = positions.map((y, atom) => {
        if (kind !== undefined && atom % 3 !== kind) return Number.POSITIVE_INFINITY
        const d = subtract(y, x)
        return norm(combine(d.map(c => c - Math.round(c)) as unknown as Vec3, basis))
      })
      const least = Math.min(...away)
      expect(grid.nearest(x, kind)).toBe(least <= reach ? away.indexOf(least) : -1)
    }
  }
})
