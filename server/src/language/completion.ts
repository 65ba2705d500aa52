/** Completion: keys in their mapping, the words that a value may be, and in `path` the labels and the book's own path. */
import {
  type CompletionItem,
  CompletionItemKind,
  InsertTextFormat,
  type Position,
  type Range,
} from 'vscode-languageserver-types'
import type { DocumentAnalysis, Snapshot } from '../analysis.ts'
import { distance } from '../crystal/vector.ts'
import { documentation, findKey, type KeyRow, keyName, keysBelow } from '../format/keys.ts'
import { displayLabel } from '../format/path.ts'
import type { Crystal, PlacedPoint } from '../meaning/crystal.ts'
import { recommendedPath } from '../meaning/recommended.ts'
import { fractions, inverseLength } from '../meaning/wording.ts'

export function completion(snapshot: Snapshot, position: Position, snippets: boolean): CompletionItem[] {
  const place = placeOf(snapshot, position)
  const analysis = snapshot.documentAt(snapshot.offsetOf(position))
  if (place.names[0] === 'path' && place.value !== undefined) return analysis ? inPath(analysis, place) : []
  if (place.value !== undefined) return words(place)
  return keys(analysis, place, snippets)
}

/** What is being written at a position, as far as lines and their indentation tell: it need not be valid yet. */
interface Place {
  /** Names of the keys from the top; without a value the last is the mapping that a key is begun in. */
  readonly names: readonly string[]
  /** The value's text before the cursor; undefined where a key is written. */
  readonly value?: string
  /** The word at the cursor, which an item replaces. */
  readonly word: Range
}

const ENTRY = /^(\s*)([\w-]+):(?:\s+(.*)|)$/

function placeOf(snapshot: Snapshot, position: Position): Place {
  const lines = snapshot.text.split('\n', position.line + 1).map(line => line.replace(/\r$/, ''))
  const line = (lines[position.line] ?? '').slice(0, position.character)
  const entry = ENTRY.exec(line)
  const begun = /^\s*/.exec(line)![0].length
  const names = above(lines.slice(0, position.line), begun)
  const word = /[\p{L}\d'_-]*$/u.exec(entry ? (entry[3] ?? '') : line)![0]
  const range = (length: number): Range => ({
    start: { ...position, character: position.character - length },
    end: position,
  })
  if (entry)
    return { names: [...names, entry[2]], value: entry[3] ?? '', word: range(labelLength(entry[3] ?? word)) }
  // A further line of a path, as text or as an item of a list.
  if (names[0] === 'path')
    return { names, value: line.replace(/^\s*(?:- +)?/, ''), word: range(labelLength(line)) }
  return { names, word: range(word.length) }
}

/** The label begun at the end of a text: letters, digits and primes. */
const labelLength = (text: string): number => /[\p{L}\d'_]*$/u.exec(text)![0].length

/** The keys that a line of some indentation stands under, from the top. */
function above(lines: readonly string[], indentation: number): string[] {
  const names: string[] = []
  let limit = indentation
  for (let i = lines.length - 1; i >= 0 && limit > 0; i--) {
    if (/^---/.test(lines[i])) break
    const entry = ENTRY.exec(lines[i])
    if (!entry || entry[1].length >= limit) continue
    names.unshift(entry[2])
    limit = entry[1].length
  }
  return names
}

function keys(
  analysis: DocumentAnalysis | undefined,
  { names, word }: Place,
  snippets: boolean,
): CompletionItem[] {
  const row = names.length > 0 ? findKey(names) : undefined
  if (names.length > 0 && !row) return []
  const present =
    names.length === 0
      ? analysis?.document.keys
      : names[0] === 'lattice'
        ? analysis?.document.lattice?.keys
        : undefined
  return keysBelow(row?.path ?? '')
    .filter(below => keyName(below) !== '*' && !present?.has(keyName(below)))
    .map((below, i) => keyItem(below, word, snippets, i))
}

function keyItem(row: KeyRow, range: Range, snippets: boolean, order: number): CompletionItem {
  const name = keyName(row)
  const skeleton = snippets && row.skeleton
  return {
    label: name,
    kind: CompletionItemKind.Property,
    sortText: String(order).padStart(3, '0'),
    documentation: { kind: 'markdown', value: documentation(row) },
    insertTextFormat: skeleton ? InsertTextFormat.Snippet : InsertTextFormat.PlainText,
    textEdit: { range, newText: skeleton ? `${name}:${skeleton}` : `${name}: ` },
  }
}

function words({ names, word }: Place): CompletionItem[] {
  return (findKey(names)?.words ?? []).map(({ word: label, meaning }) => ({
    label,
    kind: CompletionItemKind.EnumMember,
    documentation: meaning,
    textEdit: { range: word, newText: label },
  }))
}

function inPath({ crystal }: DocumentAnalysis, { value = '', word }: Place): CompletionItem[] {
  const before = [...value.matchAll(/[\p{L}][\p{L}\d'_]*/gu)].map(([label]) => label)
  if (labelLength(value) > 0) before.pop()
  const last = before.at(-1)
  const from = /[|]\s*[\p{L}\d'_]*$/u.test(value) || last === undefined ? undefined : crystal.pointOf(last)
  const points = new Map([...crystal.bookPoints, ...crystal.points])
  const labels = [...points.values()].map(point => labelItem(crystal, point, from, word))
  return before.length > 0 ? labels : [...wholePaths(crystal, word), ...labels]
}

function labelItem(
  crystal: Crystal,
  point: PlacedPoint,
  from: PlacedPoint | undefined,
  range: Range,
): CompletionItem {
  const { label, fraction, cartesian, origin } = point
  const length = from && distance(from.cartesian, cartesian)
  const step =
    length === undefined ? '' : `, ${inverseLength(length, crystal.unit)} from ${displayLabel(from!.label)}`
  return {
    label,
    kind: origin === 'file' ? CompletionItemKind.Variable : CompletionItemKind.Constant,
    detail: `${fractions(fraction, crystal.dimension)}${step}`,
    // The point that one stands on comes last: nobody goes there.
    sortText: `${length !== undefined && length < (crystal.zone?.tolerance ?? 0) ? 2 : 1}${label}`,
    filterText: `${label} ${ASCII[label] ?? ''}`,
    textEdit: { range, newText: label },
  }
}

/** What is typed where the keyboard has no Greek. */
const ASCII: Readonly<Record<string, string>> = { Γ: 'Gamma', Σ: 'Sigma', Δ: 'Delta', Λ: 'Lambda' }

/** The book's own path, written out or by name. */
function wholePaths(crystal: Crystal, range: Range): CompletionItem[] {
  const path = recommendedPath(crystal)
  if (!path) return []
  const source = crystal.book?.source ?? ''
  const item = (label: string, newText: string, detail: string): CompletionItem => ({
    label,
    kind: CompletionItemKind.Value,
    detail,
    documentation: source,
    sortText: `0${label.length}`,
    textEdit: { range, newText },
  })
  return [
    item('recommended', 'recommended', 'the label book’s own path, whatever the cell'),
    item(path.text, path.text, 'the label book’s own path, written out'),
  ]
}
