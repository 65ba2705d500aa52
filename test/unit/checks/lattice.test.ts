/** Rules of the lattice: each mistake planted is found, and what only looks like one is not. */
import { describe, test } from 'vitest'
import { check } from './harness.ts'

describe('lattice-flat', () => {
  test('three vectors in one plane', () =>
    check(`
lattice:
  vectors: [[1, 0, 0], [0, 1, 0], [1, 1, 0]]
#          ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^ error lattice-flat: The three vectors lie in one plane: they span no volume. Each must lead out of the plane of the other two.
`))

  test('a vector of zeros', () =>
    check(`
lattice:
  vectors:
    - [4, 0, 0]
    - [0, 0, 0]
#     ^^^^^^^^^ error lattice-flat: Vector 2 is zero: the vectors span no volume.
    - [0, 0, 5]
`))

  test('two parallel vectors, the second is marked', () =>
    check(`
lattice:
  vectors: [[1, 2, 0], [0, 1, 1], [-2, -4, 0]]
#                                 ^^^^^^^^^^^ error lattice-flat: Vector 3 is parallel to vector 1: the vectors span no volume.
`))

  test('two vectors of a plane', () =>
    check(`
lattice:
  vectors: [[1, 2], [2, 4]]
#                   ^^^^^^ error lattice-flat: Vector 2 is parallel to vector 1: the vectors span no area.
`))
})

describe('lattice-angles', () => {
  test('one is larger than the other two together', () =>
    check(`
lattice: {bravais: aP, a: 4, b: 5, c: 6, alpha: 40, beta: 50, gamma: 120}
#                                                                    ^^^ error lattice-angles: γ = 120° must be smaller than α + β = 90° for a cell to exist (it is 30° too much).
`))

  test('the sum', () =>
    check(`
lattice: {bravais: aP, a: 4, b: 5, c: 6, alpha: 120, beta: 125, gamma: 118}
#                                                          ^^^ error lattice-angles: α + β + γ = 363°: the angles of a cell add up to under 360° (it is 3° too much).
`))

  test('out of range', () =>
    check(`
lattice: {bravais: mP, a: 4, b: 5, c: 6, beta: 190}
#                                              ^^^ error lattice-angles: β = 190°: an angle of a cell lies between 0° and 180°.
`))

  test('rhombohedral axes', () =>
    check(`
lattice: {bravais: hR, a: 4, alpha: 120}
#                                   ^^^ error lattice-angles: α = 120°: the three equal angles of rhombohedral axes must be under 120°.
`))

  test('a flat cell', () =>
    check(`
lattice: {bravais: aP, a: 4, b: 5, c: 6, alpha: 40, beta: 50, gamma: 90}
#                                                                    ^^ error lattice-angles: γ = 90° must be smaller than α + β = 90° for a cell to exist (the cell is flat).
`))
})

describe('lattice-left-handed', () => {
  test('the vectors', () =>
    check(`
lattice:
  vectors: [[0, 4.2, 0], [5.1, 0, 0], [0, 0, 6.3]]
#          ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^ warning lattice-left-handed: The vectors are left-handed, (a × b)·c = −134.946 Å³: exchange two of them, with all that refers to them.
`))

  test('a plane lattice has no hand', () =>
    check(`
lattice:
  vectors: [[0, 4.2], [5.1, 0]]
`))
})

describe('lattice-type-mismatch', () => {
  test('an angle that an orthorhombic lattice does not have', () =>
    check(`
lattice: {bravais: oP, a: 4, b: 5, c: 6, beta: 99}
#                                              ^^ error lattice-type-mismatch: β = 99°, but an orthorhombic lattice has right angles only; that would be β = 90°.
`))

  test('lengths that a cubic lattice ties', () =>
    check(`
lattice: {bravais: cP, a: 4, c: 4.1}
#                               ^^^ error lattice-type-mismatch: c = 4.1 Å, but a cubic lattice has a = b = c; that would be c = 4 Å.
`))

  test('stating more than needed is allowed', () =>
    check(`
lattice: {bravais: cP, a: 4, b: 4, c: 4, alpha: 90, beta: 90, gamma: 90}
`))

  test('a centring along the unique axis', () =>
    check(`
lattice: {bravais: mB, a: 4, b: 5, c: 6, beta: 99}
#                                              ^^ error lattice-type-mismatch: β = 99°, but B centring lies along the unique axis b, which is no lattice type of its own; that would be β = 90°.
`))

  test('the edges of a face-centred cube as if primitive', () =>
    check(`
lattice:
  bravais: cF
#          ^^ error lattice-type-mismatch: The vectors span a lattice of type cP (simple cubic), not cF (face-centred cubic): its cell is 6.46 × 6.46 × 6.46 Å with angles of 90°, 90°, 90°. With \`centring: F\` they would be: the rows are the edges of the conventional cell.
  vectors: [[6.46, 0, 0], [0, 6.46, 0], [0, 0, 6.46]]
`))

  test('vectors that miss the type by a little', () =>
    check(`
lattice:
  bravais: tP
#          ^^ error lattice-type-mismatch: The vectors span a lattice of type oP (simple orthorhombic), not tP (simple tetragonal): its cell is 4 × 4.04 × 6 Å with angles of 90°, 90°, 90°. They miss it by 0.04 Å.
  vectors: [[4, 0, 0], [0, 4.04, 0], [0, 0, 6]]
`))

  test('vectors of quite another type', () =>
    check(`
lattice:
  bravais: hP
#          ^^ error lattice-type-mismatch: The vectors span a lattice of type oP (simple orthorhombic), not hP (hexagonal): its cell is 4 × 5 × 6 Å with angles of 90°, 90°, 90°.
  vectors: [[4, 0, 0], [0, 5, 0], [0, 0, 6]]
`))

  test('a plane type beside three vectors', () =>
    check(`
lattice:
  bravais: hp
#          ^^ error lattice-type-mismatch: hp (plane hexagonal) is a type in 2 dimensions, but there are 3 vectors.
  vectors: [[4, 0, 0], [0, 5, 0], [0, 0, 6]]
`))

  test('a centring that a plane lattice cannot have', () =>
    check(`
lattice:
  centring: F
#           ^ error lattice-type-mismatch: A plane lattice is never centred F: P and C are possible.
  vectors: [[4, 0], [0, 5]]
`))
})

describe('lattice-hidden-symmetry', () => {
  test('a square base', () =>
    check(`
lattice: {bravais: oP, a: 4, b: 4, c: 6}
#                  ^^ info lattice-hidden-symmetry: The lattice is of type tP (simple tetragonal), more symmetric than the stated oP (simple orthorhombic).
`))

  test('a body-centred cell with c = √2 a is face-centred cubic', () =>
    check(`
lattice: {bravais: tI, a: 4, c: 4*sqrt(2)}
#                  ^^ info lattice-hidden-symmetry: The lattice is of type cF (face-centred cubic), more symmetric than the stated tI (body-centred tetragonal).
`))

  test('a rhombohedral cell of 60°', () =>
    check(`
lattice: {bravais: hR, a: 4, alpha: 60}
#                  ^^ info lattice-hidden-symmetry: The lattice is of type cF (face-centred cubic), more symmetric than the stated hR (rhombohedral).
`))

  test('the atoms keep the stated type', () =>
    check(`
lattice: {bravais: tP, a: 5.6, c: 5.6}
#                  ^^ info lattice-hidden-symmetry: The lattice is of type cP (simple cubic), more symmetric than the stated tP (simple tetragonal); the atoms keep only oP (simple orthorhombic).
atoms:
  - Ga: [0, 0, 0]
  - As: [1/2, 1/2, 1/4]
  - As: [0, 1/2, 3/4]
`))

  test('in the plane', () =>
    check(`
lattice: {bravais: op, a: 4, b: 4}
#                  ^^ info lattice-hidden-symmetry: The lattice is of type tp (square), more symmetric than the stated op (rectangular).
`))
})

describe('lattice-nearly-symmetric', () => {
  test('a hexagonal base rounded to two digits', () =>
    check(`
lattice:
  vectors: [[3.21, 0, 0], [-1.605, 2.78, 0], [0, 0, 5.21]]
#                                  ^^^^ warning lattice-nearly-symmetric: The vectors miss a lattice of type hP (hexagonal) by 0.000101 Å, the rounding of the digits written: a stricter program finds oC (C-centred orthorhombic). Exactly it would be 2.7799415461.
`))

  test('a cube with a miss of 0.01 %', () =>
    check(`
lattice:
  vectors: [[5.4310, 0, 0], [0, 5.4316, 0], [0, 0, 5.4310]]
#                               ^^^^^^ warning lattice-nearly-symmetric: The vectors miss a lattice of type cP (simple cubic) by 0.0006 Å, 0.011 % of a vector: a stricter program finds tP (simple tetragonal). Exactly it would be 5.431.
`))

  test('half a per cent is a strain', () =>
    check(`
lattice:
  vectors: [[5.4310, 0, 0], [0, 5.4580, 0], [0, 0, 5.4310]]
`))

  test('a hexagonal base of four digits', () =>
    check(`
lattice:
  vectors: [[2.4612, 0, 0], [-1.2306, 2.1315, 0], [0, 0, 6.7079]]
#                                     ^^^^^^ warning lattice-nearly-symmetric: The vectors miss a lattice of type hP (hexagonal) by 0.000066 Å, the rounding of the digits written: a stricter program finds oC (C-centred orthorhombic). Exactly it would be 2.1314617238.
`))

  test('six digits are enough for any program', () =>
    check(`
lattice:
  vectors: [[2.4612, 0, 0], [-1.2306, 2.131462, 0], [0, 0, 6.7079]]
`))

  test('a rhombohedral cell of three digits', () =>
    check(`
lattice:
  vectors: [[2.273, 1.312, 3.954], [-2.273, 1.312, 3.954], [0, -2.625, 3.954]]
#          ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^ warning lattice-nearly-symmetric: The vectors miss a lattice of type hR (rhombohedral) by 0.00051 Å, the rounding of the digits written: a stricter program finds mC (C-centred monoclinic). Exactly it would be 6 other numbers.
`))

  test('silent where the lower type is stated', () =>
    check(`
lattice:
  bravais: oC
#          ^^ info lattice-hidden-symmetry: The lattice is of type hP (hexagonal), more symmetric than the stated oC (C-centred orthorhombic).
  vectors: [[3.21, 0, 0], [-1.605, 2.78, 0], [0, 0, 5.21]]
`))

  test('silent where a lower space group is claimed', () =>
    check(`
lattice:
  vectors: [[3.21, 0, 0], [-1.605, 2.78, 0], [0, 0, 5.21]]
space-group: Cmcm
`))

  test('said instead of a mismatch where the higher type is stated', () =>
    check(`
lattice:
  bravais: hP
  vectors: [[3.21, 0, 0], [-1.605, 2.78, 0], [0, 0, 5.21]]
#                                  ^^^^ warning lattice-nearly-symmetric: The vectors miss a lattice of type hP (hexagonal) by 0.000101 Å, the rounding of the digits written: a stricter program finds oC (C-centred orthorhombic). Exactly it would be 2.7799415461.
`))

  test('in the plane', () =>
    check(`
lattice:
  vectors: [[2.46, 0], [-1.23, 2.13]]
#                              ^^^^ warning lattice-nearly-symmetric: The vectors miss a lattice of type hp (plane hexagonal) by 0.000732 Å, the rounding of the digits written: a stricter program finds oc (centred rectangular). Exactly it would be 2.1304224933.
`))
})

describe('lattice-not-reduced', () => {
  test('a skewed basis', () =>
    check(`
lattice:
  vectors: [[4, 0, 0], [8, 5, 0], [0, 0, 6]]
#          ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^ info lattice-not-reduced: The basis is needlessly skewed: the product of its lengths is 1.89 times that of the shortest basis, whose vectors measure 4 Å, 5 Å, 6 Å.
`))

  test('never a cell of the table of centrings, nor a rhombohedral one', () =>
    check(`
lattice:
  vectors: [[-1.9, 1.9, 4.75], [1.9, -1.9, 4.75], [1.9, 1.9, -4.75]]
---
lattice:
  vectors: [[2.19, 1.2644, 10.1667], [-2.19, 1.2644, 10.1667], [0, -2.5288, 10.1667]]
---
lattice:
  centring: C
  vectors: [[12.2, 0, 0], [0, 3, 0], [-1.4, 0, 5.6]]
`))

  test('a plane lattice', () =>
    check(`
lattice:
  vectors: [[4, 0], [11, 5]]
#          ^^^^^^^^^^^^^^^^^ info lattice-not-reduced: The basis is needlessly skewed: the product of its lengths is 2.37 times that of the shortest basis, whose vectors measure 4 Å, 5.099 Å.
`))
})

describe('lattice-reverse-setting', () => {
  test('atoms of the reverse setting', () =>
    check(`
lattice: {bravais: hR, a: 4.38, c: 30.5}
#                  ^^ warning lattice-reverse-setting: As read, in the obverse setting, the crystal has 6 symmetry operations; read in the reverse setting it has 12. The coordinates seem to be those of the reverse setting: x and y change their sign.
atoms:
  - Te: [0, 0, 0]
  - Te: [0, 0, 0.21]
  - Te: [1/3, 2/3, 1/3 - 0.21]
  - Bi: [0, 0, 0.4]
  - Bi: [1/3, 2/3, 1/3 - 0.4]
`))
})

describe('lattice-unit-suspect', () => {
  test('bohr read as ångström', () =>
    check(`
lattice: {bravais: cF, a: 10.263}
#                         ^^^^^^ warning lattice-unit-suspect: Si (atom 1) and Si (atom 2) are 4.444 Å apart, 2 times the sum of their covalent radii, as in no solid; read in bohr it is an ordinary 1.06 times. Or atoms, or a centring, are missing.
atoms:
  - Si: [0, 0, 0]
  - Si: [1/4, 1/4, 1/4]
`))

  test('ångström read as bohr, the unit is marked', () =>
    check(`
unit: bohr
#     ^^^^ warning lattice-unit-suspect: Na (atom 1) and Cl (atom 2) are 2.8201 a₀ apart, 0.56 times the sum of their covalent radii, as in no solid; read in ångström it is an ordinary 1.05 times.
lattice: {bravais: cF, a: 5.6402}
atoms:
  - Na: [0, 0, 0]
  - Cl: [1/2, 1/2, 1/2]
`))

  test('nm read as ångström', () =>
    check(`
lattice: {bravais: cF, a: 0.56402}
#                         ^^^^^^^ warning lattice-unit-suspect: Na (atom 1) and Cl (atom 2) are 0.282 Å apart, 0.11 times the sum of their covalent radii, as in no solid; read in nm it is an ordinary 1.05 times.
atoms:
  - Na: [0, 0, 0]
  - Cl: [1/2, 1/2, 1/2]
`))

  test('one atom may be all that is typed so far', () =>
    check(`
lattice: {bravais: cF, a: 5.431}
atoms:
  - Si: [0, 0, 0]
`))
})
