/** Where a k-point lies: the questions that rules, hovers and the report ask alike. */
import { describe, expect, test } from 'vitest'
import { norm, type Vec3 } from '../../../server/src/crystal/vector.ts'
import type { Crystal } from '../../../server/src/meaning/crystal.ts'
import {
  bookPointHere,
  bookPointsAlong,
  describePlace,
  lineOfSegment,
  nearestBookPoint,
} from '../../../server/src/meaning/placing.ts'
import { piecesThrough, recommendedPath } from '../../../server/src/meaning/recommended.ts'
import { isRoundingOf } from '../../../server/src/meaning/rounding.ts'
import { acrossLine, isOn, lowestTerms, wholeDirection } from '../../../server/src/meaning/whole-vectors.ts'
import { REFERENCE, bookOf } from '../../reference/labels.ts'
import { snapshotOf } from './harness.ts'

const crystalOf = (text: string): Crystal => snapshotOf(text).documents[0].crystal
const CUBIC = crystalOf('lattice: {bravais: cF, a: 5.43}\n')
const HEXAGONAL = crystalOf('lattice: {bravais: hP, a: 2.46, c: 6.7}\n')
const at = (crystal: Crystal, ...fraction: Vec3) => crystal.cartesianOf(fraction)

describe('the book point at a place', () => {
  test.each<[Vec3, string | undefined]>([
    [[1 / 2, 0, 1 / 2], 'X'],
    [[1 / 2, 1 / 2, 0], 'X'],
    // The own coordinates of U, which is equivalent to K.
    [[5 / 8, 1 / 4, 5 / 8], 'U'],
    [[3 / 8, 3 / 8, 3 / 4], 'K'],
    [[1, -1, 2], 'Γ'],
    [[1 / 4, 0, 1 / 4], undefined],
  ])('%j is %s', (k, label) => expect(bookPointHere(CUBIC, at(CUBIC, ...k))?.label).toBe(label))
})

describe('the nearest book point', () => {
  test('counts equivalents', () => {
    // A tenth of the way from X to Γ, |ΓX| = 2π/a.
    const near = nearestBookPoint(CUBIC, at(CUBIC, 0, 0.45, 0.45))!
    expect(near.label).toBe('X')
    expect(near.distance).toBeCloseTo((0.1 * 2 * Math.PI) / 5.43, 10)
    expect(near.fraction.map(x => x + 0)).toEqual([0, expect.closeTo(0.5, 10), expect.closeTo(0.5, 10)])
  })
  test('also in other zones', () => {
    const near = nearestBookPoint(CUBIC, at(CUBIC, 3, 2.45, 1.45))!
    expect(near.label).toBe('X')
    expect(norm(near.cartesian)).toBeGreaterThan(3)
  })
  test('of one label', () => {
    // From Γ to W, (1/2, 1, 0)·2π/a: √5/2.
    const near = nearestBookPoint(CUBIC, [0, 0, 0], 'W')!
    expect(near.distance).toBeCloseTo((Math.sqrt(5) / 2) * ((2 * Math.PI) / 5.43), 10)
  })
})

describe('in words', () => {
  test.each<[Crystal, Vec3, string]>([
    [CUBIC, [1 / 2, 0, 1 / 2], 'X'],
    [CUBIC, [0.425, 0, 0.425], 'on the line Γ–X, 0.85 of the way'],
    // Half-way from Γ to K, 3/8 of the way to the X beyond: the book's points are Γ and K.
    [CUBIC, [3 / 16, 3 / 16, 3 / 8], 'on the line Γ–K, 0.5 of the way'],
    [CUBIC, [0.3, 0.1, 0.3], 'in a symmetry plane'],
    [CUBIC, [0.31, 0.12, 0.05], 'a general point'],
    [HEXAGONAL, [1 / 3, 1 / 3, 0.1], 'on the line K–H, 0.2 of the way'],
    // Δ runs from Γ to A in the hexagonal lattice.
    [HEXAGONAL, [0, 0, 0.45], 'on the line Γ–A, 0.9 of the way'],
  ])('%#: %j', (crystal, k, words) => expect(describePlace(crystal, at(crystal, ...k))).toBe(words))

  // Δ is the line Γ–X of the face-centred cubic lattice in C. J. Bradley and A. P. Cracknell (1972).
  test('with the letter of a book that names lines', () => {
    const crystal = crystalOf('lattice: {bravais: cF, a: 5.43}\nlabels: bradley-cracknell-1972\n')
    expect(describePlace(crystal, at(crystal, 0.2, 0, 0.2))).toBe('on the line Γ–X (Δ), 0.4 of the way')
    expect(lineOfSegment(crystal, [0, 0, 0], at(crystal, 1 / 2, 0, 1 / 2))).toBe('Δ (Γ–X)')
  })
})

describe('the line of a segment', () => {
  const line = (crystal: Crystal, from: Vec3, to: Vec3) =>
    lineOfSegment(crystal, at(crystal, ...from), at(crystal, ...to))
  test('between book points', () => expect(line(CUBIC, [0, 0, 0], [1 / 2, 1 / 2, 1 / 2])).toBe('Γ–L'))
  test('part of it', () => expect(line(CUBIC, [0.1, 0, 0.1], [0.3, 0, 0.3])).toBe('Γ–X'))
  test('through a symmetry point', () =>
    expect(line(HEXAGONAL, [1 / 3, 1 / 3, 0], [2 / 3, -1 / 3, 0])).toMatch(/^(M–K|K–M)$/))
  test('a plane', () => expect(line(CUBIC, [1 / 2, 0, 1 / 2], [1 / 2, 1 / 2, 1 / 2])).toBe('symmetry plane'))
  test('neither', () => expect(line(CUBIC, [0, 0, 0], [0.31, 0.12, 0.05])).toBeUndefined())
  test('no segment', () => expect(line(CUBIC, [0.1, 0, 0], [0.1, 0, 0])).toBeUndefined())
})

test('points along a line, in order', () => {
  // From Γ to the X beyond K: K at 3/4 (with its equivalent U) of the face-centred cubic line Σ.
  const passed = bookPointsAlong(CUBIC.book!, [
    [0, 0, 0],
    [1 / 2, 1 / 2, 1],
  ])
  expect(passed.map(({ point, at }) => [point.label, at])).toEqual([
    ['Γ', 0],
    ['K', 0.75],
    ['U', 0.75],
    ['X', 1],
  ])
})

describe('the recommended path', () => {
  test.each(
    REFERENCE.entries.filter(
      ({ path, id }) => path.length > 0 && /\/(cP|cF|cI|tP|hP)\/[12]$/.test(id) && !/hinuma.*\/1$/.test(id),
    ),
  )('of $id is that of the source', entry => {
    const parameters: Record<string, string> = { c: 'a: 4', t: 'a: 4, c: 5', h: 'a: 4, c: 5' }
    const crystal = crystalOf(
      `lattice: {bravais: ${entry.bravais}, ${parameters[entry.bravais[0]]}}\nlabels: ${bookOf(entry)}\n`,
    )
    expect(recommendedPath(crystal)?.pieces).toEqual(entry.path)
  })
  test('as text', () =>
    expect(recommendedPath(crystalOf('lattice: {bravais: tI, a: 5.8, c: 3.18}\n'))?.text).toBe(
      'Γ – X – M – Γ – Z – P – N – Z₁ – M | X – P',
    ))
  test('none', () =>
    expect(
      recommendedPath(crystalOf('lattice: {bravais: cP, a: 4}\nlabels: bradley-cracknell-1972\n')),
    ).toBeUndefined())
  test('what of it leads to some labels', () =>
    expect(
      piecesThrough(
        [
          ['A', 'B', 'C', 'D'],
          ['D', 'E'],
        ],
        new Set(['C', 'E']),
      ),
    ).toEqual([
      ['B', 'C', 'D'],
      ['D', 'E'],
    ]))
})

describe('roundings', () => {
  const number = (text: string) => ({
    value: Number(text),
    text,
    at: [0, 0] as const,
    uses: [],
    decimals: (text.split('.')[1] ?? '').length,
  })
  test.each([
    ['0.33', 1 / 3, true],
    ['0.333', 1 / 3, true],
    ['0.334', 1 / 3, false],
    ['0.67', 2 / 3, true],
    ['0.66', 2 / 3, true],
    ['-0.667', -2 / 3, true],
    ['-0.666', -2 / 3, true],
    ['0.3', 1 / 3, false],
    ['0.625', 5 / 8, true],
    ['0.62', 5 / 8, true],
    ['0.63', 5 / 8, true],
    ['0.333333333', 1 / 3, false],
  ])('%s of %d: %s', (text, exact, expected) => expect(isRoundingOf(number(text), exact)).toBe(expected))
})

describe('whole vectors', () => {
  test.each<[Vec3, Vec3]>([
    [
      [1 / 2, 1 / 4, 3 / 4],
      [2, 1, 3],
    ],
    [
      [0, -0.3, 0.6],
      [0, -1, 2],
    ],
    [
      [5, 0, 0],
      [1, 0, 0],
    ],
  ])('along %j is %j', (v, whole) => expect(wholeDirection(v)).toEqual(whole))
  test('none along an irrational direction', () => expect(wholeDirection([1, Math.SQRT2, 0])).toBeUndefined())

  test.each<[Vec3]>([[[1, 0, 0]], [[0, 0, 1]], [[2, -3, 5]], [[-6, 10, 15]], [[0, 4, -7]]])(
    'across %j: products are whole just for whole vectors plus multiples of it',
    v => {
      const across = acrossLine(lowestTerms(v))
      for (let i = 0; i < 50; i++) {
        const shift = (i * 0.618) % 3
        const whole: Vec3 = [(i * 7) % 5, (i * 3) % 4, -((i * 5) % 6)]
        const on = whole.map((x, n) => x + shift * v[n]) as unknown as Vec3
        expect(isOn(on, across, 1e-9)).toBe(true)
        // No whole vector plus a multiple of v has these fractions: two components differ by an irrational amount.
        const off = on.map(
          (x, n) => x + (n === 0 ? Math.SQRT2 / 3 : n === 1 ? Math.sqrt(3) / 5 : 0.1234),
        ) as unknown as Vec3
        expect(isOn(off, across, 1e-9)).toBe(false)
      }
    },
  )
})
