/** The thread that searches large cells for symmetry. */
import { parentPort } from 'node:worker_threads'
import type { SymmetryInput } from './crystal/symmetry.ts'
import { loadSymmetryFromDisk } from './symmetry-node.ts'
import { searchSymmetry } from './symmetry-service.ts'

loadSymmetryFromDisk()
parentPort?.on('message', (input: SymmetryInput) => parentPort?.postMessage(searchSymmetry(input)))
