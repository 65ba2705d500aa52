/** Files to start from, and ways to spoil them. */
import fc from 'fast-check'

export const SAMPLES: readonly string[] = [
  'lattice: {bravais: cF, a: 5.43}\npath: Γ – X\n',
  `title: Lead telluride, rock salt
unit: angstrom
lattice:
  bravais: cF
  a: 6.462(3)
atoms:
  - Pb: [0, 0, 0]
  - Te: [1/2, 1/2, 1/2] # the other one
path: Γ – X – W – K – Γ – L | U –(20)– X
sampling:
  spacing: 0.02
mesh:
  divisions: [12, 12, 12]
  shift: [0, 1/2, 1/2]
`,
  `# braggline: allow point-outside-zone
lattice:
  a: 5.43
  vectors:
    - [0, a/2, a/2]
    - [a/2, 0, a/2]
    - [a/2, a/2, 0]
frames: {atoms: cartesian, points: 2pi/a}
points:
  Q: [1/2 + a^2/(4*a^2), 0, 0] # braggline: allow point-rounded, point-unnamed
  R: {between: [Γ, X_1], at: 0.85}
  "N": &n [0, 0, 1/2]
  Y: *n
path:
  - Γ – X →
    W
  - "\\u0393 – L"
  - >-
    U
    – X
mesh: {coarse: {divisions: [4, 4, 4]}, fine: {spacing: 0.1}}
checks: {mesh-uneven: off}
`,
  `lattice: {bravais: hp, a: 2.5, height: 18}
atoms: [B: [1/3, 2/3, 1/2], N: {at: [2/3, 1/3, sqrt(3)/2], name: up}]
supercell: [[2, 1], [0, 3]]
time-reversal: no
labels: none
---
{lattice: {bravais: hR, a: 4, alpha: 57.2}, path: recommended}
...
%YAML 1.2
---
title: |
  A chain,
  two lines
tolerance: 1e-3
lattice: {vectors: [[2.47, 0, 0]]}
space-group: "P 6_3/m m c"
`,
  `lattice: {bravais: tI, a: 3.8, c: 9.5}
atoms:
${Array.from({ length: 12 }, (_, i) => `  - ${i % 3 ? 'O' : 'Ti'}: [0.${i}, ${i}/12, a/c]`).join('\n')}
path: Γ – X
`,
  'lattice: {bravais: cF, a: 5.43}\r\npath: |\r\n  Γ – X\r\n  – W # no comment\r\n',
]

/** Pieces that mean something to YAML, to numbers or to paths. */
const SPICE = [
  '\n',
  '\r\n',
  ' ',
  '  ',
  '\t',
  ':',
  ': ',
  '- ',
  '[',
  ']',
  '{',
  '}',
  ',',
  '#',
  ' # ',
  '|',
  '>',
  '"',
  "'",
  '&a ',
  '*a',
  '!x ',
  '%',
  '---\n',
  '...\n',
  '? ',
  '<<: ',
  '\\',
  '(',
  ')',
  '^',
  '+',
  '-',
  '/',
  '*',
  '1',
  '.5',
  '1e9',
  'a',
  'pi',
  'sqrt(',
  '.nan',
  '0x1',
  'Γ',
  '–',
  '→',
  'X₁',
  '∑',
  "'",
  '\u0000',
  '\u0002',
  '\u001f',
  '\ud800',
  '\u2028',
  '\ufeff',
  'null',
  '~',
  'yes',
  'lattice',
  'atoms:\n',
  'mesh:',
  '# braggline: allow x',
  '# braggline: ',
]

interface Spoiling {
  readonly from: number
  readonly length: number
  readonly text: string
}

const spoiling: fc.Arbitrary<Spoiling> = fc.record({
  from: fc.double({ min: 0, max: 1, noNaN: true }),
  length: fc.oneof(fc.constant(0), fc.nat({ max: 8 }), fc.nat({ max: 200 })),
  text: fc.oneof(fc.constant(''), fc.constantFrom(...SPICE), fc.string({ unit: 'binary', maxLength: 4 })),
})

const spoil = (text: string, { from, length, text: inserted }: Spoiling): string => {
  const start = Math.floor(from * (text.length + 1))
  return text.slice(0, start) + inserted + text.slice(start + length)
}

/** A sample with some stretches replaced. */
export const spoiled: fc.Arbitrary<string> = fc
  .tuple(fc.constantFrom(...SAMPLES), fc.array(spoiling, { maxLength: 6 }))
  .map(([sample, spoilings]) => spoilings.reduce(spoil, sample))

/** Lines of the samples in any order. */
export const shuffled: fc.Arbitrary<string> = fc
  .array(fc.constantFrom(...SAMPLES.flatMap(sample => sample.split('\n'))), { maxLength: 14 })
  .map(lines => `${lines.join('\n')}\n`)

/** Text of nothing but signs of YAML and the format. */
export const spicy: fc.Arbitrary<string> = fc
  .array(fc.constantFrom(...SPICE), { maxLength: 40 })
  .map(parts => parts.join(''))

const number = fc.constantFrom(
  '0',
  '0.25',
  '-.5',
  '1/3',
  '+1',
  '1e-3',
  'a/2',
  '(1+2)/3',
  '0.123456',
  '2pi',
  '1/0',
  '3.8O',
  '-',
  '.',
  'sqrt(3)/2',
  '−1',
  '1 2',
  '"1"',
  '*x',
  '[0]',
  '',
)
const vector = fc
  .tuple(number, number, number, fc.constantFrom(', ', ',', ' ,  '))
  .map(([x, y, z, comma]) => `[${[x, y, z].join(comma)}]`)
const element = fc.constantFrom('Si', 'O', 'N', 'Xx', 'Fe1', 'si')
const plainRow = fc.tuple(element, vector).map(([symbol, place]) => `- ${symbol}: ${place}`)
const named = fc
  .tuple(element, vector, fc.constantFrom('up', 'null', '1', 'a b', 'Fe_2', 'true'))
  .map(([symbol, place, name]) => `- ${symbol}: {at: ${place}, name: ${name}}`)
const regular = fc
  .tuple(fc.constantFrom('Si', 'O', 'Fe'), fc.integer({ min: -99, max: 99 }))
  .map(([symbol, n]) => `- ${symbol}: [${n / 100}, ${n}/7${n % 5 ? '' : ' + 1 '}, ${n % 3 ? 'a' : '−1'}]`)
const regularNamed = regular.map(row => `${row.replace('[', '{at: [')}, name: up}`)
const oddity = fc.constantFrom(
  '',
  '# braggline: allow atoms-coincide',
  '#',
  '  # deeper',
  '- ',
  '-',
  '- Si:',
  '- [0, 0, 0]',
  'path: Γ – X',
  '---',
  '...',
  '- Si: [0, 0',
  '"',
  "- 'x",
  '- &x Si: [0, 0, 0]',
  '- *x',
  '- Si: &x [0, 0, 0]',
  '- Si: |',
  '  Si: [0, 0, 0]',
  '\t',
  '- - Si: [0, 0, 0]',
)
const row = fc.oneof(
  { weight: 30, arbitrary: regular },
  { weight: 5, arbitrary: regularNamed },
  { weight: 2, arbitrary: plainRow },
  { weight: 2, arbitrary: named },
  { weight: 1, arbitrary: oddity },
)
const ending = fc.oneof(
  { weight: 12, arbitrary: fc.constant('') },
  {
    weight: 1,
    arbitrary: fc.constantFrom(
      ' ',
      '  # note',
      ' # braggline: allow atoms-coincide',
      '# none',
      '\t# tab',
      ' x',
      '\r',
    ),
  },
)
const indent = fc.oneof(
  { weight: 20, arbitrary: fc.constant(0) },
  { weight: 1, arbitrary: fc.constantFrom(1, 2, -1) },
)
const head = fc.constantFrom(
  'lattice: {bravais: cF, a: 4}\natoms:',
  'atoms:',
  'atoms: |',
  'title: "',
  'atom:',
  'path:',
  'atoms: # all of them',
  'x: &x',
  '{atoms:',
  '-',
  '- atoms:',
  '? atoms\n:',
  'atoms: >\n',
  "title: '",
  'mesh: {a:',
  'lattice: {a: 4, vectors: [[1, 0, 0]]}\natoms: &x',
)
const tail = fc.constantFrom(
  '',
  'path: Γ – X\n',
  '"\n',
  '}\n',
  'points: *x\n',
  'lattice: {bravais: cF, a: 5}\n',
  '---\natoms:\n',
  'atoms: *x\n',
  ' # end\n',
  'path: Γ –',
)

/** Files with long lists of rows that are regular but for some. */
export const spiced: fc.Arbitrary<string> = fc
  .tuple(
    head,
    fc.constantFrom(0, 2, 4),
    fc.array(fc.tuple(row, ending, indent), { minLength: 8, maxLength: 40 }),
    tail,
    fc.constantFrom('\n', '\n', '\n', '\r\n'),
  )
  .map(([start, columns, rows, end, feed]) => {
    const lines = rows.map(
      ([text, after, more]) => `${' '.repeat(Math.max(0, columns + more))}${text}${after}`,
    )
    return [start, ...lines, end].join(feed)
  })
