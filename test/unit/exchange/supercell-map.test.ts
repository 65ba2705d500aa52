/** The map between the primitive zone and the supercell's, against closed forms and against brute force. */
import { readFileSync } from 'node:fs'
import { join } from 'node:path'
import { Ajv } from 'ajv'
import { describe, expect, test } from 'vitest'
import {
  type SupercellMapJson,
  supercellMap,
  supercellTable,
} from '../../../server/src/exchange/supercell-map.ts'
import {
  combine,
  distance,
  inverse,
  type Mat3,
  norm,
  subtract,
  type Vec3,
} from '../../../server/src/crystal/vector.ts'
import { closed } from './closed.ts'
import { checked } from './support.ts'

const schema = JSON.parse(
  readFileSync(
    join(import.meta.dirname, '../../../server/src/exchange/schema/supercell-map.schema.json'),
    'utf8',
  ),
)
const fits = new Ajv({ strict: true, allowUnionTypes: true }).compile(closed(schema))

function mapOf(text: string): SupercellMapJson {
  const map = supercellMap(checked(text).snapshot.documents[0].crystal)
  if (!map) throw new Error('no map')
  const plain = JSON.parse(JSON.stringify(map))
  expect(fits(plain), JSON.stringify(fits.errors)).toBe(true)
  return plain
}
const landings = (map: SupercellMapJson) =>
  Object.fromEntries(map.points.map(({ label, landing }) => [label, landing.label ?? '']))
const unfoldings = (map: SupercellMapJson) =>
  Object.fromEntries(map.unfolds.map(({ label, labels }) => [label, labels]))

const SALT = 'lattice: {bravais: cF, a: 6}\npath: Γ – X – W – K – Γ – L | U – X\n'

describe('The conventional cube of a face-centred lattice', () => {
  const map = mapOf(`${SALT}supercell: [[-1, 1, 1], [1, -1, 1], [1, 1, -1]]\n`)
  test('is a cube of four cells', () => {
    expect(map.fold).toBe(4)
    expect(map.supercell).toMatchObject({
      bravais: 'cP',
      parameters: { a: 6, b: 6, c: 6, alpha: 90, beta: 90, gamma: 90 },
      volume: expect.closeTo(216),
      nearestImage: 6,
    })
  })
  test('has X on Γ, L on R, W on X', () => {
    // By hand: X = (2π/a)(0,1,0) is a vector of the cube's reciprocal lattice, L = (2π/a)(½,½,½), W = (2π/a)(½,1,0).
    expect(landings(map)).toMatchObject({ Γ: 'Γ', X: 'Γ', L: 'R', W: 'X' })
    expect(unfoldings(map)).toMatchObject({ Γ: { Γ: 1, X: 3 }, R: { L: 4 } })
  })
  test('meets the path at Γ and X alone', () => {
    expect(map.pathOnGamma.map(({ from, to, at, sampled }) => [from, to, at, sampled])).toEqual([
      ['Γ', 'X', 0, true],
      ['Γ', 'X', 1, true],
      ['K', 'Γ', 1, true],
      ['U', 'X', 1, true],
    ])
  })
})

describe('Doubled and trebled cells', () => {
  test('a cube doubled along its edges: all symmetry points but none else lie on Γ', () => {
    const map = mapOf('lattice: {bravais: cP, a: 4}\npath: Γ – X\nsupercell: [2, 2, 2]\n')
    expect(landings(map)).toEqual({ Γ: 'Γ', X: 'Γ', M: 'Γ', R: 'Γ' })
    expect(unfoldings(map).Γ).toEqual({ Γ: 1, X: 3, M: 3, R: 1 })
  })
  test('√3 × √3 of graphene: both K on Γ', () => {
    const map = mapOf('lattice: {bravais: hp, a: 2.46}\npath: Γ – K – M\nsupercell: [[2, 1], [-1, 1]]\n')
    expect(map).toMatchObject({
      fold: 3,
      supercell: {
        bravais: 'hp',
        parameters: { a: expect.closeTo(2.46 * Math.sqrt(3)), gamma: 120 },
      },
    })
    expect(landings(map).K).toBe('Γ')
    expect(unfoldings(map).Γ).toEqual({ Γ: 1, K: 2 })
    expect(map.unfolds[0].points!.every(({ fraction }) => fraction.length === 2)).toBe(true)
  })
  test('a dimerised chain: the edge of the zone on Γ, and a path beyond it meets Γ in between', () => {
    const map = mapOf(
      'lattice: {vectors: [[2.5, 0, 0]]}\npoints: {Q: [3/2]}\npath: Γ –(5)– Q\nsupercell: [[2]]\n',
    )
    expect(unfoldings(map)).toMatchObject({ Γ: { Γ: 1, X: 1 } })
    expect(map.pathOnGamma.map(({ at, sampled }) => [at, sampled])).toEqual([
      [0, true],
      [expect.closeTo(1 / 3), false],
      [expect.closeTo(2 / 3), false],
      [1, true],
    ])
  })
  test('a matrix of the other hand, and labels: none', () => {
    const map = mapOf(
      'lattice: {bravais: cP, a: 4}\nlabels: none\npoints: {Q: [1/2, 0, 0]}\nsupercell: [[0, 2, 0], [2, 0, 0], [0, 0, 1]]\n',
    )
    expect(map.fold).toBe(4)
    expect(landings(map)).toEqual({ Q: 'Γ' })
    expect(unfoldings(map)).toEqual({ Γ: { '': 4 } })
  })
})

test('every landing differs from its point by a vector of the supercell’s reciprocal lattice, and is the shortest', () => {
  const map = mapOf(
    'lattice: {bravais: mP, a: 5, b: 6, c: 7, beta: 103}\npath: recommended\nsupercell: [[2, 1, 0], [-1, 1, 1], [0, 3, -2]]\n',
  )
  const rows = map.supercell.reciprocal as unknown as Mat3
  const steps = [-3, -2, -1, 0, 1, 2, 3]
  for (const { cartesian, landing } of map.points) {
    const G = combine(subtract(cartesian, landing.cartesian), inverse(rows))
    for (const x of G) expect(Math.abs(x - Math.round(x))).toBeLessThan(1e-9)
    for (const i of steps)
      for (const j of steps)
        for (const k of steps)
          expect(norm(subtract(landing.cartesian, combine([i, j, k], rows)))).toBeGreaterThan(
            norm(landing.cartesian) - 1e-9,
          )
  }
  for (const { cartesian, points } of map.unfolds) {
    expect(points?.length).toBe(map.fold)
    for (const point of points!) {
      const G: Vec3 = combine(subtract(point.cartesian, cartesian), inverse(rows))
      expect(distance(G, G.map(Math.round) as unknown as Vec3)).toBeLessThan(1e-8)
    }
  }
})

test('the table', () => {
  // By hand: half of b₃ of a face-centred lattice is an L; 2π/a to X is 1.047 for a = 6.
  const table = supercellTable(mapOf(`${SALT}supercell: [1, 1, 2]\n`))
  expect(table).toContain('[1, 0, 0] [0, 1, 0] [0, 0, 2], 2 primitive cells')
  expect(table).toMatch(/^Γ +\[0, 0, 0\] +Γ, L$/m)
  const cube = supercellTable(mapOf(`${SALT}supercell: [[-1, 1, 1], [1, -1, 1], [1, 1, -1]]\n`))
  expect(cube).toMatch(/^Γ – X +1 +1\.047198 +\[1\/2, 0, 1\/2\] +yes$/m)
  // Thousands of points are counted, not listed.
  const large = supercellTable(mapOf('lattice: {bravais: cP, a: 4}\nsupercell: [9, 9, 9]\n'))
  expect(large.split('\n').length).toBeLessThan(40)
})
