/** What "expand selection" takes next: the word, its value, its row, its block, its document. */
import type { Position, SelectionRange } from 'vscode-languageserver-types'
import type { Snapshot } from '../analysis.ts'
import type { Span } from '../format/model.ts'
import { rangeOf } from './diagnostics.ts'

export const selectionRanges = (snapshot: Snapshot, positions: readonly Position[]): SelectionRange[] =>
  positions.map(position => selectionRange(snapshot, snapshot.offsetOf(position), position))

function selectionRange(snapshot: Snapshot, offset: number, position: Position): SelectionRange {
  const spans = [...(snapshot.tree?.around(offset) ?? []), ...ofWords(snapshot, offset)]
  spans.sort((a, b) => b[1] - b[0] - (a[1] - a[0]))
  let chosen: SelectionRange | undefined
  let outer: Span = [0, Number.POSITIVE_INFINITY]
  for (const span of spans) {
    const isInside = span[0] >= outer[0] && span[1] <= outer[1]
    if (!isInside || (span[0] === outer[0] && span[1] === outer[1])) continue
    chosen = { range: rangeOf(snapshot, span), ...(chosen ? { parent: chosen } : {}) }
    outer = span
  }
  return chosen ?? { range: { start: position, end: position } }
}

const WORD = /[\p{L}\p{N}_'′.]+/gu
/** Longer lines hold no word that anyone selects so. */
const LONGEST_LINE = 10_000

/** Finer than the syntax of YAML: the word at the place, and in a path its segment and its piece. */
function ofWords(snapshot: Snapshot, offset: number): Span[] {
  const { text } = snapshot
  const found: Span[] = []
  const start = text.lastIndexOf('\n', offset - 1) + 1
  const feed = text.indexOf('\n', offset)
  const line = text.slice(start, feed < 0 ? text.length : feed)
  if (line.length <= LONGEST_LINE) {
    for (const { 0: word, index } of line.matchAll(WORD)) {
      const at: Span = [start + index, start + index + word.length]
      if (at[0] <= offset && offset <= at[1]) found.push(at)
    }
  }
  for (const { at, segments } of snapshot.documentAt(offset)?.document.path?.pieces ?? []) {
    if (at[0] > offset || at[1] < offset) continue
    found.push(at)
    const segment = segments.find(({ separator }) => separator[0] <= offset && offset <= separator[1])
    if (segment) found.push(segment.at)
  }
  return found
}
