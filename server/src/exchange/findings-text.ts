/** Findings for people at a terminal. */
import type { Colors } from 'picocolors/types'
import type { DocumentFinding, Snapshot } from '../analysis.ts'
import type { Severity } from '../format/model.ts'
import { lineEnd, lineStart } from '../format/text.ts'
import { count } from '../meaning/wording.ts'
import type { CheckedFile, Tally } from './findings-json.ts'
import { displayWidth, harmless } from './layout.ts'
import { Positions } from './positions.ts'

export type Paint = Pick<Colors, 'bold' | 'dim' | 'red' | 'yellow' | 'cyan' | 'green'>

/** The rest of a line longer than this is left out around the marked part. */
const LONGEST_EXCERPT = 110
/** How much of a long line is shown before the marked part. */
const LEAD = 30

const tint = (paint: Paint, severity: Severity) =>
  ({ error: paint.red, warning: paint.yellow, info: paint.cyan })[severity]

/**
 * The findings of one file, each a block of its own:
 *
 *     draft.lattice.yaml:5:6  warning  What is wrong  (rule-id)
 *         Q: [0.75, 0, 0]
 *            ~~~~~~~~~~~~
 *       see 3:1  what else is involved
 *       fix: what can be done about it
 */
export function findingsText({ file, snapshot, findings }: CheckedFile, paint: Paint): string {
  const positions = new Positions(snapshot)
  return findings.map(finding => `${block(file, snapshot, positions, finding, paint)}\n\n`).join('')
}

function block(
  file: string,
  snapshot: Snapshot,
  positions: Positions,
  finding: DocumentFinding,
  paint: Paint,
): string {
  const { line, column } = positions.at(finding.at[0])
  const colour = tint(paint, finding.severity)
  const lines = [
    `${paint.bold(`${harmless(file)}:${line}:${column}`)}  ${colour(finding.severity)}  ${harmless(finding.message)}  ${paint.dim(`(${finding.rule})`)}`,
  ]
  const { before, marked, after } = excerpt(snapshot, finding.at)
  const excerptLine = `${before}${marked}${after}`
  if (excerptLine.trim() !== '') {
    lines.push(`    ${excerptLine}`)
    lines.push(
      `    ${' '.repeat(displayWidth(before))}${colour('~'.repeat(Math.max(1, displayWidth(marked))))}`,
    )
  }
  for (const { at, message } of finding.related ?? []) {
    const place = positions.at(at[0])
    lines.push(`  ${paint.dim(`see ${place.line}:${place.column}`)}  ${harmless(message)}`)
  }
  for (const { title, safe } of finding.fixes ?? [])
    lines.push(`  ${paint.green(safe ? 'fix:' : 'fix, to be judged:')} ${harmless(title)}`)
  return lines.join('\n')
}

/** The line that a span begins in, with the part of it that the span covers. */
function excerpt(
  { text }: Snapshot,
  [start, end]: DocumentFinding['at'],
): Record<'before' | 'marked' | 'after', string> {
  const [first, last] = [lineStart(text, start), lineEnd(text, start)]
  const from = Math.min(start, last)
  const to = Math.min(end, last)
  if (last - first <= LONGEST_EXCERPT)
    return { before: part(text, first, from), marked: part(text, from, to), after: part(text, to, last) }
  const begin = Math.max(first, from - LEAD)
  const stop = Math.min(last, begin + LONGEST_EXCERPT)
  return {
    before: (begin > first ? '…' : '') + part(text, begin, from),
    marked: part(text, from, Math.min(to, stop)),
    after: part(text, Math.min(to, stop), stop) + (stop < last ? '…' : ''),
  }
}

/** A part of a text without the half of a character that a cut may leave, and harmless to a terminal. */
const part = (text: string, from: number, to: number): string =>
  harmless(text.slice(from, to).replace(/^[\udc00-\udfff]|[\ud800-\udbff]$/g, ''))

/** `3 findings in 2 files: 1 error, 2 warnings.` */
export function closingLine(tally: Tally, files: number, paint: Paint): string {
  const all = tally.errors + tally.warnings + tally.infos
  const where = count(files, 'file')
  if (all === 0) return `${paint.green('No findings')} in ${where}.`
  return `${count(all, 'finding')} in ${where}: ${tallyInWords(tally, (severity, text) => tint(paint, severity)(text))}.`
}

/** `1 error, 2 warnings, 3 for information`, without those that there are none of. */
export function tallyInWords(
  { errors, warnings, infos }: Tally,
  colour: (severity: Severity, text: string) => string = (_, text) => text,
): string {
  const parts = [
    errors > 0 && colour('error', count(errors, 'error')),
    warnings > 0 && colour('warning', count(warnings, 'warning')),
    infos > 0 && colour('info', `${infos} for information`),
  ]
  return parts.filter(Boolean).join(', ')
}
