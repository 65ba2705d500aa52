/**
 * What is exported, read by others: cod-tools' strict parser (Debian: cod-tools), gemmi and spglib (python3-gemmi,
 * python3-spglib), PyCIFRW (python3-pycifrw); and read back by ourselves.
 */
import { spawnSync } from 'node:child_process'
import { mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterAll, describe, expect, test } from 'vitest'
import { Snapshot } from '../../server/src/analysis.ts'
import { importCif } from '../../server/src/exchange/cif/import.ts'
import { exportCif } from '../../server/src/exchange/cif/write.ts'
import type { Crystal } from '../../server/src/meaning/crystal.ts'
import { Workshop } from '../../server/src/meaning/workshop.ts'
import { loadSymmetryFromDisk } from '../../server/src/symmetry-node.ts'
import { directSymmetry } from '../../server/src/symmetry-service.ts'
import { ask, expectAlike, placedOf, type Setting, surroundings } from './cif-tools.ts'

loadSymmetryFromDisk()
const workshop = new Workshop(directSymmetry)
const crystalsOf = (text: string): Crystal[] =>
  new Snapshot(text, workshop).documents.map(({ crystal }) => crystal)

const folder = mkdtempSync(join(tmpdir(), 'braggline-cif-'))
afterAll(() => rmSync(folder, { recursive: true, force: true }))

const DEMO = join(import.meta.dirname, '../../demo')
const demo = readdirSync(DEMO)
  .filter(name => name.endsWith('.lattice.yaml'))
  .flatMap(name =>
    crystalsOf(readFileSync(join(DEMO, name), 'utf8')).map((crystal, i) => ({
      name: `${name} ${i + 1}`,
      crystal,
    })),
  )
/** Every seventh of the 530 settings, so that each lattice and crystal class is among them. */
const SEVENTH = 7
const settings = ask<Setting[]>({ settings: 20260613 })
  .filter((_, i) => i % SEVENTH === 0)
  .map(({ hall, symbol, text }) => ({
    name: `${hall} ${symbol}`,
    crystal: crystalsOf(importCif(text, { source: 'made' }).text!)[0],
  }))
const OTHERS: Readonly<Record<string, string>> = {
  'a left-handed basis of a chiral crystal': `
lattice: {vectors: [[0, 4.91, 0], [4.91, 0, 0], [0.4, 0.7, 5.4]]}
atoms:
  - Si: [0.1, 0.2, 0.3]
  - O: [0.35, 0.15, 0.62]
`,
  'lengths in bohr':
    'unit: bohr\nlattice: {bravais: cF, a: 10.26}\natoms: [Si: [0, 0, 0], Si: [1/4, 1/4, 1/4]]',
  'a supercell that keeps not all rotations': `
lattice: {vectors: [[4, 0, 0], [0, 4, 0], [0, 0, 12]]}
atoms: [Cu: [0, 0, 0], Cu: [0, 0, 1/3], Cu: [0, 0, 2/3]]
`,
  'an origin on no special position': `
lattice: {bravais: cF, a: 5.43}
atoms: [Si: [0.0123, 0.0456, 0.0789], Si: [0.2623, 0.2956, 0.3289]]
`,
  'a sheet with its height': `
lattice: {bravais: hp, a: 2.46, height: 20}
atoms: [C: [1/3, 2/3, 1/2], C: [2/3, 1/3, 1/2]]
`,
  'named atoms':
    'lattice: {bravais: cP, a: 3}\natoms: [Fe: {at: [0, 0, 0], name: Fe_up}, Fe: {at: [1/2, 1/2, 1/2], name: Fe_down}]',
}
const others = Object.entries(OTHERS).map(([name, text]) => ({ name, crystal: crystalsOf(text)[0] }))

const all = [...demo, ...others, ...settings]
  .filter(({ crystal }) => crystal.dimension === 3 || crystal.document.lattice?.height)
  .map(({ name, crystal }, i) => {
    const written = exportCif(crystal, { source: 'made', version: '0' })
    if ('refusal' in written) throw new Error(`${name}: ${written.refusal}`)
    const path = join(folder, `${i}.cif`)
    writeFileSync(path, written.text)
    return { name, crystal, text: written.text, path }
  })

test('cod-tools parses every one without a word', () => {
  const { status, stderr } = spawnSync(
    'cif_parse',
    all.map(({ path }) => path),
    {
      maxBuffer: 2 ** 30,
      encoding: 'utf8',
    },
  )
  const told = stderr
    .trim()
    .split('\n')
    .filter(line => !line.includes('NOTE, 0 error(s)'))
  expect(told).toEqual([])
  expect(status).toBe(0)
})

test('PyCIFRW parses every one by its strict grammar', () => {
  const program =
    'import sys, CifFile\nfor p in sys.argv[1:]:\n  assert len(CifFile.ReadCif(p, grammar="1.1").keys()) == 1, p\n'
  const { status, stderr } = spawnSync(
    '/usr/bin/python3',
    ['-c', program, ...all.slice(0, MOST_SLOW).map(({ path }) => path)],
    { encoding: 'utf8' },
  )
  expect(stderr).toBe('')
  expect(status).toBe(0)
})
/** PyCIFRW takes a tenth of a second for a file. */
const MOST_SLOW = 60

const opinions = ask<({ atoms: number; volume: number; number: number | null } | null)[]>({
  read: all.map(({ path }) => path),
})

describe('others read the same crystal, and so do we', () => {
  test.each(all.map((each, i) => ({ ...each, opinion: opinions[i] })))(
    '$name',
    ({ crystal, text, opinion, name }) => {
      expect(opinion).not.toBeNull()
      const isPlane = crystal.dimension === 2
      const inCell =
        crystal.lattice!.volume *
        crystal.angstrom ** 3 *
        (isPlane ? crystal.document.lattice!.height!.value * 1 : 1)
      const points = Math.round(opinion!.volume / inCell)
      expect(Math.abs(opinion!.volume - points * inCell)).toBeLessThan(1e-5 * opinion!.volume)
      expect(opinion!.atoms).toBe(points * crystal.atoms.length)
      if (!isPlane && crystal.atoms.length > 0 && !/not all rotations/.test(name))
        expect(opinion!.number).toBe(crystal.symmetry!.spaceGroup!.number)
      const { text: lattice, faults, blocks } = importCif(text, { source: 'made' })
      expect(faults).toEqual([])
      if (crystal.atoms.length === 0) return
      expect(blocks[0].remarks.filter(({ level }) => level === 'loss')).toEqual([])
      if (isPlane || crystal.angstrom !== 1) return
      const [back] = crystalsOf(lattice!)
      if (!/named/.test(name))
        expect(back.symmetry!.spaceGroup!.number).toBe(crystal.symmetry!.spaceGroup!.number)
      expectAlike(surroundings(placedOf(back)), surroundings(placedOf(crystal)))
    },
  )
})

test('a left-handed basis becomes a right-handed cell of the same hand of crystal', () => {
  const { crystal, text } = all.find(({ name }) => name.startsWith('a left-handed'))!
  const [back] = crystalsOf(importCif(text, { source: 'made' }).text!)
  // Chirality by the sign of a triple product: of the vectors from Si to its three nearest O, in order of distance.
  const hand = ({ atoms, lattice }: Crystal): number => {
    const [si, o] = atoms
    const near: (readonly [number, readonly [number, number, number]])[] = []
    for (let i = -2; i <= 2; i++)
      for (let j = -2; j <= 2; j++)
        for (let k = -2; k <= 2; k++) {
          const [a, b, c] = lattice!.primitive
          const v = [0, 1, 2].map(x => o.cartesian[x] - si.cartesian[x] + i * a[x] + j * b[x] + k * c[x]) as [
            number,
            number,
            number,
          ]
          near.push([Math.hypot(...v), v])
        }
    near.sort(([p], [q]) => p - q)
    const [[, u], [, v], [, w]] = near
    return Math.sign(
      u[0] * (v[1] * w[2] - v[2] * w[1]) -
        u[1] * (v[0] * w[2] - v[2] * w[0]) +
        u[2] * (v[0] * w[1] - v[1] * w[0]),
    )
  }
  expect(hand(back)).toBe(hand(crystal))
})

describe('refused', () => {
  test.each([
    ['a chain', 'lattice: {vectors: [[2.5, 0, 0]]}', /chain/],
    ['a sheet without height', 'lattice: {bravais: hp, a: 2.46}', /needs a `height`/],
  ])('%s', (_, text, reason) => {
    const written = exportCif(crystalsOf(text)[0], { source: 'made', version: '0' })
    expect('refusal' in written && written.refusal).toMatch(reason)
  })
})
