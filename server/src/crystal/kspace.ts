/**
 * What a group of rotations does to k-points: stars, little co-groups, equivalence, symmetry points, lines and planes.
 *
 * A k-point is a column of fractions of the reciprocal vectors. A *k-group* is a list of whole-numbered matrices on such
 * columns, identity first, as `kRotations` makes it. Of a sheet or a chain only the upper left part acts; the rest is
 * that of the unit matrix.
 *
 * C. J. Bradley and A. P. Cracknell, *The Mathematical Theory of Symmetry in Solids* (1972), chapter 3, for the terms.
 */
import type { Dimension } from './reduction.ts'
import {
  apply,
  IDENTITY,
  inverse,
  type Mat3,
  mapMatrix,
  scale,
  subtract,
  tidy,
  transpose,
  type Vec3,
} from './vector.ts'
import { fold, type Zone } from './zone.ts'

/**
 * Two k-points are one when no component differs by more than this, in parts of the reciprocal vectors. A simple
 * fraction written to six digits counts as exact, even after a rotation has added up three of its errors; one written
 * to five does not.
 */
export const K_TOLERANCE = 2e-6

/**
 * The k-group of a crystal: the distinct matrices W⁻ᵀ of its rotations, and their negatives where k and −k are alike.
 * @param rotations W on columns of atomic fractions, whole-numbered; a group.
 */
export function kRotations(rotations: readonly Mat3[], timeReversal: boolean, dimension: Dimension): Mat3[] {
  const distinct = new Map<string, Mat3>()
  const join = (R: Mat3) => {
    const induced = periodicPart(R, dimension)
    distinct.set(String(induced), induced)
  }
  join(IDENTITY)
  for (const W of rotations) join(transpose(inverse(W)))
  if (timeReversal) for (const R of [...distinct.values()]) join(mapMatrix(R, x => -x))
  return [...distinct.values()]
}

const periodicPart = (R: Mat3, dimension: Dimension): Mat3 =>
  R.map((row, i) =>
    row.map((x, j) => (i < dimension && j < dimension ? Math.round(x) + 0 : i === j ? 1 : 0)),
  ) as unknown as Mat3

const isWhole = (x: number, tolerance: number): boolean => Math.abs(x - Math.round(x)) <= tolerance

/** Is a difference of k-points a reciprocal vector? */
const isReciprocalVector = (d: Vec3, tolerance: number): boolean =>
  isWhole(d[0], tolerance) && isWhole(d[1], tolerance) && isWhole(d[2], tolerance)

const isZero = (d: Vec3, tolerance: number): boolean =>
  Math.abs(d[0]) <= tolerance && Math.abs(d[1]) <= tolerance && Math.abs(d[2]) <= tolerance

/** The rotations that carry k into itself or into k + G. */
export const littleCoGroup = (k: Vec3, group: readonly Mat3[], tolerance = K_TOLERANCE): Mat3[] =>
  group.filter(R => isReciprocalVector(subtract(apply(R, k), k), tolerance))

/** The images of k that differ by more than a reciprocal vector, k itself first. */
export function star(k: Vec3, group: readonly Mat3[], tolerance = K_TOLERANCE): Vec3[] {
  const points: Vec3[] = []
  for (const R of group) {
    const image = apply(R, k)
    if (!points.some(point => isReciprocalVector(subtract(image, point), tolerance))) points.push(image)
  }
  return points
}

/**
 * How many dimensions a group of rotations about a point leaves alone: the mean of the traces (the number of times the
 * unit representation is in that of the vectors).
 */
export function fixedDimensions(group: readonly Mat3[], dimension: Dimension): Dimension | 0 {
  const traces = group.reduce((sum, R) => sum + R[0][0] + R[1][1] + R[2][2], 0)
  return (Math.round(traces / group.length) - (3 - dimension)) as Dimension | 0
}

/**
 * What kind of point k is: 0 for a symmetry point, 1 on a symmetry line, 2 on a symmetry plane, in a crystal of fewer
 * dimensions than that (or 3) a general point.
 * @param holohedry the k-group of the lattice alone.
 */
export const freedom = (
  k: Vec3,
  holohedry: readonly Mat3[],
  dimension: Dimension,
  tolerance = K_TOLERANCE,
): Dimension | 0 => fixedDimensions(littleCoGroup(k, holohedry, tolerance), dimension)

export interface Equivalence {
  /** to = rotation · from + G */
  readonly rotation: Mat3
  /** Whole numbers. */
  readonly G: Vec3
}

/** How one k-point is carried into another; by a reciprocal vector alone where that will do. */
export function areEquivalent(
  from: Vec3,
  to: Vec3,
  group: readonly Mat3[],
  tolerance = K_TOLERANCE,
): Equivalence | undefined {
  for (const rotation of group) {
    const d = subtract(to, apply(rotation, from))
    if (isReciprocalVector(d, tolerance)) return { rotation, G: rounded(d) }
  }
  return undefined
}

const rounded = (d: Vec3): Vec3 => tidy([Math.round(d[0]), Math.round(d[1]), Math.round(d[2])])

export type Ends = readonly [from: Vec3, to: Vec3]

/**
 * How one segment is carried into another, as a whole and by one and the same reciprocal vector: the bands along the
 * two are the same. `reversed` where its ends change places.
 */
export function areEquivalentSegments(
  segment: Ends,
  other: Ends,
  group: readonly Mat3[],
  tolerance = K_TOLERANCE,
): (Equivalence & { readonly reversed: boolean }) | undefined {
  for (const reversed of [false, true]) {
    const [from, to] = reversed ? [other[1], other[0]] : other
    const along = subtract(to, from)
    for (const rotation of group) {
      if (!isZero(subtract(apply(rotation, subtract(segment[1], segment[0])), along), tolerance)) continue
      const d = subtract(from, apply(rotation, segment[0]))
      if (isReciprocalVector(d, tolerance)) return { rotation, G: rounded(d), reversed }
    }
  }
  return undefined
}

export interface SegmentSymmetry {
  /** Rotations that leave every point of the segment alone up to one and the same reciprocal vector. */
  readonly group: Mat3[]
  /** 1 on a symmetry line, 2 in a symmetry plane; in a crystal of fewer dimensions than that (or 3) neither. */
  readonly freedom: Dimension | 0
}

/** Whether the inside of a segment lies on a symmetry line or in a symmetry plane of a k-group. */
export function segmentSymmetry(
  [from, to]: Ends,
  group: readonly Mat3[],
  dimension: Dimension,
  tolerance = K_TOLERANCE,
): SegmentSymmetry {
  const along = subtract(to, from)
  const kept = group.filter(
    R =>
      isZero(subtract(apply(R, along), along), tolerance) &&
      isReciprocalVector(subtract(apply(R, from), from), tolerance),
  )
  return { group: kept, freedom: fixedDimensions(kept, dimension) }
}

export interface SymmetryPoint {
  /** Exact twelfths, folded into the first zone. */
  readonly fraction: Vec3
  readonly littleCoGroup: number
  readonly star: number
}

/**
 * Denominator of all symmetry points. Summing R k = k + G over a group of order h without a fixed direction gives
 * 0 = h k + G′, and every such group contains one of 1̄, 222, 4̄, 32, 6̄ (in the plane 2 or 3), whose orders divide 12.
 */
const TWELFTHS = 12

/** Every inequivalent symmetry point of a lattice, Γ first. `holohedry` is the k-group of the lattice alone. */
export function symmetryPoints(holohedry: readonly Mat3[], zone: Zone): SymmetryPoint[] {
  return pointsInTwelfths(holohedry, zone.dimension).map(({ twelfths, order }) => ({
    fraction: fold(zone, scale(twelfths, 1 / TWELFTHS)).fraction,
    littleCoGroup: order,
    star: holohedry.length / order,
  }))
}

interface TwelfthsPoint {
  readonly twelfths: Vec3
  readonly order: number
}

function pointsInTwelfths(holohedry: readonly Mat3[], dimension: Dimension): TwelfthsPoint[] {
  const seen = new Uint8Array(TWELFTHS ** dimension)
  const [n1, n2, n3] = [0, 1, 2].map(i => (i < dimension ? TWELFTHS : 1))
  const points: TwelfthsPoint[] = []
  for (let i = 0; i < n1; i++)
    for (let j = 0; j < n2; j++)
      for (let k = 0; k < n3; k++) {
        const twelfths: Vec3 = [i, j, k]
        const here = indexOf(twelfths, dimension)
        if (seen[here]) continue
        const little: Mat3[] = []
        for (const R of holohedry) {
          const image = indexOf(apply(R, twelfths), dimension)
          seen[image] = 1
          if (image === here) little.push(R)
        }
        if (fixedDimensions(little, dimension) === 0) points.push({ twelfths, order: little.length })
      }
  return points
}

/** Number of a point of the grid of twelfths, modulo reciprocal vectors. */
function indexOf(twelfths: Vec3, dimension: Dimension): number {
  let index = 0
  for (let i = 0; i < dimension; i++) index = index * TWELFTHS + modulo(twelfths[i], TWELFTHS)
  return index
}

const modulo = (x: number, n: number): number => ((x % n) + n) % n
