/** Forms: a form filled from the lattice file, as a text beside it that nobody can write to and that follows both. */
import {
  commands,
  type Disposable,
  type DocumentSelector,
  EventEmitter,
  type ExtensionContext,
  FileType,
  l10n,
  languages,
  type LogOutputChannel,
  type QuickPickItem,
  TabInputText,
  type TextDocument,
  Uri,
  ViewColumn,
  window,
  workspace,
} from 'vscode'
import {
  CHECKED,
  type CheckedParams,
  FILL,
  type FillParams,
  type FillResult,
} from '../../server/src/protocol.ts'
import type { Server } from './server.ts'

const SCHEME = 'braggline-form'
/** Typing is left to come to rest before a form is filled anew, in ms. */
const REST_MS = 300
/** How long a word stays in the status bar, in ms. */
const WORD_MS = 6_000
/** The server asks for partials level by level; deeper ones it refuses. */
const MOST_ROUNDS = 20
const FORM_ENDING = '.liquid'
/** The folder in which forms are looked for, beside the lattice file and in each folder above it. */
const FORM_FOLDER = 'forms'

interface Tools {
  readonly server: Server
  readonly log: LogOutputChannel
  readonly selector: DocumentSelector
}

export function registerForms(context: ExtensionContext, tools: Tools): void {
  const forms = new Forms(tools)
  context.subscriptions.push(
    forms,
    workspace.registerTextDocumentContentProvider(SCHEME, forms),
    commands.registerCommand('braggline.fillForm', (form?: unknown) =>
      forms.open(form instanceof Uri ? form : undefined),
    ),
    commands.registerCommand('braggline.saveFilledForm', (target?: unknown) =>
      forms.save(target instanceof Uri ? target : undefined),
    ),
  )
}

interface Filled {
  readonly uri: Uri
  readonly source: Uri
  readonly form: Uri
  /** Where the cursor stood when it was asked for. */
  position: { readonly line: number; readonly character: number }
  /** Ordinal of the crystal in its file. */
  document?: number
  text: string
  /** `text` is why there is none. */
  faulty: boolean
  stale: boolean
  /** A tab showed it once: when none does any more, it is forgotten. */
  seen: boolean
  /** URIs of the lattice file, of the form and of its partials. */
  uses: ReadonlySet<string>
  timer?: ReturnType<typeof setTimeout>
}

class Forms {
  readonly #filled = new Map<string, Filled>()
  readonly #changed = new EventEmitter<Uri>()
  readonly onDidChange = this.#changed.event
  readonly #subscriptions: Disposable[]

  constructor(private readonly tools: Tools) {
    this.#subscriptions = [
      workspace.onDidChangeTextDocument(({ document, contentChanges }) => {
        if (contentChanges.length > 0) this.#touch(document.uri.toString())
      }),
      workspace.onDidSaveTextDocument(({ uri }) => this.#touch(uri.toString())),
      window.tabGroups.onDidChangeTabs(() => this.#tabsChanged()),
    ]
  }

  dispose(): void {
    for (const { timer } of this.#filled.values()) clearTimeout(timer)
    for (const subscription of this.#subscriptions) subscription.dispose()
    this.#changed.dispose()
  }

  /** A tab that was left open is filled anew from what its address says. */
  async provideTextDocumentContent(uri: Uri): Promise<string> {
    const filled = this.#filled.get(uri.toString()) ?? this.#restore(uri)
    if (!filled) return ''
    if (filled.text === '') await this.#fill(filled)
    return filled.text
  }

  async open(chosen: Uri | undefined): Promise<void> {
    const editor = window.activeTextEditor
    if (!editor || !workspace.isTrusted || languages.match(this.tools.selector, editor.document) <= 0) return
    const source = editor.document.uri
    const { line, character } = editor.selection.active
    const form = chosen ?? (await pickForm(source))
    if (!form) return
    const uri = addressOf(source, form)
    const filled = this.#filled.get(uri.toString()) ?? this.#add({ uri, source, form, line, character })
    // The crystal at the cursor is meant, also where another one was before.
    filled.position = { line, character }
    filled.document = undefined
    await this.#refresh(filled)
    const text = await workspace.openTextDocument(uri)
    await window.showTextDocument(text, {
      viewColumn: ViewColumn.Beside,
      preserveFocus: true,
      preview: false,
    })
  }

  async save(chosen: Uri | undefined): Promise<void> {
    const tab = window.tabGroups.activeTabGroup.activeTab
    const shown = tab?.input instanceof TabInputText ? tab.input.uri.toString() : undefined
    const filled = this.#filled.get(window.activeTextEditor?.document.uri.toString() ?? shown ?? '')
    if (!filled) return
    await this.#fill(filled)
    if (filled.faulty) {
      window.setStatusBarMessage(
        l10n.t('Braggline: the form is not filled, so there is nothing to save'),
        WORD_MS,
      )
      return
    }
    const { source } = filled
    const folder =
      source.scheme === 'untitled' ? workspace.workspaceFolders?.[0]?.uri : Uri.joinPath(source, '..')
    const target =
      chosen ??
      (await window.showSaveDialog({
        title: l10n.t('Save Filled Form'),
        defaultUri: folder && Uri.joinPath(folder, filled.uri.path.slice(1)),
      }))
    if (target) await workspace.fs.writeFile(target, new TextEncoder().encode(filled.text))
  }

  #add({ line, character, ...filled }: Pick<Filled, 'uri' | 'source' | 'form'> & Filled['position']): Filled {
    const entry: Filled = {
      ...filled,
      position: { line, character },
      text: '',
      faulty: false,
      stale: true,
      seen: false,
      uses: new Set([filled.source.toString(), filled.form.toString()]),
    }
    this.#filled.set(filled.uri.toString(), entry)
    return entry
  }

  #restore(uri: Uri): Filled | undefined {
    const { source, form } = readAddress(uri) ?? {}
    if (!source || !form || !workspace.isTrusted) return undefined
    return this.#add({ uri, source, form, line: 0, character: 0 })
  }

  #touch(used: string): void {
    for (const filled of this.#filled.values()) {
      if (!filled.uses.has(used)) continue
      filled.stale = true
      clearTimeout(filled.timer)
      filled.timer = setTimeout(() => {
        if (isShown(filled)) void this.#refresh(filled)
      }, REST_MS)
    }
  }

  #tabsChanged(): void {
    const all = window.tabGroups.all.flatMap(({ tabs }) => tabs)
    for (const [key, filled] of this.#filled) {
      if (filled.stale && isShown(filled)) void this.#refresh(filled)
      const open = all.some(({ input }) => shows(input, filled))
      if (open) filled.seen = true
      if (open || !filled.seen) continue
      clearTimeout(filled.timer)
      this.#filled.delete(key)
    }
  }

  async #refresh(filled: Filled): Promise<void> {
    const before = filled.text
    await this.#fill(filled)
    if (filled.text !== before) this.#changed.fire(filled.uri)
  }

  /** Fills the form as it stands; leaves the text alone where the lattice file has moved on meanwhile. */
  async #fill(filled: Filled): Promise<void> {
    try {
      const document = await workspace.openTextDocument(filled.source)
      const { version } = document
      const { result, uses } = await this.#ask(filled, document)
      if (document.version !== version) return
      filled.uses = uses
      filled.stale = false
      filled.document = result?.document ?? filled.document
      filled.faulty = result?.text === undefined
      filled.text =
        result?.text ?? notFilled(result?.fault ?? l10n.t('The lattice file holds no crystal yet.'))
    } catch (error) {
      filled.faulty = true
      filled.text = notFilled(asError(error).message)
      this.tools.log.error('form', asError(error))
    }
  }

  async #ask(
    { source, form, position, document: ordinal }: Filled,
    document: TextDocument,
  ): Promise<{ result: FillResult | null; uses: Set<string> }> {
    const { server } = this.tools
    const about = { uri: document.uri.toString(), version: document.version }
    await server.request(CHECKED, about satisfies CheckedParams)
    const uses = new Set([source.toString(), form.toString()])
    const partials: Record<string, string | null> = {}
    const params: FillParams = {
      ...about,
      ...(ordinal === undefined ? { position } : { document: ordinal }),
      form: { name: fileName(form), text: await textOf(form) },
      partials,
    }
    for (let round = 0; round < MOST_ROUNDS; round++) {
      const result = await server.request<FillResult | null>(FILL, params)
      if (!result?.needs) return { result, uses }
      for (const name of result.needs) {
        uses.add(Uri.joinPath(form, '..', ...name.split('/')).toString())
        partials[name] = (await partialText(form, name)) ?? null
      }
    }
    return { result: null, uses }
  }
}

const notFilled = (why: string): string => `${l10n.t('This form cannot be filled.')}\n\n${why}\n`

/** Its path ends like the file that the form is for, so that the editor knows the language. */
function addressOf(source: Uri, form: Uri): Uri {
  const stem = fileName(source).replace(/\.lattice\.ya?ml$/, '')
  const kind = fileName(form).replace(/\.liquid$/, '')
  return Uri.from({
    scheme: SCHEME,
    path: `/${stem}-${kind}${kind.includes('.') ? '' : '.txt'}`,
    query: JSON.stringify([source.toString(), form.toString()]),
  })
}

function readAddress({ query }: Uri): { source: Uri; form: Uri } | undefined {
  try {
    const [source, form] = JSON.parse(query) as unknown[]
    if (typeof source === 'string' && typeof form === 'string')
      return { source: Uri.parse(source), form: Uri.parse(form) }
  } catch {
    // The address of a tab that this version did not write.
  }
  return undefined
}

/** As it stands in an editor, else as it is saved. */
async function textOf(uri: Uri): Promise<string> {
  const open = workspace.textDocuments.find(each => each.uri.toString() === uri.toString())
  if (open) return open.getText()
  return new TextDecoder('utf-8', { fatal: true }).decode(await workspace.fs.readFile(uri))
}

/** undefined for what is not there, and for a link, which may lead out of the form's folder. */
async function partialText(form: Uri, name: string): Promise<string | undefined> {
  let place = Uri.joinPath(form, '..')
  try {
    for (const part of name.split('/')) {
      if (part === '' || part === '.' || part === '..') return undefined
      place = Uri.joinPath(place, part)
      if ((await workspace.fs.stat(place)).type & FileType.SymbolicLink) return undefined
    }
    return await textOf(place)
  } catch {
    return undefined
  }
}

interface FormItem extends QuickPickItem {
  readonly uri?: Uri
}

async function pickForm(source: Uri): Promise<Uri | undefined> {
  const found = await formsFor(source)
  const items: FormItem[] = [
    ...found.map(uri => ({
      label: fileName(uri),
      description: workspace.asRelativePath(Uri.joinPath(uri, '..')),
      uri,
    })),
    {
      label: l10n.t('$(folder-opened) Browse…'),
      description: found.length > 0 ? undefined : l10n.t('no form is near the file'),
    },
  ]
  const picked = await window.showQuickPick(items, {
    title: l10n.t('Fill a Form'),
    placeHolder: l10n.t('The form to be filled from {0}', fileName(source)),
  })
  if (!picked) return undefined
  if (picked.uri) return picked.uri
  const [browsed] =
    (await window.showOpenDialog({
      title: l10n.t('Choose a Form'),
      openLabel: l10n.t('Fill'),
      filters: { [l10n.t('Forms')]: [FORM_ENDING.slice(1)], [l10n.t('All files')]: ['*'] },
    })) ?? []
  return browsed
}

/** Beside the lattice file and in `forms` there, then in `forms` of the folders above, the nearest first. */
async function formsFor(source: Uri): Promise<Uri[]> {
  const root = workspace.getWorkspaceFolder(source)?.uri ?? workspace.workspaceFolders?.[0]?.uri
  let folder = source.scheme === 'untitled' ? root : Uri.joinPath(source, '..')
  if (!folder) return []
  const found = await formsIn(folder)
  for (;;) {
    found.push(...(await formsIn(Uri.joinPath(folder, FORM_FOLDER))))
    const above: Uri = Uri.joinPath(folder, '..')
    if (!root || !above.path.startsWith(root.path) || above.path === folder.path) return found
    folder = above
  }
}

/** A name that begins with an underscore is that of a partial. */
async function formsIn(folder: Uri): Promise<Uri[]> {
  try {
    const entries = await workspace.fs.readDirectory(folder)
    return entries
      .filter(([name, type]) => type & FileType.File && name.endsWith(FORM_ENDING) && !name.startsWith('_'))
      .map(([name]) => Uri.joinPath(folder, name))
      .sort((a, b) => a.path.localeCompare(b.path, 'en'))
  } catch {
    return []
  }
}

const shows = (input: unknown, { uri }: Filled): boolean =>
  input instanceof TabInputText && input.uri.toString() === uri.toString()
const isShown = (filled: Filled): boolean =>
  window.tabGroups.all.some(({ activeTab }) => activeTab && shows(activeTab.input, filled))

const fileName = (uri: Uri): string => uri.path.split('/').at(-1) ?? ''
const asError = (error: unknown): Error => (error instanceof Error ? error : new Error(String(error)))
