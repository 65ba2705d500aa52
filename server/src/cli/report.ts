import pc from 'picocolors'
import { harmless } from '../exchange/layout.ts'
import { type FullReport, fullReport } from '../exchange/report-full.ts'
import { reportHtml } from '../exchange/report-html.ts'
import { reportMarkdown } from '../exchange/report-markdown.ts'
import { reportText } from '../exchange/report-text.ts'
import { count } from '../meaning/wording.ts'
import { documentsOf, type Engine, withoutSymmetry } from './engine.ts'
import { findFiles, type LatticeText, type Place, readText } from './files.ts'
import { attempted, inOrder, JOBS, jobsFor, progressOf, type Say, SHARD, sharded, toldOf } from './jobs.ts'
import type { FileTask, FileWork } from './threads.ts'
import { ordinal } from './options.ts'
import { Desk } from './output.ts'
import { type Call, CLEAN, DOCUMENT, NOT_DONE, OUTPUT, OVERWRITE, type Verb } from './verb.ts'

export const report: Verb = {
  name: 'report',
  operands: 'FILE…',
  summary: 'the lattice report: cell, reciprocal lattice, first zone, symmetry, points, path, mesh',
  about: [
    'Reports all crystals of the files, or the one that --document picks.',
    'As JSON, one crystal is an object and several are a list; jsonl is one crystal a line in either case.',
  ],
  options: [
    {
      name: 'format',
      value: 'FORMAT',
      choices: ['text', 'markdown', 'html', 'json', 'jsonl'],
      help: 'text (the default), markdown or html (with the figure of the zone), json or jsonl.',
    },
    JOBS,
    SHARD,
    DOCUMENT,
    OUTPUT,
    OVERWRITE,
  ],
  examples: [
    'braggline report lead-telluride.lattice.yaml',
    'braggline report survey.lattice.yaml --document 2 --format json',
    'braggline report . --format markdown -o zones.md',
    'braggline report lead-telluride.lattice.yaml --format html -o lead-telluride.html',
  ],

  async run({ given, io, engine: start }: Call): Promise<number> {
    const desk = new Desk(io, given.value('output'), given.has('overwrite'))
    const format = given.value('format') ?? 'text'
    const how: ReportHow = { picked: ordinal(given, 'document'), format, coloured: desk.coloured }
    const { names: found, failures } = await findFiles(given.operands, io)
    const names = sharded(found, given)
    const jobs = jobsFor(given, names.length, io)
    for (const failure of failures) desk.fail(failure)
    const task: FileTask = { verb: 'report', how }
    let engine: FileWork<ReportedPart> | undefined
    const local: FileWork<ReportedPart> = name => (engine ??= reportWork(start(), io, how))(name)
    const reports: FullReport[] = []
    let between = ''
    desk.progress(`reporting ${count(names.length, 'file')}`)
    let i = 0
    for await (const result of inOrder(names, jobs, io, task, local)) {
      desk.progress(progressOf('reporting', i++, names))
      const part = toldOf(result, desk)
      if (!part) continue
      reports.push(...part.reports)
      for (const text of part.texts) {
        desk.result(between + text)
        between = format === 'text' ? '\n\n' : ''
      }
    }
    if (reports.length > 0) desk.result(written(reports, format))
    await desk.close()
    return desk.failures.length > 0 ? NOT_DONE : CLEAN
  },
}

/** Can go from thread to thread, as can `ReportedPart`. */
export interface ReportHow {
  readonly picked: number | undefined
  readonly format: string
  readonly coloured: boolean
}

/** The crystals of one file: as texts where the format writes one after another, so that none is kept. */
export interface ReportedPart {
  readonly texts: readonly string[]
  readonly reports: readonly FullReport[]
}

/** What `report` does with one file. */
export const reportWork =
  (engine: Engine, io: Place, { picked, format, coloured }: ReportHow): FileWork<ReportedPart> =>
  name =>
    attempted(async say => {
      const reports = await reportsOf(engine, await readText(name, io), picked, say)
      if (format === 'text') {
        const paint = pc.createColors(coloured)
        return { texts: reports.map(({ report }) => reportText(report, paint)), reports: [] }
      }
      if (format === 'jsonl')
        return { texts: reports.map(({ report }) => `${JSON.stringify(report)}\n`), reports: [] }
      return { texts: [], reports }
    })

async function reportsOf(
  engine: Engine,
  { name, text }: LatticeText,
  picked: number | undefined,
  say: Say,
): Promise<FullReport[]> {
  const snapshot = await engine.check(text)
  const documents = documentsOf(snapshot, name, picked)
  const why = '`braggline check` says why'
  if (documents.length === 0) say('fail', `${name}: no crystal could be read; ${why}`)
  for (const reason of withoutSymmetry(snapshot, name, picked))
    say('note', `braggline: ${harmless(reason)}\n`)
  return documents.map(analysis => {
    const { number } = analysis.document
    if (!analysis.crystal.lattice)
      say('fail', `${name}: document ${number} has no lattice that could be built; ${why}`)
    return fullReport(name, snapshot, analysis)
  })
}

function written(reports: readonly FullReport[], format: string): string {
  if (format === 'markdown') return reportMarkdown(reports)
  if (format === 'html') return reportHtml(reports)
  const facts = reports.map(({ report }) => report)
  return `${JSON.stringify(facts.length === 1 ? facts[0] : facts, null, 2)}\n`
}
