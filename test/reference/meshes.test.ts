/**
 * Irreducible points and weights of meshes, judged by others: by spglib (Debian's package python3-spglib), by orbits that
 * are counted one by one in another language, by published special points, and by what a mesh is for.
 *
 * spglib and this program answer the same question where every rotation carries the mesh into itself. Where some do not
 * (half a step in a face-centred lattice, unequal divisions along equivalent vectors), spglib may put points together that
 * one rotation happens to carry into each other, though it carries others off the mesh: then the points do not stand for
 * equal parts of the sum. There the brute force alone is the judge: it takes the rotations that carry the set of points
 * into itself, and no others.
 */
import { spawnSync } from 'node:child_process'
import { join } from 'node:path'
import { beforeAll, describe, expect, test } from 'vitest'
import type { BravaisType } from '../../server/src/crystal/bravais.ts'
import { kRotations } from '../../server/src/crystal/kspace.ts'
import {
  countOrbits,
  isSymmetricMesh,
  keptRotations,
  type Mesh,
  meshOrbits,
} from '../../server/src/crystal/mesh.ts'
import { findSymmetry } from '../../server/src/crystal/symmetry.ts'
import { apply, combine, type Mat3, type Vec3 } from '../../server/src/crystal/vector.ts'
import { loadSymmetryFromDisk } from '../../server/src/symmetry-node.ts'
import { fromCell, seeded, wholeBetween } from '../unit/crystal/zone-lattices.ts'

beforeAll(loadSymmetryFromDisk)

interface Crystal {
  readonly name: string
  readonly rows: Mat3
  readonly positions: readonly Vec3[]
  readonly species: readonly number[]
  readonly timeReversal: boolean
}

const BARE: readonly (readonly [BravaisType, Record<string, number>])[] = [
  ['cP', { a: 3.9 }],
  ['cF', { a: 5.4 }],
  ['cI', { a: 3.2 }],
  ['tP', { a: 4, c: 7.1 }],
  ['tI', { a: 3.8, c: 9.5 }],
  ['oP', { a: 4, b: 5.3, c: 7.1 }],
  ['oC', { a: 4, b: 7.3, c: 5.1 }],
  ['oA', { a: 4, b: 7.3, c: 5.1 }],
  ['oF', { a: 5, b: 6.2, c: 8.3 }],
  ['oI', { a: 4, b: 6.1, c: 9.2 }],
  ['hP', { a: 3.2, c: 5.2 }],
  ['hR', { a: 4.4, c: 30.5 }],
  ['mP', { a: 5, b: 6, c: 7.4, beta: 103 }],
  ['mC', { a: 9, b: 6, c: 7.4, beta: 103 }],
  ['aP', { a: 5.1, b: 5.9, c: 7.2, alpha: 77, beta: 83, gamma: 71 }],
]

/** With atoms, fewer rotations: polar, chiral and without time reversal too. Fractions of the primitive vectors. */
const DECORATED: readonly Crystal[] = [
  withAtoms(
    'zinc blende',
    'cF',
    { a: 5.4 },
    [
      [0, 0, 0],
      [1 / 4, 1 / 4, 1 / 4],
    ],
    [1, 2],
  ),
  withAtoms(
    'zinc blende without time reversal',
    'cF',
    { a: 5.4 },
    [
      [0, 0, 0],
      [1 / 4, 1 / 4, 1 / 4],
    ],
    [1, 2],
    false,
  ),
  withAtoms(
    'wurtzite',
    'hP',
    { a: 3.2, c: 5.2 },
    [
      [1 / 3, 2 / 3, 0],
      [2 / 3, 1 / 3, 1 / 2],
      [1 / 3, 2 / 3, 0.38],
      [2 / 3, 1 / 3, 0.88],
    ],
    [1, 1, 2, 2],
  ),
  withAtoms(
    'wurtzite without time reversal',
    'hP',
    { a: 3.2, c: 5.2 },
    [
      [1 / 3, 2 / 3, 0],
      [2 / 3, 1 / 3, 1 / 2],
      [1 / 3, 2 / 3, 0.38],
      [2 / 3, 1 / 3, 0.88],
    ],
    [1, 1, 2, 2],
    false,
  ),
  withAtoms(
    'a polar perovskite without time reversal',
    'tP',
    { a: 4, c: 4.2 },
    [
      [0, 0, 0],
      [1 / 2, 1 / 2, 0.45],
    ],
    [1, 2],
    false,
  ),
  withAtoms(
    'tellurium, a chiral chain',
    'hP',
    { a: 4.45, c: 5.93 },
    [
      [0.27, 0, 1 / 3],
      [0, 0.27, 2 / 3],
      [-0.27, -0.27, 0],
    ],
    [1, 1, 1],
  ),
  withAtoms(
    'a stacking with a polar axis',
    'hR',
    { a: 4.4, c: 20 },
    [
      [0, 0, 0],
      [0.2, 0.2, 0.2],
      [0.55, 0.55, 0.55],
    ],
    [1, 2, 3],
    false,
  ),
]

function withAtoms(
  name: string,
  type: BravaisType,
  given: Record<string, number>,
  positions: readonly Vec3[],
  species: readonly number[],
  timeReversal = true,
): Crystal {
  return { name, rows: fromCell(type, given).primitive, positions, species, timeReversal }
}

const CRYSTALS: readonly Crystal[] = [
  ...BARE.map(([type, given]) => withAtoms(type, type, given, [[0, 0, 0]], [1])),
  ...DECORATED,
]

interface Case {
  readonly crystal: Crystal
  readonly divisions: Vec3
  readonly halves: Vec3
}

const HALVES: readonly Vec3[] = [
  [0, 0, 0],
  [1, 1, 1],
  [0, 0, 1],
  [1, 1, 0],
]

/** Equal divisions with the usual shifts; two kinds of unequal ones. */
function* cases(): Iterable<Case> {
  const random = seeded(20260505)
  for (const crystal of CRYSTALS) {
    for (const halves of HALVES) yield { crystal, divisions: even(wholeBetween(random, 3, 7)), halves }
    const n = wholeBetween(random, 3, 6)
    yield {
      crystal,
      divisions: [n, n, wholeBetween(random, 2, 5)],
      halves: HALVES[wholeBetween(random, 0, 3)],
    }
    yield {
      crystal,
      divisions: [n, n + 2, wholeBetween(random, 2, 5)],
      halves: HALVES[wholeBetween(random, 0, 3)],
    }
  }
}
const even = (n: number): Vec3 => [n, n, n]

interface Answer {
  readonly order: number
  readonly kept: number
  readonly orbits: readonly number[]
  readonly spglib: readonly number[]
}

function askOthers(list: readonly Case[]): Answer[] {
  const request = list.map(({ crystal, divisions, halves }) => ({
    lattice: crystal.rows,
    positions: crystal.positions,
    numbers: crystal.species,
    timeReversal: crystal.timeReversal,
    divisions,
    halves,
  }))
  const run = spawnSync('/usr/bin/python3', [join(import.meta.dirname, 'meshes.py')], {
    input: JSON.stringify(request),
    maxBuffer: 2 ** 28,
    encoding: 'utf8',
  })
  if (run.status !== 0)
    throw new Error(`This test needs the Debian package python3-spglib.\n${run.error?.message ?? run.stderr}`)
  return JSON.parse(run.stdout)
}

function groupOf({ rows, positions, species, timeReversal }: Crystal): Mat3[] {
  const found = findSymmetry({ dimension: 3, primitive: rows, positions, species, tolerance: 1e-5 })
  if (!('rotations' in found)) throw new Error(found.failed)
  return kRotations(found.rotations, timeReversal, 3)
}

test('irreducible points and weights agree with spglib and with brute force', () => {
  const list = [...cases()]
  const answers = askOthers(list)
  const compared = { symmetric: 0, shifted: 0, broken: 0 }
  list.forEach(({ crystal, divisions, halves }, i) => {
    const { order, kept, orbits, spglib } = answers[i]
    const group = groupOf(crystal)
    const mesh: Mesh = { divisions, shift: halves.map(s => s / 2) as unknown as Vec3 }
    const name = `${crystal.name} ${divisions.join('×')} shift ${halves.join('')}/2`
    expect(group.length, name).toBe(order)
    expect(keptRotations(mesh, group).length, name).toBe(kept)
    const ours = [...meshOrbits(mesh, group)!.sizes].sort((a, b) => a - b)
    expect(ours, name).toEqual(orbits)
    expect(countOrbits(mesh, group), name).toBe(orbits.length)
    const isSymmetric = isSymmetricMesh(mesh, group)
    expect(isSymmetric, name).toBe(kept === order)
    if (!isSymmetric) {
      compared.broken++
      return
    }
    compared.symmetric++
    if (halves.some(s => s > 0)) compared.shifted++
    expect(ours, `${name}, by spglib`).toEqual(spglib)
  })
  expect(compared.symmetric).toBeGreaterThanOrEqual(60)
  expect(compared.shifted).toBeGreaterThanOrEqual(20)
  expect(compared.broken).toBeGreaterThanOrEqual(20)
})

/** Cartesian components without sign and order, in units of 2π/a, with the weight: one text a point. */
function specialPoints(mesh: Mesh, type: BravaisType): string[] {
  const { primitive, reciprocal } = fromCell(type, { a: 1 })
  const group = groupOf({
    name: type,
    rows: primitive,
    positions: [[0, 0, 0]],
    species: [1],
    timeReversal: true,
  })
  const { points, sizes } = meshOrbits(mesh, group)!
  const total = mesh.divisions.reduce((a, b) => a * b, 1)
  return Array.from(sizes, (size, i) => {
    const near = (x: number) => x - Math.round(x)
    const [x, y, z] = [0, 1, 2].map(j => near((points[3 * i + j] + mesh.shift[j]) / mesh.divisions[j]))
    // The shortest of the equivalents by a reciprocal vector.
    let best: Vec3 = [9, 9, 9]
    for (const p of [-1, 0, 1])
      for (const q of [-1, 0, 1])
        for (const r of [-1, 0, 1]) {
          const k = combine([x + p, y + q, z + r], reciprocal).map(c => c / (2 * Math.PI)) as unknown as Vec3
          if (Math.hypot(...k) < Math.hypot(...best) - 1e-9) best = k
        }
    const sorted = best.map(c => Math.abs(c)).sort((a, b) => b - a)
    return `${sorted.map(c => Number((8 * c).toFixed(6))).join(' ')} × ${size}/${total}`
  }).sort()
}

const monkhorstPack = (q: number): Mesh => ({
  divisions: even(q),
  shift: q % 2 ? [0, 0, 0] : [0.5, 0.5, 0.5],
})

// Components in eighths of 2π/a, with the weights.
describe('published special points', () => {
  // A. Baldereschi, Phys. Rev. B 7, 5212 (1973): (1/4, 1/4, 1/4) (from memory).
  test('the mean-value point of the simple cubic lattice', () =>
    expect(specialPoints(monkhorstPack(2), 'cP')).toEqual(['2 2 2 × 8/8']))
  // D. J. Chadi and M. L. Cohen, Phys. Rev. B 8, 5747 (1973): weights 1/8, 3/8, 3/8, 1/8 (from memory).
  test('four points of the simple cubic lattice', () =>
    expect(specialPoints(monkhorstPack(4), 'cP')).toEqual([
      '1 1 1 × 8/64',
      '3 1 1 × 24/64',
      '3 3 1 × 24/64',
      '3 3 3 × 8/64',
    ]))
  // The same: (1/4, 1/4, 1/4) with 1/4 and (3/4, 1/4, 1/4) with 3/4 (from memory).
  test('two points of the face-centred cubic lattice', () =>
    expect(specialPoints(monkhorstPack(2), 'cF')).toEqual(['2 2 2 × 2/8', '6 2 2 × 6/8']))
})

/**
 * What a mesh is for (H. J. Monkhorst and J. D. Pack, Phys. Rev. B 13, 5188, 1976): the weighted sum over it of a plane wave
 * exp(2πi κ·m), made as symmetric as the crystal, vanishes unless every mᵢ is a multiple of Nᵢ; then it is exp(2πi s·m/N).
 */
test('plane waves are summed exactly over the irreducible points', () => {
  const random = seeded(20260606)
  let summed = 0
  for (const { crystal, divisions, halves } of cases()) {
    const group = groupOf(crystal)
    const mesh: Mesh = { divisions, shift: halves.map(s => s / 2) as unknown as Vec3 }
    if (!isSymmetricMesh(mesh, group)) continue
    const { points, sizes } = meshOrbits(mesh, group)!
    const total = divisions.reduce((a, b) => a * b, 1)
    const waves = [
      even(0),
      [...divisions],
      [0, 0, 1],
      [1, 0, 0],
      ...[1, 2, 3].map(() => even(0).map(() => wholeBetween(random, -9, 9))),
    ]
    for (const wave of waves) {
      const m = wave as unknown as Vec3
      let [re, im] = [0, 0]
      sizes.forEach((size, i) => {
        const k = [0, 1, 2].map(j => (points[3 * i + j] + mesh.shift[j]) / divisions[j]) as unknown as Vec3
        for (const rotation of group) {
          const phase = 2 * Math.PI * apply(rotation, k).reduce((sum, x, j) => sum + x * m[j], 0)
          re += (size / total / group.length) * Math.cos(phase)
          im += (size / total / group.length) * Math.sin(phase)
        }
      })
      const isMultiple = m.every((x, j) => x % divisions[j] === 0)
      const phase = 2 * Math.PI * m.reduce((sum, x, j) => sum + (x * mesh.shift[j]) / divisions[j], 0)
      const expected = isMultiple ? Math.cos(phase) : 0
      expect(re, `${crystal.name} ${divisions} ${halves} ${m}`).toBeCloseTo(expected, 8)
      expect(im).toBeCloseTo(isMultiple ? Math.sin(phase) : 0, 8)
      summed++
    }
  }
  expect(summed).toBeGreaterThan(300)
})
