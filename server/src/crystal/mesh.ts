/**
 * Uniform meshes of k-points, kᵢ = (nᵢ + sᵢ)/Nᵢ in fractions of the primitive reciprocal vectors with 0 ≤ nᵢ < Nᵢ
 * (H. J. Monkhorst and J. D. Pack, Phys. Rev. B 13, 5188, 1976, in its Γ-centred and shifted forms), and what a group of
 * rotations does to them.
 *
 * A rotation R on columns of k-fractions takes n + s to R′(n + s) with R′ = N R N⁻¹, N = diag(N₁, N₂, N₃). It maps the
 * mesh onto itself when R′ is whole-numbered and R′s − s is whole. Those that do are a group; only they may merge points:
 * the others would merge points that the mesh does not treat alike.
 */
import { type Mat3, norm, type Vec3 } from './vector.ts'

export interface Mesh {
  /** Whole numbers, 1 or more; 1 along directions without a period. */
  readonly divisions: Vec3
  /** In mesh steps. */
  readonly shift: Vec3
}

/** A rotation on the whole-numbered grid: n → linear · n + offset, modulo the divisions. */
interface GridMap {
  readonly linear: Mat3
  readonly offset: Vec3
}

/** Shifts are written by hand as `1/2` or `1/3`: their products are whole within rounding, or not at all. */
const WHOLE = 1e-9

const isWhole = (x: number): boolean => Math.abs(x - Math.round(x)) < WHOLE

export const meshPoints = ({ divisions: [p, q, r] }: Mesh): number => p * q * r

/** The rotations of a group that map the mesh onto itself, as matrices on columns of k-fractions. */
export const keptRotations = (mesh: Mesh, group: readonly Mat3[]): Mat3[] =>
  group.filter(rotation => keepsMesh(mesh, rotation))

/** True where every rotation of the group maps the mesh onto itself. Asked of many meshes while somebody types. */
export const isSymmetricMesh = (mesh: Mesh, group: readonly Mat3[]): boolean =>
  group.every(rotation => keepsMesh(mesh, rotation))

function keepsMesh({ divisions, shift }: Mesh, rotation: Mat3): boolean {
  for (let i = 0; i < 3; i++) {
    let offset = -shift[i]
    for (let j = 0; j < 3; j++) {
      const x = (rotation[i][j] * divisions[i]) / divisions[j]
      if (!isWhole(x)) return false
      offset += x * shift[j]
    }
    if (!isWhole(offset)) return false
  }
  return true
}

const gridMaps = (mesh: Mesh, group: readonly Mat3[]): GridMap[] =>
  group.flatMap(rotation => gridMap(mesh, rotation) ?? [])

function gridMap(mesh: Mesh, rotation: Mat3): GridMap | undefined {
  if (!keepsMesh(mesh, rotation)) return undefined
  const { divisions, shift } = mesh
  const linear = rotation.map((row, i) => row.map((x, j) => Math.round((x * divisions[i]) / divisions[j])))
  const offset = linear.map((row, i) =>
    Math.round(row[0] * shift[0] + row[1] * shift[1] + row[2] * shift[2] - shift[i]),
  )
  return { linear: linear as unknown as Mat3, offset: offset as unknown as Vec3 }
}

export interface MeshOrbits {
  /** Grid indices n of one point of each orbit, the first in the order n₁, n₂, n₃ (last runs fastest); length 3·count. */
  readonly points: Uint32Array
  /** How many points of the mesh each orbit holds. */
  readonly sizes: Uint32Array
}

/** More points than this are not listed: a listing of them would serve nobody and take all memory. */
export const LARGEST_LISTING = 2 ** 26

/**
 * Irreducible points of the mesh with the number of points that each stands for. One byte for each point of the mesh, and
 * no object for any: 200 × 200 × 200 points take 8 million bytes and the space of the irreducible ones.
 * @param group rotations on columns of k-fractions, closed as a group, −1 among them where time reversal holds.
 * @param orbitOf receives, for each mesh point (the last index runs fastest), the ordinal of its orbit.
 * @returns undefined where the mesh has more than `LARGEST_LISTING` points.
 */
export function meshOrbits(
  mesh: Mesh,
  group: readonly Mat3[],
  orbitOf?: Uint32Array,
): MeshOrbits | undefined {
  const total = meshPoints(mesh)
  if (total > LARGEST_LISTING) return undefined
  const [p, q, r] = mesh.divisions
  const maps = gridMaps(mesh, group)
  const width = 3 * (p + q + r)
  const table = tables(maps, mesh.divisions)
  const seen = new Uint8Array(total)
  let points = new Uint32Array(3 * (Math.ceil(total / maps.length) + SPARE))
  let sizes = new Uint32Array(points.length / 3)
  let orbits = 0
  let index = 0
  for (let x = 0; x < p; x++)
    for (let y = 0; y < q; y++)
      for (let z = 0; z < r; z++, index++) {
        if (seen[index] !== 0) continue
        let size = 0
        let ofX = 3 * x
        let ofY = 3 * (p + y)
        let ofZ = 3 * (p + q + z)
        for (; ofX < table.length; ofX += width, ofY += width, ofZ += width) {
          // Each sum is under three times the divisions: to take them off twice is cheaper than to divide.
          let i = table[ofX] + table[ofY] + table[ofZ]
          let j = table[ofX + 1] + table[ofY + 1] + table[ofZ + 1]
          let k = table[ofX + 2] + table[ofY + 2] + table[ofZ + 2]
          if (i >= p) i -= p
          if (i >= p) i -= p
          if (j >= q) j -= q
          if (j >= q) j -= q
          if (k >= r) k -= r
          if (k >= r) k -= r
          const image = (i * q + j) * r + k
          if (orbitOf !== undefined && seen[image] === 0) orbitOf[image] = orbits
          size += 1 - seen[image]
          seen[image] = 1
        }
        if (orbits === sizes.length) {
          points = enlarged(points)
          sizes = enlarged(sizes)
        }
        points[3 * orbits] = x
        points[3 * orbits + 1] = y
        points[3 * orbits + 2] = z
        sizes[orbits++] = size
      }
  return { points: points.slice(0, 3 * orbits), sizes: sizes.slice(0, orbits) }
}

/** Points on symmetry elements have smaller orbits, so there are more of them than points over rotations. */
const SPARE = 64

function enlarged(list: Uint32Array<ArrayBuffer>): Uint32Array<ArrayBuffer> {
  const larger = new Uint32Array(2 * list.length)
  larger.set(list)
  return larger
}

/**
 * What n₁, n₂ and n₃ each add to the three components of the image, modulo the divisions, one map after the other: the three
 * values for n₁ = 0 stand first, then those for 1, and so on; then the same for n₂ and n₃, with the offset.
 */
function tables(maps: readonly GridMap[], divisions: Vec3): Int32Array {
  const table = new Int32Array(3 * maps.length * (divisions[0] + divisions[1] + divisions[2]))
  let at = 0
  for (const { linear, offset } of maps)
    for (let j = 0; j < 3; j++) {
      const start = at
      for (let i = 0; i < 3; i++) {
        const size = divisions[i]
        const step = modulo(linear[i][j], size)
        let value = j === 2 ? modulo(offset[i], size) : 0
        at = start + i
        for (let n = 0; n < divisions[j]; n++, at += 3) {
          table[at] = value
          value += step
          if (value >= size) value -= size
        }
      }
      at = start + 3 * divisions[j]
    }
  return table
}

const modulo = (x: number, n: number): number => ((x % n) + n) % n

/** Beyond this the sum over the group would leave the whole numbers that a double holds. */
const LARGEST_COUNT = 2 ** 46
/** Beyond this a product of two entries in the elimination would. */
const LARGEST_DIVISION = 2 ** 26

/**
 * The number of irreducible points, without listing the mesh: the mean number of mesh points that a rotation leaves
 * alone (Burnside's lemma; the lemma of Cauchy and Frobenius). It takes the same time for every size of mesh.
 * @returns undefined where the mesh is too large for exact whole numbers.
 */
export function countOrbits(mesh: Mesh, group: readonly Mat3[]): number | undefined {
  if (meshPoints(mesh) > LARGEST_COUNT || mesh.divisions.some(n => n > LARGEST_DIVISION)) return undefined
  const maps = gridMaps(mesh, group)
  return maps.reduce((sum, map) => sum + fixedPoints(map, mesh.divisions), 0) / maps.length
}

/**
 * How many n modulo the divisions fulfil (R′ − 1)n + offset ≡ 0. The vectors that (R′ − 1) and the divisions generate
 * are a lattice of whole numbers: its index is the number of solutions of the homogeneous system, and the offset must lie
 * in it.
 */
function fixedPoints({ linear, offset }: GridMap, divisions: Vec3): number {
  const unit = (i: number, size: number) => [0, 1, 2].map(j => (i === j ? size : 0))
  let generators = [0, 1, 2].map(j => [0, 1, 2].map(i => linear[i][j] - (i === j ? 1 : 0)))
  generators.push(unit(0, divisions[0]), unit(1, divisions[1]), unit(2, divisions[2]))
  let target = [...offset]
  let index = 1
  for (let i = 0; i < 3; i++) {
    const pivot = euclid(generators, i, divisions)
    if (target[i] % pivot[i] !== 0) return 0
    const times = target[i] / pivot[i]
    target = target.map((x, j) => (j > i ? modulo(x - times * pivot[j], divisions[j]) : 0))
    index *= Math.abs(pivot[i])
    generators = generators.filter(g => g !== pivot)
  }
  return index
}

/** Combine the generators until one alone has a component i. Later components may be taken modulo the divisions. */
function euclid(generators: number[][], i: number, divisions: Vec3): number[] {
  for (const g of generators)
    for (let j = i + 1; j < 3; j++) if (g[i] !== 0 || g[j] !== divisions[j]) g[j] %= divisions[j]
  for (;;) {
    const bearing = generators.filter(g => g[i] !== 0)
    const pivot = bearing.reduce((a, b) => (Math.abs(b[i]) < Math.abs(a[i]) ? b : a))
    if (bearing.length === 1) return pivot
    for (const g of bearing) {
      if (g === pivot) continue
      const times = Math.trunc(g[i] / pivot[i])
      for (let j = i; j < 3; j++)
        g[j] = j === i ? g[j] - times * pivot[j] : (g[j] - times * pivot[j]) % divisions[j]
    }
  }
}

/**
 * Divisions whose steps are no longer than a spacing: max(1, ⌈|bᵢ|/spacing⌉), raised to the nearest set that all
 * rotations of a group map onto itself.
 * @param reciprocal one primitive reciprocal vector a row, in the unit of `spacing`; rows beyond `dimension` do not count.
 */
export function divisionsForSpacing(
  reciprocal: Mat3,
  dimension: number,
  spacing: number,
  group: readonly Mat3[],
): Vec3 {
  const least = reciprocal.map((b, i) =>
    i < dimension ? Math.max(1, Math.ceil((norm(b) / spacing) * (1 - WHOLE))) : 1,
  )
  return symmetricDivisions(least as unknown as Vec3, group)
}

/**
 * Whether rotations keep a set of divisions depends on their ratios alone. Ratios between directions that symmetry ties
 * are 1, or 2 and 3 in bases that are not the usual ones; larger ones serve one-sided ties, up to this.
 */
const LARGEST_RATIO = 12

/**
 * The smallest symmetric divisions (in number of points) that are nowhere smaller than those given. Equal divisions
 * along directions that the rotations mix always are symmetric; directions that they do not mix stay as they are.
 */
export function symmetricDivisions(least: Vec3, group: readonly Mat3[]): Vec3 {
  const divisions = [...least] as [number, number, number]
  for (const tied of tiedDirections(group)) {
    let best = Number.POSITIVE_INFINITY
    for (const ratio of ratiosOf(tied)) {
      const times = Math.max(...tied.map(i => Math.ceil(least[i] / ratio[i])))
      const size = tied.reduce((product, i) => product * ratio[i] * times, 1)
      if (size >= best || !isSymmetricMesh({ divisions: ratio, shift: [0, 0, 0] }, group)) continue
      best = size
      for (const i of tied) divisions[i] = ratio[i] * times
    }
  }
  return divisions
}

/** Sets of directions (from 0) that some rotation mixes, so that their divisions are tied; a direction of its own is left out. */
export function tiedDirections(group: readonly Mat3[]): number[][] {
  const mixed = (i: number, j: number) => group.some(rotation => rotation[i][j] !== 0 || rotation[j][i] !== 0)
  const pairs = [
    [0, 1],
    [0, 2],
    [1, 2],
  ].filter(([i, j]) => mixed(i, j))
  if (pairs.length > 1) return [[0, 1, 2]]
  return pairs
}

function* ratiosOf(tied: readonly number[]): Iterable<Vec3> {
  const range = (i: number) =>
    tied.includes(i) ? Array.from({ length: LARGEST_RATIO }, (_, n) => n + 1) : [1]
  for (const x of range(0)) for (const y of range(1)) for (const z of range(2)) yield [x, y, z]
}

/** Halves, and what a group without −1 allows besides: thirds and quarters along and about its axes. */
const SHIFTS = [0, 1 / 2, 1 / 3, 2 / 3, 1 / 4, 3 / 4]

/**
 * The shifts near a given one that all rotations of a group keep with these divisions, the nearest first. A component may
 * also stay as it is: along a polar axis any shift will do. None where the divisions themselves are not symmetric.
 */
export function symmetricShifts({ divisions, shift }: Mesh, group: readonly Mat3[]): Vec3[] {
  const choices = shift.map(own => [...new Set([own, ...SHIFTS])])
  const found: { shift: Vec3; moved: number }[] = []
  for (const x of choices[0])
    for (const y of choices[1])
      for (const z of choices[2]) {
        const other: Vec3 = [x, y, z]
        if (!isSymmetricMesh({ divisions, shift: other }, group)) continue
        found.push({ shift: other, moved: other.reduce((sum, s, i) => sum + apart(s, shift[i]), 0) })
      }
  return found.sort((a, b) => a.moved - b.moved).map(({ shift }) => shift)
}

/** A shift by a whole step gives the same mesh. */
const apart = (s: number, t: number): number => Math.abs(s - t - Math.round(s - t))
