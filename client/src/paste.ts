/** Three vectors from the clipboard as the lattice of a file. */
import {
  commands,
  type DocumentSelector,
  env,
  type ExtensionContext,
  l10n,
  languages,
  type LogOutputChannel,
  type QuickPickItem,
  Range,
  type TextDocument,
  window,
  WorkspaceEdit,
  workspace,
} from 'vscode'
import {
  PASTED_LATTICE,
  type PastedChoice,
  type PastedLatticeParams,
  type PastedLatticeResult,
} from '../../server/src/protocol.ts'
import type { Server } from './server.ts'

/** How long a word about a command stays in the status bar, in ms. */
const WORD_MS = 8_000

interface Tools {
  readonly server: Server
  readonly log: LogOutputChannel
  readonly selector: DocumentSelector
}

export function registerPaste(context: ExtensionContext, { server, log, selector }: Tools): void {
  context.subscriptions.push(
    commands.registerCommand('braggline.pasteLattice', async () => {
      const editor = window.activeTextEditor
      const isLatticeFile = editor && languages.match(selector, editor.document) > 0
      const document = isLatticeFile ? editor.document : undefined
      const text = await env.clipboard.readText()
      const params: PastedLatticeParams = {
        text,
        uri: document?.uri.toString(),
        position: isLatticeFile
          ? { line: editor.selection.active.line, character: editor.selection.active.character }
          : undefined,
      }
      const result = await server.request<PastedLatticeResult | null>(PASTED_LATTICE, params)
      if (!result?.choices.length) {
        window.setStatusBarMessage(
          `Braggline: ${result?.reason ?? l10n.t('The clipboard holds no lattice.')}`,
          WORD_MS,
        )
        return
      }
      const choice = await chosen(result.choices)
      if (!choice) return
      if (document && document.version !== result.version) {
        log.info('The text has changed since the vectors were read; nothing is pasted.')
        return
      }
      await paste(choice, document)
    }),
  )
}

interface Item extends QuickPickItem {
  readonly choice: PastedChoice
}

async function chosen(choices: readonly PastedChoice[]): Promise<PastedChoice | undefined> {
  const replaces = choices.some(choice => choice.replaces)
  if (choices.length === 1 && !replaces) return choices[0]
  const items = choices.map(
    (choice): Item => ({
      choice,
      label: choice.title,
      detail: choice.detail,
    }),
  )
  const picked = await window.showQuickPick(items, {
    title: replaces
      ? l10n.t('Replace the Lattice by the Pasted Vectors')
      : l10n.t('Paste Vectors as Lattice'),
    placeHolder: l10n.t('How the vectors are to be written'),
    matchOnDetail: true,
  })
  return picked?.choice
}

async function paste({ edits }: PastedChoice, document: TextDocument | undefined): Promise<void> {
  const target = document ?? (await workspace.openTextDocument({ language: 'braggline' }))
  const change = new WorkspaceEdit()
  for (const { range, newText } of edits) {
    const { start, end } = range
    change.replace(target.uri, new Range(start.line, start.character, end.line, end.character), newText)
  }
  await workspace.applyEdit(change)
  if (!document) await window.showTextDocument(target)
}
