import fc from 'fast-check'
import { beforeAll, describe, expect, test } from 'vitest'
import type { BravaisType } from '../../../server/src/crystal/bravais.ts'
import { kRotations } from '../../../server/src/crystal/kspace.ts'
import {
  findSymmetry,
  groupOnLattice,
  latticeType,
  namedSpaceGroup,
  spaceGroupSymbols,
  type Symmetry,
  type SymmetryInput,
} from '../../../server/src/crystal/symmetry.ts'
import {
  analyseCell,
  analyseUnchecked,
  libraryUse,
  loadSymmetryLibrary,
} from '../../../server/src/crystal/symmetry-library.ts'
import {
  add,
  combine,
  determinant,
  inverse,
  type Mat3,
  multiply,
  scale,
  type Vec3,
} from '../../../server/src/crystal/vector.ts'
import { loadSymmetryFromDisk } from '../../../server/src/symmetry-node.ts'
import { between, fromCell, randomLattice, seeded, wholeBetween } from './zone-lattices.ts'

beforeAll(loadSymmetryFromDisk)

const TOLERANCE = 1e-3
const CUBIC: Mat3 = [
  [4, 0, 0],
  [0, 4, 0],
  [0, 0, 4],
]

function found(input: Partial<SymmetryInput>): Symmetry {
  const symmetry = findSymmetry({
    dimension: 3,
    primitive: CUBIC,
    positions: [],
    species: [],
    tolerance: TOLERANCE,
    ...input,
  })
  if ('failed' in symmetry) throw new Error(symmetry.failed)
  return symmetry
}

const thirds: Vec3 = [1 / 3, 2 / 3, 0]
const otherThirds: Vec3 = [2 / 3, 1 / 3, 0]
const sheet = (a: number): Mat3 => fromCell('hp', { a }).primitive

describe('a crystal’s symmetry', () => {
  test('of rutile: sites, orbits and standard cell (International Tables, P4₂/mnm: 2a m.mm, 4f m.2m; from memory)', () => {
    const u = 0.3053
    const symmetry = found({
      primitive: fromCell('tP', { a: 4.5937, c: 2.9587 }).primitive,
      positions: [
        [0, 0, 0],
        [0.5, 0.5, 0.5],
        [u, u, 0],
        [-u, -u, 0],
        [0.5 + u, 0.5 - u, 0.5],
        [0.5 - u, 0.5 + u, 0.5],
      ],
      species: [22, 22, 8, 8, 8, 8],
    })
    expect(symmetry).toMatchObject({
      spaceGroup: { number: 136, symbol: 'P4_2/mnm' },
      pointGroup: '4/mmm',
      bravais: 'tP',
      latticeBravais: 'tP',
      siteSymmetry: ['m.mm', 'm.mm', 'm.2m', 'm.2m', 'm.2m', 'm.2m'],
      siteOrder: [8, 8, 4, 4, 4, 4],
      equivalentAtoms: [0, 0, 2, 2, 2, 2],
      wyckoffLetters: ['a', 'a', 'f', 'f', 'f', 'f'],
      toleranceUsed: TOLERANCE,
      toleranceLowered: false,
    })
    expect(symmetry.operations).toHaveLength(16)
    expect(symmetry.operations[0]).toEqual({
      rotation: [
        [1, 0, 0],
        [0, 1, 0],
        [0, 0, 1],
      ],
      translation: [0, 0, 0],
    })
  })

  test('of a lattice more symmetric than its atoms: both types are told', () => {
    // A cubic box with two atoms along z: tetragonal by its atoms.
    const symmetry = found({
      positions: [
        [0, 0, 0],
        [0, 0, 0.4],
      ],
      species: [1, 2],
    })
    expect(symmetry).toMatchObject({ pointGroup: '4mm', bravais: 'tP', latticeBravais: 'cP' })
    expect(symmetry.rotations).toHaveLength(8)
    expect(symmetry.holohedry).toHaveLength(48)
  })

  test('of no atoms is the lattice’s own', () => {
    const symmetry = found({ primitive: fromCell('cI', { a: 3 }).primitive })
    expect(symmetry).toMatchObject({
      spaceGroup: { number: 229 },
      bravais: 'cI',
      siteSymmetry: ['m-3m'],
      siteOrder: [48],
    })
  })

  test('translations of operations are exact fractions though positions are rounded', () => {
    // hcp, four digits.
    const symmetry = found({
      primitive: fromCell('hP', { a: 3.2094, c: 5.2105 }).primitive,
      positions: [
        [0.3333, 0.6667, 0.25],
        [0.6667, 0.3333, 0.75],
      ],
      species: [12, 12],
    })
    expect(symmetry.spaceGroup?.number).toBe(194)
    for (const { translation } of symmetry.operations)
      for (const x of translation) expect(x * 24).toBeCloseTo(Math.round(x * 24), 12)
  })

  test('is plain data: it can be posted between threads', () => {
    const symmetry = found({})
    expect(structuredClone(symmetry)).toEqual(symmetry)
  })
})

describe('a stated cell that is not primitive', () => {
  const a = 5.64
  const conventional: Mat3 = [
    [a, 0, 0],
    [0, a, 0],
    [0, 0, a],
  ]
  const faces: Vec3[] = [
    [0, 0, 0],
    [0, 0.5, 0.5],
    [0.5, 0, 0.5],
    [0.5, 0.5, 0],
  ]
  const rockSalt = {
    primitive: conventional,
    positions: faces.flatMap((x): Vec3[] => [x, add(x, [0.5, 0.5, 0.5])]),
    species: faces.flatMap(() => [11, 17]),
  }

  test('keeps all rotations that its own lattice allows', () => {
    const symmetry = found(rockSalt)
    expect(symmetry).toMatchObject({
      spaceGroup: { number: 225 },
      translationsFold: 4,
      rotationsLost: 0,
      bravais: 'cF',
    })
    expect(symmetry.rotations).toHaveLength(48)
    expect(symmetry.translations).toHaveLength(4)
    expect(symmetry.primitivePositions).toHaveLength(2)
    expect(symmetry.equivalentAtoms).toEqual([0, 1, 0, 1, 0, 1, 0, 1])
    expect(symmetry.siteOrder).toEqual(Array(8).fill(48))
  })

  test('and loses those that it does not: doubled along z, a third is left', () => {
    const symmetry = found({
      primitive: [conventional[0], conventional[1], scale(conventional[2], 2)],
      positions: [0, 0.5].flatMap(z => rockSalt.positions.map((x): Vec3 => [x[0], x[1], x[2] / 2 + z])),
      species: [...rockSalt.species, ...rockSalt.species],
    })
    expect(symmetry).toMatchObject({ translationsFold: 8, rotationsLost: 32 })
    expect(symmetry.rotations).toHaveLength(16)
    expect(symmetry.operations).toHaveLength(48)
  })

  test('of a thousand atoms costs the library two', () => {
    const n = 10
    const sites = Array.from(
      { length: n ** 3 },
      (_, i): Vec3 => [Math.floor(i / n ** 2), Math.floor(i / n) % n, i % n],
    )
    libraryUse.calls = 0
    libraryUse.mostAtoms = 0
    const symmetry = found({
      primitive: conventional.map(row => scale(row, n / 2)) as unknown as Mat3,
      positions: sites.map(x => scale(x, 1 / n)),
      species: sites.map(([i, j, k]) => (i + j + k) % 2),
    })
    expect(symmetry).toMatchObject({ spaceGroup: { number: 225 }, translationsFold: 500 })
    expect(libraryUse).toEqual({ calls: 1, mostAtoms: 2 })
  })
})

describe('sheets', () => {
  const graphene = { dimension: 2 as const, primitive: sheet(2.46), positions: [thirds, otherThirds] }
  const kGroup = (symmetry: Symmetry, timeReversal: boolean) =>
    kRotations(symmetry.rotations, timeReversal, 2)

  test('graphene: 6/mmm, twelve matrices in the plane; a mirror in the plane counts once (common practice)', () => {
    const symmetry = found({ ...graphene, species: [6, 6] })
    expect(symmetry).toMatchObject({
      pointGroup: '6/mmm',
      bravais: 'hp',
      siteSymmetry: ['-6m2', '-6m2'],
      siteOrder: [12, 12],
    })
    expect(symmetry.spaceGroup).toBeUndefined()
    expect(symmetry.standard).toBeUndefined()
    expect(kGroup(symmetry, false)).toHaveLength(12)
  })

  test('a sheet of boron nitride: six matrices, twelve with time reversal (common practice)', () => {
    const symmetry = found({ ...graphene, species: [5, 7] })
    expect(symmetry).toMatchObject({ pointGroup: '-6m2', bravais: 'hp' })
    expect(kGroup(symmetry, false)).toHaveLength(6)
    expect(kGroup(symmetry, true)).toHaveLength(12)
  })

  test('a sheet of molybdenum disulphide is three atoms thick: 6̄m2 too', () => {
    const positions: Vec3[] = [thirds, [2 / 3, 1 / 3, 1.56], [2 / 3, 1 / 3, -1.56]]
    expect(found({ dimension: 2, primitive: sheet(3.16), positions, species: [42, 16, 16] }).pointGroup).toBe(
      '-6m2',
    )
  })

  test('a buckled sheet has 3̄m, and in the plane twelve matrices all the same', () => {
    const symmetry = found({
      ...graphene,
      positions: [[...thirds.slice(0, 2), 0.23], otherThirds] as Vec3[],
      species: [14, 14],
    })
    expect(symmetry.pointGroup).toBe('-3m')
    expect(kGroup(symmetry, false)).toHaveLength(12)
  })

  test.each([
    ['tp', { a: 3 }, '4/mmm', 8],
    ['op', { a: 3, b: 4 }, 'mmm', 4],
    ['oc', { a: 3, b: 4 }, 'mmm', 4],
    ['hp', { a: 3 }, '6/mmm', 12],
    ['mp', { a: 3, b: 4, gamma: 100 }, '2/m', 2],
  ] as const)('the plane lattice %s alone', (type, cell, pointGroup, order) => {
    const symmetry = found({ dimension: 2, primitive: fromCell(type, cell).primitive })
    expect(symmetry).toMatchObject({ pointGroup, bravais: type, latticeBravais: type })
    expect(kGroup(symmetry, true)).toHaveLength(order)
  })

  test('an atom on top lowers the plane’s type: a square net with a mirror left is rectangular', () => {
    const positions: Vec3[] = [
      [0, 0, 0],
      [0.2, 0, 1],
    ]
    const along = found({
      dimension: 2,
      primitive: fromCell('tp', { a: 3 }).primitive,
      positions,
      species: [1, 2],
    })
    expect(along).toMatchObject({ pointGroup: 'm', bravais: 'op', latticeBravais: 'tp' })
    const diagonal: Vec3[] = [
      [0, 0, 0],
      [0.2, 0.2, 1],
    ]
    const across = found({
      dimension: 2,
      primitive: fromCell('tp', { a: 3 }).primitive,
      positions: diagonal,
      species: [1, 2],
    })
    expect(across).toMatchObject({ pointGroup: 'm', bravais: 'oc' })
  })

  test('two like layers one above the other are no translation, and no height makes a sheet cubic', () => {
    const square = fromCell('tp', { a: 3 }).primitive
    for (const z of [1, 1.5, 3, 6, 30]) {
      const symmetry = found({
        dimension: 2,
        primitive: square,
        positions: [
          [0, 0, 0],
          [0, 0, z],
        ],
        species: [1, 1],
      })
      expect(symmetry).toMatchObject({ translationsFold: 1, pointGroup: '4/mmm' })
    }
  })

  test('every operation maps the plane onto itself', () => {
    const random = seeded(12)
    for (let i = 0; i < 40; i++) {
      const { primitive } = randomLattice((['tp', 'op', 'oc', 'hp', 'mp'] as const)[i % 5], random)
      const positions = Array.from(
        { length: wholeBetween(random, 1, 3) },
        (): Vec3 => [
          wholeBetween(random, 0, 5) / 6,
          wholeBetween(random, 0, 5) / 6,
          wholeBetween(random, -2, 2) * 3,
        ],
      )
      const symmetry = findSymmetry({
        dimension: 2,
        primitive,
        positions,
        species: positions.map(() => 1),
        tolerance: TOLERANCE,
      })
      if ('failed' in symmetry) continue
      for (const { rotation: W } of symmetry.operations) {
        expect([W[0][2], W[1][2], W[2][0], W[2][1]]).toEqual([0, 0, 0, 0])
        expect(Math.abs(W[2][2])).toBe(1)
      }
    }
  })

  test('a doubled sheet', () => {
    const symmetry = found({
      dimension: 2,
      primitive: multiply(
        [
          [2, 0, 0],
          [0, 1, 0],
          [0, 0, 1],
        ],
        sheet(2.46),
      ),
      positions: [
        [1 / 6, 2 / 3, 0],
        [1 / 3, 1 / 3, 0],
        [2 / 3, 2 / 3, 0],
        [5 / 6, 1 / 3, 0],
      ],
      species: [6, 6, 6, 6],
    })
    expect(symmetry).toMatchObject({ translationsFold: 2, pointGroup: '6/mmm' })
    expect(kGroup(symmetry, true)).toHaveLength(4)
  })
})

test('a chain: only the sense of its axis counts in k', () => {
  const chain = (positions: Vec3[], species: number[]) =>
    found({
      dimension: 1,
      primitive: [
        [3, 0, 0],
        [0, 1, 0],
        [0, 0, 1],
      ],
      positions,
      species,
    })
  const zigzag = chain(
    [
      [0, 0, 0],
      [0.5, 0.7, 0],
    ],
    [6, 6],
  )
  expect(zigzag).toMatchObject({ pointGroup: 'mmm', translationsFold: 1 })
  expect(zigzag.bravais).toBeUndefined()
  expect(kRotations(zigzag.rotations, false, 1)).toHaveLength(2)
  // Three kinds in an order that no turning round restores.
  const polar = chain(
    [
      [0, 0, 0],
      [0.3, 0.2, 0],
      [0.5, 0, 0.4],
    ],
    [1, 2, 3],
  )
  expect(kRotations(polar.rotations, false, 1)).toHaveLength(1)
  expect(kRotations(polar.rotations, true, 1)).toHaveLength(2)
})

describe('inputs that have no symmetry to find give a reason, and no exception', () => {
  const two: Vec3[] = [
    [0, 0, 0],
    [0.5, 0.5, 0.5],
  ]
  test.each<[string, Partial<SymmetryInput>, RegExp]>([
    [
      'two atoms at one place',
      {
        positions: [
          [0, 0, 0],
          [1, -1, 1e-5],
        ],
        species: [1, 1],
      },
      /one place/,
    ],
    [
      'two kinds at one place',
      {
        positions: [
          [0, 0, 0],
          [0, 0, 0],
        ],
        species: [1, 2],
      },
      /one place/,
    ],
    ['a coordinate that is no number', { positions: [[0, Number.NaN, 0]], species: [1] }, /finite/],
    ['an endless coordinate', { positions: [[0, Number.POSITIVE_INFINITY, 0]], species: [1] }, /finite/],
    ['more kinds than positions', { positions: two, species: [1] }, /kinds/],
    ['kinds without positions', { species: [1, 2] }, /kinds/],
    [
      'a flat cell',
      {
        primitive: [
          [1, 0, 0],
          [0, 1, 0],
          [1, 1, 0],
        ],
      },
      /volume/,
    ],
    [
      'a cell that is no number',
      {
        primitive: [
          [1, 0, 0],
          [0, 1, 0],
          [0, 0, Number.NaN],
        ],
      },
      /volume/,
    ],
    ['no tolerance', { tolerance: 0 }, /tolerance/],
    ['a negative tolerance', { tolerance: -1 }, /tolerance/],
    ['a tolerance that is no number', { tolerance: Number.NaN }, /tolerance/],
    ['a tolerance as large as the cell', { tolerance: 2 }, /tolerance/],
  ])('%s', (_, input, reason) => {
    const result = findSymmetry({
      dimension: 3,
      primitive: CUBIC,
      positions: [],
      species: [],
      tolerance: TOLERANCE,
      ...input,
    })
    expect(result).toMatchObject({ failed: expect.stringMatching(reason) })
  })

  test('whatever comes in', () => {
    const number = fc.oneof(
      fc.double(),
      fc.double({ min: -10, max: 10, noNaN: true }),
      fc.integer({ min: -3, max: 3 }),
    )
    const vector = fc.tuple(number, number, number)
    fc.assert(
      fc.property(
        fc.constantFrom(1, 2, 3),
        fc.tuple(vector, vector, vector),
        fc.array(vector, { maxLength: 6 }),
        fc.array(fc.integer({ min: -2, max: 2 }), { maxLength: 6 }),
        fc.oneof(fc.constant(TOLERANCE), fc.double()),
        (dimension, rows, positions, species, tolerance) => {
          const primitive = rows.map((row, i) =>
            row.map((x, j) => (i < dimension && j < dimension ? x : i === j ? 1 : 0)),
          ) as unknown as Mat3
          const result = findSymmetry({
            dimension: dimension as 1 | 2 | 3,
            primitive,
            positions,
            species,
            tolerance,
          })
          expect('failed' in result || result.operations.length > 0).toBe(true)
        },
      ),
      { seed: 4, numRuns: 400 },
    )
  })
})

describe('the library', () => {
  const one = { basis: CUBIC, positions: [[0, 0, 0] as Vec3], species: [1] }

  test('is not handed what it panics on', () => {
    const bad = [
      { ...one, positions: [], species: [] },
      { ...one, species: [1, 2] },
      { ...one, species: [0] },
      { ...one, species: [1.5] },
      { ...one, positions: [[Number.NaN, 0, 0] as Vec3] },
    ]
    libraryUse.calls = 0
    for (const cell of bad) expect(analyseCell(cell, TOLERANCE)).toHaveProperty('failure')
    expect(analyseCell(one, Number.NaN)).toHaveProperty('failure')
    expect(libraryUse.calls).toBe(0)
  })

  test('works again after any number of panics inside', () => {
    const panics = JSON.stringify({ lattice: { basis: CUBIC.flat() }, positions: [], numbers: [] })
    for (let i = 0; i < 400; i++)
      expect(analyseUnchecked(panics, TOLERANCE, 0)).toEqual({
        failure: expect.stringContaining('unreachable'),
      })
    expect(analyseCell(one, TOLERANCE)).toMatchObject({ number: 221, operations: { length: 48 } })
  })

  test('tells its own errors as a reason', () => {
    expect(analyseUnchecked('{', TOLERANCE, 0)).toEqual({ failure: expect.stringContaining('gave up') })
  })

  test('is started once', () => {
    expect(() => loadSymmetryLibrary(new Uint8Array())).not.toThrow()
    expect(analyseCell(one, TOLERANCE)).toMatchObject({ number: 221 })
  })
})

describe('tolerance', () => {
  /** Perovskite with its titanium off centre along z by a length. */
  const offCentre = (shift: number, tolerance: number) =>
    found({
      positions: [
        [0, 0, shift / 4],
        [0.5, 0.5, 0.5],
        [0.5, 0, 0],
        [0, 0.5, 0],
        [0, 0, 0.5],
      ],
      species: [22, 38, 8, 8, 8],
      tolerance,
    })

  test('decides between the ideal and the distorted crystal', () => {
    expect(offCentre(0, TOLERANCE)).toMatchObject({
      spaceGroup: { number: 221 },
      siteOrder: [48, 48, 16, 16, 16],
    })
    expect(offCentre(0.0002, TOLERANCE).spaceGroup?.number).toBe(221)
    expect(offCentre(0.01, TOLERANCE).spaceGroup?.number).toBe(99)
    expect(offCentre(0.01, 0.1).spaceGroup?.number).toBe(221)
  })

  test('that lets through what is no group is lowered, and that is told', () => {
    // a and b are alike within it, b and c are, a and c are not.
    const symmetry = found({ primitive: fromCell('oP', { a: 4, b: 4.0009, c: 4.0018 }).primitive })
    expect(symmetry.toleranceLowered).toBe(true)
    expect(symmetry.toleranceUsed).toBeLessThan(TOLERANCE)
    expect(symmetry.bravais).toBe('oP')
  })

  test('at its very edge gives something that holds within what is told', () => {
    const random = seeded(99)
    for (let i = 0; i < 60; i++) {
      const noise = () => between(random, -1, 1) * TOLERANCE * 0.5
      const n = 2
      const sites = Array.from({ length: n ** 3 }, (_, s): Vec3 => [s >> 2, (s >> 1) & 1, s & 1])
      const symmetry = found({
        positions: sites.map(
          (x): Vec3 => [x[0] / n + noise() / 4, x[1] / n + noise() / 4, x[2] / n + noise() / 4],
        ),
        species: sites.map(() => 1),
      })
      expect(symmetry.toleranceUsed).toBeLessThanOrEqual(TOLERANCE)
      expect(symmetry.toleranceLowered).toBe(symmetry.toleranceUsed < TOLERANCE)
      expect(symmetry.translationsFold * symmetry.primitivePositions.length).toBe(8)
      expect(new Set(symmetry.operations.map(({ rotation }) => String(rotation))).size).toBe(
        symmetry.operations.length,
      )
    }
  })
})

describe('space groups by name', () => {
  // International Tables for Crystallography, vol. A; from memory.
  test.each([
    ['Fm-3m', 225],
    ['F m -3 m', 225],
    ['F 4/m -3 2/m', 225],
    ['Fm3m', 225],
    ['FM-3M', 225],
    ['Fm3̅m', 225],
    ['Fm\\bar{3}m', 225],
    ['Fm−3m', 225],
    ['P 6_3/m m c', 194],
    ['P6_3/mmc', 194],
    ['P63/mmc', 194],
    ['P6₃/mmc', 194],
    ['P 1 21/n 1', 14],
    ['P2_1/n', 14],
    ['P21/a', 14],
    ['P 1 1 21/b', 14],
    ['I2/a', 15],
    ['B2/b', 15],
    ['A 2/m', 12],
    ['Pbnm', 62],
    ['Pmcn', 62],
    ['Cmca', 64],
    ['Cmce', 64],
    ['Bmab', 64],
    ['Abm2', 39],
    ['Aba2', 41],
    ['Ccca', 68],
    ['R-3m:H', 166],
    ['R-3m:R', 166],
    ['R -3 m H', 166],
    ['Fd-3m:2', 227],
    ['F d -3 m S', 227],
    ['P3m1', 156],
    ['P31m', 157],
    ['P3_121', 152],
    ['P312', 149],
    ['  p1 ', 1],
    ['225', 225],
    [' 14 ', 14],
  ])('%s is %d', (name, number) => {
    expect(namedSpaceGroup(name)?.number).toBe(number)
  })

  test('a number is one', () => {
    expect(namedSpaceGroup(194)).toMatchObject({
      number: 194,
      symbol: 'P6_3/mmc',
      pointGroup: '6/mmm',
      bravais: 'hP',
    })
  })

  test.each(['', 'Fm-4m', 'rock salt', 'P', '0', '231', '-1', '2.5', 0, 231, 1.5, Number.NaN])(
    '%s is none',
    name => {
      expect(namedSpaceGroup(name)).toBeUndefined()
    },
  )

  test('all 230 symbols are distinct and mean their own number', () => {
    const symbols = spaceGroupSymbols()
    expect(new Set(symbols).size).toBe(230)
    symbols.forEach((symbol, i) => {
      expect(namedSpaceGroup(symbol)?.number).toBe(i + 1)
    })
  })
})

describe('a named group on a lattice without atoms', () => {
  const onLattice = (name: string, type: BravaisType, cell: Record<string, number>) => {
    const { primitive, conventionalFromPrimitive } = fromCell(type, cell)
    return groupOnLattice(
      namedSpaceGroup(name)!,
      latticeType(primitive, 3, TOLERANCE)!,
      conventionalFromPrimitive,
    )
  }

  test.each([
    ['F-43m', 'cF', { a: 5 }, 24],
    ['Fm-3m', 'cF', { a: 5 }, 48],
    ['I4/mmm', 'cF', { a: 5 }, 16],
    ['R-3m', 'cF', { a: 5 }, 12],
    ['R3', 'cI', { a: 5 }, 3],
    ['P4/mmm', 'cP', { a: 5 }, 16],
    ['P4mm', 'tP', { a: 5, c: 6 }, 8],
    ['Cmcm', 'hP', { a: 5, c: 6 }, 8],
    ['P3m1', 'hP', { a: 5, c: 6 }, 6],
    ['P31m', 'hP', { a: 5, c: 6 }, 6],
    ['C2/m', 'hR', { a: 5, c: 12 }, 4],
    ['P-1', 'hR', { a: 5, c: 12 }, 2],
    ['P1', 'cF', { a: 5 }, 1],
    ['Pm', 'oP', { a: 4, b: 5, c: 6 }, 2],
    ['Amm2', 'oC', { a: 4, b: 5, c: 6 }, 4],
    ['P2_1/c', 'mP', { a: 4, b: 5, c: 6, beta: 100 }, 4],
  ] as const)('%s on %s', (name, type, cell, order) => {
    const rotations = onLattice(name, type, cell)!
    expect(rotations).toHaveLength(order)
    const known = new Set(rotations.map(String))
    for (const V of rotations) for (const W of rotations) expect(known.has(String(multiply(V, W)))).toBe(true)
    const { holohedry } = latticeType(fromCell(type, cell).primitive, 3, TOLERANCE)!
    expect(rotations.every(W => holohedry.some(H => String(H) === String(W)))).toBe(true)
  })

  test.each([
    ['Fm-3m', 'hP', { a: 5, c: 6 }],
    ['Fm-3m', 'cI', { a: 5 }],
    ['P6/mmm', 'cF', { a: 5 }],
    ['P4/mmm', 'oP', { a: 4, b: 5, c: 6 }],
    ['I4/mmm', 'tP', { a: 4, c: 6 }],
    ['C2/m', 'mP', { a: 4, b: 5, c: 6, beta: 100 }],
    ['P2/m', 'mC', { a: 4, b: 5, c: 6, beta: 100 }],
    ['P2', 'aP', { a: 4, b: 5, c: 6, alpha: 80, beta: 85, gamma: 95 }],
  ] as const)('%s cannot be on %s', (name, type, cell) => {
    expect(onLattice(name, type, cell)).toBeUndefined()
  })

  test('the stated axes decide where the group’s lie: P3m1 and P31m differ, Pmm2 has its axis along c', () => {
    const hexagonal = { a: 5, c: 6 }
    const differ = new Set(
      [...onLattice('P3m1', 'hP', hexagonal)!, ...onLattice('P31m', 'hP', hexagonal)!].map(String),
    )
    expect(differ.size).toBe(9)
    expect(onLattice('Pmm2', 'oP', { a: 6, b: 4, c: 5 })!.map(String)).toContain('-1,0,0,0,-1,0,0,0,1')
    expect(onLattice('P2mm', 'oP', { a: 6, b: 4, c: 5 })!.map(String)).toContain('1,0,0,0,-1,0,0,0,-1')
  })

  test('every group fits a lattice of its own type, with as many rotations as its class has', () => {
    const cells: Record<string, Record<string, number>> = {
      a: { a: 4, b: 5, c: 6, alpha: 80, beta: 85, gamma: 95 },
      m: { a: 4, b: 5, c: 6, beta: 100 },
      o: { a: 4, b: 5, c: 6 },
      t: { a: 4, c: 6 },
      h: { a: 4, c: 6 },
      c: { a: 4 },
    }
    for (let number = 1; number <= 230; number++) {
      const group = namedSpaceGroup(number)!
      const { primitive } = fromCell(group.bravais, cells[group.bravais[0]])
      const type = latticeType(primitive, 3, TOLERANCE)!
      const rotations = groupOnLattice(group, type)
      expect(rotations, group.symbol).toBeDefined()
      // Atoms on general positions of that symmorphic group have the group's class.
      const random = seeded(number)
      const atoms = [1, 2].flatMap(kind => {
        const x: Vec3 = [
          between(random, 0.05, 0.45),
          between(random, 0.05, 0.45),
          between(random, 0.05, 0.45),
        ]
        return rotations!.map(W => ({ kind, x: combine(x, transposed(W)) }))
      })
      const symmetry = found({
        primitive,
        positions: atoms.map(({ x }) => x),
        species: atoms.map(({ kind }) => kind),
        tolerance: 1e-5,
      })
      expect(symmetry.pointGroup, group.symbol).toBe(group.pointGroup)
      expect(symmetry.bravais, group.symbol).toBe(group.bravais)
      expect(Math.abs(determinant(inverse(symmetry.primitiveFromStated)))).toBeCloseTo(1)
    }
  })
})

const transposed = (W: Mat3): Mat3 => [0, 1, 2].map(i => W.map(row => row[i])) as unknown as Mat3
