/** A document restated for its supercell is the same crystal, path and mesh in space. */
import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { BRAVAIS, BRAVAIS_TYPES, type BravaisType } from '../../../server/src/crystal/bravais.ts'
import {
  apply,
  combine,
  determinant,
  distance,
  inverse,
  type Mat3,
  multiply,
  subtract,
  type Vec3,
} from '../../../server/src/crystal/vector.ts'
import { applyEdits } from '../../../server/src/format/edits.ts'
import type { Crystal } from '../../../server/src/meaning/crystal.ts'
import type { Restatement } from '../../../server/src/meaning/rewrite.ts'
import { restateForSupercell } from '../../../server/src/meaning/rewrite-supercell.ts'
import { snapshotOf } from '../checks/harness.ts'

const crystalOf = (text: string): Crystal => {
  const { documents } = snapshotOf(text)
  expect(documents[0].document.problems, text).toEqual([])
  return documents[0].crystal
}

/** What ten digits after the point leave. */
const CLOSE = 1e-6
const isWhole = (x: number): boolean => Math.abs(x - Math.round(x)) < 1e-5
const key = (fraction: Vec3): string => fraction.map(x => ((Math.round(x * 1e5) % 1e5) + 1e5) % 1e5).join()

function rewritten(text: string): { after: string; restated: Restatement } {
  const before = crystalOf(text)
  const restated = restateForSupercell(before, text)
  if (!restated) throw new Error(`not restated:\n${text}`)
  const after = applyEdits(text, restated.edits)
  const now = crystalOf(after)
  const where = `${text}\n became\n${after}`
  const matrix = before.supercell!
  const fold = Math.round(Math.abs(determinant(matrix)))

  const rows = multiply(matrix, before.lattice!.primitive)
  rows.forEach((row, i) => {
    expect(distance(row, now.lattice!.primitive[i]), where).toBeLessThan(CLOSE)
  })
  expect(now.document.supercell, where).toBeUndefined()

  expect(now.atoms.length, where).toBe(fold * before.atoms.length)
  const toOld = inverse(before.lattice!.primitive)
  before.atoms.forEach((atom, i) => {
    const copies = now.atoms.slice(i * fold, (i + 1) * fold)
    const places = new Set<string>()
    for (const copy of copies) {
      expect(copy.element).toBe(atom.element)
      expect(copy.entry.name?.value).toBe(atom.entry.name?.value)
      const apart = combine(subtract(copy.cartesian, atom.cartesian), toOld)
      expect(apart.every(isWhole), where).toBe(true)
      places.add(key(combine(copy.cartesian, inverse(now.lattice!.primitive))))
    }
    expect(places.size, where).toBe(fold)
  })

  for (const [label, point] of before.points)
    expect(distance(point.cartesian, now.points.get(label)!.cartesian), where).toBeLessThan(CLOSE)
  const pathOf = ({ pieces }: Crystal) => pieces.map(({ points }) => points.map(point => point?.cartesian))
  if (!before.document.path?.recommended) {
    const [old, fresh] = [pathOf(before), pathOf(now)]
    expect(fresh.map(piece => piece.length)).toEqual(old.map(piece => piece.length))
    for (const [p, piece] of old.entries())
      for (const [i, k] of piece.entries()) expect(distance(k!, fresh[p][i]!), where).toBeLessThan(CLOSE)
  }
  if (restated.meshesKept) sameMesh(before, now, where)
  return { after, restated }
}

/** Every point of the old mesh lies on one of the new one, and |det M| of them on each. */
function sameMesh(before: Crystal, now: Crystal, where: string): void {
  const meshOf = ({ document }: Crystal) => {
    const [mesh] = document.meshes
    const three = (vector: typeof mesh.divisions, rest: number) =>
      [0, 1, 2].map(i => vector?.items[i]?.value ?? rest) as unknown as Vec3
    return mesh && { n: three(mesh.divisions, 1), s: three(mesh.shift, 0) }
  }
  const [old, fresh] = [meshOf(before), meshOf(now)]
  if (!old) return
  const fold = Math.round(Math.abs(determinant(before.supercell!)))
  expect(fold * fresh.n[0] * fresh.n[1] * fresh.n[2], where).toBe(old.n[0] * old.n[1] * old.n[2])
  for (let i = 0; i < old.n[0]; i++)
    for (let j = 0; j < old.n[1]; j++)
      for (let k = 0; k < old.n[2]; k++) {
        const there = apply(before.supercell!, [
          (i + old.s[0]) / old.n[0],
          (j + old.s[1]) / old.n[1],
          (k + old.s[2]) / old.n[2],
        ])
        expect(
          there.every((x, axis) => isWhole(x * fresh.n[axis] - fresh.s[axis])),
          where,
        ).toBe(true)
      }
}

const written = fc.oneof(
  fc.constantFrom('0', '1/2', '1/3', '-1/4', '2/3', '0.25', '0.1', '-0.0312'),
  fc.integer({ min: -999, max: 999 }).map(n => String(n / 1000)),
)
const rowOf = (n: number) => fc.array(written, { minLength: n, maxLength: n }).map(x => `[${x.join(', ')}]`)
const length = fc.integer({ min: 3000, max: 9000 }).map(n => n / 1000)
const angle = fc.integer({ min: 82, max: 112 })
const entry = fc.integer({ min: -2, max: 2 })

const lattices = fc
  .tuple(fc.constantFrom<BravaisType>(...BRAVAIS_TYPES), length, length, length, angle, angle, angle)
  .map(([bravais, a, b, c, alpha, beta, gamma]) => {
    const values: Record<string, number> = { a, b, c, alpha, beta, gamma }
    const free = BRAVAIS[bravais].free[0].map(name => `${name}: ${values[name]}`).join(', ')
    return { dimension: BRAVAIS[bravais].dimension, lattice: `lattice: {bravais: ${bravais}, ${free}}` }
  })
const vectors = fc.tuple(length, length, length).map(([a, b, c]) => ({
  dimension: 3,
  lattice: `lattice:\n  a: ${a} # kept\n  vectors:\n    - [0, a/2, a/2] # kept\n    - [${b}, 0.3, 0]\n    - [0, 1, -${c}]`,
}))
const chain = length.map(a => ({ dimension: 1, lattice: `lattice: {vectors: [[${a}, 0, 0]]}` }))

const documents = fc
  .oneof({ weight: 4, arbitrary: lattices }, vectors, chain)
  .chain(({ dimension, lattice }) =>
    fc
      .record({
        atomFrame: fc.constantFrom('conventional', 'primitive', 'cartesian'),
        pointFrame: fc.constantFrom('primitive', 'conventional', 'cartesian'),
        atoms: fc.tuple(rowOf(3), rowOf(3)),
        points: fc.tuple(rowOf(dimension), rowOf(dimension)),
        path: fc.constantFrom('P – Q', 'P – Γ – Q | Q – P', 'recommended'),
        divisions: fc.array(fc.integer({ min: 1, max: 6 }), { minLength: dimension, maxLength: dimension }),
        shift: fc.array(fc.constantFrom('0', '1/2'), { minLength: dimension, maxLength: dimension }),
        matrix: fc
          .array(entry, { minLength: dimension ** 2, maxLength: dimension ** 2 })
          .map(x => Array.from({ length: dimension }, (_, i) => x.slice(i * dimension, (i + 1) * dimension)))
          .filter(m => {
            const full = [0, 1, 2].map(i => [0, 1, 2].map(j => m[i]?.[j] ?? Number(i === j)))
            return Math.abs(determinant(full as unknown as Mat3)) > 0.5
          }),
        style: fc.boolean(),
      })
      .map(({ atomFrame, pointFrame, atoms, points, path, divisions, shift, matrix, style }) => {
        const list = style
          ? `atoms:\n  - Si: ${atoms[0]} # kept\n  # kept\n  - Fe:\n      at: ${atoms[1]}\n      name: up\n`
          : `atoms: [Si: ${atoms[0]}, Fe: {at: ${atoms[1]}, name: up}]\n`
        return `${lattice}
frames: {atoms: ${atomFrame}, points: ${pointFrame}}
${list}points:
  P: ${points[0]} # kept
  Q: ${points[1]}
path: ${path}
mesh:
  divisions: [${divisions.join(', ')}]
  shift: [${shift.join(', ')}]
supercell: [${matrix.map(row => `[${row.join(', ')}]`).join(', ')}]
`
      }),
  )

test('any document, of every lattice type, in any supercell', () => {
  fc.assert(
    fc.property(documents, text => {
      const { after } = rewritten(text)
      expect(after.split('# kept').length).toBe(text.split('# kept').length)
      expect(crystalOf(after).document.path?.recommended).toBe(false)
    }),
    { numRuns: 150, seed: 21 },
  )
})

describe('by example', () => {
  test('rock salt in its conventional cube', () => {
    const { after } = rewritten(`title: Lead telluride
lattice:
  bravais: cF
  a: 6.462
atoms:
  - Pb: [0, 0, 0] # the cation
  - Te: [1/2, 1/2, 1/2]
space-group: Fm-3m
path: Γ – X # along Δ
mesh:
  divisions: [8, 8, 8]
supercell: [[-1, 1, 1], [1, -1, 1], [1, 1, -1]]
`)
    // By hand: the four translations of F are (0,0,0), (½,½,0), (½,0,½), (0,½,½); X is (0, 1, 0) of the cube. A mesh of
    // 8³ of F is body-centred cubic and none of the cube's; its step |b|/8 = (√3/8)(2π/a) takes ⌈8/√3⌉ = 5 on 2π/a.
    expect(after).toBe(`title: Lead telluride
lattice:
  bravais: cP
  vectors: [[6.462, 0, 0], [0, 6.462, 0], [0, 0, 6.462]]
atoms:
  - Pb: [0, 0, 0] # the cation
  - Pb: [1/2, 1/2, 0]
  - Pb: [1/2, 0, 1/2]
  - Pb: [0, 1/2, 1/2]
  - Te: [1/2, 1/2, 1/2]
  - Te: [0, 0, 1/2]
  - Te: [0, 1/2, 0]
  - Te: [1/2, 0, 0]
space-group: Fm-3m
labels: none
points: {Γ: [0, 0, 0], X: [0, 1, 0]}
path: Γ – X # along Δ
# Steps as fine as, but not the k-points of, [8, 8, 8] of the primitive cell.
mesh:
  divisions: [5, 5, 5]
`)
  })

  test('a doubled cube keeps its mesh, folded', () => {
    const { after, restated } = rewritten(
      'lattice: {bravais: cP, a: 4}\nmesh: {divisions: [8, 8, 8], shift: [1/2, 0, 0]}\nsupercell: [2, 2, 1]\n',
    )
    expect(restated.meshesKept).toBe(true)
    expect(after).toBe(
      'lattice: {bravais: tP, vectors: [[8, 0, 0], [0, 8, 0], [0, 0, 4]]}\nmesh: {divisions: [4, 4, 8], shift: [1/2, 0, 0]}\n',
    )
  })

  test.each([
    ['a singular matrix', 'lattice: {bravais: cP, a: 4}\nsupercell: [[1, 1, 0], [2, 2, 0], [0, 0, 1]]\n'],
    ['none', 'lattice: {bravais: cP, a: 4}\n'],
    ['too many atoms', 'lattice: {bravais: cP, a: 4}\natoms:\n  - Si: [0, 0, 0]\nsupercell: [20, 20, 20]\n'],
    [
      'an atom that cannot be read',
      'lattice: {bravais: cP, a: 4}\natoms:\n  - Si: [0, x, 0]\nsupercell: [2, 1, 1]\n',
    ],
    [
      'an alias',
      'lattice: {bravais: cP, a: 4}\natoms:\n  - Si: &x [0, 0, 0]\n  - C: *x\nsupercell: [2, 1, 1]\n',
    ],
  ])('%s: nothing is rewritten', (_, text) => {
    const { crystal } = snapshotOf(text).documents[0]
    expect(restateForSupercell(crystal, text)).toBeUndefined()
  })
})
