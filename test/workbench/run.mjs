// node test/workbench/run.mjs : installs the packaged extension into a real VS Code and runs the suites in it.
//   BRAGGLINE_VSCODE   versions of VS Code, parted by commas  (default: DEFAULT_VERSIONS)
//   BRAGGLINE_SESSION  run only the sessions with this word in their name
// Where npm cannot deliver VS Code's server, the desktop edition is downloaded instead.
import { spawnSync } from 'node:child_process'
import {
  cpSync,
  existsSync,
  mkdirSync,
  mkdtempSync,
  readdirSync,
  readFileSync,
  rmSync,
  writeFileSync,
} from 'node:fs'
import { createServer } from 'node:net'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { fileURLToPath } from 'node:url'
import {
  downloadAndUnzipVSCode,
  resolveCliArgsFromVSCodeExecutablePath,
  runTests,
} from '@vscode/test-electron'
import { build } from 'esbuild'
import Mocha from 'mocha'
import { getWorkbench } from './get-workbench.mjs'

/** The oldest that starts by itself from npm's files, and the newest. */
const DEFAULT_VERSIONS = '1.100.3,1.139.1'
const SESSIONS = [
  {
    name: 'desk',
    workspace: 'desk',
    suites: ['findings', 'files', 'colours', 'commands', 'settings', 'process', 'pictures', 'zone-tab'],
  },
  {
    name: 'panels',
    workspace: 'desk',
    suites: ['walkthrough', 'report-picture', 'report', 'paste', 'workspace-check', 'forms', 'cif'],
  },
  { name: 'craft', workspace: 'desk', suites: ['craft'] },
  // The demo folder itself: its files are what the view is for.
  { name: 'zone', workspace: '../../../demo', suites: ['zone-view'] },
  { name: 'elsewhere', workspace: 'elsewhere', suites: ['asleep'] },
  { name: 'writing', workspace: 'elsewhere', suites: ['writing'] },
  {
    name: 'browser',
    workspace: 'desk',
    suites: [
      'findings',
      'files',
      'commands',
      'settings',
      'zone-tab',
      'report',
      'paste',
      'workspace-check',
      'forms',
      'cif',
      'craft',
    ],
    browser: true,
  },
]

const here = path => fileURLToPath(new URL(path, import.meta.url))
const root = here('../../')
const artifacts = join(root, 'test-artifacts')
const { name, version, publisher } = JSON.parse(readFileSync(join(root, 'package.json'), 'utf8'))
const vsix = join(root, `${name}-${version}.vsix`)
if (!existsSync(vsix)) throw new Error(`${vsix} is missing: npm run package makes it`)

const counts = { passed: 0, failed: 0 }
const wanted = process.env.BRAGGLINE_SESSION ?? ''
const work = mkdtempSync(join(tmpdir(), 'braggline-'))
try {
  for (const code of (process.env.BRAGGLINE_VSCODE ?? DEFAULT_VERSIONS).split(',')) await runVersion(code)
} finally {
  rmSync(work, { recursive: true, force: true })
}
mkdirSync(artifacts, { recursive: true })
writeFileSync(join(artifacts, 'workbench.json'), JSON.stringify(counts))
console.log(`${counts.passed} passed, ${counts.failed} failed`)
process.exit(counts.failed || !counts.passed ? 1 : 0)

function add({ passes, failures }) {
  counts.passed += passes
  counts.failed += failures
}

async function runVersion(code) {
  const editor = await findEditor(code)
  const extensions = join(work, code, 'extensions')
  mkdirSync(extensions, { recursive: true })
  editor.install(extensions)
  const folder = readdirSync(extensions).find(entry => entry.startsWith(`${publisher}.${name}`))
  const installed = join(extensions, folder)
  await checkPackage(installed)
  for (const session of SESSIONS.filter(each => each.name.includes(wanted))) {
    console.log(`\nVS Code ${code}, ${session.name}`)
    add(await runSession(editor, session, { code, extensions, installed }))
  }
}

/** How to install into an editor, and what `runTests` needs to start it. */
async function findEditor(version) {
  let workbench
  try {
    workbench = getWorkbench(version)
  } catch (error) {
    console.error(`VS Code's server cannot be had from npm (${error.message}); taking the desktop edition.`)
  }
  const data = join(work, version, 'installing')
  mkdirSync(data, { recursive: true })
  if (workbench) {
    const { main, node } = workbench
    const install = extensions =>
      quietly(
        node,
        main,
        '--accept-server-license-terms',
        `--server-data-dir=${data}`,
        ...installArgs(extensions),
      )
    return {
      install,
      launch: { vscodeExecutablePath: here('headless-code.mjs') },
      env: { HEADLESS_CODE_SERVER: main, HEADLESS_CODE_NODE: node },
    }
  }
  const executable = await downloadAndUnzipVSCode(version)
  const [cli] = resolveCliArgsFromVSCodeExecutablePath(executable)
  const install = extensions => quietly(cli, `--user-data-dir=${data}`, ...installArgs(extensions))
  return { install, launch: { vscodeExecutablePath: executable }, env: {} }
}

function installArgs(extensions) {
  return [`--extensions-dir=${extensions}`, '--install-extension', vsix]
}

/** What the command says is shown only where it fails. */
function quietly(command, ...args) {
  const { status, stdout, stderr } = spawnSync(command, args, { encoding: 'utf8' })
  if (status !== 0) throw new Error(`${command} ended with ${status}\n${stdout}\n${stderr}`.slice(0, 4000))
}

async function checkPackage(installed) {
  Object.assign(process.env, { BRAGGLINE_VSIX: vsix, BRAGGLINE_INSTALLED: installed })
  const mocha = new Mocha({ color: false })
  mocha.addFile(here('package.test.mjs'))
  await mocha.loadFilesAsync()
  const runner = await new Promise(done => {
    const running = mocha.run(() => done(running))
  })
  add(runner.stats)
}

/** A session has a window, data and a copy of its workspace of its own: the suites change files. */
async function runSession(editor, session, { code, extensions, installed }) {
  const home = join(work, code, session.name)
  const workspace = join(home, 'workspace')
  const result = join(home, 'result.json')
  cpSync(here(`workspaces/${session.workspace}`), workspace, { recursive: true })
  let developed = here('bare-extension')
  let suites = join(root, '.cache', 'suites', `${session.name}.js`)
  if (session.browser) {
    // Without its entry for Node an extension runs in the browser's worker, and so do suites that lie inside it.
    developed = join(home, 'extension')
    cpSync(installed, developed, { recursive: true })
    const { main, ...manifest } = JSON.parse(readFileSync(join(developed, 'package.json'), 'utf8'))
    writeFileSync(join(developed, 'package.json'), JSON.stringify(manifest))
    suites = join(developed, 'suites.js')
  }
  await bundle(session, suites)
  const port = await freePort()
  let ended = true
  try {
    await runTests({
      ...editor.launch,
      extensionDevelopmentPath: developed,
      extensionTestsPath: suites,
      launchArgs: [
        workspace,
        `--user-data-dir=${join(home, 'data')}`,
        `--extensions-dir=${session.browser ? join(home, 'extensions') : extensions}`,
        `--remote-debugging-port=${port}`,
      ],
      extensionTestsEnv: {
        ...editor.env,
        WORKBENCH_CDP: `http://127.0.0.1:${port}`,
        WORKBENCH_PICTURES: join(artifacts, `vscode-${code}`),
      },
    })
  } catch (error) {
    ended = false
    console.error(`${session.name}: ${error.message}`)
  }
  if (!existsSync(result)) return { passes: 0, failures: 1 }
  const { passes, failures } = JSON.parse(readFileSync(result, 'utf8'))
  return { passes, failures: failures || (ended && passes > 0 ? 0 : 1) }
}

/** The suites of a session as one CommonJS file, as the editor wants it. */
async function bundle({ suites, browser }, outfile) {
  await build({
    entryPoints: [here('suite/index.ts')],
    outfile,
    bundle: true,
    format: 'cjs',
    define: { SUITES: JSON.stringify(suites) },
    logLevel: 'warning',
    ...(browser
      ? {
          platform: 'browser',
          target: 'es2022',
          external: ['vscode', 'playwright-core', 'node:fs', 'node:path'], // The last three: in suites that do not run here.
          alias: {
            mocha: here('suite/mocha-in-worker.ts'),
            'node:assert': here('suite/assert.ts'),
          },
        }
      : { platform: 'node', target: 'node20', external: ['vscode', 'mocha', 'playwright-core'] }),
  })
}

function freePort() {
  return new Promise(found => {
    const server = createServer().listen(0, '127.0.0.1', () => {
      const { port } = server.address()
      server.close(() => found(port))
    })
  })
}
