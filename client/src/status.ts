import {
  type DocumentSelector,
  l10n,
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
): Pick<
  LanguageStatusItem,
  'text' | 'detail' | 'busy' | 'severity' | 'command' | 'accessibilityInformation'
> {
  const { Information, Warning, Error } = LanguageStatusSeverity
  const showLog = { title: l10n.t('Show Log'), command: 'braggline.showLog' }
  const quiet = { severity: Information, command: showLog, accessibilityInformation: undefined }
  if (server === 'stopped')
    return {
      text: l10n.t('Server stopped'),
      detail: l10n.t('The log says why'),
      busy: false,
      severity: Error,
      command: { title: l10n.t('Restart'), command: 'braggline.restartServer' },
      accessibilityInformation: undefined,
    }
  if (server !== 'running')
    return { ...quiet, text: l10n.t('Starting'), detail: undefined, busy: server === 'starting' }
  if (!file) return { ...quiet, text: l10n.t('Lattice file'), detail: undefined, busy: false }
  const text = file.crystal ?? l10n.t('Lattice file')
  const found = tally(file)
  const detail = file.pending
    ? l10n.t('{0}; looking for symmetry', found)
    : [found, ...file.limits].join('; ')
  return {
    text,
    detail,
    busy: file.pending,
    severity: file.limits.length > 0 ? Warning : Information,
    command: { title: l10n.t('Open Report'), command: 'braggline.openReport' },
    accessibilityInformation: { label: `${text}, ${detail}` },
  }
}

function tally({ errors, warnings, infos }: StatusParams): string {
  const count = (n: number, one: string, many: (n: number) => string) =>
    n === 0 ? [] : [n === 1 ? one : many(n)]
  const parts = [
    ...count(errors, l10n.t('1 error'), n => l10n.t('{0} errors', n)),
    ...count(warnings, l10n.t('1 warning'), n => l10n.t('{0} warnings', n)),
    ...count(infos, l10n.t('1 remark'), n => l10n.t('{0} remarks', n)),
  ]
  return parts.join(', ') || l10n.t('No findings')
}
