/** The lattice report as Markdown: for notes beside a calculation, and for the editor's preview. */
import { harmless } from './layout.ts'
import type { Report } from './report.ts'
import { reportInWords, type Section, type Table } from './report-sections.ts'

export function reportMarkdown(report: Report): string {
  const { title, origin, sections, care } = reportInWords(report)
  return `${[`# ${escaped(title)}`, escaped(origin), ...sections.map(section), `**${escaped(care)}**`].join('\n\n')}\n`
}

function section({ title, facts, tables }: Section): string {
  const list = facts.map(([name, value]) => `- ${escaped(name)}: ${escaped(value)}`).join('\n')
  return [`## ${escaped(title)}`, ...(list ? [list] : []), ...tables.map(table)].join('\n\n')
}

const table = ({ head, rows, alignments }: Table): string =>
  [
    head.map(escaped),
    alignments.map(side => (side === 'right' ? '--:' : '---')),
    ...rows.map(row => row.map(escaped)),
  ]
    .map(cells => `| ${cells.join(' | ')} |`)
    .join('\n')

/** Text of a file must not become markup or a link. Brackets alone make neither. */
const escaped = (text: string): string =>
  harmless(text).replace(/[\\`*_<>#|~&]|!(?=\[)|\](?=[([:])/g, character => `\\${character}`)
