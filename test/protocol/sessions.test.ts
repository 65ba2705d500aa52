/** People type, delete, paste and undo while requests are in flight: server and client stay in step. */
import { readdirSync, readFileSync } from 'node:fs'
import { join } from 'node:path'
import fc from 'fast-check'
import { expect, test } from 'vitest'
import type { ClientCapabilities, Diagnostic } from 'vscode-languageserver-protocol/node'
import { Client, MODERN, PLAIN, ROOT } from './client.ts'

const FILES = ['demo', 'demo/drafts'].flatMap(folder =>
  readdirSync(join(ROOT, folder))
    .filter(name => name.endsWith('.lattice.yaml'))
    .map(name => readFileSync(join(ROOT, folder, name), 'utf8')),
)
const CLIPBOARD = FILES.flatMap(text => text.split(/(?<=\n)(?=\S)/))
const LONGEST_PASTE = 400
const METHODS = [
  'hover',
  'completion',
  'signatureHelp',
  'documentSymbol',
  'codeAction',
  'diagnostic',
  'definition',
  'references',
  'documentHighlight',
  'selectionRange',
  'foldingRange',
  'documentLink',
  'semanticTokens/full',
  'codeLens',
  'inlayHint',
  'formatting',
]

type Step =
  | { readonly kind: 'insert'; readonly at: number; readonly text: string }
  | { readonly kind: 'delete'; readonly at: number; readonly length: number }
  | { readonly kind: 'undo' }
  | { readonly kind: 'ask'; readonly at: number; readonly method: string }

const place = fc.double({ min: 0, max: 1, noNaN: true })
const step: fc.Arbitrary<Step> = fc.oneof(
  {
    weight: 6,
    arbitrary: fc.record({
      kind: fc.constant('insert' as const),
      at: place,
      text: fc.constantFrom(...'abXΓ01./,:-–|[]{}# \n'.split(''), '\r\n', 'é', '😀', 'path: '),
    }),
  },
  {
    weight: 2,
    arbitrary: fc.record({
      kind: fc.constant('insert' as const),
      at: place,
      text: fc.constantFrom(...CLIPBOARD).map(text => text.slice(0, LONGEST_PASTE)),
    }),
  },
  {
    weight: 4,
    arbitrary: fc.record({ kind: fc.constant('delete' as const), at: place, length: fc.nat(20) }),
  },
  { weight: 2, arbitrary: fc.constant({ kind: 'undo' as const }) },
  {
    weight: 4,
    arbitrary: fc.record({
      kind: fc.constant('ask' as const),
      at: place,
      method: fc.constantFrom(...METHODS),
    }),
  },
)

/** The text as an editor keeps it: every change goes out as the range that it replaces. */
class Editor {
  readonly #undo: { start: number; end: number; text: string }[] = []
  readonly answers: Promise<unknown>[] = []
  #version = 1

  constructor(
    private readonly client: Client,
    private readonly uri: string,
    public text: string,
  ) {
    void client.connection.sendNotification('textDocument/didOpen', {
      textDocument: { uri, languageId: 'braggline', version: 1, text },
    })
  }

  get version(): number {
    return this.#version
  }

  #position(offset: number) {
    const lines = this.text.slice(0, offset).split('\n')
    return { line: lines.length - 1, character: lines.at(-1)!.length }
  }

  #place(x: number): number {
    let offset = Math.floor(x * this.text.length)
    // An editor never puts the cursor inside of a character or between the halves of a line break.
    while (
      /[\udc00-\udfff]/.test(this.text[offset] ?? '') ||
      this.text.slice(offset - 1, offset + 1) === '\r\n'
    )
      offset++
    return offset
  }

  #replace(start: number, end: number, text: string): void {
    const range = { start: this.#position(start), end: this.#position(end) }
    void this.client.connection.sendNotification('textDocument/didChange', {
      textDocument: { uri: this.uri, version: ++this.#version },
      contentChanges: [{ range, text }],
    })
    this.text = this.text.slice(0, start) + text + this.text.slice(end)
  }

  take(step: Step): void {
    if (step.kind === 'ask') this.#ask(step)
    else if (step.kind === 'undo') {
      const last = this.#undo.pop()
      if (last) this.#replace(last.start, last.end, last.text)
    } else {
      const start = this.#place(step.at)
      const text = step.kind === 'insert' ? step.text : ''
      const end =
        step.kind === 'insert'
          ? start
          : Math.max(start, this.#place(Math.min(1, step.at + step.length / Math.max(1, this.text.length))))
      this.#undo.push({ start, end: start + text.length, text: this.text.slice(start, end) })
      this.#replace(start, end, text)
    }
  }

  #ask({ at, method }: { at: number; method: string }): void {
    const position = this.#position(this.#place(at))
    this.answers.push(
      this.client.connection.sendRequest(`textDocument/${method}`, {
        textDocument: { uri: this.uri },
        position,
        positions: [position],
        range: { start: position, end: position },
        context: { diagnostics: [], includeDeclaration: true },
        options: { tabSize: 2, insertSpaces: true },
      }),
    )
  }
}

const said = ({ range, code, severity, message }: Diagnostic) => ({ range, code, severity, message })

async function findings(
  client: Client,
  capabilities: ClientCapabilities,
  uri: string,
  version: number,
): Promise<ReturnType<typeof said>[]> {
  await client.connection.sendRequest('braggline/checked', { uri, version })
  const items = capabilities.textDocument?.diagnostic
    ? (
        await client.connection.sendRequest<{ items: Diagnostic[] }>('textDocument/diagnostic', {
          textDocument: { uri },
        })
      ).items
    : await client.pushFor(version, uri)
  return items.map(said)
}

test.each([
  ['pulls', MODERN],
  ['is pushed to', PLAIN],
])('a client that %s ends with the findings of a fresh start', async (_name, capabilities) => {
  const client = await Client.start(capabilities)
  const fresh = await Client.start(capabilities)
  let session = 0
  await fc.assert(
    fc.asyncProperty(
      fc.constantFrom(...FILES),
      fc.array(step, { minLength: 5, maxLength: 60, size: 'max' }),
      async (text, steps) => {
        const uri = `file:///session-${++session}.lattice.yaml`
        const editor = new Editor(client, uri, text)
        for (const each of steps) editor.take(each)
        await Promise.all(editor.answers)
        const seen = await findings(client, capabilities, uri, editor.version)
        const again = new Editor(fresh, uri, editor.text)
        expect(seen).toEqual(await findings(fresh, capabilities, uri, again.version))
        for (const each of [client, fresh])
          await each.connection.sendNotification('textDocument/didClose', { textDocument: { uri } })
      },
    ),
    { numRuns: 60 },
  )
  expect([await client.stop(), await fresh.stop()]).toEqual([0, 0])
})
