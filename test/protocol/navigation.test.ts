import { existsSync } from 'node:fs'
import { afterEach, beforeAll, expect, test } from 'vitest'
import type {
  CodeLens,
  DocumentHighlight,
  DocumentLink,
  FoldingRange,
  InlayHint,
  Location,
  SelectionRange,
  SemanticTokens,
  SemanticTokensDelta,
  TextEdit,
  WorkspaceEdit,
  WorkspaceSymbol,
} from 'vscode-languageserver-protocol/node'
import { CLI, Client, MODERN, marked } from './client.ts'

beforeAll(() => {
  if (!existsSync(CLI)) throw new Error(`${CLI} is missing: run \`npm run build\` first`)
})

let client: Client
afterEach(() => client?.stop())

const { text: TEXT, position } = marked(`title: Cubic
lattice: {bravais: cP, a: 4}
points:
  Q: [1/4, 0, 0]
path: Γ – Q$0 – X
checks:
  path-misses: off
`)

async function open(): Promise<void> {
  client = await Client.start(MODERN)
  await client.open(TEXT)
}

test('names: definition, references, highlights, renaming', async () => {
  await open()
  const definition = await client.request<Location[]>('textDocument/definition', { position })
  expect(definition).toEqual([
    { uri: client.uri, range: { start: { line: 3, character: 2 }, end: { line: 3, character: 3 } } },
  ])
  const references = await client.request<Location[]>('textDocument/references', {
    position,
    context: { includeDeclaration: true },
  })
  expect(references.map(({ range }) => range.start.line)).toEqual([3, 4])
  const highlights = await client.request<DocumentHighlight[]>('textDocument/documentHighlight', { position })
  expect(highlights).toHaveLength(2)
  const edit = await client.request<WorkspaceEdit>('textDocument/rename', { position, newName: 'N' })
  expect(edit.documentChanges).toMatchObject([
    { textDocument: { uri: client.uri, version: 1 }, edits: [{ newText: '"N"' }, { newText: 'N' }] },
  ])
  await expect(
    client.request('textDocument/prepareRename', { position: { line: 4, character: 6 } }),
  ).rejects.toThrow('Γ is a label of the book; define it under points to rename it.')
  await expect(client.request('textDocument/rename', { position, newName: '2' })).rejects.toThrow('no label')
})

test('form: folding, selection, links, symbols of the workspace', async () => {
  await open()
  const folds = await client.request<FoldingRange[]>('textDocument/foldingRange')
  expect(folds.map(({ startLine, endLine }) => [startLine, endLine])).toEqual([
    [2, 3],
    [5, 6],
  ])
  const [selection] = await client.request<SelectionRange[]>('textDocument/selectionRange', {
    positions: [position],
  })
  expect(selection.parent).toBeDefined()
  const links = await client.request<DocumentLink[]>('textDocument/documentLink')
  expect(links.map(({ target }) => target)).toEqual([
    expect.stringMatching(/\/docs\/rules\/path-misses\.md$/),
  ])
  const found = await client.connection.sendRequest<WorkspaceSymbol[]>('workspace/symbol', { query: 'q' })
  expect(found.map(({ name, containerName }) => [name, containerName])).toEqual([['Q', 'Cubic']])
})

test('colours come whole, as a difference and for a range', async () => {
  await open()
  const full = await client.request<SemanticTokens>('textDocument/semanticTokens/full')
  expect(full.data).toHaveLength(4 * 5)
  await client.change(TEXT.replace('Γ – Q', 'Γ – Q – M'))
  const delta = await client.request<SemanticTokensDelta>('textDocument/semanticTokens/full/delta', {
    previousResultId: full.resultId,
  })
  expect(delta.edits.flatMap(({ data }) => data)).toHaveLength(5)
  const range = { start: { line: 3, character: 0 }, end: { line: 4, character: 0 } }
  const part = await client.request<SemanticTokens>('textDocument/semanticTokens/range', { range })
  expect(part.data).toHaveLength(5)
})

test('formatting: the whole, some lines, while typing', async () => {
  client = await Client.start(MODERN)
  await client.open('unit:   nm\nlabels:   none\nlattice: {bravais: cP, a: 4}\n')
  const options = { tabSize: 2, insertSpaces: true }
  const all = await client.request<TextEdit[]>('textDocument/formatting', { options })
  expect(all).toHaveLength(2)
  const range = { start: { line: 1, character: 0 }, end: { line: 2, character: 0 } }
  const some = await client.request<TextEdit[]>('textDocument/rangeFormatting', { options, range })
  expect(some.map(edit => edit.range.start)).toEqual([{ line: 1, character: 8 }])
  const onType = await client.request<TextEdit[]>('textDocument/onTypeFormatting', {
    options,
    position: { line: 1, character: 0 },
    ch: '\n',
  })
  expect(onType.map(edit => edit.range.start.line)).toEqual([0])
})

test('hints and lenses, with the rest when it is asked for', async () => {
  await open()
  const range = { start: { line: 0, character: 0 }, end: { line: 9, character: 0 } }
  const hints = await client.request<InlayHint[]>('textDocument/inlayHint', { range })
  expect(hints.map(({ label }) => label)).toEqual(['volume 64 Å³'])
  const hint = await client.connection.sendRequest<InlayHint>('inlayHint/resolve', hints[0])
  expect(hint.tooltip).toBe('Volume of the primitive cell: 64 Å³.')
  const lenses = await client.request<CodeLens[]>('textDocument/codeLens')
  expect(lenses.map(lens => lens.range.start.line)).toEqual([4])
  const lens = await client.connection.sendRequest<CodeLens>('codeLens/resolve', lenses[0])
  // This client has no commands of ours: a title, and nothing to click.
  expect(lens.command).toEqual({ title: expect.stringContaining('Å⁻¹ in 2 segments'), command: '' })
})

test('what a client makes up is no reason to fail', async () => {
  await open()
  const nonsense = {
    position: { line: 0, character: 0 },
    label: 'x',
    data: { uri: 'file:///no', index: 'a' },
  }
  expect(await client.connection.sendRequest('inlayHint/resolve', nonsense)).toEqual(nonsense)
  const lens = { range: { start: { line: 0, character: 0 }, end: { line: 0, character: 0 } }, data: 7 }
  expect(await client.connection.sendRequest('codeLens/resolve', lens)).toEqual(lens)
})
