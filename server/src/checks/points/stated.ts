/** The numbers of points as the file states them, and how well they are known. */
import { combine, inverse, norm, tidy, type Vec3 } from '../../crystal/vector.ts'
import { placeInZone } from '../../crystal/zone.ts'
import type { NumberValue, PointEntry } from '../../format/model.ts'
import type { Crystal } from '../../meaning/crystal.ts'
import { nearness, type Stated } from '../../meaning/placing.ts'
import { uncertainty } from '../../meaning/rounding.ts'

/** The numbers of a point with the axes that they refer to; undefined where they cannot be read. */
export function statedOf(crystal: Crystal, { coordinates }: PointEntry): Stated | undefined {
  const numbers = crystal.componentsInSpace(coordinates)
  const axes = crystal.pointAxes
  if (!coordinates || !numbers || !axes) return undefined
  return { values: coordinates.items.slice(0, crystal.dimension) as NumberValue[], numbers, axes }
}

/** The numbers with which the file would state a place. */
export const numbersOf = (
  crystal: Crystal,
  fraction: Vec3,
  axes = crystal.pointAxes ?? crystal.lattice!.reciprocal,
): Vec3 => tidy(combine(crystal.cartesianOf(fraction), inverse(axes)))

/** How well a point is known from the digits written: each fraction, and as a distance in inverse length. */
export interface Slack {
  readonly fraction: number
  readonly k: number
}
export const EXACT: Slack = { fraction: 0, k: 0 }

/** By how much a point is uncertain for the digits that were written. */
export function slackOf(crystal: Crystal, { values, axes }: Stated): Slack {
  let fraction = 0
  let k = 0
  values.forEach((value, i) => {
    const doubt = uncertainty(value)
    if (doubt === 0) return
    fraction += doubt * Math.max(...crystal.fractionOf(axes[i]).map(Math.abs))
    k += doubt * norm(axes[i])
  })
  return { fraction, k }
}

/**
 * How far beyond the first zone a point lies, in inverse length; undefined inside, on the boundary, and where neither
 * the digits written nor the file's tolerance tell it from the boundary.
 */
export function excessOf(crystal: Crystal, fraction: Vec3, slack = EXACT): number | undefined {
  const { zone } = crystal
  if (!zone) return undefined
  const k = crystal.cartesianOf(fraction)
  const { place, excess } = placeInZone(zone, k)
  return place === 'outside' && excess > slack.k + nearness(crystal, k) ? excess : undefined
}
