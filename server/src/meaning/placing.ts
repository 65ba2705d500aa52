/**
 * Where a k-point lies among the labels, lines and planes of its lattice. Rules, hovers and the report all ask here.
 * k is Cartesian, in inverse units of the file's length with the 2π; fractions are those of the primitive reciprocal
 * vectors. Labels are matched by reciprocal vectors and the holohedry.
 */
import { linesThrough } from '../books/lookup.ts'
import type { BookMatch, BookPoint } from '../books/match.ts'
import {
  type Ends,
  fixedDimensions,
  K_TOLERANCE,
  littleCoGroup,
  segmentSymmetry,
  star,
} from '../crystal/kspace.ts'
import {
  add,
  apply,
  combine,
  cross,
  dot,
  type Mat3,
  norm,
  scale,
  subtract,
  type Vec3,
} from '../crystal/vector.ts'
import { fold, type Zone } from '../crystal/zone.ts'
import type { NumberValue } from '../format/model.ts'
import type { Crystal } from './crystal.ts'
import { isRoundingOf, LARGEST_K_SHIFT } from './rounding.ts'
import { lowestTerms } from './whole-vectors.ts'

/** Every equivalent of every point of a book, modulo reciprocal vectors. Flat, because rules go through it at each edit. */
interface Atlas {
  readonly points: readonly BookPoint[]
  /** Fractions of image i are at 3i, 3i + 1, 3i + 2. */
  readonly fractions: Float64Array
  /** The point of which it is an image. */
  readonly owners: readonly BookPoint[]
  /** First and last image (not included) by label. */
  readonly ranges: ReadonlyMap<string, readonly [start: number, end: number]>
}

/** A match depends on the lattice alone, and outlives the edits of points. */
const atlases = new WeakMap<BookMatch, Atlas>()

function atlasOf(match: BookMatch): Atlas {
  let atlas = atlases.get(match)
  if (!atlas) {
    const ranges = new Map<string, [number, number]>()
    const owners: BookPoint[] = []
    const fractions: number[] = []
    for (const point of match.points) {
      const images = star(point.fraction, match.holohedry)
      ranges.set(point.label, [owners.length, owners.length + images.length])
      for (const image of images) {
        owners.push(point)
        fractions.push(...image)
      }
    }
    atlas = { points: match.points, fractions: Float64Array.from(fractions), owners, ranges }
    atlases.set(match, atlas)
  }
  return atlas
}

const wholeOf = ({ owners }: Atlas): readonly [number, number] => [0, owners.length]
const imageAt = ({ fractions }: Atlas, i: number): Vec3 => [
  fractions[3 * i],
  fractions[3 * i + 1],
  fractions[3 * i + 2],
]

/** The k-group of the lattice, on columns of primitive fractions. */
export const latticeGroup = (crystal: Crystal): readonly Mat3[] | undefined =>
  crystal.book?.holohedry ?? crystal.holohedry

/** How the numbers of a point meet a place. */
export interface Fit {
  readonly label: string
  readonly point: BookPoint
  /** The equivalent of the book's point that is meant, as primitive fractions. */
  readonly fraction: Vec3
  /**
   * `exact`: the same numbers; `near`: as near as the file's tolerance lets the lattice be known, where the place depends
   * on it; `rounded`: the digits written are those of the place.
   */
  readonly how: 'exact' | 'near' | 'rounded'
}

/** Numbers with the axes that they refer to, one a row. */
export interface Stated {
  /** One for each dimension. */
  readonly values: readonly NumberValue[]
  readonly numbers: Vec3
  readonly axes: Mat3
}

/**
 * Which point of a book some numbers mean; with `label`, whether they mean an equivalent of that one.
 * A rounding that moves the point by less than 0.02 Å⁻¹ counts, an exact fit goes before it.
 * @param lattice the one that the book was matched to.
 */
export function fitOf(
  crystal: Crystal,
  match: BookMatch,
  stated: Stated,
  label?: string,
  lattice = crystal.lattice,
): Fit | undefined {
  const atlas = atlasOf(match)
  const { fractions, owners } = atlas
  const range = label === undefined ? wholeOf(atlas) : atlas.ranges.get(label)
  if (!lattice || !range) return undefined
  const { primitive, reciprocal } = lattice
  const k = combine(stated.numbers, stated.axes)
  const fraction = scale(apply(primitive, k), 1 / (2 * Math.PI))
  const [f0, f1, f2] = fraction
  const largest = LARGEST_K_SHIFT * crystal.angstrom
  // |δfᵢ| = |δk·aᵢ|/2π ≤ |δk||aᵢ|/2π: a quick look before the exact one.
  const [l0, l1, l2] = primitive.map(a => K_TOLERANCE + (largest * norm(a)) / (2 * Math.PI))
  const near = nearness(crystal, k)
  const isFractional = stated.axes === reciprocal || stated.axes === lattice.conventionalReciprocal
  let best: Fit | undefined
  for (let i = range[0]; i < range[1]; i++) {
    const d0 = toNearest(f0 - fractions[3 * i])
    if (Math.abs(d0) > l0) continue
    const d1 = toNearest(f1 - fractions[3 * i + 1])
    if (Math.abs(d1) > l1) continue
    const d2 = toNearest(f2 - fractions[3 * i + 2])
    if (Math.abs(d2) > l2) continue
    const miss: Vec3 = [d0, d1, d2]
    const point = owners[i]
    const place = subtract(fraction, miss)
    if (isNothing(miss)) return { label: point.label, point, fraction: place, how: 'exact' }
    const shift = combine(miss, reciprocal)
    const size = norm(shift)
    if (best || size > largest) continue
    if (size <= near && (point.parameterDependent || !isFractional))
      best = { label: point.label, point, fraction: place, how: 'near' }
    else if (isWritten(stated, shift)) best = { label: point.label, point, fraction: place, how: 'rounded' }
  }
  return best
}

const toNearest = (x: number): number => x - Math.round(x)
const isNothing = (miss: Vec3): boolean => miss.every(x => Math.abs(x) <= K_TOLERANCE)

/** How far a place moves with the lattice when its vectors move within the file's tolerance, in inverse length. */
export function nearness(crystal: Crystal, k: Vec3): number {
  const { primitive, dimension } = crystal.lattice!
  const shortest = Math.min(...primitive.slice(0, dimension).map(norm))
  return (crystal.tolerance / shortest) * norm(k)
}

/** What arithmetic leaves between two equal numbers of the size of one. */
const SAME_NUMBER = 1e-9

/** Are the digits written those of the place that lies `shift` before them? */
function isWritten({ values, numbers, axes }: Stated, shift: Vec3): boolean {
  const volume = dot(axes[0], cross(axes[1], axes[2]))
  return values.every((value, i) => {
    const across = cross(axes[(i + 1) % 3], axes[(i + 2) % 3])
    const miss = dot(shift, across) / volume
    return Math.abs(miss) <= SAME_NUMBER || isRoundingOf(value, numbers[i] - miss)
  })
}

/** The book point at a place, exactly or within the tolerance; its own coordinates go before those of an equivalent. */
export function bookPointHere(crystal: Crystal, k: Vec3): BookPoint | undefined {
  const { book, lattice } = crystal
  if (!book || !lattice) return undefined
  const fraction = crystal.fractionOf(k)
  const near = nearness(crystal, k)
  const isAt = (point: BookPoint, image: Vec3, reduce: boolean): boolean => {
    const raw = subtract(fraction, image)
    const miss: Vec3 = reduce ? [toNearest(raw[0]), toNearest(raw[1]), toNearest(raw[2])] : raw
    return isNothing(miss) || (point.parameterDependent && norm(crystal.cartesianOf(miss)) <= near)
  }
  const atlas = atlasOf(book)
  const own = atlas.points.find(point => isAt(point, point.fraction, false))
  if (own) return own
  const { owners, fractions } = atlas
  for (let i = 0; i < owners.length; i++) {
    if (Math.abs(toNearest(fraction[0] - fractions[3 * i])) > FAR) continue
    if (isAt(owners[i], imageAt(atlas, i), true)) return owners[i]
  }
  return undefined
}
/** Fractions that differ by more are another point, whatever the tolerance. */
const FAR = 0.05

export interface NearPoint {
  readonly label: string
  readonly point: BookPoint
  /** In inverse units of the file's length. */
  readonly distance: number
  /** The equivalent of the book's point that lies nearest, Cartesian and as primitive fractions. */
  readonly cartesian: Vec3
  readonly fraction: Vec3
}

/** The book point nearest to a place, equivalents counted; with `label`, the nearest equivalent of that one. */
export function nearestBookPoint(crystal: Crystal, k: Vec3, label?: string): NearPoint | undefined {
  const { book, zone } = crystal
  if (!book || !zone) return undefined
  const atlas = atlasOf(book)
  let best: { point: BookPoint; size: number; miss: Vec3 } | undefined
  const range = label === undefined ? wholeOf(atlas) : (atlas.ranges.get(label) ?? [0, 0])
  const inside = fold(zone, crystal.fractionOf(k)).cartesian
  for (let i = range[0]; i < range[1]; i++) {
    const miss = shortestEquivalent(zone, subtract(inside, crystal.cartesianOf(imageAt(atlas, i))))
    const size = norm(miss)
    // The first of several at one distance wins, whatever rounding does.
    if (!best || size < best.size - K_TOLERANCE * zone.inradius) best = { point: atlas.owners[i], size, miss }
  }
  if (!best) return undefined
  const cartesian = subtract(k, best.miss)
  return {
    label: best.point.label,
    point: best.point,
    distance: best.size,
    cartesian,
    fraction: crystal.fractionOf(cartesian),
  }
}

/** k less the reciprocal vector nearest to it: every step shortens it, and the walls' vectors suffice. */
function shortestEquivalent(zone: Zone, k: Vec3): Vec3 {
  let rest = k
  for (let step = 0; step < MOST_STEPS; step++) {
    let excess = zone.tolerance
    let wall: Vec3 | undefined
    for (const { G, distance } of zone.walls) {
      const e = dot(rest, G) / (2 * distance) - distance
      if (e > excess) {
        excess = e
        wall = G
      }
    }
    if (!wall) return rest
    rest = subtract(rest, wall)
  }
  return rest
}
/** A point whose fractions were rounded first is a few steps away from the zone. */
const MOST_STEPS = 100

/** A point of a book on a straight line. */
export interface Passed {
  readonly point: BookPoint
  /** 0 at the line's start, 1 at its end. */
  readonly at: number
  readonly fraction: Vec3
}

/**
 * The book points, equivalents counted, on the straight line between two places (fractions), ends included, in order.
 * None on a line over more than `LONGEST_LINE` reciprocal vectors.
 */
export function bookPointsAlong(match: BookMatch, [from, to]: Ends): Passed[] {
  const along = subtract(to, from)
  const main = along.reduce((best, x, i) => (Math.abs(x) > Math.abs(along[best]) ? i : best), 0)
  const step = along[main]
  if (step === 0 || !(Math.abs(step) <= LONGEST_LINE)) return []
  const passed: Passed[] = []
  const slack = K_TOLERANCE / Math.abs(step)
  const { owners, fractions } = atlasOf(match)
  for (let i = 0; i < owners.length; i++) {
    const start = fractions[3 * i + main] - from[main]
    const [low, high] = step > 0 ? [-start, step - start] : [step - start, -start]
    for (let whole = Math.ceil(low - K_TOLERANCE); whole <= high + K_TOLERANCE; whole++) {
      const at = (start + whole) / step
      if (at < -slack || at > 1 + slack) continue
      if (!isWhole(from[0] + at * along[0] - fractions[3 * i])) continue
      if (!isWhole(from[1] + at * along[1] - fractions[3 * i + 1])) continue
      if (!isWhole(from[2] + at * along[2] - fractions[3 * i + 2])) continue
      if (passed.some(other => other.point === owners[i] && Math.abs(other.at - at) <= slack)) continue
      passed.push({ point: owners[i], at, fraction: add(from, scale(along, at)) })
    }
  }
  return passed.sort((p, q) => p.at - q.at)
}

/** A longer line is a slip of the pen: its points would be counted by the thousand, and nobody would want them named. */
export const LONGEST_LINE = 50

const isWhole = (x: number): boolean => Math.abs(toNearest(x)) <= K_TOLERANCE

/** The symmetry line on which a point lies. */
export interface LineHere {
  /** The book points between which it lies; Γ comes first. */
  readonly ends?: readonly [string, string]
  /** How far from the first end, 0 … 1. */
  readonly part?: number
  /** The book's letter for the line. */
  readonly name?: string
}

/** The symmetry line through a k-point that lies on one and is no symmetry point. */
export function lineHere(crystal: Crystal, k: Vec3, tolerance = K_TOLERANCE): LineHere | undefined {
  const { lattice, book } = crystal
  const group = latticeGroup(crystal)
  if (!lattice || !group) return undefined
  const fraction = crystal.fractionOf(k)
  const little = littleCoGroup(fraction, group, tolerance)
  if (fixedDimensions(little, lattice.dimension) !== 1 || lattice.dimension === 1) return undefined
  const direction = fixedDirection(little, lattice.dimension)
  if (!book) return {}
  // The pattern of points repeats after one whole step.
  const passed = bookPointsAlong(book, [subtract(fraction, direction), add(fraction, direction)])
  const before = passed.findLast(({ at }) => at < HERE)
  const after = passed.find(({ at }) => at > HERE)
  const name = nameOfLine(book, fraction, lattice.reciprocal)
  if (!before || !after) return { name }
  const size = ({ point }: Passed): number => norm(crystal.cartesianOf(point.fraction))
  const ends = [before, after].sort((p, q) => size(p) - size(q))
  const part = Math.abs(HERE - ends[0].at) / (after.at - before.at)
  return { ends: [ends[0].point.label, ends[1].point.label], part, name }
}
/** The point itself is in the middle between one step before and one after it. */
const HERE = 0.5

/** The shortest whole vector along the one direction that a group leaves alone. */
function fixedDirection(group: readonly Mat3[], dimension: number): Vec3 {
  // Summing over the group projects on what it leaves alone.
  const sum = [0, 1, 2].map(i => [0, 1, 2].map(j => group.reduce((total, R) => total + R[i][j], 0)))
  const columns = [0, 1, 2].slice(0, dimension).map(j => sum.map((row, i) => (i < dimension ? row[j] : 0)))
  const column = columns.find(entries => entries.some(x => x !== 0)) ?? [0, 0, 0]
  return lowestTerms(column as unknown as Vec3)
}

/** A line of a book ends: what lies beyond is another one, as S of the face-centred cubic lattice is beyond Σ. */
function nameOfLine(book: BookMatch, fraction: Vec3, reciprocal: Mat3): string | undefined {
  const tolerance = K_TOLERANCE * Math.max(...reciprocal.map(norm))
  const lines = { ...book, path: [] }
  return linesThrough(lines, fraction, { reciprocal, tolerance, kRotations: book.holohedry })[0]?.name
}

/** What a k-point is, in words: `X`, `on the line Γ–X, 0.85 of the way`, `in a symmetry plane`, `a general point`. */
export function describePlace(crystal: Crystal, k: Vec3): string | undefined {
  const { lattice } = crystal
  const group = latticeGroup(crystal)
  if (!lattice || !group) return undefined
  const here = bookPointHere(crystal, k)
  if (here) return here.label
  const little = littleCoGroup(crystal.fractionOf(k), group)
  const free = fixedDimensions(little, lattice.dimension)
  if (free === lattice.dimension) return 'a general point'
  if (free === 0) return 'a symmetry point without a letter'
  if (free === 2) return 'in a symmetry plane'
  return `on ${wordsOfLine(lineHere(crystal, k) ?? {})}`
}

export function wordsOfLine({ ends, part, name }: LineHere): string {
  if (!ends) return name ? `the line ${name}` : 'a symmetry line'
  const letter = name ? ` (${name})` : ''
  return `the line ${ends.join('–')}${letter}, ${part!.toFixed(3).replace(/0+$/, '')} of the way`
}

/**
 * The symmetry element on which the inside of a segment lies: `Γ–X`, with the book's letter where it has one `Δ (Γ–X)`,
 * `symmetry line` where the book knows neither, `symmetry plane`. undefined where it lies on none.
 */
export function lineOfSegment(crystal: Crystal, from: Vec3, to: Vec3): string | undefined {
  const { lattice } = crystal
  const group = latticeGroup(crystal)
  if (!lattice || !group) return undefined
  const ends: Ends = [crystal.fractionOf(from), crystal.fractionOf(to)]
  if (isNothing(subtract(ends[0], ends[1]))) return undefined
  const free = segmentSymmetry(ends, group, lattice.dimension).freedom
  if (free === lattice.dimension) return undefined
  if (free === 2) return 'symmetry plane'
  const line = lineHere(crystal, add(from, scale(subtract(to, from), SOMEWHERE)))
  const between = line?.ends?.join('–')
  if (line?.name) return between ? `${line.name} (${between})` : line.name
  return between ?? 'symmetry line'
}
/** A part of a segment at which no symmetry point lies: none has an irrational fraction. */
const SOMEWHERE = (3 - Math.sqrt(5)) / 2
