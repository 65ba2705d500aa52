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
import { type SarifPart, sarifLog, sarifPart } from '../exchange/sarif.ts'
import { count } from '../meaning/wording.ts'
import { documentsOf, type Engine, withoutSymmetry } from './engine.ts'
import { encoded, findFiles, type LatticeText, readText, STANDARD_INPUT } from './files.ts'
import { type Change, fixAll } from './fixing.ts'
import { Refusal } from './io.ts'
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
    const how = { picked: ordinal(given, 'document'), fix: given.has('fix'), forPrograms: format !== 'text' }
    const { names, failures } = await findFiles(given.operands, io)
    if (how.fix && names.includes(STANDARD_INPUT))
      throw new Refusal('--fix needs files: standard input cannot be written back')
    for (const failure of failures) desk.fail(failure)

    const engine = start()
    const writer = WRITERS[format](desk)
    const total = { files: 0, errors: 0, warnings: 0, infos: 0 }
    for (const [i, name] of names.entries()) {
      desk.progress(`checking file ${i + 1} of ${names.length}: ${harmless(name)}`)
      try {
        const checked = await checkOne(engine, await readText(name, io), how, desk)
        if (checked.snapshot.documents.length === 0 && checked.findings.length === 0)
          throw new Refusal(`${name}: there is no crystal in this file`)
        const { errors, warnings, infos } = tally(checked.findings)
        total.files++
        total.errors += errors
        total.warnings += warnings
        total.infos += infos
        writer.file(checked)
      } catch (error) {
        if (!(error instanceof Refusal)) throw error
        desk.fail(error.message)
      }
    }
    writer.end(total)
    await desk.close()
    if (desk.failures.length > 0) return NOT_DONE
    return FAILS[given.value('fail-on') ?? 'warning'](total) ? FOUND : CLEAN
  },
}

interface How {
  readonly picked: number | undefined
  readonly fix: boolean
  /** Standard output belongs to programs: what was mended is told on standard error. */
  readonly forPrograms: boolean
}

async function checkOne(
  engine: Engine,
  read: LatticeText,
  { picked, fix, forPrograms }: How,
  desk: Desk,
): Promise<CheckedFile> {
  let snapshot = await engine.check(read.text)
  if (picked !== undefined) documentsOf(snapshot, read.name, picked)
  if (fix && read.path) {
    const fixed = await fixAll(engine, snapshot, picked)
    if (fixed.changes.length > 0) {
      await replaceFile(read.path, encoded(fixed.snapshot.text, read), read.name)
      const mended = changesInWords(read.name, fixed.changes)
      if (forPrograms) desk.note(mended)
      else desk.result(mended)
    }
    snapshot = fixed.snapshot
  }
  for (const reason of withoutSymmetry(snapshot, read.name, picked))
    desk.note(`braggline: ${harmless(reason)}\n`)
  const findings = snapshot.findings.filter(({ document }) => picked === undefined || document === picked)
  return { file: read.name, snapshot, findings }
}

const changesInWords = (name: string, changes: readonly Change[]): string => {
  const lines = changes.map(
    ({ line, column, title, rule }) => `  ${line}:${column}  ${harmless(title)}  (${rule})\n`,
  )
  return `${harmless(name)}: ${count(changes.length, 'fix', 'fixes')} applied\n${lines.join('')}\n`
}

interface Writer {
  file(checked: CheckedFile): void
  end(total: Tally & { readonly files: number }): void
}

/** What a format writes of each file at once, so that no file is kept in memory, and what at the end. */
const WRITERS: Record<string, (desk: Desk) => Writer> = {
  text(desk) {
    const paint = pc.createColors(desk.coloured)
    return {
      file: checked => desk.result(findingsText(checked, paint)),
      end: total => {
        if (total.files > 0) desk.result(`${closingLine(total, total.files, paint)}\n`)
      },
    }
  },
  json(desk) {
    const findings: FindingJson[] = []
    return {
      file: checked => findings.push(...findingsJson(checked)),
      end: ({ files }) => desk.result(`${JSON.stringify(checkJson(findings, files), null, 2)}\n`),
    }
  },
  jsonl: desk => ({
    file: checked =>
      desk.result(
        findingsJson(checked)
          .map(finding => `${JSON.stringify(finding)}\n`)
          .join(''),
      ),
    end: () => {},
  }),
  sarif(desk) {
    const rules = CHECKS.map(rule => ({ ...rule, page: page(rule) }))
    const parts: SarifPart[] = []
    return {
      file: checked => parts.push(sarifPart(checked, parts.length, rules)),
      end: () =>
        desk.result(
          `${JSON.stringify(sarifLog(parts, { version: VERSION, rules, failures: desk.failures }), null, 2)}\n`,
        ),
    }
  },
}
