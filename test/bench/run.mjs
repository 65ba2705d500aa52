// node test/bench/run.mjs [NAME…] : runs the benchmarks of test/bench, one JSON line each:
// {"name","median","unit","n"}. Samples are taken in one process, after a warm-up that each benchmark does itself.
import { mkdirSync, readdirSync } from 'node:fs'
import { join } from 'node:path'
import { fileURLToPath, pathToFileURL } from 'node:url'
import { build } from 'esbuild'

const here = fileURLToPath(new URL('.', import.meta.url))
const root = join(here, '..', '..')
const out = join(root, '.cache', 'bench')
const wanted = process.argv.slice(2)
mkdirSync(out, { recursive: true })

const files = readdirSync(here).filter(name => name.endsWith('.bench.ts'))
await build({
  entryPoints: files.map(name => join(here, name)),
  outdir: out,
  bundle: true,
  platform: 'node',
  format: 'esm',
  // The symmetry library starts once in a process: all benchmarks must see the same copy of what starts it.
  splitting: true,
  target: 'node20',
  packages: 'external',
  outExtension: { '.js': '.mjs' },
  logLevel: 'warning',
})

for (const name of files) {
  const { benches } = await import(pathToFileURL(join(out, name.replace(/\.ts$/, '.mjs'))).href)
  for (const bench of benches) {
    if (wanted.length > 0 && !wanted.some(word => bench.name.includes(word))) continue
    const samples = [...(await bench.run())].sort((a, b) => a - b)
    const middle = samples.length >> 1
    const median = samples.length % 2 ? samples[middle] : (samples[middle - 1] + samples[middle]) / 2
    console.log(
      JSON.stringify({
        name: bench.name,
        median: Number(median.toPrecision(4)),
        unit: bench.unit,
        n: samples.length,
      }),
    )
  }
}
process.exit(0)
