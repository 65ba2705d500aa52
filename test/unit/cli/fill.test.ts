import { mkdirSync, symlinkSync } from 'node:fs'
import { afterEach, beforeEach, describe, expect, test } from 'vitest'
import { World } from './world.ts'

let world: World
beforeEach(() => {
  world = new World()
  world.write('cubic.lattice.yaml', 'lattice: {bravais: cP, a: 4}\npath: Γ – X\nsampling: {steps: 2}\n')
  world.write('forms/cell.liquid', 'a = {{ lattice.parameters.a | fixed: 3 }}\n')
})
afterEach(() => world.remove())

const REFUSED = { status: 2, out: '' }

describe('fill', () => {
  test('to standard output', async () => {
    expect(await world.run(['fill', 'forms/cell.liquid', 'cubic.lattice.yaml'])).toEqual({
      status: 0,
      out: 'a = 4.000\n',
      err: '',
    })
  })

  test('the lattice file from standard input', async () => {
    const input = 'lattice: {bravais: cP, a: 5}\n'
    const { out } = await world.run(['fill', 'forms/cell.liquid', '-'], { input })
    expect(out).toBe('a = 5.000\n')
  })

  test('to a file, and over it with --overwrite only', async () => {
    const fill = ['fill', 'forms/cell.liquid', 'cubic.lattice.yaml', '-o', 'cell.txt']
    expect(await world.run(fill)).toEqual({ status: 0, out: '', err: '' })
    expect(world.read('cell.txt')).toBe('a = 4.000\n')
    world.write('cell.txt', 'kept')
    const second = await world.run(fill)
    expect(second).toMatchObject(REFUSED)
    expect(second.err).toContain('--overwrite')
    expect(world.read('cell.txt')).toBe('kept')
    await world.run([...fill, '--overwrite'])
    expect(world.read('cell.txt')).toBe('a = 4.000\n')
  })

  test('a form that cannot be filled leaves the output alone, and says where', async () => {
    world.write('bad.liquid', 'first\n  {{ lattice.vectrs[0] | join }}\n')
    const outcome = await world.run(['fill', 'bad.liquid', 'cubic.lattice.yaml', '-o', 'out.txt'])
    expect(outcome).toEqual({
      ...REFUSED,
      err: 'bad.liquid:2:6: there is no `lattice.vectrs`; did you mean `lattice.vectors`?\n',
    })
    expect(() => world.read('out.txt')).toThrow()
  })

  test('one crystal of several', async () => {
    world.write('two.lattice.yaml', 'lattice: {bravais: cP, a: 1}\n---\nlattice: {bravais: cP, a: 2}\n')
    const several = await world.run(['fill', 'forms/cell.liquid', 'two.lattice.yaml'])
    expect(several).toMatchObject(REFUSED)
    expect(several.err).toContain('--document')
    const { out } = await world.run(['fill', 'forms/cell.liquid', 'two.lattice.yaml', '--document', '2'])
    expect(out).toBe('a = 2.000\n')
  })

  test('one mesh of several', async () => {
    const meshes = 'mesh: {coarse: {divisions: [2, 2, 2]}, fine: {divisions: [3, 3, 3]}}\n'
    world.write('named.lattice.yaml', `lattice: {bravais: cP, a: 4}\n${meshes}`)
    world.write('mesh.liquid', '{{ mesh.name }} {{ mesh.points }}\n')
    const fill = (...more: string[]) => world.run(['fill', 'mesh.liquid', 'named.lattice.yaml', ...more])
    expect((await fill('--mesh', 'fine')).out).toBe('fine 27\n')
    expect((await fill()).err).toMatch(/^mesh.liquid:1:1: `mesh.name` has no value: .*several/)
    expect((await fill('--mesh', 'fin')).err).toContain('did you mean fine?')
  })

  test('the day is that of the reproducible build', async () => {
    world.write('day.liquid', '{{ date }}')
    // 1 January 2000, 00:00 in Greenwich (Unix time).
    const env = { SOURCE_DATE_EPOCH: '946684800' }
    expect((await world.run(['fill', 'day.liquid', 'cubic.lattice.yaml'], { env })).out).toBe('2000-01-01')
  })

  test.each([
    [[], /FORM FILE/],
    [['forms/cell.liquid'], /FORM FILE/],
    [['-', 'cubic.lattice.yaml'], /form is a file/],
    [['nowhere.liquid', 'cubic.lattice.yaml'], /nowhere.liquid: no such file/],
    [['forms', 'cubic.lattice.yaml'], /forms: is a folder/],
    [['forms/cell.liquid', 'nowhere.lattice.yaml'], /nowhere.lattice.yaml: no such file/],
    [['forms/cell.liquid', 'cubic.lattice.yaml', 'cubic.lattice.yaml', 'x'], /x: no such file/],
  ])('%j is refused', async (args, message) => {
    const outcome = await world.run(['fill', ...args])
    expect(outcome).toMatchObject(REFUSED)
    expect(outcome.err).toMatch(message)
    expect(outcome.err.trimEnd().split('\n')).toHaveLength(1)
  })

  test('a lattice file with an error is not filled in', async () => {
    world.write('wrong.lattice.yaml', 'lattice: {bravais: cP, a: 4}\npath: Γ – Qq\n')
    const outcome = await world.run(['fill', 'forms/cell.liquid', 'wrong.lattice.yaml'])
    expect(outcome).toMatchObject(REFUSED)
    expect(outcome.err).toMatch(/wrong.lattice.yaml has 1 error/)
  })

  test('a form that is no text', async () => {
    world.write('binary.liquid', new Uint8Array([0, 1, 2]))
    expect((await world.run(['fill', 'binary.liquid', 'cubic.lattice.yaml'])).err).toContain('no form')
    world.write('latin.liquid', new Uint8Array([0xe5]))
    expect((await world.run(['fill', 'latin.liquid', 'cubic.lattice.yaml'])).err).toContain('UTF-8')
    world.write('long.liquid', 'x'.repeat(200_001))
    expect((await world.run(['fill', 'long.liquid', 'cubic.lattice.yaml'])).err).toContain('200,000')
  })
})

describe('partials', () => {
  const fill = async (form: string) => {
    world.write('forms/main.liquid', form)
    return world.run(['fill', 'forms/main.liquid', 'cubic.lattice.yaml'])
  }

  test('beside the form and below it, from one another', async () => {
    world.write('forms/parts/row.liquid', 'k {{ k | join }}\n')
    world.write(
      'forms/rows.liquid',
      '{% for k in lattice.vectors %}\n{% render "parts/row.liquid", k: k %}\n{% endfor %}\n',
    )
    expect(await fill('{% render "rows.liquid" %}\n')).toEqual({
      status: 0,
      out: 'k 4 0 0\nk 0 4 0\nk 0 0 4\n',
      err: '',
    })
  })

  test('a fault in a partial is told in the partial', async () => {
    world.write('forms/row.liquid', 'x\n{{ titel }}\n')
    expect((await fill('{% render "row.liquid" %}')).err).toBe(
      'row.liquid:2:4: there is no `titel`; did you mean `title`?\n',
    )
  })

  test.each([
    '../secret.txt',
    '/etc/hostname',
    'parts/../../secret.txt',
    '..\\\\secret.txt',
    'C:/secret.txt',
  ])('%s is not read', async name => {
    world.write('secret.txt', 'SECRET')
    const { status, out, err } = await fill(`{% render "${name}" %}`)
    expect({ status, out }).toEqual(REFUSED)
    expect(err).toMatch(/^forms\/main.liquid:1:1: .*(refused|no other signs)/)
  })

  test('nor is a link out of the folder, of a file or of a folder', async () => {
    world.write('secret.txt', 'SECRET')
    symlinkSync(world.path('secret.txt'), world.path('forms/link.liquid'))
    mkdirSync(world.path('elsewhere'))
    world.write('elsewhere/secret.liquid', 'SECRET')
    symlinkSync(world.path('elsewhere'), world.path('forms/folder'))
    for (const name of ['link.liquid', 'folder/secret.liquid']) {
      const { status, out, err } = await fill(`{% render "${name}" %}`)
      expect({ status, out }).toEqual(REFUSED)
      expect(err).toContain('link out of the folder')
    }
  })

  test('one that is not there', async () => {
    expect((await fill('{% include "row" %}')).err).toMatch(/main.liquid:1:1: there is no partial "row"/)
  })
})
