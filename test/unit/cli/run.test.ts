import { afterEach, beforeEach, describe, expect, test } from 'vitest'
import { CHECKS } from '../../../server/src/checks/index.ts'
import { VERBS } from '../../../server/src/cli/run.ts'
import { World } from './world.ts'

let world: World
beforeEach(() => {
  world = new World()
})
afterEach(() => world.remove())

describe('help', () => {
  test('lists every verb that there is', async () => {
    const { status, out } = await world.run(['--help'])
    expect(status).toBe(0)
    for (const { name } of VERBS) expect(out).toContain(`braggline ${name}`)
  })
  test.each(VERBS.map(({ name }) => name))('%s: its options and an example', async name => {
    const { status, out, err } = await world.run([name, '--help'])
    expect({ status, err }).toEqual({ status: 0, err: '' })
    const verb = VERBS.find(verb => verb.name === name)!
    for (const option of verb.options) expect(out).toContain(`--${option.name}`)
    expect(out).toContain(`\n  braggline ${name}`)
    for (const line of out.split('\n')) expect(line.length).toBeLessThanOrEqual(120)
  })
})

test('the version', async () => expect((await world.run(['--version'])).status).toBe(0))

describe('one line on standard error, status 2', () => {
  test.each([
    [[], /no verb/],
    [['chek'], /unknown verb chek; did you mean check\?/],
    [['\u001b[31m'], /unknown verb �\[31m/],
    [['--fix'], /before a verb/],
    [['check'], /no file is named/],
    [['check', '--bogus', 'x'], /unknown option --bogus/],
    [['check', '--fail-on', 'warnin', 'x'], /did you mean warning\?/],
    [['check', '--document', '0', 'x'], /whole number/],
    [['report', 'gone.lattice.yaml'], /gone\.lattice\.yaml: no such file or folder/],
    [['fold', 'x'], /--at/],
    [['fold', '--at', '1,2,3'], /no file is named/],
    [['serve'], /--stdio/],
    [['explain', 'point-outside-zones'], /did you mean|no rule/],
  ])('%j', async (args, message) => {
    const { status, out, err } = await world.run(args)
    expect(status).toBe(2)
    expect(out).toBe('')
    expect(err).toMatch(/^braggline: [^\n]*\n$/)
    expect(err).toMatch(message)
  })
})

describe('explain', () => {
  test('lists all rules', async () => {
    const { out } = await world.run(['explain'])
    expect(out.trimEnd().split('\n')).toHaveLength(CHECKS.length)
  })
  test.each(CHECKS.map(({ id }) => id))('%s', async id => {
    const { status, out } = await world.run(['explain', id])
    const { summary, wrong } = CHECKS.find(check => check.id === id)!
    expect(status).toBe(0)
    expect(out.replace(/\s+/g, ' ')).toContain(summary)
    expect(out).toContain(wrong.split('\n')[0])
  })
})
