#!/usr/bin/env node
// Stands in for the `code` executable: takes the command line that @vscode/test-electron hands to desktop VS Code,
// starts VS Code's server with a headless Chromium as its window, and ends with the exit code of the suite.
//   HEADLESS_CODE_SERVER   path of server-main.js            (required)
//   HEADLESS_CODE_NODE     the Node to run it                (default: this one)
//   HEADLESS_CODE_BROWSER  path of Chromium                  (default: the first one on PATH)
//   HEADLESS_CODE_TIMEOUT  seconds before the run is failed  (default 600)
//   HEADLESS_CODE_VERBOSE  1: print the workbench's console too
import { spawn } from 'node:child_process'
import { existsSync, mkdirSync, statSync, writeFileSync } from 'node:fs'
import { delimiter, join, resolve } from 'node:path'
import { pathToFileURL } from 'node:url'
import { format } from 'node:util'
import { chromium } from 'playwright-core'

const WINDOW = { width: 1280, height: 800 }
const SETTINGS = {
  'security.workspace.trust.enabled': false,
  'workbench.startupEditor': 'none',
  'workbench.tips.enabled': false,
  'workbench.reduceMotion': 'on',
  'workbench.secondarySideBar.defaultVisibility': 'hidden',
  'telemetry.telemetryLevel': 'off',
  'extensions.autoCheckUpdates': false,
  'extensions.autoUpdate': false,
  'update.mode': 'none',
  'editor.cursorBlinking': 'solid',
  'files.autoSave': 'off',
  'git.enabled': false,
  'chat.commandCenter.enabled': false,
  'chat.disableAIFeatures': true,
}
const verbose = process.env.HEADLESS_CODE_VERBOSE === '1'

const { options, developed, paths } = readCommandLine(process.argv.slice(2))
const serverMain = process.env.HEADLESS_CODE_SERVER
const browserPath =
  process.env.HEADLESS_CODE_BROWSER ?? onPath('chromium', 'chromium-browser', 'google-chrome')
if (!serverMain || !existsSync(serverMain)) fail('HEADLESS_CODE_SERVER must name server-main.js')
if (!browserPath) fail('no Chromium found: set HEADLESS_CODE_BROWSER')

let browser
let ending = false
/** How the extension host ended where that was no orderly exit: the window reports code 0 even then. */
let hostEnd = ''
const server = startServer()
process.on('SIGINT', () => end(130))
process.on('SIGTERM', () => end(143))
setTimeout(() => end(124, 'timed out'), 1000 * Number(process.env.HEADLESS_CODE_TIMEOUT ?? 600)).unref()
server.on('exit', code => end(3, `the server ended early (${code})`))

try {
  const [port] = await Promise.all([portOf(server), startBrowser()])
  await openWindow(port)
} catch (error) {
  await end(3, String(error))
}

function readCommandLine(args) {
  const options = {}
  const developed = []
  const paths = []
  for (const arg of args) {
    const [, name, value] = /^--([\w-]+)(?:=(.*))?$/s.exec(arg) ?? []
    if (!name) paths.push(resolve(arg))
    else if (name === 'extensionDevelopmentPath') developed.push(value)
    else options[name] = value ?? true
  }
  return { options, developed, paths }
}

function onPath(...names) {
  const folders = (process.env.PATH ?? '').split(delimiter)
  return names.flatMap(name => folders.map(folder => join(folder, name))).find(existsSync)
}

function fail(message) {
  console.error(`headless-code: ${message}`)
  process.exit(2)
}

function startServer() {
  const data = resolve(String(options['user-data-dir']))
  const extensions = resolve(String(options['extensions-dir']))
  const user = join(data, 'data', 'User')
  mkdirSync(user, { recursive: true })
  mkdirSync(extensions, { recursive: true })
  if (!existsSync(join(user, 'settings.json')))
    writeFileSync(join(user, 'settings.json'), JSON.stringify(SETTINGS))
  // Without this file the first scan can fail, and then no extension is loaded at all.
  if (!existsSync(join(extensions, 'extensions.json')))
    writeFileSync(join(extensions, 'extensions.json'), '[]')
  const args = [
    ...[serverMain, '--host', '127.0.0.1', '--port', '0', '--without-connection-token'],
    ...['--server-data-dir', data, '--extensions-dir', extensions],
    ...['--accept-server-license-terms', '--disable-telemetry', '--force-disable-user-env'],
    '--enable-smoke-test-driver', // Newer versions take no payload without it.
    ...(options['disable-workspace-trust'] ? ['--disable-workspace-trust'] : []),
  ]
  return spawn(process.env.HEADLESS_CODE_NODE ?? process.execPath, args, {
    stdio: ['ignore', 'pipe', verbose ? 'inherit' : 'ignore'],
    detached: true, // A process group of its own, which can be ended as a whole.
    env: { ...process.env, VSCODE_CLI: '1', EXTENSIONS_GALLERY: '{}' },
  })
}

function portOf(server) {
  return new Promise(found => {
    let output = ''
    server.stdout.on('data', chunk => {
      output += chunk
      const died = /Extension Host Process exited with code: (\S+), signal: (\S+?)\.?\s/.exec(String(chunk))
      if (died && (died[1] !== '0' || died[2] !== 'null')) hostEnd ||= died[0].trim()
      const port = /agent listening on (\d+)/.exec(output)
      if (port) found(port[1])
    })
  })
}

async function startBrowser() {
  const args = [
    '--no-sandbox',
    '--disable-quic',
    '--no-first-run',
    '--disable-background-networking',
    '--disable-component-update',
    '--disable-sync',
    '--enable-unsafe-swiftshader',
    '--force-color-profile=srgb',
    '--font-render-hinting=none',
    '--disable-lcd-text',
  ]
  const port = options['remote-debugging-port']
  if (port) args.push(`--remote-debugging-port=${port}`)
  browser = await chromium.launch({
    executablePath: browserPath,
    args,
    handleSIGINT: false,
    handleSIGTERM: false,
  })
  browser.on('disconnected', () => end(3, 'the browser ended early'))
}

async function openWindow(port) {
  const page = await browser.newPage({ viewport: WINDOW, deviceScaleFactor: 1 })
  page.on('crash', () => end(3, 'the page crashed'))
  if (verbose)
    page.on('console', message =>
      process.stderr.write(`[${message.type()}] ${message.text().slice(0, 400)}\n`),
    )
  // Nothing but the local server is ever asked.
  await page.route(
    url => url.hostname !== '127.0.0.1',
    route => route.abort(),
  )
  await hookSuite(page)
  const address = new URL(`http://127.0.0.1:${port}/`)
  const remote = path => `vscode-remote://${address.host}${pathToFileURL(path).pathname}`
  const payload = [
    ['skipWelcome', 'true'],
    ['skipReleaseNotes', 'true'],
    ['extensionTestsPath', remote(String(options.extensionTestsPath))],
    ...developed.map(path => ['extensionDevelopmentPath', remote(path)]),
  ]
  const folder = paths.find(path => existsSync(path) && statSync(path).isDirectory())
  if (folder) address.searchParams.set('folder', folder)
  address.searchParams.set('payload', JSON.stringify(payload))
  await page.goto(String(address))
}

/** The workbench calls these two where a page defines them. */
async function hookSuite(page) {
  const errors = []
  await page.exposeFunction('codeAutomationLog', (type, args) => {
    const line = format(...(args ?? []).filter(arg => arg !== ''))
    if (type === 'error') errors.push(line)
    else if (verbose || isFromSuite(line)) console.log(line)
  })
  await page.exposeFunction('codeAutomationExit', code => {
    if (code) for (const line of errors.filter(isFromSuite)) console.error(line)
    // What the host printed last may still be on its way.
    setTimeout(() => end(Number(code) || (hostEnd ? 70 : 0), hostEnd), 150)
  })
}

/** What the extension host prints comes mixed with a few lines of the workbench's own. */
function isFromSuite(line) {
  const workbench =
    /^(Creation of workbench|Extension host \(|No search provider|\[[A-Za-z][\w: .-]*\]|Resolv(ing|ed) connection token|Creating a socket|Updating additional builtin|ChatSessionStore|Ignoring fetching additional builtin|Overwriting extension|%s%s$)|getaddrinfo|Could not locate the bindings file|build\/Release\/watchdog/
  return !workbench.test(line)
}

async function end(code, message) {
  if (ending) return
  ending = true
  if (message) console.error(`headless-code: ${message}`)
  const gone = server.exitCode === null ? new Promise(done => server.once('exit', done)) : undefined
  server.kill('SIGTERM')
  const killGroup = () => {
    try {
      process.kill(-server.pid, 'SIGKILL')
    } catch {
      // Already gone.
    }
  }
  const late = setTimeout(killGroup, 1500)
  await Promise.all([browser?.close().catch(() => {}), gone])
  clearTimeout(late)
  killGroup()
  process.exit(code)
}
