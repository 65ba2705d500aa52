/**
 * CIFs against gemmi and spglib (Debian's packages python3-gemmi and python3-spglib): every tabulated setting, and the
 * crystals of the Crystallography Open Database that Debian's package libavogadro-data holds (public domain).
 */
import { existsSync, readdirSync, readFileSync } from 'node:fs'
import { join } from 'node:path'
import { beforeAll, describe, expect, test } from 'vitest'
import { Snapshot } from '../../server/src/analysis.ts'
import { isLattice, latticeFromCell } from '../../server/src/crystal/lattice.ts'
import { importCif } from '../../server/src/exchange/cif/import.ts'
import { Workshop } from '../../server/src/meaning/workshop.ts'
import { loadSymmetryFromDisk } from '../../server/src/symmetry-node.ts'
import { directSymmetry } from '../../server/src/symmetry-service.ts'
import { ask, expectAlike, placedOf, type Setting, surroundings } from './cif-tools.ts'

const workshop = new Workshop(directSymmetry)
const snapshotOf = (text: string) => new Snapshot(text, workshop)

beforeAll(loadSymmetryFromDisk)

/** P 1 is no claim: it mostly means that every atom is listed. */
const claimed = (group: number): number | undefined => (group === 1 ? undefined : group)

describe('every tabulated setting', () => {
  const settings = ask<Setting[]>({ settings: 20260612 })

  test.each(settings)('$hall $symbol', ({ number, cell, places, text }) => {
    const { text: lattice, blocks, faults } = importCif(text, { source: 'made' })
    expect(faults).toEqual([])
    expect(blocks[0].remarks).toEqual([])
    const { crystal } = snapshotOf(lattice!).documents[0]
    expect(crystal.document.spaceGroup?.value).toBe(claimed(number))
    expect(crystal.symmetry?.spaceGroup?.number).toBe(number)
    expect(crystal.symmetry?.translationsFold).toBe(1)
    const [a, b, c, alpha, beta, gamma] = cell
    const whole = latticeFromCell({ a, b, c, alpha, beta, gamma }, 'P', 3)
    if (!isLattice(whole)) throw new Error('no lattice')
    const atoms = Object.entries(places).flatMap(([element, all]) =>
      all.map(fraction => ({ element, fraction })),
    )
    const points = atoms.length / crystal.atoms.length
    expect(Math.abs(crystal.lattice!.volume * points - whole.volume)).toBeLessThan(1e-5 * whole.volume)
    expectAlike(surroundings(placedOf(crystal)), surroundings({ rows: whole.conventional, atoms }))
  })

  const bare = (text: string) => text.replace(/loop_\n_space_group_symop_operation_xyz\n(?:'.*'\n)*/, '')
  test.each(settings)('$hall by its Hall symbol alone: $hallSymbol', ({ number, hallSymbol, text }) => {
    const named = bare(text).replace(/_space_group_IT_number.*/, `_space_group_name_Hall "${hallSymbol}"`)
    const all = importCif(text, { source: 'made' })
    const one = importCif(named, { source: 'made' })
    expect(one.faults).toEqual([])
    const [p, q] = [all, one].map(each => snapshotOf(each.text!).documents[0].crystal)
    expect(q.document.spaceGroup?.value).toBe(claimed(number))
    expectAlike(surroundings(placedOf(q)), surroundings(placedOf(p)))
  })
})

const FOLDER = '/usr/share/avogadro2/crystals'
const names = existsSync(FOLDER)
  ? readdirSync(FOLDER, { recursive: true, encoding: 'utf8' })
      .filter(name => name.endsWith('.cif'))
      .sort()
  : []

describe('crystals of a database', () => {
  test('are installed (Debian: libavogadro-data)', () => expect(names.length).toBeGreaterThan(400))

  const opinions = ask<({ atoms: number; volume: number; number: number | null } | null)[]>({
    read: names.map(name => join(FOLDER, name)),
  })
  /** Read by eye: what is wrong with these files of the package. */
  const FAULTY: Readonly<Record<string, string>> = {
    // Right angles with a hexagonal group and an hexagonal volume.
    'carbides/W2C.cif': '27:34 no setting of P -3, space group 147, fits the cell',
    // Lengths and angles have changed places.
    'elements/In-Indium.cif': '29:34 no setting of I 4/m m m, space group 139, fits the cell',
    // γ of 120° in a tetragonal cell.
    'oxides/WO2.cif': '27:34 no setting of P 42/m n m, space group 136, fits the cell',
    // Rows of a loop with too many or too few values.
    'elements/Er-Erbium.cif': '82:4 the value 0.33333 belongs to no data name',
    'elements/Eu-Europium.cif':
      '154:1 the loop of _atom_site_label (line 147) has 4 data names and 5 values: the last row lacks 3',
    'elements/Se-Selenium.cif':
      '68:1 the loop of _atom_site_label (line 54) has 4 data names and 34 values: the last row lacks 2',
    'sulfides/Bi2S3-Bismuthinite.cif':
      '71:1 the loop of _atom_site_label (line 57) has 4 data names and 42 values: the last row lacks 2',
  }

  test.each(names.map((name, i) => ({ name, opinion: opinions[i] })))('$name', ({ name, opinion }) => {
    const bytes = readFileSync(join(FOLDER, name))
    const text = new TextDecoder('utf-8').decode(bytes)
    const { text: lattice, blocks, faults } = importCif(text, { source: name })
    const told = faults.map(({ line, column, message }) => `${line}:${column} ${message}`)
    expect(told.slice(0, 1)).toEqual(name in FAULTY ? [FAULTY[name]] : [])
    if (name in FAULTY) return
    const { crystal } = snapshotOf(lattice!).documents[0]
    if (!opinion) {
      // The one file that states neither operations nor a group.
      expect(name).toBe('halides/AlCl3.cif')
      expect(blocks[0].remarks.map(({ message }) => message).join('\n')).toMatch(
        /^neither operations nor a space group/m,
      )
      return
    }
    const { build } = crystal
    expect(build.lattice).toBeDefined()
    expect(crystal.document.problems).toEqual([])
    const points = opinion.volume / crystal.lattice!.volume
    expect(Math.abs(points - Math.round(points))).toBeLessThan(1e-3)
    if (!blocks[0].remarks.some(({ level }) => level === 'loss'))
      expect(crystal.atoms.length * Math.round(points)).toBe(opinion.atoms)
    if (opinion.number !== null) expect(crystal.document.spaceGroup?.value).toBe(claimed(opinion.number))
  })
})
