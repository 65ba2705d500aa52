/**
 * The irreducible wedge: the part of the first zone that is nearer to a general direction than to any of its images
 * under the k-group. It holds one point of every star (on its boundary perhaps several).
 */
import type { Dimension } from './reduction.ts'
import {
  add,
  apply,
  cross,
  dot,
  inverse,
  type Mat3,
  multiply,
  norm,
  scale,
  subtract,
  transpose,
  type Vec3,
} from './vector.ts'
import type { Zone } from './zone.ts'

export interface WedgeFace {
  /** Indices into the wedge's vertices, counter-clockwise as seen from outside. In the plane the two ends of a side. */
  readonly vertices: readonly number[]
  /** Part of the zone's own boundary; the others are cuts through Γ. */
  readonly onZone: boolean
}

export interface Wedge {
  readonly dimension: Dimension
  /** The direction that it was cut out around, Cartesian, of unit length, general to the k-group. */
  readonly direction: Vec3
  /** Cartesian, inverse length with the 2π. */
  readonly vertices: readonly Vec3[]
  readonly edges: readonly (readonly [number, number])[]
  readonly faces: readonly WedgeFace[]
  /** Volume, area or length: the zone's over the order of the k-group. */
  readonly volume: number
}

/** A direction counts as general when every image of it is at least this far off, in radians. */
const GENERAL = 0.05

/** Nothing about these is special: not all of them can lie near the symmetry elements of one lattice. */
const GENERIC: readonly Vec3[] = [
  [0.7193, 0.5741, 0.3911],
  [0.3911, -0.7193, 0.5741],
  [-0.5741, 0.3911, 0.7193],
]
/** How far a direction is moved off a symmetry element, in parts of its length, until it is general. */
const MOVES = [0, 0.15, 0.3, 0.6, 1.2, 2.4]

/** Two corners nearer than this are one, in parts of the zone's circumradius. */
const SAME_CORNER = 1e-7

/**
 * Cut the wedge out of a zone.
 * @param group the k-group: matrices on columns of fractions of the zone's reciprocal vectors, identity first.
 * @param towards Cartesian direction that the wedge shall lie around, such as the path's mean; on a symmetry element it
 *   is moved off a little. Where reflections do not generate the group, the wedge's shape depends on it.
 * The half-spaces are (g − Rg)·k ≥ 0 for each R of the group: its Dirichlet domain about g.
 */
export function irreducibleWedge(zone: Zone, group: readonly Mat3[], towards: Vec3): Wedge {
  const { dimension, reciprocal } = zone
  const others = group.slice(1).map(R => inSpace(R, reciprocal))
  const direction = generalDirection(towards, others, zone)
  const tolerance = SAME_CORNER * zone.circumradius
  let faces = facesOf(zone)
  for (const R of others) faces = cut(faces, subtract(direction, apply(R, direction)), dimension, tolerance)
  return assemble(faces, direction, zone, tolerance)
}

/** From columns of fractions to Cartesian columns. */
function inSpace(R: Mat3, reciprocal: Mat3): Mat3 {
  const columns = transpose(reciprocal)
  return multiply(multiply(columns, R), inverse(columns))
}

const unit = (v: Vec3): Vec3 => scale(v, 1 / norm(v))

function generalDirection(towards: Vec3, others: readonly Mat3[], { dimension, reciprocal }: Zone): Vec3 {
  const normals = reciprocal.slice(dimension).map(unit)
  const inPeriodicSpace = (v: Vec3) => normals.reduce((rest, n) => subtract(rest, scale(n, dot(rest, n))), v)
  const separation = (g: Vec3) =>
    others.reduce((least, R) => Math.min(least, norm(subtract(g, apply(R, g)))), Number.POSITIVE_INFINITY)

  const asked = inPeriodicSpace(towards)
  const start = norm(asked) > 0 ? unit(asked) : asked
  let best: Vec3 = unit(inPeriodicSpace(GENERIC[0]))
  for (const move of MOVES)
    for (const generic of GENERIC) {
      const moved = add(start, scale(unit(inPeriodicSpace(generic)), move))
      if (norm(moved) === 0) continue
      const g = unit(moved)
      if (separation(g) > GENERAL) return g
      if (separation(g) > separation(best)) best = g
    }
  return best
}

/** A face by its corners in order: a polygon in space, a side of two ends in the plane, an end on the line. */
interface Piece {
  readonly corners: readonly Vec3[]
  readonly onZone: boolean
}

function facesOf({ dimension, vertices, faces, edges }: Zone): Piece[] {
  if (dimension === 3)
    return faces.map(face => ({ corners: face.vertices.map(i => vertices[i]), onZone: true }))
  if (dimension === 2) return edges.map(([i, j]) => ({ corners: [vertices[i], vertices[j]], onZone: true }))
  return vertices.map(vertex => ({ corners: [vertex], onZone: true }))
}

/** The part of a convex solid with normal·k ≥ 0, closed by a new face through Γ. */
function cut(solid: readonly Piece[], normal: Vec3, dimension: Dimension, tolerance: number): Piece[] {
  const height = (v: Vec3): number => dot(v, normal) / norm(normal)
  const isBeyond = (v: Vec3): boolean => height(v) < -tolerance
  if (!solid.some(({ corners }) => corners.some(isBeyond))) return [...solid]

  const kept: Piece[] = []
  const onPlane: Vec3[] = []
  for (const { corners, onZone } of solid) {
    const rest: Vec3[] = []
    for (const [i, v] of corners.entries()) {
      if (!isBeyond(v)) rest.push(v)
      // An open side of two ends has one edge only, a polygon as many as corners.
      if (dimension === 2 && i > 0) continue
      const next = corners[(i + 1) % corners.length]
      const [h, k] = [height(v), height(next)]
      if (isBeyond(v) ? k > tolerance : isBeyond(next) && h > tolerance)
        rest.push(add(v, scale(subtract(next, v), h / (h - k))))
    }
    onPlane.push(...rest.filter(v => Math.abs(height(v)) <= tolerance))
    const piece = distinct(rest, tolerance)
    const isFlat = piece.every(v => Math.abs(height(v)) <= tolerance)
    if (piece.length >= dimension && !isFlat) kept.push({ corners: piece, onZone })
  }
  const cap = dimension === 1 ? [ORIGIN] : around(distinct(onPlane, tolerance), normal)
  return [...kept, { corners: cap, onZone: false }]
}

const ORIGIN: Vec3 = [0, 0, 0]

function distinct(points: readonly Vec3[], tolerance: number): Vec3[] {
  const found: Vec3[] = []
  for (const point of points)
    if (!found.some(other => norm(subtract(other, point)) <= tolerance)) found.push(point)
  return found
}

/** Corners of a convex face in order, counter-clockwise as seen from where `inward` comes from. */
function around(corners: readonly Vec3[], inward: Vec3): Vec3[] {
  if (corners.length < 3) return [...corners]
  const centre = scale(corners.reduce(add), 1 / corners.length)
  const x = unit(subtract(corners[0], centre))
  const y = cross(unit(scale(inward, -1)), x)
  const bearing = (v: Vec3) => Math.atan2(dot(subtract(v, centre), y), dot(subtract(v, centre), x))
  return [...corners].sort((u, v) => bearing(u) - bearing(v))
}

function assemble(pieces: readonly Piece[], direction: Vec3, zone: Zone, tolerance: number): Wedge {
  const { dimension } = zone
  const vertices = distinct(
    pieces.flatMap(({ corners }) => corners),
    tolerance,
  )
  const indexOf = (v: Vec3) => vertices.findIndex(other => norm(subtract(other, v)) <= tolerance)
  const faces = pieces.map(({ corners, onZone }) => ({ vertices: corners.map(indexOf), onZone }))
  return {
    dimension,
    direction,
    vertices,
    edges: edgesOf(faces, dimension),
    faces,
    volume: volumeOf(pieces, dimension),
  }
}

function edgesOf(faces: readonly WedgeFace[], dimension: Dimension): (readonly [number, number])[] {
  if (dimension === 1) return [[faces[0].vertices[0], faces[1].vertices[0]]]
  if (dimension === 2) return faces.map(({ vertices: [i, j] }) => [i, j] as const)
  // Each edge is run through once in either sense.
  return faces.flatMap(({ vertices }) =>
    vertices.map((i, at) => [i, vertices[(at + 1) % vertices.length]] as const).filter(([i, j]) => i < j),
  )
}

/** Γ belongs to the wedge, so it is made of the cones over its faces. */
function volumeOf(pieces: readonly Piece[], dimension: Dimension): number {
  return pieces.reduce((sum, { corners }) => {
    if (dimension === 1) return sum + norm(corners[0])
    if (dimension === 2) return sum + norm(cross(corners[0], corners[1])) / 2
    for (let i = 1; i + 1 < corners.length; i++) sum += dot(corners[0], cross(corners[i], corners[i + 1])) / 6
    return sum
  }, 0)
}
