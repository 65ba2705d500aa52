/** The language server in a Web Worker. */
import wasm from '@spglib/moyo-wasm/moyo_wasm_bg.wasm'
import { BrowserMessageReader, BrowserMessageWriter, createConnection } from 'vscode-languageserver/browser'
import { loadSymmetryLibrary } from './crystal/symmetry-library.ts'
import { fillForm } from './exchange/forms/engine.ts'
import { startServer } from './server.ts'
import { type StartWorker, searchSymmetry } from './symmetry-service.ts'

declare const BRAGGLINE_VERSION: string

/** A search cannot be ended in the middle here, so cells that could take long are not begun. */
const MOST_ATOMS = 400

/** No thread of its own: the search runs between two messages. */
const searchBetween: StartWorker = answer => {
  let ended = false
  return {
    postMessage: input =>
      setTimeout(() => {
        if (ended) return
        const tooMany = input.positions.length > MOST_ATOMS
        const reason = `in the browser cells of over ${MOST_ATOMS} atoms are not searched for symmetry`
        answer(tooMany ? { state: 'failed', reason } : searchSymmetry(input))
      }),
    terminate: () => {
      ended = true
    },
  }
}

loadSymmetryLibrary(wasm)
const scope = self as unknown as DedicatedWorkerGlobalScope
startServer(createConnection(new BrowserMessageReader(scope), new BrowserMessageWriter(scope)), {
  startWorker: searchBetween,
  fillForm: async job => fillForm(job),
  version: BRAGGLINE_VERSION,
})
