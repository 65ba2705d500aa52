/**
 * The first Brillouin zone, and where a k-point lies in it.
 *
 * The zone is the Voronoi cell of the reciprocal lattice: its edges come from reduction.ts, and how they hang together
 * from zone-pattern.ts. So many walls through one corner, the ordinary case of high symmetry, are no special case here.
 */
import { type Dimension, type Reduction, reduce, type Solid } from './reduction.ts'
import {
  add,
  carefulCombine,
  combine,
  cross,
  determinant,
  dot,
  type Mat3,
  norm,
  scale,
  spanned,
  subtract,
  tidy,
  type Vec3,
} from './vector.ts'
import { patternOf } from './zone-pattern.ts'

/** A piece of the zone's boundary: part of the Bragg plane k·G = |G|²/2. */
export interface Wall {
  /** Cartesian, inverse length with the 2π. */
  readonly G: Vec3
  /** G as whole multiples of the reciprocal vectors that were given. */
  readonly index: Vec3
  /** |G|/2: how far from Γ the wall stands. */
  readonly distance: number
}

export interface Face extends Wall {
  /** Indices into the zone's vertices, counter-clockwise as seen from outside. */
  readonly vertices: readonly number[]
}

export interface Zone {
  readonly dimension: Dimension
  readonly solid: Solid
  /** In two dimensions counter-clockwise about the third row of `reciprocal`. */
  readonly vertices: readonly Vec3[]
  /** Pairs of vertices. In two dimensions edge i runs from vertex i to the next one and lies on wall i. */
  readonly edges: readonly (readonly [number, number])[]
  /** Of a three-dimensional zone; empty in the plane and on the line. */
  readonly faces: readonly Face[]
  /** All there are: the faces in three dimensions, the sides in two, the ends in one (end i is vertex i). */
  readonly walls: readonly Wall[]
  /** Volume (area, length): that of the reciprocal cell. */
  readonly volume: number
  /** Distance of the nearest wall from Γ. */
  readonly inradius: number
  /** Distance of the farthest vertex from Γ. */
  readonly circumradius: number
  /** A k-point within this of a wall is on the boundary; an edge shorter than half of it is not drawn. */
  readonly tolerance: number
  readonly reciprocal: Mat3
  readonly reduction: Reduction
}

/**
 * The first zone of a reciprocal lattice.
 * @param reciprocal rows bᵢ, inverse length with the 2π. In two (one) dimensions the rows beyond the second (first)
 *   stand at right angles to the lattice and to each other, as `Lattice.reciprocal` has them.
 * @throws RangeError when the rows are flat or not finite (the caller's fault: lattices are checked before).
 * Given direct vectors instead, it is the Wigner–Seitz cell.
 */
export function buildZone(reciprocal: Mat3, dimension: Dimension): Zone {
  const reduction = reduce(reciprocal, dimension)
  const { edges, present, voronoi, kind, volume, tolerance } = reduction
  const pattern = patternOf(dimension, present, determinant(reduction.basis) > 0)

  const vertices: Vec3[] = []
  let circumradius = 0
  for (const signs of pattern.signs) {
    let x = 0
    let y = 0
    let z = 0
    for (let k = 0; k < edges.length; k++) {
      const s = signs[k] / 2
      x += s * edges[k][0]
      y += s * edges[k][1]
      z += s * edges[k][2]
    }
    vertices.push([x + 0, y + 0, z + 0])
    circumradius = Math.max(circumradius, Math.hypot(x, y, z))
  }

  const faces: Face[] = []
  let inradius = Number.POSITIVE_INFINITY
  for (const { subset, vertices: corners } of pattern.walls) {
    const { vector, coefficients, length } = voronoi[subset - 1]
    const distance = length / 2
    inradius = Math.min(inradius, distance)
    faces.push({ G: vector, index: coefficients, distance, vertices: corners })
  }
  return {
    dimension,
    solid: kind,
    vertices,
    edges: pattern.edges,
    faces: dimension === 3 ? faces : [],
    walls: faces,
    volume,
    inradius,
    circumradius,
    tolerance,
    reciprocal,
    reduction,
  }
}

/** The zone's walls, in any dimension. */
export const walls = (zone: Zone): readonly Wall[] => zone.walls

export type Place = 'inside' | 'boundary' | 'outside'

export interface Placed {
  readonly place: Place
  /** How far beyond the most violated wall, in inverse length; negative inside. */
  readonly excess: number
  /** The most violated wall, or the nearest one. */
  readonly wall: Wall
}

const excessOver = (k: Vec3, { G, distance }: Wall): number =>
  (k[0] * G[0] + k[1] * G[1] + k[2] * G[2]) / (2 * distance) - distance

/**
 * Tell whether a k-point (Cartesian, inverse length with the 2π) lies inside, on or outside the first zone.
 * One violated wall is enough for `outside`; within the zone's `tolerance` of a wall it is on the `boundary`.
 * Walls are the Bragg planes 2k·G = |G|². In two and one dimensions a component along a normal does not count.
 */
export function placeInZone(zone: Zone, k: Vec3): Placed {
  let excess = Number.NEGATIVE_INFINITY
  let wall = zone.walls[0]
  for (const candidate of zone.walls) {
    const e = excessOver(k, candidate)
    if (e > excess) {
      excess = e
      wall = candidate
    }
  }
  // No comparison holds for a k so far out that the products overflow.
  if (excess === Number.NEGATIVE_INFINITY) excess = Number.POSITIVE_INFINITY
  return { place: placeOf(excess, zone), excess, wall }
}

const placeOf = (excess: number, { tolerance }: Zone): Place =>
  excess > tolerance ? 'outside' : excess < -tolerance ? 'inside' : 'boundary'

/** Counting of zones stops here: further out the number interests nobody and takes time. */
export const LAST_ZONE = 100_000

/**
 * The number of the zone in which a k-point lies: one more than the number of reciprocal vectors G with
 * |k − G| < |k|, that is of Bragg planes between Γ and k. A plane through k (within the zone's `tolerance`) does not
 * count, so a point on the boundary belongs to the inner zone. Undefined beyond the 100,000th zone.
 * The points of the ball are counted row by row along the shortest vector, each row in one step.
 */
export function zoneNumber(zone: Zone, k: Vec3): number | undefined {
  const { dimension: n, reduction, tolerance } = zone
  // Orthonormal directions, and the basis in them as a triangular matrix. Rows that are normals come out as such.
  const [v0, v1, v2] = reduction.basis
  const r00 = norm(v0)
  const e0 = scale(v0, 1 / r00)
  const r10 = dot(v1, e0)
  const rest1 = subtract(v1, scale(e0, r10))
  const r11 = norm(rest1)
  const e1 = scale(rest1, 1 / r11)
  const r20 = dot(v2, e0)
  const r21 = dot(v2, e1)
  const rest2 = subtract(v2, add(scale(e0, r20), scale(e1, r21)))
  const r22 = norm(rest2)
  const k0 = dot(k, e0)
  const k1 = n > 1 ? dot(k, e1) : 0
  const k2 = n > 2 ? dot(k, rest2) / r22 : 0
  const radius = Math.hypot(k0, k1, k2)

  // Every point of a ball smaller by the zone's circumradius belongs to the zone of a counted vector.
  const sure = radius - zone.circumradius - 3 * tolerance
  if (!Number.isFinite(radius) || (sure > 0 && ballContent(n, sure) > LAST_ZONE * zone.volume))
    return undefined

  let count = 0
  const [from2, to2] = n > 2 ? [Math.ceil((k2 - radius) / r22), Math.floor((k2 + radius) / r22)] : [0, 0]
  for (let n2 = from2; n2 <= to2; n2++) {
    const q2 = n2 * r22
    const disc = Math.sqrt(Math.max(0, radius * radius - (q2 - k2) ** 2))
    const centre = k1 - n2 * r21
    const [from1, to1] =
      n > 1 ? [Math.ceil((centre - disc) / r11), Math.floor((centre + disc) / r11)] : [0, 0]
    for (let n1 = from1; n1 <= to1; n1++) {
      const q0 = n1 * r10 + n2 * r20
      const q1 = n1 * r11 + n2 * r21
      const chord = Math.sqrt(Math.max(0, disc * disc - (q1 - k1) ** 2))
      const isNearer = (n0: number): boolean => {
        const g0 = q0 + n0 * r00
        const square = g0 * g0 + q1 * q1 + q2 * q2
        return k0 * g0 + k1 * q1 + k2 * q2 - square / 2 > tolerance * Math.sqrt(square)
      }
      let low = Math.floor((k0 - q0 - chord) / r00)
      let high = Math.ceil((k0 - q0 + chord) / r00)
      while (low <= high && !isNearer(low)) low++
      while (high >= low && !isNearer(high)) high--
      count += high - low + 1
      if (count >= LAST_ZONE) return undefined
    }
  }
  return count + 1
}

const ballContent = (n: Dimension, radius: number): number =>
  n === 3 ? (4 / 3) * Math.PI * radius ** 3 : n === 2 ? Math.PI * radius ** 2 : 2 * radius

export interface Folded {
  /** The equivalent point in the zone, as fractions of the zone's reciprocal vectors. */
  readonly fraction: Vec3
  readonly cartesian: Vec3
  /** Whole numbers: the point given minus `fraction`. */
  readonly shift: Vec3
  /** |k| of the folded point. */
  readonly length: number
  /** How many equivalent points of the zone are equally near to Γ, this one included: 1 inside, more on the boundary. */
  readonly ties: number
  readonly place: 'inside' | 'boundary'
}

/** Steps of folding: after rounding in the reduced basis two or three are ordinary. */
const MOST_FOLDS = 1000

/**
 * The shortest equivalent of a k-point. One that is in the zone or on its boundary stays as it is; one that folds onto
 * the boundary takes the lexicographically largest fractions of those that it could take.
 * @param fraction multiples of the zone's reciprocal vectors, of any size; finite.
 * @throws RangeError when a fraction is not finite.
 */
export function fold(zone: Zone, fraction: Vec3): Folded {
  if (!fraction.every(Number.isFinite)) throw new RangeError('fold: the fractions are not finite')
  const isExact = fraction.every(x => Math.abs(x) <= Number.MAX_SAFE_INTEGER)
  if (isExact && placeInZone(zone, carefulCombine(fraction, zone.reciprocal)).place !== 'outside')
    return folded(zone, fraction, [0, 0, 0], equivalents(zone, fraction).length)

  const { dimension: n, reduction } = zone
  const whole = fraction.map((x, i) => (i < n ? Math.round(x) : 0)) as unknown as Vec3
  const rest = subtract(fraction, whole)
  let shift = roundInBasis(reduction, carefulCombine(rest, zone.reciprocal))
  for (let step = 0; step < MOST_FOLDS; step++) {
    const placed = placeInZone(zone, carefulCombine(subtract(rest, shift), zone.reciprocal))
    if (placed.place !== 'outside') break
    shift = add(shift, placed.wall.index)
  }
  const ties = equivalents(zone, subtract(rest, shift))
  const best = ties.reduce((x, y) => (isBefore(y, x) ? y : x))
  const total = add(shift, best)
  return folded(zone, subtract(rest, total), add(whole, total), ties.length)
}

function folded(zone: Zone, fraction: Vec3, shift: Vec3, ties: number): Folded {
  const cartesian = tidy(carefulCombine(fraction, zone.reciprocal))
  const { place } = placeInZone(zone, cartesian)
  return {
    fraction: tidy(fraction),
    cartesian,
    shift: tidy(shift),
    length: norm(cartesian),
    ties,
    place: place === 'inside' ? 'inside' : 'boundary',
  }
}

/** The lattice vector, in multiples of the rows given, next to k by rounding its coordinates in the reduced basis. */
function roundInBasis({ basis: [u, v, w], change, dimension }: Reduction, k: Vec3): Vec3 {
  const content = dot(u, cross(v, w))
  const coordinates = [cross(v, w), cross(w, u), cross(u, v)].map((normal, i) =>
    i < dimension ? Math.round(dot(k, normal) / content) : 0,
  )
  return combine(coordinates as unknown as Vec3, change)
}

/**
 * The whole shifts to all points of the zone that are equivalent to one of its points, [0, 0, 0] first. They are found
 * from wall to wall: the lattice vectors equally near to a point are the corners of a Delone cell, whose edges are G's
 * of walls.
 */
function equivalents(zone: Zone, fraction: Vec3): Vec3[] {
  const found: Vec3[] = [[0, 0, 0]]
  const at = (shift: Vec3): Vec3 => carefulCombine(subtract(fraction, shift), zone.reciprocal)
  for (const shift of found)
    for (const wall of zone.walls) {
      if (excessOver(at(shift), wall) < -zone.tolerance) continue
      const next = add(shift, wall.index)
      const isKnown = found.some(f => f.every((x, i) => x === next[i]))
      if (!isKnown && placeInZone(zone, at(next)).place !== 'outside') found.push(next)
    }
  return found
}

/** A smaller shift means larger fractions. */
function isBefore(u: Vec3, v: Vec3): boolean {
  const differing = u.findIndex((x, i) => x !== v[i])
  return differing >= 0 && u[differing] < v[differing]
}

export interface Exit {
  /** How much of the segment lies before the exit, 0 … 1. */
  readonly at: number
  readonly k: Vec3
  /** The wall through which it leaves. */
  readonly wall: Wall
}

/**
 * Where a straight segment between two k-points (Cartesian) first leaves the zone; undefined where it stays in it.
 * A segment along the boundary does not leave. One that begins outside leaves at 0.
 */
export function leavesZone(zone: Zone, from: Vec3, to: Vec3): Exit | undefined {
  const start = placeInZone(zone, from)
  if (start.place === 'outside') return { at: 0, k: from, wall: start.wall }
  let exit: { at: number; wall: Wall } | undefined
  for (const wall of zone.walls) {
    const end = excessOver(to, wall)
    if (end <= zone.tolerance) continue
    const begin = Math.min(0, excessOver(from, wall))
    const at = (0 - begin) / (end - begin)
    if (!exit || at < exit.at) exit = { at, wall }
  }
  return exit && { ...exit, k: add(from, scale(subtract(to, from), exit.at)) }
}

/** Volumes may differ by rounding; more where rows are so skewed that their determinant cancels. */
const VOLUME_ROUNDING = 1e-9

/**
 * What is wrong with a zone; empty for a good one. Checks the volume against the reciprocal cell's, Euler's formula,
 * that faces come in pairs ±G, that vertices do and lie on their faces and in no wall's outside, that two faces meet in
 * an edge and turn counter-clockwise, and that no edge is too short to be seen.
 */
export function validateZone(zone: Zone): string[] {
  const faults: string[] = []
  const { dimension: n, vertices, edges, faces, tolerance, reduction } = zone
  const near = (u: Vec3, v: Vec3) => norm(subtract(u, v)) <= tolerance
  const dropped = reduction.edges.reduce(
    (sum, e, k) => (reduction.present & (1 << k) ? sum : sum + norm(e)),
    0,
  )
  const content = contentOf(zone)
  const expected = spanned(zone.reciprocal.slice(0, n))
  const product = zone.reciprocal.slice(0, n).reduce((x, row) => x * norm(row), 1)
  const rounding = VOLUME_ROUNDING + (8 * Number.EPSILON * product) / expected
  const margin = rounding + (2 * n * dropped) / zone.inradius
  if (!(Math.abs(content - expected) <= margin * expected))
    faults.push(`content ${content} instead of ${expected}`)
  if (!(Math.abs(zone.volume - expected) <= rounding * expected))
    faults.push(`volume ${zone.volume} instead of ${expected}`)
  if (n === 3 && vertices.length - edges.length + faces.length !== 2)
    faults.push(`Euler: ${vertices.length} − ${edges.length} + ${faces.length} is not 2`)
  if (n === 2 && vertices.length !== edges.length)
    faults.push(`${vertices.length} corners, ${edges.length} sides`)
  vertices.forEach((v, i) => {
    if (!vertices.some(u => near(u, scale(v, -1)))) faults.push(`vertex ${i} has no opposite`)
    if (placeInZone(zone, v).place !== 'boundary') faults.push(`vertex ${i} is not on the boundary`)
  })
  edges.forEach(([i, j]) => {
    if (norm(subtract(vertices[i], vertices[j])) <= tolerance / 2)
      faults.push(`edge ${i}–${j} is too short to be seen`)
  })
  zone.walls.forEach((wall, i) => {
    if (zone.walls.filter(w => w.index.every((x, j) => x === -wall.index[j])).length !== 1)
      faults.push(`wall ${i} has no twin`)
    if (norm(subtract(wall.G, carefulCombine(wall.index, zone.reciprocal))) > tolerance)
      faults.push(`wall ${i}: G is not its index`)
    if (Math.abs(norm(wall.G) / 2 - wall.distance) > tolerance)
      faults.push(`wall ${i} stands at a wrong distance`)
  })
  const farthest = Math.max(...vertices.map(norm))
  const nearest = Math.min(...zone.walls.map(w => w.distance))
  if (Math.abs(zone.circumradius - farthest) > tolerance) faults.push('wrong circumradius')
  if (Math.abs(zone.inradius - nearest) > tolerance) faults.push('wrong inradius')
  if (n === 3) faults.push(...faceFaults(zone))
  if (n < 3)
    zone.walls.forEach((wall, side) => {
      const ends = n === 1 ? [side] : edges[side]
      if (ends.some(i => !(Math.abs(excessOver(vertices[i], wall)) <= tolerance)))
        faults.push(`side ${side} is not on its wall`)
    })
  return faults
}

function faceFaults({ vertices, edges, faces, tolerance }: Zone): string[] {
  const faults: string[] = []
  const uses = new Map<string, number>()
  faces.forEach((face, f) => {
    face.vertices.forEach((i, at) => {
      const j = face.vertices[(at + 1) % face.vertices.length]
      uses.set(`${i},${j}`, (uses.get(`${i},${j}`) ?? 0) + 1)
      if (Math.abs(excessOver(vertices[i], face)) > tolerance) faults.push(`vertex ${i} is not on face ${f}`)
    })
    if (dot(areaVector(face.vertices.map(i => vertices[i])), face.G) <= 0)
      faults.push(`face ${f} turns clockwise`)
  })
  for (const [i, j] of edges)
    if (uses.get(`${i},${j}`) !== 1 || uses.get(`${j},${i}`) !== 1)
      faults.push(`edge ${i}–${j} is not shared by two faces`)
  if (uses.size !== 2 * edges.length) faults.push('faces have sides that are no edges')
  return faults
}

/** Area of a polygon as a vector along its normal. */
function areaVector(polygon: readonly Vec3[]): Vec3 {
  let sum: Vec3 = [0, 0, 0]
  for (let i = 1; i + 1 < polygon.length; i++)
    sum = add(sum, cross(subtract(polygon[i], polygon[0]), subtract(polygon[i + 1], polygon[0])))
  return scale(sum, 1 / 2)
}

/** Volume from the faces, area from the corners, length from the ends. */
function contentOf({ dimension: n, vertices, faces }: Zone): number {
  if (n === 1) return norm(subtract(vertices[0], vertices[1]))
  if (n === 2) return norm(areaVector(vertices))
  // Pyramids on the faces: area · (|G|/2) / 3. The vertices are held against the faces' planes elsewhere.
  return faces.reduce(
    (sum, face) => sum + dot(areaVector(face.vertices.map(i => vertices[i])), face.G) / 6,
    0,
  )
}
