import { existsSync } from 'node:fs'
import { afterEach, beforeAll, beforeEach, describe, expect, test } from 'vitest'
import type { FillResult } from '../../server/src/protocol.ts'
import { CLI, Client, MODERN } from './client.ts'

beforeAll(() => {
  if (!existsSync(CLI)) throw new Error(`${CLI} is missing: run \`npm run build\` first`)
})

let client: Client
beforeEach(async () => {
  client = await Client.start(MODERN)
})
afterEach(async () => {
  await client.stop()
})

const TWO = 'lattice: {bravais: cP, a: 1}\n---\nlattice: {bravais: cP, a: 2}\n'

const fill = (text: string, more: object = {}): Promise<FillResult | null> =>
  client.connection.sendRequest('braggline/fill', {
    uri: client.uri,
    version: client.version,
    form: { name: 'a.liquid', text },
    partials: {},
    ...more,
  })

describe('braggline/fill', () => {
  test('fills a form from the crystal that is named, or that the cursor is in', async () => {
    await client.open(TWO)
    const form = 'a = {{ lattice.parameters.a }} of {{ file }}'
    const text = (a: number) => `a = ${a} of crystal.lattice.yaml`
    expect(await fill(form)).toEqual({ version: 1, document: 1, text: text(1) })
    expect(await fill(form, { document: 2 })).toEqual({ version: 1, document: 2, text: text(2) })
    expect(await fill(form, { position: { line: 2, character: 3 } })).toEqual({
      version: 1,
      document: 2,
      text: text(2),
    })
    expect(await fill(form, { document: 3 })).toBeNull()
  })

  test('asks for partials, level by level, and for none outside the folder', async () => {
    await client.open(TWO)
    const form = '{% render "row.liquid" %}{% render "../secret" %}'
    expect(await fill(form)).toMatchObject({ needs: ['row.liquid'] })
    const row = { 'row.liquid': '{% render "deeper.liquid" %}' }
    expect(await fill(form, { partials: row })).toMatchObject({ needs: ['deeper.liquid'] })
    const both = { ...row, 'deeper.liquid': null }
    expect(await fill(form, { partials: both })).toMatchObject({
      fault: 'row.liquid:1:1: there is no partial "deeper.liquid" in the folder of the form',
    })
  })

  test('says what is wrong with the form, and with the lattice file', async () => {
    await client.open('lattice: {bravais: cP, a: 1}\n')
    expect(await fill('\n{{ titel }}')).toEqual({
      version: 1,
      document: 1,
      fault: 'a.liquid:2:4: there is no `titel`; did you mean `title`?',
    })
    await client.change('lattice: {bravais: cP, a: 1}\npath: Γ – Qq\n')
    expect(await fill('x')).toMatchObject({
      fault: 'The lattice file has 1 error: no form is filled from it.',
    })
  })

  test('a form without end costs its thread, and the server answers meanwhile and after', async () => {
    await client.open(TWO)
    const loops = ['a', 'b', 'c'].map(name => `{% for ${name} in (1..99999) %}`).join('')
    let ended = false
    const endless = fill(`${loops}${'{% endfor %}'.repeat(3)}`).finally(() => {
      ended = true
    })
    expect(await fill('{{ unit }}')).toMatchObject({ text: 'angstrom' })
    expect(ended).toBe(false)
    expect(await endless).toMatchObject({
      fault: expect.stringMatching(/^a.liquid:1:\d+: .*takes longer than 10 s/),
    })
    expect(await fill('{{ unit }}')).toMatchObject({ text: 'angstrom' })
  })
})
