/**
 * Distances in a periodic set of atoms: pairs within a reach, the tightest contact, empty slabs. Periodic along the
 * lattice's own directions only. Atoms are sorted into bins of a reduced cell, so thousands cost some milliseconds, and
 * a skewed cell costs no more than a cubic one.
 */
import type { Dimension } from './lattice.ts'
import { reduce } from './reduction.ts'
import { combine, cross, determinant, inverse, type Mat3, norm, type Vec3 } from './vector.ts'

export interface Sites {
  readonly dimension: Dimension
  /** Rows: lattice vectors, Cartesian. Those beyond `dimension` are unit normals, along which nothing repeats. */
  readonly basis: Mat3
  /** Fractions of the rows (along a normal: a length), one triple an atom, not necessarily inside the cell. */
  readonly positions: readonly Vec3[]
}

/** `first` < `second`, or the same atom and one of its own copies. */
export interface Contact {
  readonly first: number
  readonly second: number
  /** In the unit of the basis. */
  readonly distance: number
}

/** Rounding must not hide a pair that stands exactly at the reach. */
const SLACK = 1 + 1e-9

/**
 * Visit every pair of atoms whose distance is at most `reach`, copies in other cells counted; an atom and its own copy
 * count once for ±. In no particular order.
 * @param reach a length in the unit of the basis, over 0.
 * @param visit gets the lower index first; gives `false` to stop.
 * @returns false where it was stopped.
 */
export function forEachPair(
  sites: Sites,
  reach: number,
  visit: (first: number, second: number, distance: number) => boolean | undefined,
): boolean {
  const { places, axes, basis } = arranged(sites, reach)
  const count = places.length / 3
  const { first, next } = linked(places, axes)
  const [X, Y, Z] = axes
  const [a, b, c] = basis
  const limit = (reach * SLACK) ** 2
  for (let i = 0; i < count; i++) {
    const u = places[3 * i]
    const v = places[3 * i + 1]
    const w = places[3 * i + 2]
    const bx = binOf(X, u)
    const by = binOf(Y, v)
    const bz = binOf(Z, w)
    // Half of the bins around: the other half see this atom from their own.
    for (let x = bx; x <= X.to(bx); x++) {
      const sx = X.shift(x)
      for (let y = x > bx ? Y.from(by) : by; y <= Y.to(by); y++) {
        const sy = Y.shift(y)
        const row = ((x - sx * X.bins) * Y.bins + y - sy * Y.bins) * Z.bins
        for (let z = x > bx || y > by ? Z.from(bz) : bz; z <= Z.to(bz); z++) {
          const sz = Z.shift(z)
          const isOwnBin = x === bx && y === by && z === bz
          for (let j = first[row + z - sz * Z.bins]; j >= 0; j = next[j]) {
            if (isOwnBin && j <= i) continue
            const du = places[3 * j] + sx - u
            const dv = places[3 * j + 1] + sy - v
            const dw = places[3 * j + 2] + sz - w
            const dx = du * a[0] + dv * b[0] + dw * c[0]
            const dy = du * a[1] + dv * b[1] + dw * c[1]
            const dz = du * a[2] + dv * b[2] + dw * c[2]
            const square = dx * dx + dy * dy + dz * dz
            if (square > limit) continue
            if (visit(Math.min(i, j), Math.max(i, j), Math.sqrt(square)) === false) return false
          }
        }
      }
    }
  }
  return true
}

/**
 * The pair of atoms that is closest relative to the sum of its radii.
 * @param radii one an atom, in the unit of the basis, each over 0.
 * @returns undefined without atoms, and for one atom that nothing repeats (there is no such lattice).
 */
export function tightestContact(
  sites: Sites,
  radii: readonly number[],
): (Contact & { readonly ratio: number }) | undefined {
  const count = sites.positions.length
  if (count === 0) return undefined
  const largest = Math.max(...radii)
  let best: (Contact & { readonly ratio: number }) | undefined
  const look = (first: number, second: number, distance: number): undefined => {
    const ratio = distance / (radii[first] + radii[second])
    if (!best || ratio < best.ratio) best = { first, second, distance, ratio }
  }
  // A reach at which some pair is found, and then the one within which a tighter pair could still be.
  let reach = norm(shortestVector(sites))
  if (count > 1 && sites.dimension === 3)
    reach = Math.min(reach, FIRST_REACH * Math.cbrt(Math.abs(determinant(sites.basis)) / count))
  while (!best) {
    forEachPair(sites, reach, look)
    reach *= 1.5
  }
  const needed: number = best.ratio * 2 * largest
  if (needed > reach / 1.5) forEachPair(sites, needed, look)
  return best
}

/** Times the cube root of the volume an atom has: in a close packing the nearest neighbour is at 1.12, else nearer. */
const FIRST_REACH = 1.2

const shortestVector = ({ basis, dimension }: Sites): Vec3 => {
  const rows = reduce(basis, dimension).basis.slice(0, dimension)
  return rows.reduce((least, row) => (norm(row) < norm(least) ? row : least))
}

/**
 * The widest slab without atoms between planes spanned by the other two vectors.
 * @param axis which vector of the basis leads through the slab; it must be a periodic direction.
 * @returns its width, a length along the planes' normal; a single layer of atoms leaves the whole period. Without
 * atoms: undefined.
 */
export function emptySlab({ basis, positions, dimension }: Sites, axis: 0 | 1 | 2): number | undefined {
  if (positions.length === 0) return undefined
  if (axis >= dimension) throw new RangeError('There is no period along this direction.')
  const heights = Float64Array.from(positions, x => x[axis] - Math.floor(x[axis])).sort()
  let widest = heights[0] + 1 - heights[heights.length - 1]
  for (let i = 1; i < heights.length; i++) widest = Math.max(widest, heights[i] - heights[i - 1])
  return widest * heightAlong(basis, axis)
}

/** Distance between neighbouring planes spanned by the other two vectors. */
export const heightAlong = (basis: Mat3, axis: 0 | 1 | 2): number =>
  Math.abs(determinant(basis)) / norm(cross(basis[(axis + 1) % 3], basis[(axis + 2) % 3]))

/** One direction of the bins. */
class Axis {
  constructor(
    readonly bins: number,
    /** Start and length of the whole range, in fractions (of a length along a normal). */
    readonly start: number,
    readonly size: number,
    /** How many bins the reach extends over. */
    readonly range: number,
    readonly periodic: boolean,
  ) {}

  from(bin: number): number {
    return this.periodic ? bin - this.range : Math.max(0, bin - this.range)
  }
  to(bin: number): number {
    return this.periodic ? bin + this.range : Math.min(this.bins - 1, bin + this.range)
  }
  /** The cell that a bin beyond the range stands in. */
  shift(bin: number): number {
    return this.periodic ? Math.floor(bin / this.bins) : 0
  }
}

const binOf = ({ bins, start, size }: Axis, x: number): number =>
  bins === 1 ? 0 : Math.max(0, Math.min(bins - 1, Math.floor(((x - start) / size) * bins)))

interface Arrangement {
  readonly basis: Mat3
  /** Fractions of the reduced basis, inside its cell along periodic directions, flat. */
  readonly places: Float64Array
  readonly axes: readonly [Axis, Axis, Axis]
}

/** More bins than a few for each atom only cost time. */
const BINS_PER_ATOM = 4

function arranged({ basis: stated, dimension, positions }: Sites, reach: number): Arrangement {
  const { basis, change } = reduce(stated, dimension)
  const toReduced = inverse(change)
  const places = new Float64Array(3 * positions.length)
  positions.forEach((position, i) => {
    const x = combine(position, toReduced)
    for (let k = 0; k < 3; k++) places[3 * i + k] = k < dimension ? x[k] - Math.floor(x[k]) : x[k]
  })
  const most = Math.ceil(Math.cbrt(BINS_PER_ATOM * positions.length)) + 1
  const axes = ([0, 1, 2] as const).map(k => {
    const periodic = k < dimension
    const [start, end] = periodic ? [0, 1] : extent(places, k)
    const size = end - start
    const wide = size * heightAlong(basis, k)
    const bins = Math.max(1, Math.min(most, Math.floor(wide / reach)))
    return new Axis(bins, start, size, wide > 0 ? Math.ceil((reach * SLACK * bins) / wide) : 0, periodic)
  })
  return { basis, places, axes: axes as unknown as Arrangement['axes'] }
}

function extent(places: Float64Array, k: number): [number, number] {
  let low = Number.POSITIVE_INFINITY
  let high = Number.NEGATIVE_INFINITY
  for (let i = k; i < places.length; i += 3) {
    low = Math.min(low, places[i])
    high = Math.max(high, places[i])
  }
  return places.length > 0 ? [low, high] : [0, 0]
}

/** Linked lists: the first atom of each bin, and for each atom the next one in its bin; ascending. */
function linked(
  places: Float64Array,
  [X, Y, Z]: Arrangement['axes'],
): { first: Int32Array; next: Int32Array } {
  const first = new Int32Array(X.bins * Y.bins * Z.bins).fill(-1)
  const next = new Int32Array(places.length / 3).fill(-1)
  for (let i = next.length - 1; i >= 0; i--) {
    const bin =
      (binOf(X, places[3 * i]) * Y.bins + binOf(Y, places[3 * i + 1])) * Z.bins + binOf(Z, places[3 * i + 2])
    next[i] = first[bin]
    first[bin] = i
  }
  return { first, next }
}
