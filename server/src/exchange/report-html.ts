/** The lattice report as one page that needs nothing else: figures inside, no script, black on white on paper. */
import { escapeXml, zoneFigure } from './figure.ts'
import { harmless } from './layout.ts'
import type { FullReport } from './report-full.ts'
import { figureCaption, reportInWords, type Section, type Table } from './report-sections.ts'

/** @param reports one for each crystal, in the order of the page. */
export function reportHtml(reports: readonly FullReport[]): string {
  const titles = [...new Set(reports.map(({ report }) => report.title ?? report.file))]
  return `<!DOCTYPE html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta name="viewport" content="width=device-width, initial-scale=1">
<meta http-equiv="Content-Security-Policy" content="default-src 'none'; style-src 'unsafe-inline'">
<title>${text(`Lattice report: ${titles.join('; ')}`)}</title>
<style>
${STYLE}
</style>
</head>
<body>
${reports.map(article).join('\n')}
</body>
</html>
`
}

function article(full: FullReport): string {
  const { title, origin, sections, care } = reportInWords(full.report, full.findings, full.limits)
  return `<article>
<h1>${text(title)}</h1>
<p class="origin">${text(origin)}</p>
${figure(full)}${sections.map(section).join('\n')}
<p class="care">${text(care)}</p>
</article>`
}

/** Its colours are those of the page, so that it turns with it from light to dark, and to black on white on paper. */
const COLOURS = {
  background: 'none',
  ink: 'var(--ink)',
  path: 'var(--path)',
  face: 'var(--ink)',
}

function figure({ report, scene }: FullReport): string {
  if (!scene) return ''
  return `<figure>
${zoneFigure(scene, { colours: COLOURS })}<figcaption>${text(figureCaption(report))}</figcaption>
</figure>
`
}

function section({ title, facts, tables }: Section): string {
  const list = facts.map(([name, value]) => `<dt>${text(name)}</dt><dd>${text(value)}</dd>`).join('\n')
  const parts = [list && `<dl>\n${list}\n</dl>`, ...tables.map(table)].filter(Boolean)
  return `<section>\n<h2>${text(title)}</h2>\n${parts.join('\n')}\n</section>`
}

function table({ head, rows, alignments }: Table): string {
  const cells = (tag: string, row: readonly string[]) =>
    row
      .map(
        (cell, i) =>
          `<${tag}${tag === 'th' ? ' scope="col"' : ''}${alignments[i] === 'right' ? ' class="number"' : ''}>${text(cell)}</${tag}>`,
      )
      .join('')
  const body = rows.map(row => `<tr>${cells('td', row)}</tr>`).join('\n')
  return `<div class="wide"><table>\n<thead><tr>${cells('th', head)}</tr></thead>\n<tbody>\n${body}\n</tbody>\n</table></div>`
}

const text = (raw: string): string => escapeXml(harmless(raw)).replaceAll("'", '&#39;')

const STYLE = `:root { color-scheme: light dark; --paper: #fff; --ink: #000; --quiet: #555; --rule: #bbb; --path: #0a58a6; }
@media (prefers-color-scheme: dark) {
  :root { --paper: #1b1d21; --ink: #e8e8e8; --quiet: #a4a8ae; --rule: #555a61; --path: #6cb2f5; }
}
@media print {
  :root { color-scheme: light; --paper: #fff; --ink: #000; --quiet: #333; --rule: #999; --path: #0a58a6; }
  body { font-size: 10pt; max-width: none; margin: 0; padding: 0; }
  article + article { break-before: page; }
  figure, tr { break-inside: avoid; }
  h1, h2 { break-after: avoid; }
  thead { display: table-header-group; }
  .wide { overflow: visible; }
}
body { background: var(--paper); color: var(--ink); font: 1rem/1.5 Georgia, 'Times New Roman', serif; max-width: 56rem; margin: 0 auto; padding: 1.5rem; }
h1 { font-size: 1.6rem; line-height: 1.25; margin: 0 0 0.25rem; overflow-wrap: anywhere; }
h2 { font-size: 1.15rem; margin: 1.75rem 0 0.5rem; border-bottom: 1px solid var(--rule); }
.origin { color: var(--quiet); margin: 0 0 1rem; overflow-wrap: anywhere; }
.care { font-weight: bold; margin-top: 2rem; }
figure { margin: 1rem 0; text-align: center; }
figure svg { max-width: 100%; height: auto; }
figcaption { color: var(--quiet); }
dl { display: grid; grid-template-columns: max-content 1fr; gap: 0.15rem 1rem; margin: 0.5rem 0; }
dt { color: var(--quiet); }
dd { margin: 0; overflow-wrap: anywhere; }
.wide { overflow-x: auto; margin: 0.75rem 0; }
table { border-collapse: collapse; font-variant-numeric: tabular-nums; font-size: 0.9rem; }
th, td { padding: 0.2rem 0.7rem 0.2rem 0; text-align: left; vertical-align: baseline; }
th { border-bottom: 1px solid var(--ink); white-space: nowrap; }
td { border-bottom: 1px solid var(--rule); }
.number { text-align: right; white-space: nowrap; }
@media (max-width: 40rem) { dl { grid-template-columns: 1fr; } dd { margin-bottom: 0.4rem; } }`
