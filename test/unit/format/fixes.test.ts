/** Each fix of the decoder, from text to text. */
import { describe, test } from 'vitest'
import { checkFix } from './fixture.ts'

const LATTICE = 'lattice: {bravais: cF, a: 5.43}\n'

describe('keys', () => {
  test('renamed', () => checkFix(`${LATTICE}$0paths: Γ – X\n`, `${LATTICE}path: Γ – X\n`))
  test('removed where repeated', () =>
    checkFix(`${LATTICE}path: Γ – X\n$0path: Γ – L # again\ntitle: x\n`, `${LATTICE}path: Γ – X\ntitle: x\n`))
  test('removed where repeated, in braces', () =>
    checkFix('lattice: {bravais: cF, a: 5, $0a: 6}\n', 'lattice: {bravais: cF, a: 5, }\n'))
  test('removed where it says nothing', () =>
    checkFix('lattice:\n  bravais: cF\n  $0height: 20\n  a: 5\n', 'lattice:\n  bravais: cF\n  a: 5\n'))
  test('lattice inserted', () =>
    checkFix(
      '# About silicon.\n$0title: Silicon\npath: Γ – X\n',
      '# About silicon.\ntitle: Silicon\nlattice: {bravais: , a: }\npath: Γ – X\n',
    ))
  test('bravais inserted', () => checkFix('$0lattice:\n  a: 5\n', 'lattice:\n  bravais: \n  a: 5\n'))
  test('a blank inserted', () =>
    checkFix('lattice: {bravais: cF, $0a:5}\n', 'lattice: {bravais: cF, a: 5}\n'))
})

describe('words', () => {
  test('unit', () => checkFix(`unit: $0Å\n${LATTICE}`, `unit: angstrom\n${LATTICE}`))
  test('type', () => checkFix('lattice: {bravais: $0fcc, a: 5}\n', 'lattice: {bravais: cF, a: 5}\n'))
  test('what YAML 1.1 would take for a truth value is quoted', () => {
    checkFix(`${LATTICE}time-reversal: $0on\n`, `${LATTICE}time-reversal: "yes"\n`)
    checkFix(`${LATTICE}checks: {path-jump: $0false}\n`, `${LATTICE}checks: {path-jump: "off"}\n`)
    checkFix(`${LATTICE}atoms:\n  - $0Nitrogen: [0, 0, 0]\n`, `${LATTICE}atoms:\n  - "N": [0, 0, 0]\n`)
  })
  test('instruction', () =>
    checkFix(`# braggline: $0alow path-jump\n${LATTICE}`, `# braggline: allow path-jump\n${LATTICE}`))
})

describe('values', () => {
  test('brackets around numbers', () =>
    checkFix(`${LATTICE}points: {Q: $00 0 1/2}\n`, `${LATTICE}points: {Q: [0, 0, 1/2]}\n`))
  test('parentheses', () =>
    checkFix(`${LATTICE}points:\n  Q: $0(0, 0, 1/2)\n`, `${LATTICE}points:\n  Q: [0, 0, 1/2]\n`))
  test('one number for all directions', () =>
    checkFix(`${LATTICE}mesh: {divisions: $012}\n`, `${LATTICE}mesh: {divisions: [12, 12, 12]}\n`))
  test('a list as a mesh', () =>
    checkFix(`${LATTICE}mesh: $0[4, 4, 4]\n`, `${LATTICE}mesh: {divisions: [4, 4, 4]}\n`))
  test('one row', () => checkFix('lattice: {vectors: $0[1, 0, 0]}\n', 'lattice: {vectors: [[1, 0, 0]]}\n'))
  test('items of a path that are labels', () =>
    checkFix(`${LATTICE}path: $0[Γ, X, W]\n`, `${LATTICE}path: Γ – X – W\n`))
})

describe('paths', () => {
  test('a separator inserted', () => checkFix(`${LATTICE}path: Γ – X $0W\n`, `${LATTICE}path: Γ – X – W\n`))
  test('a separator replaced', () => checkFix(`${LATTICE}path: Γ $0-> X\n`, `${LATTICE}path: Γ – X\n`))
  test('a comma replaced', () => checkFix(`${LATTICE}path: Γ$0, X\n`, `${LATTICE}path: Γ – X\n`))
  test('a break removed', () => checkFix(`${LATTICE}path: Γ – X $0|\n`, `${LATTICE}path: Γ – X\n`))
  test('inside of quotes', () =>
    checkFix(`${LATTICE}path: "\\u0393 $0-> X"\n`, `${LATTICE}path: "\\u0393 – X"\n`))
})

describe('atoms', () => {
  test('an element', () =>
    checkFix(`${LATTICE}atoms:\n  - $0si: [0, 0, 0]\n`, `${LATTICE}atoms:\n  - Si: [0, 0, 0]\n`))
  test('a label becomes a name', () =>
    checkFix(
      `${LATTICE}atoms:\n  - $0Fe1: [0, 0, 0] # up\n`,
      `${LATTICE}atoms:\n  - Fe: {at: [0, 0, 0], name: Fe1} # up\n`,
    ))
  test('a mapping becomes a list', () =>
    checkFix(
      `${LATTICE}atoms:\n  $0Si: [0, 0, 0]\n  # second\n  Ge: [1/4, 1/4, 1/4]\n`,
      `${LATTICE}atoms:\n  - Si: [0, 0, 0]\n  # second\n  - Ge: [1/4, 1/4, 1/4]\n`,
    ))
  test('an item of its own', () =>
    checkFix(
      `${LATTICE}atoms:\n  - Si: [0, 0, 0]\n    $0Ge: [1/4, 1/4, 1/4]\n`,
      `${LATTICE}atoms:\n  - Si: [0, 0, 0]\n  - Ge: [1/4, 1/4, 1/4]\n`,
    ))
})

describe('numbers', () => {
  test('a decimal comma', () =>
    checkFix('lattice:\n  bravais: cF\n  a: 5$0,43\n', 'lattice:\n  bravais: cF\n  a: 5.43\n'))
  test('a unit', () => checkFix('lattice: {bravais: cF, a: 5.43$0 Å}\n', 'lattice: {bravais: cF, a: 5.43}\n'))
  test('a letter for a digit', () =>
    checkFix('lattice: {bravais: cF, a: 5.4$0O}\n', 'lattice: {bravais: cF, a: 5.40}\n'))
})
