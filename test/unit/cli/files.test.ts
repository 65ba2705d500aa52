import { chmodSync, existsSync, lstatSync, mkdirSync, readdirSync, statSync, symlinkSync } from 'node:fs'
import { afterEach, beforeEach, describe, expect, test } from 'vitest'
import { findFiles, readText } from '../../../server/src/cli/files.ts'
import { type Io, Refusal } from '../../../server/src/cli/io.ts'
import { Desk, replaceFile } from '../../../server/src/cli/output.ts'
import { World } from './world.ts'

let world: World
beforeEach(() => {
  world = new World()
})
afterEach(() => world.remove())

const io = (): Io =>
  ({ cwd: world.folder, env: {}, now: () => 0, readInput: async () => new Uint8Array() }) as unknown as Io
const find = (...operands: string[]) => findFiles(operands, io())

describe('what is found', () => {
  beforeEach(() => {
    for (const name of [
      'b.lattice.yaml',
      'a.lattice.yml',
      'deep/er/c.lattice.yaml',
      'other.yaml',
      'node_modules/x/d.lattice.yaml',
    ])
      world.write(name, 'title: x\n')
  })
  test('a folder is searched for lattice files, in order, without what was installed', async () => {
    expect(await find('.')).toEqual({
      names: ['a.lattice.yml', 'b.lattice.yaml', 'deep/er/c.lattice.yaml'],
      failures: [],
    })
    expect((await find('deep')).names).toEqual(['deep/er/c.lattice.yaml'])
  })
  test('a glob', async () =>
    expect((await find('**/*.yaml')).names).toEqual([
      'b.lattice.yaml',
      'deep/er/c.lattice.yaml',
      'other.yaml',
    ]))
  test('a file of any name that is named outright', async () =>
    expect((await find('other.yaml')).names).toEqual(['other.yaml']))
  test('each file once', async () =>
    expect((await find('b.lattice.yaml', './b.lattice.yaml', 'b*')).names).toEqual(['b.lattice.yaml']))
  test('a file whose name looks like a glob', async () => {
    world.write('run[1].lattice.yaml', 'title: x\n')
    expect((await find('run[1].lattice.yaml')).names).toEqual(['run[1].lattice.yaml'])
  })
  test('what is not there is told, and the rest is found', async () => {
    expect(await find('gone.yaml', 'b.lattice.yaml')).toEqual({
      names: ['b.lattice.yaml'],
      failures: ['gone.yaml: no such file or folder'],
    })
  })
  test('an empty folder and a glob without a match are told', async () => {
    mkdirSync(world.path('empty'))
    expect((await find('empty')).failures).toEqual(['empty: no *.lattice.yaml in this folder'])
    expect((await find('z*')).failures).toEqual(['z*: no file fits'])
  })
  test('links that lead in a circle end', async () => {
    symlinkSync('..', world.path('deep/up'))
    expect((await find('deep')).names.length).toBeGreaterThan(0)
    symlinkSync('loop', world.path('loop'))
    expect((await find('loop')).failures).toEqual(['loop: links lead in a circle'])
  })
  test('nothing named', async () => await expect(find()).rejects.toThrow(Refusal))
})

describe('what is read', () => {
  const read = (content: string | Uint8Array) => {
    world.write('f', content)
    return readText('f', io())
  }
  test('a byte order mark is put aside', async () => {
    expect(await read('\ufefftitle: x\n')).toMatchObject({ text: 'title: x\n', mark: true })
    expect(await read('title: x\n')).toMatchObject({ text: 'title: x\n', mark: false })
  })
  test.each([
    ['binary', Uint8Array.of(0x7f, 0x45, 0x4c, 0x46, 0, 1), /binary/],
    ['UTF-16', Uint8Array.of(0xff, 0xfe, 0x61, 0), /UTF-16/],
    ['Latin-1', Uint8Array.of(0x61, 0xe5, 0x62), /not UTF-8/],
  ])('%s is refused', async (_, bytes, failure) => {
    await expect(read(bytes)).rejects.toThrow(failure)
  })
  test('a folder and a path through a file', async () => {
    world.write('f', 'x')
    await expect(readText('.', io())).rejects.toThrow('.: is a folder')
    await expect(readText('f/g', io())).rejects.toThrow('f/g: no such file or folder')
  })
})

describe('what is written', () => {
  test('replaces the content, keeps permissions and links, leaves nothing behind', async () => {
    world.write('real', 'old')
    chmodSync(world.path('real'), 0o640)
    symlinkSync('real', world.path('link'))
    await replaceFile(world.path('link'), 'new', 'link')
    expect(world.read('real')).toBe('new')
    expect(statSync(world.path('real')).mode & 0o777).toBe(0o640)
    expect(lstatSync(world.path('link')).isSymbolicLink()).toBe(true)
    expect(readdirSync(world.folder).sort()).toEqual(['link', 'real'])
  })
  test('what cannot be written is refused and nothing is left', async () => {
    await expect(replaceFile(world.path('no/such'), 'x', 'no/such')).rejects.toThrow(
      /no\/such: cannot be written: no such file or folder/,
    )
    await expect(replaceFile(world.folder, 'x', 'here')).rejects.toThrow(Refusal)
    expect(readdirSync(world.folder)).toEqual([])
  })
  test('a file that is there needs leave', () => {
    world.write('f', 'x')
    expect(() => new Desk(io(), 'f', false)).toThrow(/f is there already/)
    expect(() => new Desk(io(), 'f', true)).not.toThrow()
    expect(() => new Desk(io(), 'g', false)).not.toThrow()
    expect(existsSync(world.path('g'))).toBe(false)
  })
})
