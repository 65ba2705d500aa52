/** What a CIF says beside cell, symmetry and full sites: every one of it is carried over or told. */
import { beforeAll, describe, expect, test } from 'vitest'
import { importCif } from '../../../server/src/exchange/cif/import.ts'
import { elementIn } from '../../../server/src/exchange/cif/read.ts'
import { loadSymmetryFromDisk } from '../../../server/src/symmetry-node.ts'
import { snapshotOf } from '../checks/harness.ts'

beforeAll(loadSymmetryFromDisk)

const CUBE = `_cell_length_a 4
_cell_length_b 4
_cell_length_c 4
_cell_angle_alpha 90
_cell_angle_beta 90
_cell_angle_gamma 90
`
const P1 = `_symmetry_space_group_name_H-M 'P 1'
`
const loop = (names: string, ...rows: string[]) =>
  `loop_\n${names
    .split(' ')
    .map(name => `_atom_site_${name}\n`)
    .join('')}${rows.join('\n')}\n`
const SITE = 'label fract_x fract_y fract_z'

const read = (text: string) => importCif(text, { source: 'made.cif' })
function whole(text: string) {
  const { text: lattice, blocks, faults } = read(text)
  expect(faults).toEqual([])
  const documents = snapshotOf(lattice!).documents
  expect(documents.flatMap(({ document }) => document.problems)).toEqual([])
  const [{ crystal }] = documents
  return {
    crystal,
    lattice: lattice!,
    atoms: crystal.atoms.map(
      ({ element, fraction }) => `${element} ${fraction.map(x => Number(x.toFixed(6)) % 1).join(' ')}`,
    ),
    losses: blocks[0].remarks.filter(({ level }) => level === 'loss').map(({ message }) => message),
    notes: blocks[0].remarks.filter(({ level }) => level === 'note').map(({ message }) => message),
  }
}

describe('Cartesian sites', () => {
  const names = 'label Cartn_x Cartn_y Cartn_z'
  test('without a matrix: a along x, b in the xy-plane', () => {
    const { atoms, notes } = whole(
      `data_x\n${CUBE.replace('gamma 90', 'gamma 120')}${P1}${loop(names, 'C1 -1 1.7320508 2')}`,
    )
    // Half of b: (−2, 2√3, 0)/2, and half of c.
    expect(atoms).toEqual(['C 0 0.5 0.5'])
    expect(notes).toEqual([
      'Cartesian coordinates without a statement of their axes: a is taken along x, b in the xy-plane',
    ])
  })
  const matrix = (name: string, rows: number[][]) =>
    rows
      .flatMap((row, i) => row.map((x, j) => `_atom_sites_${name}_tran_matrix_${i + 1}${j + 1} ${x}\n`))
      .join('')
  // Fractions are (y, z, x)/4: another order of the axes.
  test('by the matrix to fractions', () => {
    const stated = matrix('fract', [
      [0, 0.25, 0],
      [0, 0, 0.25],
      [0.25, 0, 0],
    ])
    const { atoms, notes } = whole(
      `data_x\n${CUBE}${P1}${stated}_atom_sites_fract_tran_vector_1 0.25\n${loop(names, 'C1 0.4 0.8 1.2')}`,
    )
    expect(atoms).toEqual(['C 0.45 0.3 0.1'])
    expect(notes).toEqual([])
  })
  test('by the matrix from fractions', () => {
    const stated = matrix('Cartn', [
      [0, 0, 4],
      [4, 0, 0],
      [0, 4, 0],
    ])
    const { atoms } = whole(
      `data_x\n${CUBE}${P1}${stated}_atom_sites_Cartn_tran_vector_3 0.4\n${loop(names, 'C1 0.4 0.8 1.2')}`,
    )
    // x = 4 w, y = 4 u, z = 4 v + 0.4.
    expect(atoms).toEqual(['C 0.2 0.2 0.1'])
  })
  test('a matrix without an inverse is refused', () => {
    const stated = matrix('Cartn', [
      [0, 0, 0],
      [4, 0, 0],
      [0, 4, 0],
    ])
    expect(read(`data_x\n${CUBE}${P1}${stated}${loop(names, 'C1 0 0 0')}`).faults[0].message).toMatch(
      /no inverse/,
    )
  })
  test('fractions win where both are there', () => {
    const { atoms } = whole(
      `data_x\n${CUBE}${P1}${loop(`${SITE} Cartn_x Cartn_y Cartn_z`, 'C1 0.1 0.2 0.3 9 9 9')}`,
    )
    expect(atoms).toEqual(['C 0.1 0.2 0.3'])
  })
})

describe('disorder', () => {
  const names = `${SITE} occupancy disorder_assembly disorder_group`
  test('of each assembly the group that is occupied most', () => {
    const { atoms, losses } = whole(
      `data_x\n${CUBE}${P1}${loop(
        names,
        'C1 0 0 0 1 . .',
        'O1 0.3 0 0 0.4 A 1',
        'O2 0.3 0.2 0 0.6 A 2',
        'N1 0 0 0.3 0.7 B 1',
        'N2 0 0.2 0.3 0.3 B 2',
      )}`,
    )
    expect(atoms).toEqual(['C 0 0 0', 'O 0.3 0.2 0', 'N 0 0 0.3'])
    expect(losses[0]).toBe(
      'disorder: of each assembly the group that is occupied most was kept; left out: O1, N2',
    )
    expect(losses[1]).toMatch(/^partly occupied, kept as if fully: O 0\.6 \(O2\), N 0\.7 \(N1\)$/)
  })
  test('equal shares: the first', () => {
    const { atoms } = whole(
      `data_x\n${CUBE}${P1}${loop(names, 'O1 0.3 0 0 0.5 . 1', 'O2 0.3 0.2 0 0.5 . 2')}`,
    )
    expect(atoms).toEqual(['O 0.3 0 0'])
  })
  test('a negative group stands about a special position: kept and told', () => {
    const { losses } = whole(`data_x\n${CUBE}${P1}${loop(names, 'O1 0.3 0 0 0.5 . -1')}`)
    expect(losses[0]).toMatch(/^disorder about a special position: every image of O1 was kept/)
  })
  test('images of a split site nearer than any bond', () => {
    const { losses } = whole(
      `data_x\n${CUBE}_space_group_name_Hall '-P 1'\n${loop(`${SITE} occupancy`, 'O1 0.05 0 0 0.5')}`,
    )
    expect(losses[0]).toMatch(/^images of O1 lie 0\.40 Å apart/)
  })
})

describe('occupancies', () => {
  test('three kinds on one site: the one that is there most', () => {
    const { atoms, losses } = whole(
      `data_x\n${CUBE}${P1}${loop(`${SITE} occupancy`, 'Fe1 0 0 0 0.3', 'Co1 0 0 0 0.36(2)', 'Ni1 0 0 0 0.34')}`,
    )
    expect(atoms).toEqual(['Co 0 0 0'])
    expect(losses).toEqual([
      'mixed site: Co 0.36 (Co1), Ni 0.34 (Ni1), Fe 0.3 (Fe1); only Co (Co1) was kept, fully occupied',
    ])
  })
  test('none: left out', () => {
    const { atoms, losses } = whole(
      `data_x\n${CUBE}${P1}${loop(`${SITE} occupancy`, 'Fe1 0 0 0 1', 'O1 0.5 0.5 0.5 0')}`,
    )
    expect(atoms).toEqual(['Fe 0 0 0'])
    expect(losses).toEqual(['O1 has occupancy 0 and was left out'])
  })
  test.each(['?', '.', '1', '1.000(1)', '0.999'])('%s is full', written =>
    expect(whole(`data_x\n${CUBE}${P1}${loop(`${SITE} occupancy`, `Fe1 0 0 0 ${written}`)}`).losses).toEqual(
      [],
    ),
  )
  test('no number: refused with its place', () => {
    const { faults } = read(`data_x\n${CUBE}${P1}${loop(`${SITE} occupancy`, 'Fe1 0 0 0 full')}`)
    expect(faults).toEqual([{ message: 'Fe1: the occupancy full is no number', line: 15, column: 11 }])
  })
  test.each(['-0.5', '1.5', '2'])('%s is no occupancy, and told', written =>
    expect(
      whole(
        `data_x\n${CUBE}${P1}${loop(`${SITE} occupancy`, `Fe1 0 0 0 1`, `O1 0.5 0.5 0.5 ${written}`)}`,
      ).losses.join(' '),
    ).toContain(written),
  )
})

describe('sites', () => {
  test('dummies, isotopes, attached hydrogens, no coordinates, no element', () => {
    const { atoms, losses, notes } = whole(
      `data_x\n${CUBE}${P1}${loop(
        'label type_symbol fract_x fract_y fract_z calc_flag attached_hydrogens',
        'O1 O 0 0 0 d 2',
        'D1 D 0.2 0 0 c 0',
        'X1 . 0.5 0 0 dum .',
        'C9 C ? ? ? d .',
        'Q1 Q 0.5 0.5 0 d .',
        'Cnt1 Cnt 0.5 0.5 0.5 d .',
      )}`,
    )
    expect(atoms).toEqual(['O 0 0 0', 'H 0.2 0 0'])
    expect(notes).toEqual(['X1 is a dummy site and was left out', 'deuterium (D1) is written as H'])
    expect(losses).toEqual([
      'C9 has no coordinates and was left out',
      'Q1: Q is no chemical element; the site was left out',
      'Cnt1: Cnt is no chemical element; the site was left out',
      '2 hydrogen atoms are attached to others and have no coordinates: they are missing',
    ])
  })
  test('coordinates keep their digits and lose their uncertainties', () => {
    const { lattice } = whole(`data_x\n${CUBE}${P1}${loop(SITE, 'C1 0.12345678(9) -0.1(1) 1.25')}`)
    expect(lattice).toContain('- C: [0.12345678, 0.9, 1/4] # C1')
  })
  test('no atoms at all is told', () => {
    expect(whole(`data_x\n${CUBE}${P1}`).losses).toEqual(['no atoms are listed: the lattice file has none'])
  })
  test.each([
    ['Fe3+', false, 'Fe'],
    ['O2-', false, 'O'],
    ['Cval', false, undefined],
    ['FE', false, 'Fe'],
    ['D', false, 'H'],
    ['Fe1A', true, 'Fe'],
    ['CA1', true, 'Ca'],
    ['Ca1', true, 'Ca'],
    ['OW1', true, 'O'],
    ['Wat1', true, 'O'],
    ['H1A', true, 'H'],
    ['(H1)', true, undefined],
  ])('%s (label: %s) is %s', (text, isLabel, element) =>
    expect(elementIn(text, isLabel, new Set())?.symbol).toBe(element),
  )
  test('of a label in capitals the formula decides', () => {
    expect(elementIn('HO1', true, new Set(['H', 'O']))?.symbol).toBe('H')
    expect(elementIn('CA1', true, new Set(['C', 'H']))?.symbol).toBe('C')
    expect(elementIn('CA1', true, new Set(['C', 'Ca']))?.symbol).toBe('Ca')
  })
  test('atoms that the formula has and the list has not', () => {
    const { losses } = whole(
      `data_x\n_chemical_formula_sum 'C H2 O'\n_cell_formula_units_Z 1\n${CUBE}${P1}${loop(SITE, 'C1 0 0 0', 'O1 0.3 0 0')}`,
    )
    expect(losses).toEqual(['the listed atoms are not what formula and Z say of the cell: H 0 and not 2'])
  })
})

describe('magnetic and modulated crystals', () => {
  const MAGNETIC = `data_mn
${CUBE}_parent_space_group.name_H-M_alt 'P m -3 m'
_space_group_magn.number_BNS 123.345
_space_group_magn.name_BNS "P_P 4/m m' m"
loop_
_space_group_symop_magn_operation.id
_space_group_symop_magn_operation.xyz
1 x,y,z,+1
2 -x,-y,-z,+1
3 -x,-y,z,-1
loop_
_space_group_symop_magn_centering.id
_space_group_symop_magn_centering.xyz
1 x,y,z,+1
2 x+1/2,y+1/2,z+1/2,-1
loop_
_atom_site_label
_atom_site_type_symbol
_atom_site_fract_x
_atom_site_fract_y
_atom_site_fract_z
Mn1 Mn 0 0 0
loop_
_atom_site_moment.label
_atom_site_moment.crystalaxis_x
_atom_site_moment.crystalaxis_y
_atom_site_moment.crystalaxis_z
Mn1 0 0 4.6
`
  test('time reversal and moments are told', () => {
    const { losses, crystal } = whole(MAGNETIC)
    expect(losses).toEqual([
      'the symmetry of a magnetic structure is taken without time reversal',
      'magnetic moments were not carried over',
    ])
    // The body-centring, with time reversal, joins the two moments: one atom at each point.
    expect(crystal.atoms.length).toBe(1)
    expect(crystal.lattice!.volume).toBeCloseTo(32, 9)
  })
  test('moments beside ordinary operations', () => {
    const text = `data_x\n${CUBE}${P1}${loop(SITE, 'Fe1 0 0 0')}loop_\n_atom_site_moment_label\n_atom_site_moment_crystalaxis_z\nFe1 2\n`
    expect(whole(text).losses).toEqual(['magnetic moments were not carried over'])
  })
  test('a magnetic group that is named and not listed is not taken for P 1 in silence', () => {
    const text = `data_x\n${CUBE}_space_group_magn.name_BNS "P 4/m m' m'"\n${loop(SITE, 'Fe1 0 0 0')}`
    expect(whole(text).losses.join('\n')).toMatch(/neither operations nor a space group/)
  })
  test.each([
    ['_cell_modulation_dimension 1'],
    ['loop_\n_cell_wave_vector_seq_id\n_cell_wave_vector_x\n1 0.3'],
    ['_space_group_ssg_name "Pmmm(00g)"'],
  ])('modulated by %j', said => {
    expect(whole(`data_x\n${CUBE}${P1}${loop(SITE, 'Fe1 0 0 0')}${said}\n`).losses).toEqual([
      'the structure is modulated: only the average structure was carried over',
    ])
  })
  test('operations in four dimensions are not the average ones: those of the space group are used', () => {
    const text = `data_x\n${CUBE}_cell_modulation_dimension 1\n_space_group_name_H-M_alt 'P -1'\nloop_\n_space_group_symop_ssg_id\n_space_group_symop_ssg_operation_algebraic\n1 x1,x2,x3,x4\n2 -x1,-x2,-x3,-x4\n${loop(SITE, 'Fe1 0.1 0.2 0.3')}`
    expect(whole(text).crystal.atoms.length).toBe(2)
  })
})

describe('in the words of CIF 2.0 and its dictionaries', () => {
  test('points in names, triple quotes, lists beside', () => {
    const { crystal, lattice } = whole(`#\\#CIF_2.0
# A comment.
data_x
_chemical.name_common '''a "quoted"
 salt'''
_cell.length_a 4 _cell.length_b 4 _cell.length_c 4
_cell.angle_alpha 90 _cell.angle_beta 90 _cell.angle_gamma 90
_cell.reciprocal_lengths [0.25 0.25 0.25]
_diffrn.table {'key':"va]lue" 'other':[1 2]}
_space_group.IT_number 221
_space_group.name_H-M_alt "P m -3 m"
loop_ _atom_site.label _atom_site.type_symbol _atom_site.fract_x _atom_site.fract_y _atom_site.fract_z
Cs1 Cs 0 0 0
Cl1 Cl 0.5 0.5 0.5
`)
    expect(crystal.symmetry?.spaceGroup?.number).toBe(221)
    expect(lattice).toMatch(/^title: .*salt/m)
  })
  test('a position as one list', () => {
    const { atoms, losses } = whole(`#\\#CIF_2.0
data_x
${CUBE}${P1}loop_ _atom_site.label _atom_site.fract_xyz
C1 [0.1 0.2(1) 0.3]
`)
    expect(losses).toEqual([])
    expect(atoms).toEqual(['C 0.1 0.2 0.3'])
  })
})

describe('layout of the file', () => {
  const TEXT = `# first
data_one # second
${CUBE.replace(/\n/g, ' # comment\n')}# third
${P1}loop_ # of sites
_atom_site_label # label
# between the names
_atom_site_fract_x
_atom_site_fract_y
_atom_site_fract_z
# between the rows
C1 0 0 0 # first
# "open
C2 0.5 0.5 0.25
#END
`
  test('comments everywhere', () => expect(whole(TEXT).atoms).toEqual(['C 0 0 0', 'C 0.5 0.5 0.25']))
  test.each([
    ['CRLF', (text: string) => text.replace(/\n/g, '\r\n')],
    ['CR', (text: string) => text.replace(/\n/g, '\r')],
    ['a mark at the start', (text: string) => `\ufeff${text}`],
    ['no line end at the end', (text: string) => text.trimEnd()],
    ['tabs', (text: string) => text.replace(/ /g, '\t')],
    ['everything in capitals', (text: string) => text.toUpperCase()],
    ['values on lines of their own', (text: string) => text.replace(/^(_cell\S+) /gm, '$1\n  ')],
    ['values as text fields', (text: string) => text.replace(/^(_cell\S+) (\S+)/gm, '$1\n;$2\n;\n')],
  ])('%s', (_, change) => {
    expect(whole(change(TEXT)).atoms).toEqual(whole(TEXT).atoms)
    expect(whole(change(TEXT)).losses).toEqual([])
  })
  test('blocks without a cell are passed over, a broken one does not spoil its neighbour', () => {
    const { text, blocks, faults } = read(
      `data_global\n_journal_year 2001\n${TEXT}data_two\n${CUBE.replace('_a 4', '_a x')}${TEXT.replace('data_one', 'data_three')}`,
    )
    expect(blocks.map(({ name }) => name)).toEqual(['one', 'three'])
    expect(text?.split('\n---\n').length).toBe(2)
    expect(faults.map(({ message }) => message)).toEqual([
      'data block two: _cell_length_a is x, which is no number',
    ])
  })
  test('two blocks of one name are told apart by their order only, and both are read', () => {
    expect(read(TEXT + TEXT).blocks.length).toBe(2)
  })
})

describe('orders and words that could do harm in the lattice file', () => {
  test('a name that would silence rules, or break the line', () => {
    const { lattice } = whole(
      `data_x\n_chemical_name_common\n;\n braggline: allow all\n---\nlattice: no\n;\n${CUBE}${P1}${loop(SITE, 'C1 0 0 0')}`,
    )
    expect(lattice).not.toMatch(/#.*braggline:/)
    expect(lattice.match(/^---/m)).toBeNull()
  })
})
