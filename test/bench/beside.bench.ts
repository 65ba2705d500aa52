/** This server beside a general-purpose YAML server on the same files, one after the other in one run. */
import { execFileSync } from 'node:child_process'
import { existsSync, mkdirSync, readFileSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { pathToFileURL } from 'node:url'
import type { ClientCapabilities } from 'vscode-languageserver-protocol/node'
import { CLI, Client, MODERN, PLAIN, ROOT } from '../protocol/client.ts'
import { generatedFile } from './generate.ts'

/** The YAML server takes no part in anything else: it is fetched when it is measured. */
const VERSION = '1.25.0'
const STARTS = 5
const EDITS = { 40: 60, 400: 60, 4000: 20 }

interface Contender {
  readonly name: string
  readonly capabilities: ClientCapabilities
  readonly options: () => NonNullable<Parameters<typeof Client.start>[1]>
}

const OURS: Contender = {
  name: 'this server',
  capabilities: MODERN,
  options: () => ({ server: CLI, args: ['serve', '--stdio'] }),
}
/** It cannot be asked for findings: it pushes them after a fixed wait of its own. */
const YAML: Contender = { name: 'YAML server', capabilities: PLAIN, options: yamlServer }

function yamlServer() {
  const home = join(ROOT, '.cache', 'yaml-server')
  const script = join(home, 'node_modules', 'yaml-language-server', 'bin', 'yaml-language-server')
  if (!existsSync(script)) {
    mkdirSync(home, { recursive: true })
    writeFileSync(join(home, 'package.json'), '{"private":true}')
    execFileSync('npm', ['install', '--no-audit', '--no-fund', `yaml-language-server@${VERSION}`], {
      cwd: home,
    })
  }
  const schema = pathToFileURL(join(ROOT, 'dist', 'schema', 'lattice-file.schema.json')).href
  const yaml = { schemaStore: { enable: false }, schemas: { [schema]: ['*.lattice.yaml'] } }
  return {
    server: script,
    args: ['--stdio'],
    configuration: (section: string | undefined) => (section === 'yaml' ? yaml : {}),
  }
}

const now = () => performance.now()
/** Resident memory in MiB. */
function memory({ process: { pid } }: Client): number {
  const [, kilobytes] = /VmRSS:\s+(\d+)/.exec(readFileSync(`/proc/${pid}/status`, 'utf8')) ?? []
  return Number(kilobytes) / 1024
}

type Figures = Record<'initialize' | 'open' | 'edit' | 'hover' | 'completion' | 'memory', number[]>

async function measure({ capabilities, options }: Contender, lines: keyof typeof EDITS): Promise<Figures> {
  const text = generatedFile(lines)
  const figures: Figures = { initialize: [], open: [], edit: [], hover: [], completion: [], memory: [] }
  const found = async (client: Client) => {
    if (capabilities !== PLAIN) return client.pull()
    const diagnostics = await client.pushFor(client.version)
    client.pushed.length = 0
    return diagnostics
  }
  for (let start = 0; start < STARTS; start++) {
    const began = now()
    const client = await Client.start(capabilities, { uri: 'file:///tmp/x.lattice.yaml', ...options() })
    figures.initialize.push(now() - began)
    const opened = now()
    await client.open(text)
    await found(client)
    figures.open.push(now() - opened)
    if (start === STARTS - 1) await edit(client)
    await client.stop()
  }
  return figures

  async function edit(client: Client): Promise<void> {
    const middle = text.indexOf('.', text.length >> 1) + 1
    const before = text.slice(0, middle).split('\n')
    const position = { line: before.length - 1, character: before.at(-1)!.length }
    const key = { line: text.slice(0, text.indexOf('bravais')).split('\n').length - 1, character: 4 }
    for (let i = -5; i < EDITS[lines]; i++) {
      const edited = `${text.slice(0, middle)}${(i + 10) % 10}${text.slice(middle + 1)}`
      const changed = now()
      await client.change(edited)
      await found(client)
      const checked = now()
      await client.request('textDocument/hover', { position: key })
      const hovered = now()
      await client.change(`${edited}# ${i}\n`)
      const asked = now()
      await client.request('textDocument/completion', { position })
      const completed = now()
      await found(client)
      if (i < 0) continue
      figures.edit.push(checked - changed)
      figures.hover.push(hovered - checked)
      figures.completion.push(completed - asked)
    }
    figures.memory.push(memory(client))
  }
}

const measured = new Map<string, Promise<Figures>>()

export const benches = ([40, 400, 4000] as const).flatMap(lines =>
  (['initialize', 'open', 'edit', 'hover', 'completion', 'memory'] as const).flatMap(figure =>
    [YAML, OURS].map(contender => ({
      name: `beside: ${figure}, ${lines} lines, ${contender.name}`,
      unit: figure === 'memory' ? 'MiB' : 'ms',
      run: () => {
        const key = `${contender.name} ${lines}`
        if (!measured.has(key)) measured.set(key, measure(contender, lines))
        return measured.get(key)!.then(figures => figures[figure])
      },
    })),
  ),
)
