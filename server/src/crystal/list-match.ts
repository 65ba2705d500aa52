/**
 * A list of k-points against a sequence of points or a mesh. Points that differ by a reciprocal vector are one. Lists may
 * be long: nothing here looks at all pairs.
 */
import { type Mesh, meshOrbits, meshPoints } from './mesh.ts'
import { type Mat3, norm, type Vec3 } from './vector.ts'

/** Points as a flat array: three numbers a point. */
export const pointAt = (points: Float64Array, i: number): Vec3 => [
  points[3 * i],
  points[3 * i + 1],
  points[3 * i + 2],
]

/** Row vectors times a matrix, a point after the other. */
export function transformed(points: Float64Array, m: Mat3): Float64Array {
  const result = new Float64Array(points.length)
  for (let at = 0; at < points.length; at += 3)
    for (let axis = 0; axis < 3; axis++)
      result[at + axis] = points[at] * m[0][axis] + points[at + 1] * m[1][axis] + points[at + 2] * m[2][axis]
  return result
}

/** Finds the points of a sequence near a place, modulo reciprocal vectors. */
export class SiteGrid {
  readonly #bins: Vec3
  readonly #margin: Vec3
  /** The bin of each point. */
  readonly #keys: Float64Array
  /** A table of chains: the first point of each, and for each point the next one in its chain; −1 ends it. */
  readonly #heads: Int32Array
  readonly #next: Int32Array

  /**
   * @param points fractions of the reciprocal vectors, three a point.
   * @param reach  the largest distance that will be asked about, an inverse length.
   */
  constructor(
    private readonly points: Float64Array,
    private readonly reciprocal: Mat3,
    direct: Mat3,
    reach: number,
  ) {
    this.#margin = direct.map(row => (reach * norm(row)) / (2 * Math.PI)) as unknown as Vec3
    this.#bins = this.#margin.map(margin =>
      Math.max(1, Math.min(MOST_BINS, Math.floor(1 / (2 * margin)))),
    ) as unknown as Vec3
    const count = points.length / 3
    this.#keys = new Float64Array(count)
    this.#next = new Int32Array(count)
    this.#heads = new Int32Array(2 ** Math.ceil(Math.log2(count + 1))).fill(-1)
    // From the last to the first, so that chains rise.
    for (let i = count - 1; i >= 0; i--) {
      const [x, y, z] = pointAt(points, i)
      const key = this.#key(this.#bin(x, 0), this.#bin(y, 1), this.#bin(z, 2))
      const slot = this.#slot(key)
      this.#keys[i] = key
      this.#next[i] = this.#heads[slot]
      this.#heads[slot] = i
    }
  }

  /** Distance of a place from a point of the sequence, modulo reciprocal vectors where they are near each other. */
  distance(fraction: Vec3, index: number): number {
    return apart(fraction, pointAt(this.points, index), this.reciprocal)
  }

  /** Visits the ordinals of all points within reach of a place, with their distances. */
  near(fraction: Vec3, reach: number, visit: (index: number, distance: number) => void): void {
    for (const i of this.#around(fraction[0], 0))
      for (const j of this.#around(fraction[1], 1))
        for (const k of this.#around(fraction[2], 2)) {
          const key = this.#key(i, j, k)
          for (let index = this.#heads[this.#slot(key)]; index >= 0; index = this.#next[index]) {
            if (this.#keys[index] !== key) continue
            const distance = this.distance(fraction, index)
            if (distance <= reach) visit(index, distance)
          }
        }
  }

  isNear(fraction: Vec3, reach: number): boolean {
    let isFound = false
    this.near(fraction, reach, () => {
      isFound = true
    })
    return isFound
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

  /** Keys that follow each other lie apart (D. E. Knuth, The Art of Computer Programming 3, 6.4: a golden multiplier). */
  #slot(key: number): number {
    const mixed = Math.imul((key % 4294967291) | 0, 0x9e3779b1)
    return (mixed ^ (mixed >>> 15)) & (this.#heads.length - 1)
  }
}
/** Of a path of as many points as may be listed, few stand in one bin; bins along three axes can still be counted. */
const MOST_BINS = 2 ** 17

/** Distance of two k-points modulo a reciprocal vector, for points that are near each other. */
export const apart = (p: Vec3, q: Vec3, reciprocal: Mat3): number =>
  size(rest(p[0] - q[0]), rest(p[1] - q[1]), rest(p[2] - q[2]), reciprocal)

/** Of u₀·row₀ + u₁·row₁ + u₂·row₂. */
function size(u0: number, u1: number, u2: number, m: Mat3): number {
  const x = u0 * m[0][0] + u1 * m[1][0] + u2 * m[2][0]
  const y = u0 * m[0][1] + u1 * m[1][1] + u2 * m[2][1]
  const z = u0 * m[0][2] + u1 * m[1][2] + u2 * m[2][2]
  return Math.sqrt(x * x + y * y + z * z)
}

const rest = (x: number): number => x - Math.round(x)

export interface Aligned {
  /** For each point of the list the ordinal of the point that it is; −1 where it is none. */
  readonly at: Int32Array
  /** How far it is from that, an inverse length. */
  readonly miss: Float64Array
  /** How many differ from it by a reciprocal vector. */
  readonly shifted: number
  /** Ordinals in the list that stand before or after their place. */
  readonly misplaced: readonly number[]
  /** Ordinals in the list that say again what a point before them said. */
  readonly doubled: readonly number[]
  /** Ordinals of points that the list does not have. */
  readonly missing: readonly number[]
}

/**
 * A list against a sequence: which point each one is, and what the fewest are that break the order.
 * @param list     fractions, three a point.
 * @param sequence those that the grid was made of.
 */
export function alignList(
  list: Float64Array,
  sequence: Float64Array,
  grid: SiteGrid,
  reach: number,
): Aligned {
  const count = list.length / 3
  const wanted = sequence.length / 3
  const at = new Int32Array(count).fill(-1)
  const miss = new Float64Array(count)
  let shifted = 0
  let expected = 0
  for (let i = 0; i < count; i++) {
    const point = pointAt(list, i)
    // A path comes to Γ several times, and coarse numbers fit neighbours: the one that is due, else the next by order.
    let index = -1
    let distance = 0
    for (const due of [expected, expected - 1]) {
      if (index >= 0 || due < 0 || due >= wanted) continue
      distance = grid.distance(point, due)
      if (distance <= reach) index = due
    }
    if (index < 0) {
      let least = Number.POSITIVE_INFINITY
      let byOrder = -1
      let orderDistance = 0
      let byDistance = -1
      let nearest = Number.POSITIVE_INFINITY
      const cost = (n: number) => (n >= expected ? n - expected : expected - n + count)
      grid.near(point, reach, (n, away) => {
        least = Math.min(least, Math.abs(n - expected))
        if (byOrder < 0 || cost(n) < cost(byOrder)) {
          byOrder = n
          orderDistance = away
        }
        if (away < nearest) {
          byDistance = n
          nearest = away
        }
      })
      index = least < NEARBY ? byOrder : byDistance
      distance = least < NEARBY ? orderDistance : nearest
    }
    if (index < 0) continue
    at[i] = index
    miss[i] = distance
    for (let axis = 0; axis < 3; axis++)
      if (Math.round(list[3 * i + axis] - sequence[3 * index + axis]) !== 0) {
        shifted++
        break
      }
    expected = index + 1
  }
  const doubled: number[] = []
  const first = new Int32Array(wanted).fill(-1)
  const counted: number[] = []
  for (let i = 0; i < count; i++) {
    const index = at[i]
    if (index < 0) continue
    if (first[index] >= 0) doubled.push(i)
    else {
      first[index] = i
      counted.push(i)
    }
  }
  const isKept = new Uint8Array(counted.length)
  for (const n of longestRise(Int32Array.from(counted, i => at[i]))) isKept[n] = 1
  const missing: number[] = []
  for (let index = 0; index < wanted; index++) if (first[index] < 0) missing.push(index)
  return { at, miss, shifted, doubled, misplaced: counted.filter((_, n) => isKept[n] === 0), missing }
}
/** A point fewer places from where it is due is looked for by order, else by distance. */
const NEARBY = 1000

/** Ordinals of a longest rising subsequence (C. Schensted, Canad. J. Math. 13, 179, 1961). */
function longestRise(values: Int32Array): number[] {
  const ends = new Int32Array(values.length)
  const before = new Int32Array(values.length).fill(-1)
  let length = 0
  for (const [i, value] of values.entries()) {
    let low = 0
    let high = length
    while (low < high) {
      const middle = (low + high) >> 1
      if (values[ends[middle]] < value) low = middle + 1
      else high = middle
    }
    if (low > 0) before[i] = ends[low - 1]
    ends[low] = i
    if (low === length) length++
  }
  const rise: number[] = []
  for (let i = length > 0 ? ends[length - 1] : -1; i >= 0; i = before[i]) rise.push(i)
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

/** The mesh point nearest to fractions, modulo reciprocal vectors. */
export function meshIndex({ divisions, shift }: Mesh, fraction: Vec3): number {
  let index = 0
  for (let i = 0; i < 3; i++)
    index = index * divisions[i] + modulo(Math.round(fraction[i] * divisions[i] - shift[i]), divisions[i])
  return index
}

/** How far fractions are from that point, an inverse length. */
export const meshMiss = ({ divisions, shift }: Mesh, fraction: Vec3, reciprocal: Mat3): number =>
  size(
    rest(fraction[0] * divisions[0] - shift[0]) / divisions[0],
    rest(fraction[1] * divisions[1] - shift[1]) / divisions[1],
    rest(fraction[2] * divisions[2] - shift[2]) / divisions[2],
    reciprocal,
  )

const modulo = (x: number, n: number): number => ((x % n) + n) % n

/** Divisions of a mesh that is guessed; finer ones are told apart by no usual number of digits. */
const MOST_DIVISIONS = 100
/** A coordinate is a whole multiple of 1/D where rounding could not make any number one: this part of a step. */
const PART_OF_DIVISION = 0.1

/**
 * The coarsest mesh, with shifts of 0 or ½, on which all points lie.
 * @param points   fractions, three a point.
 * @param rounding how far each fraction may be off.
 * @returns undefined where there is none of a few divisions. The points need not be all of the mesh.
 */
export function guessMesh(points: Float64Array, rounding: Vec3, dimension: number): Mesh | undefined {
  const divisions = [1, 1, 1]
  const shift = [0, 0, 0]
  for (let axis = 0; axis < dimension; axis++) {
    const numbers = points.filter((_, at) => at % 3 === axis)
    const parts = partsOf(numbers, rounding[axis])
    if (parts === undefined) return undefined
    const halfway = parts % 2 === 0 && numbers.every(x => Math.round(x * parts) % 2 !== 0)
    divisions[axis] = halfway ? parts / 2 : parts
    shift[axis] = halfway ? 0.5 : 0
  }
  return { divisions, shift } as unknown as Mesh
}

/** The least D that makes all numbers whole multiples of 1/D. */
function partsOf(numbers: Float64Array, rounding: number): number | undefined {
  for (let parts = 1; parts <= 2 * MOST_DIVISIONS; parts++) {
    if (parts * rounding > PART_OF_DIVISION) return undefined
    if (numbers.every(x => Math.abs(rest(x * parts)) <= parts * rounding)) return parts
  }
  return undefined
}
