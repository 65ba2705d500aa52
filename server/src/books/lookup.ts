/** Questions that rules and hovers ask of a matched book. */
import {
  add,
  apply,
  combine,
  dot,
  IDENTITY,
  type Mat3,
  norm,
  scale,
  subtract,
  tidy,
  type Vec3,
} from '../crystal/vector.ts'
import type { BookMatch, BookPoint } from './match.ts'

export interface Lookup {
  /** The user's primitive reciprocal vectors, one a row. */
  readonly reciprocal: Mat3
  /** How near is at: a Cartesian distance, in the unit of `reciprocal`. */
  readonly tolerance: number
  /** Rotations that count, on columns of k-fractions (`match.holohedry`, or the crystal's own); none where absent. */
  readonly kRotations?: readonly Mat3[]
}

/** fraction = rotation · point + G */
export interface PointFound {
  readonly point: BookPoint
  readonly by: 'identity' | 'reciprocal vector' | 'rotation'
  readonly rotation: Mat3
  /** Whole numbers. */
  readonly G: Vec3
}

/**
 * The point of the book that a k-fraction is, or is equivalent to. A point that needs no rotation is preferred to one
 * that does, one without a reciprocal vector to one with.
 */
export function bookPointAt(match: BookMatch, fraction: Vec3, lookup: Lookup): PointFound | undefined {
  let found: PointFound | undefined
  for (const point of match.points) {
    const G = wholeDifference(fraction, point.fraction, lookup)
    if (!G) continue
    if (G.every(x => x === 0)) return { point, by: 'identity', rotation: IDENTITY, G }
    found ??= { point, by: 'reciprocal vector', rotation: IDENTITY, G }
  }
  if (found) return found
  for (const point of match.points)
    for (const rotation of lookup.kRotations ?? []) {
      const G = wholeDifference(fraction, apply(rotation, point.fraction), lookup)
      if (G) return { point, by: 'rotation', rotation, G }
    }
  return undefined
}

/** The reciprocal vector that leads from q to p. */
function wholeDifference(p: Vec3, q: Vec3, { reciprocal, tolerance }: Lookup): Vec3 | undefined {
  const difference = subtract(p, q)
  const G = tidy(rounded(difference))
  return norm(combine(subtract(difference, G), reciprocal)) <= tolerance ? G : undefined
}

const rounded = (v: Vec3): Vec3 => [Math.round(v[0]), Math.round(v[1]), Math.round(v[2])]

export interface LineFound {
  /** The book's letter (`Δ`) or, for a segment of its path, the two ends (`Γ–X`). */
  readonly name: string
  readonly from: Vec3
  readonly to: Vec3
  /** How much of the way from `from` to `to` the equivalent point lies. */
  readonly at: number
}

/** The book's symmetry lines and the segments of its path on which a k-fraction, or an equivalent of it, lies. */
export function linesThrough(match: BookMatch, fraction: Vec3, lookup: Lookup): LineFound[] {
  const images = (lookup.kRotations ?? [IDENTITY]).map(rotation => apply(rotation, fraction))
  const named = match.lines.map(({ label, from, to }) => ({ name: label, from, to }))
  const places = new Map(match.points.map(point => [point.label, point.fraction]))
  const segments = pathSegments(match).map(([from, to]) => ({
    name: `${from}–${to}`,
    from: places.get(from)!,
    to: places.get(to)!,
  }))
  return [...named, ...segments].flatMap(line => {
    const at = firstDefined(images, image => placeOnSegment(image, line.from, line.to, lookup))
    return at === undefined ? [] : [{ ...line, at }]
  })
}

function firstDefined<T, R>(items: readonly T[], f: (item: T) => R | undefined): R | undefined {
  for (const item of items) {
    const result = f(item)
    if (result !== undefined) return result
  }
  return undefined
}

/** Where on a segment some k + G lies, 0 … 1; undefined where none does. */
function placeOnSegment(
  k: Vec3,
  from: Vec3,
  to: Vec3,
  { reciprocal, tolerance }: Lookup,
): number | undefined {
  const along = subtract(to, from)
  const alongCartesian = combine(along, reciprocal)
  const square = dot(alongCartesian, alongCartesian)
  if (square === 0) return undefined
  const offset = subtract(k, from)
  for (const G of shiftsInto(offset, along)) {
    const shifted = combine(add(offset, G), reciprocal)
    const at = Math.min(1, Math.max(0, dot(shifted, alongCartesian) / square))
    if (norm(subtract(shifted, scale(alongCartesian, at))) <= tolerance) return at
  }
  return undefined
}

/** Components of a point on the segment lie between 0 and those of `along`; this much more may be rounding. */
const MARGIN = 1e-3

function shiftsInto(offset: Vec3, along: Vec3): Vec3[] {
  const choices = offset.map((x, i) => {
    const least = Math.ceil(Math.min(0, along[i]) - MARGIN - x)
    const most = Math.floor(Math.max(0, along[i]) + MARGIN - x)
    return Array.from({ length: Math.max(0, most - least + 1) }, (_, step) => least + step)
  })
  return choices[0].flatMap(i => choices[1].flatMap(j => choices[2].map((k): Vec3 => [i, j, k])))
}

/** Which of other books have this letter at this point (the matches are of one and the same lattice). */
export const labelInOtherBooks = (
  label: string,
  fraction: Vec3,
  others: readonly BookMatch[],
  lookup: Lookup,
): BookMatch[] =>
  others.filter(match => {
    const point = match.points.find(candidate => candidate.label === label)
    return point !== undefined && bookPointAt({ ...match, points: [point] }, fraction, lookup) !== undefined
  })

/** The pairs of labels joined by the book's path, as they follow each other. */
export const pathSegments = ({ path }: BookMatch): [string, string][] =>
  path.flatMap(piece => piece.slice(1).map((to, i): [string, string] => [piece[i], to]))

/** Does the book's path join two labels, in either direction? */
const isJoined = (match: BookMatch, a: string, b: string): boolean =>
  pathSegments(match).some(([from, to]) => (from === a && to === b) || (from === b && to === a))

/** Do two labels stand on the two sides of a break in the book's path, and are joined nowhere in it (U | K)? */
export function areAcrossBreak(match: BookMatch, a: string, b: string): boolean {
  const { path } = match
  const breaks = path.slice(1).map((piece, i) => [path[i].at(-1), piece[0]])
  const across = breaks.some(([left, right]) => (left === a && right === b) || (left === b && right === a))
  return across && !isJoined(match, a, b)
}

export interface OtherParameter {
  readonly name: string
  /** What the coordinates say. */
  readonly value: number
  /** What it is in this lattice. */
  readonly expected: number
}

/**
 * The parameter values with which a point of the book would stand at `fraction`: those of the crystal that coordinates
 * were copied from. undefined where the point depends on no parameter or where no values fit.
 */
export function otherParameters(
  match: BookMatch,
  label: string,
  fraction: Vec3,
  { reciprocal, tolerance }: Lookup,
): OtherParameter[] | undefined {
  const point = match.points.find(candidate => candidate.label === label)
  if (!point?.parameterDependent) return undefined
  const used = point.slopes.flatMap((slope, i) => (slope.some(x => x !== 0) ? [i] : []))
  const offset = subtract(fraction, point.fraction)
  const changes = leastSquares(
    used.map(i => point.slopes[i]),
    offset,
  )
  if (!changes) return undefined
  const rest = used.reduce((left, i, j) => subtract(left, scale(point.slopes[i], changes[j])), offset)
  if (norm(combine(rest, reciprocal)) > tolerance) return undefined
  return used.map((i, j) => {
    const { name, value } = match.parameters[i]
    return { name, value: value + changes[j], expected: value }
  })
}

/** One or two coefficients that bring columns nearest to a vector; no point of a book depends on three parameters. */
function leastSquares(columns: readonly Vec3[], target: Vec3): number[] | undefined {
  const [u, v] = columns
  if (columns.length === 1) return [dot(u, target) / dot(u, u)]
  if (columns.length !== 2) return undefined
  const d = dot(u, u) * dot(v, v) - dot(u, v) ** 2
  if (d === 0) return undefined
  return [
    (dot(v, v) * dot(u, target) - dot(u, v) * dot(v, target)) / d,
    (dot(u, u) * dot(v, target) - dot(u, v) * dot(u, target)) / d,
  ]
}
