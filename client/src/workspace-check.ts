/**
 * All lattice files of the window, checked on demand: the findings of those that no editor shows stand in Problems and
 * are kept in step with the disk until they are cleared. Those that an editor shows are left to it.
 */
import {
  type CancellationToken,
  CancellationTokenSource,
  commands,
  type Diagnostic,
  type Disposable,
  DiagnosticSeverity,
  type ExtensionContext,
  FileType,
  l10n,
  languages,
  type LogOutputChannel,
  ProgressLocation,
  RelativePattern,
  TabInputCustom,
  TabInputText,
  TabInputTextDiff,
  Uri,
  window,
  workspace,
} from 'vscode'
import type { Server } from './server.ts'

const PATTERN = '**/*.lattice.{yaml,yml}'
const LATTICE_FILE = /\.lattice\.ya?ml$/
/** What has such a name is hardly a folder. */
const ORDINARY_FILE = /\.[a-z][a-z0-9]{0,4}$/i
/** The server answers one after another: two on their way keep it busy, and a keystroke waits for no more than these. */
const AT_ONCE = 2
/** Changes on disk come in bursts, in ms. */
const BURST_MS = 150
/** A change of the settings reaches the server first, in ms. */
const SETTINGS_MS = 250
const PROGRESS_MS = 100
const WORD_MS = 10_000
/** No lattice file is so large; the server would refuse it. */
const LARGEST_BYTES = 64 * 2 ** 20
/** Folders within folders, where a file system cannot search by itself. */
const DEEPEST = 16
/** Folders that hold what others wrote. */
const SKIPPED = new Set(['node_modules', '.git'])

/** What a check of the whole window came to. */
export interface Total {
  readonly files: number
  readonly errors: number
  readonly warnings: number
  readonly infos: number
  readonly cancelled: boolean
}

interface Tools {
  readonly server: Server
  readonly log: LogOutputChannel
}

export function registerWorkspaceCheck(context: ExtensionContext, tools: Tools): void {
  const check = new WorkspaceCheck(tools)
  context.subscriptions.push(
    check,
    commands.registerCommand('braggline.checkAll', () => check.checkAll()),
    commands.registerCommand('braggline.clearChecks', () => check.clear()),
  )
}

class WorkspaceCheck {
  readonly #shown = languages.createDiagnosticCollection('braggline-files')
  /** Every file that was checked, by its URI. */
  readonly #files = new Map<string, { readonly uri: Uri; findings: readonly Diagnostic[] }>()
  /** Counts the checks of a file: an answer to an older one is dropped. */
  readonly #turns = new Map<string, number>()
  readonly #changed = new Map<string, Uri>()
  #leftToEditors = new Set<string>()
  #burst: ReturnType<typeof setTimeout> | undefined
  #settings: ReturnType<typeof setTimeout> | undefined
  #following: Disposable[] = []
  #running: CancellationTokenSource | undefined

  constructor(private readonly tools: Tools) {}

  dispose(): void {
    this.clear()
    this.#shown.dispose()
  }

  /** Forgets all findings, and follows the disk no longer. */
  clear(): void {
    this.#running?.cancel()
    clearTimeout(this.#burst)
    clearTimeout(this.#settings)
    for (const each of this.#following) each.dispose()
    this.#following = []
    this.#changed.clear()
    this.#files.clear()
    this.#turns.clear()
    this.#shown.clear()
    void commands.executeCommand('setContext', 'braggline.workspaceChecked', false)
  }

  /** What is found until it is cancelled stays, and is followed. */
  async checkAll(): Promise<Total> {
    this.clear()
    const running = new CancellationTokenSource()
    this.#running = running
    this.#follow()
    const total = await window.withProgress(
      {
        location: ProgressLocation.Notification,
        title: l10n.t('Checking lattice files'),
        cancellable: true,
      },
      async (progress, token) => {
        token.onCancellationRequested(() => running.cancel())
        const uris = await this.#find(running.token)
        let last = 0
        let shown = 0
        await this.#checkEach(uris, running.token, done => {
          if (done < uris.length && Date.now() - last < PROGRESS_MS) return
          last = Date.now()
          progress.report({
            message: l10n.t('{0} of {1}', done, uris.length),
            increment: ((done - shown) / uris.length) * 100,
          })
          shown = done
        })
        return this.#total(running.token.isCancellationRequested)
      },
    )
    if (this.#running === running) this.#running = undefined
    window.setStatusBarMessage(`Braggline: ${inWords(total)}`, WORD_MS)
    if (total.errors + total.warnings > 0) await commands.executeCommand('workbench.panel.markers.view.focus')
    return total
  }

  #total(cancelled: boolean): Total {
    const all = [...this.#files.values()].flatMap(({ findings }) => findings)
    const of = (severity: DiagnosticSeverity) => all.filter(each => each.severity === severity).length
    return {
      files: this.#files.size,
      errors: of(DiagnosticSeverity.Error),
      warnings: of(DiagnosticSeverity.Warning),
      infos: of(DiagnosticSeverity.Information),
      cancelled,
    }
  }

  /** Of all folders; where a file system cannot be searched, folder by folder. */
  async #find(token: CancellationToken, below?: Uri): Promise<Uri[]> {
    const found = new Map<string, Uri>()
    const pattern = below ? new RelativePattern(below, PATTERN) : PATTERN
    for (const uri of await workspace.findFiles(pattern, undefined, undefined, token))
      found.set(String(uri), uri)
    for (const folder of below ? [below] : (workspace.workspaceFolders ?? []).map(({ uri }) => uri)) {
      if (token.isCancellationRequested) break
      const isSearched = folder.scheme === 'file' || folder.scheme === 'vscode-remote'
      const prefix = `${String(folder)}/`
      if (isSearched || [...found.keys()].some(key => key.startsWith(prefix))) continue
      for (const uri of await walk(folder, token)) found.set(String(uri), uri)
    }
    return [...found.values()].sort((a, b) => (a.path < b.path ? -1 : 1))
  }

  async #checkEach(uris: readonly Uri[], token: CancellationToken, done: (n: number) => void): Promise<void> {
    let next = 0
    let ended = 0
    const work = async () => {
      while (next < uris.length && !token.isCancellationRequested) {
        await this.#check(uris[next++], token)
        done(++ended)
      }
    }
    await Promise.all(Array.from({ length: AT_ONCE }, work))
  }

  async #check(uri: Uri, token: CancellationToken): Promise<void> {
    const key = String(uri)
    const turn = (this.#turns.get(key) ?? 0) + 1
    this.#turns.set(key, turn)
    const isCurrent = () => this.#turns.get(key) === turn && !token.isCancellationRequested
    let bytes: Uint8Array
    try {
      bytes = await workspace.fs.readFile(uri)
    } catch {
      // It is gone, or a folder, or may not be read: nothing can be said of it.
      if (isCurrent()) this.#forget(key)
      return
    }
    if (bytes.length > LARGEST_BYTES) return this.tools.log.warn(`${uri}: too large to be checked`)
    try {
      const findings = await this.tools.server.check(uri, new TextDecoder().decode(bytes), token)
      if (!isCurrent()) return
      this.#files.set(key, { uri, findings })
      if (isLeftToEditor(uri)) this.#leftToEditors.add(key)
      else this.#shown.set(uri, findings)
    } catch (error) {
      if (!token.isCancellationRequested)
        this.tools.log.error(`${uri}: not checked`, error instanceof Error ? error : String(error))
    }
  }

  #forget(key: string): void {
    const file = this.#files.get(key)
    this.#files.delete(key)
    this.#leftToEditors.delete(key)
    if (file) this.#shown.delete(file.uri)
  }

  #follow(): void {
    const files = workspace.createFileSystemWatcher(PATTERN)
    // Of a folder that comes or goes, only the folder itself is told.
    const everything = workspace.createFileSystemWatcher('**', false, true, false)
    const review = () => this.#reviewEditors()
    this.#following = [
      files,
      everything,
      files.onDidCreate(uri => this.#look(uri)),
      files.onDidChange(uri => this.#look(uri)),
      files.onDidDelete(uri => this.#look(uri)),
      everything.onDidCreate(uri => {
        if (!LATTICE_FILE.test(uri.path) && !ORDINARY_FILE.test(uri.path)) void this.#lookInto(uri)
      }),
      everything.onDidDelete(uri => this.#lookBelow(uri)),
      workspace.onDidDeleteFiles(({ files }) => {
        for (const uri of files) this.#lookBelow(uri)
      }),
      workspace.onDidRenameFiles(event => {
        for (const { oldUri, newUri } of event.files) {
          this.#lookBelow(oldUri)
          void this.#lookInto(newUri)
        }
      }),
      workspace.onDidChangeWorkspaceFolders(({ added, removed }) => {
        for (const { uri } of removed) this.#forgetBelow(uri)
        for (const { uri } of added) void this.#lookInto(uri)
      }),
      workspace.onDidChangeConfiguration(event => {
        if (!event.affectsConfiguration('braggline.checks')) return
        clearTimeout(this.#settings)
        this.#settings = setTimeout(() => {
          for (const { uri } of this.#files.values()) this.#look(uri)
        }, SETTINGS_MS)
      }),
      workspace.onDidOpenTextDocument(review),
      workspace.onDidCloseTextDocument(review),
      window.tabGroups.onDidChangeTabs(review),
      window.onDidChangeVisibleTextEditors(review),
    ]
    this.#leftToEditors.clear()
    void commands.executeCommand('setContext', 'braggline.workspaceChecked', true)
  }

  /** A file has changed on disk, come or gone. */
  #look(uri: Uri): void {
    this.#changed.set(String(uri), uri)
    clearTimeout(this.#burst)
    this.#burst = setTimeout(() => {
      const uris = [...this.#changed.values()]
      this.#changed.clear()
      const { token } = new CancellationTokenSource()
      void this.#checkEach(uris, token, () => {})
    }, BURST_MS)
  }

  #below(folder: Uri): { readonly uri: Uri }[] {
    const key = String(folder)
    return [...this.#files]
      .filter(([each]) => each === key || each.startsWith(`${key}/`))
      .map(([, file]) => file)
  }

  #lookBelow(folder: Uri): void {
    for (const { uri } of this.#below(folder)) this.#look(uri)
  }

  #forgetBelow(folder: Uri): void {
    for (const { uri } of this.#below(folder)) this.#forget(String(uri))
  }

  /** A file, or a folder with all that is in it, has a new name. */
  async #lookInto(uri: Uri): Promise<void> {
    if (LATTICE_FILE.test(uri.path)) return this.#look(uri)
    try {
      if (!((await workspace.fs.stat(uri)).type & FileType.Directory)) return
    } catch {
      return
    }
    const { token } = new CancellationTokenSource()
    for (const found of await this.#find(token, uri)) this.#look(found)
  }

  /** A file that comes into an editor is left to it; one whose editor was closed is read from the disk again. */
  #reviewEditors(): void {
    for (const [key, { uri }] of this.#files) {
      const isLeft = isLeftToEditor(uri)
      if (isLeft === this.#leftToEditors.has(key)) continue
      if (isLeft) {
        this.#leftToEditors.add(key)
        this.#shown.delete(uri)
      } else {
        this.#leftToEditors.delete(key)
        this.#look(uri)
      }
    }
  }
}

/** The editor's own findings are those of texts that are loaded and that a tab or a peeked editor shows. */
function isLeftToEditor(uri: Uri): boolean {
  const key = String(uri)
  const isIt = (other: Uri) => String(other) === key
  if (!workspace.textDocuments.some(document => isIt(document.uri))) return false
  if (window.visibleTextEditors.some(({ document }) => isIt(document.uri))) return true
  return window.tabGroups.all.some(({ tabs }) =>
    tabs.some(({ input }) => {
      if (input instanceof TabInputTextDiff) return isIt(input.modified)
      return (input instanceof TabInputText || input instanceof TabInputCustom) && isIt(input.uri)
    }),
  )
}

async function walk(folder: Uri, token: CancellationToken, depth = 0): Promise<Uri[]> {
  if (depth > DEEPEST || token.isCancellationRequested) return []
  let entries: [string, FileType][]
  try {
    entries = await workspace.fs.readDirectory(folder)
  } catch {
    return []
  }
  const found: Uri[] = []
  for (const [name, type] of entries) {
    const uri = Uri.joinPath(folder, name)
    if (type & FileType.Directory) {
      // A symbolic link may run in a circle.
      if (!(type & FileType.SymbolicLink) && !SKIPPED.has(name))
        found.push(...(await walk(uri, token, depth + 1)))
    } else if (LATTICE_FILE.test(name)) found.push(uri)
  }
  return found
}

function inWords({ files, errors, warnings, infos, cancelled }: Total): string {
  const found = l10n.t('errors: {0}, warnings: {1}, remarks: {2}', errors, warnings, infos)
  return cancelled
    ? l10n.t('cancelled after {0} lattice files; {1}', files, found)
    : l10n.t('lattice files checked: {0}; {1}', files, found)
}
