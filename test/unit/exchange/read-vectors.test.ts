/** Layouts invented for these tests; the same three vectors in each, unless a test says otherwise. */
import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { plausibleUnits, readVectors, vectorsOf } from '../../../server/src/exchange/read-vectors.ts'
import type { Mat3 } from '../../../server/src/crystal/vector.ts'

const read = (text: string) => {
  const reading = readVectors(text)
  if ('failure' in reading) throw new Error(reading.failure)
  return reading.read
}
const values = (text: string) => vectorsOf(read(text)).map(row => row.map(({ value }) => value))

const ROWS = [
  [4.1, -0.25, 0],
  [0, 5.2, 0.125],
  [1.5, 0, 6.3],
]

describe.each([
  ['blanks', '4.1 -0.25 0\n0 5.2 0.125\n1.5 0 6.3'],
  ['tabs and Windows line ends', '4.1\t-0.25\t0\r\n0\t5.2\t0.125\r\n1.5\t0\t6.3\r\n'],
  ['commas', '4.1, -0.25, 0\n0, 5.2, 0.125\n1.5, 0, 6.3'],
  ['commas without blanks', '4.1,-0.25,0\n0,5.2,0.125\n1.5,0,6.3'],
  ['semicolons', '4.1; -0.25; 0;\n0; 5.2; 0.125;\n1.5; 0; 6.3;'],
  [
    'bars of a table',
    '| x | y | z |\n|---|---|---|\n| 4.1 | -0.25 | 0 |\n| 0 | 5.2 | 0.125 |\n| 1.5 | 0 | 6.3 |',
  ],
  ['ampersands', '4.1 & -0.25 & 0 \\\\\n0 & 5.2 & 0.125 \\\\\n1.5 & 0 & 6.3 \\\\'],
  ['brackets in one line', '[[4.1, -0.25, 0], [0, 5.2, 0.125], [1.5, 0, 6.3]]'],
  [
    'brackets in lines',
    'cell = np.array([\n  [4.1, -0.25, 0.0],\n  [0.0, 5.2, 0.125],\n  [1.5, 0.0, 6.3],\n])',
  ],
  ['braces', '{{4.1, -0.25, 0}, {0, 5.2, 0.125}, {1.5, 0, 6.3}}'],
  ['nine numbers in a row', '4.1 -0.25 0 0 5.2 0.125 1.5 0 6.3'],
  ['nine numbers in a column', '4.1\n-0.25\n0\n0\n5.2\n0.125\n1.5\n0\n6.3'],
  ['names before the rows', 'a1 = 4.1 -0.25 0\na2 = 0 5.2 0.125\na3 = 1.5 0 6.3'],
  ['names with indices', 'a(1) = ( 4.1 -0.25 0 )\na(2) = ( 0 5.2 0.125 )\na(3) = ( 1.5 0 6.3 )'],
  ['names with colons', 'vec 1: 4.1 -0.25 0\nvec 2: 0 5.2 0.125\nvec 3: 1.5 0 6.3'],
  ['running numbers', '1  4.1 -0.25 0\n2  0 5.2 0.125\n3  1.5 0 6.3'],
  ['lengths after the rows', '4.1 -0.25 0   4.1076\n0 5.2 0.125  5.2015\n1.5 0 6.3  6.4761'],
  ['other vectors beside them', '4.1 -0.25 0  1.5 0.1 -0.4\n0 5.2 0.125  0.07 1.2 0\n1.5 0 6.3  0 -0.02 1'],
  ['comments', '4.1 -0.25 0 # vector 1\n0 5.2 0.125 # vector 2\n1.5 0 6.3 # vector 3'],
  ['exponents', '4.1E+00 -2.5e-1 0.0e0\n0.0 52.0e-01 1.25E-1\n.15e1 0. 6.3'],
  ['exponents of Fortran', '0.410D+01 -0.25D+00 0.0D0\n0.0d0 0.52d1 0.125d+0\n1.5D0 0.0D0 6.3D0'],
  [
    'columns that run into each other',
    '  4.10000-0.25000 0.00000\n  0.00000 5.20000 0.12500\n  1.50000 0.00000 6.30000',
  ],
  ['a true minus', '4.1 −0.25 0\n0 5.2 0.125\n1.5 0 6.3'],
  ['uncertainties', '4.10(2) -0.25(1) 0\n0 5.20(2) 0.125\n1.5 0 6.3(1)'],
  ['fractions', '41/10 -1/4 0\n0 52/10 1/8\n3/2 0 63/10'],
  ['decimal commas', '4,1 -0,25 0,0\n0,0 5,2 0,125\n1,5 0,0 6,3'],
  ['blank lines between', '4.1 -0.25 0\n\n0 5.2 0.125\n\n1.5 0 6.3'],
  ['a line of words before each', 'first\n4.1 -0.25 0\nsecond\n0 5.2 0.125\nthird\n1.5 0 6.3'],
  [
    'our own format',
    'lattice:\n  vectors:\n    - [4.1, -0.25, 0]\n    - [0, 5.2, 0.125]\n    - [1.5, 0, 6.3]\n',
  ],
  ['JSON', '{"lattice": {"matrix": [[4.1, -0.25, 0], [0, 5.2, 0.125], [1.5, 0, 6.3]]}}'],
  ['a scale of one', '1.0\n4.1 -0.25 0\n0 5.2 0.125\n1.5 0 6.3'],
  ['a count above them', 'number of vectors: 3\n4.1 -0.25 0\n0 5.2 0.125\n1.5 0 6.3'],
  ['a factor before each', '2 * 2.05 -0.125 0\n2 * 0 2.6 0.0625\n2 * 0.75 0 3.15'],
  [
    'a listing with other tables',
    `run of 2026-11-30 12:40:07, 24 cores
 atoms
   Pb 0.0 0.0 0.0
   Te 0.5 0.5 0.5
 atom positions
   1.0 0.0 0.2
   0.1 0.9 0.0
   0.0 0.3 0.8
 lattice vectors
   4.1 -0.25 0
   0 5.2 0.125
   1.5 0 6.3
 forces on the atoms
   0.01 0.02 0.5
   0.1 0.02 0.0
   0.0 0.3 0.1
 total energy -1234.5678`,
  ],
])('%s', (_, text) => {
  test('are read', () => {
    const found = values(text)
    for (const [i, row] of ROWS.entries())
      for (const [j, x] of row.entries()) expect(found[i][j]).toBeCloseTo(x, 12)
  })
})

describe('a scale', () => {
  const half = '0 1/2 1/2\n1/2 0 1/2\n1/2 1/2 0'
  const expected = [
    [0, 3.2, 3.2],
    [3.2, 0, 3.2],
    [3.2, 3.2, 0],
  ]
  test.each([
    ['alone above', `6.4\n${half}`],
    ['alone above whole rows', `6.4\n0 0.5 0.5\n0.5 0 0.5\n0.5 0.5 0`],
    ['with a name', `alat = 6.4\nvectors in units of alat\n${half}`],
    ['in words', `Lattice constant: 6.4 Å\n${half}`],
    ['on the same line', '6.4 * [[0, 0.5, 0.5], [0.5, 0, 0.5], [0.5, 0.5, 0]]'],
    ['before each row', '6.4 × (0, 0.5, 0.5)\n6.4 × (0.5, 0, 0.5)\n6.4 × (0.5, 0.5, 0)'],
    ['of Fortran', `0.64D+01\n${half}`],
  ])('%s', (_, text) => expect(values(text)).toEqual(expected))

  test('a parameter that is only mentioned is none', () =>
    expect(values(`a = 4.1\n${ROWS.map(row => row.join(' ')).join('\n')}`)).toEqual(ROWS))
  test('a negative one is refused', () =>
    expect(readVectors(`-160.0\n${half}`)).toEqual({ failure: expect.stringContaining('negative') }))
  test('roundings are those of the numbers, in units of the scale', () => {
    const [row] = vectorsOf(read('6.46\n0 0.5 0.866\n0.5 0 0.5\n0.5 0.5 0'))
    expect(row.map(({ rounding }) => rounding)).toEqual([0, 0, 6.46 * 0.0005])
  })
})

describe('units', () => {
  const rows = '4.1 0 0\n0 5.2 0\n0 0 6.3'
  test.each([
    [`vectors (Å)\n${rows}`, 'angstrom'],
    [`vectors (\u212b)\n${rows}`, 'angstrom'],
    [`Cell [Angstrom]:\n${rows}`, 'angstrom'],
    [`in ångström\n${rows}`, 'angstrom'],
    [`lattice vectors in bohr\n${rows}`, 'bohr'],
    [`cell in a.u.\n${rows}`, 'bohr'],
    [`lengths in atomic units\n${rows}`, 'bohr'],
    [`vectors / nm\n${rows}`, 'nm'],
    ['4.1 0 0 nm\n0 5.2 0 nm\n0 0 6.3 nm', 'nm'],
    [`${rows}\nall in nanometres`, 'nm'],
    [rows, undefined],
    [`in Å or bohr\n${rows}`, undefined],
    // Nearer counts.
    [`energies in atomic units\n\n\n\n\n\nlattice vectors (Å)\n${rows}`, 'angstrom'],
  ])('%j', (text, unit) => expect(read(text).unit).toBe(unit))

  test('picometres become ångströms', () => {
    expect(read('in pm\n410 0 0\n0 520 0\n0 0 630').unit).toBe('angstrom')
    expect(values('in pm\n410 0 0\n0 520 0\n0 0 630')).toEqual([
      [4.1, 0, 0],
      [0, 5.2, 0],
      [0, 0, 6.3],
    ])
  })

  // Lattice parameters of silicon: 5.431 Å = 10.263 bohr = 0.5431 nm (common practice). With 5.431 bohr the shortest
  // vector would be 2.03 Å: no crystal has it.
  test.each([
    [5.431, ['angstrom']],
    [10.263, ['angstrom', 'bohr']],
    [0.5431, ['nm']],
    [0.001, []],
  ])('a face-centred cubic lattice of %d', (a, units) => {
    const h = a / 2
    const rows: Mat3 = [
      [0, h, h],
      [h, 0, h],
      [h, h, 0],
    ]
    expect(plausibleUnits(rows)).toEqual(units)
  })
})

describe('what is no lattice', () => {
  test.each([
    ['nothing', ''],
    ['words', 'Dear all,\nthe cell will follow tomorrow.'],
    ['six parameters', '4.1 5.2 6.3 90 90 90'],
    ['two rows', '1 0 0\n0 1 0'],
    ['vectors in one plane', '1 0 0\n0 1 0\n1 1 0'],
    ['a date', '2026-11-30'],
    ['names with digits', 'a1 a2 a3\nb1 b2 b3\nc1 c2 c3'],
    ['reciprocal vectors', 'reciprocal lattice vectors\n1.5 0 0\n0 1.2 0\n0 0 0.9'],
    ['inverse lengths', 'vectors in Å⁻¹\n1.5 0 0\n0 1.2 0\n0 0 0.9'],
    ['vectors in 2π/a', 'in units of 2π/a\n1 0 0\n0 1 0\n0 0 1'],
  ])('%s', (_, text) => expect(readVectors(text)).toHaveProperty('failure'))

  test('whatever is copied, nothing is thrown', () => {
    fc.assert(fc.property(fc.string({ unit: 'binary' }), text => void readVectors(text)))
    const piece = fc.constantFrom(
      '1',
      '2.5',
      '-',
      '.',
      'e',
      'D',
      '+',
      ' ',
      '\n',
      '(',
      ')',
      '[',
      ',',
      '/',
      '*',
      '=',
      'a',
      'Å',
      'bohr',
      '0',
    )
    fc.assert(
      fc.property(
        fc.array(piece, { maxLength: 80 }).map(all => all.join('')),
        text => void readVectors(text),
      ),
      { numRuns: 500 },
    )
  })
  test('a long text without vectors is given up soon', () => {
    expect(readVectors('1 2 3\n'.repeat(30_000))).toHaveProperty('failure')
    expect(readVectors('9'.repeat(300_000))).toHaveProperty('failure')
  })
})

test('columns are told where the text names them', () => {
  expect(read('the vectors are the columns\n4 1 0\n0 5 0\n0 0 6').columns).toBe(true)
  expect(read('4 1 0\n0 5 0\n0 0 6').columns).toBe(false)
})

test('any numbers, any separators: what was written is read', () => {
  const number = fc.integer({ min: -9999, max: 9999 }).map(n => n / 1000)
  const separator = fc.constantFrom(' ', '\t', ', ', '; ', ' | ', ',')
  const rows = fc.array(fc.array(number, { minLength: 3, maxLength: 3 }), { minLength: 3, maxLength: 3 })
  fc.assert(
    fc.property(rows, separator, fc.constantFrom('', '[', '('), (m, between, open) => {
      const [u, v, w] = m
      const volume = Math.abs(
        u[0] * (v[1] * w[2] - v[2] * w[1]) -
          u[1] * (v[0] * w[2] - v[2] * w[0]) +
          u[2] * (v[0] * w[1] - v[1] * w[0]),
      )
      fc.pre(volume > 0.1)
      const text = m.map(row => `${open}${row.map(x => x.toFixed(3)).join(between)}`).join('\n')
      expect(values(text)).toEqual(m.map(row => row.map(x => x + 0)))
    }),
  )
})
