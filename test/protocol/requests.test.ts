/** The requests of our own that panels and commands of an editor send. */
import { existsSync } from 'node:fs'
import { afterEach, beforeAll, expect, test } from 'vitest'
import type { CheckTextResult, PastedLatticeResult, ReportResult } from '../../server/src/protocol.ts'
import { CLI, Client, MODERN } from './client.ts'

beforeAll(() => {
  if (!existsSync(CLI)) throw new Error(`${CLI} is missing: run \`npm run build\` first`)
})

let client: Client | undefined
afterEach(async () => {
  await client?.stop()
  client = undefined
})

const TEXT = 'title: <b>x</b>\nlattice: {bravais: cF, a: 5.43}\npath: Γ – Xx\nchecks: {path-misses: off}\n'

test('the report of an open text, as Markdown and as a page', async () => {
  client = await Client.start(MODERN, { uri: 'file:///tmp/my%20crystal.lattice.yaml' })
  await client.open(TEXT)
  const ask = (format?: string) =>
    client!.connection.sendRequest<ReportResult>('braggline/report', { uri: client!.uri, version: 1, format })
  const { text, version, pending } = await ask()
  expect({ version, pending }).toEqual({ version: 1, pending: false })
  expect(text).toMatch(/^# \\<b\\>x\\<\/b\\>\n\nmy crystal\.lattice\.yaml, document 1\n/)
  expect(text).toContain('path-label-unknown')
  expect((await ask('html')).text).toMatch(/^<!DOCTYPE html>/)
})

test('a text that is not open is checked under the settings of the workspace', async () => {
  client = await Client.start(MODERN, { checks: { 'path-label-unknown': 'warning' } })
  const { findings } = await client.connection.sendRequest<CheckTextResult>('braggline/checkText', {
    uri: 'file:///other.lattice.yaml',
    text: TEXT,
  })
  expect(findings.map(({ code, severity, range }) => [code, severity, range.start])).toEqual([
    ['path-label-unknown', 2, { line: 2, character: 10 }],
  ])
})

test('vectors are pasted into an open text, or into none', async () => {
  client = await Client.start(MODERN)
  await client.open(TEXT)
  const ask = (params: object) =>
    client!.connection.sendRequest<PastedLatticeResult | null>('braggline/pastedLattice', {
      text: 'Å\n4 0 0\n0 4 0\n0 0 4',
      ...params,
    })
  const into = await ask({ uri: client.uri, position: { line: 1, character: 0 } })
  expect(into).toMatchObject({
    version: 1,
    choices: expect.arrayContaining([expect.objectContaining({ replaces: true })]),
  })
  const fresh = await ask({})
  expect(fresh?.choices[0]).toMatchObject({
    replaces: false,
    edits: [{ newText: expect.stringContaining('bravais: cP') }],
  })
  expect(await ask({ uri: 'file:///unknown.lattice.yaml' })).toBeNull()
})
