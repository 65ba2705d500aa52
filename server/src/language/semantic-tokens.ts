/**
 * Colours for what the grammar cannot know: whether a label is of the file or of the book, unknown, or of a point outside
 * the first zone. All else is left to the grammar in `syntaxes/`.
 */
import type { SemanticTokensEdit, SemanticTokensLegend } from 'vscode-languageserver-types'
import type { DocumentAnalysis, Snapshot } from '../analysis.ts'
import { placeInZone } from '../crystal/zone.ts'
import { standsHere } from '../format/edits.ts'
import type { Span } from '../format/model.ts'
import { labelsOf } from './mentions.ts'

/** Ours is a kind of `function` in package.json, as the grammar's scope of a label is. */
const KPOINT = 0
const DECLARATION = 1
/** A label of the book. */
const DEFAULT_LIBRARY = 2
const OUTSIDE = 4
/** Neither file nor book gives it a place. */
const UNKNOWN = 8
export const LEGEND: SemanticTokensLegend = {
  tokenTypes: ['kpoint'],
  tokenModifiers: ['declaration', 'defaultLibrary', 'outside', 'unknown'],
}

/** More labels than this in a file are left to the grammar. */
const MOST = 20_000

/** Five numbers a token, as the protocol wants them. */
export function semanticTokens(snapshot: Snapshot, within: Span = [0, snapshot.text.length]): number[] {
  const { text } = snapshot
  const tokens: { at: Span; modifiers: number }[] = []
  for (const analysis of snapshot.documents) {
    const { at: whole } = analysis.document
    if (whole[1] < within[0] || whole[0] > within[1]) continue
    const modifiersOf = memo(analysis)
    for (const { label, at, defines } of labelsOf(analysis.document)) {
      if (at[1] < within[0] || at[0] > within[1] || !standsHere(text, at)) continue
      tokens.push({
        at: withoutQuotes(text, at),
        modifiers: modifiersOf(label) | (defines ? DECLARATION : 0),
      })
      if (tokens.length >= MOST) break
    }
  }
  tokens.sort((a, b) => a.at[0] - b.at[0])
  const data: number[] = []
  let [line, character] = [0, 0]
  let end = 0
  for (const { at, modifiers } of tokens) {
    const start = snapshot.positionOf(at[0])
    const stop = snapshot.positionOf(at[1])
    // No token goes over the end of a line or over another.
    if (at[0] < end || at[1] <= at[0] || stop.line !== start.line) continue
    const down = start.line - line
    data.push(
      down,
      down > 0 ? start.character : start.character - character,
      stop.character - start.character,
      KPOINT,
      modifiers,
    )
    line = start.line
    character = start.character
    end = at[1]
  }
  return data
}

const withoutQuotes = (text: string, [start, end]: Span): Span =>
  /["']/.test(text[start]) && end > start + 2 ? [start + 1, end - 1] : [start, end]

function memo(analysis: DocumentAnalysis): (label: string) => number {
  const known = new Map<string, number>()
  return label => {
    const modifiers = known.get(label) ?? modifiersFor(analysis, label)
    known.set(label, modifiers)
    return modifiers
  }
}

function modifiersFor({ crystal }: DocumentAnalysis, label: string): number {
  const { lattice, zone } = crystal
  // Without a lattice there are no places, and nothing is the label's fault.
  if (!lattice || !zone) return 0
  const point = crystal.pointOf(label)
  if (!point) return UNKNOWN
  const book = point.origin === 'book' ? DEFAULT_LIBRARY : 0
  return book | (placeInZone(zone, point.cartesian).place === 'outside' ? OUTSIDE : 0)
}

/** The one edit that turns an answer into the next. */
export function tokenEdits(before: readonly number[], after: readonly number[]): SemanticTokensEdit[] {
  const most = Math.min(before.length, after.length)
  let start = 0
  while (start < most && before[start] === after[start]) start++
  if (start === before.length && start === after.length) return []
  let end = 0
  while (end < most - start && before[before.length - 1 - end] === after[after.length - 1 - end]) end++
  return [{ start, deleteCount: before.length - start - end, data: after.slice(start, after.length - end) }]
}
