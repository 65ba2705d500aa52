import { describe, expect, test } from 'vitest'
import { check, checkFix, findingsOf } from './harness.ts'

test('rows that span no volume', () =>
  check(`
lattice: {bravais: cP, a: 3.9}
supercell: [[1, 1, 0], [2, 2, 0], [0, 0, 1]]
#          ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^ error supercell-singular: The determinant is 0: one row is a combination of the others, and the new vectors span no volume.
`))

test('a zero on the diagonal', () =>
  check(`
lattice: {bravais: hp, a: 2.46}
supercell: [0, 2]
#          ^^^^^^ error supercell-singular: The determinant is 0: no entry may be 0.
`))

test('entries that are no whole numbers', () =>
  check(`
lattice: {bravais: cP, a: 3.9}
supercell: [[2, 0, 0], [0, 1.5, 0], [0, 1/2, 1]]
#                          ^^^ error supercell-singular: An entry of a supercell matrix is a whole number: it counts primitive vectors, and 1.5 of one leads to no lattice point.
#                                       ^^^ error supercell-singular: An entry of a supercell matrix is a whole number: it counts primitive vectors, and 1/2 of one leads to no lattice point.
`))

test('the other hand', () =>
  check(`
lattice: {bravais: cP, a: 3.9}
supercell: [[0, 2, 0], [2, 0, 0], [0, 0, 2]]
#          ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^ warning supercell-left-handed: The determinant is −8: the new vectors are of the other hand than the primitive ones. The same supercell with the opposite sign has 8.
`))

test.each([
  ['[[0, 2, 0], [2, 0, 0], [0, 0, 2]]', '[[0, -2, 0], [-2, 0, 0], [0, 0, -2]]', 'cP'],
  ['[2, -2, 2]', '[2, 2, 2]', 'cP'],
  // −M has the determinant of M in the plane: one row is turned over.
  ['[[1, 2], [2, 1]]', '[[1, 2], [-2, -1]]', 'tp'],
])('is turned over: %s', (before, after, type) =>
  checkFix(
    `lattice: {bravais: ${type}, a: 3.9}\nsupercell: $0${before}\n`,
    `lattice: {bravais: ${type}, a: 3.9}\nsupercell: ${after}\n`,
    { safe: true },
  ),
)

test('the determinant is exact for large numbers', () => {
  // (10⁸+1)(10⁸−1) − 10⁸·10⁸ = −1, which doubles round to 0.
  const text =
    'lattice: {bravais: cP, a: 3.9}\nsupercell: [[100000001, 100000000, 0], [100000000, 99999999, 0], [0, 0, 1]]\n'
  expect(findingsOf(text).map(({ rule }) => rule)).toContain('supercell-left-handed')
})

describe('supercell-misses-point', () => {
  test('K needs multiples of 3; what held M holds it still', () =>
    check(`
lattice: {bravais: hP, a: 2.46, c: 6.7}
path: Γ – M – K – Γ
supercell: [4, 4, 1]
#          ^^^^^^^^^ info supercell-misses-point: K ([1/3, 1/3, 0]) does not fold onto Γ of this supercell: its rows times k are no whole numbers. [6, 6, 1] is the smallest diagonal supercell from this size on that holds it, with the other symmetry points of the path.
`))
  test('of a recommended path; K and U of the face-centred cubic zone are no symmetry points', () =>
    checkFix(
      'lattice: {bravais: cF, a: 6.46}\npath: recommended\nsupercell: $0[2, 2, 2]\n',
      'lattice: {bravais: cF, a: 6.46}\npath: recommended\nsupercell: [4, 4, 4]\n',
    ))
  // √3 × √3: rows (2, 1) and (−1, 1) times (1/3, 1/3) are 1 and 0.
  test('a skewed matrix that holds K, not M', () =>
    check(`
lattice: {bravais: hp, a: 2.46}
path: Γ – K
supercell: [[2, 1], [-1, 1]]
---
lattice: {bravais: hp, a: 2.46}
path: Γ – M
supercell: [[2, 1], [-1, 1]]
#          ^^^^^^^^^^^^^^^^^ info supercell-misses-point: M ([1/2, 0]) does not fold onto Γ of this supercell: its rows times k are no whole numbers. [2, 2] is the smallest diagonal supercell that holds it.
`))
})

describe('supercell-skewed', () => {
  // The 16-fold supercells of a cube with the longest nearest image are face-centred, of edge 4a: √8 · 3.9 = 11.03.
  test('a needle', () =>
    check(`
lattice: {bravais: cP, a: 3.9}
supercell: [16, 1, 1]
#          ^^^^^^^^^^ info supercell-skewed: Images are 3.9 Å apart, 0.4 of the cube root of the volume; in [[0, -2, -2], [2, 0, 2], [-2, 0, 2]], of the same 16 primitive cells, they are 11.03 Å apart.
`))
  test('a strip of a sheet', () =>
    checkFix(
      'lattice: {bravais: op, a: 3, b: 4}\nsupercell: $0[12, 1]\n',
      'lattice: {bravais: op, a: 3, b: 4}\nsupercell: [4, 3]\n',
    ))
  test('a long primitive cell is no fault of the matrix, nor are long rows of a round cell', () =>
    check(`
lattice: {bravais: tP, a: 3, c: 60}
supercell: [2, 2, 1]
---
lattice: {bravais: cP, a: 3.9}
supercell: [[2, 0, 0], [0, 2, 0], [8, 6, 2]]
`))
})
