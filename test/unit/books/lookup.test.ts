import { describe, expect, test } from 'vitest'
import { BOOK_NAMES, type BookName } from '../../../server/src/books/index.ts'
import {
  areAcrossBreak,
  bookPointAt,
  labelInOtherBooks,
  linesThrough,
  otherParameters,
  pathSegments,
} from '../../../server/src/books/lookup.ts'
import { type BookMatch, matchBook } from '../../../server/src/books/match.ts'
import { inverse, type Mat3, mapMatrix, transpose, type Vec3 } from '../../../server/src/crystal/vector.ts'

const reciprocalOf = (primitive: Mat3): Mat3 => mapMatrix(transpose(inverse(primitive)), x => 2 * Math.PI * x)
const match = (book: BookName, primitive: Mat3): BookMatch =>
  matchBook(book, primitive, 3, { tolerance: 1e-6 })!

const FCC: Mat3 = [
  [0, 2, 2],
  [2, 0, 2],
  [2, 2, 0],
]
const cubic = match('setyawan-curtarolo-2010', FCC)
const lookup = { reciprocal: reciprocalOf(FCC), tolerance: 1e-4 }
const withRotations = { ...lookup, kRotations: cubic.holohedry }

describe('the point of the book at a fraction', () => {
  test('itself', () =>
    expect(bookPointAt(cubic, [1 / 2, 0, 1 / 2], lookup)).toMatchObject({
      point: { label: 'X' },
      by: 'identity',
      G: [0, 0, 0],
    }))

  test('by a reciprocal vector', () =>
    expect(bookPointAt(cubic, [-1 / 2, 1, 1 / 2], withRotations)).toMatchObject({
      point: { label: 'X' },
      by: 'reciprocal vector',
      G: [-1, 1, 0],
    }))

  test('by a rotation, only where rotations are given', () => {
    expect(bookPointAt(cubic, [0, 1 / 2, 1 / 2], lookup)).toBeUndefined()
    const found = bookPointAt(cubic, [0, 1 / 2, 1 / 2], withRotations)!
    expect(found).toMatchObject({ point: { label: 'X' }, by: 'rotation' })
    const image = found.rotation.map((row, i) =>
      row.reduce((sum, x, j) => sum + x * found.point.fraction[j], found.G[i]),
    )
    expect(image).toEqual([0, 1 / 2, 1 / 2])
  })

  test('K and U are one point by a rotation; each is found as itself', () => {
    expect(bookPointAt(cubic, [3 / 8, 3 / 8, 3 / 4], withRotations)!.point.label).toBe('K')
    expect(bookPointAt(cubic, [5 / 8, 1 / 4, 5 / 8], withRotations)!.point.label).toBe('U')
  })

  test('the tolerance is a distance in k', () => {
    const off = 1e-3
    const beside: Vec3 = [1 / 2, 0, 1 / 2 + off]
    // |b₃| = 2π√3/4 = 2.72 for a = 4.
    expect(bookPointAt(cubic, beside, { ...lookup, tolerance: 2.8 * off })?.point.label).toBe('X')
    expect(bookPointAt(cubic, beside, { ...lookup, tolerance: 2.6 * off })).toBeUndefined()
  })
})

describe('lines through a fraction', () => {
  const book = match('bradley-cracknell-1972', FCC)
  const names = (fraction: Vec3, rotations = true) =>
    linesThrough(book, fraction, rotations ? withRotations : lookup).map(({ name }) => name)

  test('by letter, with how far along', () => {
    const [line, ...others] = linesThrough(book, [0.425, 0, 0.425], lookup)
    expect(others).toEqual([])
    expect(line).toMatchObject({ name: 'Δ', at: expect.closeTo(0.85, 9) })
  })

  test('on an equivalent line, a reciprocal vector away', () => {
    expect(names([1.2, 1.2, 0])).toEqual(['Δ'])
    expect(names([1.2, 1.2, 0], false)).toEqual([])
  })

  test('each line ends at the boundary of the zone: Σ and S continue each other', () => {
    expect(names([0.3, 0.3, 0.6])).toEqual(['Σ'])
    expect(names([0.45, 0.45, 0.9])).toEqual(['S'])
  })

  test('a general point lies on none', () => expect(names([0.11, 0.23, 0.37])).toEqual([]))

  test('segments of the path where the book names no lines', () => {
    expect(linesThrough(cubic, [0.2, 0, 0.2], withRotations).map(({ name }) => name)).toEqual(['Γ–X'])
    expect(linesThrough(cubic, [0.5, 0.1, 0.6], withRotations).map(({ name }) => name)).toEqual(['X–W'])
  })
})

describe('one letter in several books', () => {
  const others = (primitive: Mat3, own: BookName, label: string): string[] => {
    const matches = BOOK_NAMES.map(book => match(book, primitive))
    const mine = matches[BOOK_NAMES.indexOf(own)]
    const { fraction } = mine.points.find(point => point.label === label)!
    const rotations = { reciprocal: reciprocalOf(primitive), tolerance: 1e-6, kRotations: mine.holohedry }
    return labelInOtherBooks(
      label,
      fraction,
      matches.filter(found => found !== mine),
      rotations,
    ).map(({ book }) => book)
  }
  const tI: Mat3 = [
    [-2, 2, 2.7],
    [2, -2, 2.7],
    [2, 2, -2.7],
  ]
  const oF: Mat3 = [
    [0, 2.5, 3],
    [2, 0, 3],
    [2, 2.5, 0],
  ]
  const SC = 'setyawan-curtarolo-2010'
  const HINUMA = 'hinuma-2017'
  const BC = 'bradley-cracknell-1972'

  // The same letter means different points: Z and M in tI, X and T in oF (the three books, from memory).
  test('Z of tI', () => expect(others(tI, SC, 'Z')).toEqual([BC]))
  test('M of tI', () => expect(others(tI, HINUMA, 'M')).toEqual([]))
  test('X of tI', () => expect(others(tI, SC, 'X')).toEqual([HINUMA, BC]))
  test('X of oF', () => expect(others(oF, SC, 'X')).toEqual([BC]))
  test('T of oF', () => expect(others(oF, HINUMA, 'T')).toEqual([]))
})

describe('neighbours on the path', () => {
  test('segments follow the path', () => {
    expect(pathSegments(cubic)).toHaveLength(10)
    expect(pathSegments(cubic)[1]).toEqual(['X', 'W'])
    expect(pathSegments(cubic).at(-1)).toEqual(['U', 'X'])
  })

  test('U and K stand on the two sides of a break', () => {
    const hinuma = match('hinuma-2017', FCC)
    expect(areAcrossBreak(hinuma, 'U', 'K')).toBe(true)
    expect(areAcrossBreak(hinuma, 'K', 'U')).toBe(true)
    expect(areAcrossBreak(hinuma, 'X', 'U')).toBe(false)
    expect(areAcrossBreak(hinuma, 'Γ', 'W')).toBe(false)
  })

  test('two labels that the path joins elsewhere are not across a break', () => {
    // Γ–X–M–Γ–R–X | M–R: X and M, its two sides, are joined at the beginning.
    const simple = match('setyawan-curtarolo-2010', [
      [3, 0, 0],
      [0, 3, 0],
      [0, 0, 3],
    ])
    expect(areAcrossBreak(simple, 'X', 'M')).toBe(false)
  })
})

describe('coordinates of another crystal', () => {
  const tetragonal: Mat3 = [
    [-2, 2, 3],
    [2, -2, 3],
    [2, 2, -3],
  ]
  const found = match('setyawan-curtarolo-2010', tetragonal)
  const near = { reciprocal: reciprocalOf(tetragonal), tolerance: 1e-6 }

  test('the parameter that they were made with', () => {
    // Σ = (−η, η, η) with η = (1 + a²/c²)/4: 0.361 here, 0.3 in a crystal of c/a = √5.
    expect(otherParameters(found, 'Σ', [-0.3, 0.3, 0.3], near)).toEqual([
      { name: 'η', value: expect.closeTo(0.3, 12), expected: expect.closeTo((1 + 16 / 36) / 4, 12) },
    ])
  })

  test('coordinates that no parameter gives', () => {
    expect(otherParameters(found, 'Σ', [-0.3, 0.3, 0.31], near)).toBeUndefined()
    expect(otherParameters(found, 'X', [0, 0, 1 / 2], near)).toBeUndefined()
    expect(otherParameters(found, 'Q', [0, 0, 1 / 2], near)).toBeUndefined()
  })

  test('two parameters at once', () => {
    const body: Mat3 = [
      [-1.5, 2, 3],
      [1.5, -2, 3],
      [1.5, 2, -3],
    ]
    const orthorhombic = match('setyawan-curtarolo-2010', body)
    // L = (−μ, μ, 1/2 − δ)
    const written = otherParameters(orthorhombic, 'L', [-0.2, 0.2, 0.45], {
      reciprocal: reciprocalOf(body),
      tolerance: 1e-6,
    })
    expect(written).toMatchObject([
      { name: 'δ', value: expect.closeTo(0.05, 12) },
      { name: 'μ', value: expect.closeTo(0.2, 12) },
    ])
  })
})
