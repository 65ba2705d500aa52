import { readFileSync } from 'node:fs'
import { Snapshot } from '../../server/src/analysis.ts'
import { Workshop } from '../../server/src/meaning/workshop.ts'
import { WorkerSymmetry } from '../../server/src/symmetry-service.ts'
import { loadSymmetryFromDisk } from '../../server/src/symmetry-node.ts'
import { generatedFile } from './generate.ts'

loadSymmetryFromDisk()

/** As in the server: the search for symmetry of a large cell runs elsewhere and is not waited for. */
const elsewhere = new WorkerSymmetry(() => ({ postMessage() {}, terminate() {} }))

/** One digit in the middle of the file changes between samples, as while typing. */
function check(text: string, rounds: number): number[] {
  const workshop = new Workshop(elsewhere)
  const middle = text.indexOf('.', text.length >> 1) + 1
  const samples: number[] = []
  for (let i = -10; i < rounds; i++) {
    const edited = `${text.slice(0, middle)}${(i + 10) % 10}${text.slice(middle + 1)}`
    const started = performance.now()
    void new Snapshot(edited, workshop).findings
    if (i >= 0) samples.push(performance.now() - started)
  }
  elsewhere.dispose()
  return samples
}

const demo = readFileSync('demo/hexagonal-oxide.lattice.yaml', 'utf8')

export const benches = [
  { name: 'check: the hexagonal demo file', unit: 'ms', run: () => check(demo, 200) },
  ...[40, 400, 4000].map(lines => ({
    name: `check: ${lines} lines`,
    unit: 'ms',
    run: () => check(generatedFile(lines), lines > 1000 ? 30 : 100),
  })),
]
