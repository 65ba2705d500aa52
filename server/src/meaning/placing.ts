/**
 * Where a k-point lies among the labels, lines and planes of its lattice. Rules, hovers and the report all ask here.
 * k is Cartesian, in inverse units of the file's length with the 2π; fractions are those of the primitive reciprocal
 * vectors. Labels are matched by reciprocal vectors and the holohedry.
 */
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
import type { Zone } from '../crystal/zone.ts'
import type { NumberValue } from '../format/model.ts'
import type { Crystal } from './crystal.ts'
import { isRoundingOf, LARGEST_K_SHIFT } from './rounding.ts'
import { acrossLine, isOn, lowestTerms, wholeDirection } from './whole-vectors.ts'

/** Every equivalent of every point of a book, modulo reciprocal vectors. */
interface Atlas {
  readonly points: readonly BookPoint[]
  readonly images: readonly { readonly point: BookPoint; readonly fraction: Vec3 }[]
  readonly byLabel: ReadonlyMap<string, { readonly point: BookPoint; readonly images: readonly Vec3[] }>
}

/** A match depends on the lattice alone, and outlives the edits of points. */
const atlases = new WeakMap<BookMatch, Atlas>()

function atlasOf(match: BookMatch): Atlas {
  let atlas = atlases.get(match)
  if (!atlas) {
    const byLabel = new Map(
      match.points.map(point => [point.label, { point, images: star(point.fraction, match.holohedry) }]),
    )
    const images = [...byLabel.values()].flatMap(({ point, images }) =>
      images.map(fraction => ({ point, fraction })),
    )
    atlas = { points: match.points, images, byLabel }
    atlases.set(match, atlas)
  }
  return atlas
}

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
  const only = label === undefined ? undefined : atlas.byLabel.get(label)
  if (!lattice || (label !== undefined && !only)) return undefined
  const { primitive, reciprocal } = lattice
  const k = combine(stated.numbers, stated.axes)
  const fraction = scale(apply(primitive, k), 1 / (2 * Math.PI))
  const largest = LARGEST_K_SHIFT * crystal.angstrom
  // |δfᵢ| = |δk·aᵢ|/2π ≤ |δk||aᵢ|/2π: a quick look before the exact one.
  const [l0, l1, l2] = primitive.map(a => K_TOLERANCE + (largest * norm(a)) / (2 * Math.PI))
  const near = nearness(crystal, k)
  const isFractional = stated.axes === reciprocal || stated.axes === lattice.conventionalReciprocal
  let best: Fit | undefined
  const isExact = (point: BookPoint, image: Vec3): boolean => {
    const d0 = toNearest(fraction[0] - image[0])
    if (Math.abs(d0) > l0) return false
    const d1 = toNearest(fraction[1] - image[1])
    if (Math.abs(d1) > l1) return false
    const d2 = toNearest(fraction[2] - image[2])
    if (Math.abs(d2) > l2) return false
    const miss: Vec3 = [d0, d1, d2]
    const fit = (how: Fit['how']): Fit => ({
      label: point.label,
      point,
      fraction: subtract(fraction, miss),
      how,
    })
    if (isNothing(miss)) {
      best = fit('exact')
      return true
    }
    const shift = combine(miss, reciprocal)
    const size = norm(shift)
    if (best || size > largest) return false
    if (size <= near && (point.parameterDependent || !isFractional)) best = fit('near')
    else if (isWritten(stated, shift)) best = fit('rounded')
    return false
  }
  if (only) only.images.some(image => isExact(only.point, image))
  else atlas.images.some(({ point, fraction: image }) => isExact(point, image))
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

/** Are the digits written those of the place that lies `shift` before them? */
function isWritten({ values, numbers, axes }: Stated, shift: Vec3): boolean {
  const volume = dot(axes[0], cross(axes[1], axes[2]))
  return values.every((value, i) => {
    const across = cross(axes[(i + 1) % 3], axes[(i + 2) % 3])
    const miss = dot(shift, across) / volume
    return Math.abs(miss) <= K_TOLERANCE / 1000 || isRoundingOf(value, numbers[i] - miss)
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
  const { points, images } = atlasOf(book)
  return (
    points.find(point => isAt(point, point.fraction, false)) ??
    images.find(image => isAt(image.point, image.fraction, true))?.point
  )
}

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
  const look = (point: BookPoint, image: Vec3) => {
    const miss = shortestEquivalent(zone, subtract(k, crystal.cartesianOf(image)))
    const size = norm(miss)
    // The first of several at one distance wins, whatever rounding does.
    if (!best || size < best.size - K_TOLERANCE * zone.inradius) best = { point, size, miss }
  }
  if (label === undefined) for (const { point, fraction } of atlas.images) look(point, fraction)
  else {
    const only = atlas.byLabel.get(label)
    for (const image of only?.images ?? []) look(only!.point, image)
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

/** The book points, equivalents counted, on the straight line between two places (fractions), ends included, in order. */
export function bookPointsAlong(match: BookMatch, [from, to]: Ends): Passed[] {
  const along = subtract(to, from)
  const main = along.reduce((best, x, i) => (Math.abs(x) > Math.abs(along[best]) ? i : best), 0)
  const step = along[main]
  if (step === 0) return []
  const passed: Passed[] = []
  const slack = K_TOLERANCE / Math.abs(step)
  for (const { point, fraction } of atlasOf(match).images) {
    const start = fraction[main] - from[main]
    const [low, high] = step > 0 ? [-start, step - start] : [step - start, -start]
    for (let whole = Math.ceil(low - K_TOLERANCE); whole <= high + K_TOLERANCE; whole++) {
      const at = (start + whole) / step
      if (at < -slack || at > 1 + slack) continue
      const place = add(from, scale(along, at))
      if (!isNothing(roundedDifference(place, fraction))) continue
      if (passed.some(other => other.point === point && Math.abs(other.at - at) <= slack)) continue
      passed.push({ point, at, fraction: place })
    }
  }
  return passed.sort((p, q) => p.at - q.at)
}

const roundedDifference = (u: Vec3, v: Vec3): Vec3 => [
  toNearest(u[0] - v[0]),
  toNearest(u[1] - v[1]),
  toNearest(u[2] - v[2]),
]

/** The symmetry line on which a point lies. */
export interface LineHere {
  /** The book points between which it lies, the nearer to Γ first. */
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
  const name = nameOfLine(book, fraction)
  if (!before || !after) return { name }
  const ends = [before, after].sort(
    (p, q) => norm(crystal.cartesianOf(p.fraction)) - norm(crystal.cartesianOf(q.fraction)),
  )
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

function nameOfLine(book: BookMatch, fraction: Vec3): string | undefined {
  return book.lines.find(({ from, to }) => {
    const along = wholeDirection(subtract(to, from))
    if (!along) return false
    const across = acrossLine(along)
    return book.holohedry.some(R => isOn(subtract(apply(R, fraction), from), across, K_TOLERANCE))
  })?.label
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
