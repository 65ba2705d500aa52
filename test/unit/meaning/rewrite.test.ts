/** A restated document means what it meant: the same lattice, atoms, k-points, meshes and supercell in space. */
import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { BRAVAIS, type BravaisType } from '../../../server/src/crystal/bravais.ts'
import {
  combine,
  determinant,
  distance,
  IDENTITY,
  inverse,
  type Mat3,
  multiply,
  norm,
  subtract,
  type Vec3,
} from '../../../server/src/crystal/vector.ts'
import { applyEdits } from '../../../server/src/format/edits.ts'
import type { Crystal } from '../../../server/src/meaning/crystal.ts'
import { type Cell, type Restatement, restate } from '../../../server/src/meaning/rewrite.ts'
import { snapshotOf } from '../checks/harness.ts'

/** What ten digits after the point leave, of a length of some ten. */
const CLOSE = 1e-6
const isWhole = (x: number): boolean => Math.abs(x - Math.round(x)) < 1e-5

const crystalOf = (text: string): Crystal => {
  const { documents } = snapshotOf(text)
  expect(documents[0].document.problems, text).toEqual([])
  return documents[0].crystal
}

/** Restate, read the new text, and hold everything in it against the old. */
function proved(text: string, cellOf: (crystal: Crystal) => Cell): { after: string; restated: Restatement } {
  const before = crystalOf(text)
  const restated = restate(before, text, cellOf(before))
  if (!restated) throw new Error(`not restated:\n${text}`)
  const after = applyEdits(text, restated.edits)
  const now = crystalOf(after)
  const rotation = restated.rotation ?? IDENTITY
  const where = `${text}\n became\n${after}`

  const oldRows = multiply(before.lattice!.primitive, rotation)
  const change = multiply(now.lattice!.primitive, inverse(oldRows))
  expect(change.flat().every(isWhole), where).toBe(true)
  expect(Math.abs(determinant(change)), where).toBeCloseTo(1, 4)

  expect(now.atoms.length, where).toBe(before.atoms.length)
  before.atoms.forEach((atom, i) => {
    const moved = combine(
      subtract(now.atoms[i].cartesian, combine(atom.cartesian, rotation)),
      inverse(oldRows),
    )
    expect(moved.every(isWhole), where).toBe(true)
    expect(now.atoms[i].element).toBe(atom.element)
  })
  for (const [label, point] of before.points) {
    const there = now.points.get(label)!.cartesian
    expect(distance(combine(point.cartesian, rotation), there), `${label}: ${where}`).toBeLessThan(CLOSE)
  }
  if (restated.meshesKept) expect(sameMesh(before, now, change), where).toBe(true)
  if (before.supercell) {
    const rows = multiply(multiply(now.supercell!, change), inverse(before.supercell))
    expect(rows.flat().every(isWhole), where).toBe(true)
    expect(Math.abs(determinant(rows)), where).toBeCloseTo(1, 4)
    expect(Math.sign(determinant(now.supercell!)), where).toBe(Math.sign(determinant(before.supercell)))
  }
  return { after, restated }
}

const meshOf = ({ document }: Crystal) => {
  const [mesh] = document.meshes
  const numbers = (vector: typeof mesh.divisions, rest: number) =>
    [0, 1, 2].map(i => vector?.items[i]?.value ?? rest) as unknown as Vec3
  return { divisions: numbers(mesh.divisions, 1), shift: numbers(mesh.shift, 0) }
}

/** Every point of the new mesh is one of the old, and there are as many. */
function sameMesh(before: Crystal, now: Crystal, change: Mat3): boolean {
  if (before.document.meshes.length === 0) return true
  const old = meshOf(before)
  const fresh = meshOf(now)
  const size = (n: Vec3) => n[0] * n[1] * n[2]
  if (size(old.divisions) !== size(fresh.divisions)) return false
  const back = inverse(change)
  for (let i = 0; i < fresh.divisions[0]; i++)
    for (let j = 0; j < fresh.divisions[1]; j++)
      for (let k = 0; k < fresh.divisions[2]; k++) {
        const fraction = [i, j, k].map(
          (n, axis) => (n + fresh.shift[axis]) / fresh.divisions[axis],
        ) as unknown as Vec3
        // Columns of k-fractions: κ = W⁻¹ κ′.
        const there = back.map(row => row[0] * fraction[0] + row[1] * fraction[1] + row[2] * fraction[2])
        if (!there.every((x, axis) => isWhole(x * old.divisions[axis] - old.shift[axis]))) return false
      }
  return true
}

const written = fc.oneof(
  fc.constantFrom('0', '1/2', '1/3', '-1/4', '2/3', '5/6', '0.25', '0.1', '-0.0312', '0.7315'),
  fc.integer({ min: -999, max: 999 }).map(n => String(n / 1000)),
)
const triple = fc.tuple(written, written, written).map(numbers => `[${numbers.join(', ')}]`)
const length = fc.integer({ min: 3000, max: 9000 }).map(n => n / 1000)
const angle = fc.integer({ min: 80, max: 115 })

const cells = fc.tuple(
  fc.constantFrom<BravaisType>('cF', 'cI', 'tI', 'oC', 'oA', 'oF', 'oI', 'hP', 'hR', 'mP', 'mC', 'mI', 'aP'),
  length,
  length,
  length,
  angle,
  angle,
  angle,
)
const lattices = cells.map(([bravais, a, b, c, alpha, beta, gamma]) => {
  const values: Record<string, number> = { a, b, c, alpha, beta, gamma }
  return `lattice: {bravais: ${bravais}, ${BRAVAIS[bravais].free[0].map(name => `${name}: ${values[name]}`).join(', ')}}`
})
const vectors = fc
  .tuple(
    length,
    length,
    length,
    fc.integer({ min: -900, max: 900 }),
    fc.constantFrom('P', 'P', 'C', 'I', 'F', 'A'),
  )
  .map(
    ([a, b, c, lean, centring]) =>
      `lattice:\n  a: ${a} # a comment\n  vectors:\n    - [a, 0, 0]\n    - [${lean / 1000}, ${b}, 0] # another\n    - [0.5, -a/4, ${c}]\n${centring === 'P' ? '' : `  centring: ${centring}\n`}`,
  )

const documents = fc
  .record({
    lattice: fc.oneof(lattices, vectors),
    atomFrame: fc.constantFrom('conventional', 'primitive', 'cartesian'),
    pointFrame: fc.constantFrom('primitive', 'conventional', 'cartesian', '2pi/a'),
    atoms: fc.array(triple, { minLength: 1, maxLength: 3 }),
    points: fc.tuple(triple, triple),
    divisions: fc.oneof(
      fc.integer({ min: 1, max: 5 }).map(n => [n, n, n]),
      fc.tuple(
        fc.integer({ min: 1, max: 5 }),
        fc.integer({ min: 1, max: 5 }),
        fc.integer({ min: 1, max: 5 }),
      ),
    ),
    shift: fc.tuple(
      fc.constantFrom('0', '1/2', '0.5'),
      fc.constantFrom('0', '1/2'),
      fc.constantFrom('0', '1/2'),
    ),
    supercell: fc.constantFrom('[2, 1, 3]', '[[1, 1, 0], [-1, 1, 0], [0, 0, 2]]', '[2, 2, 2]'),
  })
  .map(
    ({ lattice, atomFrame, pointFrame, atoms, points, divisions, shift, supercell }) => `${lattice.trimEnd()}
frames: {atoms: ${atomFrame}, points: ${pointFrame}}
atoms:
${atoms.map((at, i) => `  - ${['Si', 'C', 'O'][i]}: ${at} # kept`).join('\n')}
points:
  P: ${points[0]}
  Q: ${points[1]}
path: P – Q
mesh:
  divisions: [${divisions.join(', ')}]
  shift: [${shift.join(', ')}]
supercell: ${supercell}
`,
  )

const STEPS: readonly Mat3[] = [
  [
    [1, 1, 0],
    [0, 1, 0],
    [0, 0, 1],
  ],
  [
    [1, 0, 0],
    [0, 1, 0],
    [0, -1, 1],
  ],
  [
    [0, 1, 0],
    [0, 0, 1],
    [1, 0, 0],
  ],
  [
    [1, 0, 0],
    [0, -1, 0],
    [0, 0, 1],
  ],
]
const unimodular = fc
  .array(fc.constantFrom(...STEPS), { maxLength: 4 })
  .map(steps => steps.reduce((product, step) => multiply(product, step), IDENTITY))

describe('any document', () => {
  test('in any other primitive basis of its lattice, by vectors', () =>
    fc.assert(
      fc.property(documents, unimodular, (text, change) => {
        const { after, restated } = proved(text, ({ lattice }) => ({
          change: multiply(change, lattice!.primitiveFromConventional),
          centring: 'P',
        }))
        expect(restated.rotation).toBeUndefined()
        expect(after.split('# kept').length).toBe(text.split('# kept').length)
      }),
      { numRuns: 60, seed: 11 },
    ))

  test('by the type that its lattice has, in that type’s orientation', () =>
    fc.assert(
      fc.property(documents, text => {
        proved(text, ({ lattice, type }) => ({
          change: multiply(type!.conventionalFromPrimitive, lattice!.primitiveFromConventional),
          centring: BRAVAIS[type!.bravais!].centring,
          bravais: type!.bravais,
        }))
      }),
      { numRuns: 60, seed: 12 },
    ))

  test('has the same space group after it', () =>
    fc.assert(
      fc.property(lattices, unimodular, (lattice, change) => {
        const text = `${lattice}\natoms:\n  - Si: [0, 0, 0]\n  - C: [1/4, 1/2, 0.1]\n  - C: [-1/4, 1/2, -0.1]\n`
        const { after } = proved(text, crystal => ({
          change: multiply(change, crystal.lattice!.primitiveFromConventional),
          centring: 'P',
        }))
        const group = (file: string) => crystalOf(file).symmetry?.spaceGroup?.number
        expect(group(after)).toBe(group(text))
      }),
      { numRuns: 30, seed: 13 },
    ))
})

describe('a cell that holds several primitive ones', () => {
  const copies = {
    F: ['0, 0, 0', '0, 1/2, 1/2', '1/2, 0, 1/2', '1/2, 1/2, 0'],
    I: ['0, 0, 0', '1/2, 1/2, 1/2'],
  }
  test.each([
    ['F', 'cF'],
    ['F', 'oF'],
    ['I', 'cI'],
    ['I', 'tI'],
    ['I', 'oI'],
  ] as const)('becomes the %s-centred %s lattice with the same atoms and k-points', (centring, bravais) => {
    const parameters = { c: 'a: 4.1', t: 'a: 4.1, c: 5.3', o: 'a: 4.1, b: 4.7, c: 5.3' }[
      bravais[0] as 'c' | 't' | 'o'
    ]
    const shifted = (x: number, y: number, z: number) =>
      copies[centring].map(copy => {
        const [u, v, w] = copy.split(', ')
        return `[${x} + ${u}, ${y} + ${v}, ${z} + ${w}]`
      })
    const atoms = [
      ...shifted(0, 0, 0).map(at => `  - Si: ${at}`),
      ...shifted(0.12, 0.2, 0.31).map(at => `  - C: ${at}`),
    ]
    const text = `lattice: {bravais: ${bravais[0]}P, ${parameters}}
atoms:
${atoms.join('\n')}
points: {P: [0.1, 1/3, -1/4], Q: [1/2, 1/2, 1/2]}
path: P – Q
supercell: [1, 2, 2]
`
    const before = crystalOf(text)
    expect(before.symmetry?.translationsFold).toBe(copies[centring].length)
    const restated = restate(before, text, { change: IDENTITY, centring, bravais })!
    const now = crystalOf(applyEdits(text, restated.edits))
    expect(now.atoms.map(({ element }) => element)).toEqual(['Si', 'C'])
    const toFractions = inverse(now.lattice!.primitive)
    for (const { cartesian, element } of before.atoms) {
      const there = now.atoms.filter(atom =>
        combine(subtract(atom.cartesian, cartesian), toFractions).every(isWhole),
      )
      expect(there.map(atom => atom.element)).toEqual([element])
    }
    for (const [label, point] of before.points)
      expect(distance(point.cartesian, now.points.get(label)!.cartesian)).toBeLessThan(CLOSE)
    const volume = (crystal: Crystal) => determinant(crystal.supercell!) * crystal.lattice!.volume
    expect(volume(now)).toBeCloseTo(volume(before), 6)
    expect(now.symmetry?.spaceGroup?.number).toBe(before.symmetry?.spaceGroup?.number)
    expect(now.symmetry?.translationsFold).toBe(1)
  })
})

const permuted = (rows: string): Cell => ({
  change: [...rows].map(letter => IDENTITY['abc'.indexOf(letter)]) as unknown as Mat3,
  centring: 'P',
})

describe('what is written', () => {
  const orthorhombic = 'lattice:\n  vectors: [[4.2, 0, 0], [0, 5.1, 0], [0, 0, 6.3]]\n'

  test('axes in turn keep every spelling', () => {
    const { after, restated } = proved(
      `${orthorhombic}atoms:\n  - Sn: [1 / 3, 0.250, sqrt(2)/3]\npoints: {Q: [.5, 1/8, 0]}\nmesh: {divisions: [4, 3, 2], shift: [0, 1/2, 0]}\n`,
      () => permuted('bca'),
    )
    expect(after).toBe(
      'lattice:\n  vectors: [[0, 5.1, 0], [0, 0, 6.3], [4.2, 0, 0]]\natoms:\n  - Sn: [0.250, sqrt(2)/3, 1 / 3]\npoints: {Q: [1/8, 0, .5]}\nmesh: {divisions: [3, 2, 4], shift: [1/2, 0, 0]}\n',
    )
    expect(restated.meshesKept).toBe(true)
  })

  test('a plane lattice with vectors and points of two numbers', () => {
    const { after } = proved(
      'lattice:\n  vectors: [[3, 0], [3, 4]]\n  height: 20\natoms:\n  - C: [1/3, 1/3, 0.5]\npoints: {Q: [1/2, 1/4]}\nmesh: {divisions: [6, 6, 1]}\nsupercell: [2, 3]\n',
      () => ({
        change: [
          [1, 0, 0],
          [-1, 1, 0],
          [0, 0, 1],
        ],
        centring: 'P',
      }),
    )
    expect(after).toBe(
      'lattice:\n  vectors: [[3, 0], [0, 4]]\n  height: 20\natoms:\n  - C: [2/3, 1/3, 0.5]\npoints: {Q: [1/2, -1/4]}\nmesh: {divisions: [6, 6, 1]}\nsupercell: [[2, 0], [3, 3]]\n',
    )
  })

  test('labels of the book that come to mean an equivalent point are told', () => {
    const text = `${orthorhombic}path: Γ – X – S\n`
    const before = crystalOf(text)
    const restated = restate(before, text, permuted('bca'))!
    const now = crystalOf(applyEdits(text, restated.edits))
    const same = ['X', 'S'].every(
      label => distance(before.pointOf(label)!.cartesian, now.pointOf(label)!.cartesian) < CLOSE,
    )
    expect(restated.labelsKept).toBe(same)
  })

  test('a mesh by its spacing, a half-written point, an alias', () => {
    const spaced = proved(`${orthorhombic}mesh: {spacing: 0.2}\n`, () => permuted('cab'))
    expect(spaced.restated.meshesKept).toBe(true)
    const open = `${orthorhombic}points: {Q: [1/2, ]}\n`
    expect(restate(snapshotOf(open).documents[0].crystal, open, permuted('bca'))).toBeUndefined()
    const alias = `${orthorhombic}points: {Q: &q [1/2, 1/4, 0], R: *q}\n`
    expect(restate(crystalOf(alias), alias, permuted('bca'))).toBeUndefined()
  })

  test('a supercell that the finer lattice cannot say, a larger cell: not restated', () => {
    const text = `${orthorhombic}atoms:\n  - Sn: [0.1, 1/4, 0.2]\n`
    const doubled: Cell = {
      change: [
        [2, 0, 0],
        [0, 1, 0],
        [0, 0, 1],
      ],
      centring: 'P',
    }
    expect(restate(crystalOf(text), text, doubled)).toBeUndefined()
  })
})

test('lengths of the restated cell are those of the old', () => {
  const { after } = proved(
    'lattice: {bravais: oC, a: 4, b: 7, c: 5}\natoms:\n  - C: [0.1, 0.2, 0.3]\n',
    ({ lattice }) => ({
      change: lattice!.primitiveFromConventional,
      centring: 'P',
    }),
  )
  const { lattice } = crystalOf(after)
  // (a − b)/2 and (a + b)/2 of the rectangle.
  expect(lattice!.primitive.map(norm)).toEqual([Math.hypot(2, 3.5), Math.hypot(2, 3.5), 5])
})
