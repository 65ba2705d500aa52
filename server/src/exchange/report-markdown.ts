/** The lattice report as Markdown: for notes beside a calculation, and for the editor's preview. */
import { zoneFigure } from './figure.ts'
import { harmless } from './layout.ts'
import type { FullReport } from './report-full.ts'
import { figureCaption, reportInWords, type Section, type Table } from './report-sections.ts'

/**
 * The figures stand at the end as data, under names, so that the text can be read as it is.
 * @param reports one for each crystal, in the order of the text.
 */
export function reportMarkdown(reports: readonly FullReport[]): string {
  const figures: string[] = []
  const texts = reports.map(full => {
    const { title, origin, sections, care } = reportInWords(full.report, full.findings, full.limits)
    const parts = [`# ${escaped(title)}`, start(escaped(origin))]
    if (full.scene) {
      const name = `zone-${figures.length + 1}`
      parts.push(`![${escaped(figureCaption(full.report)).replace(/[[\]]/g, '\\$&')}][${name}]`)
      figures.push(`[${name}]: data:image/svg+xml;base64,${base64(zoneFigure(full.scene))}`)
    }
    return [...parts, ...sections.map(section), `**${escaped(care)}**`].join('\n\n')
  })
  return `${[...texts, ...figures].join('\n\n')}\n`
}

function section({ title, facts, tables }: Section): string {
  const list = facts.map(([name, value]) => `- ${start(escaped(name))}: ${escaped(value)}`).join('\n')
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

/** Text of a file must not become markup, a formula or a link, not even one that a reader makes by itself of an address. */
const escaped = (text: string): string =>
  harmless(text).replace(
    /[\\`*_<>#|~&$@]|!(?=\[)|\](?=[([:])|:(?=\/\/)|(?<=www)\./gi,
    character => `\\${character}`,
  )

/** What would begin a list at the start of a line. */
const start = (text: string): string =>
  text.replace(/^(\s*)([-+]|\d+(?=[.)]))/, (_, blanks, mark) =>
    /\d/.test(mark) ? `${blanks}${mark}\\` : `${blanks}\\${mark}`,
  )

function base64(text: string): string {
  // In pieces: a long list of arguments overflows the stack.
  const bytes = new TextEncoder().encode(text)
  let binary = ''
  for (let i = 0; i < bytes.length; i += PIECE) binary += String.fromCharCode(...bytes.subarray(i, i + PIECE))
  return btoa(binary)
}
const PIECE = 8192
