import { describe, expect, test } from 'vitest'
import { Snapshot } from '../../../server/src/analysis.ts'
import { Workshop } from '../../../server/src/meaning/workshop.ts'
import { check, checkFix, findingsOf, fixesOf } from './harness.ts'

const rulesOf = (text: string) => findingsOf(text).map(({ rule }) => rule)

describe('mesh-breaks-symmetry', () => {
  // The body diagonal of the shift is left alone by the rotations about it alone: -3m, of order 12.
  test('half a step along all vectors of a face-centred cubic lattice', () =>
    check(`
lattice: {bravais: cF, a: 5.43}
mesh: {divisions: [8, 8, 8], shift: [1/2, 1/2, 1/2]}
#                                   ^^^^^^^^^^^^^^^ warning mesh-breaks-symmetry: A mesh with this shift keeps 12 of the 48 rotations of k-space: the others carry it into another mesh. [0, 0, 0] keeps all, with 29 irreducible points instead of 60.
`))
  test('one half in a body-centred lattice: none, or all three', () => {
    const text = 'lattice: {bravais: cI, a: 3.2}\nmesh: {divisions: [8, 8, 8], shift: $0[1/2, 0, 0]}\n'
    checkFix(text, 'lattice: {bravais: cI, a: 3.2}\nmesh: {divisions: [8, 8, 8], shift: [0, 0, 0]}\n', {
      safe: false,
    })
    const two = text.replace('[1/2, 0, 0]', '[1/2, 1/2, 0]')
    checkFix(two, 'lattice: {bravais: cI, a: 3.2}\nmesh: {divisions: [8, 8, 8], shift: [1/2, 1/2, 1/2]}\n')
  })
  test('the half along c of a hexagonal lattice may stay', () =>
    checkFix(
      'lattice: {bravais: hP, a: 3.25, c: 5.2}\nmesh: {divisions: [9, 9, 6], shift: $0[1/2, 1/2, 1/2]}\n',
      'lattice: {bravais: hP, a: 3.25, c: 5.2}\nmesh: {divisions: [9, 9, 6], shift: [0, 0, 1/2]}\n',
    ))
  test('unequal divisions along equivalent vectors, and the shift that then goes with them', () =>
    check(`
lattice: {bravais: cP, a: 4}
mesh:
  plain: {divisions: [8, 8, 6]}
#                    ^^^^^^^^^ warning mesh-breaks-symmetry: A mesh of 8 × 8 × 6 keeps 16 of the 48 rotations of k-space: symmetry ties the divisions along b₁, b₂ and b₃. 8 × 8 × 8 keeps all.
  shifted: {divisions: [8, 8, 6], shift: [1/2, 1/2, 0]}
#                      ^^^^^^^^^ warning mesh-breaks-symmetry: A mesh of 8 × 8 × 6 keeps 16 of the 48 rotations of k-space: symmetry ties the divisions along b₁, b₂ and b₃. 8 × 8 × 8 with the shift [1/2, 1/2, 1/2] keeps all.
`))
  test('divisions that follow from a spacing are symmetric, a shift of them need not be', () =>
    check(`
lattice: {bravais: tP, a: 4, c: 8}
mesh: {spacing: 0.2, shift: [1/2, 0, 0]}
#                           ^^^^^^^^^^^ warning mesh-breaks-symmetry: A mesh with this shift keeps 8 of the 16 rotations of k-space: the others carry it into another mesh. [1/2, 1/2, 0] keeps all, with 30 irreducible points instead of 60.
`))
  test('the divisions of a sheet are tied in its plane', () =>
    checkFix(
      'lattice: {bravais: tp, a: 4}\nmesh: {divisions: $0[12, 10]}\n',
      'lattice: {bravais: tp, a: 4}\nmesh: {divisions: [12, 12]}\n',
    ))
  test('atoms may take the symmetry away that the divisions do not keep', () => {
    const cube = 'lattice: {bravais: cP, a: 4}\natoms:\n  - Ti: [0, 0, 0]\n'
    const mesh = 'mesh: {divisions: [8, 8, 7]}\n'
    expect(rulesOf(`${cube}${mesh}`)).toContain('mesh-breaks-symmetry')
    expect(rulesOf(`${cube}  - O: [1/2, 1/2, 0.45]\n${mesh}`)).not.toContain('mesh-breaks-symmetry')
  })
  // A polar crystal without time reversal has no −1: along its axis any shift is as good as another.
  test('any shift along the axis of a polar crystal without time reversal', () => {
    const polar =
      'lattice: {bravais: tP, a: 4, c: 4.2}\natoms:\n  - Ti: [0, 0, 0]\n  - O: [1/2, 1/2, 0.45]\nmesh: {divisions: [8, 8, 8], shift: [0, 0, 0.3]}\n'
    expect(rulesOf(polar)).toContain('mesh-breaks-symmetry')
    expect(rulesOf(`${polar}time-reversal: no\n`)).not.toContain('mesh-breaks-symmetry')
  })
  test('in a left-handed cell and in a skewed one', () => {
    const left = 'lattice: {vectors: [[0, 4, 0], [4, 0, 0], [0, 0, 7]]}\nmesh: {divisions: [8, 8, 5]}\n'
    expect(rulesOf(left)).toEqual(['lattice-left-handed'])
    expect(rulesOf(left.replace('[8, 8, 5]', '[8, 6, 5]'))).toEqual([
      'lattice-left-handed',
      'mesh-breaks-symmetry',
    ])
    // a₂ + 2a₁ in place of a₂: b₁ becomes b₁ − 2b₂, and a quarter turn needs equal divisions along the two.
    const skewed = 'lattice: {vectors: [[4, 0, 0], [8, 4, 0], [0, 0, 7]]}\nmesh: {divisions: [8, 8, 5]}\n'
    expect(rulesOf(skewed)).toEqual(['lattice-not-reduced'])
  })
})

describe('mesh-cell-suspect', () => {
  test('the order of other axes', () =>
    check(`
lattice: {bravais: tP, a: 4, c: 8}
mesh: {divisions: [4, 8, 8]}
#                 ^^^^^^^^^ warning mesh-cell-suspect: 4 × 8 × 8 runs against the lengths of the reciprocal vectors, 1.571, 1.571 and 0.785 Å⁻¹: the steps are 0.393, 0.196 and 0.098 Å⁻¹. 8 × 8 × 4 would make the steps 0.196, 0.196 and 0.196 Å⁻¹.
`))
  test('as many divisions as the vector is long, not its reciprocal', () =>
    checkFix(
      'lattice: {bravais: hP, a: 3.25, c: 5.2}\nmesh: {divisions: $0[6, 6, 9]}\n',
      'lattice: {bravais: hP, a: 3.25, c: 5.2}\nmesh: {divisions: [9, 9, 6]}\n',
    ))
  test('divisions for the conventional cell', () =>
    check(`
lattice: {bravais: tI, a: 4, c: 10}
mesh: {divisions: [10, 10, 4]}
#                 ^^^^^^^^^^^ warning mesh-cell-suspect: 10 × 10 × 4 fits the conventional reciprocal vectors, 1.571, 1.571 and 0.628 Å⁻¹; divisions belong to the primitive ones, 1.692, 1.692 and 2.221 Å⁻¹. 15 × 15 × 15 would make the steps 0.113, 0.113 and 0.148 Å⁻¹.
`))
  test('the single division stands along another direction than the vacuum', () =>
    checkFix(
      'lattice: {bravais: oP, a: 3, b: 20, c: 3.6}\natoms:\n  - Pb: [0, 1/2, 0]\n  - S: [1/2, 0.52, 1/2]\nmesh: {divisions: $0[12, 10, 1]}\n',
      'lattice: {bravais: oP, a: 3, b: 20, c: 3.6}\natoms:\n  - Pb: [0, 1/2, 0]\n  - S: [1/2, 0.52, 1/2]\nmesh: {divisions: [12, 1, 10]}\n',
      { rule: 'mesh-cell-suspect' },
    ))
  test('lengths that are nearly alike are no reason for an order', () =>
    check(`
lattice: {bravais: oP, a: 5, b: 5.2, c: 5.4}
mesh: {divisions: [6, 7, 6]}
`))
})

describe('mesh-uneven', () => {
  test('equal divisions along unequal vectors', () =>
    check(`
lattice: {bravais: oP, a: 4, b: 6, c: 12}
mesh: {divisions: [8, 8, 8]}
#                 ^^^^^^^^^ info mesh-uneven: The steps along the reciprocal vectors are 0.196, 0.131 and 0.065 Å⁻¹: they differ 3-fold. 13 × 9 × 4 would make them 0.121, 0.116 and 0.131 Å⁻¹.
`))
  test('the symmetry is kept by what is proposed', () =>
    checkFix(
      'lattice: {bravais: hP, a: 4, c: 12}\nmesh: {divisions: $0[9, 9, 9]}\n',
      'lattice: {bravais: hP, a: 4, c: 12}\nmesh: {divisions: [14, 14, 4]}\n',
      { rule: 'mesh-uneven' },
    ))
  test('3:2 is even enough, symmetry may tie, one division may be fine enough', () => {
    check(`
lattice: {bravais: oP, a: 4, b: 6, c: 5.8}
mesh: {divisions: [8, 8, 8]}
`)
    check(`
lattice: {bravais: tI, a: 4, c: 16}
mesh: {divisions: [8, 8, 8]}
`)
    // |b₃| = 2π/24 = 0.26 Å⁻¹ with one division; the others have steps of 0.1.
    check(`
lattice: {bravais: tP, a: 4, c: 24}
mesh: {divisions: [15, 15, 1]}
`)
  })
})

describe('mesh-across-vacuum', () => {
  const sheet = 'atoms:\n  - C: [1/3, 2/3, 1/2]\n  - C: [2/3, 1/3, 1/2]\n'
  test('of a sheet', () =>
    check(`
lattice: {bravais: hp, a: 2.46, height: 20}
mesh: {divisions: [12, 12, 2]}
#                          ^ warning mesh-across-vacuum: 2 divisions along b₃, where the crystal has no period: each beyond the first costs and gives nothing. It takes 12 × 12 × 1.
`))
  test('across a gap of a three-dimensional cell', () =>
    checkFix(
      `lattice: {bravais: hP, a: 2.46, c: 20}\n${sheet}mesh: {divisions: [12, 12, $04]}\n`,
      `lattice: {bravais: hP, a: 2.46, c: 20}\n${sheet}mesh: {divisions: [12, 12, 1]}\n`,
    ))
  test('by a spacing: divisions take its place', () =>
    checkFix(
      `lattice: {bravais: hP, a: 2.46, c: 20}\n${sheet}mesh:\n  spacing: $00.2\n`,
      `lattice: {bravais: hP, a: 2.46, c: 20}\n${sheet}mesh:\n  divisions: [15, 15, 1]\n`,
    ))
  test('not between the layers of graphite', () =>
    check(`
lattice: {bravais: hP, a: 2.46, c: 6.71}
atoms:
  - C: [0, 0, 1/4]
  - C: [0, 0, 3/4]
  - C: [1/3, 2/3, 1/4]
  - C: [2/3, 1/3, 3/4]
mesh: {divisions: [12, 12, 4]}
`))
})

describe('mesh-coarse', () => {
  test('every direction', () =>
    check(`
lattice: {bravais: cF, a: 5.43}
mesh: {divisions: [2, 2, 2]}
#                 ^^^^^^^^^ info mesh-coarse: The step along b₁, b₂ and b₃ is 1.002 Å⁻¹. Up to 0.5 Å⁻¹ is usual: 5 × 5 × 5.
`))
  test('by a spacing in another unit', () =>
    check(`
unit: nm
lattice: {bravais: cP, a: 0.4}
mesh: {spacing: 9}
#               ^ info mesh-coarse: The step along b₁, b₂ and b₃ is 7.854 nm⁻¹. Up to 5 nm⁻¹ is usual: a spacing of 5.
`))
  test('a single division along a short vector is fine', () =>
    check(`
lattice: {bravais: cP, a: 12}
mesh: {divisions: [1, 1, 1]}
`))
})

describe('mesh-misses-point', () => {
  test('K of a hexagonal lattice', () =>
    check(`
lattice: {bravais: hP, a: 3.2, c: 5.2}
mesh: {divisions: [10, 10, 6]}
#                 ^^^^^^^^^^^ info mesh-misses-point: K = [1/3, 1/3, 0] is not on this mesh: the divisions along b₁ and b₂ must be multiples of 3. 12 × 12 × 6 hits it.
`))
  test('L of a face-centred lattice, under any book', () =>
    check(`
lattice: {bravais: cF, a: 6.46}
labels: bradley-cracknell-1972
mesh: {divisions: [9, 9, 9]}
#                 ^^^^^^^^^ info mesh-misses-point: L = [1/2, 1/2, 1/2] is not on this mesh: the divisions along b₁, b₂ and b₃ must be even. 10 × 10 × 10 hits it.
`))
  test('one of several meshes is enough', () =>
    check(`
lattice: {bravais: hp, a: 2.46}
mesh:
  coarse: {divisions: [10, 10]}
  fine: {divisions: [30, 30]}
`))
  test('not of a mesh that is shifted on purpose', () =>
    check(`
lattice: {bravais: cP, a: 3.9}
mesh: {divisions: [6, 6, 6], shift: [1/2, 1/2, 1/2]}
`))
})

test('nothing is said while the symmetry is not known', () => {
  const slow = new Workshop({ find: () => ({ outcome: { state: 'pending' } }) })
  const text =
    'lattice: {bravais: cF, a: 5.43}\natoms:\n  - Si: [0, 0, 0]\n  - Si: [1/4, 1/4, 1/4]\nmesh:\n  one: {divisions: [8, 8, 6], shift: [1/2, 0, 0]}\n  two: {spacing: 2}\n'
  expect(new Snapshot(text, slow).findings).toEqual([])
  expect(rulesOf(text)).toContain('mesh-breaks-symmetry')
})

test('divisions behind an alias are replaced where the alias stands', () => {
  const text =
    'lattice: {bravais: cF, a: 5.43}\nmesh:\n  one: {divisions: &n [8, 8, 6]}\n  two: {divisions: *n}\n'
  const [, second] = fixesOf(text, 'mesh-breaks-symmetry')
  expect(second.edits).toEqual([{ at: [text.indexOf('*n'), text.indexOf('*n') + 2], text: '[8, 8, 8]' }])
})
