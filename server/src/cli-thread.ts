/** Starts the threads that work on files; they are a bundle of their own beside the caller's. */
import { join } from 'node:path'
import { Worker } from 'node:worker_threads'
import type { FileResult, StartFileWorker } from './cli/threads.ts'

export const startFileThread: StartFileWorker = (task, answer, failed) => {
  const worker = new Worker(join(__dirname, 'cli-worker.js'), { workerData: { ...task, cwd: process.cwd() } })
  let ended = false
  const end = (reason: string) => {
    if (!ended) failed(reason)
    ended = true
  }
  worker.on('message', (result: FileResult<unknown>) => answer(result))
  worker.on('error', error => end(error.message))
  worker.on('exit', status => end(`status ${status}`))
  return {
    post: name => worker.postMessage(name),
    terminate() {
      ended = true
      void worker.terminate()
    },
  }
}
