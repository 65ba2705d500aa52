/** Lattices from vectors or from a cell, their reciprocal lattices, and the maps between fractions and space. */
import { CENTRING_TABLES, type Centring } from './bravais.ts'
import { type AngleMiss, anglesPossible, type CellParameters, cosDegrees, sinDegrees } from './cell.ts'
import { type Dimension, type Reduction, reduce } from './reduction.ts'
import {
  angle,
  apply,
  carefulCombine,
  combine,
  cross,
  determinant,
  dot,
  inverse,
  type Mat3,
  mapMatrix,
  norm,
  scale,
  spanned,
  subtract,
  tidy,
  transpose,
  type Vec3,
} from './vector.ts'

export {
  type AngleMiss,
  type AngleName,
  anglesPossible,
  type CellParameters,
  cosDegrees,
  sinDegrees,
} from './cell.ts'
export type { Dimension } from './reduction.ts'

/**
 * A lattice. Matrices hold one vector a row, in the unit of length that was given, or its inverse with the 2π included.
 * In two and one dimensions the rows that are no lattice vectors are unit normals of the plane (line), and 2π times
 * these in the reciprocal matrices, so that fractions along them are lengths and every map below works as it stands.
 */
export interface Lattice {
  readonly dimension: Dimension
  readonly centring: Centring
  readonly primitive: Mat3
  readonly conventional: Mat3
  /** Whole numbers: conventional = conventionalFromPrimitive · primitive. */
  readonly conventionalFromPrimitive: Mat3
  /** Its inverse; halves and thirds. */
  readonly primitiveFromConventional: Mat3
  /** Of the conventional cell. In two dimensions c = 1 and α = β = 90°; in one, b = c = 1 and all angles are 90°. */
  readonly parameters: CellParameters
  /** Volume, area or length of the primitive cell; positive. */
  readonly volume: number
  /** 1 where the primitive vectors are right-handed (a plane is seen from its normal), else −1. */
  readonly handedness: 1 | -1
  /** Rows bᵢ with bᵢ·aⱼ = 2π δᵢⱼ. */
  readonly reciprocal: Mat3
  /** The same for the conventional cell. */
  readonly conventionalReciprocal: Mat3
}

export type LatticeFault =
  /** The vectors span no volume (area, length): `volume` is what they span, `scale` the product of their lengths. */
  | { readonly fault: 'flat'; readonly volume: number; readonly scale: number }
  /** No cell has these angles. */
  | { readonly fault: 'angles'; readonly miss: AngleMiss }
  /** Lengths that are not positive, or beyond 10^±60; indices of the vectors at fault. */
  | { readonly fault: 'lengths'; readonly vectors: readonly number[] }
  /** A centring that a plane lattice or a chain cannot have. */
  | { readonly fault: 'centring'; readonly centring: Centring }

/**
 * Vectors are flat when they span less than this part of the product of their lengths. Rounding alone gives some
 * 10⁻¹⁶; a lattice of axial ratio 1:1000 on a basis with entries of ±50 still has 10⁻¹².
 */
const FLAT = 1e-13

/** Lengths whose sixth powers and their inverses are still numbers. */
const LONGEST = 1e50
const SHORTEST = 1e-50

/** Angles are given to this many degrees: below it is the rounding of the arctangent. */
const ANGLE_STEP = 1e12

/**
 * The lattice that one, two or three vectors span, in as many dimensions.
 * @param rows Cartesian vectors, of the conventional cell if `centring` is not P.
 */
export function latticeFromVectors(rows: readonly Vec3[], centring: Centring = 'P'): Lattice | LatticeFault {
  const dimension = rows.length as Dimension
  const beyond = rows.flatMap((row, i) => (isSizeable(row) ? [] : [i]))
  if (beyond.length > 0) return { fault: 'lengths', vectors: beyond }
  const volume = spanned(rows)
  if (!spansLattice(rows)) return { fault: 'flat', volume, scale: rows.reduce((x, row) => x * norm(row), 1) }
  if (!allowsCentring(centring, dimension)) return { fault: 'centring', centring }
  const conventional = withNormals(rows.map(tidy))
  return latticeFrom(conventional, centring, dimension, cellParameters(conventional))
}

/**
 * The lattice of a conventional cell: a along x, b in the xy-plane with positive y, c completing a right-handed set.
 * In two dimensions only a, b and gamma count, in one only a.
 */
export function latticeFromCell(
  cell: CellParameters,
  centring: Centring,
  dimension: Dimension,
): Lattice | LatticeFault {
  const lengths = [cell.a, cell.b, cell.c].slice(0, dimension)
  const beyond = lengths.flatMap((x, i) => (x > SHORTEST && x < LONGEST ? [] : [i]))
  if (beyond.length > 0) return { fault: 'lengths', vectors: beyond }
  if (!allowsCentring(centring, dimension)) return { fault: 'centring', centring }
  const { a } = cell
  const { b, gamma } = dimension === 1 ? { b: 1, gamma: 90 } : cell
  const { c, alpha, beta } = dimension === 3 ? cell : { c: 1, alpha: 90, beta: 90 }
  const angles = anglesPossible(alpha, beta, gamma)
  if (!angles.possible) return { fault: 'angles', miss: angles }
  const direction = directionOfC(alpha, beta, gamma)
  const conventional: Mat3 = [
    [a, 0, 0],
    tidy([b * cosDegrees(gamma), b * sinDegrees(gamma), 0]),
    tidy(scale(direction, c)),
  ]
  const volume = determinant(conventional)
  const product = a * b * c
  if (!(volume > FLAT * product)) return { fault: 'flat', volume, scale: product }
  return latticeFrom(conventional, centring, dimension, { a, b, c, alpha, beta, gamma })
}

/** Finite vectors that span a volume (area, length), as far as double numbers can tell. */
export function spansLattice(rows: readonly Vec3[]): boolean {
  const product = rows.reduce((x, row) => x * norm(row), 1)
  return product < Number.POSITIVE_INFINITY && spanned(rows) > FLAT * product
}

export const isLattice = (result: Lattice | LatticeFault): result is Lattice => !('fault' in result)

function latticeFrom(
  conventional: Mat3,
  centring: Centring,
  dimension: Dimension,
  parameters: CellParameters,
): Lattice {
  const table = CENTRING_TABLES[centring]
  const primitiveFromConventional = mapMatrix(table.numerators, x => x / table.denominator)
  // Whole numbers first, one division last: halves stay exact and thirds are rounded once.
  const primitive = mapMatrix(combineRows(table.numerators, conventional), x => x / table.denominator + 0)
  const reduction = reduce(conventional, dimension)
  const conventionalReciprocal = reciprocalOf(reduction)
  return {
    dimension,
    centring,
    primitive,
    conventional,
    conventionalFromPrimitive: table.conventional,
    primitiveFromConventional,
    parameters,
    volume: reduction.volume / table.points,
    handedness: determinant(primitive) > 0 ? 1 : -1,
    reciprocal: combineRows(transpose(table.conventional), conventionalReciprocal),
    conventionalReciprocal,
  }
}

const combineRows = (m: Mat3, rows: Mat3): Mat3 => [
  tidy(carefulCombine(m[0], rows)),
  tidy(carefulCombine(m[1], rows)),
  tidy(carefulCombine(m[2], rows)),
]

/**
 * 2π times the inverse transpose. It is taken of the reduced vectors, whose inverse loses no digits however skewed the
 * rows are, and carried back by whole numbers: rows = C⁻¹ R, so B = Cᵀ · 2π (R⁻¹)ᵀ.
 */
function reciprocalOf({ basis, change }: Reduction): Mat3 {
  return combineRows(
    transpose(change),
    mapMatrix(transpose(inverse(basis)), x => x * 2 * Math.PI),
  )
}

const isSizeable = (row: Vec3): boolean => {
  const length = norm(row)
  return length === 0 || (length > SHORTEST && length < LONGEST)
}

/** A plane lattice may be centred like C without c; a chain not at all. */
const allowsCentring = (centring: Centring, dimension: Dimension): boolean =>
  dimension === 3 || centring === 'P' || (dimension === 2 && centring === 'C')

/** Complete a plane by its normal, a chain by two: z for the xy-plane, y and z for a chain along ±x. */
function withNormals(rows: readonly Vec3[]): Mat3 {
  if (rows.length === 3) return rows as unknown as Mat3
  if (rows.length === 2) return [rows[0], rows[1], unitUpwards(cross(rows[0], rows[1]))]
  const along = unitUpwards(rows[0])
  const reference: Vec3 = Math.abs(along[2]) < 0.9 ? [0, 0, 1] : [1, 0, 0]
  const up = unit(subtract(reference, scale(along, dot(reference, along))))
  return [rows[0], tidy(cross(up, along)), up]
}

const unit = (u: Vec3): Vec3 => tidy(scale(u, 1 / norm(u)))

/** The unit vector along ±u whose last component other than 0 is positive. */
function unitUpwards(u: Vec3): Vec3 {
  const last = u[2] || u[1] || u[0]
  return unit(last < 0 ? scale(u, -1) : u)
}

/** Unit vector along c, with exact zeros and ones wherever two angles are right. */
function directionOfC(alpha: number, beta: number, gamma: number): Vec3 {
  const [ca, cb, cg] = [alpha, beta, gamma].map(cosDegrees)
  if (ca === 0 && cb === 0) return [0, 0, 1]
  if (ca === 0 && cg === 0) return [cb, 0, sinDegrees(beta)]
  if (cb === 0 && cg === 0) return [0, ca, sinDegrees(alpha)]
  const sg = sinDegrees(gamma)
  // The cell's volume over abc, as a product of sines that does not cancel for flat cells.
  const s = (alpha + beta + gamma) / 2
  const square = 4 * sinDegrees(s) * sinDegrees(s - alpha) * sinDegrees(s - beta) * sinDegrees(s - gamma)
  return [cb, (ca - cb * cg) / sg, Math.sqrt(Math.max(0, square)) / sg]
}

/** Lengths and angles of three vectors. */
export function cellParameters(rows: Mat3): CellParameters {
  const degrees = (i: number, j: number) => Math.round(angle(rows[i], rows[j]) * ANGLE_STEP) / ANGLE_STEP
  return {
    a: norm(rows[0]),
    b: norm(rows[1]),
    c: norm(rows[2]),
    alpha: degrees(1, 2),
    beta: degrees(0, 2),
    gamma: degrees(0, 1),
  }
}

/** Position of an atom from fractions of the rows. */
export const positionFromFraction = (fraction: Vec3, rows: Mat3): Vec3 => combine(fraction, rows)
/** Fractions of direct vectors; `reciprocal` is the matrix that belongs to them. */
export const fractionFromPosition = (position: Vec3, reciprocal: Mat3): Vec3 =>
  tidy(scale(apply(reciprocal, position), 1 / (2 * Math.PI)))

/** Cartesian k from fractions of reciprocal vectors. */
export const kFromFraction = (fraction: Vec3, reciprocal: Mat3): Vec3 => combine(fraction, reciprocal)
/** Fractions of reciprocal vectors; `rows` are the direct vectors that belong to them. */
export const fractionFromK = (k: Vec3, rows: Mat3): Vec3 => tidy(scale(apply(rows, k), 1 / (2 * Math.PI)))

/** Atom fractions of the conventional cell as fractions of the primitive one, and back. */
export const atomToPrimitive = (fraction: Vec3, lattice: Lattice): Vec3 =>
  tidy(combine(fraction, lattice.conventionalFromPrimitive))
export const atomToConventional = (fraction: Vec3, lattice: Lattice): Vec3 =>
  tidy(combine(fraction, lattice.primitiveFromConventional))

/** k-fractions of the conventional reciprocal vectors as fractions of the primitive ones, and back. */
export const kToPrimitive = (fraction: Vec3, lattice: Lattice): Vec3 =>
  tidy(apply(lattice.primitiveFromConventional, fraction))
export const kToConventional = (fraction: Vec3, lattice: Lattice): Vec3 =>
  tidy(apply(lattice.conventionalFromPrimitive, fraction))
