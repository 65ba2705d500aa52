import {
  commands,
  type DocumentSelector,
  type ExtensionContext,
  l10n,
  languages,
  type LogOutputChannel,
  Range,
  type TextEditor,
  window,
  WorkspaceEdit,
  workspace,
} from 'vscode'
import type { TextEdit } from 'vscode-languageclient'
import { RECOMMENDED_PATH, type RecommendedPathParams } from '../../server/src/protocol.ts'
import type { Server } from './server.ts'

/** How long a word about a command stays in the status bar, in ms. */
const WORD_MS = 6_000

type TextPosition = RecommendedPathParams['position']

interface Tools {
  readonly server: Server
  readonly log: LogOutputChannel
  readonly selector: DocumentSelector
}

export function registerCommands(context: ExtensionContext, { server, log, selector }: Tools): void {
  const register = (name: string, run: (...given: unknown[]) => unknown) =>
    context.subscriptions.push(commands.registerCommand(`braggline.${name}`, run))
  register('restartServer', () => server.restart())
  register('showLog', () => log.show())
  // A lens says where; else it is where the cursor stands.
  register('insertRecommendedPath', async place => {
    const editor = window.activeTextEditor
    if (!editor || languages.match(selector, editor.document) === 0) return
    await insertRecommendedPath(editor, server, isPosition(place) ? place : editor.selection.active)
  })
  void commands.executeCommand('setContext', 'braggline.active', true)
}

const isPosition = (value: unknown): value is TextPosition =>
  typeof value === 'object' && value !== null && 'line' in value && 'character' in value

async function insertRecommendedPath(
  { document }: TextEditor,
  server: Server,
  { line, character }: TextPosition,
): Promise<void> {
  const params: RecommendedPathParams = {
    uri: document.uri.toString(),
    version: document.version,
    position: { line, character },
  }
  const edits = await server.request<TextEdit[] | null>(RECOMMENDED_PATH, params)
  if (!edits) {
    window.setStatusBarMessage(l10n.t('Braggline: the label book has no path for this lattice'), WORD_MS)
    return
  }
  if (document.version !== params.version) return
  const change = new WorkspaceEdit()
  for (const { range, newText } of edits) {
    const { start, end } = range
    change.replace(document.uri, new Range(start.line, start.character, end.line, end.character), newText)
  }
  await workspace.applyEdit(change)
}
