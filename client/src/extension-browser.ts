/** The extension in a browser: the server is a Web Worker. */
import { type ExtensionContext, Uri, workspace } from 'vscode'
import { LanguageClient } from 'vscode-languageclient/browser'
import { activate as activateCommon, type Api } from './common.ts'

export { deactivate } from './common.ts'

export function activate(context: ExtensionContext): Api {
  return activateCommon(context, async options => {
    const worker = await startWorker(Uri.joinPath(context.extensionUri, 'dist', 'server-browser.js'))
    return new LanguageClient('braggline', 'Braggline', worker, options)
  })
}

/** A worker may not be started from the address of a remote folder, so its text is fetched first. */
async function startWorker(script: Uri): Promise<Worker> {
  const text = await workspace.fs.readFile(script)
  const address = URL.createObjectURL(new Blob([new Uint8Array(text)], { type: 'text/javascript' }))
  return new Worker(address)
}
