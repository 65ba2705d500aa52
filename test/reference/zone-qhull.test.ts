/**
 * A second, independent program judges the zones: Qhull (C. B. Barber, D. P. Dobkin and H. Huhdanpaa, ACM Trans. Math.
 * Softw. 22, 469, 1996), as Debian's package qhull-bin. `qhalf` cuts half-spaces, `qconvex` measures what is left.
 *
 * Qhull gets the Bragg planes of every reciprocal vector that can matter, made from the lattice's own straight basis; our
 * code gets the same lattice on a skewed one. What can matter is known without our code: where the zone reaches no further
 * than R, no G longer than 2R cuts it.
 */
import { spawnSync } from 'node:child_process'
import { describe, expect, test } from 'vitest'
import { BRAVAIS, BRAVAIS_TYPES, type BravaisType } from '../../server/src/crystal/bravais.ts'
import type { Lattice } from '../../server/src/crystal/lattice.ts'
import { norm, subtract, type Vec3 } from '../../server/src/crystal/vector.ts'
import { buildZone, type Zone } from '../../server/src/crystal/zone.ts'
import {
  fromCell,
  randomLattice,
  seeded,
  skewed,
  unimodular,
  vectorsWithin,
} from '../unit/crystal/zone-lattices.ts'

function qhull(program: 'qhalf' | 'qconvex', options: string[], input: string): string[][] {
  const { error, status, stdout, stderr } = spawnSync(program, options, {
    input,
    encoding: 'utf8',
    maxBuffer: 2 ** 28,
  })
  if (error)
    throw new Error(
      `${program} does not run (${error.message}). Install the Debian package qhull-bin; these tests need it.`,
    )
  if (status !== 0) throw new Error(`${program} ${options.join(' ')} failed: ${stderr}`)
  return stdout.split('\n').map(line => line.trim().split(/\s+/))
}

/** Corners of the cut of the half-spaces 2k·G ≤ |G|². */
function corners(planes: readonly Vec3[], n: number): Vec3[] {
  const rows = planes.map(G => [...G.slice(0, n).map(x => x / norm(G)), -norm(G) / 2].join(' '))
  const input = [`${n} 1`, Array(n).fill(0).join(' '), n + 1, rows.length, ...rows].join('\n')
  const [, [count], ...points] = qhull('qhalf', ['Fp'], input)
  return points.slice(0, Number(count)).map(p => [Number(p[0]), Number(p[1]), n > 2 ? Number(p[2]) : 0])
}

interface Measured {
  readonly vertices: readonly Vec3[]
  readonly edges: number
  readonly faces: number
  readonly content: number
  /** Corners of each face, in order. */
  readonly sides: readonly number[]
}

function measure(vertices: readonly Vec3[], n: number): Measured {
  const input = [n, vertices.length, ...vertices.map(v => v.slice(0, n).join(' '))].join('\n')
  const [, sizes, [faces], ...lists] = qhull('qconvex', ['FS', 'Fv'], input)
  const sides = lists.slice(0, Number(faces)).map(list => Number(list[0]))
  const edges = n === 3 ? sides.reduce((x, y) => x + y, 0) / 2 : sides.length
  return {
    vertices,
    edges,
    faces: Number(faces),
    content: Number(sizes[sizes.length - 1]),
    sides: sides.sort(),
  }
}

function judge(l: Lattice): Measured {
  const n = l.dimension
  const within = (radius: number) =>
    [...vectorsWithin(l.reciprocal, l.primitive, n, [0, 0, 0], radius)].map(v => v.G).filter(G => norm(G) > 0)
  // Every k is equivalent to one whose fractions lie within ±½, so the zone reaches no further than half the sum of |bᵢ|.
  const reach = l.reciprocal.slice(0, n).reduce((sum, b) => sum + norm(b) / 2, 0)
  return measure(corners(within(2.000001 * reach), n), n)
}

function compare(zone: Zone, measured: Measured): void {
  const n = zone.dimension
  expect(zone.vertices.length).toBe(measured.vertices.length)
  expect(zone.edges.length).toBe(measured.edges)
  expect(zone.walls.length).toBe(measured.faces)
  if (n === 3) expect(zone.faces.map(f => f.vertices.length).sort()).toEqual(measured.sides)
  expect(zone.volume / measured.content).toBeCloseTo(1, 9)
  expect(zone.circumradius / Math.max(...measured.vertices.map(norm))).toBeCloseTo(1, 9)
  for (const v of measured.vertices)
    expect(zone.vertices.filter(u => norm(subtract(u, v)) < 1e-7 * zone.inradius)).toHaveLength(1)
}

const spread = BRAVAIS_TYPES.flatMap(type =>
  Array.from({ length: BRAVAIS[type].dimension === 3 ? 18 : 6 }, (_, i) => [type, i + 1] as const),
)

describe(`${spread.length} random lattices`, () => {
  test.each(BRAVAIS_TYPES.map(type => [type] as const))('of type %s', type => {
    for (const [, seed] of spread.filter(([t]) => t === type)) {
      const random = seeded(1000 * BRAVAIS_TYPES.indexOf(type) + seed)
      const own = randomLattice(type, random, seed % 3 === 0 ? 12 : 3)
      const other = skewed(own, unimodular(random, own.dimension, 5))
      compare(buildZone(other.reciprocal, other.dimension), judge(own))
    }
  })
})

describe('shapes at the borders of others', () => {
  test.each([
    ['tI', { a: 4, c: 4 * Math.SQRT2 }],
    ['tI', { a: 4, c: 4 }],
    ['hR', { a: 4, alpha: 60 }],
    ['hR', { a: 4, alpha: 90 }],
    ['hR', { a: 4, alpha: (Math.acos(-1 / 3) * 180) / Math.PI }],
    ['oF', { a: 1 / Math.sqrt(1 / 25 + 1 / 49), b: 5, c: 7 }],
    ['oI', { a: 3, b: 4, c: 5 }],
    ['oC', { a: 4, b: 4, c: 7 }],
    ['oC', { a: 4, b: 4 * Math.sqrt(3), c: 7 }],
    ['mC', { a: 6, b: 4, c: 5, beta: 90 }],
    ['mI', { a: 6, b: 4, c: 6, beta: 100 }],
    ['aP', { a: 4, b: 4, c: 4, alpha: 60, beta: 60, gamma: 90 }],
    ['oP', { a: 1, b: 1, c: 40 }],
    ['hP', { a: 1, c: 40 }],
    ['oF', { a: 1, b: 1.2, c: 8 }],
    ['mp', { a: 4, b: 4, gamma: 60 }],
    ['oc', { a: 1, b: 50 }],
  ] as [BravaisType, object][])('%s %j', (type, given) => {
    const own = fromCell(type, given)
    const measured = judge(own)
    compare(buildZone(own.reciprocal, own.dimension), measured)
    const other = skewed(own, unimodular(seeded(77), own.dimension, 5))
    compare(buildZone(other.reciprocal, other.dimension), measured)
  })
})
