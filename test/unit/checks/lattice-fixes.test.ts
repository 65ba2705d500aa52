/** Fixes of the lattice rules, from text to text. */
import { describe, expect, test } from 'vitest'
import { checkFix, fixesOf } from './harness.ts'

describe('lattice-left-handed', () => {
  test('two vectors are exchanged with all that refers to them, comments and expressions stay', () =>
    checkFix(
      `
lattice:
  a: 4.2
  vectors: # as in the figure
    - $0[0, a, 0] # along the chains
    - [5.1, 0, 0]
    - [0, 0, 6.3]
atoms:
  - Sn: [0.1, 1/4, 0.2] # on the mirror
  - S: [0.6, 3/4, 0.45]
points:
  Q: [1/2, 0.1, 0]
path: Γ – Q
mesh:
  divisions: [6, 5, 4]
  shift: [0, 1/2, 0]
supercell: [1, 2, 3]
`,
      `
lattice:
  a: 4.2
  vectors: # as in the figure
    - [5.1, 0, 0] # along the chains
    - [0, a, 0]
    - [0, 0, 6.3]
atoms:
  - Sn: [1/4, 0.1, 0.2] # on the mirror
  - S: [3/4, 0.6, 0.45]
points:
  Q: [0.1, 1/2, 0]
path: Γ – Q
mesh:
  divisions: [5, 6, 4]
  shift: [1/2, 0, 0]
supercell: [2, 1, 3]
`,
      { rule: 'lattice-left-handed', safe: true },
    ))

  test('the axes of an R-centred cell are turned over: exchanged, they would be reverse', () =>
    checkFix(
      `
lattice:
  centring: R
  a: 4.38
  vectors: $0[[a, 0, 0], [-a/2, sqrt(3)/2*a, 0], [0, 0, -30.5]]
atoms:
  - Te: [0, 0, 0]
  - Bi: [0, 0, 0.4]
  - Bi: [0, 0, -0.4]
  - Te: [2/3, 1/3, 0.12]
  - Te: [1/3, 2/3, -0.12]
`,
      `
lattice:
  centring: R
  a: 4.38
  vectors: [[-(a), 0, 0], [-(-a/2), -(sqrt(3)/2*a), 0], [0, 0, 30.5]]
atoms:
  - Te: [0, 0, 0]
  - Bi: [0, 0, 0.6]
  - Bi: [0, 0, 0.4]
  - Te: [1/3, 2/3, 0.88]
  - Te: [2/3, 1/3, 0.12]
`,
      { rule: 'lattice-left-handed' },
    ))
})

describe('lattice-type-mismatch', () => {
  test('the centring that was forgotten', () =>
    checkFix(
      `
lattice:
  bravais: $0cF
  vectors:
    - [6.46, 0, 0]
    - [0, 6.46, 0]
    - [0, 0, 6.46]
`,
      `
lattice:
  bravais: cF
  vectors:
    - [6.46, 0, 0]
    - [0, 6.46, 0]
    - [0, 0, 6.46]
  centring: F
`,
      { title: 'State `centring: F`', safe: false },
    ))

  test('the type that the vectors have', () =>
    checkFix(
      'lattice: {bravais: $0tP, vectors: [[4, 0, 0], [0, 4.04, 0], [0, 0, 6]]}\n',
      'lattice: {bravais: oP, vectors: [[4, 0, 0], [0, 4.04, 0], [0, 0, 6]]}\n',
      { safe: false },
    ))

  test('the number that the type demands, or the type that fits the numbers', () => {
    checkFix(
      'lattice: {bravais: oP, a: 4, b: 5, c: 6, beta: $099}\n',
      'lattice: {bravais: oP, a: 4, b: 5, c: 6, beta: 90}\n',
      { title: 'Replace by 90', safe: false },
    )
    checkFix(
      'lattice: {bravais: oP, a: 4, b: 5, c: 6, beta: $099}\n',
      'lattice: {bravais: mP, a: 4, b: 5, c: 6, beta: 99}\n',
      { title: 'State the type mP (simple monoclinic)', safe: false },
    )
  })
})

describe('lattice-hidden-symmetry', () => {
  test('the same axes', () =>
    checkFix('lattice: {bravais: $0oP, a: 4, b: 4, c: 6}\n', 'lattice: {bravais: tP, a: 4, c: 6}\n', {
      safe: true,
    }))

  test('the axes in turn, with what refers to them', () =>
    checkFix(
      `
lattice:
  bravais: $0oP
  a: 6 # the four-fold axis
  b: 4
  c: 4
atoms:
  - Ti: [0, 1/2, 0.1]
  - O: [0.25, 0, 1/3]
`,
      `
lattice:
  bravais: tP
  a: 4 # the four-fold axis
  c: 6
atoms:
  - Ti: [1/2, 0.1, 0]
  - O: [0, 1/3, 0.25]
`,
      { rule: 'lattice-hidden-symmetry', safe: false },
    ))

  test('other axes: positions and points follow', () =>
    checkFix(
      `
lattice: {bravais: $0tI, a: 4, c: 4*sqrt(2)}
atoms:
  - Si: [0, 0, 0]
  - Si: [0, 1/2, 1/4]
`,
      `
lattice: {bravais: cF, a: 4*sqrt(2)}
atoms:
  - Si: [0, 0, 0]
  - Si: [1/4, 1/4, 3/4]
`,
      { safe: false },
    ))

  test('rhombohedral axes of 60° and 90°, an angle of 90°, the plane', () => {
    checkFix('lattice: {bravais: $0hR, a: 4, alpha: 60}\n', 'lattice: {bravais: cF, a: 5.6568542495}\n')
    checkFix('lattice: {bravais: $0hR, a: 4, alpha: 90}\n', 'lattice: {bravais: cP, a: 4}\n')
    checkFix(
      'lattice: {bravais: $0mP, a: 4, b: 5, c: 6, beta: 90}\n',
      'lattice: {bravais: oP, a: 4, b: 5, c: 6}\n',
    )
    checkFix('lattice: {bravais: $0oc, a: 4, b: 4*sqrt(3)}\n', 'lattice: {bravais: hp, a: 4}\n')
  })

  test('beside vectors the type is a claim', () =>
    checkFix(
      'lattice: {bravais: $0oP, vectors: [[4, 0, 0], [0, 4, 0], [0, 0, 6]]}\n',
      'lattice: {bravais: tP, vectors: [[4, 0, 0], [0, 4, 0], [0, 0, 6]]}\n',
      { safe: true },
    ))
})

test('lattice-nearly-symmetric: the numbers of an exact lattice, the others stay', () =>
  checkFix(
    `
lattice:
  vectors:
    - [3.21, 0, 0]
    - [-1.605, $02.78, 0] # from the paper
    - [0, 0, 5.21]
`,
    `
lattice:
  vectors:
    - [3.21, 0, 0]
    - [-1.605, 2.7799415461, 0] # from the paper
    - [0, 0, 5.21]
`,
    { safe: false },
  ))

describe('lattice-not-reduced', () => {
  test('the shortest basis, with what refers to it', () =>
    checkFix(
      `
lattice:
  vectors: $0[[4, 0, 0], [8, 5, 0], [0, 0, 6]]
atoms:
  - Sn: [0.1, 0.2, 0.3]
  - S: [1/3, 1/4, 0]
points:
  Q: [0.1, 0.2, 1/3]
mesh:
  divisions: [4, 4, 3]
  shift: [1/2, 0, 0]
supercell: [[2, 0, 0], [0, 2, 0], [0, 0, 1]]
`,
      `
lattice:
  vectors: [[4, 0, 0], [0, 5, 0], [0, 0, 6]]
atoms:
  - Sn: [0.5, 0.2, 0.3]
  - S: [5/6, 1/4, 0]
points:
  Q: [0.1, 0, 1/3]
mesh:
  divisions: [4, 4, 3]
  shift: [1/2, 0, 0]
supercell: [[2, 0, 0], [4, 2, 0], [0, 0, 1]]
`,
      { safe: false },
    ))

  test('a mesh that the other basis cannot have keeps its steps', () =>
    checkFix(
      `
lattice:
  vectors: $0[[4, 0, 0], [8, 5, 0], [0, 0, 6]]
mesh: {divisions: [5, 4, 3]}
`,
      `
lattice:
  vectors: [[4, 0, 0], [0, 5, 0], [0, 0, 6]]
mesh: {divisions: [3, 4, 3]}
`,
      { safe: false },
    ))
})

test('lattice-reverse-setting: x and y change their sign', () =>
  checkFix(
    `
lattice: {bravais: $0hR, a: 4.38, c: 30.5}
atoms:
  - Te: [0, 0, 0]
  - Te: [0, 0, 0.21]
  - Te: [1/3, 2/3, 1/3 - 0.21]
  - Bi: [0, 0, 0.4]
  - Bi: [1/3, 2/3, 1/3 - 0.4]
`,
    `
lattice: {bravais: hR, a: 4.38, c: 30.5}
atoms:
  - Te: [0, 0, 0]
  - Te: [0, 0, 0.21]
  - Te: [2/3, 1/3, 1/3 - 0.21]
  - Bi: [0, 0, 0.4]
  - Bi: [2/3, 1/3, 1/3 - 0.4]
`,
    { safe: false },
  ))

describe('lattice-unit-suspect', () => {
  test('the other unit is stated', () =>
    checkFix(
      `
lattice: {bravais: cF, a: $010.263}
atoms:
  - Si: [0, 0, 0]
  - Si: [1/4, 1/4, 1/4]
`,
      `
unit: bohr
lattice: {bravais: cF, a: 10.263}
atoms:
  - Si: [0, 0, 0]
  - Si: [1/4, 1/4, 1/4]
`,
      { safe: false },
    ))
  test('the one that stands there is replaced', () =>
    checkFix(
      'unit: $0bohr\nlattice: {bravais: cF, a: 5.6402}\natoms:\n  - Na: [0, 0, 0]\n  - Cl: [1/2, 1/2, 1/2]\n',
      'unit: angstrom\nlattice: {bravais: cF, a: 5.6402}\natoms:\n  - Na: [0, 0, 0]\n  - Cl: [1/2, 1/2, 1/2]\n',
    ))
})

test('no fix edits what stands behind an alias', () =>
  expect(
    fixesOf(
      `
lattice:
  vectors: [[0, 4.2, 0], [5.1, 0, 0], [0, 0, 6.3]]
atoms:
  - Sn: &place [0.1, 1/4, 0.2]
  - S: {at: *place, name: twin}
`,
      'lattice-left-handed',
    ),
  ).toEqual([]))
