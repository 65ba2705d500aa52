/** Lattices for the tests of the geometry core: seeded, of every Bravais type, skewed as badly as asked. */
import {
  BRAVAIS,
  BRAVAIS_TYPES,
  type BravaisType,
  completeCell,
  type GivenParameters,
} from '../../../server/src/crystal/bravais.ts'
import {
  isLattice,
  type Lattice,
  latticeFromCell,
  latticeFromVectors,
} from '../../../server/src/crystal/lattice.ts'
import type { Mat3, Vec3 } from '../../../server/src/crystal/vector.ts'

/** Numbers in [0, 1) from a seed (G. Marsaglia, J. Stat. Softw. 8 (14), 2003: xorshift with 32 bits). */
export function seeded(seed: number): () => number {
  let x = (seed * 2654435761 + 88675123) >>> 0 || 1
  const next = () => {
    x ^= x << 13
    x >>>= 0
    x ^= x >>> 17
    x ^= x << 5
    x >>>= 0
    return x / 2 ** 32
  }
  for (let i = 0; i < 8; i++) next()
  return next
}

export const between = (random: () => number, low: number, high: number) => low + (high - low) * random()
export const wholeBetween = (random: () => number, low: number, high: number) =>
  low + Math.floor((high - low + 1) * random())

export function lattice(result: ReturnType<typeof latticeFromCell>): Lattice {
  if (!isLattice(result)) throw new Error(`no lattice: ${JSON.stringify(result)}`)
  return result
}

export const fromCell = (type: BravaisType, given: GivenParameters): Lattice => {
  const completed = completeCell(type, given)
  if (!('cell' in completed)) throw new Error(`no cell: ${JSON.stringify(completed)}`)
  const { centring, dimension } = BRAVAIS[type]
  return lattice(latticeFromCell(completed.cell, centring, dimension))
}

/** A lattice of a type with random parameters: lengths up to a ratio, angles that a cell can have. */
export function randomLattice(type: BravaisType, random: () => number, ratio = 3): Lattice {
  const length = () => ratio ** between(random, -0.5, 0.5) * 5
  const given: GivenParameters = {}
  for (const name of BRAVAIS[type].free[0])
    given[name] = name === 'a' || name === 'b' || name === 'c' ? length() : between(random, 70, 110)
  return fromCell(type, given)
}

export const randomType = (random: () => number): BravaisType =>
  BRAVAIS_TYPES[wholeBetween(random, 0, BRAVAIS_TYPES.length - 1)]

/** A whole matrix of determinant ±1 with entries up to ±`most`, in the first n dimensions. */
export function unimodular(random: () => number, n: number, most: number): Mat3 {
  let m = [
    [1, 0, 0],
    [0, 1, 0],
    [0, 0, 1],
  ]
  for (let tries = 0; tries < 40; tries++) {
    const i = wholeBetween(random, 0, n - 1)
    const j = wholeBetween(random, 0, n - 1)
    const factor = wholeBetween(random, -3, 3)
    const next = m.map((row, r) =>
      r !== i ? row : i === j ? row.map(x => (factor < 0 ? -x : x)) : row.map((x, c) => x + factor * m[j][c]),
    )
    if (next.every(row => row.every(x => Math.abs(x) <= most))) m = next
  }
  return m as unknown as Mat3
}

/** Rows recombined by whole numbers and scaled, in plain arithmetic: as a user's vectors would be rounded. */
export function recombine(change: Mat3, rows: Mat3, n: number, factor = 1): Vec3[] {
  return change
    .slice(0, n)
    .map(
      u =>
        [0, 1, 2].map(
          x => factor * (u[0] * rows[0][x] + u[1] * rows[1][x] + u[2] * rows[2][x]),
        ) as unknown as Vec3,
    )
}

/** The same lattice on another basis, at another size. */
export const skewed = (l: Lattice, change: Mat3, factor = 1): Lattice =>
  lattice(latticeFromVectors(recombine(change, l.primitive, l.dimension, factor)))

/** Turn vectors by a random rotation (K. Shoemake's quaternions). */
export function turned(rows: readonly Vec3[], random: () => number): Vec3[] {
  const [u, v, w] = [random(), random() * 2 * Math.PI, random() * 2 * Math.PI]
  const [a, b, c, d] = [
    Math.sqrt(1 - u) * Math.sin(v),
    Math.sqrt(1 - u) * Math.cos(v),
    Math.sqrt(u) * Math.sin(w),
    Math.sqrt(u) * Math.cos(w),
  ]
  return rows.map(([x, y, z]) => [
    (1 - 2 * (b * b + c * c)) * x + 2 * (a * b - c * d) * y + 2 * (a * c + b * d) * z,
    2 * (a * b + c * d) * x + (1 - 2 * (a * a + c * c)) * y + 2 * (b * c - a * d) * z,
    2 * (a * c - b * d) * x + 2 * (b * c + a * d) * y + (1 - 2 * (a * a + b * b)) * z,
  ])
}

/**
 * Every lattice vector G with |G − centre| ≤ radius, by trying all that can be: |nᵢ − cᵢ| ≤ radius |dual row i| / 2π, where
 * cᵢ is the centre's fraction. `rows` and `duals` as a lattice and its reciprocal, either way round.
 */
export function* vectorsWithin(
  rows: Mat3,
  duals: Mat3,
  n: number,
  centre: Vec3,
  radius: number,
): Generator<{ index: Vec3; G: Vec3; distance: number }> {
  const ranges = [0, 1, 2].map(i => {
    if (i >= n) return [0, 0]
    const middle =
      (centre[0] * duals[i][0] + centre[1] * duals[i][1] + centre[2] * duals[i][2]) / (2 * Math.PI)
    const reach = (radius * Math.hypot(...duals[i])) / (2 * Math.PI) + 1e-6
    return [Math.ceil(middle - reach), Math.floor(middle + reach)]
  })
  for (let p = ranges[0][0]; p <= ranges[0][1]; p++)
    for (let q = ranges[1][0]; q <= ranges[1][1]; q++)
      for (let r = ranges[2][0]; r <= ranges[2][1]; r++) {
        const G = [0, 1, 2].map(x => p * rows[0][x] + q * rows[1][x] + r * rows[2][x]) as unknown as Vec3
        const distance = Math.hypot(G[0] - centre[0], G[1] - centre[1], G[2] - centre[2])
        if (distance <= radius) yield { index: [p, q, r], G, distance }
      }
}
