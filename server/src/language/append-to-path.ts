/** Labels that a person picks one after the other become text at the end of `path`, written as the file writes it. */
import { type TextEdit as LspEdit, TextEdit } from 'vscode-languageserver-types'
import type { DocumentAnalysis, Snapshot } from '../analysis.ts'
import { insertKeys, replaceValue, standsHere } from '../format/edits.ts'
import type { LatticeDocument, PathBlock, Span, TextEdit as Edit } from '../format/model.ts'
import { displayLabel } from '../format/path.ts'
import { lineBreak, lineStart } from '../format/text.ts'
import { rangeOf } from './diagnostics.ts'

/**
 * @param labels   in their one spelling; at least two where they begin a piece.
 * @param newPiece begin a new piece; so does a path that is not there yet, or that is the book's own.
 * @returns null where the path cannot be written to.
 */
export function appendToPathEdits(
  snapshot: Snapshot,
  { document }: DocumentAnalysis,
  labels: readonly string[],
  newPiece: boolean,
): LspEdit[] | null {
  const edits = edit(snapshot.text, document, labels, newPiece)
  return edits?.map(({ at, text }) => TextEdit.replace(rangeOf(snapshot, at), text)) ?? null
}

function edit(
  text: string,
  document: LatticeDocument,
  labels: readonly string[],
  newPiece: boolean,
): Edit[] | null {
  if (labels.length === 0) return null
  const { path } = document
  const empty = document.keys.get('path')
  if (!path && empty) return [replaceValue(text, empty, labels.map(displayLabel).join(' – '))]
  if (!path) {
    const edits = insertKeys(text, document, [['path', labels.map(displayLabel).join(' – ')]])
    return edits.length > 0 ? edits : null
  }
  if (!standsHere(text, path.at)) return null
  if (path.recommended) return [replaceValue(text, path, labels.map(displayLabel).join(' – '))]
  const { separator, write } = styleOf(text, path)
  const added = labels.map(write).join(separator)
  return [newPiece ? asPiece(text, path, added) : insertion(endOfLast(text, path.at), separator + added)]
}

const insertion = (at: number, text: string): Edit => ({ at: [at, at], text })

/** The separator and the spelling of labels that the path uses already. */
function styleOf(text: string, { pieces }: PathBlock) {
  const last = pieces.at(-1)?.segments.at(-1)
  const written = pieces.flatMap(piece => piece.labels.map(label => label.text))
  const write = written.some(label => /\d$/.test(label))
    ? (label: string) => label
    : (label: string) => displayLabel(label)
  if (!last) return { separator: ' – ', write }
  const [start, end] = last.separator
  const sign = text[start]
  const blank = /\s/.test(text[start - 1] ?? '') || /\s/.test(text[end] ?? '') ? ' ' : ''
  return { separator: `${blank}${sign}${blank}`, write }
}

function asPiece(text: string, { at }: PathBlock, added: string): Edit {
  const [start] = at
  const end = endOfLast(text, at)
  if (text[start] === '[') return insertion(listEnd(text, at), `, ${added}`)
  if (isBlockList(text, start)) {
    const indent = ' '.repeat(start - lineStart(text, start))
    // A comment at the end of the last item's line stays where it is.
    const line = text.indexOf('\n', end)
    const feed = lineBreak(text)
    return line < 0
      ? insertion(text.length, `${feed}${indent}- ${added}`)
      : insertion(line + 1, `${indent}- ${added}${feed}`)
  }
  return insertion(end, ` | ${added}`)
}

const isBlockList = (text: string, start: number): boolean =>
  text[start] === '-' && /\s/.test(text[start + 1] ?? '')

/** Where the last character of the path's last text stands, within its quotes and brackets. */
function endOfLast(text: string, at: Span): number {
  let end = text[at[0]] === '[' ? listEnd(text, at) : at[0] + text.slice(...at).trimEnd().length
  if (/["']/.test(text[end - 1])) end--
  return end
}

/** Where the last entry of a list in brackets ends. */
function listEnd(text: string, [, end]: Span): number {
  let at = end - 1
  while (/[\s,]/.test(text[at - 1])) at--
  return at
}
