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

/** Joints of a piece once, both ends at a break. */
export function pathPoints(segments: readonly KnownSegment[]): PathPoint[] {
  const points: PathPoint[] = []
  const push = (point: Omit<PathPoint, 'index'>) => points.push({ ...point, index: points.length })
  for (const [i, { piece, from, to, start, length, steps }] of segments.entries()) {
    if (segments[i - 1]?.piece !== piece) push({ piece, distance: start, ...placeOf(from) })
    for (let step = 1; step < steps; step++) {
      const t = step / steps
      const between = (u: Vec3, v: Vec3) => add(u, scale(subtract(v, u), t))
      push({
        piece,
        distance: start + t * length,
        fraction: between(from.fraction, to.fraction),
        cartesian: between(from.cartesian, to.cartesian),
      })
    }
    push({ piece, distance: start + length, ...placeOf(to) })
  }
  return points
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
