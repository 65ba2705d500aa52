/**
 * Well-known crystals, written in the several ways of databases and refinement programs. Parameters are from memory
 * (R. W. G. Wyckoff, Crystal Structures, 1963–, unless said otherwise); what is expected of them are space group, atoms
 * in the primitive cell and closed formulas for distances.
 */
import { beforeAll, describe, expect, test } from 'vitest'
import { importCif } from '../../../server/src/exchange/cif/import.ts'
import type { Crystal } from '../../../server/src/meaning/crystal.ts'
import { loadSymmetryFromDisk } from '../../../server/src/symmetry-node.ts'
import { expectAlike, placedOf, surroundings } from '../../reference/cif-tools.ts'
import { findingsOf, snapshotOf } from '../checks/harness.ts'

beforeAll(loadSymmetryFromDisk)

type Cell = readonly [number, number, number, number, number, number]
const cell = ([a, b, c, alpha, beta, gamma]: readonly (number | string)[]) => `_cell_length_a   ${a}
_cell_length_b   ${b}
_cell_length_c   ${c}
_cell_angle_alpha   ${alpha}
_cell_angle_beta   ${beta}
_cell_angle_gamma   ${gamma}
`
const cubic = (a: number | string) => cell([a, a, a, 90, 90, 90])
const hexagonal = (a: number | string, c: number | string) => cell([a, a, c, 90, 90, 120])
const tetragonal = (a: number | string, c: number | string) => cell([a, a, c, 90, 90, 90])
const rhombohedral = (a: number, alpha: number) => cell([a, a, a, alpha, alpha, alpha])
const sites = (rows: string) => `loop_
_atom_site_label
_atom_site_fract_x
_atom_site_fract_y
_atom_site_fract_z
${rows.trim()}
`

/** All sums of signs and orders of x, y, z, at the four points of a face-centred cell. */
function faceCentredOperations(): string[] {
  const orders = ['xyz', 'yzx', 'zxy', 'xzy', 'zyx', 'yxz']
  const shifts = ['0,0,0', '0,1/2,1/2', '1/2,0,1/2', '1/2,1/2,0'].map(shift => shift.split(','))
  return shifts.flatMap(shift =>
    orders.flatMap(order =>
      [0, 1, 2, 3, 4, 5, 6, 7].map(signs =>
        [0, 1, 2].map(i => `${signs & (1 << i) ? '-' : ''}${order[i]}+${shift[i]}`).join(', '),
      ),
    ),
  )
}

interface Expected {
  readonly group: number
  /** In the primitive cell. */
  readonly atoms: number
  readonly bravais?: string
  /** Å: the shortest distance from the first kind to the second. */
  readonly nearest?: readonly [from: string, to: string, distance: number]
  readonly told?: RegExp
  /** Rules that find what is true of the CIF. */
  readonly findings?: readonly string[]
}

const TENORITE: Cell = [4.6837, 3.4226, 5.1288, 90, 99.54, 90]
const [A, , C, , BETA] = TENORITE
const cosine = Math.cos((BETA * Math.PI) / 180)
/** |a + c| and the angle of c with −(a + c). */
const AC = Math.sqrt(A * A + C * C + 2 * A * C * cosine)
const CELL_3 = (Math.acos(-(A * cosine + C) / AC) * 180) / Math.PI

const BADDELEYITE = [
  [0.2754, 0.0395, 0.2083],
  [0.07, 0.3317, 0.3447],
  [0.4496, 0.7569, 0.4792],
]
const baddeleyite = (pick: (v: number[]) => number[]) =>
  sites(BADDELEYITE.map((v, i) => `${['Zr1', 'O1', 'O2'][i]} ${pick(v).join(' ')}`).join('\n'))

/** |a + c| of baddeleyite and the angle of a with a + c: half of c is half of a' + c' there, but for a vector. */
const [ZA, ZC, ZCOS] = [5.1505, 5.3173, Math.cos((99.23 * Math.PI) / 180)]
const DIAGONAL = Math.sqrt(ZA * ZA + ZC * ZC + 2 * ZA * ZC * ZCOS)
const NARROW = (Math.acos((ZA + ZC * ZCOS) / DIAGONAL) * 180) / Math.PI
const corundum = { a: 4.759, c: 12.991, z: 0.3522, x: 0.3063 }
/** Rhombohedral axes of hexagonal ones: a_r = √(3a² + c²)/3, sin(α/2) = 3/(2√(3 + c²/a²)). */
const edge = (a: number, c: number) => Math.sqrt(3 * a * a + c * c) / 3
const opening = (a: number, c: number) => (Math.asin(1.5 / Math.sqrt(3 + (c / a) ** 2)) * 360) / Math.PI

const CRYSTALS: Readonly<Record<string, readonly [text: string, expected: Expected]>> = {
  'wurtzite, operations listed in the old names': [
    `data_global
_journal_name_full 'Invented'
data_ZnO
_chemical_formula_sum 'Zn O'
_chemical_name_mineral Zincite
${hexagonal('3.2495(2)', '5.2069(5)')}_cell_formula_units_Z 2
_symmetry_space_group_name_H-M 'P 63 m c'
_symmetry_Int_Tables_number 186
loop_
_symmetry_equiv_pos_site_id
_symmetry_equiv_pos_as_xyz
1 'x,y,z'
2 '-y,x-y,z'
3 '-x+y,-x,z'
4 '-x,-y,1/2+z'
5 'y,-x+y,1/2+z'
6 'x-y,x,1/2+z'
7 '-y,-x,z'
8 '-x+y,y,z'
9 'x,x-y,z'
10 'y,x,1/2+z'
11 'x-y,-y,1/2+z'
12 '-x,-x+y,1/2+z'
${sites('Zn1 0.33333 0.66667 0.00000\nO1 0.33333 0.66667 0.38200')}`,
    { group: 186, atoms: 4, bravais: 'hP', nearest: ['Zn', 'Zn', 3.2088] },
  ],
  'corundum in hexagonal axes, by symbol': [
    `data_sapphire
${hexagonal(corundum.a, corundum.c)}_symmetry_space_group_name_H-M 'R -3 c :H'
${sites(`Al1 0 0 ${corundum.z}\nO1 ${corundum.x} 0 0.25`)}`,
    { group: 167, atoms: 10, bravais: 'hR', nearest: ['Al', 'Al', 2 * corundum.c * (corundum.z - 0.25)] },
  ],
  'corundum in rhombohedral axes, by symbol': [
    `data_ruby
${rhombohedral(edge(corundum.a, corundum.c), opening(corundum.a, corundum.c))}_space_group_name_H-M_alt 'R -3 c :R'
${sites(`Al1 ${`${corundum.z} `.repeat(3)}\nO1 ${corundum.x + 0.25} ${0.25 - corundum.x} 0.25`)}`,
    { group: 167, atoms: 10, bravais: 'hR', nearest: ['Al', 'Al', 2 * corundum.c * (corundum.z - 0.25)] },
  ],
  'calcite with the mark of its axes in the old way': [
    `data_calcite
${hexagonal(4.99, 17.061)}_symmetry_space_group_name_H-M 'R -3 c H'
${sites('Ca 0.00000 0.00000 0.00000\nC 0.00000 0.00000 0.25000\nO 0.25780 0.00000 0.25000')}`,
    { group: 167, atoms: 10, bravais: 'hR', nearest: ['C', 'O', 0.2578 * 4.99] },
  ],
  'baddeleyite, its short symbol': [
    `data_zirconia
${cell([5.1505, 5.2116, 5.3173, 90, 99.23, 90])}_symmetry_space_group_name_H-M 'P 21/c'
${baddeleyite(v => v)}`,
    { group: 14, atoms: 12, bravais: 'mP' },
  ],
  'baddeleyite with unique axis c': [
    `data_zirconia_c
${cell([5.3173, 5.1505, 5.2116, 90, 90, 99.23])}_symmetry_space_group_name_H-M 'P 1 1 21/a'
${baddeleyite(([x, y, z]) => [z, x, y])}`,
    { group: 14, atoms: 12, bravais: 'mP' },
  ],
  'tenorite in C 2/c': [
    `data_tenorite
${cell(TENORITE)}_symmetry_space_group_name_H-M 'C 1 2/c 1'
${sites('Cu1 0.25 0.25 0.00\nO1 0.00 0.4184 0.25')}`,
    { group: 15, atoms: 4, bravais: 'mC' },
  ],
  'tenorite in I 2/a': [
    `data_tenorite_i
${cell([C, TENORITE[1], AC, 90, CELL_3, 90])}_symmetry_space_group_name_H-M 'I 1 2/a 1'
${sites('Cu1 0.75 0.25 0.75\nO1 0.25 0.4184 0.00')}`,
    { group: 15, atoms: 4, bravais: 'mI' },
  ],
  'spinel with the origin at a centre of symmetry': [
    `data_spinel
${cubic(8.0832)}_symmetry_space_group_name_H-M 'F d -3 m :2'
${sites('Mg 0.125 0.125 0.125\nAl 0.5 0.5 0.5\nO 0.2624 0.2624 0.2624')}`,
    { group: 227, atoms: 14, bravais: 'cF', nearest: ['Mg', 'O', Math.sqrt(3) * 8.0832 * 0.1374] },
  ],
  'spinel with the other origin, marked in the old way': [
    `data_spinel
${cubic(8.0832)}_symmetry_space_group_name_H-M 'F d -3 m S'
${sites('Mg 0.000 0.000 0.000\nAl 0.625 0.625 0.625\nO 0.3874 0.3874 0.3874')}`,
    { group: 227, atoms: 14, bravais: 'cF', nearest: ['Mg', 'O', Math.sqrt(3) * 8.0832 * 0.1374] },
  ],
  'diamond with no word about its origin': [
    `data_diamond
${cubic(3.5668)}_symmetry_space_group_name_H-M 'F d -3 m'
${sites('C1 0.125 0.125 0.125')}`,
    {
      group: 227,
      atoms: 2,
      bravais: 'cF',
      nearest: ['C', 'C', (Math.sqrt(3) / 4) * 3.5668],
      told: /2 settings that fit/,
    },
  ],
  'rutile with every atom listed and P 1': [
    `data_TiO2
_symmetry_space_group_name_H-M   'P 1'
${tetragonal('4.59370000', '2.95870000')}_symmetry_Int_Tables_number   1
_chemical_formula_structural   TiO2
_chemical_formula_sum   'Ti2 O4'
_cell_volume   62.43488
_cell_formula_units_Z   1
loop_
 _symmetry_equiv_pos_site_id
 _symmetry_equiv_pos_as_xyz
  1  'x, y, z'
loop_
 _atom_site_type_symbol
 _atom_site_label
 _atom_site_symmetry_multiplicity
 _atom_site_fract_x
 _atom_site_fract_y
 _atom_site_fract_z
 _atom_site_occupancy
  Ti  Ti0  1  0.00000000  0.00000000  0.00000000  1
  Ti  Ti1  1  0.50000000  0.50000000  0.50000000  1
  O  O2  1  0.30530000  0.30530000  0.00000000  1
  O  O3  1  0.69470000  0.69470000  0.00000000  1
  O  O4  1  0.19470000  0.80530000  0.50000000  1
  O  O5  1  0.80530000  0.19470000  0.50000000  1
`,
    {
      group: 136,
      atoms: 6,
      nearest: ['Ti', 'O', Math.hypot(Math.SQRT2 * (0.5 - 0.3053) * 4.5937, 2.9587 / 2)],
    },
  ],
  'silicon with the eight atoms of the cubic cell and P 1': [
    `data_Si
_symmetry_space_group_name_H-M   'P 1'
${cubic('5.43070000')}${sites(`Si0 0 0 0
Si1 0.5 0.5 0
Si2 0.5 0 0.5
Si3 0 0.5 0.5
Si4 0.25 0.25 0.25
Si5 0.75 0.75 0.25
Si6 0.75 0.25 0.75
Si7 0.25 0.75 0.75`)}`,
    {
      group: 227,
      atoms: 8,
      nearest: ['Si', 'Si', (Math.sqrt(3) / 4) * 5.4307],
      findings: ['cell-not-primitive'],
    },
  ],
  'haematite with every atom of the rhombohedral cell and P 1': [
    `data_haematite
_symmetry_space_group_name_H-M   'P 1'
${rhombohedral(5.4243, 55.283)}${sites(`Fe1 0.3553 0.3553 0.3553
Fe2 0.1447 0.1447 0.1447
Fe3 0.6447 0.6447 0.6447
Fe4 0.8553 0.8553 0.8553
O1 0.5559 0.9441 0.25
O2 0.25 0.5559 0.9441
O3 0.9441 0.25 0.5559
O4 0.4441 0.0559 0.75
O5 0.75 0.4441 0.0559
O6 0.0559 0.75 0.4441`)}`,
    { group: 167, atoms: 10 },
  ],
  'rock salt with 192 operations': [
    `data_NaCl
${cubic('5.6402(3)')}_space_group_name_H-M_alt 'F m -3 m'
_space_group_IT_number 225
loop_
_space_group_symop_operation_xyz
${faceCentredOperations()
  .map(o => `'${o}'`)
  .join('\n')}
${sites('Na1 0 0 0\nCl1 0.5 0.5 0.5')}`,
    { group: 225, atoms: 2, bravais: 'cF', nearest: ['Na', 'Cl', 5.6402 / 2] },
  ],
  'fluorite by the symbol of older tables': [
    `data_fluorite
${cubic(5.463)}_symmetry_space_group_name_H-M 'F m 3 m'
${sites('Ca 0 0 0\nF .25 .25 .25')}`,
    { group: 225, atoms: 3, bravais: 'cF', nearest: ['Ca', 'F', (Math.sqrt(3) / 4) * 5.463] },
  ],
  'pyrite by the symbol of older tables': [
    `data_pyrite
${cubic(5.418)}_symmetry_space_group_name_H-M 'P a 3'
${sites('Fe 0 0 0\nS .3851 .3851 .3851')}`,
    { group: 205, atoms: 12, bravais: 'cP', nearest: ['S', 'S', 2 * Math.sqrt(3) * (0.5 - 0.3851) * 5.418] },
  ],
  'perovskite with a mixed site and vacancies': [
    `data_BST
_chemical_formula_sum 'Ba0.7 Sr0.3 Ti O2.94'
_cell_formula_units_Z 1
${cubic(3.965)}_symmetry_space_group_name_H-M 'P m -3 m'
loop_
_atom_site_label
_atom_site_type_symbol
_atom_site_fract_x
_atom_site_fract_y
_atom_site_fract_z
_atom_site_occupancy
_atom_site_U_iso_or_equiv
Ba1 Ba2+ 0.5 0.5 0.5 0.70 0.0065(3)
Sr1 Sr2+ 0.5 0.5 0.5 0.30 0.0065(3)
Ti1 Ti4+ 0 0 0 1 0.0089(4)
O1 O2- 0.5 0 0 0.98 0.0102(5)
`,
    {
      group: 221,
      atoms: 5,
      bravais: 'cP',
      nearest: ['Ti', 'O', 3.965 / 2],
      told: /mixed site: Ba 0\.7 \(Ba1\), Sr 0\.3 \(Sr1\)[\s\S]*partly occupied[\s\S]*O 0\.98/,
    },
  ],
  // Urea: neutron diffraction at room temperature; from memory.
  'urea as a refinement program writes it': [
    `data_urea
_audit_creation_method            'made by hand'
_chemical_name_systematic
;
 diaminomethanal, ; not at the start of a line
;
_chemical_formula_moiety          'C H4 N2 O'
_chemical_formula_sum             'C H4 N2 O'
_chemical_formula_weight          60.06
loop_
 _atom_type_symbol
 _atom_type_description
 _atom_type_scat_dispersion_real
 'C'  'C'   0.0033
 'H'  'H'   0.0000
 'N'  'N'   0.0061
 'O'  'O'   0.0106
_space_group_crystal_system       'tetragonal'
_space_group_IT_number            113
_space_group_name_H-M_alt         'P -4 21 m'
_space_group_name_Hall            'P -4 2ab'
loop_
 _space_group_symop_operation_xyz
 'x, y, z'
 '-x, -y, z'
 'y, -x, -z'
 '-y, x, -z'
 '-x+1/2, y+1/2, -z'
 'x+1/2, -y+1/2, -z'
 '-y+1/2, -x+1/2, z'
 'y+1/2, x+1/2, z'
${tetragonal('5.565(1)', '4.684(1)')}_cell_volume                      145.06(5)
_cell_formula_units_Z             2
_cell_measurement_temperature     293(2)
loop_
 _atom_site_label
 _atom_site_type_symbol
 _atom_site_fract_x
 _atom_site_fract_y
 _atom_site_fract_z
 _atom_site_U_iso_or_equiv
 _atom_site_adp_type
 _atom_site_occupancy
 _atom_site_site_symmetry_order
 _atom_site_calc_flag
 _atom_site_refinement_flags_posn
 _atom_site_disorder_assembly
 _atom_site_disorder_group
C1 C 0.0000 0.5000 0.3280(4) 0.031(1) Uani 1 4 d ST . .
O1 O 0.0000 0.5000 0.5963(3) 0.039(1) Uani 1 4 d ST . .
N1 N 0.1447(2) 0.6447(2) 0.1785(3) 0.047(1) Uani 1 2 d S . .
H1 H 0.2552 0.7552 0.2845 0.06 Uiso 1 2 calc R . .
H2 H 0.1418 0.6418 -0.0346 0.06 Uiso 1 2 calc R . .
loop_
 _atom_site_aniso_label
 _atom_site_aniso_U_11
C1 0.03
O1 0.04
`,
    { group: 113, atoms: 16, bravais: 'tP', nearest: ['C', 'O', (0.5963 - 0.328) * 4.684] },
  ],
  // Benzene at 270 K; from memory.
  'benzene, a molecule on a centre of symmetry': [
    `data_benzene
_chemical_formula_sum 'C6 H6'
_cell_formula_units_Z 4
${cell(['7.398(5)', '9.435(5)', '6.778(5)', 90, 90, 90])}_symmetry_space_group_name_H-M Pbca
loop_
_atom_site_label
_atom_site_type_symbol
_atom_site_fract_x
_atom_site_fract_y
_atom_site_fract_z
C1 C -0.0569 0.1387 -0.0054
C2 C -0.1335 0.0460 0.1264
C3 C -0.0774 -0.0925 0.1295
H1 H -0.0976 0.2447 -0.0177
H2 H -0.2409 0.0794 0.2218
H3 H -0.1371 -0.1631 0.2312
`,
    { group: 61, atoms: 48, bravais: 'oP' },
  ],
  'graphite by its number alone': [
    `data_graphite
${hexagonal(2.464, 6.711)}_space_group_IT_number 194
${sites('C1 0 0 0.25\nC2 0.3333 0.6667 0.25')}`,
    { group: 194, atoms: 4, bravais: 'hP', nearest: ['C', 'C', 2.464 / Math.sqrt(3)] },
  ],
  'anatase, by a symbol with its origin': [
    `data_anatase
${tetragonal(3.7845, 9.5143)}_space_group_name_H-M_alt 'I 41/a m d :2'
${sites('Ti1 0 0.25 0.375\nO1 0 0.25 0.1669')}`,
    { group: 141, atoms: 6, bravais: 'tI', nearest: ['Ti', 'O', 1.9341] },
  ],
  'quartz, with thirds of four digits': [
    `data_quartz
${hexagonal(4.9134, 5.4052)}_symmetry_space_group_name_H-M 'P 32 2 1'
_symmetry_Int_Tables_number 154
loop_
_symmetry_equiv_pos_as_xyz
x,y,z
-y,x-y,.6667+z
-x+y,-x,.3333+z
y,x,-z
x-y,-y,.3333-z
-x,-x+y,.6667-z
${sites('Si .4697 .0000 .6667\nO .4135 .2669 .7858')}`,
    { group: 154, atoms: 9, bravais: 'hP' },
  ],
  // With axes a, b, a + c.
  'baddeleyite in P 21/n': [
    `data_zirconia_n
${cell([ZA, 5.2116, DIAGONAL, 90, NARROW, 90])}_symmetry_space_group_name_H-M 'P 21/n'
${baddeleyite(([x, y, z]) => [x - z, y, z])}`,
    { group: 14, atoms: 12, bravais: 'mP' },
  ],
  'forsterite in P b n m': [
    `data_forsterite
${cell([4.756, 10.207, 5.98, 90, 90, 90])}_symmetry_space_group_name_H-M 'P b n m'
${sites(`Mg1 0 0 0
Mg2 0.9915 0.2774 0.25
Si 0.4262 0.094 0.25
O1 0.7657 0.0913 0.25
O2 0.2215 0.4474 0.25
O3 0.2777 0.1628 0.0331`)}`,
    { group: 62, atoms: 28, bravais: 'oP' },
  ],
  'alpha uranium in C m c m': [
    `data_uranium
${cell([2.854, 5.87, 4.955, 90, 90, 90])}_symmetry_space_group_name_H-M 'C m c m'
${sites('U1 0 0.1025 0.25')}`,
    { group: 63, atoms: 2, bravais: 'oC' },
  ],
  'bismuth telluride in the reverse setting': [
    `data_Bi2Te3
${hexagonal(4.384, 30.49)}loop_
_symmetry_equiv_pos_as_xyz
x,y,z
-y,x-y,z
-x+y,-x,z
-x,-y,-z
-y,-x,z
x+1/3,y+2/3,z+1/3
x+2/3,y+1/3,z+2/3
${sites('Bi1 0 0 0.4\nTe1 0 0 0\nTe2 0 0 0.2095')}`,
    { group: 166, atoms: 5, bravais: 'hR', told: /not complete[\s\S]*reverse setting/ },
  ],
}

const crystalOf = (text: string): Crystal => snapshotOf(text).documents[0].crystal
const imported = (name: string) => importCif(CRYSTALS[name][0], { source: `${name}.cif` })

describe('read as what they are', () => {
  test.each(Object.keys(CRYSTALS))('%s', name => {
    const { group, atoms, bravais, nearest, told, findings = [] } = CRYSTALS[name][1]
    const { text, blocks, faults } = imported(name)
    expect(faults).toEqual([])
    const losses = blocks.flatMap(({ remarks }) => remarks).map(({ message }) => message)
    if (told) expect(text!.replace(/\n# /g, ' ')).toMatch(told)
    else expect(losses.filter(message => !/displacement parameters/.test(message))).toEqual([])
    const crystal = crystalOf(text!)
    expect(crystal.symmetry?.spaceGroup?.number).toBe(group)
    expect(crystal.atoms.length).toBe(atoms)
    if (bravais) expect(crystal.document.lattice?.bravais?.value).toBe(bravais)
    if (nearest) {
      const [from, to, distance] = nearest
      const found = surroundings(placedOf(crystal))[from][to].find(d => d > 0.01)
      expect(found).toBeCloseTo(distance, 3)
    }
    expect(
      findingsOf(text!)
        .filter(({ severity }) => severity !== 'info')
        .map(({ rule, message }) => (findings.includes(rule) ? '' : `${rule}: ${message}`))
        .filter(Boolean),
    ).toEqual([])
  })
})

describe('two statements of one crystal', () => {
  test.each([
    ['corundum in hexagonal axes, by symbol', 'corundum in rhombohedral axes, by symbol'],
    ['baddeleyite, its short symbol', 'baddeleyite with unique axis c'],
    ['baddeleyite, its short symbol', 'baddeleyite in P 21/n'],
    ['tenorite in C 2/c', 'tenorite in I 2/a'],
    ['spinel with the origin at a centre of symmetry', 'spinel with the other origin, marked in the old way'],
  ])('%s; %s', (p, q) => {
    const [one, other] = [p, q].map(name => surroundings(placedOf(crystalOf(imported(name).text!))))
    expectAlike(other, one)
  })
})
