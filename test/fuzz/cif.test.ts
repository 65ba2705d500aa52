/** Random bytes and random edits of CIFs: never a crash, never a hang, and every fault has a place in the text. */
import fc from 'fast-check'
import { beforeAll, expect, test } from 'vitest'
import { importCif } from '../../server/src/exchange/cif/import.ts'
import { parseTriplet } from '../../server/src/exchange/cif/operations.ts'
import { operationsOfHall } from '../../server/src/exchange/cif/hall.ts'
import { decode } from '../../server/src/format/decode.ts'
import { loadSymmetryFromDisk } from '../../server/src/symmetry-node.ts'

beforeAll(loadSymmetryFromDisk)

const SEED = `#\\#CIF_1.1
data_fuzz
_chemical_name_common 'a "name"'
_publ_section_title
;
 Several lines \\
 of text
;
_cell_length_a 4.9(1)
_cell_length_b 4.9
_cell_length_c 5.4
_cell_angle_alpha 90
_cell_angle_beta 90
_cell_angle_gamma 120
_space_group_IT_number 152
_symmetry_space_group_name_H-M 'P 31 2 1'
_space_group_name_Hall 'P 31 2"'
loop_
_space_group_symop_operation_xyz
x,y,z
-y,x-y,z+1/3
'y, x, -z'
loop_
_atom_site_label
_atom_site_type_symbol
_atom_site_fract_x
_atom_site_fract_y
_atom_site_fract_z
_atom_site_occupancy
_atom_site_disorder_group
Si1 Si4+ 0.4697 0 0 1 .
O1 O2- 0.4135 0.2669 0.1191 0.5 1
O2 O2- 0.42 0.27 0.12 0.5 2
`
const WORDS = [
  'loop_',
  'data_',
  "'",
  '"',
  ';',
  '\n;',
  '\n',
  '?',
  '.',
  '_cell_length_a',
  '1e308',
  '-1',
  '0',
  '(',
  ')',
  '#',
  'x,y,z',
  '\\',
  '[',
  '{',
  '\u0000',
  '\ud800',
  '9'.repeat(30),
]

const edited = fc
  .array(
    fc.record({
      at: fc.nat(SEED.length),
      cut: fc.nat(30),
      text: fc.oneof(fc.constantFrom(...WORDS), fc.string({ maxLength: 6, unit: 'binary' })),
    }),
    { minLength: 1, maxLength: 6 },
  )
  .map(edits =>
    edits.reduce((text, { at, cut, text: added }) => text.slice(0, at) + added + text.slice(at + cut), SEED),
  )

function judge(text: string): void {
  const { text: lattice, blocks, faults } = importCif(text, { source: 'fuzz.cif' })
  const lines = text.split(/\r\n|\r|\n/)
  for (const place of [
    ...faults,
    ...blocks.flatMap(({ remarks }) => remarks.flatMap(({ place }) => place ?? [])),
  ]) {
    expect(place.line).toBeGreaterThan(0)
    expect(place.line).toBeLessThanOrEqual(lines.length)
    expect(place.column).toBeGreaterThan(0)
    expect(place.column).toBeLessThanOrEqual(lines[place.line - 1].length + 1)
  }
  expect(lattice !== undefined || faults.length > 0).toBe(true)
  if (lattice === undefined) return
  const { documents, problems } = decode(lattice)
  expect(problems).toEqual([])
  expect(documents.flatMap(document => document.problems.map(({ message }) => message))).toEqual([])
}

test('the seed is read', () => expect(importCif(SEED, { source: 'x' }).faults).toEqual([]))
test('random edits', () => fc.assert(fc.property(edited, judge), { numRuns: 600 }), 120_000)
test('random text', () =>
  fc.assert(fc.property(fc.string({ maxLength: 300, unit: 'binary' }), judge), { numRuns: 400 }))
test('random words', () =>
  fc.assert(
    fc.property(fc.array(fc.constantFrom(...WORDS, '_a', 'data_x', ' '), { maxLength: 60 }), words =>
      judge(words.join('')),
    ),
    { numRuns: 600 },
  ))
test('random triplets and Hall symbols', () =>
  fc.assert(
    fc.property(fc.stringMatching(/^[-+xyz0-9/.,* PABCIRF"'()abcnuvwd]{0,30}$/), text => {
      parseTriplet(text)
      operationsOfHall(text)
    }),
    { numRuns: 2000 },
  ))

test.each([
  ['a line of a million values', `data_x loop_ _a ${'1 '.repeat(1_000_000)}`],
  ['a million open quotes', `data_x\n${"_a 'x\n".repeat(200_000)}`],
  ['a million semicolons', `data_x\n${';\n'.repeat(500_000)}`],
  ['nested brackets', `#\\#CIF_2.0\ndata_x _a ${'['.repeat(500_000)}`],
])('%s ends in time', (_, text) => judge(text))
