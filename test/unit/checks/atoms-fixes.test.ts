/** Fixes of the atom rules, from text to text. */
import { describe, expect, test } from 'vitest'
import { checkFix, fixesOf } from './harness.ts'

test('atoms-coincide: the second is removed, with its line', () =>
  checkFix(
    `
lattice: {bravais: cP, a: 4.12}
atoms:
  - Cs: [0, 0, 0] # corner
  - Cl: $0[1, 0, 0] # a slip
  - Cl: [1/2, 1/2, 1/2] # centre
`,
    `
lattice: {bravais: cP, a: 4.12}
atoms:
  - Cs: [0, 0, 0] # corner
  - Cl: [1/2, 1/2, 1/2] # centre
`,
    { safe: false },
  ))

test('atoms-written-out: one of each is kept', () =>
  checkFix(
    `
lattice: {bravais: cF, a: 6.46}
$0atoms:
  - Pb: [0, 0, 0]
  - Pb: [0, 1/2, 1/2]
  - Pb: [1/2, 0, 1/2]
  - Pb: [1/2, 1/2, 0]
  - Te: [1/2, 1/2, 1/2] # the other kind
  - Te: [1/2, 0, 0]
  - Te: [0, 1/2, 0]
  - Te: [0, 0, 1/2]
`,
    `
lattice: {bravais: cF, a: 6.46}
atoms:
  - Pb: [0, 0, 0]
  - Te: [1/2, 1/2, 1/2] # the other kind
`,
    { safe: true },
  ))

describe('atoms-frame-suspect', () => {
  test('the frame is stated', () =>
    checkFix(
      `
lattice: {bravais: hP, a: 3.25, c: 5.2}
$0atoms:
  - Zn: [0, 1.876388, 0]
  - Zn: [1.625, 0.938194, 2.6]
  - O: [0, 1.876388, 1.976]
  - O: [1.625, 0.938194, 4.576]
`,
      `
lattice: {bravais: hP, a: 3.25, c: 5.2}
atoms:
  - Zn: [0, 1.876388, 0]
  - Zn: [1.625, 0.938194, 2.6]
  - O: [0, 1.876388, 1.976]
  - O: [1.625, 0.938194, 4.576]
frames: {atoms: cartesian}
`,
      { safe: false },
    ))
  test('the one that stands there is replaced', () =>
    checkFix(
      `
lattice: {bravais: cF, a: 5.6402}
frames: {atoms: $0cartesian}
atoms:
  - Na: [0, 0, 0]
  - Cl: [1/2, 1/2, 1/2]
`,
      `
lattice: {bravais: cF, a: 5.6402}
frames: {atoms: conventional}
atoms:
  - Na: [0, 0, 0]
  - Cl: [1/2, 1/2, 1/2]
`,
      { safe: false },
    ))
})

test('atom-outside-cell: fractions stay exact', () =>
  checkFix(
    `
lattice: {bravais: oP, a: 5, b: 6, c: 7}
atoms:
  - Cs: [0, 0, 0]
  - Cl: $0[-5/3, 1/4, 1.8321]
`,
    `
lattice: {bravais: oP, a: 5, b: 6, c: 7}
atoms:
  - Cs: [0, 0, 0]
  - Cl: [1/3, 1/4, 0.8321]
`,
    { safe: true },
  ))

test('atom-nearly-special: the exact fraction', () =>
  checkFix(
    `
lattice: {bravais: hP, a: 3.2094, c: 5.2105}
atoms:
  - Mg: $0[0.333, 0.667, 1/4]
  - Mg: [2/3, 1/3, 0.75]
`,
    `
lattice: {bravais: hP, a: 3.2094, c: 5.2105}
atoms:
  - Mg: [1/3, 2/3, 1/4]
  - Mg: [2/3, 1/3, 0.75]
`,
    { safe: true },
  ))

describe('cell-not-primitive', () => {
  test('the type with its centring, atoms and points carried over', () =>
    checkFix(
      `
lattice: {bravais: $0cP, a: 5.431}
atoms:
  - Si: [0, 0, 0]
  - Si: [0, 1/2, 1/2]
  - Si: [1/2, 0, 1/2]
  - Si: [1/2, 1/2, 0]
  - Si: [1/4, 1/4, 1/4] # the other sublattice
  - Si: [1/4, 3/4, 3/4]
  - Si: [3/4, 1/4, 3/4]
  - Si: [3/4, 3/4, 1/4]
points:
  Q: [0.85, 0, 0]
path: Γ – Q
mesh: {divisions: [4, 4, 4]}
supercell: [2, 2, 2]
`,
      `
lattice: {bravais: cF, a: 5.431}
atoms:
  - Si: [0, 0, 0]
  - Si: [1/4, 1/4, 1/4] # the other sublattice
points:
  Q: [0, 0.425, 0.425]
path: Γ – Q
mesh: {divisions: [7, 7, 7]}
supercell: [[-2, 2, 2], [2, -2, 2], [2, 2, -2]]
`,
      { rule: 'cell-not-primitive', safe: false },
    ))

  test('vectors get their centring', () =>
    checkFix(
      `
lattice:
  vectors:
    - $0[2.8665, 0, 0]
    - [0, 2.8665, 0]
    - [0, 0, 2.8665]
atoms:
  - Fe: [0, 0, 0]
  - Fe: [1/2, 1/2, 1/2]
`,
      `
lattice:
  vectors:
    - [2.8665, 0, 0]
    - [0, 2.8665, 0]
    - [0, 0, 2.8665]
  centring: I
atoms:
  - Fe: [0, 0, 0]
`,
      { safe: false },
    ))

  test('a doubled cell by vectors', () =>
    checkFix(
      `
lattice:
  vectors: $0[[4.2, 0, 0], [0, 5.1, 0], [0, 0, 12.6]]
atoms:
  - Sn: [0.1, 1/4, 0.1]
  - S: [0.6, 3/4, 0.3]
  - Sn: [0.1, 1/4, 0.6]
  - S: [0.6, 3/4, 0.8]
mesh: {divisions: [6, 5, 2]}
`,
      `
lattice:
  vectors: [[4.2, 0, 0], [0, 5.1, 0], [0, 0, 6.3]]
atoms:
  - Sn: [0.1, 1/4, 0.2]
  - S: [0.6, 3/4, 0.6]
mesh: {divisions: [6, 5, 4]}
`,
      { safe: false },
    ))

  test('a label that the primitive lattice has not becomes a point', () =>
    checkFix(
      `
lattice: {bravais: $0cP, a: 2.8665}
atoms:
  - Fe: [0, 0, 0]
  - Fe: [1/2, 1/2, 1/2]
path: Γ – M – R
`,
      `
lattice: {bravais: cI, a: 2.8665}
atoms:
  - Fe: [0, 0, 0]
points: {M: [0, 0, 1/2], R: [1/4, 1/4, 1/4]}
path: Γ – M – R
`,
      { rule: 'cell-not-primitive', safe: false },
    ))
})

test('space-group-mismatch: the one found, as a symbol or a number', () => {
  const silicon = (group: string) =>
    `lattice: {bravais: cF, a: 5.431}\natoms:\n  - Si: [0, 0, 0]\n  - Si: [1/4, 1/4, 1/4]\nspace-group: ${group}\n`
  checkFix(silicon('$0Fm-3m'), silicon('Fd-3m'), { safe: false })
  checkFix(silicon('$0225'), silicon('227'), { safe: false })
})

describe('vacuum-undeclared', () => {
  test('a sheet with its height', () =>
    checkFix(
      `
lattice:
  bravais: $0hP
  a: 2.46
  c: 20 # with vacuum
atoms:
  - C: [1/3, 2/3, 1/2]
  - C: [2/3, 1/3, 1/2]
path: Γ – M – K – Γ
mesh: {divisions: [12, 12, 3]}
`,
      `
lattice:
  bravais: hp
  a: 2.46
  height: 20 # with vacuum
atoms:
  - C: [1/3, 2/3, 1/2]
  - C: [2/3, 1/3, 1/2]
path: Γ – M – K – Γ
mesh: {divisions: [12, 12, 1]}
`,
      { rule: 'vacuum-undeclared', safe: false },
    ))

  test('no fix where a point or a label stands off the plane', () => {
    const sheet =
      'lattice: {bravais: hP, a: 2.46, c: 20}\natoms:\n  - C: [1/3, 2/3, 1/2]\n  - C: [2/3, 1/3, 1/2]\n'
    expect(fixesOf(`${sheet}path: Γ – A\n`, 'vacuum-undeclared')).toEqual([])
    expect(fixesOf(`${sheet}points: {Q: [0, 0, 1/4]}\n`, 'vacuum-undeclared')).toEqual([])
    expect(fixesOf(sheet, 'vacuum-undeclared')).toHaveLength(1)
  })
})
