import pc from 'picocolors'
import { harmless } from '../exchange/layout.ts'
import { type FullReport, fullReport } from '../exchange/report-full.ts'
import { reportHtml } from '../exchange/report-html.ts'
import { reportMarkdown } from '../exchange/report-markdown.ts'
import { reportText } from '../exchange/report-text.ts'
import { documentsOf, type Engine, withoutSymmetry } from './engine.ts'
import { findFiles, type LatticeText, readText } from './files.ts'
import { Refusal } from './io.ts'
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
    const picked = ordinal(given, 'document')
    const { names, failures } = await findFiles(given.operands, io)
    for (const failure of failures) desk.fail(failure)
    const engine = start()
    const reports: FullReport[] = []
    for (const [i, name] of names.entries()) {
      desk.progress(`reporting file ${i + 1} of ${names.length}: ${harmless(name)}`)
      try {
        reports.push(...(await reportsOf(engine, await readText(name, io), picked, desk)))
      } catch (error) {
        if (!(error instanceof Refusal)) throw error
        desk.fail(error.message)
      }
    }
    if (reports.length > 0) desk.result(written(reports, given.value('format') ?? 'text', desk.coloured))
    await desk.close()
    return desk.failures.length > 0 ? NOT_DONE : CLEAN
  },
}

async function reportsOf(
  engine: Engine,
  { name, text }: LatticeText,
  picked: number | undefined,
  desk: Desk,
): Promise<FullReport[]> {
  const snapshot = await engine.check(text)
  const documents = documentsOf(snapshot, name, picked)
  const why = '`braggline check` says why'
  if (documents.length === 0) desk.fail(`${name}: no crystal could be read; ${why}`)
  for (const reason of withoutSymmetry(snapshot, name, picked)) desk.note(`braggline: ${harmless(reason)}\n`)
  return documents.map(analysis => {
    const { number } = analysis.document
    if (!analysis.crystal.lattice)
      desk.fail(`${name}: document ${number} has no lattice that could be built; ${why}`)
    return fullReport(name, snapshot, analysis)
  })
}

function written(reports: readonly FullReport[], format: string, colour: boolean): string {
  const facts = reports.map(({ report }) => report)
  switch (format) {
    case 'json':
      return `${JSON.stringify(facts.length === 1 ? facts[0] : facts, null, 2)}\n`
    case 'jsonl':
      return facts.map(report => `${JSON.stringify(report)}\n`).join('')
    case 'markdown':
      return reportMarkdown(reports)
    case 'html':
      return reportHtml(reports)
    default: {
      const paint = pc.createColors(colour)
      return facts.map(report => reportText(report, paint)).join('\n\n')
    }
  }
}
