/** CIFs in and out: read and written through the workspace's file system, so that it may be any, in the browser too. */
import {
  commands,
  type DocumentSelector,
  type ExtensionContext,
  FileType,
  l10n,
  languages,
  type LogOutputChannel,
  Uri,
  ViewColumn,
  window,
  workspace,
} from 'vscode'
import {
  CHECKED,
  type CheckedParams,
  EXPORT_CIF,
  type ExportCifParams,
  type ExportCifResult,
  IMPORT_CIF,
  type ImportCifParams,
  type ImportCifResult,
} from '../../server/src/protocol.ts'
import type { Server } from './server.ts'

/** Larger files hold measured data, no crystal alone. */
const MOST_BYTES = 64_000_000
/** What is told in the message itself; the rest is in the comments of the file. */
const MOST_TOLD = 3

interface Tools {
  readonly server: Server
  readonly log: LogOutputChannel
  readonly selector: DocumentSelector
}

export function registerCif(context: ExtensionContext, tools: Tools): void {
  context.subscriptions.push(
    commands.registerCommand('braggline.importCif', (uri?: unknown) =>
      importCif(tools, uri instanceof Uri ? uri : undefined),
    ),
    commands.registerCommand('braggline.exportCif', () => exportCif(tools)),
  )
}

async function importCif({ server, log }: Tools, given: Uri | undefined): Promise<void> {
  const uri = given ?? (await pickCif())
  if (!uri) return
  const source = uri.path.split('/').at(-1) ?? uri.path
  const bytes = await workspace.fs.readFile(uri)
  if (bytes.length > MOST_BYTES) {
    void window.showErrorMessage(l10n.t('Braggline: {0} is too large for a CIF of a crystal', source))
    return
  }
  const params: ImportCifParams = { text: new TextDecoder().decode(bytes), source }
  server.start()
  const result = await server.request<ImportCifResult | null>(IMPORT_CIF, params)
  if (!result) return
  for (const line of [...result.losses, ...result.notes]) log.info(`${source}: ${line}`)
  if (result.text === null) {
    void window.showErrorMessage(
      l10n.t('Braggline: {0} cannot be imported: {1}', source, result.losses[0] ?? ''),
    )
    return
  }
  await show(uri, result.name, result.text)
  if (result.losses.length > 0) void tellLosses(source, result.losses)
}

async function pickCif(): Promise<Uri | undefined> {
  const picked = await window.showOpenDialog({
    title: l10n.t('Import a CIF'),
    canSelectMany: false,
    filters: { CIF: ['cif'], [l10n.t('All files')]: ['*'] },
  })
  return picked?.[0]
}

/** Beside the CIF under its name, not saved yet: saving is up to who asked. Where that name is taken, without one. */
async function show(cif: Uri, name: string, text: string): Promise<void> {
  const target = Uri.joinPath(cif, '..', `${name}.lattice.yaml`)
  // An unsaved text can only have a place on the disk of the window or of its remote host.
  const isTaken =
    !['file', 'vscode-remote'].includes(cif.scheme) ||
    (await exists(target)) ||
    workspace.textDocuments.some(({ uri }) => uri.path === target.path)
  const document = isTaken
    ? await workspace.openTextDocument({ language: 'braggline', content: text })
    : await workspace.openTextDocument(target.with({ scheme: 'untitled' }))
  const editor = await window.showTextDocument(document, {
    viewColumn: window.activeTextEditor ? ViewColumn.Beside : ViewColumn.Active,
    preview: false,
  })
  if (!isTaken) await editor.edit(edit => edit.insert(document.positionAt(0), text))
}

async function exists(uri: Uri): Promise<boolean> {
  try {
    return (await workspace.fs.stat(uri)).type !== FileType.Unknown
  } catch {
    return false
  }
}

async function tellLosses(source: string, losses: readonly string[]): Promise<void> {
  const rest = losses.length - MOST_TOLD
  const told = losses.slice(0, MOST_TOLD).join('; ')
  const log = l10n.t('Show Log')
  const answer = await window.showWarningMessage(
    rest > 0
      ? l10n.t(
          'Braggline: not all of {0} could be carried over: {1}; and {2} more, as the comments of the file say',
          source,
          told,
          rest,
        )
      : l10n.t('Braggline: not all of {0} could be carried over: {1}', source, told),
    log,
  )
  if (answer === log) await commands.executeCommand('braggline.showLog')
}

async function exportCif({ server, selector }: Tools): Promise<void> {
  const editor = window.activeTextEditor
  if (!editor || languages.match(selector, editor.document) === 0) return
  const { uri, version } = editor.document
  const source = uri.path.split('/').at(-1) ?? uri.path
  const about = { uri: uri.toString(), version }
  await server.request(CHECKED, about satisfies CheckedParams)
  const { line, character } = editor.selection.active
  const params: ExportCifParams = { ...about, source, position: { line, character } }
  const result = await server.request<ExportCifResult | null>(EXPORT_CIF, params)
  if (!result) return
  if (result.text === null) {
    void window.showErrorMessage(l10n.t('Braggline: no CIF of this crystal: {0}', result.refusal ?? ''))
    return
  }
  const folder = uri.scheme === 'untitled' ? workspace.workspaceFolders?.[0]?.uri : Uri.joinPath(uri, '..')
  const stem = source.replace(/(\.lattice)?\.ya?ml$/i, '')
  const target = await window.showSaveDialog({
    title: l10n.t('Export as CIF'),
    filters: { CIF: ['cif'] },
    defaultUri: folder && Uri.joinPath(folder, `${stem}.cif`),
  })
  if (target) await workspace.fs.writeFile(target, new TextEncoder().encode(result.text))
}
