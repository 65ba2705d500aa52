/** Labels go by the stated type where the atoms keep no more, although the metric has more symmetry. */
import { expect, test } from 'vitest'
import { findingsOf, snapshotOf } from '../checks/harness.ts'

const POLAR = `lattice: {bravais: tP, a: 3.97, c: 3.97}
atoms:
  - Pb: [0, 0, 0]
  - Ti: [1/2, 1/2, 0.54]
  - O: [1/2, 1/2, 0.11]
  - O: [1/2, 0, 0.61]
  - O: [0, 1/2, 0.61]
space-group: 99
`
const labelsOf = (text: string) =>
  snapshotOf(text)
    .documents[0].crystal.book?.points.map(({ label }) => label)
    .sort()

test('a polar tetragonal crystal with c = a has the tetragonal labels (Setyawan and Curtarolo 2010)', () => {
  expect(labelsOf(`${POLAR}path: recommended\n`)).toEqual(['A', 'M', 'R', 'X', 'Z', 'Γ'].sort())
  const loud = findingsOf(`${POLAR}path: Γ – X – M – Γ – Z – R – A – Z | X – R | M – A\n`)
  expect(loud.filter(({ severity }) => severity !== 'info')).toEqual([])
})

test('Z lies along the polar axis', () => {
  const { crystal } = snapshotOf(POLAR).documents[0]
  expect(crystal.book?.points.find(({ label }) => label === 'Z')?.fraction).toEqual([0, 0, 0.5])
})

test('the higher type is not offered as a safe fix there, but is for the lattice alone', () => {
  const fixOf = (text: string) =>
    findingsOf(text).find(({ rule }) => rule === 'lattice-hidden-symmetry')?.fixes?.[0]
  expect(fixOf(POLAR)?.safe).toBe(false)
  expect(fixOf('lattice: {bravais: tP, a: 3.97, c: 3.97}\n')?.safe).toBe(true)
})

test('cubic atoms in a lattice stated tetragonal have the cubic labels', () => {
  const cubic =
    'lattice: {bravais: tP, a: 3.97, c: 3.97}\natoms:\n  - Cs: [0, 0, 0]\n  - Cl: [1/2, 1/2, 1/2]\n'
  expect(labelsOf(cubic)).toEqual(['M', 'R', 'X', 'Γ'])
})

test('an orthorhombic magnet with a = b has the orthorhombic labels', () => {
  const text =
    'lattice: {bravais: oP, a: 4, b: 4, c: 6}\natoms:\n  - Mn: {at: [0, 0, 0], name: up}\n  - Mn: {at: [1/2, 0, 0], name: down}\n'
  expect(labelsOf(text)).toEqual(['R', 'S', 'T', 'U', 'X', 'Y', 'Z', 'Γ'])
})
