/** Wires what an editor writes into a text and beside it: formatting, hints, lenses. */
import {
  type ClientCapabilities,
  type CodeLens,
  CodeLensRefreshRequest,
  type Connection,
  type InlayHint,
  type ServerCapabilities,
} from 'vscode-languageserver'
import type { Snapshot } from './analysis.ts'
import { codeLenses, type LensData, resolveLens } from './language/code-lens.ts'
import {
  FIRST_TRIGGER,
  type FormattingOptions,
  formatting,
  formattingOnType,
  MORE_TRIGGERS,
} from './language/formatting.ts'
import { type HintData, inlayHints, resolveHint } from './language/inlay-hints.ts'
import type { EditorSettings } from './language/settings.ts'
import type { About } from './server-answers.ts'

export interface EditingSurroundings {
  readonly connection: Connection
  readonly about: About
  readonly settings: () => EditorSettings
  /** The client has the commands of the extension. */
  readonly commands: () => boolean
  readonly snapshotOf: (uri: string) => Snapshot | undefined
}

export const EDITING: ServerCapabilities = {
  inlayHintProvider: { resolveProvider: true },
  codeLensProvider: { resolveProvider: true },
  documentFormattingProvider: true,
  documentRangeFormattingProvider: true,
  documentOnTypeFormattingProvider: {
    firstTriggerCharacter: FIRST_TRIGGER,
    moreTriggerCharacter: MORE_TRIGGERS,
  },
}

export function serveEditing(surroundings: EditingSurroundings): void {
  const { connection, about, settings, commands, snapshotOf } = surroundings
  const chosen = ({ tabSize }: { tabSize: number }): FormattingOptions => {
    const { alignColumns, enDash } = settings().format
    return { tabSize, columns: alignColumns, enDash }
  }
  connection.onDocumentFormatting(
    about('formatting', [], (snapshot, { options }) => formatting(snapshot, chosen(options))),
  )
  connection.onDocumentRangeFormatting(
    about('formatting of lines', [], (snapshot, { options, range }) =>
      formatting(snapshot, chosen(options), range),
    ),
  )
  connection.onDocumentOnTypeFormatting(
    about('formatting on type', [], (snapshot, { options, position, ch }) =>
      formattingOnType(snapshot, position, ch, chosen(options)),
    ),
  )

  const { inlayHint } = connection.languages
  inlayHint.on(
    about('hints', [], (snapshot, { textDocument: { uri }, range }) =>
      inlayHints(snapshot, uri, range, settings().inlayHints),
    ),
  )
  inlayHint.resolve(hint => explained(hint, surroundings))
  connection.onCodeLens(
    about('lenses', [], (snapshot, { textDocument: { uri } }) =>
      settings().codeLens ? codeLenses(snapshot, uri, commands()) : [],
    ),
  )
  connection.onCodeLensResolve(lens => {
    if (!isLensData(lens.data)) return lens
    return guarded(lens, connection, () =>
      resolveLens(snapshotOf(lens.data.uri), lens, lens.data, commands()),
    )
  })
}

function explained(hint: InlayHint, { connection, settings, snapshotOf }: EditingSurroundings): InlayHint {
  if (!isHintData(hint.data)) return hint
  const { data } = hint
  const snapshot = snapshotOf(data.uri)
  if (!snapshot) return hint
  return guarded(hint, connection, () => resolveHint(snapshot, hint, data, settings().inlayHints))
}

/** What came back from the client may be anything. */
const isHintData = (data: unknown): data is HintData =>
  typeof data === 'object' && data !== null && 'uri' in data && 'index' in data
const isLensData = (data: unknown): data is LensData =>
  typeof data === 'object' && data !== null && 'uri' in data && 'kind' in data

function guarded<T extends CodeLens | InlayHint>(plain: T, { console }: Connection, answer: () => T): T {
  try {
    return answer()
  } catch (error) {
    console.error(`resolve: ${error instanceof Error ? error.stack : String(error)}`)
    return plain
  }
}

/** What stands in and beside the texts may look different now: by other settings, or by a symmetry that has been found. */
export function refreshShown(connection: Connection, { workspace }: ClientCapabilities): void {
  const { languages } = connection
  if (workspace?.semanticTokens?.refreshSupport) void languages.semanticTokens.refresh()
  if (workspace?.inlayHint?.refreshSupport) void languages.inlayHint.refresh()
  if (workspace?.codeLens?.refreshSupport) void connection.sendRequest(CodeLensRefreshRequest.type)
}
