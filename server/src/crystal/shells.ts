/** The zones that stack around the first one: k-space is filled by copies of it, one a reciprocal-lattice vector. */
import { add, combine, type Vec3 } from './vector.ts'
import type { Zone } from './zone.ts'

export interface Shells {
  /** Vectors whose zones share a wall with the first one. */
  readonly first: readonly Vec3[]
  /** Vectors whose zones share a wall with one of those, the first ones and zero left out. */
  readonly second: readonly Vec3[]
}

/** Cartesian, inverse length with the 2π; in the order of the zone's walls. */
export function shellsAround({ walls, reciprocal }: Zone): Shells {
  const first = walls.map(({ index }) => index)
  const seen = new Set(['0,0,0', ...first.map(String)])
  const second: Vec3[] = []
  for (const u of first) {
    for (const v of first) {
      const sum = add(u, v).map(x => x + 0) as unknown as Vec3
      if (seen.has(String(sum))) continue
      seen.add(String(sum))
      second.push(sum)
    }
  }
  const place = (index: Vec3) => combine(index, reciprocal)
  return { first: first.map(place), second: second.map(place) }
}
