import { spawnSync } from 'node:child_process'
import { join } from 'node:path'
import { beforeAll, describe, expect, test } from 'vitest'
import { CENTRING_TABLES } from '../../server/src/crystal/bravais.ts'
import {
  findSymmetry,
  namedSpaceGroup,
  type Symmetry,
  type SymmetryInput,
} from '../../server/src/crystal/symmetry.ts'
import { libraryUse } from '../../server/src/crystal/symmetry-library.ts'
import {
  add,
  apply,
  combine,
  determinant,
  inverse,
  type Mat3,
  mapMatrix,
  multiply,
  norm,
  subtract,
  transpose,
  type Vec3,
} from '../../server/src/crystal/vector.ts'
import { loadSymmetryFromDisk } from '../../server/src/symmetry-node.ts'
import { HANDBOOK, type HandbookCrystal } from './spacegroups-data.ts'

const TOLERANCE = 1e-3

interface Crystal {
  readonly rows: Mat3
  readonly positions: readonly Vec3[]
  readonly species: readonly number[]
}

beforeAll(loadSymmetryFromDisk)

describe('handbook crystals have their published space group', () => {
  test.each(HANDBOOK)('$name: $number', crystal => {
    expect(found(primitiveOf(crystal)).spaceGroup?.number).toBe(crystal.number)
  })
})

describe('the same crystal, otherwise described, has the same symmetry', () => {
  const random = generator(20260101)
  const variants: Record<string, (crystal: Crystal) => Crystal> = {
    'in a random basis': crystal => inBasis(crystal, unimodular(random)),
    rotated: crystal => ({ ...crystal, rows: multiply(crystal.rows, rotation(random)) }),
    'left-handed': crystal =>
      inBasis(crystal, [
        [0, 1, 0],
        [1, 0, 0],
        [0, 0, 1],
      ]),
    'with its kinds renamed and its atoms in another order': crystal => ({
      rows: crystal.rows,
      positions: [...crystal.positions].reverse(),
      species: crystal.species.map(kind => 97 - 7 * kind).reverse(),
    }),
    'with another origin': crystal => {
      const shift: Vec3 = [random(), random(), random()]
      return { ...crystal, positions: crystal.positions.map(x => add(x, shift)) }
    },
    'with atoms in other cells': crystal => ({
      ...crystal,
      positions: crystal.positions.map(x => add(x, whole(random, 3))),
    }),
  }
  for (const [how, vary] of Object.entries(variants))
    test(how, () => {
      for (const crystal of HANDBOOK) {
        const symmetry = found(vary(primitiveOf(crystal)))
        expect(symmetry.spaceGroup?.number, crystal.name).toBe(crystal.number)
        expect(symmetry.translationsFold, crystal.name).toBe(1)
      }
    })

  test('in a random supercell: the fold is told, and only the primitive cell goes to the library', () => {
    for (const crystal of HANDBOOK) {
      const primitive = primitiveOf(crystal)
      const matrix = supercellMatrix(random)
      const large = supercell(primitive, matrix)
      libraryUse.mostAtoms = 0
      const symmetry = found(large)
      expect(symmetry.spaceGroup?.number, crystal.name).toBe(crystal.number)
      expect(symmetry.translationsFold, crystal.name).toBe(Math.abs(determinant(matrix)))
      expect(libraryUse.mostAtoms, crystal.name).toBe(primitive.positions.length)
      checkOperations(symmetry, large)
    }
  })
})

test('every operation maps the crystal onto itself, in the basis that was stated', () => {
  const random = generator(7)
  for (const crystal of HANDBOOK) {
    const skewed = inBasis(primitiveOf(crystal), unimodular(random))
    checkOperations(found(skewed), skewed)
  }
})

test('the standard cell has the handbook’s lattice parameters where the handbook uses the standard setting', () => {
  const random = generator(11)
  for (const crystal of HANDBOOK) {
    // Triclinic and monoclinic cells and axes of like groups (Pbnm) are a matter of choice.
    if (crystal.number <= 15 || crystal.name.includes('setting')) continue
    const symmetry = found(inBasis(primitiveOf(crystal), unimodular(random)))
    const { vectors, rotation } = symmetry.standard!
    const lengths = vectors.map(norm)
    const sorted = (numbers: readonly number[]) => [...numbers].sort((x, y) => x - y)
    sorted(lengths).forEach((length, i) => {
      expect(length, crystal.name).toBeCloseTo(sorted(crystal.cell.slice(0, 3))[i], 6)
    })
    const [a, b] = vectors.map(v => apply(rotation, v))
    expect(norm(subtract(a, [lengths[0], 0, 0])), crystal.name).toBeLessThan(1e-6)
    expect(Math.abs(b[2]), crystal.name).toBeLessThan(1e-6)
  }
})

test('the standard origin of a centrosymmetric crystal is a centre of inversion (origin choice 2)', () => {
  const random = generator(13)
  let centres = 0
  for (const crystal of HANDBOOK) {
    const shift: Vec3 = [random(), random(), random()]
    const primitive = primitiveOf(crystal)
    const shifted = { ...primitive, positions: primitive.positions.map(x => add(x, shift)) }
    const { operations, standard } = found(inBasis(shifted, unimodular(random)))
    const inversion = operations.find(({ rotation }) => String(rotation) === '-1,0,0,0,-1,0,0,0,-1')
    if (!inversion) continue
    centres++
    const { origin } = standard!
    const moved = subtract(add(apply(inversion.rotation, origin), inversion.translation), origin)
    for (const x of moved) expect(Math.abs(x - Math.round(x)), crystal.name).toBeLessThan(1e-3)
  }
  expect(centres).toBeGreaterThan(40)
})

describe('a second library agrees', () => {
  test('on the handbook crystals, also skewed and as supercells', () => {
    const random = generator(3)
    const crystals = HANDBOOK.flatMap(crystal => {
      const primitive = primitiveOf(crystal)
      return [
        primitive,
        inBasis(primitive, unimodular(random)),
        supercell(primitive, supercellMatrix(random)),
      ]
    })
    const cells = crystals.map(({ rows, positions, species }) => ({
      lattice: rows,
      positions,
      numbers: species,
      tolerance: TOLERANCE,
    }))
    const second = ask<{ number: number; pointGroup: string; operations: number }[]>({ find: cells })
    crystals.forEach((crystal, i) => {
      const symmetry = found(crystal)
      expect(symmetry.spaceGroup?.number).toBe(second[i].number)
      expect(symmetry.pointGroup).toBe(second[i].pointGroup)
      // Of a supercell the second library counts what its lattice lets through, once a translation.
      expect(symmetry.rotations.length * symmetry.translationsFold).toBe(second[i].operations)
    })
  })

  test('on crystals made of atoms on general positions of every tabulated setting', () => {
    for (const crystal of tabulated()) {
      const symmetry = found(
        { rows: crystal.lattice, positions: crystal.positions, species: crystal.numbers },
        1e-5,
      )
      expect(symmetry.spaceGroup?.number, crystal.full).toBe(crystal.number)
      expect(symmetry.pointGroup, crystal.full).toBe(crystal.pointGroup)
      expect(
        symmetry.siteOrder.every(order => order === 1),
        crystal.full,
      ).toBe(true)
    }
  })

  test('on what every symbol of every tabulated setting means', () => {
    for (const { symbol, full, number } of tabulated()) {
      for (const spelling of [
        full,
        full.replaceAll(' ', ''),
        full.replaceAll('_', ''),
        full.replaceAll(/[ _]/g, ''),
      ])
        expect(namedSpaceGroup(spelling)?.number, spelling).toBe(number)
      expect(namedSpaceGroup(symbol)?.number, symbol).toBe(number)
    }
  })
})

interface Tabulated {
  readonly number: number
  readonly symbol: string
  readonly full: string
  readonly pointGroup: string
  readonly lattice: Mat3
  readonly positions: readonly Vec3[]
  readonly numbers: readonly number[]
}

let table: readonly Tabulated[] | undefined
const tabulated = (): readonly Tabulated[] => (table ??= ask<Tabulated[]>({ make: 1 }))

/** The interpreter that Debian's packages belong to. */
const PYTHON = '/usr/bin/python3'

function ask<T>(request: unknown): T {
  const run = spawnSync(PYTHON, [join(import.meta.dirname, 'spacegroups.py')], {
    input: JSON.stringify(request),
    maxBuffer: 2 ** 28,
    encoding: 'utf8',
  })
  if (run.status !== 0)
    throw new Error(`This test needs the Debian package python3-spglib.\n${run.error?.message ?? run.stderr}`)
  return JSON.parse(run.stdout)
}

function found({ rows, positions, species }: Crystal, tolerance = TOLERANCE): Symmetry {
  const input: SymmetryInput = { dimension: 3, primitive: rows, positions, species, tolerance }
  const symmetry = findSymmetry(input)
  if ('failed' in symmetry) throw new Error(symmetry.failed)
  return symmetry
}

/** Each operation and translation is applied to each atom, and an atom of its kind must be there. */
function checkOperations(symmetry: Symmetry, crystal: Crystal): void {
  const { operations, primitiveFromStated, translations } = symmetry
  const metric = multiply(symmetry.primitive, transpose(symmetry.primitive))
  const toPrimitive = inverse(primitiveFromStated)
  const toSpace = symmetry.primitive
  const atoms = crystal.positions.map(x => combine(x, toPrimitive))
  const isAtom = (x: Vec3, kind: number) =>
    atoms.some((y, j) => {
      if (crystal.species[j] !== kind) return false
      const d = subtract(x, y)
      return norm(combine(subtract(d, d.map(Math.round) as unknown as Vec3), toSpace)) < 2 * TOLERANCE
    })
  for (const { rotation, translation } of operations) {
    const turned = multiply(multiply(transpose(rotation), metric), rotation)
    mapDifference(turned, metric).forEach(x => {
      expect(Math.abs(x)).toBeLessThan(1e-2)
    })
    expect(Math.abs(determinant(rotation))).toBe(1)
    for (const [i, x] of atoms.entries())
      expect(isAtom(add(apply(rotation, x), translation), crystal.species[i])).toBe(true)
  }
  expect(new Set(operations.map(({ rotation }) => String(rotation))).size).toBe(operations.length)
  for (const t of translations)
    expect(isAtom(add(combine(t, toPrimitive), atoms[0]), crystal.species[0])).toBe(true)
}

const mapDifference = (m: Mat3, n: Mat3): number[] => m.flat().map((x, i) => x - n.flat()[i])

function primitiveOf({ cell, centring, generators = [], atoms }: HandbookCrystal): Crystal {
  const conventional = rowsOf(cell)
  const { numerators, denominator } = CENTRING_TABLES[centring]
  const change = mapMatrix(numerators, x => x / denominator)
  const toPrimitive = inverse(change)
  const positions: Vec3[] = []
  const species: number[] = []
  const elements: string[] = []
  for (const atom of atoms.split('; ')) {
    const [element, ...numbers] = atom.split(' ')
    if (!elements.includes(element)) elements.push(element)
    for (const x of orbit(numbers.map(fraction) as unknown as Vec3, generators, toPrimitive)) {
      positions.push(x)
      species.push(elements.indexOf(element) + 1)
    }
  }
  return { rows: multiply(change, conventional), positions, species }
}

const fraction = (text: string): number => {
  const [p, q = 1] = text.split('/').map(Number)
  return p / q
}

/** All images of a conventional position that differ by more than a lattice vector, in primitive fractions. */
function orbit(x: Vec3, generators: readonly string[], toPrimitive: Mat3): Vec3[] {
  const images = [x]
  const isNew = (y: Vec3) =>
    !images.some(other => {
      const d = combine(subtract(y, other), toPrimitive)
      return d.every(c => Math.abs(c - Math.round(c)) < 1e-4)
    })
  for (const image of images)
    for (const generator of generators) {
      const next = triplet(generator, image)
      if (isNew(next)) images.push(next)
    }
  return images.map(image => combine(image, toPrimitive))
}

/** `-x+1/2,y,z` of a position. */
const triplet = (text: string, [x, y, z]: Vec3): Vec3 =>
  text.split(',').map(component =>
    [...component.matchAll(/([+-]?)([xyz]|\d\/\d)/g)].reduce((sum, [, sign, term]) => {
      const value = { x, y, z }[term] ?? fraction(term)
      return sum + (sign === '-' ? -value : value)
    }, 0),
  ) as unknown as Vec3

function rowsOf([a, b, c, alpha, beta, gamma]: HandbookCrystal['cell']): Mat3 {
  const [ca, cb, cg] = [alpha, beta, gamma].map(degrees => Math.cos((degrees * Math.PI) / 180))
  const sg = Math.sin((gamma * Math.PI) / 180)
  const y = (ca - cb * cg) / sg
  return [
    [a, 0, 0],
    [b * cg, b * sg, 0],
    [c * cb, c * y, c * Math.sqrt(1 - cb * cb - y * y)],
  ]
}

const inBasis = ({ rows, positions, species }: Crystal, change: Mat3): Crystal => {
  const back = inverse(change)
  return { rows: multiply(change, rows), positions: positions.map(x => combine(x, back)), species }
}

function supercell({ rows, positions, species }: Crystal, matrix: Mat3): Crystal {
  const back = inverse(matrix)
  const points: Vec3[] = []
  const range = [-6, -5, -4, -3, -2, -1, 0, 1, 2, 3, 4, 5, 6]
  for (const i of range)
    for (const j of range)
      for (const k of range) {
        const x = combine([i, j, k], back)
        if (x.every(c => c > -1e-9 && c < 1 - 1e-9)) points.push(x)
      }
  expect(points.length).toBe(Math.abs(Math.round(determinant(matrix))))
  return {
    rows: multiply(matrix, rows),
    positions: points.flatMap(p => positions.map(x => add(p, combine(x, back)))),
    species: points.flatMap(() => species),
  }
}

/** Uniform in [0, 1): D. H. Lehmer's generator, so that every run draws the same. */
function generator(seed: number): () => number {
  let state = seed
  return () => {
    state = (state * 48271) % 2147483647
    return state / 2147483647
  }
}

const whole = (random: () => number, most: number): Vec3 =>
  [0, 1, 2].map(() => Math.floor(random() * (2 * most + 1)) - most) as unknown as Vec3

function unimodular(random: () => number): Mat3 {
  const [u, v, w] = [whole(random, 2), whole(random, 2), whole(random, 2)]
  const lower: Mat3 = [
    [1, 0, 0],
    [u[0], 1, 0],
    [u[1], u[2], 1],
  ]
  const upper: Mat3 = [
    [1, v[0], v[1]],
    [0, 1, v[2]],
    [0, 0, 1],
  ]
  const last: Mat3 = [
    [1, 0, 0],
    [w[0], 1, w[1]],
    [0, 0, 1],
  ]
  return multiply(multiply(lower, upper), last)
}

function supercellMatrix(random: () => number): Mat3 {
  for (;;) {
    const matrix: Mat3 = [whole(random, 2), whole(random, 2), whole(random, 2)]
    const size = Math.abs(determinant(matrix))
    if (size > 1 && size <= 6) return matrix
  }
}

function rotation(random: () => number): Mat3 {
  const q = [0, 1, 2, 3].map(() => random() - 0.5)
  const [w, x, y, z] = q.map(c => c / Math.hypot(...q))
  return [
    [1 - 2 * (y * y + z * z), 2 * (x * y - z * w), 2 * (x * z + y * w)],
    [2 * (x * y + z * w), 1 - 2 * (x * x + z * z), 2 * (y * z - x * w)],
    [2 * (x * z - y * w), 2 * (y * z + x * w), 1 - 2 * (x * x + y * y)],
  ]
}
