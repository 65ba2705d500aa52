/** The short way for long lists of atoms: when it is taken, and that it is the same as the long one. */
import { expect, test } from 'vitest'
import { decode, decodeWhole } from '../../../server/src/format/decode.ts'
import { findRuns } from '../../../server/src/format/rows.ts'
import { readYaml } from '../../../server/src/format/yaml.ts'

const LATTICE = 'lattice: {bravais: cP, a: 9}\n'
const rows = (count: number, write: (i: number) => string) =>
  Array.from({ length: count }, (_, i) => write(i)).join('')
const plain = (i: number) => `  - Si: [0.${i}, ${i}/12, a/9]\n`

/** Lengths of the runs that are cut out. */
const runs = (text: string) => findRuns(text).map(run => run.rows.length)
const asJson = (text: string, read: typeof decode) =>
  JSON.stringify(read(text), (_key, value) => (value instanceof Map ? [...value] : value))

test.each([
  ['rows', rows(8, plain), [8]],
  ['too few rows', rows(7, plain), []],
  ['named atoms', rows(9, i => `  - Fe: {at: [0.${i}, 0, 0], name: Fe_${i}}\n`), [9]],
  ['rows in columns', rows(9, i => `  - Si:  [ 0.${i},  0.5,   0 ] # atom ${i}\n`), [9]],
  ['comments and blank lines between', rows(9, i => `${plain(i)}\n  # next\n`), [9]],
  ['carriage returns', rows(9, plain).replaceAll('\n', '\r\n'), [9]],
  ['a last row without a line break', rows(9, plain).trimEnd(), [8]],
  [
    'another form in the middle',
    `${rows(9, plain)}  - Si: {name: x, at: [0, 0, 0]}\n${rows(9, plain)}`,
    [9, 9],
  ],
  ['another indentation', `${rows(9, plain)}${rows(9, i => ` ${plain(i)}`)}`, [9, 9]],
  [
    'blanks and a true minus inside of a number',
    rows(9, i => `  - Si: [0.${i} + 1 / 2, −0.5,  a - 1 ]\n`),
    [9],
  ],
  ['quotes', rows(9, i => `  - Si: [0.${i}, "1/2", 0]\n`), []],
  ['a comment without its blank', rows(9, i => `  - Si: [0.${i}, 0, 0]#x\n`), []],
])('%s', (_name, list, found) => {
  const text = `${LATTICE}atoms:\n${list}`
  expect(runs(text)).toEqual(found)
  expect(asJson(text, decode)).toBe(asJson(text, decodeWhole))
})

test.each([
  ['in a text', `${LATTICE}title: |\n${rows(9, plain)}`],
  ['in quotes', `${LATTICE}title: "\n${rows(9, plain)}"\n`],
  ['under a key that takes no atoms', `${LATTICE}path:\n${rows(9, plain)}`],
  ['behind an alias', `x: &x\n${rows(9, plain)}${LATTICE}atoms: *x\n`],
  ['of two indentations', `${LATTICE}atoms:\n${rows(9, plain)}${rows(9, i => ` ${plain(i)}`)}`],
  ['under an unknown key', `${LATTICE}atom:\n${rows(9, plain)}`],
  [
    'in two documents',
    `${LATTICE}atoms:\n${rows(9, plain)}---\n${LATTICE}atoms:\n${rows(9, plain)}path: Γ – X\n`,
  ],
  ['with a fault of syntax behind', `${LATTICE}atoms:\n${rows(9, plain)}path: "Γ\n`],
  [
    'with faults of its own',
    `${LATTICE}atoms:\n${rows(9, i => `  - ${i === 4 ? 'Sl' : 'Si'}: [0.${i}, ${i === 5 ? '1/0' : '0'}, 0]${i === 6 ? ' # braggline: allow x' : ''}\n`)}`,
  ],
])('rows %s read the same both ways', (_name, text) => {
  expect(runs(text).length).toBeGreaterThan(0)
  expect(asJson(text, decode)).toBe(asJson(text, decodeWhole))
})

test('the YAML library sees two rows of a thousand', () => {
  const text = `${LATTICE}atoms:\n${rows(1000, plain)}path: Γ – X\n`
  const file = readYaml(text)
  const contents = file.documents[0].contents
  const atoms = contents.kind === 'mapping' ? contents.entries[1].value : undefined
  expect(atoms?.kind === 'list' && atoms.length).toBe(2)
  expect(atoms?.kind === 'list' && atoms.itemsAndRows.length).toBe(1000)
  expect(file.rowsMissed()).toBe(false)
})
