/** What the Node and the browser edition share: everything but how a server is started. */
import {
  type Disposable,
  type ExtensionContext,
  languages,
  type LogOutputChannel,
  type Uri,
  window,
  workspace,
} from 'vscode'
import { CHECKED, type CheckedParams, type CheckedResult } from '../../server/src/protocol.ts'
import { registerCif } from './cif.ts'
import { registerCommands } from './commands.ts'
import { registerForms } from './forms.ts'
import { registerNewFile } from './new-file.ts'
import { registerPaste } from './paste.ts'
import { registerReport } from './report.ts'
import { registerRewrite } from './rewrite.ts'
import { type CreateClient, Server } from './server.ts'
import { StatusItem } from './status.ts'
import { registerWalkthrough } from './walkthrough.ts'
import { registerWorkspaceCheck } from './workspace-check.ts'
import { registerZoneView } from './zone-view.ts'

/**
 * The pattern beside the language of its own is for people whose `files.associations` give every `*.yaml` to YAML:
 * that setting wins over the file names that an extension claims.
 */
export const SELECTOR = [{ language: 'braggline' }, { language: 'yaml', pattern: '**/*.lattice.{yaml,yml}' }]

/** What other extensions may ask of this one. */
export interface Api {
  /** Resolves when the text as it stands has been checked in full; undefined where the server does not know it. */
  checked(uri: Uri): Promise<CheckedResult | undefined>
}

let running: Server | undefined

export function activate(context: ExtensionContext, createClient: CreateClient): Api {
  const log: LogOutputChannel = window.createOutputChannel('Braggline', { log: true })
  const status = new StatusItem(SELECTOR)
  const server = new Server(createClient, {
    log,
    status,
    selector: SELECTOR,
    extensionUri: context.extensionUri,
  })
  running = server
  context.subscriptions.push(log, status, startWithFirstFile(server))
  registerNewFile(context, server)
  registerCif(context, { server, log, selector: SELECTOR })
  registerCommands(context, { server, log, selector: SELECTOR })
  registerForms(context, { server, log, selector: SELECTOR })
  registerPaste(context, { server, log, selector: SELECTOR })
  registerRewrite(context, { server, selector: SELECTOR })
  registerReport(context, { server, log, selector: SELECTOR })
  registerWalkthrough(context, { server })
  registerWorkspaceCheck(context, { server, log })
  registerZoneView(context, { server, log, selector: SELECTOR })
  return {
    async checked(uri) {
      const document = workspace.textDocuments.find(each => each.uri.toString() === uri.toString())
      if (!document) return undefined
      const params: CheckedParams = { uri: document.uri.toString(), version: document.version }
      return (await server.request<CheckedResult | null>(CHECKED, params)) ?? undefined
    },
  }
}

/** The window waits for this before it closes. */
export async function deactivate(): Promise<void> {
  await running?.dispose()
  running = undefined
}

/** A folder that holds lattice files wakes the extension; the server waits until one of them is open. */
function startWithFirstFile(server: Server): Disposable {
  const startFor = (document: Parameters<typeof languages.match>[1]) => {
    if (languages.match(SELECTOR, document) > 0) server.start()
  }
  workspace.textDocuments.forEach(startFor)
  return workspace.onDidOpenTextDocument(startFor)
}
