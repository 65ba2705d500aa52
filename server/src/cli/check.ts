import pc from 'picocolors'
import { CHECKS } from '../checks/index.ts'
import { page } from '../checks/page.ts'
import {
  type CheckedFile,
  checkJson,
  type FindingJson,
  findingsJson,
  type Tally,
  tally,
} from '../exchange/findings-json.ts'
import { closingLine, findingsText } from '../exchange/findings-text.ts'
import { harmless } from '../exchange/layout.ts'
import { type SarifPart, sarifLog, sarifPart, sarifPartAt } from '../exchange/sarif.ts'
import { count } from '../meaning/wording.ts'
import { documentsOf, type Engine, withoutSymmetry } from './engine.ts'
import { encoded, findFiles, type LatticeText, type Place, readText, STANDARD_INPUT } from './files.ts'
import { type Change, fixAll } from './fixing.ts'
import { Refusal } from './io.ts'
import { attempted, inOrder, JOBS, jobsFor, progressOf, type Say, SHARD, sharded, toldOf } from './jobs.ts'
import type { FileTask, FileWork } from './threads.ts'
import { ordinal } from './options.ts'
import { Desk, replaceFile } from './output.ts'
import { type Call, CLEAN, DOCUMENT, FOUND, NOT_DONE, OUTPUT, OVERWRITE, type Verb } from './verb.ts'
import { VERSION } from './version.ts'

/** What makes the exit status 1, by the least severity that does. */
const FAILS: Record<string, (tally: Tally) => boolean> = {
  error: ({ errors }) => errors > 0,
  warning: ({ errors, warnings }) => errors + warnings > 0,
  info: ({ errors, warnings, infos }) => errors + warnings + infos > 0,
  never: () => false,
}

export const check: Verb = {
  name: 'check',
  operands: 'FILE…',
  summary: 'what is wrong in lattice files; with --fix, what can safely be mended is',
  about: [
    'Checks each crystal of a file: its form, lattice, atoms, k-points, path, sampling, mesh and supercell, against its lattice, its symmetry and its first Brillouin zone.',
    'Exit status: 0 where no finding is at or over --fail-on, 1 where one is, 2 where the work could not be done.',
  ],
  options: [
    { name: 'fix', help: 'Apply every fix that leaves crystal, path and mesh what they are, and say which.' },
    {
      name: 'fail-on',
      value: 'LEVEL',
      choices: Object.keys(FAILS),
      help: 'The least severity that makes the exit status 1: error, warning (the default), info or never.',
    },
    {
      name: 'format',
      value: 'FORMAT',
      choices: ['text', 'json', 'jsonl', 'sarif'],
      help: 'text (the default), json, jsonl (one finding a line) or sarif (SARIF 2.1.0).',
    },
    JOBS,
    SHARD,
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
    const desk = new Desk(io, given.value('output'), given.has('overwrite'))
    const format = given.value('format') ?? 'text'
    const how: How = {
      picked: ordinal(given, 'document'),
      fix: given.has('fix'),
      format,
      coloured: desk.coloured,
    }
    const { names: found, failures } = await findFiles(given.operands, io)
    if (how.fix && found.includes(STANDARD_INPUT))
      throw new Refusal('--fix needs files: standard input cannot be written back')
    const names = sharded(found, given)
    // Files are written back by the thread that an interrupt reaches.
    const jobs = how.fix ? 1 : jobsFor(given, names.length, io)
    for (const failure of failures) desk.fail(failure)

    const writer = WRITERS[format](desk)
    const total = { files: 0, errors: 0, warnings: 0, infos: 0 }
    const task: FileTask = { verb: 'check', how }
    let engine: FileWork<CheckedPart> | undefined
    const local: FileWork<CheckedPart> = name => (engine ??= checkWork(start(), io, how))(name)
    desk.progress(`checking ${count(names.length, 'file')}`)
    let i = 0
    for await (const result of inOrder(names, jobs, io, task, local)) {
      desk.progress(progressOf('checking', i++, names))
      const part = toldOf(result, desk)
      if (!part) continue
      total.files++
      total.errors += part.tally.errors
      total.warnings += part.tally.warnings
      total.infos += part.tally.infos
      writer.file(part)
    }
    writer.end(total)
    await desk.close()
    if (desk.failures.length > 0) return NOT_DONE
    return FAILS[given.value('fail-on') ?? 'warning'](total) ? FOUND : CLEAN
  },
}

/** Can go from thread to thread, as can `CheckedPart`. */
export interface How {
  readonly picked: number | undefined
  readonly fix: boolean
  readonly format: string
  readonly coloured: boolean
}

/** What was found in one file, as its format writes it. */
export interface CheckedPart {
  readonly tally: Tally
  readonly text?: string
  readonly findings?: readonly FindingJson[]
  readonly sarif?: SarifPart
}

/** What `check` does with one file. */
export const checkWork =
  (engine: Engine, io: Place, how: How): FileWork<CheckedPart> =>
  name =>
    attempted(async say => {
      const checked = await checkOne(engine, await readText(name, io), how, say)
      if (checked.snapshot.documents.length === 0 && checked.findings.length === 0)
        throw new Refusal(`${name}: there is no crystal in this file`)
      return { tally: tally(checked.findings), ...PARTS[how.format](checked, how.coloured) }
    })

async function checkOne(
  engine: Engine,
  read: LatticeText,
  { picked, fix, format }: How,
  say: Say,
): Promise<CheckedFile> {
  let snapshot = await engine.check(read.text)
  if (picked !== undefined) documentsOf(snapshot, read.name, picked)
  if (fix && read.path) {
    const fixed = await fixAll(engine, snapshot, picked)
    if (fixed.changes.length > 0) {
      await replaceFile(read.path, encoded(fixed.snapshot.text, read), read.name)
      const mended = changesInWords(read.name, fixed.changes)
      // Standard output belongs to programs where they asked for it.
      say(format === 'text' ? 'result' : 'note', mended)
    }
    snapshot = fixed.snapshot
  }
  for (const reason of withoutSymmetry(snapshot, read.name, picked))
    say('note', `braggline: ${harmless(reason)}\n`)
  const findings = snapshot.findings.filter(({ document }) => picked === undefined || document === picked)
  return { file: read.name, snapshot, findings }
}

const changesInWords = (name: string, changes: readonly Change[]): string => {
  const lines = changes.map(
    ({ line, column, title, rule }) => `  ${line}:${column}  ${harmless(title)}  (${rule})\n`,
  )
  return `${harmless(name)}: ${count(changes.length, 'fix', 'fixes')} applied\n${lines.join('')}\n`
}

const RULES = CHECKS.map(rule => ({ ...rule, page: page(rule) }))

/** What is kept of a file until it is its turn to be written. */
const PARTS: Record<string, (checked: CheckedFile, coloured: boolean) => Omit<CheckedPart, 'tally'>> = {
  text: (checked, coloured) => ({ text: findingsText(checked, pc.createColors(coloured)) }),
  json: checked => ({ findings: findingsJson(checked) }),
  jsonl: checked => ({
    text: findingsJson(checked)
      .map(finding => `${JSON.stringify(finding)}\n`)
      .join(''),
  }),
  sarif: checked => ({ sarif: sarifPart(checked, 0, RULES) }),
}

interface Writer {
  file(part: CheckedPart): void
  end(total: Tally & { readonly files: number }): void
}

/** What a format writes of each file at once, so that no file is kept in memory, and what at the end. */
const WRITERS: Record<string, (desk: Desk) => Writer> = {
  text: desk => ({
    file: ({ text }) => desk.result(text!),
    end: total => {
      if (total.files > 0) desk.result(`${closingLine(total, total.files, pc.createColors(desk.coloured))}\n`)
    },
  }),
  json(desk) {
    const all: FindingJson[] = []
    return {
      file: ({ findings }) => void all.push(...findings!),
      end: ({ files }) => desk.result(`${JSON.stringify(checkJson(all, files), null, 2)}\n`),
    }
  },
  jsonl: desk => ({ file: ({ text }) => desk.result(text!), end: () => {} }),
  sarif(desk) {
    const parts: SarifPart[] = []
    return {
      file: ({ sarif }) => void parts.push(sarifPartAt(sarif!, parts.length)),
      end: () =>
        desk.result(
          `${JSON.stringify(sarifLog(parts, { version: VERSION, rules: RULES, failures: desk.failures }), null, 2)}\n`,
        ),
    }
  },
}
