/** Wires the protocol to analysis and features. Knows the connection and nothing of disk or process. */
import {
  CodeActionTriggerKind,
  type CodeAction,
  CancellationToken,
  type ClientCapabilities,
  CodeActionKind,
  type Connection,
  type Diagnostic,
  DidChangeConfigurationNotification,
  DocumentDiagnosticReportKind,
  type InitializeParams,
  type InitializeResult,
  LSPErrorCodes,
  ResponseError,
  TextDocumentSyncKind,
  TextDocuments,
} from 'vscode-languageserver'
import { TextDocument } from 'vscode-languageserver-textdocument'
import { DEFAULT_SETTINGS, type Settings, Snapshot } from './analysis.ts'
import type { Severities } from './checks/run.ts'
import type { FillForm } from './exchange/forms/form.ts'
import type { Severity } from './format/model.ts'
import type { Columns } from './format/text.ts'
import { diagnostics } from './language/diagnostics.ts'
import { codeActions, FIX_ALL } from './language/fixes.ts'
import { pastedLattice } from './language/pasted-lattice.ts'
import {
  type Abilities,
  type RefactorData,
  refactorActions,
  resolveRefactor,
} from './language/refactor/index.ts'
import { DEFAULT_EDITOR_SETTINGS, readEditorSettings } from './language/settings.ts'
import { statusOf } from './language/status.ts'
import { symbols } from './language/symbols.ts'
import { Workshop } from './meaning/workshop.ts'
import {
  CHECK_TEXT,
  type CheckTextParams,
  type CheckTextResult,
  CHECKED,
  type CheckedParams,
  type CheckedResult,
  PASTED_LATTICE,
  type PastedLatticeParams,
  type PastedLatticeResult,
  STATUS,
} from './protocol.ts'
import { EDITING, refreshShown, serveEditing } from './server-editing.ts'
import { NAVIGATION, serveNavigation } from './server-navigation.ts'
import { serveRequests } from './server-requests.ts'
import { serveWriting, WRITING } from './server-writing.ts'
import { type StartWorker, WorkerSymmetry } from './symmetry-service.ts'

export interface ServerOptions {
  readonly startWorker: StartWorker
  readonly version: string
  /** Where it can be, in a thread that ends with it. */
  readonly fillForm: FillForm
  /** URI of the folder with the pages of the rules; a client may name another in its initialization options. */
  readonly rulePages?: string
}

/** A pushed check waits as long as the last one took, so that fast typing in a large file is not checked letter by letter. */
const LONGEST_WAIT_MS = 100

export function startServer(connection: Connection, options: ServerOptions): void {
  const documents = new TextDocuments(TextDocument)
  const snapshots = new Map<string, Snapshot>()
  const waiting = new Map<string, ReturnType<typeof setTimeout>>()
  const costs = new Map<string, number>()
  let settings: Settings = DEFAULT_SETTINGS
  let editor = DEFAULT_EDITOR_SETTINGS
  /** The settings that were asked for have come. */
  let settled: Promise<void> = Promise.resolve()
  let pulls = false
  let refreshes = false
  let asksConfiguration = false
  let rulePages = options.rulePages
  let announces = false
  let commands = false
  let abilities: Abilities = { versions: false, annotations: false, resolves: false }
  let columns: Columns = 'utf-16'
  let client: ClientCapabilities = {}

  const symmetry = new WorkerSymmetry(options.startWorker, () => {
    for (const [uri, snapshot] of snapshots) if (snapshot.pending) snapshots.delete(uri)
    recheckAll()
  })
  const workshop = new Workshop(symmetry)

  function snapshotOf(uri: string): Snapshot | undefined {
    const document = documents.get(uri)
    if (!document) return undefined
    const known = snapshots.get(uri)
    if (known && known.version === document.version && known.settings === settings) return known
    const snapshot = new Snapshot(document.getText(), workshop, settings, document.version, columns)
    snapshots.set(uri, snapshot)
    return snapshot
  }

  function* openTexts(): Iterable<[uri: string, snapshot: Snapshot]> {
    for (const { uri } of documents.all()) {
      const snapshot = snapshotOf(uri)
      if (snapshot) yield [uri, snapshot]
    }
  }

  /** One bad file, one bad request: it is logged, answered with nothing, and the server goes on. */
  function guard<P, R>(
    name: string,
    nothing: R,
    answer: (params: P) => R,
  ): (params: P, token?: CancellationToken) => R {
    return (params, token = CancellationToken.None) => {
      if (token.isCancellationRequested) return nothing
      try {
        return answer(params)
      } catch (error) {
        if (error instanceof ResponseError) throw error
        connection.console.error(`${name}: ${error instanceof Error ? error.stack : String(error)}`)
        return nothing
      }
    }
  }

  /** The answer about the text that a request names; nothing where that text is not open. */
  function about<P extends { uri: string } | { textDocument: { uri: string } }, R>(
    name: string,
    nothing: R,
    answer: (snapshot: Snapshot, params: P) => R,
  ): (params: P, token?: CancellationToken) => R {
    return guard(name, nothing, params => {
      const snapshot = snapshotOf('uri' in params ? params.uri : params.textDocument.uri)
      return snapshot ? answer(snapshot, params) : nothing
    })
  }

  const findingsOf = guard('check', [] as Diagnostic[], (uri: string) => {
    const started = performance.now()
    const snapshot = snapshotOf(uri)
    if (!snapshot) return []
    const found = diagnostics(snapshot, uri, rulePages)
    costs.set(uri, performance.now() - started)
    if (announces) void connection.sendNotification(STATUS, statusOf(snapshot, uri))
    return found
  })

  function push(uri: string): void {
    const document = documents.get(uri)
    if (document)
      void connection.sendDiagnostics({ uri, version: document.version, diagnostics: findingsOf(uri) })
  }

  function schedule(uri: string): void {
    clearTimeout(waiting.get(uri))
    const wait = Math.min(costs.get(uri) ?? 0, LONGEST_WAIT_MS)
    const timer = setTimeout(() => {
      waiting.delete(uri)
      push(uri)
    }, wait)
    waiting.set(uri, timer)
  }

  function recheckAll(): void {
    refreshShown(connection, client)
    if (!pulls) for (const { uri } of documents.all()) schedule(uri)
    else if (refreshes) connection.languages.diagnostics.refresh()
  }

  async function readSettings(): Promise<void> {
    const asked: unknown = asksConfiguration
      ? await connection.workspace.getConfiguration('braggline')
      : undefined
    settings = readSeverities(asked)
    editor = readEditorSettings(asked)
    recheckAll()
  }

  function askSettings(): void {
    settled = readSettings().catch(error => connection.console.error(`settings: ${String(error)}`))
  }

  connection.onInitialize((params: InitializeParams): InitializeResult => {
    const { capabilities, initializationOptions } = params
    client = capabilities
    pulls = capabilities.textDocument?.diagnostic !== undefined
    refreshes = capabilities.workspace?.diagnostics?.refreshSupport === true
    asksConfiguration = capabilities.workspace?.configuration === true
    const pages: unknown = initializationOptions?.rulePages
    if (typeof pages === 'string') rulePages = pages
    announces = initializationOptions?.status === true
    commands = initializationOptions?.commands === true
    abilities = abilitiesOf(capabilities)
    columns = columnsFor(capabilities.general?.positionEncodings)
    return {
      serverInfo: { name: 'Braggline', version: options.version },
      capabilities: {
        positionEncoding: columns,
        // Changes of a part come with positions, which the library counts in UTF-16.
        textDocumentSync: {
          openClose: true,
          change: columns === 'utf-16' ? TextDocumentSyncKind.Incremental : TextDocumentSyncKind.Full,
          save: true,
        },
        documentSymbolProvider: { label: 'Braggline' },
        codeActionProvider: {
          codeActionKinds: [
            CodeActionKind.QuickFix,
            FIX_ALL,
            CodeActionKind.RefactorRewrite,
            CodeActionKind.RefactorExtract,
          ],
          resolveProvider: abilities.resolves,
        },
        ...NAVIGATION,
        ...EDITING,
        ...WRITING,
        ...(pulls
          ? { diagnosticProvider: { interFileDependencies: false, workspaceDiagnostics: false } }
          : {}),
      },
    }
  })

  connection.onInitialized(() => {
    if (!asksConfiguration) return
    void connection.client.register(DidChangeConfigurationNotification.type, { section: 'braggline' })
    askSettings()
  })
  connection.onDidChangeConfiguration(({ settings: sent }) => {
    if (asksConfiguration) return askSettings()
    settings = readSeverities(sent?.braggline)
    editor = readEditorSettings(sent?.braggline)
    recheckAll()
  })

  documents.onDidChangeContent(({ document }) => {
    if (!pulls) schedule(document.uri)
  })
  documents.onDidClose(({ document: { uri } }) => {
    clearTimeout(waiting.get(uri))
    waiting.delete(uri)
    snapshots.delete(uri)
    costs.delete(uri)
    if (!pulls) void connection.sendDiagnostics({ uri, diagnostics: [] })
  })

  connection.languages.diagnostics.on(({ textDocument: { uri }, previousResultId }) => {
    const items = findingsOf(uri)
    const snapshot = snapshots.get(uri)
    const resultId =
      snapshot && `${snapshot.version}/${snapshot.pending}/${JSON.stringify([...settings.severities])}`
    if (resultId !== undefined && resultId === previousResultId)
      return { kind: DocumentDiagnosticReportKind.Unchanged, resultId }
    return { kind: DocumentDiagnosticReportKind.Full, resultId, items }
  })

  // The features of the protocol.
  connection.onDocumentSymbol(about('symbols', [], snapshot => symbols(snapshot)))
  connection.onCodeAction(
    about('fixes', [], (snapshot, { textDocument: { uri }, range, context }) => {
      const request = { uri, version: snapshot.version, range, only: context.only }
      const fixes = codeActions(snapshot, { ...request, shown: context.diagnostics, abilities })
      // The bulb that follows the cursor is for faults; refactorings are for who opens the menu.
      if (context.triggerKind === CodeActionTriggerKind.Automatic && !context.only) return fixes
      return [...fixes, ...refactorActions(snapshot, request, abilities)]
    }),
  )
  connection.onCodeActionResolve((action: CodeAction): CodeAction => {
    const data = action.data as RefactorData | undefined
    if (action.edit || typeof data?.uri !== 'string') return action
    const edit = about('refactoring', undefined, (snapshot: Snapshot, asked: RefactorData) =>
      resolveRefactor(snapshot, asked, abilities),
    )(data)
    if (edit) return { ...action, edit }
    throw new ResponseError(LSPErrorCodes.RequestFailed, NOT_REFACTORED)
  })

  serveWriting({ connection, about, capabilities: () => client, hasCommands: () => commands })
  serveNavigation({
    connection,
    about,
    capabilities: () => client,
    rulePages: () => rulePages,
    open: openTexts,
  })
  serveEditing({ connection, about, settings: () => editor, commands: () => commands, snapshotOf })

  connection.onRequest(CHECKED, async ({ uri, version }: CheckedParams): Promise<CheckedResult | null> => {
    const document = documents.get(uri)
    if (!document || document.version < version) return null
    while (snapshotOf(uri)?.pending) {
      await symmetry.idle()
      snapshots.delete(uri)
    }
    return { version: snapshots.get(uri)?.version ?? version, findings: findingsOf(uri).length }
  })
  connection.onRequest(
    CHECK_TEXT,
    async ({ uri, text }: CheckTextParams, token?: CancellationToken): Promise<CheckTextResult> => {
      await settled
      const look = () => new Snapshot(text, workshop, settings)
      let snapshot = look()
      // Each round ends the searches of one document at least.
      for (let rounds = snapshot.documents.length; snapshot.pending && rounds > 0; rounds--) {
        await symmetry.idle()
        if (token?.isCancellationRequested) break
        snapshot = look()
      }
      return { findings: guard('check', [], () => diagnostics(snapshot, uri, rulePages))(undefined) }
    },
  )
  connection.onRequest(
    PASTED_LATTICE,
    guard(
      'pasted lattice',
      null,
      ({ text, uri, position }: PastedLatticeParams): PastedLatticeResult | null => {
        const snapshot = uri === undefined ? new Snapshot('', workshop, settings) : snapshotOf(uri)
        if (!snapshot) return null
        return pastedLattice(text, snapshot, position ? snapshot.offsetOf(position) : 0)
      },
    ),
  )
  serveRequests({ connection, about, guard, fillForm: options.fillForm, version: options.version })

  connection.onShutdown(() => symmetry.dispose())
  documents.listen(connection)
  connection.listen()
}

/** UTF-16 unless the client offers others only. */
function columnsFor(offered: readonly string[] = ['utf-16']): Columns {
  const known: readonly Columns[] = ['utf-16', 'utf-8', 'utf-32']
  return known.find(each => offered.includes(each)) ?? 'utf-16'
}

const NOT_REFACTORED =
  'Nothing was changed: something that refers to the cell cannot be read, or stands behind an alias, or the text has changed.'

const abilitiesOf = ({ textDocument, workspace }: ClientCapabilities): Abilities => ({
  versions: workspace?.workspaceEdit?.documentChanges === true,
  annotations: workspace?.workspaceEdit?.changeAnnotationSupport !== undefined,
  resolves:
    textDocument?.codeAction?.dataSupport === true &&
    textDocument.codeAction.resolveSupport?.properties.includes('edit') === true,
})

const SEVERITIES = new Set<unknown>(['off', 'info', 'warning', 'error'])

/** The workspace's `braggline.checks`; anything that is no severity is passed over. */
function readSeverities(section: unknown): Settings {
  const checks = (section as { checks?: unknown } | null | undefined)?.checks
  if (typeof checks !== 'object' || checks === null) return DEFAULT_SETTINGS
  const severities: Severities = new Map(
    Object.entries(checks).filter((entry): entry is [string, Severity | 'off'] => SEVERITIES.has(entry[1])),
  )
  return { severities }
}
