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

/** Wall time in seconds and peak memory in MB (of the process with all its threads). */
function measured(files: number, jobs: number): { seconds: number; memory: number } {
  const folder = folderOf(files)
  const script = `process.on('exit', () => require('fs').writeSync(2, 'PEAK ' + process.resourceUsage().maxRSS));process.argv.splice(1, 0, 'braggline');require(${JSON.stringify(resolve('dist/cli.js'))})`
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
  return { seconds: (performance.now() - started) / 1000, memory: Number(/PEAK (\d+)/.exec(said)![1]) / 1024 }
}

export const benches = [
  ...[1, 2].map(jobs => ({
    name: `jobs: 10,000 files, --jobs ${jobs}`,
    unit: 'files/s',
    run: () => [10_000 / measured(10_000, jobs).seconds],
  })),
  ...[1_000, 10_000].map(files => ({
    name: `jobs: peak memory of ${files} files, --jobs 2`,
    unit: 'MB',
    run: () => [measured(files, 2).memory],
  })),
]
