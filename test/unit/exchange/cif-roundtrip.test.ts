/** Out as a CIF and in again: the same crystal. */
import fc from 'fast-check'
import { beforeAll, describe, expect, test } from 'vitest'
import { BRAVAIS, type BravaisType } from '../../../server/src/crystal/bravais.ts'
import { mapMatrix } from '../../../server/src/crystal/vector.ts'
import { importCif } from '../../../server/src/exchange/cif/import.ts'
import { exportCif } from '../../../server/src/exchange/cif/write.ts'
import type { Crystal } from '../../../server/src/meaning/crystal.ts'
import { loadSymmetryFromDisk } from '../../../server/src/symmetry-node.ts'
import { expectAlike, type Placed, placedOf, surroundings } from '../../reference/cif-tools.ts'
import reference from '../../reference/crystals.json' with { type: 'json' }
import { atomsOf, STRUCTURES, written } from '../../reference/structures.ts'
import { snapshotOf } from '../checks/harness.ts'

beforeAll(loadSymmetryFromDisk)

const crystalOf = (text: string): Crystal => snapshotOf(text).documents[0].crystal

function roundTrip(text: string) {
  const crystal = crystalOf(text)
  expect(crystal.lattice, text).toBeDefined()
  const cif = exportCif(crystal, { source: 'made.lattice.yaml', version: '0' })
  if ('refusal' in cif) throw new Error(`${cif.refusal}\n${text}`)
  const { text: lattice, faults, blocks } = importCif(cif.text, { source: 'made.cif' })
  expect(faults).toEqual([])
  return {
    crystal,
    back: crystalOf(lattice!),
    remarks: blocks[0].remarks.map(({ message }) => message),
    cif,
    lattice: lattice!,
  }
}

const inAngstrom = (crystal: Crystal): Placed => {
  const { rows, atoms } = placedOf(crystal)
  return { rows: mapMatrix(rows, x => x * crystal.angstrom), atoms }
}

function expectSame(text: string) {
  const trip = roundTrip(text)
  const { crystal, back, remarks } = trip
  expect(remarks).toEqual([])
  expect(back.symmetry!.spaceGroup!.number).toBe(crystal.symmetry!.spaceGroup!.number)
  expect(back.atoms.length).toBe(crystal.atoms.length)
  const volume = crystal.lattice!.volume * crystal.angstrom ** 3
  expect(Math.abs(back.lattice!.volume - volume)).toBeLessThan(1e-6 * volume)
  // Each atom is at least near its own images.
  expectAlike(surroundings(inAngstrom(back)), surroundings(inAngstrom(crystal)), 0)
  return trip
}

const parameters = (cell: object) =>
  Object.entries(cell)
    .map(([key, value]) => `${key}: ${value}`)
    .join(', ')

const crystals = reference.crystals.filter(({ name }) => name in STRUCTURES)

test('structures are there', () => expect(crystals.length).toBeGreaterThan(40))

describe('well-known structures', () => {
  test.each(crystals)('$name', ({ name, bravais, cell_A_deg }) => {
    const atoms = atomsOf(STRUCTURES[name], BRAVAIS[bravais as BravaisType].centring).map(
      ({ element, position }) => `  - ${element}: [${position.map(written).join(', ')}]\n`,
    )
    const lattice = `lattice: {bravais: ${bravais}, ${parameters(cell_A_deg)}}\n`
    const { back } = expectSame(`${lattice}atoms:\n${atoms.join('')}`)
    // The same statement of the lattice, not merely the same lattice.
    expect(back.document.lattice?.bravais?.value).toBe(bravais)
  })
})

const TYPES = (Object.keys(BRAVAIS) as BravaisType[]).filter(type => BRAVAIS[type].dimension === 3)
const length = fc.integer({ min: 250, max: 650 }).map(x => x / 100)
const angle = fc.integer({ min: 700, max: 1100 }).map(x => x / 10)
const place = fc.oneof(
  fc.constantFrom('0', '1/2', '1/4', '1/3', '3/4', '-1/6'),
  // Steps over the tolerance: what is nearer to a special position is put there.
  fc.integer({ min: -50, max: 99 }).map(x => String(x / 100)),
)
const ELEMENTS = ['Na', 'Cl', 'Fe', 'O']
const atomList = fc
  .array(fc.tuple(place, place, place), { minLength: 1, maxLength: ELEMENTS.length })
  .map(places => `atoms:\n${places.map((x, i) => `  - ${ELEMENTS[i]}: [${x.join(', ')}]\n`).join('')}`)
const unit = fc.constantFrom('angstrom', 'bohr')

const byType = (type: BravaisType) =>
  fc
    .tuple(fc.constantFrom(...BRAVAIS[type].free), length, length, length, angle, angle, angle)
    .map(([free, a, b, c, alpha, beta, gamma]) => {
      const all = { a, b, c, alpha, beta, gamma }
      return `lattice: {bravais: ${type}, ${free.map(name => `${name}: ${all[name]}`).join(', ')}}\n`
    })

/** Å: atoms that are nearer are no crystal. */
const LEAST = 0.6
const isSound = (text: string): boolean => {
  const crystal = crystalOf(text)
  if (!crystal.lattice || crystal.lattice.volume * crystal.angstrom ** 3 < 10) return false
  // An atom is at its own place, and no other kind is.
  return Object.entries(surroundings(inAngstrom(crystal))).every(([kind, lists]) =>
    Object.entries(lists).every(([other, list]) =>
      list.every(d => d > LEAST || (d < 1e-9 && kind === other)),
    ),
  )
}

describe('random crystals of each type', () => {
  test.each(TYPES)('%s', type => {
    fc.assert(
      fc.property(byType(type), atomList, unit, (lattice, atoms, unit) => {
        const text = `unit: ${unit}\n${lattice}${atoms}`
        fc.pre(isSound(text))
        expectSame(text)
      }),
      { numRuns: 5 },
    )
  })
})

test('random vectors, left-handed and skewed ones among them', () => {
  const coordinate = fc.integer({ min: -600, max: 600 }).map(x => x / 100)
  fc.assert(
    fc.property(
      fc.array(fc.tuple(coordinate, coordinate, coordinate), { minLength: 3, maxLength: 3 }),
      atomList,
      (rows, atoms) => {
        const text = `lattice:\n  vectors:\n${rows.map(row => `    - [${row.join(', ')}]\n`).join('')}${atoms}`
        fc.pre(isSound(text))
        const { crystal, back, remarks } = roundTrip(text)
        expect(remarks).toEqual([])
        expect(back.symmetry!.spaceGroup!.number).toBe(crystal.symmetry!.spaceGroup!.number)
        expectAlike(surroundings(placedOf(back)), surroundings(placedOf(crystal)), 0)
      },
    ),
    { numRuns: 25 },
  )
})

describe('without atoms', () => {
  test.each(TYPES)('%s: the operations of the lattice, and its type again', type => {
    const cell = { a: 4.1, b: 5.2, c: 6.3, alpha: 82, beta: 97, gamma: 104 }
    const [free] = BRAVAIS[type].free
    const stated = `lattice: {bravais: ${type}, ${free.map(name => `${name}: ${cell[name]}`).join(', ')}}\n`
    const { back, cif, remarks } = roundTrip(stated)
    expect(remarks).toEqual(['no atoms are listed: the lattice file has none'])
    expect(cif.notes).toEqual(['No atoms are stated: the operations are those of the lattice.'])
    expect(back.document.lattice?.bravais?.value).toBe(type)
    for (const name of free) expect(back.document.lattice!.parameters[name]?.value).toBe(cell[name])
  })

  // Numbers and settings: International Tables, vol. A; numbers of operations in the cell: 8 · 4 of 122 and so on.
  test.each([
    ['bravais: cF, a: 5.43', '227', 227, 192],
    ['bravais: cF, a: 5.65', 'F-43m', 216, 96],
    ['bravais: oP, a: 4.76, b: 10.2, c: 5.98', 'Pbnm', 62, 8],
    ['bravais: oA, a: 4.1, b: 5.2, c: 6.3', 'Amm2', 38, 8],
    ['bravais: oC, a: 4.1, b: 5.2, c: 6.3', '38', 38, 8],
    ['bravais: mI, a: 5.13, b: 3.42, c: 6.35, beta: 99', 'C2/c', 15, 8],
    ['bravais: mP, a: 5.13, b: 3.42, c: 6.35, gamma: 99', '14', 14, 4],
    ['bravais: hR, a: 4.76, c: 12.99', 'R-3c', 167, 36],
    ['bravais: hR, a: 5.13, alpha: 55.3', 'R-3c', 167, 36],
    ['bravais: tI, a: 5.6, c: 11', 'I-42d', 122, 16],
    ['bravais: aP, a: 4, b: 5, c: 6, alpha: 80, beta: 85, gamma: 95', 'P1', 1, 1],
  ])('%s as %s: its operations', (lattice, name, number, count) => {
    const { cif, back, remarks } = roundTrip(`lattice: {${lattice}}\nspace-group: ${name}\n`)
    expect(cif.notes).toEqual([
      'No atoms are stated: the operations are those of the space group that the file names.',
    ])
    expect(cif.text).toMatch(new RegExp(`^_space_group_IT_number +${number}$`, 'm'))
    expect(cif.text.match(/^\d+ [^ ]*x/gm)?.length).toBe(count)
    expect(remarks).toEqual(['no atoms are listed: the lattice file has none'])
    if (number > 1) expect(back.rotations?.spaceGroup).toBe(number)
  })

  test('a group that the cell cannot have: the operations of the lattice', () => {
    const { cif } = roundTrip('lattice: {bravais: tP, a: 4, c: 5}\nspace-group: 225\n')
    expect(cif.notes).toEqual(['No atoms are stated: the operations are those of the lattice.'])
  })
  test('a sheet', () => {
    expect(roundTrip('lattice: {bravais: hp, a: 2.46, height: 20}\n').remarks).toEqual([
      'no atoms are listed: the lattice file has none',
    ])
  })
})
