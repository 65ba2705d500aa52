/** The language server under Node: over stdio for any editor, over IPC for the extension. */
import { join } from 'node:path'
import { pathToFileURL } from 'node:url'
import { Worker } from 'node:worker_threads'
import { createConnection, ProposedFeatures } from 'vscode-languageserver/node'
import { startServer } from './server.ts'
import { loadSymmetryFromDisk } from './symmetry-node.ts'
import type { StartWorker } from './symmetry-service.ts'

declare const BRAGGLINE_VERSION: string

/** The worker is a bundle of its own beside this one. */
export const startSymmetryWorker: StartWorker = (answer, failed) => {
  const worker = new Worker(join(__dirname, 'symmetry-worker.js'))
  worker.on('message', answer)
  worker.on('error', error => failed(error.message))
  worker.unref()
  return worker
}

function options() {
  return {
    startWorker: startSymmetryWorker,
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
