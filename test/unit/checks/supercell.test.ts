import { expect, test } from 'vitest'
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
