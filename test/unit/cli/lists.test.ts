/** The verbs that list k-points: path and mesh. */
import { readFileSync } from 'node:fs'
import { join } from 'node:path'
import { afterEach, beforeEach, describe, expect, test } from 'vitest'
import type { MeshJson } from '../../../server/src/exchange/mesh-points.ts'
import type { PathPointJson } from '../../../server/src/exchange/path-table.ts'
import { World } from './world.ts'

let world: World
beforeEach(() => {
  world = new World()
})
afterEach(() => world.remove())

const list = async (args: string[], text: string) => {
  world.write('a.lattice.yaml', text)
  return world.run([...args, 'a.lattice.yaml'])
}

describe('path', () => {
  const CUBIC = 'lattice: {bravais: cP, a: 2}\n'
  const json = async (text: string): Promise<PathPointJson[]> =>
    JSON.parse((await list(['path', '--format', 'json'], text)).out)

  // By hand: X = (0, ½, 0), M = (½, ½, 0), R = (½, ½, ½); |Γ–X| = |X–M| = π/2; the break adds no distance.
  test('joints once, both ends at a break, the distance goes on', async () => {
    const points = await json(`${CUBIC}path: Γ – X – M | R – Γ\nsampling: {steps: 2}\n`)
    expect(points.map(({ piece, index, label }) => [piece, index, label])).toEqual([
      [1, 0, 'Γ'],
      [1, 1, undefined],
      [1, 2, 'X'],
      [1, 3, undefined],
      [1, 4, 'M'],
      [2, 5, 'R'],
      [2, 6, undefined],
      [2, 7, 'Γ'],
    ])
    const h = Math.PI / 4
    const r = (Math.sqrt(3) * Math.PI) / 4
    const distances = [0, h, 2 * h, 3 * h, 4 * h, 4 * h, 4 * h + r, 4 * h + 2 * r]
    expect(points.map(({ distance }) => distance)).toEqual(distances.map(x => expect.closeTo(x, 12)))
    expect(points[3]).toMatchObject({
      fraction: [0.25, 0.5, 0],
      cartesian: [expect.closeTo(h), expect.closeTo(2 * h), 0],
    })
    const s = -1 / Math.sqrt(3)
    expect(points.map(({ direction }) => direction)).toEqual([
      ...Array(3).fill([0, 1, 0]),
      ...Array(2).fill([1, 0, 0]),
      ...Array(3).fill([expect.closeTo(s), expect.closeTo(s), expect.closeTo(s)]),
    ])
  })

  test('as many points as the report says', async () => {
    const text = readFileSync(join(import.meta.dirname, '../exchange/fixtures/silicon.lattice.yaml'), 'utf8')
    const points = await json(text)
    const report = JSON.parse((await world.run(['report', '--format', 'json', 'a.lattice.yaml'])).out)
    expect(points).toHaveLength(report.path.points)
    expect(points.at(-1)!.distance).toBeCloseTo(report.path.length, 9)
  })

  test('csv: one row a point, numbers in full', async () => {
    const { out } = await list(['path', '--format', 'csv'], `${CUBIC}path: Γ – X\nsampling: {steps: 3}\n`)
    const [head, ...rows] = out
      .trimEnd()
      .split('\n')
      .map(line => line.split(','))
    expect(head).toEqual([
      'piece',
      'index',
      'distance',
      'k1',
      'k2',
      'k3',
      'kx',
      'ky',
      'kz',
      'label',
      'dx',
      'dy',
      'dz',
    ])
    expect(rows).toHaveLength(4)
    expect(Number(rows[1][2])).toBe(Math.PI / 6)
    expect(rows.map(row => row[9])).toEqual(['Γ', '', '', 'X'])
  })

  test('in two dimensions fractions have two components', async () => {
    const sheet = 'lattice: {bravais: tp, a: 2}\npath: Γ – X\nsampling: {steps: 1}\n'
    expect((await json(sheet))[1].fraction).toHaveLength(2)
    expect((await list(['path', '--format', 'csv'], sheet)).out.split('\n')[0]).toContain('k1,k2,kx')
  })

  test.each([
    [`${CUBIC}`, /the file has no path/],
    [`${CUBIC}path: Γ – J\n`, /not known: J/],
    [`${CUBIC}path: Γ – X\nsampling: {spacing: 1e-9}\n`, /points; over 1000000/],
    ['title: x\n', /no lattice/],
  ])('%j is refused', async (text, message) => {
    const { status, out, err } = await list(['path'], text)
    expect({ status, out }).toEqual({ status: 2, out: '' })
    expect(err).toMatch(message)
  })
})

describe('mesh', () => {
  const json = async (text: string, ...args: string[]): Promise<MeshJson> =>
    JSON.parse((await list(['mesh', '--format', 'json', ...args], text)).out)
  const EIGHTHS = 'lattice: {bravais: cP, a: 4}\nmesh: {divisions: [4, 4, 4], shift: [1/2, 1/2, 1/2]}\n'

  // D. J. Chadi and M. L. Cohen, Phys. Rev. B 8, 5747 (1973): the four special points of the simple cubic lattice.
  test('the special points of the simple cubic lattice', async () => {
    const mesh = await json(EIGHTHS)
    expect(mesh).toMatchObject({ divisions: [4, 4, 4], shift: [0.5, 0.5, 0.5], symmetric: true })
    expect(mesh.points).toEqual([
      { fraction: [1 / 8, 1 / 8, 1 / 8], weight: 1 / 8 },
      { fraction: [1 / 8, 1 / 8, 3 / 8], weight: 3 / 8 },
      { fraction: [1 / 8, 3 / 8, 3 / 8], weight: 3 / 8 },
      { fraction: [3 / 8, 3 / 8, 3 / 8], weight: 1 / 8 },
    ])
  })
  test('--full lists every point with one weight', async () => {
    const { points } = await json(EIGHTHS, '--full')
    expect(points).toHaveLength(64)
    expect(new Set(points.map(({ weight }) => weight))).toEqual(new Set([1 / 64]))
    for (const { fraction } of points) for (const x of fraction) expect(x >= 0 && x < 1).toBe(true)
  })
  test('weights add up to 1, also of a mesh that breaks the symmetry', async () => {
    const { points, symmetric } = await json(
      'lattice: {bravais: cF, a: 4}\nmesh: {divisions: [3, 4, 5], shift: [1/2, 0, -1/3]}\n',
    )
    expect(symmetric).toBe(false)
    expect(points.reduce((sum, { weight }) => sum + weight, 0)).toBeCloseTo(1, 12)
    for (const { fraction } of points) for (const x of fraction) expect(x >= 0 && x < 1).toBe(true)
  })
  const NAMED =
    'lattice: {bravais: tp, a: 4}\nmesh:\n  coarse: {divisions: [2, 2]}\n  fine: {divisions: [4, 4]}\n'
  test('one of several by its name, in two dimensions', async () => {
    expect(await json(NAMED, '--name', 'coarse')).toMatchObject({
      divisions: [2, 2],
      points: [{ fraction: [0, 0], weight: 1 / 4 }, { weight: 1 / 2 }, { weight: 1 / 4 }],
    })
    expect((await list(['mesh'], NAMED)).err).toMatch(/2 meshes: pick one with --name \(coarse, fine\)/)
    expect((await list(['mesh', '--name', 'fin'], NAMED)).err).toMatch(/did you mean fine\?/)
  })
  test('csv and table', async () => {
    expect((await list(['mesh', '--format', 'csv', '--name', 'coarse'], NAMED)).out).toBe(
      'k1,k2,weight\n0,0,0.25\n0,0.5,0.5\n0.5,0.5,0.25\n',
    )
    expect((await list(['mesh', '--name', 'coarse'], NAMED)).out.split('\n')[1]).toMatch(
      /^0\.0+ {2}0\.0+ {2}0\.250+$/,
    )
  })
  test.each([
    [['mesh'], 'lattice: {bravais: cP, a: 4}\n', /no mesh/],
    [['mesh', '--full', '--irreducible'], EIGHTHS, /exclude each other/],
    [['mesh'], 'lattice: {bravais: cP, a: 4}\nmesh: {divisions: [1000, 1000, 1000]}\n', /over/],
  ])('%j of %j is refused', async (args, text, message) => {
    const { status, out, err } = await list(args, text)
    expect({ status, out }).toEqual({ status: 2, out: '' })
    expect(err).toMatch(message)
  })
})
