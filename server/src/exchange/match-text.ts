/** What came of matching a list, as people read it. */
import { count, plain } from '../meaning/wording.ts'
import { displayLabel } from '../format/path.ts'
import { harmless } from './layout.ts'
import type { CellJson, Explanation, MatchJson } from './match.ts'

/** Faults shown; the rest are counted. JSON has them all. */
const SHOWN = 20
/** And where most points do not fit: what they are told to be off by is by chance. */
const SHOWN_OF_MANY = 3

const nameOf = ({ target, name, listing }: Pick<Explanation, 'target' | 'name' | 'listing'>): string => {
  const mesh = `${name === undefined ? 'mesh' : `mesh ${name}`}${listing ? `, ${listing}` : ''}`
  return target === 'path' ? 'path' : target === 'corners' ? 'path, the ends of its segments only' : mesh
}

/** @param shown the name of the list. */
export function matchText(shown: string, result: MatchJson): string {
  const lines: string[] = []
  const { best, others, cell } = result
  if (cell) lines.push(...cellWords(cell), '')
  if (result.points > 0) {
    lines.push(...headline(harmless(shown), result))
    if (best) lines.push(...body(best, 2 * best.fitting < result.points ? SHOWN_OF_MANY : SHOWN))
    if (others.length > 0 && !result.matches)
      lines.push(
        '',
        `It comes as near in ${count(others.length, 'other reading')}: too little of it fits to tell them apart`,
      )
    else if (others.length > 0) {
      lines.push('', 'It cannot be told from')
      for (const other of others) lines.push(`  the ${nameOf(other)}: ${other.frames.join('; ')}`)
    }
    if (result.nearest) lines.push('', `Nearest: ${result.nearest}`)
    lines.push('', read(result))
  }
  return `${lines.join('\n').trimEnd()}\n`
}

function headline(shown: string, { matches, best }: MatchJson): string[] {
  if (!best) return [`${shown} is neither this file's path nor its mesh: no point fits in any frame`]
  if (matches) return [`${shown} is this file's ${nameOf(best)}`]
  return [
    `${shown} is not this file's path or mesh`,
    `It comes nearest to the ${nameOf(best)}: ${best.fitting} of its points fit, ${best.wanted} are wanted`,
  ]
}

function body(best: Explanation, shown: number): string[] {
  const lines = [
    `  read as ${best.frames.join('; ')}`,
    `  largest miss ${plain(best.largestMiss, 8)} Å⁻¹; the digits of the list allow ${plain(best.tolerance, 8)} Å⁻¹`,
  ]
  if (best.labels.length > 0)
    lines.push(
      `  ${best.labels.map(({ label, lines }) => `${displayLabel(label)} (line ${few(lines)})`).join(', ')}`,
    )
  for (const note of best.notes) lines.push(`  ${harmless(note)}`)
  for (const { line, message } of best.faults.slice(0, shown))
    lines.push(`  ${line === undefined ? '' : `line ${line}: `}${harmless(message)}`)
  if (best.faults.length > shown) lines.push(`  … and ${best.faults.length - shown} more`)
  return lines
}

const few = (lines: readonly number[]): string =>
  lines.length > 4 ? `${lines.slice(0, 4).join(', ')}, …` : lines.join(', ')

function read({ points, comments, skipped }: MatchJson): string {
  const parts = [`${count(points, 'point')} read`]
  if (comments > 0) parts.push(`${count(comments, 'comment')} skipped`)
  if (skipped.length > 0)
    parts.push(
      `${count(skipped.length, 'line')} without numbers in their columns skipped (${skipped
        .slice(0, 3)
        .map(({ line, text }) => `line ${line}: ${harmless(text.slice(0, 40))}`)
        .join('; ')}${skipped.length > 3 ? '; …' : ''})`,
    )
  return parts.join(', ')
}

function cellWords({ related, matrix, of, determinant, rotation, strain, fitsIn }: CellJson): string[] {
  if (!related && fitsIn)
    return [
      `The job's cell is a cell of this file's lattice only when its vectors are read in ${fitsIn}: --vectors-unit ${fitsIn}`,
    ]
  if (!related)
    return [
      "The job's cell is no cell of this file's lattice: no whole-numbered matrix fits, with up to 5 % of strain",
    ]
  const size = Math.abs(determinant!)
  const rows = matrix!.map(row => `[${row.join(', ')}]`).join(', ')
  const what =
    size === 1
      ? `The job's cell is a primitive cell of this lattice: its vectors are [${rows}] times ours`
      : of === 'ours'
        ? `The job's cell is a supercell of ${size} primitive cells: its vectors are [${rows}] times ours`
        : `The job's cell is a ${size}th of ours: our vectors are [${rows}] times its own`
  const { angle, axis, proper } = rotation!
  const turned =
    angle > 0 && axis
      ? `turned by ${plain(angle, 3)}° about (${axis.map(x => plain(x, 4)).join(', ')})`
      : 'not turned'
  return [what, `  ${turned}${proper ? '' : ', and mirrored'}; strained by ${plain(strain!, 4)} % at most`]
}
