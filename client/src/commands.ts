import {
  commands,
  type DocumentSelector,
  type ExtensionContext,
  languages,
  type LogOutputChannel,
  Range,
  SnippetString,
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

/** Silicon: a = 5.431 Å at room temperature (common practice). */
const NEW_FILE = `title: \${1:Silicon, diamond structure}
unit: angstrom
lattice:
  bravais: \${2:cF}
  a: \${3:5.431}
atoms:
  - \${4:Si}: [0, 0, 0]
  - \${4:Si}: [1/4, 1/4, 1/4]
path: \${5:recommended}
sampling:
  spacing: \${6:0.02}
mesh:
  divisions: [\${7:12, 12, 12}]
$0`

interface Tools {
  readonly server: Server
  readonly log: LogOutputChannel
  readonly selector: DocumentSelector
}

export function registerCommands(context: ExtensionContext, { server, log, selector }: Tools): void {
  const register = (name: string, run: () => unknown) =>
    context.subscriptions.push(commands.registerCommand(`braggline.${name}`, run))
  register('restartServer', () => server.restart())
  register('showLog', () => log.show())
  register('newFile', newFile)
  register('insertRecommendedPath', async () => {
    const editor = window.activeTextEditor
    if (editor && languages.match(selector, editor.document) > 0) await insertRecommendedPath(editor, server)
  })
  void commands.executeCommand('setContext', 'braggline.active', true)
}

async function newFile(): Promise<void> {
  const document = await workspace.openTextDocument({ language: 'braggline' })
  const editor = await window.showTextDocument(document)
  await editor.insertSnippet(new SnippetString(NEW_FILE))
}

async function insertRecommendedPath(editor: TextEditor, server: Server): Promise<void> {
  const { document, selection } = editor
  const params: RecommendedPathParams = {
    uri: document.uri.toString(),
    version: document.version,
    position: { line: selection.active.line, character: selection.active.character },
  }
  const edits = await server.request<TextEdit[] | null>(RECOMMENDED_PATH, params)
  if (!edits) {
    window.setStatusBarMessage('Braggline: the label book has no path for this lattice', WORD_MS)
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
