/** Formatting of a whole text, of some lines, and while typing. */
import { type Position, type Range, TextEdit } from 'vscode-languageserver-types'
import type { Snapshot } from '../analysis.ts'
import { layoutEdits } from '../format/layout.ts'
import { lineEnd, lineStart } from '../format/text.ts'
import { rangeOf } from './diagnostics.ts'

export interface FormattingOptions {
  /** The editor's; blocks stand this much further in than their keys. */
  readonly tabSize: number
  readonly columns: boolean
  readonly enDash: boolean
}

const WIDEST_INDENT = 8

/** No edits where the text has faults of syntax. */
export function formatting(snapshot: Snapshot, options: FormattingOptions, range?: Range): TextEdit[] {
  const { tree, decoded } = snapshot
  if (!tree || hasFaults(snapshot)) return []
  const { tabSize, columns, enDash } = options
  const indent = Number.isInteger(tabSize) && tabSize >= 1 ? Math.min(tabSize, WIDEST_INDENT) : 2
  const edits = layoutEdits(tree, decoded.documents, { indent, columns, enDash }, range && linesOf(range))
  return edits.map(({ at, text }) => TextEdit.replace(rangeOf(snapshot, at), text))
}

const hasFaults = ({ decoded: { documents, problems } }: Snapshot): boolean =>
  [problems, ...documents.map(document => document.problems)].some(all =>
    all.some(({ rule }) => rule === 'yaml-syntax'),
  )

/** A selection of whole lines ends at the start of the next one. */
const linesOf = ({ start, end }: Range): [number, number] => [
  start.line,
  end.character === 0 && end.line > start.line ? end.line - 1 : end.line,
]

export const FIRST_TRIGGER = '\n'
export const MORE_TRIGGERS = ['-']

/** After a line break: blanks and columns of the line that was left. After `-` behind a label of the path: the en dash. */
export function formattingOnType(
  snapshot: Snapshot,
  position: Position,
  typed: string,
  options: FormattingOptions,
): TextEdit[] {
  if (typed === '\n') {
    if (position.line === 0) return []
    const left = { line: position.line - 1, character: 0 }
    return formatting(snapshot, options, { start: left, end: left })
  }
  return typed === '-' && options.enDash ? dashTyped(snapshot, snapshot.offsetOf(position)) : []
}

const AFTER_LABEL = /[\p{L}\p{No}\d'′] -$/u

function dashTyped(snapshot: Snapshot, offset: number): TextEdit[] {
  const { text } = snapshot
  const path = snapshot.documentAt(offset)?.document.keys.get('path')
  if (!path || offset < path.at[0] || offset > lineEnd(text, path.at[1])) return []
  const before = text.slice(Math.max(lineStart(text, offset), path.key[1]), offset)
  if (!AFTER_LABEL.test(before) || before.includes('#')) return []
  return [TextEdit.replace(rangeOf(snapshot, [offset - 1, offset]), '–')]
}
