import pc from 'picocolors'
import { CHECKS } from '../checks/index.ts'
import { page } from '../checks/page.ts'
import { type CheckedFile, checkJson, findingsJson, tally } from '../exchange/findings-json.ts'
import { closingLine, findingsText } from '../exchange/findings-text.ts'
import { harmless } from '../exchange/layout.ts'
import { sarifLog } from '../exchange/sarif.ts'
import type { Severity } from '../format/model.ts'
import { count } from '../meaning/wording.ts'
import { coloured } from './colour.ts'
import { documentsOf, type Engine } from './engine.ts'
import { encoded, findFiles, type LatticeText, readText, told } from './files.ts'
import { type Change, fixAll } from './fixing.ts'
import { type Io, Refusal } from './io.ts'
import { ordinal } from './options.ts'
import { checkTarget, deliver, replaceFile } from './output.ts'
import { type Call, CLEAN, DOCUMENT, FOUND, NOT_DONE, OUTPUT, OVERWRITE, type Verb } from './verb.ts'
import { VERSION } from './version.ts'

const LEVELS = {
  error: ['error'],
  warning: ['error', 'warning'],
  info: ['error', 'warning', 'info'],
  never: [],
} as const
type Level = keyof typeof LEVELS

export const check: Verb = {
  name: 'check',
  operands: 'FILE…',
  summary: 'what is wrong in lattice files; with --fix, what can safely be mended is',
  about: [
    'Checks lattice, atoms, k-points, path, sampling, mesh and supercell of each crystal against its lattice, its symmetry and its first Brillouin zone.',
    'Exit status: 0 where no finding is at or over --fail-on, 1 where one is, 2 where the work could not be done.',
  ],
  options: [
    { name: 'fix', help: 'Apply every fix that leaves crystal, path and mesh what they are, and say which.' },
    {
      name: 'fail-on',
      value: 'LEVEL',
      choices: Object.keys(LEVELS),
      help: 'The least severity that makes the exit status 1: error, warning (the default), info or never.',
    },
    {
      name: 'format',
      value: 'FORMAT',
      choices: ['text', 'json', 'jsonl', 'sarif'],
      help: 'text (the default), json, jsonl (one finding a line) or sarif (SARIF 2.1.0).',
    },
    DOCUMENT,
    OUTPUT,
    OVERWRITE,
  ],
  examples: [
    'braggline check lead-telluride.lattice.yaml',
    'braggline check --fix runs/',
    'braggline check . --format sarif -o findings.sarif',
  ],

  async run({ given, io, engine: start }: Call): Promise<number> {
    const output = given.value('output')
    const picked = ordinal(given, 'document')
    checkTarget(output, given.has('overwrite'), io)
    const { names, failures } = await findFiles(given.operands, io)
    if (given.has('fix') && names.includes('-'))
      throw new Refusal('--fix needs files: standard input cannot be written back')
    const engine = start()
    const files: CheckedFile[] = []
    for (const [i, name] of names.entries()) {
      engine.progress.show(`checking file ${i + 1} of ${names.length}: ${harmless(name)}`)
      try {
        const read = await readText(name, io)
        if ('failure' in read) failures.push(told(read))
        else
          files.push(
            await checkOne(engine, read, {
              picked,
              fix: given.has('fix'),
              io,
              quiet: given.value('format') !== undefined,
            }),
          )
      } catch (error) {
        if (!(error instanceof Refusal)) throw error
        failures.push(error.message)
      }
    }
    engine.progress.clear()
    for (const failure of failures) io.err.write(`braggline: ${failure}\n`)
    if (files.length > 0 || given.value('format'))
      await deliver(
        written(files, failures, given.value('format') ?? 'text', output === undefined && coloured(io)),
        output,
        io,
      )
    if (failures.length > 0) return NOT_DONE
    const level: readonly Severity[] = LEVELS[(given.value('fail-on') ?? 'warning') as Level]
    return files.some(({ findings }) => findings.some(({ severity }) => level.includes(severity)))
      ? FOUND
      : CLEAN
  },
}

interface How {
  readonly picked: number | undefined
  readonly fix: boolean
  readonly io: Io
  /** Standard output belongs to programs: what was mended is told on standard error. */
  readonly quiet: boolean
}

async function checkOne(
  engine: Engine,
  read: LatticeText,
  { picked, fix, io, quiet }: How,
): Promise<CheckedFile> {
  let snapshot = await engine.check(read.text)
  if (picked !== undefined) documentsOf(snapshot, read.name, picked)
  if (fix && read.path) {
    const fixed = await fixAll(engine, snapshot, picked)
    if (fixed.changes.length > 0) {
      await replaceFile(read.path, encoded(fixed.snapshot.text, read), harmless(read.name))
      engine.progress.clear()
      ;(quiet ? io.err : io.out).write(mended(read.name, fixed.changes))
    }
    snapshot = fixed.snapshot
  }
  const findings = snapshot.findings.filter(({ document }) => picked === undefined || document === picked)
  return { file: read.name, snapshot, findings }
}

const mended = (name: string, changes: readonly Change[]): string => {
  const lines = changes.map(
    ({ line, column, title, rule }) => `  ${line}:${column}  ${harmless(title)}  (${rule})\n`,
  )
  return `${harmless(name)}: ${count(changes.length, 'fix', 'fixes')} applied\n${lines.join('')}\n`
}

function written(
  files: readonly CheckedFile[],
  failures: readonly string[],
  format: string,
  colour: boolean,
): string {
  switch (format) {
    case 'json':
      return `${JSON.stringify(checkJson(files), null, 2)}\n`
    case 'jsonl':
      return files
        .flatMap(findingsJson)
        .map(finding => `${JSON.stringify(finding)}\n`)
        .join('')
    case 'sarif': {
      const rules = CHECKS.map(rule => ({ ...rule, page: page(rule) }))
      return `${JSON.stringify(sarifLog(files, { version: VERSION, rules, failures }), null, 2)}\n`
    }
    default: {
      const paint = pc.createColors(colour)
      const all = tally(files.flatMap(({ findings }) => findings))
      return `${files.map(file => findingsText(file, paint)).join('')}${closingLine(all, files.length, paint)}\n`
    }
  }
}
