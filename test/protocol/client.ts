/** A small client that drives a real server over stdio. */
import { type ChildProcess, spawn } from 'node:child_process'
import { join } from 'node:path'
import { fileURLToPath } from 'node:url'
import {
  type ClientCapabilities,
  createProtocolConnection,
  type Diagnostic,
  type InitializeResult,
  type ProtocolConnection,
  type PublishDiagnosticsParams,
  StreamMessageReader,
  StreamMessageWriter,
} from 'vscode-languageserver-protocol/node'

export const ROOT = fileURLToPath(new URL('../..', import.meta.url))
export const CLI = join(ROOT, 'dist', 'cli.js')

/** What a modern editor says of itself, as far as this server asks. */
export const MODERN: ClientCapabilities = {
  textDocument: {
    diagnostic: { dynamicRegistration: false },
    publishDiagnostics: { relatedInformation: true, versionSupport: true },
    hover: { contentFormat: ['markdown', 'plaintext'] },
    codeAction: { codeActionLiteralSupport: { codeActionKind: { valueSet: ['quickfix', 'source.fixAll'] } } },
    documentSymbol: { hierarchicalDocumentSymbolSupport: true },
  },
  workspace: {
    configuration: true,
    workspaceEdit: { documentChanges: true },
    diagnostics: { refreshSupport: true },
  },
}

/** An editor that knows next to nothing: findings must be pushed to it. */
export const PLAIN: ClientCapabilities = {}

export class Client {
  readonly pushed: PublishDiagnosticsParams[] = []
  readonly #listeners = new Set<() => void>()
  #version = 0

  private constructor(
    readonly process: ChildProcess,
    readonly connection: ProtocolConnection,
    readonly uri: string,
  ) {}

  static async start(
    capabilities: ClientCapabilities,
    {
      uri = 'file:///crystal.lattice.yaml',
      checks = {} as Record<string, string>,
      server: script = CLI,
      args = ['serve', '--stdio'],
      configuration = (_section: string | undefined): unknown => ({ checks }),
    } = {},
  ): Promise<Client & { initialized: InitializeResult }> {
    const server = spawn(process.execPath, [script, ...args], { stdio: ['pipe', 'pipe', 'inherit'] })
    const connection = createProtocolConnection(
      new StreamMessageReader(server.stdout!),
      new StreamMessageWriter(server.stdin!),
    )
    const client = new Client(server, connection, uri)
    connection.onRequest('workspace/configuration', ({ items }: { items: { section?: string }[] }) =>
      items.map(({ section }) => configuration(section)),
    )
    connection.onRequest('client/registerCapability', () => null)
    connection.onRequest('workspace/diagnostic/refresh', () => null)
    connection.onNotification('textDocument/publishDiagnostics', (params: PublishDiagnosticsParams) => {
      client.pushed.push(params)
      for (const listener of client.#listeners) listener()
    })
    connection.listen()
    const initialized = await connection.sendRequest<InitializeResult>('initialize', {
      processId: process.pid,
      rootUri: null,
      capabilities,
    })
    await connection.sendNotification('initialized', {})
    return Object.assign(client, { initialized })
  }

  open(text: string): Promise<void> {
    this.#version = 1
    return this.connection.sendNotification('textDocument/didOpen', {
      textDocument: { uri: this.uri, languageId: 'braggline', version: 1, text },
    })
  }

  get version(): number {
    return this.#version
  }

  change(text: string): Promise<void> {
    return this.connection.sendNotification('textDocument/didChange', {
      textDocument: { uri: this.uri, version: ++this.#version },
      contentChanges: [{ text }],
    })
  }

  request<R>(method: string, params: object = {}): Promise<R> {
    return this.connection.sendRequest<R>(method, { textDocument: { uri: this.uri }, ...params })
  }

  async pull(): Promise<Diagnostic[]> {
    return (await this.request<{ items: Diagnostic[] }>('textDocument/diagnostic')).items
  }

  /** The push for this version of the text; of servers that do not say the version any that has not been taken. */
  pushFor(version: number, uri = this.uri): Promise<Diagnostic[]> {
    return new Promise(resolve => {
      const look = () => {
        const found = this.pushed.findLast(
          params => params.uri === uri && (params.version ?? version) === version,
        )
        if (!found) return
        this.#listeners.delete(look)
        resolve(found.diagnostics)
      }
      this.#listeners.add(look)
      look()
    })
  }

  /** Shut down as the protocol asks; gives the exit code. */
  async stop(): Promise<number | null> {
    const ended = new Promise<number | null>(resolve => this.process.once('exit', resolve))
    await this.connection.sendRequest('shutdown')
    await this.connection.sendNotification('exit')
    return ended
  }
}

/** The text with the place marked by `$0` taken out, and that place as a position. */
export function marked(text: string): { text: string; position: { line: number; character: number } } {
  const at = text.indexOf('$0')
  if (at < 0) throw new Error('no $0 in the text')
  const before = text.slice(0, at).split('\n')
  return {
    text: text.replace('$0', ''),
    position: { line: before.length - 1, character: before.at(-1)!.length },
  }
}
