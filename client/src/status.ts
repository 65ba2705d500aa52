import {
  type DocumentSelector,
  type LanguageStatusItem,
  LanguageStatusSeverity,
  languages,
  window,
  workspace,
} from 'vscode'
import type { StatusParams } from '../../server/src/protocol.ts'

type ServerState = 'waiting' | 'starting' | 'running' | 'stopped'

/** The language status item: the state of the server, and what it found in the file that is being edited. */
export class StatusItem {
  readonly #item: LanguageStatusItem
  readonly #files = new Map<string, StatusParams>()
  readonly #subscriptions = [
    window.onDidChangeActiveTextEditor(() => this.#show()),
    workspace.onDidCloseTextDocument(({ uri }) => this.#files.delete(uri.toString())),
  ]
  #server: ServerState = 'waiting'

  constructor(selector: DocumentSelector) {
    this.#item = languages.createLanguageStatusItem('braggline.status', selector)
    this.#item.name = 'Braggline'
    this.#show()
  }

  starting(): void {
    this.#become('starting')
  }

  running(): void {
    this.#become('running')
  }

  stopped(): void {
    this.#become('stopped')
  }

  checked(params: StatusParams): void {
    this.#files.set(params.uri, params)
    this.#show()
  }

  dispose(): void {
    this.#item.dispose()
    for (const subscription of this.#subscriptions) subscription.dispose()
  }

  #become(state: ServerState): void {
    this.#server = state
    if (state !== 'running') this.#files.clear()
    this.#show()
  }

  #show(): void {
    const uri = window.activeTextEditor?.document.uri.toString()
    const file = uri === undefined ? undefined : this.#files.get(uri)
    Object.assign(this.#item, view(this.#server, file))
  }
}

/** What the item shows. */
function view(
  server: ServerState,
  file: StatusParams | undefined,
): Pick<LanguageStatusItem, 'text' | 'detail' | 'busy' | 'severity' | 'command'> {
  const showLog = { title: 'Show Log', command: 'braggline.showLog' }
  const quiet = { severity: LanguageStatusSeverity.Information, command: showLog }
  if (server === 'stopped')
    return {
      text: 'Server stopped',
      detail: 'The log says why',
      busy: false,
      severity: LanguageStatusSeverity.Error,
      command: { title: 'Restart', command: 'braggline.restartServer' },
    }
  if (server !== 'running')
    return { ...quiet, text: 'Starting', detail: undefined, busy: server === 'starting' }
  if (!file) return { ...quiet, text: 'Lattice file', detail: undefined, busy: false }
  return {
    ...quiet,
    text: file.crystal ?? 'Lattice file',
    detail: file.pending ? 'Looking for symmetry' : tally(file),
    busy: file.pending,
  }
}

function tally({ errors, warnings, infos }: StatusParams): string {
  const count = (n: number, one: string, many: string) => (n === 0 ? [] : [`${n} ${n === 1 ? one : many}`])
  const parts = [
    ...count(errors, 'error', 'errors'),
    ...count(warnings, 'warning', 'warnings'),
    ...count(infos, 'remark', 'remarks'),
  ]
  return parts.join(', ') || 'No findings'
}
