/** One mistake, one finding: rules that would say the same of one cause, or judge by a value that could not be read. */
import { describe, expect, test } from 'vitest'
import { check, checkFix, findingsOf, fixesOf } from './harness.ts'

const rulesOf = (text: string) => findingsOf(text).map(({ rule }) => rule)

describe('vectors in units of a', () => {
  test('are recognised by the distances, and nothing else is said', () =>
    check(`
lattice:
  a: 3.25
  vectors: [[1, 0, 0], [-1/2, sqrt(3)/2, 0], [0, 0, 1.6]]
#          ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^ warning lattice-unit-suspect: Zn (atom 2) and O (atom 4) are 0.608 Å apart, 0.32 times the sum of their covalent radii: the vectors seem to be in units of \`a\`, which nothing uses. Times 3.25 Å it is an ordinary 1.05 times.
atoms:
  - Zn: [1/3, 2/3, 0]
  - Zn: [2/3, 1/3, 1/2]
  - O: [1/3, 2/3, 0.38]
  - O: [2/3, 1/3, 0.88]
path: Γ – M – K – Γ
mesh: {divisions: [9, 9, 6]}
`))
  test('are multiplied by it', () =>
    checkFix(
      'lattice:\n  a: 3.25\n  vectors: $0[[1, 0, 0], [-1/2, sqrt(3)/2, 0], [0, 0, 1.6]]\natoms:\n  - Zn: [1/3, 2/3, 0]\n  - Zn: [2/3, 1/3, 1/2]\n  - O: [1/3, 2/3, 0.38]\n  - O: [2/3, 1/3, 0.88]\n',
      'lattice:\n  a: 3.25\n  vectors: [[a, 0, 0], [-a/2, sqrt(3)/2*a, 0], [0, 0, 1.6*a]]\natoms:\n  - Zn: [1/3, 2/3, 0]\n  - Zn: [2/3, 1/3, 1/2]\n  - O: [1/3, 2/3, 0.38]\n  - O: [2/3, 1/3, 0.88]\n',
      { safe: false },
    ))
  test('not where a number uses the parameter', () => {
    const text =
      'lattice:\n  a: 5.43\n  vectors: [[0, a/2, a/2], [a/2, 0, a/2], [a/2, a/2, 0]]\natoms:\n  - Si: [0, 0, 0]\n  - Si: [1/4, 1/4, 1/4]\n'
    expect(rulesOf(text)).toEqual([])
  })
})

describe('rules say nothing by a default that stands in for what could not be read', () => {
  test('a unit', () =>
    check(`
unit: angstrm
#     ^^^^^^^ error unit-unknown: \`angstrm\` cannot be read as \`unit\`; did you mean \`angstrom\`?
lattice: {bravais: cF, a: 10.26}
atoms:
  - Si: [0, 0, 0]
  - Si: [1/4, 1/4, 1/4]
`))
  test('a label book', () =>
    check(`
lattice: {bravais: tI, a: 3.8, c: 9.5}
labels: hinuma
#       ^^^^^^ error value-type: \`hinuma\` cannot be read as \`labels\`: it is one of \`setyawan-curtarolo-2010\`, \`hinuma-2017\`, \`bradley-cracknell-1972\`, \`none\`.
path: Γ – S0 – X – G
`))
  test('a frame', () =>
    check(`
lattice: {bravais: cF, a: 5.43}
frames: {points: conv}
#                ^^^^ error value-type: \`conv\` cannot be read as \`points\`: it is one of \`primitive\`, \`conventional\`, \`cartesian\`, \`2pi/a\`.
points:
  X: [0, 1, 0]
  W: [1/2, 1, 0]
path: Γ – X – W
`))
  test('what does not rest on it is said all the same', () =>
    expect(
      rulesOf(
        'unit: angstrm\nlattice: {bravais: cF, a: 5}\nmesh: {divisions: [4, 4, 4], shift: [1/2, 0, 0]}\n',
      ),
    ).toEqual(['unit-unknown', 'mesh-breaks-symmetry']))
})

// Anatase by its primitive fractions: read as conventional ones Ti and O are 0.208·√2·3.8 = 1.12 Å apart.
test('primitive fractions under a centred lattice give one finding', () =>
  check(`
lattice: {bravais: tI, a: 3.8, c: 9.5}
atoms:
#^^^^ warning atoms-frame-suspect: Read as fractions of the conventional cell, as no frame is stated, the atoms have 8 symmetry operations; read as fractions of the primitive cell they have 16. The coordinates seem to be primitive ones.
  - Ti: [0, 0, 0]
  - Ti: [3/4, 1/4, 1/2]
  - O: [0.208, 0.208, 0]
  - O: [0.792, 0.792, 0]
  - O: [0.958, 0.458, 1/2]
  - O: [0.542, 0.042, 1/2]
`))

test('the cube’s edges with points of the centred lattice: the cell is stated, the points stay', () => {
  const points =
    'points:\n  X: [1/2, 0, 1/2]\n  W: [1/2, 1/4, 3/4]\n  L: [1/2, 1/2, 1/2]\npath: Γ – X – W – L – Γ\n'
  const text = `lattice:\n  vectors: [[5.43, 0, 0], [0, 5.43, 0], [0, 0, 5.43]]\natoms:\n  - Si: [0, 0, 0]\n  - Si: [0, 1/2, 1/2]\n  - Si: [1/2, 0, 1/2]\n  - Si: [1/2, 1/2, 0]\n  - Si: [1/4, 1/4, 1/4]\n  - Si: [1/4, 3/4, 3/4]\n  - Si: [3/4, 1/4, 3/4]\n  - Si: [3/4, 3/4, 1/4]\n${points}`
  expect(rulesOf(text)).toEqual(['cell-not-primitive'])
  checkFix(
    text.replace('vectors: ', 'vectors: $0'),
    `lattice:\n  vectors: [[5.43, 0, 0], [0, 5.43, 0], [0, 0, 5.43]]\n  centring: F\natoms:\n  - Si: [0, 0, 0]\n  - Si: [1/4, 1/4, 1/4]\n${points}`,
  )
})

describe('claims of a space group', () => {
  const silicon = (claim: string, x = '1/4') =>
    `lattice: {bravais: cF, a: 5.43}\natoms:\n  - Si: [0, 0, 0]\n  - Si: [${x}, 1/4, 1/4]\nspace-group: ${claim}\n`
  test.each(['Fd-3m (227)', 'F d -3 m (No. 227)', 'Fd-3m(227)'])('%s', claim =>
    expect(rulesOf(silicon(claim))).toEqual([]),
  )
  test('symbol and number must agree', () => {
    checkFix(silicon('$0Fd-3m (225)'), silicon('Fd-3m (227)'))
    expect(findingsOf(silicon('Fd-3m (225)')).map(({ message }) => message)).toEqual([
      'Symbol and number are not of one space group: Fd-3m is number 227, and 225 is Fm-3m.',
    ])
  })
  test('a looser tolerance, the group found, or no claim', () => {
    const text = silicon('Fd-3m', '0.252')
    expect(fixesOf(text, 'space-group-mismatch').map(({ title }) => title)).toEqual([
      'State `tolerance: 0.02`',
      'State the one found, Imma',
      'Claim none',
    ])
    checkFix(text.replace('Fd-3m', '$0Fd-3m'), text.replace('lattice:', 'tolerance: 0.02\nlattice:'), {
      rule: 'space-group-mismatch',
    })
    checkFix(text.replace('Fd-3m', '$0Fd-3m'), text.replace('space-group: Fd-3m\n', ''), {
      rule: 'space-group-mismatch',
      title: 'Claim none',
    })
  })
})
