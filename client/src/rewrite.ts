/** The command that rewrites a file for its supercell. */
import {
  commands,
  type DocumentSelector,
  type ExtensionContext,
  l10n,
  languages,
  Range,
  type TextEditor,
  window,
  WorkspaceEdit,
  workspace,
} from 'vscode'
import type { TextEdit } from 'vscode-languageclient'
import { REWRITE_FOR_SUPERCELL, type RewriteParams } from '../../server/src/protocol.ts'
import type { Server } from './server.ts'

/** How long a word about a command stays in the status bar, in ms. */
const WORD_MS = 6_000

interface Tools {
  readonly server: Server
  readonly selector: DocumentSelector
}

export function registerRewrite(context: ExtensionContext, { server, selector }: Tools): void {
  const rewrite = async () => {
    const editor = window.activeTextEditor
    if (editor && languages.match(selector, editor.document) > 0) await rewriteForSupercell(editor, server)
  }
  context.subscriptions.push(commands.registerCommand('braggline.rewriteForSupercell', rewrite))
}

async function rewriteForSupercell({ document, selection }: TextEditor, server: Server): Promise<void> {
  const params: RewriteParams = {
    uri: document.uri.toString(),
    version: document.version,
    position: { line: selection.active.line, character: selection.active.character },
  }
  const edits = await server.request<TextEdit[] | null>(REWRITE_FOR_SUPERCELL, params)
  if (!edits) {
    window.setStatusBarMessage(
      l10n.t(
        'Braggline: this crystal has no supercell, or something that refers to its cell cannot be rewritten',
      ),
      WORD_MS,
    )
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
