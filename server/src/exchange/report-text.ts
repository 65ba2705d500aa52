/** The lattice report as plain text. */
import type { Paint } from './findings-text.ts'
import { harmless, inColumns, wrap } from './layout.ts'
import type { Report } from './report.ts'
import { reportInWords, type Section } from './report-sections.ts'

/** Tables may be wider: they are not broken. */
const WIDTH = 96

export function reportText(report: Report, paint: Paint): string {
  const { title, origin, sections, care } = reportInWords(report)
  const head = [paint.bold(harmless(title)), harmless(origin)]
  return `${[...head, '', ...sections.flatMap(section => laidOut(section, paint)), ...wrap(care, WIDTH)].join('\n')}\n`
}

function laidOut({ title, facts, tables }: Section, paint: Paint): string[] {
  const named = inColumns(
    facts.map(([name, value]) => [name, harmless(value)]),
    ['left', 'left'],
  )
  const tabled = tables.flatMap(({ head, rows, alignments }) => {
    const [first, ...others] = inColumns([head, ...rows.map(row => row.map(harmless))], alignments)
    return [paint.dim(`  ${first}`), ...others.map(line => `  ${line}`)]
  })
  return [paint.bold(harmless(title)), ...named.map(line => `  ${line}`), ...tabled, '']
}
