/** Whatever is in a file, the command answers: with findings that fit the schema, and with fixes that settle. */
import { readFileSync } from 'node:fs'
import { join } from 'node:path'
import { Ajv } from 'ajv'
import fc from 'fast-check'
import { afterAll, expect, test } from 'vitest'
import { closed } from '../exchange/closed.ts'
import { fixture, NAMES } from '../exchange/support.ts'
import { World } from './world.ts'

const schemaOf = (name: string) =>
  closed(
    JSON.parse(
      readFileSync(
        join(import.meta.dirname, `../../../server/src/exchange/schema/${name}.schema.json`),
        'utf8',
      ),
    ),
  )
const ajv = new Ajv({ strict: true, allowUnionTypes: true })
const isFinding = ajv.compile(schemaOf('finding'))
const isReport = ajv.compile(schemaOf('report'))

const world = new World()
afterAll(() => world.remove())

const TEXTS = [
  ...NAMES.map(fixture),
  'lattice: {bravais: hP, a: 2.46, c: 6.71}\npoints:\n  K: [0.333, 0.333, 0]\n  A: [0, 0, .5]\npath: Γ – K\n',
]
const PIECES = [
  '0.333',
  '1/3',
  '[',
  ']',
  '-',
  '- ',
  ':',
  '\n',
  '\r\n',
  '---\n',
  '0',
  '1e9',
  '😀',
  'Γ',
  '#',
  '"',
  'points',
  'mesh',
  '{}',
  '  ',
  '\t',
  '\ufeff',
  '\u0007',
]

/** A text with a few runs cut out and pieces put in. */
const edited = fc
  .tuple(
    fc.constantFrom(...TEXTS),
    fc.array(
      fc.tuple(fc.double({ min: 0, max: 1, noNaN: true }), fc.nat(8), fc.constantFrom('', ...PIECES)),
      { minLength: 1, maxLength: 4 },
    ),
  )
  .map(([text, edits]) =>
    edits.reduce((t, [x, cut, piece]) => {
      const at = Math.floor(x * t.length)
      return t.slice(0, at) + piece + t.slice(at + cut)
    }, text),
  )

test('check answers in JSON that fits the schema', async () => {
  await fc.assert(
    fc.asyncProperty(edited, async input => {
      const { status, out, err } = await world.run(['check', '-', '--format', 'json'], { input })
      expect(err).toBe('')
      const { findings, errors, warnings } = JSON.parse(out)
      for (const finding of findings) expect(isFinding(finding), JSON.stringify(isFinding.errors)).toBe(true)
      expect(status).toBe(errors + warnings > 0 ? 1 : 0)
    }),
    { numRuns: 200 },
  )
})

test('findings in words stand on one line each, and never steer the terminal', async () => {
  await fc.assert(
    fc.asyncProperty(edited, async input => {
      const { out } = await world.run(['check', '-'], { input })
      const json = JSON.parse((await world.run(['check', '-', '--format', 'json'], { input })).out)
      expect(out.split('\n').filter(line => line.startsWith('-:'))).toHaveLength(json.findings.length)
      expect(out).not.toMatch(/[\u0000-\u0009\u000b-\u001f\u007f-\u009f]/)
    }),
    { numRuns: 100 },
  )
})

test('report answers in JSON that fits the schema, or says in a line why it cannot', async () => {
  await fc.assert(
    fc.asyncProperty(edited, async input => {
      const { status, out, err } = await world.run(['report', '-', '--format', 'jsonl'], { input })
      for (const line of out.split('\n').filter(Boolean))
        expect(isReport(JSON.parse(line)), JSON.stringify(isReport.errors)).toBe(true)
      expect(status).toBe(err === '' ? 0 : 2)
      for (const format of ['text', 'markdown']) {
        const words = (await world.run(['report', '-', '--format', format], { input })).out
        expect(words).not.toMatch(/NaN|undefined|Infinity|\[object/)
      }
    }),
    { numRuns: 100 },
  )
})

test('--fix makes no error, leaves nothing for a second time, and keeps what it does not touch', async () => {
  await fc.assert(
    fc.asyncProperty(edited, async text => {
      world.write('x.lattice.yaml', text)
      const errors = async () =>
        JSON.parse((await world.run(['check', 'x.lattice.yaml', '--format', 'json'])).out).errors
      const before = await errors()
      await world.run(['check', '--fix', 'x.lattice.yaml'])
      const once = world.read('x.lattice.yaml')
      expect(await errors()).toBeLessThanOrEqual(before)
      await world.run(['check', '--fix', 'x.lattice.yaml'])
      expect(world.read('x.lattice.yaml')).toBe(once)
    }),
    { numRuns: 100 },
  )
})
