/** The thread that fills one form and ends; whoever started it ends it sooner where it takes too long. */
import { parentPort, workerData } from 'node:worker_threads'
import { fillForm } from './exchange/forms/engine.ts'

parentPort?.postMessage(fillForm(workerData))
