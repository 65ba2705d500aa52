/**
 * The symmetry of a crystal: space group, operations, site symmetries, standard cell, carried back to the cell that
 * was stated. The library only ever sees a reduced primitive cell in three periodic directions.
 */
import type { BravaisType } from './bravais.ts'
import { spansLattice } from './lattice.ts'
import { latticeType } from './lattice-type.ts'
import { type Dimension, reduce } from './reduction.ts'
import { bravaisOf, compactSymbol } from './space-group.ts'
import { analyseCell, type LibraryAnswer, type Operation, spaceGroupType } from './symmetry-library.ts'
import {
  type AtomicCell,
  findPrimitiveCell,
  nearestImage,
  PositionGrid,
  type PrimitiveCell,
} from './translations.ts'
import {
  apply,
  combine,
  determinant,
  inverse,
  type Mat3,
  mapMatrix,
  multiply,
  norm,
  scale,
  subtract,
  transpose,
  type Vec3,
} from './vector.ts'

export type { LatticeType } from './lattice-type.ts'
export { latticeType, symmetriseBasis } from './lattice-type.ts'
export type { NamedSpaceGroup } from './space-group.ts'
export { groupOnLattice, namedSpaceGroup, spaceGroupSymbols } from './space-group.ts'
export type { Operation } from './symmetry-library.ts'

export interface SymmetryInput {
  readonly dimension: Dimension
  /** Rows: vectors of the cell that the atoms are given in, Cartesian; beyond the dimension unit normals. */
  readonly primitive: Mat3
  /** Fractions of those rows (along a normal: a length). None: one atom at the origin stands for the lattice alone. */
  readonly positions: readonly Vec3[]
  /** Whole numbers; the same number means the same kind of atom. */
  readonly species: readonly number[]
  /** How far an atom or a lattice vector may be from symmetric and still count as symmetric, a length. */
  readonly tolerance: number
}

/**
 * Two cells play a part. The *stated* cell is the one handed in. The *primitive* one is the smallest that the atoms
 * leave: it is the stated cell itself, its rows untouched, unless that holds several (`translationsFold` > 1).
 * Plain data: it can be posted between threads.
 */
export interface Symmetry {
  readonly dimension: Dimension
  /** Three periodic directions only. */
  readonly spaceGroup?: SpaceGroup
  /** Hermann–Mauguin symbol of the crystal class. Of a sheet or a chain: of its operations in space. */
  readonly pointGroup: string

  /** How many primitive cells the stated cell holds. */
  readonly translationsFold: number
  /** The translations themselves, in fractions of the stated rows, zero first. */
  readonly translations: readonly Vec3[]
  /** Rows: primitive vectors as combinations of the stated ones, whole multiples of 1/fold; the identity for fold 1. */
  readonly primitiveFromStated: Mat3
  /** Rows, Cartesian. */
  readonly primitive: Mat3
  /** The primitive cell's atoms, in its fractions, and their kinds. */
  readonly primitivePositions: readonly Vec3[]
  readonly primitiveSpecies: readonly number[]
  /** For each stated atom its index among those. */
  readonly primitiveAtomOf: readonly number[]

  /** On fractions of the primitive cell, one for each rotation, identity first. Translations are exact where they can be. */
  readonly operations: readonly Operation[]
  /**
   * The distinct rotations on columns of fractions of the *stated* cell, identity first, whole-numbered: what acts on
   * its k-points. Of a supercell, those that do not map its own lattice onto itself are left out.
   */
  readonly rotations: readonly Mat3[]
  /** How many were left out. */
  readonly rotationsLost: number

  /** For each stated atom: the site symmetry (oriented symbol where the crystal class has directions) and its order. */
  readonly siteSymmetry: readonly string[]
  readonly siteOrder: readonly number[]
  /** For each stated atom the lowest index of an atom equivalent to it. */
  readonly equivalentAtoms: readonly number[]
  /** For each stated atom, three periodic directions only. */
  readonly wyckoffLetters?: readonly string[]

  /** Of the crystal: crystal family and centring (`oC` for any one face). A chain has none. */
  readonly bravais?: BravaisType
  /** Of the primitive lattice alone: at least as symmetric. */
  readonly latticeBravais?: BravaisType
  /** Rotations of the stated cell's lattice alone, on columns of its fractions. */
  readonly holohedry: readonly Mat3[]
  /** Three periodic directions only. */
  readonly standard?: StandardCell

  /** The tolerance that the answer holds for, a length. */
  readonly toleranceUsed: number
  /** What fits within the tolerance asked for is no group: a smaller one was used, and the symmetry may be too low. */
  readonly toleranceLowered: boolean
}

export interface SpaceGroup {
  /** International Tables, 1–230. */
  readonly number: number
  /** Short Hermann–Mauguin symbol of the standard setting, as `Fm-3m`, `P6_3/mmc`. */
  readonly symbol: string
  /** Number of the Hall symbol of the standard setting in the usual list of 530. */
  readonly hallNumber: number
}

/** The conventional cell in the International Tables' standard setting (origin choice 2, hexagonal axes, b unique). */
export interface StandardCell {
  /** Rows: its vectors as whole-number combinations of the primitive ones. */
  readonly fromPrimitive: Mat3
  /** The same as Cartesian rows, where they lie in space. */
  readonly vectors: Mat3
  /** Its origin in fractions of the primitive cell. */
  readonly origin: Vec3
  /** Acts on columns: turns `vectors` into the orientation with a along x and b in the xy-plane. */
  readonly rotation: Mat3
}

export interface SymmetryFailure {
  /** What kept the symmetry from being found, as a clause: "two atoms are at one place". */
  readonly failed: string
}

/**
 * Find the symmetry of a crystal. The library must have been started. Never throws for what an author can write.
 */
export function findSymmetry(input: SymmetryInput): Symmetry | SymmetryFailure {
  const { dimension, primitive: basis, tolerance } = input
  const alone = input.positions.length === 0
  const stated: AtomicCell = {
    dimension,
    basis,
    positions: alone ? [[0, 0, 0]] : input.positions,
    species: alone && input.species.length === 0 ? [1] : input.species,
  }
  const failed = unfit(stated, tolerance)
  if (failed) return { failed }

  let primitive = findPrimitiveCell(stated, tolerance)
  for (let tries = 0; ; tries++) {
    const embedded = embed(primitive)
    const answer = analyseCell(embedded.cell, primitive.tolerance)
    if ('failure' in answer) return { failed: answer.failure }
    const distinct = new Set(answer.operations.map(({ rotation }) => String(rotation)))
    if (distinct.size === answer.operations.length) return describe(input, primitive, embedded, answer)
    // At the very edge of the tolerance the library may see a translation that we do not.
    if (tries === MOST_TRIES) return { failed: 'the symmetry hangs on the last digit of the tolerance' }
    primitive = findPrimitiveCell(stated, primitive.tolerance * LOWERED)
  }
}

/** A half of the tolerance a time: after this often it is a thousandth. */
const MOST_TRIES = 10
const LOWERED = 0.5

/** Two atoms nearer than this many tolerances could stand for one another. */
const COINCIDENT = 2

function unfit(cell: AtomicCell, tolerance: number): string | undefined {
  const { basis, positions, species } = cell
  if (positions.length !== species.length) return 'there are not as many kinds as positions'
  if (!positions.flat().every(Number.isFinite)) return 'a position is not a finite number'
  if (!spansLattice(basis)) return 'the lattice vectors span no volume'
  if (!(tolerance > 0 && tolerance < Number.POSITIVE_INFINITY)) return 'the tolerance is no positive length'
  const reduced = reduce(basis, cell.dimension)
  const toReduced = inverse(reduced.change)
  const inReduced = { ...cell, basis: reduced.basis, positions: positions.map(x => combine(x, toReduced)) }
  const shortest = Math.min(...reduced.basis.slice(0, cell.dimension).map(norm))
  if (tolerance > shortest / (2 * COINCIDENT)) return 'the tolerance is as large as the cell'
  const grid = new PositionGrid(inReduced, COINCIDENT * tolerance)
  const coincident = inReduced.positions.findIndex((x, i) => grid.nearest(x, undefined, i) >= 0)
  return coincident < 0 ? undefined : 'two atoms are at one place within the tolerance'
}

interface Embedded {
  readonly cell: {
    readonly basis: Mat3
    readonly positions: readonly Vec3[]
    readonly species: readonly number[]
  }
  /** Rows of the library's cell as combinations of the primitive cell's rows. */
  readonly change: Mat3
}

/**
 * How much longer than every vector of the sheet the period along its normal is, at least. Vectors as short as those of
 * the sheet then all lie in it, so every operation maps the sheet's plane onto itself; and the gap is wider than any
 * inside the sheet, so every operation maps the sheet onto itself. The number itself means nothing.
 */
const CLEARANCE = 2.3

function embed({ dimension, basis, positions, species }: PrimitiveCell): Embedded {
  const reduced = reduce(basis, dimension)
  const longest = Math.max(...reduced.basis.slice(0, dimension).map(norm))
  const extent = Math.max(...[0, 1, 2].slice(dimension).map(i => spread(positions.map(x => x[i]))), 0)
  const period = CLEARANCE * (longest + extent)
  // A left-handed cell would come back as the mirror image: quartz of the one hand as that of the other.
  const hand = Math.sign(determinant(reduced.basis))
  const change = reduced.change.map((row, i) =>
    scale(row, i < dimension ? hand : hand * period),
  ) as unknown as Mat3
  const toReduced = inverse(change)
  const kinds = [...new Set(species)]
  return {
    change,
    cell: {
      basis: multiply(change, basis),
      positions: positions.map(x => combine(x, toReduced)),
      species: species.map(kind => kinds.indexOf(kind) + 1),
    },
  }
}

const spread = (numbers: readonly number[]): number => {
  let low = Number.POSITIVE_INFINITY
  let high = Number.NEGATIVE_INFINITY
  for (const x of numbers) {
    low = Math.min(low, x)
    high = Math.max(high, x)
  }
  return high - low
}

function describe(
  input: SymmetryInput,
  cell: PrimitiveCell,
  { change }: Embedded,
  answer: LibraryAnswer,
): Symmetry {
  const { dimension } = input
  const there = transpose(change)
  const back = inverse(there)
  const found = answer.operations.map(({ rotation, translation }) => ({
    rotation: mapMatrix(multiply(multiply(there, rotation), back), whole),
    translation: apply(there, translation),
  }))
  const operations = identityFirst(exactTranslations(found, cell, answer.tolerance))
  const { rotations, lost } = inStatedCell(
    operations.map(({ rotation }) => rotation),
    cell.primitiveFromStated,
  )
  const type = spaceGroupType(answer.number)
  const sites = siteOrders(answer.orbits, operations.length)
  const ofStated = <T>(list: readonly T[]): T[] => cell.atomOf.map(atom => list[atom])
  const stated = latticeType(input.primitive, dimension, answer.tolerance)
  const lattice = cell.fold === 1 ? stated : latticeType(cell.basis, dimension, answer.tolerance)
  const orbits = ofStated(answer.orbits)
  const first = new Map<number, number>()
  for (const [i, orbit] of orbits.entries()) if (!first.has(orbit)) first.set(orbit, i)
  return {
    dimension,
    spaceGroup:
      dimension === 3
        ? { number: type.number, symbol: compactSymbol(type.symbol), hallNumber: answer.hallNumber }
        : undefined,
    pointGroup: type.pointGroup,
    translationsFold: cell.fold,
    translations: cell.translations,
    primitiveFromStated: cell.primitiveFromStated,
    primitive: cell.basis,
    primitivePositions: cell.positions,
    primitiveSpecies: cell.species,
    primitiveAtomOf: cell.atomOf,
    operations,
    rotations,
    rotationsLost: lost,
    siteSymmetry: ofStated(answer.siteSymmetry),
    siteOrder: ofStated(sites),
    equivalentAtoms: orbits.map(orbit => first.get(orbit)!),
    wyckoffLetters: dimension === 3 ? ofStated(answer.wyckoffLetters) : undefined,
    bravais: dimension === 3 ? bravaisOf(type.lattice) : planeBravais(operations, dimension),
    latticeBravais: lattice?.bravais,
    holohedry: stated?.holohedry ?? [],
    standard: dimension === 3 ? standardCell(answer, change, cell.basis) : undefined,
    toleranceUsed: answer.tolerance,
    toleranceLowered: answer.tolerance < input.tolerance,
  }
}

/** A whole number without the minus of −0. */
const whole = (x: number): number => Math.round(x) + 0

const isIdentity = (W: Mat3): boolean => W.every((row, i) => row.every((x, j) => x === (i === j ? 1 : 0)))

const identityFirst = (operations: readonly Operation[]): Operation[] => [
  ...operations.filter(({ rotation }) => isIdentity(rotation)),
  ...operations.filter(({ rotation }) => !isIdentity(rotation)),
]

/** Translations of space groups are multiples of this in any primitive basis, the origin at a symmetric place. */
const TRANSLATION_STEP = 1 / 24

/** Measured translations carry the rounding of the positions. Where all of them are simple fractions, take those. */
function exactTranslations(
  operations: readonly Operation[],
  cell: PrimitiveCell,
  tolerance: number,
): Operation[] {
  const exact = operations.map(({ rotation, translation }) => {
    const rounded = translation.map((x, i) =>
      i < cell.dimension ? Math.round(x / TRANSLATION_STEP) * TRANSLATION_STEP : x,
    )
    const off = nearestImage(subtract(translation, rounded as unknown as Vec3), cell.dimension)
    return { rotation, translation: rounded as unknown as Vec3, off: norm(combine(off, cell.basis)) }
  })
  const use = exact.every(({ off }) => off <= tolerance) ? exact : operations
  return use.map(({ rotation, translation }) => ({
    rotation,
    translation: translation.map((x, i) => (i < cell.dimension ? x - Math.floor(x) : x)) as unknown as Vec3,
  }))
}

/** Entries of a rotation that maps a lattice onto itself are whole; the arithmetic leaves far less than this. */
const WHOLE = 1e-6

function inStatedCell(
  rotations: readonly Mat3[],
  primitiveFromStated: Mat3,
): { rotations: Mat3[]; lost: number } {
  const there = transpose(primitiveFromStated)
  const back = inverse(there)
  const carried = rotations.map(W => multiply(multiply(there, W), back))
  const kept = carried.filter(W => W.every(row => row.every(x => Math.abs(x - Math.round(x)) < WHOLE)))
  return { rotations: kept.map(W => mapMatrix(W, whole)), lost: rotations.length - kept.length }
}

/** An atom's site symmetry has the order of the point group over the number of atoms equivalent to it. */
function siteOrders(orbits: readonly number[], order: number): number[] {
  const sizes = new Map<number, number>()
  for (const orbit of orbits) sizes.set(orbit, (sizes.get(orbit) ?? 0) + 1)
  return orbits.map(orbit => order / sizes.get(orbit)!)
}

/** The plane lattice that the operations allow: from the distinct matrices that they induce in the plane. */
function planeBravais(operations: readonly Operation[], dimension: Dimension): BravaisType | undefined {
  if (dimension === 1) return undefined
  const plane = operations.map(({ rotation: [u, v] }) => ({
    trace: u[0] + v[1],
    reflects: u[0] * v[1] - u[1] * v[0] < 0,
    primitive: u[0] % 2 !== 0 && v[1] % 2 !== 0 && u[1] % 2 === 0 && v[0] % 2 === 0,
  }))
  const turns = plane.filter(({ reflects }) => !reflects)
  if (turns.some(({ trace }) => Math.abs(trace) === 1)) return 'hp'
  if (turns.some(({ trace }) => trace === 0)) return 'tp'
  const mirror = plane.find(({ reflects }) => reflects)
  if (!mirror) return 'mp'
  // A reflection is the unit matrix modulo 2 where its line and the normal to it span the lattice.
  return mirror.primitive ? 'op' : 'oc'
}

function standardCell(answer: LibraryAnswer, change: Mat3, primitive: Mat3): StandardCell {
  const fromPrimitive = mapMatrix(multiply(answer.standardFromCell, change), whole)
  return {
    fromPrimitive,
    vectors: multiply(fromPrimitive, primitive),
    origin: combine(answer.standardOrigin, change),
    rotation: answer.standardRotation,
  }
}
