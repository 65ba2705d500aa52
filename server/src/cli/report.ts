import pc from 'picocolors'
import { harmless } from '../exchange/layout.ts'
import { type Report, reportOf } from '../exchange/report.ts'
import { reportMarkdown } from '../exchange/report-markdown.ts'
import { reportText } from '../exchange/report-text.ts'
import { coloured } from './colour.ts'
import { documentsOf } from './engine.ts'
import { findFiles, readText, told } from './files.ts'
import { Refusal } from './io.ts'
import { ordinal } from './options.ts'
import { checkTarget, deliver } from './output.ts'
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
      choices: ['text', 'markdown', 'json', 'jsonl'],
      help: 'text (the default), markdown, json or jsonl (one crystal a line).',
    },
    DOCUMENT,
    OUTPUT,
    OVERWRITE,
  ],
  examples: [
    'braggline report lead-telluride.lattice.yaml',
    'braggline report survey.lattice.yaml --document 2 --format json',
    'braggline report . --format markdown -o zones.md',
  ],

  async run({ given, io, engine: start }: Call): Promise<number> {
    const output = given.value('output')
    const picked = ordinal(given, 'document')
    checkTarget(output, given.has('overwrite'), io)
    const { names, failures } = await findFiles(given.operands, io)
    const engine = start()
    const reports: Report[] = []
    for (const [i, name] of names.entries()) {
      engine.progress.show(`reporting file ${i + 1} of ${names.length}: ${harmless(name)}`)
      const read = await readText(name, io)
      if ('failure' in read) {
        failures.push(told(read))
        continue
      }
      const snapshot = await engine.check(read.text)
      try {
        const documents = documentsOf(snapshot, name, picked)
        if (documents.length === 0)
          failures.push(`${harmless(name)}: no crystal could be read; \`braggline check\` says why`)
        for (const analysis of documents) {
          const { number } = analysis.document
          reports.push(
            reportOf(
              name,
              analysis,
              snapshot.findings.filter(({ document }) => document === number),
            ),
          )
          if (!analysis.crystal.lattice)
            failures.push(
              `${harmless(name)}: document ${number} has no lattice that could be built; \`braggline check\` says why`,
            )
        }
      } catch (error) {
        if (!(error instanceof Refusal)) throw error
        failures.push(error.message)
      }
    }
    engine.progress.clear()
    for (const failure of failures) io.err.write(`braggline: ${failure}\n`)
    if (reports.length > 0)
      await deliver(
        written(reports, given.value('format') ?? 'text', output === undefined && coloured(io)),
        output,
        io,
      )
    return failures.length > 0 ? NOT_DONE : CLEAN
  },
}

function written(reports: readonly Report[], format: string, colour: boolean): string {
  switch (format) {
    case 'json':
      return `${JSON.stringify(reports.length === 1 ? reports[0] : reports, null, 2)}\n`
    case 'jsonl':
      return reports.map(report => `${JSON.stringify(report)}\n`).join('')
    case 'markdown':
      return reports.map(reportMarkdown).join('\n')
    default: {
      const paint = pc.createColors(colour)
      return reports.map(report => reportText(report, paint)).join('\n\n')
    }
  }
}
