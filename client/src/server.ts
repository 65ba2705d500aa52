import {
  type CancellationToken,
  type Diagnostic,
  type DocumentSelector,
  EventEmitter,
  l10n,
  type LogOutputChannel,
  Uri,
  workspace,
} from 'vscode'
import {
  type BaseLanguageClient,
  CloseAction,
  DiagnosticPullMode,
  ErrorAction,
  type ErrorHandler,
  type LanguageClientOptions,
  RevealOutputChannelOn,
  State,
  vsdiag,
} from 'vscode-languageclient'
import {
  CHECK_TEXT,
  type CheckTextParams,
  type CheckTextResult,
  STATUS,
  type StatusParams,
} from '../../server/src/protocol.ts'
import type { StatusItem } from './status.ts'

/** A server that ends by itself is started again, but not for ever: this often within this time. */
const MOST_RESTARTS = 4
const RESTART_WINDOW_MS = 3 * 60_000
/** The longest wait for a server to say goodbye before it is left behind, in ms. */
const STOP_LIMIT_MS = 2_000

/** Commands that a hover of the server may link to: none of them changes more than the text that it is about. */
const LINKED_COMMANDS = [
  'braggline.openZoneView',
  'braggline.openReport',
  'braggline.insertRecommendedPath',
  'braggline.showLog',
]

export type CreateClient = (options: LanguageClientOptions) => Promise<BaseLanguageClient>

interface Surroundings {
  readonly log: LogOutputChannel
  readonly status: StatusItem
  readonly selector: DocumentSelector & LanguageClientOptions['documentSelector']
  readonly extensionUri: Uri
}

/** The one language server of the window: started with the first lattice file, restarted by command or after a fall. */
export class Server {
  #client: Promise<BaseLanguageClient | undefined> | undefined
  #disposed = false
  readonly #checked = new EventEmitter<StatusParams>()
  /** After each check of a file. */
  readonly onChecked = this.#checked.event

  constructor(
    private readonly create: CreateClient,
    private readonly around: Surroundings,
  ) {}

  /** Does nothing where the server has been started. */
  start(): void {
    this.#client ??= this.#launch()
  }

  async restart(): Promise<void> {
    this.around.log.info('Restarting the server.')
    const stopping = this.#stop(this.#client)
    this.#client = stopping.then(() => this.#launch())
    await this.#client
  }

  /** @throws where the server cannot be started or answers with an error. */
  async request<R>(method: string, params: object): Promise<R> {
    return (await this.#running()).sendRequest<R>(method, params)
  }

  /**
   * What is wrong with a text that need not be open.
   * @throws as `request` does, and where it is cancelled.
   */
  async check(uri: Uri, text: string, token: CancellationToken): Promise<Diagnostic[]> {
    const client = await this.#running()
    const params: CheckTextParams = { uri: client.code2ProtocolConverter.asUri(uri), text }
    const { findings } = await client.sendRequest<CheckTextResult>(CHECK_TEXT, params, token)
    return client.protocol2CodeConverter.asDiagnostics([...findings], token)
  }

  async #running(): Promise<BaseLanguageClient> {
    this.start()
    const client = await this.#client
    if (!client) throw new Error(l10n.t('The Braggline server is not running; its log says why.'))
    return client
  }

  dispose(): Promise<void> {
    this.#disposed = true
    return this.#stop(this.#client)
  }

  async #launch(): Promise<BaseLanguageClient | undefined> {
    const { log, status } = this.around
    if (this.#disposed) return undefined
    status.starting()
    try {
      const client = await this.create(this.#options())
      client.onNotification(STATUS, (params: StatusParams) => {
        status.checked(params)
        this.#checked.fire(params)
      })
      client.onDidChangeState(({ newState }) => {
        if (newState === State.Running) status.running()
        else if (newState === State.Starting) status.starting()
        else status.stopped()
      })
      await client.start()
      return client
    } catch (error) {
      log.error('The server could not be started.', error instanceof Error ? error : String(error))
      status.stopped()
      return undefined
    }
  }

  async #stop(started: Promise<BaseLanguageClient | undefined> | undefined): Promise<void> {
    const client = await started
    try {
      await client?.dispose(STOP_LIMIT_MS)
    } catch (error) {
      this.around.log.warn(
        'The server did not stop in order.',
        error instanceof Error ? error : String(error),
      )
    }
  }

  #options(): LanguageClientOptions {
    const { log, selector, extensionUri } = this.around
    return {
      documentSelector: selector,
      outputChannel: log,
      traceOutputChannel: log,
      revealOutputChannelOn: RevealOutputChannelOn.Never,
      initializationOptions: {
        rulePages: Uri.joinPath(extensionUri, 'docs', 'rules').toString(),
        status: true,
        commands: true,
      },
      markdown: { isTrusted: { enabledCommands: LINKED_COMMANDS } },
      initializationFailedHandler: () => false,
      errorHandler: errorHandler(log),
      diagnosticPullOptions: {
        onChange: true,
        onSave: true,
        filter: ({ uri }, mode) =>
          mode === DiagnosticPullMode.onType &&
          workspace.getConfiguration('braggline', uri).get('checkOn') === 'save',
      },
      middleware: {
        // The old side of a comparison is not there to be mended.
        provideDiagnostics: (document, previous, token, next) => {
          const { scheme } = 'uri' in document ? document.uri : document
          if (scheme === 'git') return { kind: vsdiag.DocumentDiagnosticReportKind.full, items: [] }
          return next(document, previous, token)
        },
      },
    }
  }
}

/** Says everything in the log and nothing in notifications: the status item shows a server that stays down. */
function errorHandler(log: LogOutputChannel): ErrorHandler {
  const falls: number[] = []
  return {
    error: (error, _message, count) => {
      log.error(error)
      return {
        action: (count ?? 0) < MOST_RESTARTS ? ErrorAction.Continue : ErrorAction.Shutdown,
        handled: true,
      }
    },
    closed: () => {
      const now = Date.now()
      falls.push(now)
      const recent = falls.filter(time => now - time < RESTART_WINDOW_MS).length
      if (recent <= MOST_RESTARTS) return { action: CloseAction.Restart, handled: true }
      return {
        action: CloseAction.DoNotRestart,
        handled: true,
        message: l10n.t(
          'The server ended {0} times within three minutes and is left alone until it is restarted by command.',
          recent,
        ),
      }
    },
  }
}
