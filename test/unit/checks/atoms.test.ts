/** Rules of the atoms: each mistake planted is found, and what only looks like one is not. */
import { describe, expect, test } from 'vitest'
import { check, findingsOf } from './harness.ts'

describe('atoms-coincide', () => {
  test('the same place a lattice vector apart', () =>
    check(`
lattice: {bravais: cP, a: 4.12}
atoms:
  - Cs: [0, 0, 0]
  - Cl: [1, 0, 0]
#       ^^^^^^^^^ error atoms-coincide: Cl (atom 2) is at the place of Cs (atom 1), a lattice vector apart.
`))

  test('one atom written twice, another rounded', () =>
    check(`
lattice: {bravais: tP, a: 4.5937, c: 2.9587}
atoms:
  - Ti: [0, 0, 0]
  - Ti: [1/2, 1/2, 1/2]
  - Ti: [0, 0, 0]
#       ^^^^^^^^^ error atoms-coincide: Ti (atom 3) is at the place of Ti (atom 1).
  - O: [0.3053, 0.3053, 0]
  - O: [0.6947, 0.6947, 0]
  - O: [0.1947, 0.8053, 1/2]
  - O: [0.8053, 0.1947, 1/2]
  - O: [0.305, 0.305, 1]
#      ^^^^^^^^^^^^^^^^^ error atoms-coincide: O (atom 8) is at the place of O (atom 4) but for 0.0019 Å, a lattice vector apart.
`))

  test('a centring vector apart, and only some of them', () =>
    check(`
lattice: {bravais: cF, a: 5.6402}
atoms:
  - Na: [0, 0, 0]
  - Na: [1/2, 1/2, 0]
#       ^^^^^^^^^^^^^ error atoms-coincide: Na (atom 2) is at the place of Na (atom 1), a lattice vector apart.
  - Cl: [1/2, 1/2, 1/2]
`))
})

describe('atoms-written-out', () => {
  test('all eight atoms of the cube', () =>
    check(`
lattice: {bravais: cF, a: 6.46}
atoms:
#^^^^ error atoms-written-out: The 8 atoms are 2 with their centring copies, but the lattice, centred F, has the copies already: list one of each.
  - Pb: [0, 0, 0]
  - Pb: [0, 1/2, 1/2]
  - Pb: [1/2, 0, 1/2]
  - Pb: [1/2, 1/2, 0]
  - Te: [1/2, 1/2, 1/2]
  - Te: [1/2, 0, 0]
  - Te: [0, 1/2, 0]
  - Te: [0, 0, 1/2]
`))
})

describe('atoms-too-close', () => {
  test('an atom and its own copy', () =>
    check(`
lattice: {bravais: oP, a: 0.9, b: 5, c: 6}
atoms:
  - C: [0, 0, 0]
#      ^^^^^^^^^ warning atoms-too-close: C (atom 1) is only 0.9 Å from its own copy in a neighbouring cell; a bond between them measures about 1.52 Å.
`))

  test('a neighbour', () =>
    check(`
lattice: {bravais: cP, a: 4.12}
atoms:
  - Cs: [0, 0, 0]
  - Cl: [0.3, 0.2, 0.1]
#       ^^^^^^^^^^^^^^^ warning atoms-too-close: Cl (atom 2) is only 1.542 Å from Cs (atom 1); a bond between them measures about 3.46 Å.
`))

  test('short bonds that exist', () =>
    check(`
lattice: {bravais: oP, a: 6, b: 5, c: 12}
atoms:
  - U: [0, 0, 0]
  - O: [0, 0, 0.1475]
  - O: [0, 0, -0.1475]
  - N: [1/2, 1/2, 0.5]
  - N: [1/2, 1/2, 0.5915]
`))
})

describe('atoms-frame-suspect', () => {
  test('lengths read as fractions', () =>
    check(`
lattice: {bravais: hP, a: 3.25, c: 5.2}
atoms:
#^^^^ warning atoms-frame-suspect: The atoms’ coordinates can hardly be fractions of the conventional cell: some are beyond ±2. Read as Cartesian lengths they give ordinary distances, Zn–O 1.976 Å.
  - Zn: [0, 1.876388, 0]
  - Zn: [1.625, 0.938194, 2.6]
  - O: [0, 1.876388, 1.976]
  - O: [1.625, 0.938194, 4.576]
`))

  test('fractions read as lengths', () =>
    check(`
lattice: {bravais: cF, a: 5.6402}
frames:
  atoms: cartesian
#        ^^^^^^^^^ warning atoms-frame-suspect: The atoms’ coordinates can hardly be Cartesian lengths: all of them are under 1 and would put atoms on top of each other. Read as fractions of the conventional cell they give ordinary distances, Na–Cl 2.82 Å.
atoms:
  - Na: [0, 0, 0]
  - Cl: [1/2, 1/2, 1/2]
`))

  test('unwrapped fractions stay fractions', () =>
    check(`
lattice: {bravais: cP, a: 4.123}
atoms:
  - Cs: [3, 0, 0]
#        ^ info atom-outside-cell: Cs (atom 1) lies outside the cell (3); inside it would be 0.
  - Cl: [1/2, -3/2, 1/2]
#             ^^^^ info atom-outside-cell: Cl (atom 2) lies outside the cell (−1.5); inside it would be 1/2.
`))
})

describe('atom-outside-cell', () => {
  test('one coordinate, then two', () =>
    check(`
lattice: {bravais: oP, a: 5, b: 6, c: 7}
atoms:
  - Cs: [0, 0, 0]
  - Cl: [5/2, 1/2, 1/2]
#        ^^^ info atom-outside-cell: Cl (atom 2) lies outside the cell (2.5); inside it would be 1/2.
  - Cl: [0.5, -0.75, 1.8321]
#       ^^^^^^^^^^^^^^^^^^^^ info atom-outside-cell: Cl (atom 3) lies outside the cell (−0.75, 1.8321); inside it would be 0.25, 0.8321.
`))

  test('never across a sheet, nor slightly outside', () =>
    check(`
lattice: {bravais: hp, a: 3.16, height: 20}
frames: {atoms: conventional}
atoms:
  - Mo: [1/3, 2/3, 0]
  - S: [2/3, 1/3, -0.078]
  - S: [-1/3, 4/3, 0.078]
---
lattice: {bravais: hp, a: 3.16}
atoms:
  - Mo: [1/3, 2/3, 20]
  - S: [2/3, 1/3, 18.44]
  - S: [2/3, 1/3, 21.56]
`))
})

describe('atom-nearly-special', () => {
  test('thirds cut short', () =>
    check(`
lattice: {bravais: hP, a: 3.2094, c: 5.2105}
atoms:
  - Mg: [0.333, 0.667, 1/4]
#       ^^^^^^^^^^^^^^^^^^^ warning atom-nearly-special: Mg (atom 1) misses 1/3 and 2/3 by a rounding, 0.001853 Å, and the crystal is found as Cmcm instead of P6_3/mmc.
  - Mg: [2/3, 0.3333, 3/4]
#             ^^^^^^ warning atom-nearly-special: Mg (atom 2) misses 1/3 by a rounding, 0.000107 Å, and the crystal is found as Cmcm instead of P6_3/mmc.
`))

  test('a rounding that costs no symmetry is left alone', () =>
    check(`
lattice: {bravais: oP, a: 4.1, b: 4.9, c: 6.7}
atoms:
  - Sn: [0.333, 0.12, 0.21]
  - S: [0.78, 0.55, 0.61]
`))

  test('a displaced atom is none', () =>
    check(`
lattice: {bravais: hP, a: 3.2094, c: 5.2105}
atoms:
  - Mg: [0.3403, 0.6737, 1/4]
  - Mg: [2/3, 1/3, 3/4]
`))

  test('in the plane', () =>
    check(`
lattice: {bravais: hp, a: 2.46}
atoms:
  - C: [0.333, 2/3, 0]
#       ^^^^^ warning atom-nearly-special: C (atom 1) misses 1/3 by a rounding, 0.00082 Å, and the crystal is found as the class 2/m instead of the class 6/mmm.
  - C: [2/3, 1/3, 0]
`))
})

describe('cell-not-primitive', () => {
  test('a cube of iron', () =>
    check(`
lattice: {bravais: cP, a: 2.8665}
#                  ^^ warning cell-not-primitive: The atoms repeat: the stated cell holds 2 primitive cells of 1 atom, and its zone is 2 times smaller than the crystal’s. Where like atoms differ (magnetic moments), give them names.
atoms:
  - Fe: [0, 0, 0]
  - Fe: [1/2, 1/2, 1/2]
`))

  test('eight atoms of silicon by vectors', () =>
    check(`
lattice:
  vectors:
    - [5.431, 0, 0]
#   ^^^^^^^^^^^^^^^ warning cell-not-primitive: The atoms repeat: the stated cell holds 4 primitive cells of 2 atoms, and its zone is 4 times smaller than the crystal’s. Where like atoms differ (magnetic moments), give them names.
    - [0, 5.431, 0]
    - [0, 0, 5.431]
atoms:
  - Si: [0, 0, 0]
  - Si: [0, 1/2, 1/2]
  - Si: [1/2, 0, 1/2]
  - Si: [1/2, 1/2, 0]
  - Si: [1/4, 1/4, 1/4]
  - Si: [1/4, 3/4, 3/4]
  - Si: [3/4, 1/4, 3/4]
  - Si: [3/4, 3/4, 1/4]
`))

  test('named atoms tell the copies apart', () =>
    check(`
lattice: {bravais: cP, a: 2.8665}
atoms:
  - Fe: {at: [0, 0, 0], name: up}
  - Fe: {at: [1/2, 1/2, 1/2], name: down}
`))

  test('a doubled sheet', () =>
    check(`
lattice: {bravais: op, a: 2.46, b: 8.52}
#                  ^^ warning cell-not-primitive: The atoms repeat: the stated cell holds 4 primitive cells of 2 atoms, and its zone is 4 times smaller than the crystal’s. Where like atoms differ (magnetic moments), give them names.
atoms:
  - C: [0, 0, 0]
  - C: [0, 1/6, 0]
  - C: [1/2, 1/4, 0]
  - C: [1/2, 5/12, 0]
  - C: [0, 1/2, 0]
  - C: [0, 2/3, 0]
  - C: [1/2, 3/4, 0]
  - C: [1/2, 11/12, 0]
`))
})

describe('density-suspect', () => {
  test('atoms are missing', () =>
    check(`
lattice: {bravais: tP, a: 9.2, c: 5.9}
atoms:
#^^^^ warning density-suspect: There are 166.5 Å³ of the cell to an atom; solids of these elements have 4 to 80 Å³. Atoms are missing, or the cell is too large.
  - Ti: [0, 0, 0]
  - O: [0.21, 0.21, 0]
  - O: [0.79, 0.79, 0]
`))

  test('too many atoms', () =>
    check(`
lattice: {bravais: cP, a: 3.2}
atoms:
#^^^^ warning density-suspect: There are 3.6 Å³ of the cell to an atom; solids of these elements have 4 to 80 Å³. There are too many atoms, or the cell is too small.
  - C: [0, 0, 0]
  - C: [1/2, 0, 0]
  - C: [0, 1/2, 0]
  - C: [0, 0, 1/2]
  - Si: [1/2, 1/2, 0]
  - Si: [1/2, 0, 1/2]
  - Si: [0, 1/2, 1/2]
  - Si: [1/2, 1/2, 1/2]
  - O: [1/4, 1/4, 1/4]
`))
})

describe('space-group-mismatch', () => {
  test('another one than claimed', () =>
    check(`
lattice: {bravais: cF, a: 5.431}
atoms:
  - Si: [0, 0, 0]
  - Si: [1/4, 1/4, 1/4]
space-group: Fm-3m
#            ^^^^^ error space-group-mismatch: Lattice and atoms have the space group Fd-3m (227) within 0.001 Å, not Fm-3m (225).
`))

  test('by number', () =>
    check(`
lattice: {bravais: cF, a: 5.6533}
atoms:
  - Ga: [0, 0, 0]
  - As: [1/4, 1/4, 1/4]
space-group: 227
#            ^^^ error space-group-mismatch: Lattice and atoms have the space group F-43m (216) within 0.001 Å, not Fd-3m (227).
`))

  test('within a looser tolerance it would hold', () =>
    check(`
lattice: {bravais: hP, a: 3.2094, c: 5.2105}
atoms:
  - Mg: [0.3343, 0.6677, 1/4]
  - Mg: [2/3, 1/3, 3/4]
space-group: P6_3/mmc
#            ^^^^^^^^ error space-group-mismatch: Lattice and atoms have the space group P2_1/m (11) within 0.001 Å, not P6_3/mmc (194). Within 0.005 Å it would be: state that as \`tolerance\`, or coordinates with more digits.
`))

  test('settings of one type agree', () =>
    check(`
lattice: {bravais: mP, a: 5.1505, b: 5.2116, c: 5.3173, beta: 99.23}
atoms:
  - Zr: [0.2754, 0.0395, 0.2083]
  - Zr: [-0.2754, 0.5395, 0.2917]
  - Zr: [-0.2754, -0.0395, -0.2083]
  - Zr: [0.2754, 0.4605, 0.7083]
space-group: P2_1/n
`))

  test('named atoms, with and without their names', () =>
    check(`
lattice: {bravais: cP, a: 2.8665}
atoms:
  - Fe: {at: [0, 0, 0], name: up}
  - Fe: {at: [1/2, 1/2, 1/2], name: down}
space-group: Im-3m
---
lattice: {bravais: cP, a: 2.8665}
atoms:
  - Fe: {at: [0, 0, 0], name: up}
  - Fe: {at: [1/2, 1/2, 1/2], name: down}
space-group: Pm-3m
---
lattice: {bravais: cP, a: 2.8665}
atoms:
  - Fe: {at: [0, 0, 0], name: up}
  - Fe: {at: [1/2, 1/2, 1/2], name: down}
space-group: P4/mmm
#            ^^^^^^ error space-group-mismatch: Lattice and atoms have the space group Pm-3m (221) within 0.001 Å, not P4/mmm (123).
`))

  test('without atoms, only what the lattice cannot carry', () =>
    check(`
lattice: {bravais: tI, a: 3.78, c: 9.51}
space-group: I4_1/amd
---
lattice: {bravais: cP, a: 4}
space-group: Pnma
---
lattice: {bravais: tI, a: 3.78, c: 9.51}
space-group: Fm-3m
#            ^^^^^ error space-group-mismatch: Fm-3m (225) needs a lattice of type cF (face-centred cubic); this one is tI (body-centred tetragonal).
---
lattice: {bravais: tP, a: 3.78, c: 9.51}
space-group: P6/mmm
#            ^^^^^^ error space-group-mismatch: P6/mmm (191) needs a lattice of type hP (hexagonal); this one is tP (simple tetragonal).
`))

  test('no such group', () =>
    check(`
lattice: {bravais: cF, a: 5.431}
space-group: Fm-3n
#            ^^^^^ error space-group-mismatch: No space group is called Fm-3n; did you mean Fm-3?
`))
})

describe('vacuum-thin', () => {
  test('a sheet in too low a cell', () =>
    check(`
lattice: {bravais: hp, a: 3.16, height: 12}
#                                       ^^ warning vacuum-thin: A sheet 3.12 Å thick in a cell 12 Å high leaves 8.88 Å of vacuum; it takes 10 Å or more, a height from 13.12 Å.
atoms:
  - Mo: [1/3, 2/3, 1/2]
  - S: [2/3, 1/3, 0.63]
  - S: [2/3, 1/3, 0.37]
`))

  test('in bohr', () =>
    check(`
unit: bohr
lattice: {bravais: hp, a: 4.65, height: 18}
#                                       ^^ warning vacuum-thin: A flat sheet in a cell 18 a₀ high leaves 18 a₀ of vacuum; it takes 18.9 a₀ or more, a height from 18.9 a₀.
atoms:
  - C: [1/3, 2/3, 1/2]
  - C: [2/3, 1/3, 1/2]
`))
})

describe('vacuum-thin, a wrapped sheet', () => {
  test('is told apart from a thick one', () =>
    check(`
lattice: {bravais: hp, a: 3.16, height: 20}
#                                       ^^ warning vacuum-thin: A sheet 18.44 Å thick in a cell 20 Å high leaves 1.56 Å of vacuum; it is empty over 16.88 Å inside: bring the parts that were wrapped around the cell’s end together.
atoms:
  - Mo: [1/3, 2/3, 0]
  - S: [2/3, 1/3, 0.078]
  - S: [2/3, 1/3, 0.922]
`))
})

describe('vacuum-undeclared', () => {
  test('a sheet in a tall cell', () =>
    check(`
lattice: {bravais: hP, a: 2.46, c: 20}
#                  ^^ info vacuum-undeclared: There are 20 Å without atoms across the third primitive vector: a sheet is better stated in two dimensions, with this period as its \`height\`.
atoms:
  - C: [1/3, 2/3, 1/2]
  - C: [2/3, 1/3, 1/2]
`))

  test('along the first vector', () =>
    check(`
lattice:
  vectors: [[18, 0, 0], [0, 2.46, 0], [0, 1.23, 2.1304224933]]
#          ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^ info vacuum-undeclared: There are 18 Å without atoms across the first primitive vector: a sheet is better stated in two dimensions, with this period as its \`height\`.
atoms:
  - C: [1/2, 1/3, 1/3]
  - C: [1/2, 2/3, 2/3]
`))

  test('a molecule in a box is no sheet', () =>
    check(`
lattice: {bravais: cP, a: 12}
atoms:
  - N: [0.5, 0.5, 0.4545]
  - N: [0.5, 0.5, 0.5455]
`))

  test('layers of a crystal', () =>
    check(`
lattice: {bravais: hP, a: 2.4614, c: 6.7014}
atoms:
  - C: [0, 0, 1/4]
  - C: [0, 0, 3/4]
  - C: [1/3, 2/3, 1/4]
  - C: [2/3, 1/3, 3/4]
`))
})

test('a thousand atoms at one place are a hundred findings, the last of which says so', () => {
  const atoms = Array.from({ length: 1000 }, () => '  - Cs: [1/4, 0.1, 0.2]\n').join('')
  const findings = findingsOf(`lattice: {bravais: oP, a: 4, b: 5, c: 6}\natoms:\n${atoms}`)
  expect(new Set(findings.map(({ rule }) => rule))).toEqual(new Set(['atoms-coincide']))
  expect(findings).toHaveLength(100)
  expect(findings.at(-1)!.message).toBe(
    'Cs (atom 101) is at the place of Cs (atom 1). There are 899 more like it.',
  )
})

describe('fractions of the primitive cell under a centred lattice', () => {
  const RHOMBOHEDRAL = `lattice: {bravais: hR, a: 10.476, alpha: 24.166}
atoms:
  - Te: [0, 0, 0]
  - Te: [0.2095, 0.2095, 0.2095]
  - Te: [-0.2095, -0.2095, -0.2095]
  - Bi: [0.4001, 0.4001, 0.4001]
  - Bi: [-0.4001, -0.4001, -0.4001]
`
  test('are told by the symmetry that they lose', () => {
    const found = findingsOf(RHOMBOHEDRAL).filter(({ rule }) => rule === 'atoms-frame-suspect')
    expect(found.map(({ facts }) => facts)).toEqual([{ frame: 'primitive' }])
  })

  test('are in order where the frame is stated', () =>
    expect(
      findingsOf(`frames: {atoms: primitive}\n${RHOMBOHEDRAL}`).filter(({ severity }) => severity !== 'info'),
    ).toEqual([]))
})

describe('compounds of the heavy elements', () => {
  // Fluorite structure: actinide at 000, oxygen at ±(¼¼¼); handbook lattice parameters (from memory).
  const fluorite = (metal: string, a: number) =>
    `lattice: {bravais: cF, a: ${a}}\natoms:\n  - ${metal}: [0, 0, 0]\n  - O: [1/4, 1/4, 1/4]\n  - O: [3/4, 3/4, 3/4]\n`
  test.each([
    ['U', 5.47],
    ['Th', 5.6],
    ['Pu', 5.4],
    // Without a radius of its own: what stands between the oxygen atoms is not known to be small.
    ['Cf', 5.31],
  ])('%sO₂ is in its own unit', (metal, a) => expect(findingsOf(fluorite(metal, a))).toEqual([]))
})
