/** The sampled points of a document's path. */
import { segmentSteps } from '../crystal/path.ts'
import { add, scale, subtract, type Vec3 } from '../crystal/vector.ts'
import type { Crystal, PlacedPoint } from '../meaning/crystal.ts'
import { stepRule, walkedPath } from '../meaning/sampling.ts'

export interface KnownSegment {
  /** Ordinal of the piece, from 0; a segment with an unknown end breaks its piece in two. */
  readonly piece: number
  readonly from: PlacedPoint
  readonly to: PlacedPoint
  /** Distance along the path at its start, inverse length; unbroken over a break. */
  readonly start: number
  readonly length: number
  readonly steps: number
}

/** The segments of the path whose ends are known, in order. */
export function knownSegments(crystal: Crystal): KnownSegment[] {
  const known = walkedPath(crystal).flatMap(({ segments }, piece) =>
    segments.flatMap(({ from, to, length, steps: own }, index) =>
      from && to && length !== undefined ? [{ piece, index, from, to, length, own }] : [],
    ),
  )
  const steps = segmentSteps(known, stepRule(crystal))
  let start = 0
  let piece = -1
  return known.map(({ from, to, length, ...place }, i) => {
    const before = known[i - 1]
    if (before?.piece !== place.piece || before.index !== place.index - 1) piece++
    const segment = { piece, from, to, start, length, steps: steps[i] }
    start += length
    return segment
  })
}

export interface PathPoint {
  /** From 0. */
  readonly piece: number
  /** Among all points of the path, from 0. */
  readonly index: number
  /** Along the path, inverse length. */
  readonly distance: number
  readonly fraction: Vec3
  readonly cartesian: Vec3
  /** Of a joint or an end. */
  readonly label?: string
}

/** Joints of a piece once, both ends at a break. @param visit gets a segment and a step of it, from 0 to its last one. */
function walk(segments: readonly KnownSegment[], visit: (segment: KnownSegment, step: number) => void): void {
  for (const [i, segment] of segments.entries())
    for (let step = segments[i - 1]?.piece === segment.piece ? 1 : 0; step <= segment.steps; step++)
      visit(segment, step)
}

export function pathPoints(segments: readonly KnownSegment[]): PathPoint[] {
  const points: PathPoint[] = []
  walk(segments, ({ piece, from, to, start, length, steps }, step) => {
    const t = step / steps
    const between = (u: Vec3, v: Vec3) => add(u, scale(subtract(v, u), t))
    const place =
      step === 0
        ? placeOf(from)
        : step === steps
          ? placeOf(to)
          : {
              fraction: between(from.fraction, to.fraction),
              cartesian: between(from.cartesian, to.cartesian),
            }
    points.push({ piece, index: points.length, distance: start + t * length, ...place })
  })
  return points
}

/** The places of `pathPoints` alone, for paths of many points. */
export interface PathPlaces {
  /** Three fractions a point. */
  readonly fractions: Float64Array
  /** Of joints and ends, by their ordinals, which rise. */
  readonly labels: ReadonlyMap<number, string>
}

export function pathPlaces(segments: readonly KnownSegment[]): PathPlaces {
  let count = 0
  walk(segments, () => count++)
  const fractions = new Float64Array(3 * count)
  const labels = new Map<number, string>()
  let index = 0
  walk(segments, ({ from, to, steps }, step) => {
    const end = step === 0 ? from : step === steps ? to : undefined
    if (end?.label !== undefined) labels.set(index, end.label)
    const t = step / steps
    for (let axis = 0; axis < 3; axis++) {
      const x = from.fraction[axis]
      fractions[3 * index + axis] = end ? end.fraction[axis] : x + (to.fraction[axis] - x) * t
    }
    index++
  })
  return { fractions, labels }
}

const placeOf = ({ fraction, cartesian, label }: PlacedPoint) => ({ fraction, cartesian, label })

/**
 * For each point of `pathPoints` the unit vector along the segment that it ends or lies in; at the start of a piece, along
 * the one that it begins. The limit at Γ of a polar crystal depends on it. Zero on a segment without length.
 */
export function pointDirections(segments: readonly KnownSegment[]): Vec3[] {
  return segments.flatMap(({ piece, from, to, length, steps }, i) => {
    const along = subtract(to.cartesian, from.cartesian)
    const direction = length > 0 ? scale(along, 1 / length) : along
    const begins = segments[i - 1]?.piece !== piece
    return Array.from({ length: steps + (begins ? 1 : 0) }, () => direction)
  })
}
