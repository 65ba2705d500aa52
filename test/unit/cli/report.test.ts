import { readFileSync } from 'node:fs'
import { join } from 'node:path'
import { afterEach, beforeEach, describe, expect, test } from 'vitest'
import { CARE } from '../../../server/src/exchange/report-sections.ts'
import { World } from './world.ts'

let world: World
beforeEach(() => {
  world = new World()
})
afterEach(() => world.remove())
const fixture = (name: string) =>
  readFileSync(join(import.meta.dirname, '../exchange/fixtures', name), 'utf8')

test('one crystal is an object, several are a list; jsonl is one a line', async () => {
  world
    .write('one.lattice.yaml', fixture('silicon.lattice.yaml'))
    .write('two.lattice.yaml', fixture('meshes.lattice.yaml'))
  const json = async (...args: string[]) =>
    JSON.parse((await world.run(['report', '--format', 'json', ...args])).out)
  expect(await json('one.lattice.yaml')).toMatchObject({ title: 'Silicon', document: 1 })
  expect((await json('two.lattice.yaml')).map(({ document }: { document: number }) => document)).toEqual([
    1, 2,
  ])
  expect(await json('two.lattice.yaml', '--document', '2')).toMatchObject({ document: 2 })
  const { out } = await world.run(['report', '--format', 'jsonl', '.'])
  expect(
    out
      .trimEnd()
      .split('\n')
      .map(line => JSON.parse(line).file),
  ).toEqual(['one.lattice.yaml', 'two.lattice.yaml', 'two.lattice.yaml'])
})

test.each(['text', 'markdown'])('%s tells the tolerance and to take care', async format => {
  world.write('a.lattice.yaml', fixture('silicon.lattice.yaml'))
  const { out } = await world.run(['report', '--format', format, 'a.lattice.yaml'])
  expect(out).toContain('0.001 Å')
  expect(out.replace(/\s+/g, ' ')).toContain(CARE)
})

test('a file without a lattice is told, status 2', async () => {
  world.write('a.lattice.yaml', 'title: nothing yet\n').write('b.lattice.yaml', '')
  const { status, err } = await world.run(['report', '.'])
  expect(status).toBe(2)
  expect(err).toContain('a.lattice.yaml: document 1 has no lattice')
  expect(err).toContain('b.lattice.yaml: no crystal')
})

describe('fold', () => {
  beforeEach(() => {
    world.write('cubic.lattice.yaml', 'lattice: {bravais: cP, a: 4}\n')
    world.write('sheet.lattice.yaml', fixture('sheet.lattice.yaml'))
    world.write('two.lattice.yaml', fixture('meshes.lattice.yaml'))
  })
  const fold = async (...args: string[]) =>
    JSON.parse((await world.run(['fold', '--format', 'json', ...args])).out)

  // By hand: (0.75, 0, 0) is nearer to (1, 0, 0) than to Γ, so in the second zone; its equivalent is (−1/4, 0, 0).
  test('a point of the second zone', async () => {
    expect(await fold('cubic.lattice.yaml', '--at', '3/4,0,0')).toEqual([
      {
        at: [0.75, 0, 0],
        fraction: [-0.25, 0, 0],
        cartesian: [expect.closeTo(-Math.PI / 8), 0, 0],
        length: expect.closeTo(Math.PI / 8),
        place: 'outside',
        zone: 2,
        ties: 1,
      },
    ])
  })
  test('corners, expressions, several points, and one too far to say in which zone', async () => {
    const [corner, edge, inside, far] = await fold(
      'cubic.lattice.yaml',
      '--at',
      '1/2, 1/2, 1/2',
      '--at',
      '[1/2,-1/2,0]',
      '--at',
      '-sqrt(4)/8,a/100,0',
      '--at',
      '1e6,0,0',
    )
    expect(corner).toMatchObject({ place: 'boundary', ties: 8, zone: 1 })
    expect(edge).toMatchObject({ place: 'boundary', ties: 4 })
    expect(inside).toMatchObject({
      place: 'inside',
      fraction: [-0.25, expect.closeTo(0.04, 12), 0],
      ties: 1,
      zone: 1,
    })
    expect(far).toMatchObject({ fraction: [0, 0, 0], zone: null })
  })
  test('in two dimensions fractions have two components', async () => {
    const [point] = await fold('sheet.lattice.yaml', '--at', '1,0')
    expect(point).toMatchObject({ at: [1, 0], fraction: [0, 0], length: 0 })
    expect(await fold('sheet.lattice.yaml', '--at', '1,0,0')).toEqual([point])
  })
  test('a table', async () => {
    const { out } = await world.run(['fold', 'cubic.lattice.yaml', '--at', '3/4,0,0'])
    expect(out).toMatch(/\[3\/4, 0, 0\] +outside +2 +\[-1\/4, 0, 0\]/)
  })
  test('the map of a supercell', async () => {
    world.write('doubled.lattice.yaml', 'lattice: {bravais: cP, a: 4}\nsupercell: [2, 1, 1]\n')
    expect(await fold('doubled.lattice.yaml', '--supercell')).toMatchObject({
      matrix: [
        [2, 0, 0],
        [0, 1, 0],
        [0, 0, 1],
      ],
      fold: 2,
      supercell: { bravais: 'tP' },
    })
    const { out, status } = await world.run(['fold', 'doubled.lattice.yaml', '--supercell'])
    expect(status).toBe(0)
    expect(out).toMatch(/^X +\[0, 1\/2, 0\]/m)
  })
  test('the file of a supercell, whole or not at all', async () => {
    world.write(
      'doubled.lattice.yaml',
      'title: one\nlattice: {bravais: cP, a: 4}\nsupercell: [2, 1, 1]\n---\nlattice: {bravais: cP, a: 4} # two\natoms:\n  - Po: [0, 0, 0]\nmesh: {divisions: [3, 3, 3]}\nsupercell: [2, 1, 1]\n',
    )
    const args = ['fold', 'doubled.lattice.yaml', '--document', '2', '--supercell', '--rewrite']
    const { out, err } = await world.run(args)
    expect(out).toBe(
      'title: one\nlattice: {bravais: cP, a: 4}\nsupercell: [2, 1, 1]\n---\nlattice: {bravais: tP, vectors: [[8, 0, 0], [0, 4, 0], [0, 0, 4]]} # two\natoms:\n  - Po: [0, 0, 0]\n  - Po: [1/2, 0, 0]\n# Steps as fine as, but not the k-points of, [3, 3, 3] of the primitive cell.\nmesh: {divisions: [2, 3, 3]}\n',
    )
    expect(err).toMatch(/mesh of the supercell has not the k-points/)
    expect((await world.run([...args, '-o', 'new.lattice.yaml'])).out).toBe('')
    expect(world.read('new.lattice.yaml')).toBe(out)
    expect(await world.run([...args, '-o', 'new.lattice.yaml'])).toMatchObject({
      status: 2,
      err: expect.stringContaining('--overwrite'),
    })
    world.write('large.lattice.yaml', 'lattice: {bravais: cP, a: 4}\nsupercell: [100, 100, 1]\n')
    expect(
      await world.run(['fold', 'large.lattice.yaml', '--supercell', '--rewrite', '-o', 'l.yaml']),
    ).toMatchObject({
      status: 2,
      err: expect.stringContaining('nothing was written'),
    })
  })
  test.each([
    [['cubic.lattice.yaml', '--rewrite', '--at', '0,0,0'], /--rewrite goes with --supercell/],
    [['cubic.lattice.yaml', '--supercell', '--rewrite', '--format', 'json'], /takes no --format/],
    [['cubic.lattice.yaml', '--supercell', '--rewrite'], /has no supercell/],
    [['cubic.lattice.yaml', '--supercell'], /has no supercell: state it as `supercell: \[2, 2, 2\]`/],
    [['cubic.lattice.yaml', '--supercell', '--at', '0,0,0'], /exclude each other/],
    [['cubic.lattice.yaml', '--at', '1,2'], /three numbers/],
    [['cubic.lattice.yaml', '--at', '1,x,0'], /--at "1,x,0"/],
    [['sheet.lattice.yaml', '--at', '0,0,1'], /without a period/],
    [['two.lattice.yaml', '--at', '0,0,0'], /holds 2 crystals: pick one/],
    [['.', '--at', '0,0,0'], /one file is taken; these are 3/],
  ])('%j is refused', async (args, message) => {
    const { status, out, err } = await world.run(['fold', ...args])
    expect({ status, out }).toEqual({ status: 2, out: '' })
    expect(err).toMatch(message)
  })
  test('one document of several', async () => {
    expect((await fold('two.lattice.yaml', '--document', '2', '--at', '0,0,0'))[0].length).toBe(0)
  })
})

test('a chain has no point group of the cell it is computed in', async () => {
  world.write('a.lattice.yaml', 'lattice: {vectors: [[2.57, 0, 0]]}\natoms: [C: [0, 0, 0]]\n')
  const { out } = await world.run(['report', 'a.lattice.yaml'])
  expect(out).not.toContain('point group')
  expect(out).toContain('2 rotations; time reversal holds')
})

test('the noise of a double stands as a zero among its column', async () => {
  // cF in vectors of another cell: kz of X and W is 0 but for rounding.
  const vectors = '[[0, a/2, a/2], [a/2, 0, a/2], [a/2, 3*a/2, a]]'
  world.write('a.lattice.yaml', `unit: bohr\nlattice: {a: 10.263, vectors: ${vectors}}\n`)
  const { out } = await world.run(['report', 'a.lattice.yaml'])
  expect(out.match(/^ +W +book .*$/m)![0]).toMatch(/0\.000000/)
  expect(out).not.toMatch(/ {2}0 /)
})
