/** Editors that know little and editors that count otherwise get the same answers as any other. */
import { afterEach, describe, expect, test } from 'vitest'
import type { CodeAction, CompletionItem, Hover } from 'vscode-languageserver-protocol/node'
import { Client, MODERN, PLAIN } from './client.ts'

let client: Client | undefined
afterEach(async () => {
  await client?.stop()
  client = undefined
})

// Before `Ξ`: in UTF-16 `😀` counts two, `Γ` and `–` one; in UTF-8 four, two and three; in UTF-32 one each.
const LINE = 'path: Γ – Ξ # 😀\n'
const TEXT = `lattice: {bravais: cF, a: 5.43} # 😀\n${LINE}`
const COLUMNS = { 'utf-16': 10, 'utf-8': 13, 'utf-32': 10 }

describe.each(['utf-16', 'utf-8', 'utf-32'] as const)('columns in %s', encoding => {
  const capabilities = { ...PLAIN, general: { positionEncodings: [encoding] } }
  const position = { line: 1, character: COLUMNS[encoding] }

  test('are agreed on, and are those of findings, fixes and questions', async () => {
    const started = await Client.start(capabilities)
    client = started
    expect(started.initialized.capabilities.positionEncoding).toBe(encoding)
    await client.open(TEXT)
    const [finding] = await client.pushFor(1)
    expect(finding.code).toBe('path-label-unknown')
    expect(finding.range.start).toEqual(position)
    expect(finding.range.end.character - finding.range.start.character).toBe(encoding === 'utf-8' ? 2 : 1)
    const hover = await client.request<Hover | null>('textDocument/hover', {
      position: { line: 1, character: 6 },
    })
    expect(hover?.range).toEqual({
      start: { line: 1, character: 6 },
      end: { line: 1, character: encoding === 'utf-8' ? 8 : 7 },
    })
  })

  test('a changed text is followed', async () => {
    client = await Client.start(capabilities)
    await client.open(TEXT)
    await client.pushFor(1)
    await client.change(TEXT.replace('Ξ', 'X'))
    expect(await client.pushFor(2)).toEqual([])
  })
})

test('columns past the end of a line, or inside of a character, are no harm', async () => {
  client = await Client.start({ ...PLAIN, general: { positionEncodings: ['utf-8'] } })
  await client.open(TEXT)
  for (const character of [7, 20, 21, 22, 23, 999])
    await expect(
      client.request('textDocument/hover', { position: { line: 1, character } }),
    ).resolves.not.toThrow()
})

test('UTF-16 is kept where the editor can do both: then changes of a part are sent', async () => {
  const started = await Client.start({ ...PLAIN, general: { positionEncodings: ['utf-8', 'utf-16'] } })
  client = started
  expect(started.initialized.capabilities.positionEncoding).toBe('utf-16')
  expect(started.initialized.capabilities.textDocumentSync).toMatchObject({ change: 2 })
})

describe('an editor of few capabilities', () => {
  test('gets plain text for completion, never a snippet', async () => {
    client = await Client.start(PLAIN)
    await client.open('lattice:\n  b\n')
    const answer = await client.request<CompletionItem[] | { items: CompletionItem[] }>(
      'textDocument/completion',
      { position: { line: 1, character: 3 } },
    )
    const items = Array.isArray(answer) ? answer : answer.items
    expect(items.length).toBeGreaterThan(0)
    for (const item of items) {
      expect(item.insertTextFormat ?? 1).toBe(1)
      expect(`${item.textEdit?.newText ?? item.insertText ?? ''}`).not.toMatch(/\$\{?\d/)
    }
  })

  test('gets fixes as edits', async () => {
    client = await Client.start(PLAIN)
    await client.open('lattice: {bravais: cF, a: 5.43}\npaths: Γ – X\n')
    const [finding] = await client.pushFor(1)
    const actions = await client.request<CodeAction[]>('textDocument/codeAction', {
      range: finding.range,
      context: { diagnostics: [finding] },
    })
    expect(actions[0].edit).toEqual({
      changes: { [client.uri]: [{ range: finding.range, newText: 'path' }] },
    })
  })
})

test('nothing is offered in `initialize` that a modern editor is then refused', async () => {
  const started = await Client.start(MODERN)
  client = started
  await client.open(TEXT)
  const { capabilities } = started.initialized
  const at = { line: 1, character: 6 }
  const range = { start: at, end: at }
  const questions: Record<string, object | undefined> = {
    hover: capabilities.hoverProvider ? { position: at } : undefined,
    definition: capabilities.definitionProvider ? { position: at } : undefined,
    references: capabilities.referencesProvider
      ? { position: at, context: { includeDeclaration: true } }
      : undefined,
    documentHighlight: capabilities.documentHighlightProvider ? { position: at } : undefined,
    selectionRange: capabilities.selectionRangeProvider ? { positions: [at] } : undefined,
    foldingRange: capabilities.foldingRangeProvider ? {} : undefined,
    documentLink: capabilities.documentLinkProvider ? {} : undefined,
    codeLens: capabilities.codeLensProvider ? {} : undefined,
    inlayHint: capabilities.inlayHintProvider ? { range } : undefined,
    signatureHelp: capabilities.signatureHelpProvider ? { position: at } : undefined,
    documentSymbol: capabilities.documentSymbolProvider ? {} : undefined,
    'semanticTokens/full': capabilities.semanticTokensProvider ? {} : undefined,
    formatting: capabilities.documentFormattingProvider
      ? { options: { tabSize: 2, insertSpaces: true } }
      : undefined,
    rangeFormatting: capabilities.documentRangeFormattingProvider
      ? { range, options: { tabSize: 2, insertSpaces: true } }
      : undefined,
  }
  for (const [method, params] of Object.entries(questions))
    if (params)
      await expect(client.request(`textDocument/${method}`, params), method).resolves.not.toBeUndefined()
})
