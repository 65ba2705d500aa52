/** Wires what finds one's way in a text: definitions, names, symbols, folding, selection, links, colours. */
import {
  type ClientCapabilities,
  type Connection,
  LSPErrorCodes,
  ResponseError,
  type SemanticTokens,
  type SemanticTokensDelta,
  type ServerCapabilities,
} from 'vscode-languageserver'
import type { Snapshot } from './analysis.ts'
import { CHECKS } from './checks/index.ts'
import { foldingRanges } from './language/folding.ts'
import { documentLinks } from './language/links.ts'
import { definition, highlights, references } from './language/references.ts'
import { prepareRename, type Refusal, rename } from './language/rename.ts'
import { selectionRanges } from './language/selection.ts'
import { LEGEND, semanticTokens, tokenEdits } from './language/semantic-tokens.ts'
import { workspaceEdit } from './language/workspace-edit.ts'
import { workspaceSymbols } from './language/workspace-symbols.ts'
import type { About } from './server-answers.ts'

export interface Surroundings {
  readonly connection: Connection
  readonly about: About
  readonly capabilities: () => ClientCapabilities
  readonly rulePages: () => string | undefined
  /** Open texts by URI. */
  readonly open: () => Iterable<readonly [uri: string, snapshot: Snapshot]>
}

export const NAVIGATION: ServerCapabilities = {
  definitionProvider: true,
  referencesProvider: true,
  documentHighlightProvider: true,
  renameProvider: { prepareProvider: true },
  workspaceSymbolProvider: true,
  foldingRangeProvider: true,
  selectionRangeProvider: true,
  documentLinkProvider: { resolveProvider: false },
  semanticTokensProvider: { legend: LEGEND, full: { delta: true }, range: true },
}

const RULES: ReadonlySet<string> = new Set(CHECKS.map(({ id }) => id))

export function serveNavigation({ connection, about, capabilities, rulePages, open }: Surroundings): void {
  connection.onDefinition(
    about('definition', [], (snapshot, { textDocument: { uri }, position }) =>
      definition(snapshot, uri, snapshot.offsetOf(position)),
    ),
  )
  connection.onReferences(
    about('references', [], (snapshot, { textDocument: { uri }, position, context }) =>
      references(snapshot, uri, snapshot.offsetOf(position), context.includeDeclaration),
    ),
  )
  connection.onDocumentHighlight(
    about('highlights', [], (snapshot, { position }) => highlights(snapshot, snapshot.offsetOf(position))),
  )
  connection.onPrepareRename(
    about('prepare rename', null, (snapshot, { position }) =>
      orThrow(prepareRename(snapshot, snapshot.offsetOf(position))),
    ),
  )
  connection.onRenameRequest(
    about('rename', null, (snapshot, { textDocument: { uri }, position, newName }) => {
      const edits = orThrow(rename(snapshot, snapshot.offsetOf(position), newName))
      const versions = capabilities().workspace?.workspaceEdit?.documentChanges === true
      const text = { uri, version: snapshot.version }
      return edits ? workspaceEdit(text, edits, { versions, annotations: false }) : null
    }),
  )
  connection.onWorkspaceSymbol(({ query }) => {
    const files = [...open()].map(([uri, snapshot]) => ({
      uri,
      decoded: snapshot.decoded,
      rangeOf: (span: readonly [number, number]) => ({
        start: snapshot.positionOf(span[0]),
        end: snapshot.positionOf(span[1]),
      }),
    }))
    return workspaceSymbols(files, query)
  })
  connection.onFoldingRanges(
    about('folding', [], snapshot => {
      const { lineFoldingOnly = false, rangeLimit } = capabilities().textDocument?.foldingRange ?? {}
      return foldingRanges(snapshot, { lineFoldingOnly, limit: rangeLimit })
    }),
  )
  connection.onSelectionRanges(
    about('selection', [], (snapshot, { positions }) => selectionRanges(snapshot, positions)),
  )
  connection.onDocumentLinks(about('links', [], snapshot => documentLinks(snapshot, rulePages(), RULES)))
  serveTokens(connection, about)
}

/** What was told last of each text, so that the next answer can be the difference. */
function serveTokens(connection: Connection, about: About): void {
  const told = new Map<string, { readonly resultId: string; readonly data: readonly number[] }>()
  let count = 0
  const tell = (uri: string, data: number[]): string => {
    const resultId = String(++count)
    told.delete(uri)
    told.set(uri, { resultId, data })
    if (told.size > MOST_TOLD) told.delete(told.keys().next().value!)
    return resultId
  }
  const { semanticTokens: tokens } = connection.languages
  tokens.on(
    about('tokens', NO_TOKENS as SemanticTokens, (snapshot, { textDocument: { uri } }) => {
      const data = semanticTokens(snapshot)
      return { resultId: tell(uri, data), data }
    }),
  )
  tokens.onDelta(
    about(
      'tokens delta',
      NO_TOKENS as SemanticTokens | SemanticTokensDelta,
      (snapshot, { textDocument: { uri }, previousResultId }): SemanticTokens | SemanticTokensDelta => {
        const before = told.get(uri)
        const data = semanticTokens(snapshot)
        const resultId = tell(uri, data)
        return before?.resultId === previousResultId
          ? { resultId, edits: tokenEdits(before.data, data) }
          : { resultId, data }
      },
    ),
  )
  tokens.onRange(
    about('tokens of a range', NO_TOKENS, (snapshot, { range }) => ({
      data: semanticTokens(snapshot, [snapshot.offsetOf(range.start), snapshot.offsetOf(range.end)]),
    })),
  )
}

const NO_TOKENS = { data: [] as number[] }
/** Texts whose colours are remembered: closed ones leave by and by. */
const MOST_TOLD = 32

function orThrow<T extends object>(answer: T | Refusal | null): T | null {
  if (answer && 'refused' in answer) throw new ResponseError(LSPErrorCodes.RequestFailed, answer.refused)
  return answer
}
