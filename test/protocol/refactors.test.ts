/** Refactorings over the protocol, as editors of several abilities get them. */
import { afterEach, describe, expect, test } from 'vitest'
import type { ClientCapabilities, CodeAction, TextDocumentEdit } from 'vscode-languageserver-protocol/node'
import { REWRITE_FOR_SUPERCELL } from '../../server/src/protocol.ts'
import { Client, MODERN, marked, PLAIN } from './client.ts'

/** What VS Code says of itself. */
const RESOLVING: ClientCapabilities = {
  ...MODERN,
  textDocument: {
    ...MODERN.textDocument,
    codeAction: {
      ...MODERN.textDocument!.codeAction,
      dataSupport: true,
      resolveSupport: { properties: ['edit'] },
    },
  },
  workspace: {
    ...MODERN.workspace,
    workspaceEdit: { documentChanges: true, changeAnnotationSupport: { groupsOnLabel: true } },
  },
}

const TEXT = `lattice: {bravais: cP, a: 4}
atoms:
  - Po: [0, 0, 0]
supercell: [$02, 1, 1]
`

let client: Awaited<ReturnType<typeof Client.start>>
afterEach(() => client.stop())

async function actions(text: string, only?: string[]): Promise<CodeAction[]> {
  const { text: plain, position } = marked(text)
  await client.open(plain)
  return client.request<CodeAction[]>('textDocument/codeAction', {
    range: { start: position, end: position },
    context: { diagnostics: [], ...(only ? { only } : {}) },
  })
}

describe('an editor that resolves', () => {
  test('gets the edit when the action is chosen, to be looked at first', async () => {
    client = await Client.start(RESOLVING)
    expect(client.initialized.capabilities.codeActionProvider).toMatchObject({
      resolveProvider: true,
      codeActionKinds: expect.arrayContaining(['refactor.rewrite', 'refactor.extract']),
    })
    const [action] = await actions(TEXT, ['refactor'])
    expect(action).toMatchObject({ title: 'Rewrite the file for this supercell', kind: 'refactor.rewrite' })
    expect(action.edit).toBeUndefined()
    const resolved = await client.connection.sendRequest<CodeAction>('codeAction/resolve', action)
    const [change] = resolved.edit!.documentChanges as TextDocumentEdit[]
    expect(change.textDocument).toEqual({ uri: client.uri, version: 1 })
    expect(change.edits.every(edit => 'annotationId' in edit)).toBe(true)
    expect(Object.values(resolved.edit!.changeAnnotations!)).toMatchObject([{ needsConfirmation: true }])
  })

  test('is told why nothing is done: the text has changed', async () => {
    client = await Client.start(RESOLVING)
    const [action] = await actions(TEXT, ['refactor'])
    await client.change('lattice: {bravais: cP, a: 4}\n')
    await expect(client.connection.sendRequest('codeAction/resolve', action)).rejects.toThrow(
      /Nothing was changed/,
    )
  })

  test('is not bothered by the bulb that follows the cursor', async () => {
    client = await Client.start(RESOLVING)
    const { text, position } = marked(TEXT)
    await client.open(text)
    const found = await client.request<CodeAction[]>('textDocument/codeAction', {
      range: { start: position, end: position },
      context: { diagnostics: [], triggerKind: 2 },
    })
    expect(found.filter(({ kind }) => kind?.startsWith('refactor'))).toEqual([])
  })
})

test('an editor that knows next to nothing gets the edit at once', async () => {
  client = await Client.start(PLAIN)
  const [action] = await actions(TEXT, ['refactor.rewrite'])
  expect(action.edit!.changeAnnotations).toBeUndefined()
  expect(action.data).toBeUndefined()
  expect(action.edit!.documentChanges).toBeUndefined()
  expect(action.edit!.changes![client.uri].length).toBeGreaterThan(1)
})

test('the command asks from anywhere in the document', async () => {
  client = await Client.start(RESOLVING)
  await client.open(TEXT.replace('$0', ''))
  const ask = (version: number) =>
    client.connection.sendRequest<unknown[] | null>(REWRITE_FOR_SUPERCELL, {
      uri: client.uri,
      version,
      position: { line: 0, character: 0 },
    })
  expect((await ask(1))?.length).toBeGreaterThan(1)
  expect(await ask(2)).toBeNull()
})
