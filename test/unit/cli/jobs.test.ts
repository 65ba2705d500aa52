/** Many files over several threads, and in parts. Threads here are promises that end in a random order. */
import { afterEach, beforeEach, describe, expect, test } from 'vitest'
import { checkWork, type How } from '../../../server/src/cli/check.ts'
import { Engine } from '../../../server/src/cli/engine.ts'
import { type ReportHow, reportWork } from '../../../server/src/cli/report.ts'
import { inTurn, type StartFileWorker } from '../../../server/src/cli/threads.ts'
import { directSymmetry } from '../../../server/src/symmetry-service.ts'
import { seeded } from '../crystal/zone-lattices.ts'
import { World } from './world.ts'

let world: World
beforeEach(() => {
  world = new World()
  for (let i = 0; i < FILES; i++)
    world.write(
      `in/${i}.lattice.yaml`,
      i % 5 === 3
        ? 'titel: x\n'
        : `lattice: {bravais: cP, a: ${3 + i / 10}}\npath: Γ – ${i % 3 ? 'X' : 'J'}\n`,
    )
})
afterEach(() => world.remove())
const FILES = 23

/** @param dies the names that kill their thread. */
const threads =
  (dies = /never/): StartFileWorker =>
  ({ verb, how }, answer, failed) => {
    const engine = new Engine({ ...directSymmetry, idle: async () => {} })
    const place = { cwd: world.folder, readInput: async () => new Uint8Array() }
    const work =
      verb === 'check' ? checkWork(engine, place, how as How) : reportWork(engine, place, how as ReportHow)
    const random = seeded(7)
    let isDead = false
    return {
      post: inTurn(async name => {
        await new Promise(resolve => setTimeout(resolve, 20 * random()))
        if (isDead) return
        isDead = dies.test(name)
        if (isDead) failed('out of memory')
        else answer(structuredClone(await work(name)))
      }),
      terminate: () => {},
    }
  }

describe('the same, whichever thread ends first', () => {
  for (const verb of ['check', 'report'])
    test.each(['text', 'json', 'jsonl', ...(verb === 'check' ? ['sarif'] : ['markdown'])])(
      `${verb} --format %s`,
      async format => {
        const args = [verb, 'in', '--format', format]
        const alone = await world.run([...args, '--jobs', '1'])
        const spread = await world.run([...args, '--jobs', '4'], { startFileWorker: threads() })
        expect(spread).toEqual(alone)
        expect(alone.out).not.toBe('')
      },
    )
})

test('a thread that dies costs one file, which is named', async () => {
  const { status, out, err } = await world.run(['check', 'in', '--format', 'json', '--jobs', '3'], {
    startFileWorker: threads(/\b1[27]\./),
  })
  expect(status).toBe(2)
  expect(JSON.parse(out).files).toBe(FILES - 2)
  expect(err.trimEnd().split('\n')).toEqual(
    [12, 17].map(i =>
      expect.stringMatching(`in.${i}.lattice.yaml: the thread that worked on it ended: out of memory`),
    ),
  )
})

test('standard input among files is read by the thread that has it', async () => {
  const args = ['check', 'in/0.lattice.yaml', '-', 'in/1.lattice.yaml', '--format', 'jsonl']
  const input = 'titel: y\n'
  const alone = await world.run([...args, '--jobs', '1'], { input })
  expect(await world.run([...args, '--jobs', '3'], { input, startFileWorker: threads() })).toEqual(alone)
})

test('--fix writes the same', async () => {
  const fixing = ['check', 'in', '--fix', '--jobs', '4']
  expect((await world.run(fixing, { startFileWorker: threads() })).status).toBe(
    (await world.run(fixing)).status,
  )
})

test('the shards are all files, each once, in their order', async () => {
  const listed = async (...args: string[]) => {
    const { out } = await world.run(['report', 'in', '--format', 'jsonl', ...args])
    return out.split('\n').flatMap(line => (line ? [JSON.parse(line).file as string] : []))
  }
  const all = await listed()
  const parts = [
    await listed('--shard', '1/3'),
    await listed('--shard', '2/3'),
    await listed('--shard', '3/3'),
  ]
  expect(parts.flat().sort()).toEqual([...all].sort())
  for (const part of parts) {
    expect(part).toEqual(all.filter(name => part.includes(name)))
    expect(part.length).toBeGreaterThan(0)
  }
  expect((await world.run(['check', 'in/0.lattice.yaml', '--shard', '2/2'])).status).toBe(0)
})

test.each([
  [['--jobs', '0'], /whole number/],
  [['--jobs', '1000'], /too many/],
  [['--shard', '3/2'], /as in 1\/4/],
  [['--shard', '0/2'], /as in 1\/4/],
  [['--shard', 'x'], /as in 1\/4/],
])('%j is refused', async (args, message) => {
  const { status, out, err } = await world.run(['check', 'in', ...args])
  expect({ status, out }).toEqual({ status: 2, out: '' })
  expect(err).toMatch(message)
})
