/** The zone view's host: a panel a file, beside its editor. All geometry comes from the server. */
import {
  commands,
  type Disposable,
  type DocumentSelector,
  type ExtensionContext,
  l10n,
  languages,
  type LogOutputChannel,
  Range,
  Selection,
  type TextDocument,
  TextEditorRevealType,
  Uri,
  ViewColumn,
  type WebviewPanel,
  WorkspaceEdit,
  window,
  workspace,
} from 'vscode'
import {
  APPEND_TO_PATH,
  type AppendParams,
  type AppendResult,
  BANDS,
  type BandsResult,
  type DocumentParams,
  FIGURE,
  type FigureParams,
  type FigureResult,
  SCENE,
  type SceneResult,
  type TextRange,
  ZONE_SOLID,
  type ZoneSolidParams,
  type ZoneSolidResult,
} from '../../server/src/protocol.ts'
import { type Direction, type FigureKind, readFromView, type ToView } from '../messages.ts'
import type { Server } from './server.ts'
import { viewPage } from './zone-view-page.ts'

const VIEW_TYPE = 'braggline.zoneView'
/** How long the page waits for its first picture, in ms; the picture then follows as a message. */
const HEAD_START_MS = 150
/** How long a word stays in the status bar, in ms. */
const WORD_MS = 6_000

interface Tools {
  readonly server: Server
  readonly log: LogOutputChannel
  readonly selector: DocumentSelector
}

export function registerZoneView(context: ExtensionContext, tools: Tools): void {
  const views = new Map<string, ZoneView>()
  const adopt = (panel: WebviewPanel, uri: Uri): void => {
    const view = new ZoneView(panel, uri, context.extensionUri, tools)
    views.set(uri.toString(), view)
    panel.iconPath = ICON(context.extensionUri)
    panel.onDidDispose(() => views.delete(uri.toString()))
  }
  const latticeFile = (): TextDocument | undefined => {
    const document = window.activeTextEditor?.document
    return document && languages.match(tools.selector, document) > 0 ? document : undefined
  }
  const open = (): void => {
    const document = latticeFile()
    if (!document) return
    const known = views.get(document.uri.toString())
    if (known) {
      known.show()
      return
    }
    const place = { viewColumn: ViewColumn.Beside, preserveFocus: true }
    adopt(
      window.createWebviewPanel(VIEW_TYPE, titleOf(document.uri), place, OPTIONS(context.extensionUri)),
      document.uri,
    )
  }
  const save = (what: FigureKind) => (): unknown => {
    const active = [...views.values()].find(view => view.isActive)
    if (active) return active.askToSave(what)
    const document = latticeFile()
    return document && saveFigure(document, { what, server: tools.server })
  }
  context.subscriptions.push(
    commands.registerCommand('braggline.openZoneView', open),
    commands.registerCommand('braggline.saveZoneFigure', save('zone')),
    commands.registerCommand('braggline.saveBandFigure', save('bands')),
    window.registerWebviewPanelSerializer(VIEW_TYPE, {
      async deserializeWebviewPanel(panel, state: unknown) {
        const uri = (state as { uri?: unknown } | undefined)?.uri
        if (typeof uri !== 'string') return panel.dispose()
        panel.webview.options = OPTIONS(context.extensionUri)
        adopt(panel, Uri.parse(uri))
      },
    }),
  )
}

const ICON = (extensionUri: Uri) => ({
  light: Uri.joinPath(extensionUri, 'media', 'zone-light.svg'),
  dark: Uri.joinPath(extensionUri, 'media', 'zone-dark.svg'),
})

const OPTIONS = (extensionUri: Uri) => ({
  enableScripts: true,
  localResourceRoots: [Uri.joinPath(extensionUri, 'dist')],
})

const nameOf = (uri: Uri): string => uri.path.split('/').at(-1) ?? ''
const titleOf = (uri: Uri): string => l10n.t('Zone: {0}', nameOf(uri).replace(/\.lattice\.ya?ml$/, ''))

class ZoneView {
  readonly #subscriptions: Disposable[] = []
  /** The page listens. A hidden tab has no page. */
  #ready = false
  #disposed = false
  #asking = false
  #askAgain = false
  /** What was last asked for and found; said again to a page that has just come up. */
  #picture: ToView[] = []
  #shown: { readonly version: number; readonly pending: boolean; readonly document: number } | undefined
  #recoloured = false
  #documents: readonly TextRange[] = []
  /** Ordinal of the crystal in its file, from 1. */
  #document = 1

  constructor(
    private readonly panel: WebviewPanel,
    private readonly uri: Uri,
    private readonly extensionUri: Uri,
    private readonly tools: Tools,
  ) {
    const isMine = (document: TextDocument) => document.uri.toString() === uri.toString()
    this.#subscriptions.push(
      panel.webview.onDidReceiveMessage(data => void this.#receive(data)),
      panel.onDidChangeViewState(() => {
        if (panel.visible || !this.#ready) return
        this.#ready = false
        // The page is gone. The one that comes with the tab must not begin with an old picture.
        this.#setPage([])
      }),
      workspace.onDidChangeTextDocument(({ document, contentChanges }) => {
        if (isMine(document) && contentChanges.length > 0) void this.#refresh()
      }),
      workspace.onDidOpenTextDocument(document => {
        if (isMine(document)) void this.#refresh()
      }),
      window.onDidChangeTextEditorSelection(({ textEditor }) => {
        if (isMine(textEditor.document)) this.#followCursor()
      }),
      // What needed a search for symmetry, and the findings after it.
      tools.server.onChecked(({ uri: checked, version, pending }) => {
        if (checked !== uri.toString() || !this.#shown || version < this.#shown.version) return
        if (!this.#recoloured && !(this.#shown.pending && !pending)) return
        this.#shown = undefined
        this.#recoloured = false
        void this.#refresh()
      }),
      // The same text with other severities: its colours change after the next check.
      workspace.onDidChangeConfiguration(change => {
        if (change.affectsConfiguration('braggline.checks', uri)) this.#recoloured = true
      }),
    )
    panel.onDidDispose(() => {
      this.#ready = false
      this.#disposed = true
      for (const subscription of this.#subscriptions) subscription.dispose()
    })
    void this.#open()
  }

  /** The page comes with its first picture in it, unless that takes long: a message would need a round trip more. */
  async #open(): Promise<void> {
    await Promise.race([this.#refresh(), new Promise(resolve => setTimeout(resolve, HEAD_START_MS))])
    if (!this.#disposed) this.#setPage(this.#picture)
  }

  #setPage(headStart: readonly ToView[]): void {
    this.panel.webview.html = viewPage(this.panel.webview, this.extensionUri, headStart)
  }

  get isActive(): boolean {
    return this.panel.active
  }

  show(): void {
    this.panel.reveal(undefined, true)
  }

  askToSave(what: FigureKind): void {
    this.#say({ kind: 'save', what, scale: 1 })
  }

  #say(message: ToView): void {
    if (this.#ready && this.panel.visible) void this.panel.webview.postMessage(message)
  }

  #paint(part: ToView): void {
    this.#picture.push(part)
    this.#say(part)
  }

  async #receive(data: unknown): Promise<void> {
    const message = readFromView(data)
    try {
      switch (message?.kind) {
        case 'ready':
          this.#ready = true
          for (const part of this.#picture) this.#say(part)
          this.#followCursor()
          return await this.#refresh()
        case 'reveal':
          return await this.#reveal(message.version, message.range)
        case 'append':
          return await this.#append(message)
        case 'solid':
          return await this.#sendSolid(message.n)
        case 'figure':
          return await saveFigure(await this.#text(), {
            what: message.what,
            view: message.view,
            document: this.#document,
            server: this.tools.server,
          })
        case 'png':
          return await saveFile(this.uri, { kind: 'zone', extension: 'png', content: bytes(message.data) })
      }
    } catch (error) {
      this.tools.log.error('zone view', error instanceof Error ? error : String(error))
    }
  }

  /** The server knows open texts only. */
  #text = async (): Promise<TextDocument> => workspace.openTextDocument(this.uri)

  /** One question at a time: while one is out, later changes wait and ask once. */
  async #refresh(): Promise<void> {
    if (!this.panel.visible) return
    if (this.#asking) {
      this.#askAgain = true
      return
    }
    this.#asking = true
    try {
      do {
        this.#askAgain = false
        await this.#ask()
      } while (this.#askAgain)
    } catch (error) {
      this.tools.log.error('zone view', error instanceof Error ? error : String(error))
    } finally {
      this.#asking = false
    }
  }

  async #ask(): Promise<void> {
    const text = await this.#text()
    const { version } = text
    if (this.#shown?.version === version && !this.#shown.pending && this.#shown.document === this.#document)
      return
    const params: DocumentParams = { uri: text.uri.toString(), version, document: this.#document }
    const result = await this.tools.server.request<SceneResult | null>(SCENE, params)
    if (!result || result.version !== text.version) return
    this.#documents = result.documents
    if (this.#document > Math.max(1, result.documents.length)) {
      this.#document = 1
      this.#askAgain = true
      return
    }
    this.#shown = { version: result.version, pending: result.pending, document: this.#document }
    this.#picture = []
    this.#paint({
      kind: 'scene',
      uri: this.uri.toString(),
      version: result.version,
      scene: result.scene,
      reason: result.reason ?? '',
    })
    this.#followCursor()
    if (!result.scene) return
    const answer = await this.tools.server.request<BandsResult | null>(BANDS, params)
    if (answer?.version === text.version) this.#paint({ kind: 'bands', ...answer })
  }

  /** Tells where the text cursor is, and turns to another crystal of the file with it. */
  #followCursor(): void {
    const editor = [window.activeTextEditor, ...window.visibleTextEditors].find(
      each => each?.document.uri.toString() === this.uri.toString(),
    )
    if (!editor || this.#shown?.version !== editor.document.version) return
    const { active } = editor.selection
    const at = this.#documents.findIndex(({ start, end }) =>
      new Range(start.line, start.character, end.line, end.character).contains(active),
    )
    if (at >= 0 && at + 1 !== this.#document) {
      this.#document = at + 1
      void this.#refresh()
      return
    }
    const { line, character } = active
    this.#say({ kind: 'cursor', version: editor.document.version, line, character })
  }

  async #sendSolid(n: number): Promise<void> {
    const text = await this.#text()
    const params: ZoneSolidParams = {
      uri: text.uri.toString(),
      version: text.version,
      document: this.#document,
      n,
    }
    const result = await this.tools.server.request<ZoneSolidResult | null>(ZONE_SOLID, params)
    if (result?.version === text.version) this.#say({ kind: 'solid', n, solid: result.solid })
  }

  async #reveal(version: number, { start, end }: TextRange): Promise<void> {
    const text = await this.#text()
    if (text.version !== version) return
    const shown = window.visibleTextEditors.find(({ document }) => document === text)
    const column = shown?.viewColumn ?? ViewColumn.One
    const editor = await window.showTextDocument(text, column)
    const range = new Range(start.line, start.character, end.line, end.character)
    editor.selection = new Selection(range.start, range.start)
    editor.revealRange(range, TextEditorRevealType.InCenterIfOutsideViewport)
  }

  async #append({
    version,
    labels,
    newPiece,
  }: {
    version: number
    labels: readonly string[]
    newPiece: boolean
  }): Promise<void> {
    const text = await this.#text()
    if (text.version !== version) return
    const params: AppendParams = {
      uri: text.uri.toString(),
      version,
      document: this.#document,
      labels,
      newPiece,
    }
    const result = await this.tools.server.request<AppendResult | null>(APPEND_TO_PATH, params)
    if (!result) {
      window.setStatusBarMessage(
        l10n.t('Braggline: the path of this file cannot be written to from the zone view'),
        WORD_MS,
      )
      return
    }
    if (result.version !== text.version) return
    const change = new WorkspaceEdit()
    for (const { range, newText } of result.edits) {
      const { start, end } = range
      change.replace(text.uri, new Range(start.line, start.character, end.line, end.character), newText)
    }
    await workspace.applyEdit(change)
  }
}

interface Wish {
  readonly what: FigureKind
  readonly view?: Direction
  readonly document?: number
  readonly server: Server
}

async function saveFigure(text: TextDocument, { what, view, document, server }: Wish): Promise<void> {
  const params: FigureParams = { uri: text.uri.toString(), version: text.version, document, kind: what, view }
  const result = await server.request<FigureResult | null>(FIGURE, params)
  if (!result?.svg) {
    const missing =
      what === 'bands'
        ? l10n.t('Braggline: {0} has no path to draw bands along', nameOf(text.uri))
        : l10n.t('Braggline: {0} cannot be drawn', nameOf(text.uri))
    window.setStatusBarMessage(missing, WORD_MS)
    return
  }
  await saveFile(text.uri, { kind: what, extension: 'svg', content: new TextEncoder().encode(result.svg) })
}

async function saveFile(
  uri: Uri,
  { kind, extension, content }: { kind: FigureKind; extension: 'svg' | 'png'; content: Uint8Array },
): Promise<void> {
  const folder = uri.scheme === 'untitled' ? workspace.workspaceFolders?.[0]?.uri : Uri.joinPath(uri, '..')
  const name = `${nameOf(uri).replace(/\.lattice\.ya?ml$/, '')}-${kind}.${extension}`
  const target = await window.showSaveDialog({
    title: kind === 'zone' ? l10n.t('Save Zone Figure') : l10n.t('Save Band Figure'),
    filters: extension === 'svg' ? { [l10n.t('SVG figure')]: ['svg'] } : { [l10n.t('PNG picture')]: ['png'] },
    defaultUri: folder && Uri.joinPath(folder, name),
  })
  if (target) await workspace.fs.writeFile(target, content)
}

const bytes = (base64: string): Uint8Array =>
  Uint8Array.from(atob(base64), character => character.charCodeAt(0))
