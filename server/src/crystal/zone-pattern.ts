/**
 * How corners, edges and faces of a Voronoi cell hang together: whole numbers only, no measures.
 *
 * The corners are the orders of the superbase vectors (24 in space: four vectors can follow each other in so many
 * ways), two orders being one corner where they differ only in pairs whose product vanishes. Two corners that differ in
 * one pair share an edge. The wall of a set of superbase vectors holds the corners in whose order the set comes first.
 * (The cell is the zonotope of a graph, its corners are the graph's acyclic orientations: C. Greene and T. Zaslavsky,
 * Trans. Amer. Math. Soc. 280, 97, 1983.)
 */
import { type Dimension, PAIRS } from './reduction.ts'
import { add, cross, dot, scale, subtract, type Vec3 } from './vector.ts'

/** What a cell looks like apart from its measures. */
export interface Pattern {
  /** One row a vertex, one sign a pair of `PAIRS`: +1 where the first comes first, 0 where the pair has no edge. */
  readonly signs: readonly Int8Array[]
  readonly edges: readonly (readonly [number, number])[]
  /** The sets of superbase vectors (as bits) that give walls, with the vertices on each. */
  readonly walls: readonly { readonly subset: number; readonly vertices: readonly number[] }[]
}

const patterns = new Map<number, Pattern>()

/** The pattern of a cell; it depends only on which products vanish (`Reduction.present`) and on handedness. */
export function patternOf(n: Dimension, present: number, rightHanded: boolean): Pattern {
  const key = (present * 4 + n) * 2 + (rightHanded ? 1 : 0)
  const known = patterns.get(key)
  if (known) return known
  const pattern = makePattern(n, present, rightHanded)
  patterns.set(key, pattern)
  return pattern
}

function makePattern(n: Dimension, present: number, rightHanded: boolean): Pattern {
  const pairs = PAIRS[n]
  const kept = pairs.map((_, k) => (present & (1 << k)) !== 0)
  const codes = new Map<number, Int8Array>()
  for (const order of orders(n + 1)) {
    let code = 0
    const signs = Int8Array.from(pairs, ([i, j], k) => {
      if (!kept[k]) return 0
      const first = order.indexOf(i) < order.indexOf(j)
      if (first) code |= 1 << k
      return first ? 1 : -1
    })
    codes.set(code, signs)
  }
  const vertexCodes = [...codes.keys()]
  const edges: [number, number][] = []
  vertexCodes.forEach((code, i) => {
    pairs.forEach((_, k) => {
      const other = kept[k] ? vertexCodes.indexOf(code ^ (1 << k)) : -1
      if (other > i) edges.push([i, other])
    })
  })
  const signs = [...codes.values()]
  const walls: { subset: number; vertices: number[] }[] = []
  for (let subset = 1; subset < (1 << (n + 1)) - 1; subset++) {
    const on = vertexCodes.flatMap((_, i) => (isOnWall(subset, signs[i], pairs) ? [i] : []))
    // With fewer corners it is a plane that only touches the zone.
    if (on.length >= n) walls.push({ subset, vertices: on })
  }
  if (n === 1) walls.sort((u, w) => u.vertices[0] - w.vertices[0])
  if (n === 3)
    for (const wall of walls) {
      const cycle = walk(wall.vertices, edges)
      const outward = turns(cycle, signs, 3) * (rightHanded ? 1 : -1) > 0
      wall.vertices = outward ? cycle : cycle.reverse()
    }
  return n === 2 ? asPolygon(signs, edges, walls, rightHanded) : { signs, edges, walls }
}

/** A vertex lies on the wall of a subset where all of the subset's vectors come before all others. */
const isOnWall = (subset: number, signs: Int8Array, pairs: readonly (readonly [number, number])[]): boolean =>
  pairs.every(([i, j], k) => {
    const difference = ((subset >> i) & 1) - ((subset >> j) & 1)
    return difference === 0 || signs[k] === 0 || signs[k] === difference
  })

function orders(count: number): number[][] {
  if (count === 1) return [[0]]
  return orders(count - 1).flatMap(order =>
    Array.from({ length: count }, (_, at) => [...order.slice(0, at), count - 1, ...order.slice(at)]),
  )
}

/** Some vertices of a polygon in the order in which edges join them. */
function walk(vertices: readonly number[], edges: readonly (readonly [number, number])[]): number[] {
  const cycle = [vertices[0]]
  while (cycle.length < vertices.length) {
    const here = cycle[cycle.length - 1]
    const next = vertices.find(
      v => !cycle.includes(v) && edges.some(([i, j]) => (i === here && j === v) || (j === here && i === v)),
    )
    cycle.push(next!)
  }
  return cycle
}

/** Right-handed superbases of the most regular kind, in which the sense of a cycle is found once for all lattices. */
const REGULAR: Record<2 | 3, readonly Vec3[]> = {
  2: [
    [1, 0, 0],
    [-1 / 2, Math.sqrt(3) / 2, 0],
    [-1 / 2, -Math.sqrt(3) / 2, 0],
  ],
  3: [
    [1, 1, 1],
    [1, -1, -1],
    [-1, 1, -1],
    [-1, -1, 1],
  ],
}

/** Positive where a cycle of vertices runs counter-clockwise: about z in the plane, seen from outside in space. */
function turns(cycle: readonly number[], signs: readonly Int8Array[], n: 2 | 3): number {
  const v = REGULAR[n]
  const [p, q, r] = cycle
    .slice(0, 3)
    .map(i =>
      PAIRS[n].reduce<Vec3>(
        (sum, [a, b], k) => add(sum, scale(subtract(v[a], v[b]), signs[i][k])),
        [0, 0, 0],
      ),
    )
  const normal = cross(subtract(q, p), subtract(r, q))
  return n === 2 ? normal[2] : dot(normal, p)
}

/** Put the vertices of a plane zone in order, with edges and walls to match. */
function asPolygon(
  signs: readonly Int8Array[],
  edges: readonly (readonly [number, number])[],
  walls: readonly { readonly subset: number; readonly vertices: readonly number[] }[],
  rightHanded: boolean,
): Pattern {
  const cycle = walk(
    signs.map((_, i) => i),
    edges,
  )
  if (turns(cycle, signs, 2) * (rightHanded ? 1 : -1) < 0) cycle.reverse()
  const sides = cycle.map((from, i): [number, number] => [from, cycle[(i + 1) % cycle.length]])
  return {
    signs: cycle.map(i => signs[i]),
    edges: sides.map((_, i) => [i, (i + 1) % sides.length]),
    walls: sides.map(([from, to], i) => ({
      subset: walls.find(w => w.vertices.includes(from) && w.vertices.includes(to))!.subset,
      vertices: [i, (i + 1) % sides.length],
    })),
  }
}
