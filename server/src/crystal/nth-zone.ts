/**
 * The n-th Brillouin zone: the k-points with exactly n − 1 Bragg planes between them and Γ. From the second on it is a
 * shell of separate convex pieces, and each zone has the volume of the first (L. Brillouin, 1930).
 */
import { pointsInBall } from './bands.ts'
import type { Dimension } from './reduction.ts'
import { add, cross, dot, norm, scale, subtract, type Vec3 } from './vector.ts'
import type { Zone } from './zone.ts'

/** A convex piece. In space its faces, in the plane one polygon, on the line one pair of ends. */
export interface ZonePiece {
  /** Corners of each face in order, counter-clockwise as seen from outside. */
  readonly faces: readonly (readonly Vec3[])[]
}

export interface NthZone {
  readonly n: number
  readonly pieces: readonly ZonePiece[]
  /** Volume (area, length). */
  readonly volume: number
}

/** Zones further out are crumbs. */
export const LAST_DRAWN_ZONE = 8
/** A lattice so much longer than wide that this many planes or pieces come into play is not drawn. */
const MOST_PLANES = 4000
const MOST_PIECES = 20_000

type Faces = readonly (readonly Vec3[])[]

interface Cell {
  readonly faces: readonly (readonly Vec3[])[]
  /** Bragg planes passed so far. */
  readonly passed: number
  /** Of its farthest corner from Γ: a plane that stands no nearer has nothing to do with the cell. */
  readonly radius: number
}

const cellOf = (faces: Faces, passed: number): Cell => ({
  faces,
  passed,
  radius: faces.reduce((far, face) => face.reduce((r, v) => Math.max(r, norm(v)), far), 0),
})

/**
 * @param n from 1 to `LAST_DRAWN_ZONE`.
 * @returns undefined where it would take too many pieces.
 * @throws RangeError for another n.
 * Space is cut by one Bragg plane after the other, nearest first; what lies beyond n of them is dropped at once.
 */
export function nthZone(zone: Zone, n: number): NthZone | undefined {
  if (!Number.isInteger(n) || n < 1 || n > LAST_DRAWN_ZONE)
    throw new RangeError(`nthZone: ${n} is no whole number from 1 to ${LAST_DRAWN_ZONE}`)
  const { dimension, circumradius, volume } = zone
  // A ball of this radius holds n + 1 lattice points at least, wherever it lies: so far out n planes have been passed.
  const reach = circumradius + radiusOf((n + 1) * volume, dimension)
  const planes = pointsInBall(zone, [0, 0, 0], 2 * reach)
    .map(G => ({ G, size: norm(G) }))
    .filter(({ size }) => size > zone.tolerance)
    .sort((a, b) => a.size - b.size)
  if (planes.length > MOST_PLANES) return undefined

  const tolerance = zone.tolerance
  const done: Cell[] = []
  let cells: Cell[] = [cellOf(box(zone, 1.01 * reach), 0)]
  for (const { G, size } of planes) {
    const normal = scale(G, 1 / size)
    const next: Cell[] = []
    for (const cell of cells) {
      if (cell.radius <= size / 2) {
        done.push(cell)
        continue
      }
      const [near, far] = split(cell.faces, normal, size / 2, dimension, tolerance)
      if (near) next.push(near === cell.faces ? cell : cellOf(near, cell.passed))
      if (far && cell.passed + 1 < n) next.push(cellOf(far, cell.passed + 1))
    }
    if (next.length > MOST_PIECES) return undefined
    cells = next
  }
  const pieces = [...done, ...cells].filter(({ passed }) => passed === n - 1).map(({ faces }) => ({ faces }))
  return { n, pieces, volume: pieces.reduce((sum, { faces }) => sum + contentOf(faces, dimension), 0) }
}

function radiusOf(content: number, dimension: Dimension): number {
  if (dimension === 3) return Math.cbrt((3 * content) / (4 * Math.PI))
  return dimension === 2 ? Math.sqrt(content / Math.PI) : content / 2
}

/** A cube (square, segment) about Γ along the periodic directions. */
function box({ dimension, reduction: { basis } }: Zone, half: number): Vec3[][] {
  const e0 = scale(basis[0], half / norm(basis[0]))
  if (dimension === 1) return [[scale(e0, -1), e0]]
  const across = subtract(basis[1], scale(e0, dot(basis[1], e0) / dot(e0, e0)))
  const e1 = scale(across, half / norm(across))
  const corner = (i: number, j: number, k: number, e2: Vec3): Vec3 =>
    add(add(scale(e0, i), scale(e1, j)), scale(e2, k))
  if (dimension === 2) {
    const flat = (i: number, j: number) => corner(i, j, 0, e0)
    return [[flat(-1, -1), flat(1, -1), flat(1, 1), flat(-1, 1)]]
  }
  const e2 = scale(cross(e0, e1), 1 / half)
  const at = (i: number, j: number, k: number) => corner(i, j, k, e2)
  return [
    [at(1, -1, -1), at(1, 1, -1), at(1, 1, 1), at(1, -1, 1)],
    [at(-1, -1, -1), at(-1, -1, 1), at(-1, 1, 1), at(-1, 1, -1)],
    [at(-1, 1, -1), at(-1, 1, 1), at(1, 1, 1), at(1, 1, -1)],
    [at(-1, -1, -1), at(1, -1, -1), at(1, -1, 1), at(-1, -1, 1)],
    [at(-1, -1, 1), at(1, -1, 1), at(1, 1, 1), at(-1, 1, 1)],
    [at(-1, -1, -1), at(-1, 1, -1), at(1, 1, -1), at(1, -1, -1)],
  ]
}

/** The parts of a convex cell on the near and on the far side of a plane normal·k = distance. */
function split(
  faces: Faces,
  normal: Vec3,
  distance: number,
  dimension: Dimension,
  tolerance: number,
): [near: Faces | undefined, far: Faces | undefined] {
  let [low, high] = [0, 0]
  for (const face of faces)
    for (const v of face) {
      const h = dot(v, normal) - distance
      low = Math.min(low, h)
      high = Math.max(high, h)
    }
  if (high <= tolerance) return [faces, undefined]
  if (low >= -tolerance) return [undefined, faces]
  const height = (v: Vec3) => dot(v, normal) - distance
  return [
    cut(faces, height, normal, dimension, tolerance),
    cut(faces, v => -height(v), scale(normal, -1), dimension, tolerance),
  ]
}

/** The part with height ≤ 0; the new face looks along `outward`. */
function cut(
  faces: Faces,
  height: (v: Vec3) => number,
  outward: Vec3,
  dimension: Dimension,
  tolerance: number,
): Faces {
  const kept: Vec3[][] = []
  const rim: Vec3[] = []
  for (const face of faces) {
    const rest: Vec3[] = []
    let isFlat = true
    for (const [i, v] of face.entries()) {
      const h = height(v)
      if (h <= tolerance) {
        rest.push(v)
        if (h >= -tolerance) rim.push(v)
        else isFlat = false
      }
      if (dimension === 1 && i > 0) continue
      const w = face[(i + 1) % face.length]
      const g = height(w)
      if ((h > tolerance && g < -tolerance) || (h < -tolerance && g > tolerance)) {
        const at = add(v, scale(subtract(w, v), h / (h - g)))
        rest.push(at)
        rim.push(at)
        isFlat = false
      }
    }
    if (rest.length >= dimension && !isFlat) kept.push(rest)
  }
  if (dimension < 3) return kept
  const cap = around(distinct(rim, tolerance), outward)
  return cap.length > 2 ? [...kept, cap] : kept
}

function distinct(points: readonly Vec3[], tolerance: number): Vec3[] {
  const found: Vec3[] = []
  for (const point of points)
    if (!found.some(other => norm(subtract(other, point)) <= tolerance)) found.push(point)
  return found
}

/** Counter-clockwise as seen from where `outward` points. */
function around(corners: readonly Vec3[], outward: Vec3): Vec3[] {
  if (corners.length < 3) return []
  const centre = scale(corners.reduce(add), 1 / corners.length)
  const x = subtract(corners[0], centre)
  const y = cross(outward, x)
  const bearing = (v: Vec3) => Math.atan2(dot(subtract(v, centre), y), dot(subtract(v, centre), x))
  return [...corners].sort((u, v) => bearing(u) - bearing(v))
}

function contentOf(faces: Faces, dimension: Dimension): number {
  if (dimension === 1) return faces.reduce((sum, [u, v]) => sum + norm(subtract(v, u)), 0)
  const inside = faces[0][0]
  let sum = 0
  for (const face of faces) {
    let area: Vec3 = [0, 0, 0]
    for (let i = 1; i + 1 < face.length; i++)
      area = add(area, cross(subtract(face[i], face[0]), subtract(face[i + 1], face[0])))
    sum += dimension === 2 ? norm(area) / 2 : dot(area, subtract(face[0], inside)) / 6
  }
  return sum
}
