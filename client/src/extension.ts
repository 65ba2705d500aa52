/** The extension on a desktop or a remote machine: the server is a Node process of its own. */
import type { ExtensionContext } from 'vscode'
import { LanguageClient, TransportKind } from 'vscode-languageclient/node'
import { activate as activateCommon, type Api } from './common.ts'

export { deactivate } from './common.ts'

export function activate(context: ExtensionContext): Api {
  const module = context.asAbsolutePath('dist/server.js')
  const server = { module, transport: TransportKind.ipc }
  return activateCommon(
    context,
    async options => new LanguageClient('braggline', 'Braggline', server, options),
  )
}
