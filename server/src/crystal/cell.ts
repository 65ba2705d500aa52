/** A cell's lengths and angles. Angles are in degrees throughout. */

export interface CellParameters {
  readonly a: number
  readonly b: number
  readonly c: number
  readonly alpha: number
  readonly beta: number
  readonly gamma: number
}
export type ParameterName = keyof CellParameters
export const PARAMETER_NAMES = ['a', 'b', 'c', 'alpha', 'beta', 'gamma'] as const

/** Cosine of an angle in degrees, exact where the value is rational (60°, 90°, 120° …): no 6e-17 for cos 90°. */
export function cosDegrees(degrees: number): number {
  const turn = Math.abs(degrees) % 360
  const half = turn > 180 ? 360 - turn : turn
  if (half === 90) return 0
  if (half === 60) return 0.5
  if (half === 120) return -0.5
  return Math.cos((half * Math.PI) / 180)
}

/** Sine of an angle in degrees, exact where the value is rational, and √3/2 for 60° and 120°. */
export function sinDegrees(degrees: number): number {
  const turn = Math.abs(degrees) % 360
  const sign = degrees < 0 !== turn > 180 ? -1 : 1
  const half = turn > 180 ? turn - 180 : turn
  if (half === 0 || half === 180) return 0
  if (half === 30 || half === 150) return sign * 0.5
  if (half === 60 || half === 120) return (sign * Math.sqrt(3)) / 2
  return sign * Math.sin(((half > 90 ? 180 - half : half) * Math.PI) / 180)
}

/** Angles nearer to a flat cell than this, in degrees, are flat: what an expression of angles may lose to rounding. */
const ANGLE_MARGIN = 1e-9

export type AngleName = 'alpha' | 'beta' | 'gamma'

/** Why three angles make no cell, and by how many degrees (0 for a flat cell). */
export interface AngleMiss {
  readonly possible: false
  /**
   * `range`: an angle outside 0°–180°; `sum`: the three add up to 360° or more; `one`: one is not smaller than the
   * sum of the other two.
   */
  readonly reason: 'range' | 'sum' | 'one'
  /** The angle at fault, for `range` and `one`. */
  readonly name?: AngleName
  /** What the angle (or the sum) is, what it must stay beyond or below, and how far it misses; in degrees. */
  readonly value: number
  readonly limit: number
  readonly by: number
}

/**
 * Can a cell have these angles (degrees)? Each lies between 0° and 180°, together they stay under 360°, and each is
 * smaller than the sum of the other two (the three sides of a spherical triangle).
 */
export function anglesPossible(alpha: number, beta: number, gamma: number): { possible: true } | AngleMiss {
  const angles: [AngleName, number][] = [
    ['alpha', alpha],
    ['beta', beta],
    ['gamma', gamma],
  ]
  for (const [name, value] of angles) {
    const limit = value > 90 ? 180 : 0
    const by = limit === 180 ? value - 180 : 0 - value
    if (!(by < -ANGLE_MARGIN)) return { possible: false, reason: 'range', name, value, limit, by }
  }
  const sum = alpha + beta + gamma
  if (!(sum < 360 - ANGLE_MARGIN))
    return { possible: false, reason: 'sum', value: sum, limit: 360, by: sum - 360 }
  for (const [name, value] of angles) {
    const limit = sum - value
    if (!(value < limit - ANGLE_MARGIN))
      return { possible: false, reason: 'one', name, value, limit, by: value - limit }
  }
  return { possible: true }
}
