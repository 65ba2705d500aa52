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
  add,
  apply,
  combine,
  cross,
  dot,
  IDENTITY,
  inverse,
  type Mat3,
  mapMatrix,
  norm,
  scale,
  subtract,
  tidy,
  transpose,
  type Vec3,
} from './vector.ts'
import { fold, leavesZone, type Zone } from './zone.ts'

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

export interface SymmetryLine {
  /** Symmetry points at its ends; none lies between. `from` is in the first zone, `to` may lie beyond. */
  readonly from: Vec3
  readonly to: Vec3
  /** Order of the group that leaves each of its points alone up to a reciprocal vector. */
  readonly order: number
  /** Where it leaves the first zone before its end: the part of its length, and the k-point. */
  readonly leaves?: { readonly at: number; readonly fraction: Vec3 }
}

/**
 * Every inequivalent symmetry line of a lattice, from one symmetry point to the next along it, those from Γ first. No
 * line of any of the lattice types is without symmetry points, so they are found from these.
 * @param holohedry the k-group of the lattice alone.
 */
export function symmetryLines(holohedry: readonly Mat3[], zone: Zone): SymmetryLine[] {
  const { dimension } = zone
  const lines: SymmetryLine[] = []
  const known = new Set<string>()
  for (const { twelfths } of pointsInTwelfths(holohedry, dimension)) {
    const little = littleCoGroup(scale(twelfths, 1 / TWELFTHS), holohedry)
    for (const direction of fixedDirections(little, dimension)) {
      const along = scale(direction, stepsToNextPoint(twelfths, direction, holohedry, dimension))
      const name = nameOfLine(twelfths, along, holohedry, dimension)
      if (known.has(name)) continue
      known.add(name)
      const { fraction: from, shift } = fold(zone, scale(twelfths, 1 / TWELFTHS))
      const to = subtract(scale(add(twelfths, along), 1 / TWELFTHS), shift)
      const order = little.filter(R => isZero(subtract(apply(R, direction), direction), 0)).length
      lines.push({ from, to, order, leaves: leavesAt(zone, from, to) })
    }
  }
  return lines
}

/** The directions, as shortest whole vectors of either sign, that some subgroup leaves as the only ones. */
function fixedDirections(group: readonly Mat3[], dimension: Dimension): Vec3[] {
  const normals: Vec3[] = IDENTITY.slice(dimension)
  const directions = new Map<string, Vec3>()
  const keep = (v: Vec3) => {
    if (norm(v) === 0 || v.slice(dimension).some(x => x !== 0)) return
    const direction = lowestTerms(v)
    directions.set(String(direction), direction)
    directions.set(String(tidy(scale(direction, -1))), tidy(scale(direction, -1)))
  }
  for (const R of group) {
    // Fixed vectors are at right angles to every row of R − 1: one row up to multiples leaves a plane, two a line.
    const rows = R.map((row, i) => subtract(row, IDENTITY[i])).filter(row => norm(row) > 0)
    if (rows.length === 0) continue
    const line = pairs(rows)
      .map(([u, v]) => cross(u, v))
      .find(v => norm(v) > 0)
    if (!line) normals.push(rows[0])
    else if (rows.every(row => dot(row, line) === 0)) keep(line)
  }
  for (const [u, v] of pairs(normals)) keep(cross(u, v))
  return [...directions.values()]
}

const pairs = <T>(list: readonly T[]): (readonly [T, T])[] =>
  list.flatMap((u, i) => list.slice(0, i).map(v => [v, u] as const))

/** Without a common factor. */
function lowestTerms(v: Vec3): Vec3 {
  const common = Math.abs(v.reduce(gcd))
  return tidy([v[0] / common, v[1] / common, v[2] / common])
}

const gcd = (p: number, q: number): number => (q === 0 ? p : gcd(q, p % q))

/** How many twelfths of a direction lead from one symmetry point to the next: at most six, since −1 is a symmetry. */
function stepsToNextPoint(
  twelfths: Vec3,
  direction: Vec3,
  holohedry: readonly Mat3[],
  dimension: Dimension,
): number {
  for (let steps = 1; steps < TWELFTHS; steps++) {
    const k = scale(add(twelfths, scale(direction, steps)), 1 / TWELFTHS)
    if (freedom(k, holohedry, dimension) === 0) return steps
  }
  return TWELFTHS
}

/** One text for a line and all that the rotations and a change of its ends make of it. */
function nameOfLine(from: Vec3, along: Vec3, holohedry: readonly Mat3[], dimension: Dimension): string {
  const names = holohedry.flatMap(R => {
    const [start, step] = [apply(R, from), apply(R, along)]
    const back = tidy(scale(step, -1))
    return [`${indexOf(start, dimension)}:${step}`, `${indexOf(add(start, step), dimension)}:${back}`]
  })
  return names.sort()[0]
}

function leavesAt(zone: Zone, from: Vec3, to: Vec3): SymmetryLine['leaves'] {
  const exit = leavesZone(zone, combine(from, zone.reciprocal), combine(to, zone.reciprocal))
  return exit && { at: exit.at, fraction: add(from, scale(subtract(to, from), exit.at)) }
}
