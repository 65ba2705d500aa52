/** Completion, signatures and skeletons over the protocol. */
import { existsSync } from 'node:fs'
import { afterEach, beforeAll, describe, expect, test } from 'vitest'
import type {
  ClientCapabilities,
  CompletionItem,
  InsertReplaceEdit,
  SignatureHelp,
  TextEdit,
} from 'vscode-languageserver-protocol/node'
import { CLI, Client, MODERN, marked, PLAIN } from './client.ts'

beforeAll(() => {
  if (!existsSync(CLI)) throw new Error(`${CLI} is missing: run \`npm run build\` first`)
})

let client: Client | undefined
afterEach(async () => {
  await client?.stop()
  client = undefined
})

const SKILLED: ClientCapabilities = {
  ...MODERN,
  textDocument: {
    ...MODERN.textDocument,
    completion: { completionItem: { snippetSupport: true, insertReplaceSupport: true } },
  },
}

async function itemsAt(source: string, capabilities = SKILLED): Promise<CompletionItem[]> {
  const { text, position } = marked(source)
  client = await Client.start(capabilities)
  await client.open(text)
  return client.request<CompletionItem[]>('textDocument/completion', { position })
}

test('a skilled editor gets snippets, and both ranges of the word', async () => {
  const items = await itemsAt('lattice:\n  bravais: h$0P\n')
  const edit = items.find(({ label }) => label === 'hP')!.textEdit as InsertReplaceEdit
  expect(edit.newText).toBe(`hP\na: \${1:3.2}\nc: \${2:4.6}`)
  expect([edit.insert.end.character, edit.replace.end.character]).toEqual([12, 13])
})

test('a plain one gets plain text', async () => {
  const items = await itemsAt('lattice:\n  bravais: h$0\n', PLAIN)
  for (const { insertTextFormat, command, textEdit } of items) {
    expect(insertTextFormat).toBe(1)
    expect(command).toBeUndefined()
    expect((textEdit as TextEdit).newText).not.toMatch(/\$\{|\n/)
  }
})

test('the long text comes by resolving', async () => {
  const items = await itemsAt('atoms:\n  - P$0\n')
  const lead = items.find(({ label }) => label === 'Pb')!
  expect(lead.documentation).toBeUndefined()
  const { documentation } = await client!.connection.sendRequest<CompletionItem>(
    'completionItem/resolve',
    lead,
  )
  expect(JSON.stringify(documentation)).toContain('atomic number 82')
})

test('columns are those of UTF-16', async () => {
  // 𝚪 (U+1D6AA) takes two units.
  const items = await itemsAt('title: 𝚪\nlattice: {bravais: cP, a: 4}\npath: Γ – 𝚪$0')
  const { insert } = items.find(({ label }) => label === 'X')!.textEdit as InsertReplaceEdit
  expect([insert.start.character, insert.end.character]).toEqual([10, 12])
})

describe('signatures', () => {
  test('of a k-point: the component and its frame', async () => {
    const { text, position } = marked('lattice: {bravais: cP, a: 4}\npoints:\n  Q: [1/2, $0]\n')
    client = await Client.start(MODERN)
    await client.open(text)
    const help = await client.request<SignatureHelp>('textDocument/signatureHelp', { position })
    expect([help.signatures[0].label, help.activeParameter]).toEqual(['[k1, k2, k3]', 1])
  })
})

test('the skeletons of new files', async () => {
  client = await Client.start(MODERN)
  const { skeletons } = await client.connection.sendRequest<{ skeletons: { id: string }[] }>(
    'braggline/skeletons',
    {},
  )
  expect(skeletons.map(({ id }) => id)).toEqual(
    expect.arrayContaining(['cF', 'hR', 'hR-alpha', 'vectors', 'sheet']),
  )
})

test('space groups are listed from the first request on', async () => {
  const items = await itemsAt('lattice: {bravais: cF, a: 5.4}\nspace-group: $0\n')
  // International Tables A: 230 types.
  expect(items).toHaveLength(230)
})
