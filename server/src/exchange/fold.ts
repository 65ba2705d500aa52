/** k-points folded into the first zone. */
import { combine, norm, type Vec3 } from '../crystal/vector.ts'
import { fold, placeInZone, zoneNumber } from '../crystal/zone.ts'
import type { Crystal } from '../meaning/crystal.ts'

export interface FoldJson {
  /** As it was asked for, in the file's frame of k-points. */
  readonly at: readonly number[]
  /** The shortest equivalent, in fractions of the primitive reciprocal vectors. */
  readonly fraction: readonly number[]
  readonly cartesian: Vec3
  /** Of the equivalent. */
  readonly length: number
  /** Of the point that was asked for. */
  readonly place: 'inside' | 'boundary' | 'outside'
  /** Of the point that was asked for; null beyond the 100,000th. */
  readonly zone: number | null
  /** How many equivalents are equally short: 1 inside the zone, 2 or more on its boundary. */
  readonly ties: number
}

/**
 * @param at components in the file's frame of k-points; along directions without a period 0.
 * @returns undefined where the crystal has no zone or its frame cannot be known.
 */
export function foldPoint(crystal: Crystal, at: Vec3): FoldJson | undefined {
  const { zone, dimension, pointAxes, document } = crystal
  if (!zone || !pointAxes) return undefined
  const k = combine(at, pointAxes)
  // Fractions of the primitive vectors stay as they were written: the way through space would round them.
  const fraction = document.frames.points === 'primitive' ? at : crystal.fractionOf(k)
  const folded = fold(zone, fraction)
  return {
    at: at.slice(0, dimension),
    fraction: folded.fraction.slice(0, dimension),
    cartesian: folded.cartesian,
    length: norm(folded.cartesian),
    place: placeInZone(zone, k).place,
    zone: zoneNumber(zone, k) ?? null,
    ties: folded.ties,
  }
}
