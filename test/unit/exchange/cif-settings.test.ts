/**
 * Settings whose centring is not one of the 14 types': another cell of a lattice that is. Stated by their Hall symbols;
 * what the usual cell is, follows by hand (International Tables, vol. A, ch. 1.5).
 */
import { beforeAll, describe, expect, test } from 'vitest'
import { importCif } from '../../../server/src/exchange/cif/import.ts'
import { loadSymmetryFromDisk } from '../../../server/src/symmetry-node.ts'
import { expectAlike, placedOf, surroundings } from '../../reference/cif-tools.ts'
import { findingsOf, snapshotOf } from '../checks/harness.ts'

beforeAll(loadSymmetryFromDisk)

type Six = readonly [number, number, number, number, number, number]
const cif = (hall: string, [a, b, c, alpha, beta, gamma]: Six, sites: string) => `data_x
_cell_length_a ${a}
_cell_length_b ${b}
_cell_length_c ${c}
_cell_angle_alpha ${alpha}
_cell_angle_beta ${beta}
_cell_angle_gamma ${gamma}
_space_group_name_Hall '${hall}'
loop_
_atom_site_label
_atom_site_fract_x
_atom_site_fract_y
_atom_site_fract_z
${sites}
`
function read(text: string) {
  const { text: lattice, blocks, faults } = importCif(text, { source: 'x.cif' })
  expect(faults).toEqual([])
  expect(blocks[0].remarks).toEqual([])
  const { crystal } = snapshotOf(lattice!).documents[0]
  const loud = findingsOf(lattice!).filter(({ severity }) => severity !== 'info')
  expect(loud.map(({ rule, message }) => `${rule}: ${message}`)).toEqual([])
  return { lattice: lattice!, crystal }
}

const R2 = Math.SQRT2
const R3 = Math.sqrt(3)
/** |a + c| and |a − c| of a cell with a = 16, c = 12, and the angle between a + c and c − a. */
const OBLIQUE = 90.5
const PRODUCT = 16 * 12 * Math.cos((OBLIQUE * Math.PI) / 180)
const SUM = Math.sqrt(16 ** 2 + 12 ** 2 + 2 * PRODUCT)
const DIFFERENCE = Math.sqrt(16 ** 2 + 12 ** 2 - 2 * PRODUCT)
const BETWEEN = (Math.acos((12 ** 2 - 16 ** 2) / (SUM * DIFFERENCE)) * 180) / Math.PI
const CASES: Readonly<
  Record<
    string,
    readonly [hall: string, cell: Six, sites: string, usual: readonly [string, Six, string], bravais: string]
  >
> = {
  'F-centred tetragonal is I-centred': [
    '-F 4 2',
    [6, 6, 5, 90, 90, 90],
    'In1 0 0 0\nO1 0 0 0.31',
    ['-I 4 2', [6 / R2, 6 / R2, 5, 90, 90, 90], 'In1 0 0 0\nO1 0 0 0.31'],
    'tI',
  ],
  'C-centred tetragonal is primitive': [
    '-C 4 2',
    [6, 6, 5, 90, 90, 90],
    'Pb1 0 0 0\nO1 0 0.25 0.31',
    // x = (x′ + y′), y = (y′ − x′) of the axes (a − b)/2, (a + b)/2: (0, 1/4) is (−1/4, 1/4).
    ['-P 4 2', [6 / R2, 6 / R2, 5, 90, 90, 90], 'Pb1 0 0 0\nO1 -0.25 0.25 0.31'],
    'tP',
  ],
  'the triple hexagonal cell H': [
    '-H 3',
    [13.8, 13.8, 10, 90, 90, 120],
    'Ti1 0 0 0\nO1 0.11 0.04 0.23',
    // Axes (2a + b)/3, (−a + b)/3: x′ = x + y, y′ = 2y − x.
    ['-P 3', [13.8 / R3, 13.8 / R3, 10, 90, 90, 120], 'Ti1 0 0 0\nO1 0.15 -0.03 0.23'],
    'hP',
  ],
  'B-centred monoclinic, unique axis b, is primitive': [
    '-B 2y',
    [16, 10, 12, 90, OBLIQUE, 90],
    'Zr1 0.1 0.2 0.4\nO1 0.3 0.1 0.15',
    // Axes (a + c)/2, b, (c − a)/2: x′ = x + z, z′ = z − x.
    ['-P 2y', [SUM / 2, 10, DIFFERENCE / 2, 90, BETWEEN, 90], 'Zr1 0.5 0.2 0.3\nO1 0.45 0.1 -0.15'],
    'mP',
  ],
}

describe.each(Object.entries(CASES))('%s', (_, [hall, cell, sites, usual, bravais]) => {
  test('its type and axes are stated', () => {
    const { lattice, crystal } = read(cif(hall, cell, sites))
    expect(crystal.document.lattice?.bravais?.value).toBe(bravais)
    expect(lattice.replace(/\n# /g, ' ')).toMatch(
      /usual cell was taken, whose vectors are [^;]+;[^;]+;[^;]+ of the CIF's cell/,
    )
    expect(crystal.symmetry!.spaceGroup!.number).toBe(crystal.document.spaceGroup!.value)
    // The file may name the axes otherwise; the crystal is the same.
    const other = read(cif(...usual)).crystal
    expect(crystal.lattice!.volume).toBeCloseTo(other.lattice!.volume, 5)
    expectAlike(surroundings(placedOf(crystal)), surroundings(placedOf(other)))
  })
})

test('the axes are told', () => {
  const { lattice } = read(
    cif(...(CASES['F-centred tetragonal is I-centred'].slice(0, 3) as [string, Six, string])),
  )
  expect(lattice).toContain('bravais: tI\n  a: 4.24264069\n  c: 5\n')
  expect(lattice).toContain('- O: [0, 0, 0.31] # O1')
})

test('a metric that misses the type keeps the cell of the CIF, by vectors', () => {
  const { text } = importCif(cif('-F 4 2', [6, 6.004, 5, 90, 90, 90], 'In1 0 0 0'), { source: 'x.cif' })
  const { crystal } = snapshotOf(text!).documents[0]
  expect(text).toMatch(/vectors:[\s\S]*centring: F/)
  expect(crystal.lattice!.volume).toBeCloseTo((6 * 6.004 * 5) / 4, 9)
})
