/** The language server under Node: over stdio for any editor, over IPC for the extension. */
import { join } from 'node:path'
import { pathToFileURL } from 'node:url'
import { createConnection, ProposedFeatures } from 'vscode-languageserver/node'
import { fillFormInThread } from './form-thread.ts'
import { startServer } from './server.ts'
import { loadSymmetryFromDisk } from './symmetry-node.ts'
import { startSymmetryThread } from './symmetry-thread.ts'

declare const BRAGGLINE_VERSION: string

function options() {
  return {
    startWorker: startSymmetryThread,
    fillForm: fillFormInThread,
    version: BRAGGLINE_VERSION,
    rulePages: pathToFileURL(join(__dirname, '..', 'docs', 'rules')).href,
  }
}

/** For `braggline serve --stdio`. */
export function serveStdio(): void {
  loadSymmetryFromDisk()
  startServer(createConnection(ProposedFeatures.all, process.stdin, process.stdout), options())
}

/** For a client that says on the command line how it talks (`--node-ipc`, `--stdio`, …). */
export function serve(): void {
  loadSymmetryFromDisk()
  startServer(createConnection(ProposedFeatures.all), options())
}
