// node esbuild.mjs : writes dist/, everything that the extension and the command need at run time.
import {
  copyFileSync,
  existsSync,
  mkdirSync,
  readdirSync,
  readFileSync,
  rmSync,
  writeFileSync,
} from 'node:fs'
import { join } from 'node:path'
import { fileURLToPath } from 'node:url'
import { build } from 'esbuild'

const root = fileURLToPath(new URL('.', import.meta.url))
const dist = join(root, 'dist')
const { version } = JSON.parse(readFileSync(join(root, 'package.json'), 'utf8'))

/** @type {import('esbuild').BuildOptions} */
const common = {
  absWorkingDir: root,
  bundle: true,
  format: 'cjs', // An ES module bundle dies on the dynamic `require` of a CommonJS dependency.
  define: { BRAGGLINE_VERSION: JSON.stringify(version) },
  // Names are kept, so that a stack in a bug report can be read.
  minifySyntax: true,
  minifyWhitespace: true,
  legalComments: 'none',
  logLevel: 'warning',
  metafile: true,
}
const node = {
  ...common,
  platform: 'node',
  target: 'node20',
  // A dependency asks for the address of its own file.
  define: { ...common.define, 'import.meta.url': 'importMetaUrl' },
  banner: { js: 'const importMetaUrl = require("node:url").pathToFileURL(__filename).href;' },
}
const browser = { ...common, platform: 'browser', target: 'es2022' }

const builds = [
  {
    ...node,
    entryPoints: {
      cli: 'server/src/cli.ts',
      'cli-worker': 'server/src/cli-worker.ts',
      server: 'server/src/server-entry.ts',
      'symmetry-worker': 'server/src/symmetry-worker.ts',
      'form-worker': 'server/src/form-worker.ts',
    },
    mainFields: ['module', 'main'],
  },
  { ...node, entryPoints: { client: 'client/src/extension.ts' }, external: ['vscode'] },
  // The browser has no file beside the bundle: the WebAssembly module goes inside.
  {
    ...browser,
    entryPoints: { 'server-browser': 'server/src/server-browser.ts' },
    loader: { '.wasm': 'binary' },
  },
  { ...browser, entryPoints: { 'client-browser': 'client/src/extension-browser.ts' }, external: ['vscode'] },
  {
    ...browser,
    entryPoints: { view: 'client/view/main.ts', 'view-style': 'client/view/view.css' },
    // The library that draws solids is a bundle of its own, fetched after the first picture.
    format: 'esm',
    splitting: true,
    chunkNames: 'view-[name]',
    minify: true,
  },
]

rmSync(dist, { recursive: true, force: true })
mkdirSync(dist, { recursive: true })
const results = await Promise.all(builds.map(options => build({ ...present(options), outdir: dist })))

const wasm = join(root, 'node_modules', '@spglib', 'moyo-wasm', 'moyo_wasm_bg.wasm')
copyFileSync(wasm, join(dist, 'moyo_wasm_bg.wasm'))
writeFileSync(
  join(dist, 'THIRD-PARTY-NOTICES.txt'),
  notices(results.flatMap(({ metafile }) => Object.keys(metafile.inputs))),
)

/** Without the entries that are not there, which are named on stderr. */
function present(options) {
  const entries = Object.entries(options.entryPoints)
  for (const [, file] of entries) if (!existsSync(join(root, file))) console.error(`left out: ${file}`)
  return {
    ...options,
    entryPoints: Object.fromEntries(entries.filter(([, file]) => existsSync(join(root, file)))),
  }
}

/** The licences of all packages that a bundle holds, as their terms ask. */
function notices(inputs) {
  const folders = new Map(
    inputs.flatMap(input => {
      const [, folder, name] = /^(.*node_modules\/((?:@[^/]+\/)?[^/]+))\//.exec(input) ?? []
      return folder ? [[name, join(root, folder)]] : []
    }),
  )
  return [...folders].sort().map(notice).join('\n\n')
}

function notice([name, folder]) {
  const { version, license } = JSON.parse(readFileSync(join(folder, 'package.json'), 'utf8'))
  const file = existsSync(folder) && readdirSync(folder).find(entry => /^licen[cs]e/i.test(entry))
  const text = file ? readFileSync(join(folder, file), 'utf8').trim() : `Licence: ${license}`
  return `${'='.repeat(72)}\n${name} ${version} (${license})\n${'='.repeat(72)}\n${text}\n`
}
