/** The lattice report: a text of Markdown that nobody can write to, shown in the editor's own preview beside the file. */
import {
  commands,
  type Disposable,
  type DocumentSelector,
  EventEmitter,
  type ExtensionContext,
  l10n,
  languages,
  type LogOutputChannel,
  type Tab,
  TabInputText,
  TabInputWebview,
  type TextDocument,
  Uri,
  ViewColumn,
  window,
  workspace,
} from 'vscode'
import {
  CHECKED,
  type CheckedParams,
  REPORT,
  type ReportParams,
  type ReportResult,
} from '../../server/src/protocol.ts'
import type { Server } from './server.ts'

const SCHEME = 'braggline-report'
/** How the name of every report ends: it is what its tab shows. */
export const REPORT_NAME = ' report.md'
/** What a report may be saved as. */
const SAVED = /\.(html?|md)$/i
/** Typing is left to come to rest before a report is made anew, in ms. */
const REST_MS = 300
/** How long a word stays in the status bar, in ms. */
const WORD_MS = 6_000

interface Tools {
  readonly server: Server
  readonly log: LogOutputChannel
  readonly selector: DocumentSelector
}

export function registerReport(context: ExtensionContext, tools: Tools): void {
  const reports = new Reports(tools)
  context.subscriptions.push(
    reports,
    workspace.registerTextDocumentContentProvider(SCHEME, reports),
    commands.registerCommand('braggline.openReport', () => reports.open()),
    commands.registerCommand('braggline.saveReport', (target?: unknown) =>
      reports.save(target instanceof Uri && SAVED.test(target.path) ? target : undefined),
    ),
  )
}

interface Report {
  readonly uri: Uri
  readonly source: Uri
  text: string
  /** The text of the file has changed since, or symmetry was still being looked for. */
  stale: boolean
  /** Counts the questions for it: an answer to an older one is dropped. */
  turn: number
  /** A tab has shown it. It is kept until the last one is closed. */
  wasShown: boolean
  timer?: ReturnType<typeof setTimeout>
}

class Reports {
  readonly #reports = new Map<string, Report>()
  readonly #changed = new EventEmitter<Uri>()
  readonly onDidChange = this.#changed.event
  readonly #subscriptions: Disposable[]

  constructor(private readonly tools: Tools) {
    this.#subscriptions = [
      workspace.onDidChangeTextDocument(({ document, contentChanges }) => {
        if (contentChanges.length > 0) this.#touch(document.uri.toString())
      }),
      // What needed a search for symmetry, and findings under other settings.
      tools.server.onChecked(({ uri, pending }) => {
        if (!pending) this.#touch(uri)
      }),
      window.tabGroups.onDidChangeTabs(() => this.#tabsChanged()),
      window.tabGroups.onDidChangeTabGroups(() => this.#tabsChanged()),
    ]
  }

  dispose(): void {
    for (const { timer } of this.#reports.values()) clearTimeout(timer)
    for (const subscription of this.#subscriptions) subscription.dispose()
    this.#changed.dispose()
  }

  async provideTextDocumentContent(uri: Uri): Promise<string> {
    const report = this.#reports.get(uri.query) ?? this.#add(Uri.parse(uri.query))
    if (report.text === '') report.text = (await this.#ask(report)) ?? ''
    return report.text
  }

  async open(): Promise<void> {
    const editor = window.activeTextEditor
    const document = this.#latticeFile()
    if (!document) return
    const source = document.uri
    const report = this.#reports.get(source.toString()) ?? this.#add(source)
    await this.#refresh(report)
    try {
      await commands.executeCommand('markdown.showLockedPreviewToSide', report.uri)
      // Who asked for it goes on writing.
      if (editor?.viewColumn) await window.showTextDocument(document, editor.viewColumn)
    } catch (error) {
      // The editor's Markdown extension may be turned off.
      this.tools.log.warn('The preview cannot be had; the report is shown as text.', asError(error))
      const text = await workspace.openTextDocument(report.uri)
      await window.showTextDocument(text, {
        viewColumn: ViewColumn.Beside,
        preserveFocus: true,
        preview: true,
      })
    }
  }

  /** @param to where it goes; asked for where it is not said. */
  async save(to?: Uri): Promise<void> {
    const document = this.#latticeFile() ?? (await this.#shownSource())
    if (!document) return
    const target = to ?? (await this.#askWhere(document))
    if (target) await this.#saveTo(document, target)
  }

  #askWhere({ uri }: TextDocument): Thenable<Uri | undefined> {
    const folder = uri.scheme === 'untitled' ? workspace.workspaceFolders?.[0]?.uri : Uri.joinPath(uri, '..')
    return window.showSaveDialog({
      title: l10n.t('Save Lattice Report'),
      filters: { [l10n.t('HTML page')]: ['html'], [l10n.t('Markdown')]: ['md'] },
      defaultUri: folder && Uri.joinPath(folder, `${stem(uri)}-report.html`),
    })
  }

  /** With all that a search for symmetry brings. */
  async #saveTo(document: TextDocument, target: Uri): Promise<void> {
    const about = { uri: document.uri.toString(), version: document.version }
    await this.tools.server.request(CHECKED, about satisfies CheckedParams)
    const format = /\.html?$/i.test(target.path) ? 'html' : 'markdown'
    const params: ReportParams = { ...about, format }
    const result = await this.tools.server.request<ReportResult | null>(REPORT, params)
    if (result) await workspace.fs.writeFile(target, new TextEncoder().encode(result.text))
    else window.setStatusBarMessage(l10n.t('Braggline: there is no report of this file'), WORD_MS)
  }

  #add(source: Uri): Report {
    const uri = Uri.from({
      scheme: SCHEME,
      path: `/${stem(source)}${REPORT_NAME}`,
      query: source.toString(),
    })
    const report: Report = { uri, source, text: '', stale: true, turn: 0, wasShown: false }
    this.#reports.set(source.toString(), report)
    return report
  }

  #latticeFile(): TextDocument | undefined {
    const document = window.activeTextEditor?.document
    return document && languages.match(this.tools.selector, document) > 0 ? document : undefined
  }

  /** The file whose report is in front. */
  async #shownSource(): Promise<TextDocument | undefined> {
    const tab = window.tabGroups.activeTabGroup.activeTab
    const report = [...this.#reports.values()].find(each => tab && shows(tab, each))
    return report && workspace.openTextDocument(report.source)
  }

  #isShown(report: Report): boolean {
    return window.tabGroups.all.some(({ activeTab }) => activeTab && shows(activeTab, report))
  }

  #touch(source: string): void {
    const report = this.#reports.get(source)
    if (!report) return
    report.stale = true
    clearTimeout(report.timer)
    report.timer = setTimeout(() => {
      if (this.#isShown(report)) void this.#refresh(report)
    }, REST_MS)
  }

  #tabsChanged(): void {
    const all = window.tabGroups.all.flatMap(({ tabs }) => tabs)
    for (const [key, report] of this.#reports) {
      if (report.stale && this.#isShown(report)) void this.#refresh(report)
      if (all.some(tab => shows(tab, report))) report.wasShown = true
      else if (report.wasShown) {
        clearTimeout(report.timer)
        this.#reports.delete(key)
      }
    }
  }

  async #refresh(report: Report): Promise<void> {
    const turn = ++report.turn
    try {
      const text = await this.#ask(report)
      if (text === undefined || text === report.text || turn !== report.turn) return
      // An editor forgets a text that no tab of its own shows after some minutes; the preview hears of changes to a
      // text that is open only. So it is opened with the words it had, and then changes.
      if (report.text !== '') await workspace.openTextDocument(report.uri)
      report.text = text
      this.#changed.fire(report.uri)
    } catch (error) {
      this.tools.log.error('report', asError(error))
    }
  }

  /** The report of the text as it stands; undefined where the text has moved on meanwhile. */
  async #ask(report: Report): Promise<string | undefined> {
    const { uri, version } = await workspace.openTextDocument(report.source)
    const params: ReportParams = { uri: uri.toString(), version }
    const result = await this.tools.server.request<ReportResult | null>(REPORT, params)
    if (!result || result.version < version) return undefined
    report.stale = result.pending
    return result.text.trim() ? result.text : `${l10n.t('This file holds no crystal that could be read.')}\n`
  }
}

/** A preview is known by its name only. */
function shows({ input, label }: Tab, { uri }: Report): boolean {
  if (input instanceof TabInputText) return input.uri.toString() === uri.toString()
  return (
    input instanceof TabInputWebview &&
    input.viewType.endsWith('markdown.preview') &&
    label.includes(uri.path.slice(1))
  )
}

const stem = (uri: Uri): string => (uri.path.split('/').at(-1) ?? '').replace(/\.lattice\.ya?ml$/, '')
const asError = (error: unknown): Error => (error instanceof Error ? error : new Error(String(error)))
