import { execFileSync } from 'node:child_process'
import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join, resolve } from 'node:path'

/** Needs dist/. Small files, as a screening has them: every one another lattice, with atoms, path and mesh. */
const file = (i: number): string =>
  `title: candidate ${i}\nlattice: {bravais: oP, a: ${4 + (i % 97) / 50}, b: ${5 + (i % 89) / 50}, c: ${6.5 + (i % 83) / 50}}\natoms:\n  - Si: [0, 0, 0]\n  - O: [1/2, 1/2, 0.${1000 + (i % 3989)}]\npath: Γ – X – S – Y – Γ – Z\nmesh: {divisions: [4, 4, 4]}\n`

const folders = new Map<number, string>()
function folderOf(files: number): string {
  const known = folders.get(files)
  if (known) return known
  const folder = mkdtempSync(join(tmpdir(), 'braggline-jobs-'))
  process.on('exit', () => rmSync(folder, { recursive: true, force: true }))
  // A folder of ten thousand entries is slow on some disks.
  for (let i = 0; i < files; i++) {
    const at = join(folder, String(Math.floor(i / 500)))
    if (i % 500 === 0) mkdirSync(at)
    writeFileSync(join(at, `${i}.lattice.yaml`), file(i))
  }
  folders.set(files, folder)
  return folder
}

interface Measured {
  readonly seconds: number
  /** Processor time of all threads, in milliseconds a file. */
  readonly processor: number
  /** Peak in MB, of the process with all its threads. */
  readonly memory: number
}

function measure(files: number, jobs: number): Measured {
  const folder = folderOf(files)
  const script = `process.on('exit', () => { const u = process.resourceUsage(); require('fs').writeSync(2, 'USED ' + u.maxRSS + ' ' + (u.userCPUTime + u.systemCPUTime)) });process.argv.splice(1, 0, 'braggline');require(${JSON.stringify(resolve('dist/cli.js'))})`
  const started = performance.now()
  const said = execFileSync(
    '/bin/sh',
    [
      '-c',
      `"$0" -e "$1" check "$2" --format jsonl --fail-on never --jobs ${jobs} 2>&1 >/dev/null`,
      process.execPath,
      script,
      folder,
    ],
    { encoding: 'utf8' },
  )
  const [, memory, processor] = /USED (\d+) (\d+)/.exec(said)!
  return {
    seconds: (performance.now() - started) / 1000,
    processor: Number(processor) / 1000 / files,
    memory: Number(memory) / 1024,
  }
}

const known = new Map<string, Measured>()
/** One run serves all its figures. */
function measured(files: number, jobs: number): Measured {
  const key = `${files} ${jobs}`
  const result = known.get(key) ?? measure(files, jobs)
  known.set(key, result)
  return result
}

export const benches = [
  ...[1, 2].flatMap(jobs => [
    {
      name: `jobs: 10,000 files, --jobs ${jobs}`,
      unit: 'files/s',
      run: () => [10_000 / measured(10_000, jobs).seconds],
    },
    {
      name: `jobs: processor time a file of 10,000, --jobs ${jobs}`,
      unit: 'ms',
      run: () => [measured(10_000, jobs).processor],
    },
  ]),
  ...[1_000, 10_000].map(files => ({
    name: `jobs: peak memory of ${files} files, --jobs 2`,
    unit: 'MB',
    run: () => [measured(files, 2).memory],
  })),
]
