import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { World } from './world.ts'

/** Rock salt: a = 5.6402 Å (common practice); symmetry by name only. */
const SALT = `data_salt
_cell_length_a 5.6402(3)
_cell_length_b 5.6402(3)
_cell_length_c 5.6402(3)
_cell_angle_alpha 90
_cell_angle_beta 90
_cell_angle_gamma 90
_symmetry_space_group_name_H-M 'F m -3 m'
loop_
_atom_site_label
_atom_site_fract_x
_atom_site_fract_y
_atom_site_fract_z
_atom_site_occupancy
Na1 0 0 0 1
Cl1 1/2 1/2 1/2 1
`.replaceAll('1/2', '0.5')

let world: World
beforeAll(() => {
  world = new World()
  world.write('salt.cif', SALT)
})
afterAll(() => world.remove())

describe('import', () => {
  test('writes a lattice file that checks clean', async () => {
    const { status, out, err } = await world.run(['import', 'salt.cif'])
    expect(err).toBe('')
    expect(status).toBe(0)
    expect(out).toBe(`# Imported from salt.cif, data block salt.
title: salt
lattice:
  bravais: cF
  a: 5.6402(3)
atoms:
  - Na: [0, 0, 0] # Na1
  - Cl: [1/2, 1/2, 1/2] # Cl1
space-group: 225 # F m -3 m
labels: setyawan-curtarolo-2010
path: recommended
`)
    expect(await world.run(['check', '-'], { input: out })).toMatchObject({ status: 0 })
  })

  test('to a file, whole or not at all', async () => {
    const first = await world.run(['import', 'salt.cif', '-o', 'salt.lattice.yaml'])
    expect(first).toEqual({ status: 0, out: '', err: '' })
    expect(world.read('salt.lattice.yaml')).toMatch(/bravais: cF/)
    const again = await world.run(['import', 'salt.cif', '-o', 'salt.lattice.yaml'])
    expect(again.status).toBe(2)
    expect(again.err).toMatch(/is there already/)
  })

  test('a mixed site: written, told, status 1', async () => {
    const mixed = SALT.replace('Na1 0 0 0 1', 'Na1 0 0 0 0.7\nK1 0 0 0 0.3')
    const { status, out, err } = await world.run(['import', '-'], { input: mixed })
    expect(status).toBe(1)
    expect(err).toBe(
      '-:15:1: warning: mixed site: Na 0.7 (Na1), K 0.3 (K1); only Na (Na1) was kept, fully occupied\n',
    )
    expect(out).toMatch(/^# Not as in the CIF: mixed site: Na 0.7/m)
    expect(out).not.toMatch(/- K:/)
  })

  test('several blocks: a document each, or one by name', async () => {
    const two = SALT + SALT.replace('data_salt', 'data_other').replaceAll('5.6402(3)', '6.5')
    const { status, out } = await world.run(['import', '-'], { input: two })
    expect(status).toBe(0)
    expect(out.split('---\n').length).toBe(2)
    const one = await world.run(['import', '-', '--block', 'other'], { input: two })
    expect(one.out).toMatch(/a: 6.5/)
    expect(one.out).not.toMatch(/---/)
    const none = await world.run(['import', '-', '--block', 'nothing'], { input: two })
    expect(none.status).toBe(2)
    expect(none.err).toMatch(/no data block is named nothing; there are salt, other/)
  })

  test.each([
    ['no CIF', 'title: x\n', /^-:1:1: error: the value title: belongs to no data name/],
    ['nothing', '', /no data block \(data_…\): this is no CIF/],
    ['no cell', 'data_x _a 1', /no data block states a cell/],
    [
      'a length that is none',
      SALT.replace('5.6402(3)', 'x'),
      /^-:2:16: error: _cell_length_a is x, which is no number/,
    ],
    [
      'a group that does not fit',
      SALT.replace('_gamma 90', '_gamma 80'),
      /no setting of F m -3 m, space group 225, fits the cell/,
    ],
    [
      'an unknown group',
      SALT.replace('F m -3 m', 'F q 7'),
      /^-:8:32: error: F q 7 is no space group that is known here/,
    ],
  ])('%s: refused with its place', async (_, input, message) => {
    const { status, out, err } = await world.run(['import', '-'], { input })
    expect(status).toBe(2)
    expect(out).toBe('')
    expect(err).toMatch(message)
  })
})

describe('export', () => {
  test('and import again', async () => {
    const lattice = (await world.run(['import', 'salt.cif'])).out
    const { status, out, err } = await world.run(['export', '-'], { input: lattice })
    expect(err).toBe('')
    expect(status).toBe(0)
    expect(out).toMatch(/^_space_group_name_H-M_alt +'F m -3 m'$/m)
    expect(out.match(/^\d+ .*[xyz].*,.*,/gm)?.length).toBe(192)
    expect(out).toMatch(/^Na1 Na 0 0 0 4 [ab]$/m)
    const back = await world.run(['import', '-'], { input: out })
    expect(back.status).toBe(0)
    expect(back.out).toMatch(/bravais: cF\n {2}a: 5.6402\n/)
  })
  test('a chain is refused', async () => {
    const { status, err } = await world.run(['export', '-'], { input: 'lattice: {vectors: [[2.5, 0, 0]]}\n' })
    expect(status).toBe(2)
    expect(err).toBe('braggline: a chain has one period, and a CIF describes crystals with three\n')
  })
})
