import { Ajv } from 'ajv'
import { afterEach, beforeEach, describe, expect, test } from 'vitest'
import type { SymmetryInput } from '../../../server/src/crystal/symmetry.ts'
import type { SymmetryOutcome } from '../../../server/src/meaning/workshop.ts'
import { loadSymmetryFromDisk } from '../../../server/src/symmetry-node.ts'
import { searchSymmetry } from '../../../server/src/symmetry-service.ts'
import { World } from './world.ts'

let world: World
beforeEach(() => {
  world = new World()
})
afterEach(() => world.remove())

const CLEAN = 'lattice: {bravais: cF, a: 5.43}\npath: Γ – X\n'
/** Its finding is an error: no such key. */
const MISSPELLED = 'lattice: {bravais: cF, a: 5.43}\nmeesh: {divisions: [8, 8, 8]}\n'
const SILENCED =
  'lattice: {bravais: cF, a: 5.43}\nmeesh: {divisions: [8, 8, 8]} # braggline: allow key-unknown\n'

describe('exit status', () => {
  test('0 without findings', async () => {
    world.write('a.lattice.yaml', CLEAN)
    expect(await world.run(['check', 'a.lattice.yaml'])).toEqual({
      status: 0,
      out: 'No findings in 1 file.\n',
      err: '',
    })
  })
  test('1 with an error', async () => {
    world.write('a.lattice.yaml', MISSPELLED)
    expect((await world.run(['check', 'a.lattice.yaml'])).status).toBe(1)
  })
  test('a comment that allows a rule makes it 0', async () => {
    world.write('a.lattice.yaml', SILENCED)
    expect((await world.run(['check', 'a.lattice.yaml'])).status).toBe(0)
  })
  test.each([
    ['info', 1, 1],
    ['warning', 0, 1],
    ['error', 0, 0],
    ['never', 0, 0],
  ])('--fail-on %s: %i for information, %i for a warning', async (level, forInfo, forWarning) => {
    const as = (severity: string) => `${MISSPELLED}checks: {key-unknown: ${severity}}\n`
    world.write('i.lattice.yaml', as('info')).write('w.lattice.yaml', as('warning'))
    expect((await world.run(['check', '--fail-on', level, 'i.lattice.yaml'])).status).toBe(forInfo)
    expect((await world.run(['check', '--fail-on', level, 'w.lattice.yaml'])).status).toBe(forWarning)
  })
  test('2 where a file could not be read, and the others are checked all the same', async () => {
    world.write('a.lattice.yaml', MISSPELLED).write('b.lattice.yaml', Uint8Array.of(1, 0, 2))
    const { status, out, err } = await world.run(['check', 'gone.yaml', 'a.lattice.yaml', 'b.lattice.yaml'])
    expect(status).toBe(2)
    expect(out).toContain('a.lattice.yaml:2:1')
    expect(err).toBe(
      'braggline: gone.yaml: no such file or folder\nbraggline: b.lattice.yaml: a binary file, no lattice file\n',
    )
  })
})

describe('input', () => {
  test('standard input', async () => {
    const { status, out } = await world.run(['check', '-'], { input: MISSPELLED })
    expect(status).toBe(1)
    expect(out).toMatch(/^-:2:1 {2}error {2}/)
  })
  test('a folder', async () => {
    world.write('run/1/a.lattice.yaml', CLEAN).write('run/2/b.lattice.yml', CLEAN)
    expect((await world.run(['check', 'run'])).out).toBe('No findings in 2 files.\n')
  })
  test('an empty file has no crystal: nothing was checked, so it is not clean', async () => {
    world.write('a.lattice.yaml', '# nothing yet\n')
    expect(await world.run(['check', 'a.lattice.yaml'])).toMatchObject({
      status: 2,
      err: 'braggline: a.lattice.yaml: there is no crystal in this file\n',
    })
  })
  test('one document of several', async () => {
    world.write('a.lattice.yaml', `${CLEAN}---\n${MISSPELLED}`)
    expect((await world.run(['check', 'a.lattice.yaml', '--document', '1'])).status).toBe(0)
    expect((await world.run(['check', 'a.lattice.yaml', '--document', '2'])).status).toBe(1)
    expect(await world.run(['check', 'a.lattice.yaml', '--document', '3'])).toMatchObject({
      status: 2,
      err: 'braggline: a.lattice.yaml holds 2 crystals: there is no document 3\n',
    })
  })
})

describe('colour', () => {
  const ESCAPE = '\u001b['
  const colours = async (env: Record<string, string>, terminal: boolean) => {
    world.write('a.lattice.yaml', MISSPELLED)
    return (await world.run(['check', 'a.lattice.yaml'], { env, terminal })).out.includes(ESCAPE)
  }
  test('on a terminal', async () => expect(await colours({ TERM: 'xterm' }, true)).toBe(true))
  test('not elsewhere', async () =>
    expect(await colours({ TERM: 'xterm', FORCE_COLOR: '1' }, false)).toBe(false))
  test('never with NO_COLOR', async () =>
    expect(await colours({ TERM: 'xterm', NO_COLOR: '1' }, true)).toBe(false))
  test('not on a terminal that has none', async () =>
    expect(await colours({ TERM: 'dumb' }, true)).toBe(false))
  test('not in a file', async () => {
    world.write('a.lattice.yaml', MISSPELLED)
    await world.run(['check', 'a.lattice.yaml', '-o', 'out.txt'], { env: { TERM: 'xterm' }, terminal: true })
    expect(world.read('out.txt')).not.toContain(ESCAPE)
  })
  test('a file cannot steer the terminal', async () => {
    world.write('a.lattice.yaml', `title: x\n"\\e[31mkey": 1\n${CLEAN}`)
    expect((await world.run(['check', 'a.lattice.yaml'])).out).not.toContain('\u001b')
  })
})

describe('symmetry', () => {
  const failing = {
    find: () => ({ outcome: { state: 'failed' as const, reason: 'the search took longer than 20 s' } }),
    idle: async () => {},
  }
  test('that was not found is told once, and is no failure', async () => {
    world.write('a.lattice.yaml', CLEAN).write('b.lattice.yaml', MISSPELLED)
    const { status, err } = await world.run(['check', 'a.lattice.yaml'], { symmetries: failing })
    expect(status).toBe(0)
    expect(err).toBe(
      'braggline: a.lattice.yaml, document 1: nothing that needs the symmetry was checked: the search took longer than 20 s\n',
    )
    // Where an error says already what is wrong, nothing is added.
    expect((await world.run(['check', 'b.lattice.yaml'], { symmetries: failing })).err).toBe('')
  })
  test('that takes its time is waited for', async () => {
    loadSymmetryFromDisk()
    const jobs: { outcome: SymmetryOutcome; input: SymmetryInput }[] = []
    const later = {
      find(input: SymmetryInput) {
        const job = { outcome: { state: 'pending' } as SymmetryOutcome, input }
        jobs.push(job)
        return job
      },
      async idle() {
        for (const job of jobs) job.outcome = searchSymmetry(job.input)
      },
    }
    world.write('a.lattice.yaml', `${CLEAN}---\n${CLEAN.replace('5.43', '5.5')}`)
    const { out } = await world.run(['report', 'a.lattice.yaml', '--format', 'json'], { symmetries: later })
    expect(
      JSON.parse(out).map(({ symmetry }: { symmetry: { pointGroup: string } }) => symmetry.pointGroup),
    ).toEqual(['m-3m', 'm-3m'])
  })
})

describe('progress', () => {
  beforeEach(() => {
    for (const name of ['a', 'b', 'c']) world.write(`${name}.lattice.yaml`, CLEAN)
  })
  test('a line on a terminal for work over a second, erased at the end', async () => {
    const { err } = await world.run(['check', '.'], { terminal: true, slow: 700 })
    expect(err).toContain('checking file 3 of 3: c.lattice.yaml')
    expect(err.endsWith('\r\u001b[K')).toBe(true)
  })
  test('none for quick work, none in a log', async () => {
    expect((await world.run(['check', '.'], { terminal: true })).err).toBe('')
    expect((await world.run(['check', '.'], { slow: 700 })).err).toBe('')
  })
})

describe('formats', () => {
  beforeEach(() => {
    world.write('a.lattice.yaml', MISSPELLED).write('b.lattice.yaml', CLEAN)
  })
  test('json', async () => {
    const { out } = await world.run(['check', '.', '--format', 'json'])
    expect(JSON.parse(out)).toMatchObject({
      files: 2,
      errors: 1,
      warnings: 0,
      infos: 0,
      findings: [{ rule: 'key-unknown', line: 2, column: 1 }],
    })
  })
  test('jsonl: one finding a line', async () => {
    const { out } = await world.run(['check', '.', '--format', 'jsonl'])
    expect(
      out
        .trimEnd()
        .split('\n')
        .map(line => JSON.parse(line).rule),
    ).toEqual(['key-unknown'])
  })
  test('into a file, whole, and over another only with leave', async () => {
    expect(await world.run(['check', '.', '--format', 'sarif', '-o', 'f.sarif'])).toEqual({
      status: 1,
      out: '',
      err: '',
    })
    expect(JSON.parse(world.read('f.sarif')).version).toBe('2.1.0')
    world.write('f.sarif', 'mine')
    expect((await world.run(['check', '.', '-o', 'f.sarif'])).status).toBe(2)
    expect(world.read('f.sarif')).toBe('mine')
    expect((await world.run(['check', '.', '-o', 'f.sarif', '--overwrite'])).status).toBe(1)
    expect(world.read('f.sarif')).toContain('1 finding in 2 files')
  })
  test('a schema that is published holds for the findings', async () => {
    const schema = (await import('../../../server/src/exchange/schema/finding.schema.json')).default
    const validate = new Ajv({ strict: true }).compile(schema)
    const { out } = await world.run(['check', '.', '--format', 'json'])
    for (const finding of JSON.parse(out).findings)
      expect(validate(finding), JSON.stringify(validate.errors)).toBe(true)
  })
})

describe('--fix', () => {
  /** A point that was rounded: the exact fraction is a safe fix. */
  const ROUNDED = (newline = '\n') =>
    [
      'lattice: {bravais: hP, a: 2.46, c: 6.71}',
      'points:',
      '  K: [0.333, 0.333, 0]  # by hand',
      'path: Γ – K',
      '',
    ].join(newline)

  test('writes the exact fraction, says so, and the finding is gone', async () => {
    world.write('a.lattice.yaml', ROUNDED())
    const { status, out } = await world.run(['check', '--fix', 'a.lattice.yaml'])
    expect(world.read('a.lattice.yaml')).toBe(ROUNDED().replace('0.333, 0.333', '1/3, 1/3'))
    expect(out).toContain('fix')
    expect(out).toContain('(point-rounded)')
    expect(status).toBe(0)
  })
  test('keeps line ends and byte order mark', async () => {
    world.write('a.lattice.yaml', `\ufeff${ROUNDED('\r\n')}`)
    await world.run(['check', '--fix', 'a.lattice.yaml'])
    expect(world.read('a.lattice.yaml')).toBe(`\ufeff${ROUNDED('\r\n').replace('0.333, 0.333', '1/3, 1/3')}`)
  })
  test('leaves a file alone that needs nothing, and fixes that must be judged', async () => {
    const outside = 'lattice: {bravais: cP, a: 4}\npoints:\n  Q: [0.7, 0.1, 0.2]\npath: Γ – Q\n'
    world.write('a.lattice.yaml', CLEAN).write('b.lattice.yaml', outside)
    const { out } = await world.run(['check', '--fix', '.'])
    expect(out).not.toContain('applied')
    expect(world.read('a.lattice.yaml')).toBe(CLEAN)
    expect(world.read('b.lattice.yaml')).toBe(outside)
  })
  test('with a format for programs, what was mended is told on standard error', async () => {
    world.write('a.lattice.yaml', ROUNDED())
    const { out, err } = await world.run(['check', '--fix', '--format', 'json', 'a.lattice.yaml'])
    expect(JSON.parse(out).findings).toEqual([])
    expect(err).toContain('fix')
  })
  test('mends the picked document only', async () => {
    world.write('a.lattice.yaml', `${ROUNDED()}---\n${ROUNDED()}`)
    await world.run(['check', '--fix', '--document', '2', 'a.lattice.yaml'])
    expect(world.read('a.lattice.yaml')).toBe(
      `${ROUNDED()}---\n${ROUNDED().replace('0.333, 0.333', '1/3, 1/3')}`,
    )
  })
  test('does not take standard input', async () => {
    expect(await world.run(['check', '--fix', '-'], { input: ROUNDED() })).toMatchObject({
      status: 2,
      out: '',
    })
  })
})
