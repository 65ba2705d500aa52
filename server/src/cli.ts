#!/usr/bin/env node
/** The command line under Node: the process, its streams, its signals. */
import { availableParallelism } from 'node:os'
import type { Io } from './cli/io.ts'
import { run } from './cli/run.ts'
import { startFileThread } from './cli-thread.ts'
import { fillFormInThread } from './form-thread.ts'
import { loadSymmetryFromDisk } from './symmetry-node.ts'
import { WorkerSymmetry } from './symmetry-service.ts'
import { startSymmetryThread } from './symmetry-thread.ts'

/** A reader that has seen enough (`| head`) is no fault. */
function endQuietly(error: NodeJS.ErrnoException): void {
  if (error.code !== 'EPIPE') throw error
  process.exit()
}
process.stdout.on('error', endQuietly)
process.stderr.on('error', endQuietly)

const io: Io = {
  cwd: process.cwd(),
  env: process.env,
  out: { write: text => process.stdout.write(text), isTerminal: Boolean(process.stdout.isTTY) },
  err: { write: text => process.stderr.write(text), isTerminal: Boolean(process.stderr.isTTY) },
  async readInput() {
    const chunks: Buffer[] = []
    for await (const chunk of process.stdin) chunks.push(chunk)
    return Buffer.concat(chunks)
  },
  now: () => performance.now(),
  startFileWorker: startFileThread,
  cores: availableParallelism(),
  fillForm: fillFormInThread,
}

let symmetry: WorkerSymmetry | undefined
run(process.argv.slice(2), io, () => {
  loadSymmetryFromDisk()
  return (symmetry = new WorkerSymmetry(startSymmetryThread))
}).then(
  status => {
    symmetry?.dispose()
    process.exitCode = status
  },
  error => {
    process.stderr.write(
      `braggline: this is a fault of Braggline, please report it: ${error instanceof Error ? error.stack : error}\n`,
    )
    process.exitCode = 2
  },
)
