/**
 * A list of k-points against a sequence of points or a mesh. Points that differ by a reciprocal vector are one. Lists may
 * be long: nothing here looks at all pairs.
 */
import { type Mesh, meshOrbits, meshPoints } from './mesh.ts'
import { combine, type Mat3, norm, type Vec3 } from './vector.ts'

/** Finds the points of a sequence near a place, modulo reciprocal vectors. */
export class SiteGrid {
  readonly #bins: Vec3
  readonly #margin: Vec3
  readonly #sites = new Map<number, number[]>()

  /**
   * @param points fractions of the reciprocal vectors.
   * @param reach  the largest distance that will be asked about, an inverse length.
   */
  constructor(
    private readonly points: readonly Vec3[],
    private readonly reciprocal: Mat3,
    direct: Mat3,
    reach: number,
  ) {
    this.#margin = direct.map(row => (reach * norm(row)) / (2 * Math.PI)) as unknown as Vec3
    this.#bins = this.#margin.map(margin =>
      Math.max(1, Math.min(MOST_BINS, Math.floor(1 / (2 * margin)))),
    ) as unknown as Vec3
    for (const [i, point] of points.entries()) {
      const key = this.#key(this.#bin(point[0], 0), this.#bin(point[1], 1), this.#bin(point[2], 2))
      const there = this.#sites.get(key)
      if (there) there.push(i)
      else this.#sites.set(key, [i])
    }
  }

  /** Ordinals of all points within reach of a place, with their distances. */
  near(fraction: Vec3, reach: number): { index: number; distance: number }[] {
    const found: { index: number; distance: number }[] = []
    for (const i of this.#around(fraction[0], 0))
      for (const j of this.#around(fraction[1], 1))
        for (const k of this.#around(fraction[2], 2))
          for (const index of this.#sites.get(this.#key(i, j, k)) ?? []) {
            const distance = apart(fraction, this.points[index], this.reciprocal)
            if (distance <= reach) found.push({ index, distance })
          }
    return found
  }

  #bin(x: number, axis: 0 | 1 | 2): number {
    const bins = this.#bins[axis]
    return Math.min(bins - 1, Math.floor((x - Math.floor(x)) * bins))
  }

  #around(x: number, axis: 0 | 1 | 2): readonly number[] {
    const low = this.#bin(x - this.#margin[axis], axis)
    const high = this.#bin(x + this.#margin[axis], axis)
    return low === high ? [low] : [low, high]
  }

  #key(i: number, j: number, k: number): number {
    return (i * this.#bins[1] + j) * this.#bins[2] + k
  }
}
/** More bins find nothing sooner. */
const MOST_BINS = 1024

/** Distance of two k-points modulo a reciprocal vector, for points that are near each other. */
export const apart = (p: Vec3, q: Vec3, reciprocal: Mat3): number =>
  norm(combine([rest(p[0] - q[0]), rest(p[1] - q[1]), rest(p[2] - q[2])], reciprocal))

const rest = (x: number): number => x - Math.round(x)

export interface Aligned {
  /** For each point of the list the ordinal of the point that it is; −1 where it is none. */
  readonly at: Int32Array
  /** How far it is from that, an inverse length. */
  readonly miss: Float64Array
  /** Whether it differs from it by a reciprocal vector. */
  readonly shifted: Uint8Array
  /** Ordinals in the list that stand before or after their place. */
  readonly misplaced: ReadonlySet<number>
  /** Ordinals in the list that say again what a point before them said. */
  readonly doubled: ReadonlySet<number>
  /** Ordinals of points that the list does not have. */
  readonly missing: readonly number[]
}

/** A list against a sequence: which point each one is, and what the fewest are that break the order. */
export function alignList(
  list: readonly Vec3[],
  sequence: readonly Vec3[],
  grid: SiteGrid,
  reach: number,
): Aligned {
  const at = new Int32Array(list.length).fill(-1)
  const miss = new Float64Array(list.length)
  const shifted = new Uint8Array(list.length)
  let expected = 0
  for (const [i, point] of list.entries()) {
    const near = grid.near(point, reach)
    if (near.length === 0) continue
    // A path comes to Γ several times, and coarse numbers fit neighbours: the one that is due, else the next by order.
    const cost = (index: number) => (index >= expected ? index - expected : expected - index + list.length)
    const least = Math.min(...near.map(({ index }) => Math.abs(index - expected)))
    const due =
      near.find(({ index }) => index === expected) ?? near.find(({ index }) => index === expected - 1)
    const best =
      due ?? (least < NEARBY ? near.reduce((a, b) => (cost(b.index) < cost(a.index) ? b : a)) : near[0])
    at[i] = best.index
    miss[i] = best.distance
    shifted[i] = point.some((x, axis) => Math.round(x - sequence[best.index][axis]) !== 0) ? 1 : 0
    expected = best.index + 1
  }
  const doubled = new Set<number>()
  const first = new Map<number, number>()
  for (const [i, index] of at.entries()) {
    if (index < 0) continue
    if (first.has(index)) doubled.add(i)
    else first.set(index, i)
  }
  const counted = [...first.values()]
  const kept = new Set(longestRise(counted.map(i => at[i])).map(n => counted[n]))
  return {
    at,
    miss,
    shifted,
    doubled,
    misplaced: new Set(counted.filter(i => !kept.has(i))),
    missing: sequence.flatMap((_, index) => (first.has(index) ? [] : [index])),
  }
}
/** A point this many places from where it is due is looked for by order, else by distance. */
const NEARBY = 1000

/** Ordinals of a longest rising subsequence (C. Schensted, Canad. J. Math. 13, 179, 1961). */
function longestRise(values: readonly number[]): number[] {
  const ends: number[] = []
  const before = new Int32Array(values.length).fill(-1)
  for (const [i, value] of values.entries()) {
    let low = 0
    let high = ends.length
    while (low < high) {
      const middle = (low + high) >> 1
      if (values[ends[middle]] < value) low = middle + 1
      else high = middle
    }
    if (low > 0) before[i] = ends[low - 1]
    ends[low] = i
  }
  const rise: number[] = []
  for (let i = ends.at(-1) ?? -1; i >= 0; i = before[i]) rise.push(i)
  return rise.reverse()
}

export interface MeshSites {
  readonly mesh: Mesh
  /** For each mesh point (n₁, n₂, n₃; the last runs fastest) the orbit that it is in. */
  readonly orbitOf: Uint32Array
  /** Points in each orbit. */
  readonly sizes: Uint32Array
}

/** The orbits of a mesh of at most `LARGEST_LISTING` points under the rotations that map it onto itself, point by point. */
export function meshSites(mesh: Mesh, group: readonly Mat3[]): MeshSites {
  const orbitOf = new Uint32Array(meshPoints(mesh))
  const { sizes } = meshOrbits(mesh, group, orbitOf)!
  return { mesh, orbitOf, sizes }
}

/** The mesh point nearest to fractions, in mesh steps, modulo reciprocal vectors. */
export function meshIndex({ divisions, shift }: Mesh, fraction: Vec3): number {
  const n = [0, 1, 2].map(i => modulo(Math.round(fraction[i] * divisions[i] - shift[i]), divisions[i]))
  return (n[0] * divisions[1] + n[1]) * divisions[2] + n[2]
}

/** How far fractions are from that point, an inverse length. */
export const meshMiss = ({ divisions, shift }: Mesh, fraction: Vec3, reciprocal: Mat3): number =>
  norm(
    combine(
      [0, 1, 2].map(i => rest(fraction[i] * divisions[i] - shift[i]) / divisions[i]) as unknown as Vec3,
      reciprocal,
    ),
  )

const modulo = (x: number, n: number): number => ((x % n) + n) % n
