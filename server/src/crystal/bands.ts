/**
 * Empty-lattice bands: the energies of free electrons, E = (ħ²/2mₑ)|k + G|² for every reciprocal-lattice vector G.
 * They show which crossings and degeneracies come from the lattice alone.
 */
import { HBAR2_OVER_2M } from './units.ts'
import { add, dot, norm, scale, subtract, type Vec3 } from './vector.ts'
import { fold, type Zone } from './zone.ts'

export interface Levels {
  /** In eV, lowest first. */
  readonly energies: readonly number[]
  /** How many states have the energy of each, itself and those beyond the last one counted. */
  readonly degeneracies: readonly number[]
}

/**
 * The lowest levels at a k-point.
 * @param fraction multiples of the zone's reciprocal vectors; finite.
 * @param count    how many; from 1.
 * @param angstrom Å per unit of length of the zone.
 * States are degenerate when their |k + G| differ by no more than the zone's `tolerance`.
 */
export function levelsAt(zone: Zone, fraction: Vec3, count: number, angstrom: number): Levels {
  const lengths = nearestLengths(zone, fold(zone, fraction).cartesian, count)
  const degeneracies: number[] = []
  let start = 0
  for (let i = 1; i <= lengths.length; i++) {
    if (i < lengths.length && lengths[i] - lengths[i - 1] <= zone.tolerance) continue
    for (let j = start; j < i; j++) degeneracies.push(i - start)
    start = i
  }
  return {
    energies: lengths.slice(0, count).map(length => energyOf(length, angstrom)),
    degeneracies: degeneracies.slice(0, count),
  }
}

/** In eV, of a wave vector's length in inverse units of length with the 2π. */
export const energyOf = (length: number, angstrom: number): number => HBAR2_OVER_2M * (length / angstrom) ** 2

/** |k + G| of the nearest `count` lattice points and of all as near as the last of them, in order. */
function nearestLengths(zone: Zone, k: Vec3, count: number): number[] {
  let radius = radiusOfBall(zone, count)
  for (;;) {
    const lengths = pointsInBall(zone, k, radius)
      .map(G => norm(add(k, G)))
      .sort((a, b) => a - b)
    const last = lengths[count - 1]
    if (last !== undefined && last + zone.tolerance <= radius) return lengths
    radius *= GROWTH
  }
}

/** Twice the content of the ball in space: a step that is seldom taken twice. */
const GROWTH = 1.26

/** The ball that holds as many lattice points as asked for, on average. */
function radiusOfBall({ dimension, volume }: Zone, count: number): number {
  const content = count * volume
  if (dimension === 3) return Math.cbrt((3 * content) / (4 * Math.PI))
  return dimension === 2 ? Math.sqrt(content / Math.PI) : content / 2
}

/** All reciprocal-lattice vectors G with |k + G| ≤ radius: row by row in the reduced basis. */
export function pointsInBall({ dimension: n, reduction }: Zone, k: Vec3, radius: number): Vec3[] {
  const [v0, v1, v2] = reduction.basis
  // Orthonormal directions, and the basis in them as a triangular matrix. Rows that are normals come out as such.
  const r00 = norm(v0)
  const e0 = scale(v0, 1 / r00)
  const r10 = dot(v1, e0)
  const rest1 = subtract(v1, scale(e0, r10))
  const r11 = norm(rest1)
  const e1 = scale(rest1, 1 / r11)
  const [r20, r21] = [dot(v2, e0), dot(v2, e1)]
  const rest2 = subtract(v2, add(scale(e0, r20), scale(e1, r21)))
  const r22 = norm(rest2)
  const [k0, k1, k2] = [dot(k, e0), n > 1 ? dot(k, e1) : 0, n > 2 ? dot(k, rest2) / r22 : 0]

  const points: Vec3[] = []
  const [from2, to2] = n > 2 ? whole(-k2, radius, r22) : [0, 0]
  for (let n2 = from2; n2 <= to2; n2++) {
    const disc = Math.sqrt(Math.max(0, radius ** 2 - (n2 * r22 + k2) ** 2))
    const [from1, to1] = n > 1 ? whole(-k1 - n2 * r21, disc, r11) : [0, 0]
    for (let n1 = from1; n1 <= to1; n1++) {
      const chord = Math.sqrt(Math.max(0, disc ** 2 - (n1 * r11 + n2 * r21 + k1) ** 2))
      const [from0, to0] = whole(-k0 - n1 * r10 - n2 * r20, chord, r00)
      for (let n0 = from0; n0 <= to0; n0++) points.push(add(add(scale(v0, n0), scale(v1, n1)), scale(v2, n2)))
    }
  }
  return points
}

/** The whole numbers i with |i·step − centre| ≤ reach, ends included in spite of rounding. */
const whole = (centre: number, reach: number, step: number): [number, number] => [
  Math.ceil((centre - reach) / step - ROUNDING),
  Math.floor((centre + reach) / step + ROUNDING),
]
const ROUNDING = 1e-9

/** A band along a straight segment: E(t) = (1 − t)²·from + 2t(1 − t)·middle + t²·to, t from 0 to 1; all in eV. */
export interface Branch {
  readonly from: number
  /** Bézier's control point: where the tangents at both ends meet. */
  readonly middle: number
  readonly to: number
  /** How many states share this band along the whole segment. */
  readonly degeneracy: number
}

/**
 * All bands of a straight segment that come below an energy anywhere on it, exactly: each is a parabola.
 * @param from, to Cartesian k, inverse length with the 2π.
 * @param top      in eV.
 */
export function branchesAlong(zone: Zone, from: Vec3, to: Vec3, top: number, angstrom: number): Branch[] {
  const step = subtract(to, from)
  const length = norm(step)
  const radius = angstrom * Math.sqrt(top / HBAR2_OVER_2M)
  const middle = add(from, scale(step, 0.5))
  const found: { ends: readonly [number, number]; middle: number; degeneracy: number }[] = []
  for (const G of pointsInBall(zone, middle, radius + length / 2)) {
    const start = add(from, G)
    const nearest = length > 0 ? Math.min(1, Math.max(0, -dot(start, step) / length ** 2)) : 0
    if (norm(add(start, scale(step, nearest))) > radius + zone.tolerance) continue
    const ends = [norm(start), norm(add(to, G))] as const
    // Both ends alike is the same parabola: all have the same curvature.
    const twin = found.find(other => ends.every((end, i) => Math.abs(end - other.ends[i]) <= zone.tolerance))
    if (twin) twin.degeneracy++
    else found.push({ ends, middle: dot(start, add(start, step)), degeneracy: 1 })
  }
  const inEv = HBAR2_OVER_2M / angstrom ** 2
  return found
    .map(({ ends, middle, degeneracy }) => ({
      from: inEv * ends[0] ** 2,
      middle: inEv * middle,
      to: inEv * ends[1] ** 2,
      degeneracy,
    }))
    .sort((a, b) => a.from - b.from || a.to - b.to)
}

export const energyAlong = ({ from, middle, to }: Branch, t: number): number =>
  (1 - t) ** 2 * from + 2 * t * (1 - t) * middle + t ** 2 * to
