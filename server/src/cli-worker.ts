/** A thread of `check` or `report`: gets names of files, answers with what came of each. */
import { parentPort, workerData } from 'node:worker_threads'
import { checkWork, type How } from './cli/check.ts'
import { Engine } from './cli/engine.ts'
import type { Place } from './cli/files.ts'
import { type FileTask, inTurn } from './cli/threads.ts'
import { type ReportHow, reportWork } from './cli/report.ts'
import { loadSymmetryFromDisk } from './symmetry-node.ts'
import { WorkerSymmetry } from './symmetry-service.ts'
import { startSymmetryThread } from './symmetry-thread.ts'

const { verb, how, cwd } = workerData as FileTask & { readonly cwd: string }
// Standard input belongs to the thread that started this one.
const place: Place = { cwd, readInput: async () => new Uint8Array() }

loadSymmetryFromDisk()
const engine = new Engine(new WorkerSymmetry(startSymmetryThread))
const work =
  verb === 'check' ? checkWork(engine, place, how as How) : reportWork(engine, place, how as ReportHow)
parentPort!.on(
  'message',
  inTurn(async name => parentPort!.postMessage(await work(name))),
)
