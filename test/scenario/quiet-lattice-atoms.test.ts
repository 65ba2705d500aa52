/** The law of quiet for cells and atoms: correct work gets no error and no warning. */
import { describe, expect, test } from 'vitest'
import { BRAVAIS, type BravaisType, completeCell } from '../../server/src/crystal/bravais.ts'
import { isLattice, type Lattice, latticeFromCell } from '../../server/src/crystal/lattice.ts'
import reference from '../reference/crystals.json' with { type: 'json' }
import { atomsOf, STRUCTURES, written } from '../reference/structures.ts'
import { applyEdits, findingsOf } from '../unit/checks/harness.ts'

/** What the text gets above information. */
const loud = (text: string): string[] =>
  findingsOf(text)
    .filter(({ severity, rule }) => severity !== 'info' || rule === 'check-failed')
    .map(({ rule, message }) => `${rule}: ${message}`)
const isQuiet = (text: string): void => expect(loud(text), text).toEqual([])

interface Reference {
  readonly name: string
  readonly bravais: BravaisType
  readonly cell: Record<string, number>
}
const CRYSTALS: Reference[] = reference.crystals.map(({ name, bravais, cell_A_deg }) => ({
  name,
  bravais: bravais as BravaisType,
  cell: cell_A_deg as unknown as Record<string, number>,
}))

const parameters = (cell: Record<string, number>) =>
  Object.entries(cell)
    .map(([key, value]) => `${key}: ${value}`)
    .join(', ')

function latticeOf({ bravais, cell }: Reference): Lattice {
  const completed = completeCell(bravais, cell)
  const { centring, dimension } = BRAVAIS[bravais]
  const lattice = 'cell' in completed && latticeFromCell(completed.cell, centring, dimension)
  if (!lattice || !isLattice(lattice)) throw new Error('no lattice')
  return lattice
}

const rows = (vectors: readonly (readonly number[])[], digits: number) =>
  vectors.map(row => `    - [${row.map(x => x.toFixed(digits)).join(', ')}]`).join('\n')

describe.each(CRYSTALS)('$name', crystal => {
  const { name, bravais, cell } = crystal
  const structure = STRUCTURES[name]
  const byType = `lattice: {bravais: ${bravais}, ${parameters(cell)}}\npath: recommended\n`

  test('as a cell', () => isQuiet(byType))

  test('as vectors of its primitive cell, eight digits', () =>
    isQuiet(`lattice:\n  vectors:\n${rows(latticeOf(crystal).primitive, 8)}\npath: recommended\n`))

  test.each([2, 3, 4])(
    'as vectors of %i digits: a rounding is named as that of its own type, and undone',
    digits => {
      const text = `lattice:\n  vectors:\n${rows(latticeOf(crystal).primitive, digits)}\n`
      for (const { rule, facts, fixes } of findingsOf(text).filter(({ severity }) => severity !== 'info')) {
        expect(rule).toBe('lattice-nearly-symmetric')
        expect((facts as { nearly: BravaisType }).nearly).toBe(bravais)
        isQuiet(applyEdits(text, fixes![0].edits))
      }
    },
  )

  test('as vectors of its conventional cell with the type as a claim', () => {
    const { conventional, centring } = latticeOf(crystal)
    isQuiet(
      `lattice:\n  bravais: ${bravais}\n  centring: ${centring}\n  vectors:\n${rows(conventional, 8)}\n`,
    )
  })

  test.skipIf(!structure)('with its atoms and its space group', () => {
    const atoms = atomsOf(structure, BRAVAIS[bravais].centring).map(
      ({ element, position }) => `  - ${element}: [${position.map(written).join(', ')}]`,
    )
    isQuiet(`${byType}atoms:\n${atoms.join('\n')}\nspace-group: ${structure.group}\n`)
  })

  test.skipIf(!structure)('with its atoms brought into the cell, in bohr', () => {
    const length = (x: number) => x / 0.529177210544
    const inBohr = Object.fromEntries(
      Object.entries(cell).map(([key, x]) => [key, key.length === 1 ? length(x) : x]),
    )
    const atoms = atomsOf(structure, BRAVAIS[bravais].centring).map(
      ({ element, position }) =>
        `  - ${element}: [${position.map(x => written(x - Math.floor(x + 1e-9))).join(', ')}]`,
    )
    isQuiet(
      `unit: bohr\nlattice: {bravais: ${bravais}, ${parameters(inBohr)}}\natoms:\n${atoms.join('\n')}\nspace-group: ${structure.group}\n`,
    )
  })
})

test('the structures are those of the reference', () => {
  const names = new Set(CRYSTALS.map(({ name }) => name))
  for (const name of Object.keys(STRUCTURES)) expect(names).toContain(name)
  expect(Object.keys(STRUCTURES).length).toBeGreaterThan(40)
})

describe('work on crystals', () => {
  test('a tetragonal strain of silicon, its type stated', () =>
    isQuiet(
      `lattice: {bravais: tI, a: 3.8403, c: 5.4365}\natoms:\n  - Si: [0, 0, 0]\n  - Si: [0, 1/2, 1/4]\n`,
    ))

  test('a small strain by vectors, its type stated', () =>
    isQuiet(`
lattice:
  bravais: oP
  vectors: [[4.1230, 0, 0], [0, 4.1234, 0], [0, 0, 4.1226]]
atoms:
  - Cs: [0, 0, 0]
  - Cl: [1/2, 1/2, 1/2]
`))

  test('a strain of half a per cent by vectors, nothing stated', () =>
    isQuiet(
      `lattice:\n  vectors: [[4.123, 0, 0], [0, 4.1436, 0], [0, 0, 4.123]]\natoms:\n  - Cs: [0, 0, 0]\n  - Cl: [1/2, 1/2, 1/2]\n`,
    ))

  test('a frozen phonon: an atom 0.05 Å off its place', () =>
    isQuiet(`
lattice: {bravais: cF, a: 5.431}
atoms:
  - Si: [0, 0, 0]
  - Si: [0.2553, 0.2553, 0.2553]
`))

  test('a frozen phonon in a supercell: one of eight atoms 0.05 Å off', () =>
    isQuiet(`
lattice: {bravais: cP, a: 5.431}
atoms:
  - Si: [0.0092, 0, 0]
  - Si: [0, 1/2, 1/2]
  - Si: [1/2, 0, 1/2]
  - Si: [1/2, 1/2, 0]
  - Si: [1/4, 1/4, 1/4]
  - Si: [1/4, 3/4, 3/4]
  - Si: [3/4, 1/4, 3/4]
  - Si: [3/4, 3/4, 1/4]
`))

  test('a frozen phonon of a hexagonal crystal, displaced by 0.05 Å from 1/3', () =>
    isQuiet(`
lattice: {bravais: hP, a: 3.2094, c: 5.2105}
atoms:
  - Mg: [0.3513, 0.6847, 1/4]
  - Mg: [2/3, 1/3, 3/4]
`))

  test('a sheet with its height', () =>
    isQuiet(`
lattice: {bravais: hp, a: 2.46, height: 20}
atoms:
  - C: [1/3, 2/3, 1/2]
  - C: [2/3, 1/3, 1/2]
path: Γ – M – K – Γ
`))

  test('a sheet of three layers by vectors, positions in ångström', () =>
    isQuiet(`
lattice:
  a: 3.16
  vectors: [[a, 0], [-a/2, sqrt(3)/2*a]]
  height: 18
frames: {atoms: cartesian}
atoms:
  - Mo: [0, 1.8244, 9]
  - S: [1.58, 0.9122, 10.56]
  - S: [1.58, 0.9122, 7.44]
`))

  test('a slab in three dimensions is only told of', () => {
    const slab = `
lattice: {bravais: hP, a: 2.46, c: 20}
atoms:
  - C: [1/3, 2/3, 1/2]
  - C: [2/3, 1/3, 1/2]
`
    isQuiet(slab)
    expect(findingsOf(slab).map(({ rule }) => rule)).toEqual(['vacuum-undeclared'])
  })

  test('an antiferromagnet with named atoms', () =>
    isQuiet(`
lattice: {bravais: cP, a: 2.8845}
atoms:
  - Cr: {at: [0, 0, 0], name: Cr_up}
  - Cr: {at: [1/2, 1/2, 1/2], name: Cr_down}
space-group: Im-3m
`))

  test('rock-salt layers of opposite moments along [111]', () =>
    isQuiet(`
lattice: {bravais: hR, a: 2.954, c: 14.47}
atoms:
  - Ni: {at: [0, 0, 0], name: up}
  - Ni: {at: [0, 0, 1/2], name: down}
  - O: [0, 0, 1/4]
  - O: [0, 0, 3/4]
`))

  test('a relaxed structure with slightly negative coordinates', () =>
    isQuiet(`
lattice: {bravais: oP, a: 11.5002, b: 4.1533, c: 4.4401}
atoms:
  - Sn: [0.11878, 0.25, 0.10326]
  - Sn: [0.88122, 0.75, 0.89674]
  - Sn: [0.38122, 0.75, 0.60326]
  - Sn: [0.61878, 0.25, 0.39674]
  - Se: [0.85475, 0.25, 0.48178]
  - Se: [0.14525, 0.75, 0.51822]
  - Se: [0.64525, 0.75, -0.01822]
  - Se: [0.35475, 0.25, 0.01822]
space-group: Pnma
`))

  test('molecules and hydrides: bonds of hydrogen, and a superhydride under pressure', () => {
    isQuiet(`
lattice: {bravais: cP, a: 10}
atoms:
  - H: [0.463, 1/2, 1/2]
  - H: [0.537, 1/2, 1/2]
`)
    // H₃S near 150 GPa: a = 3.089 Å (from memory).
    isQuiet(`
lattice: {bravais: cI, a: 3.089}
atoms:
  - S: [0, 0, 0]
  - H: [1/2, 0, 0]
  - H: [0, 1/2, 0]
  - H: [0, 0, 1/2]
space-group: Im-3m
`)
  })

  test('solids of large and of noble atoms', () => {
    // Room-temperature or low-temperature edges, from memory: Cs 6.14, Rb 5.70, Ar 5.31, Xe 6.13 Å.
    isQuiet('lattice: {bravais: cI, a: 6.14}\natoms:\n  - Cs: [0, 0, 0]\n')
    isQuiet('lattice: {bravais: cI, a: 5.70}\natoms:\n  - Rb: [0, 0, 0]\n')
    isQuiet('lattice: {bravais: cF, a: 5.31}\natoms:\n  - Ar: [0, 0, 0]\n')
    isQuiet('lattice: {bravais: cF, a: 6.13}\natoms:\n  - Xe: [0, 0, 0]\n')
  })

  test('a rhombohedral cell by its own axes, and positions on them', () =>
    isQuiet(`
lattice: {bravais: hR, a: 4.74582, alpha: 57.2334}
frames: {atoms: primitive}
atoms:
  - Bi: [0.23389, 0.23389, 0.23389]
  - Bi: [-0.23389, -0.23389, -0.23389]
space-group: R-3m
`))
})
