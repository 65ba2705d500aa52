/** Starts the thread that searches large cells for symmetry; it is a bundle of its own beside the caller's. */
import { join } from 'node:path'
import { Worker } from 'node:worker_threads'
import type { StartWorker } from './symmetry-service.ts'

export const startSymmetryThread: StartWorker = (answer, failed) => {
  const worker = new Worker(join(__dirname, 'symmetry-worker.js'))
  worker.on('message', answer)
  worker.on('error', error => failed(error.message))
  worker.unref()
  return worker
}
