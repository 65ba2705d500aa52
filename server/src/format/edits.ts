/**
 * Edits back into the text. They touch the narrowest stretch, so comments, blank lines and the spelling of everything
 * else stay. Their places all refer to the text before, and edits for different entries can be applied together.
 * Behind an alias (see `standsHere`) nothing can be edited in place.
 */
import { keyName, keysBelow } from './keys.ts'
import type { Entry, LatticeDocument, PathBlock, PathSegment, Span, TextEdit, VectorValue } from './model.ts'
import { formatPath } from './path.ts'
import { scalarText } from './quote.ts'
import { lineBreak, lineEnd, lineStart, nextLine } from './text.ts'
import { readYaml } from './yaml.ts'

export { scalarText }

/** False for a value that stands elsewhere, behind an alias at this place. */
export const standsHere = (text: string, [start, end]: Span): boolean => end > start && text[start] !== '*'

/** True where two edits touch the same characters, or insert at the same place. */
export const overlap = ({ at: first }: TextEdit, { at: second }: TextEdit): boolean =>
  (first[0] < second[1] && second[0] < first[1]) || (first[0] === second[0] && first[1] === second[1])

/**
 * The text after some edits. Insertions at one place come in the order given, before a replacement that begins there.
 * @throws RangeError when edits overlap or lie outside the text (a fault of the caller, never of the file).
 */
export function applyEdits(text: string, edits: readonly TextEdit[]): string {
  const sorted = [...edits].sort((e, f) => e.at[0] - f.at[0] || e.at[1] - f.at[1])
  const parts: string[] = []
  let from = 0
  for (const { at, text: replacement } of sorted) {
    const [start, end] = at
    if (!(start >= from && end >= start && end <= text.length))
      throw new RangeError(`An edit at ${at.join('–')} overlaps another or leaves the text.`)
    parts.push(text.slice(from, start), replacement)
    from = end
  }
  return [...parts, text.slice(from)].join('')
}

const insertion = (offset: number, text: string): TextEdit => ({ at: [offset, offset], text })

/** A mapping that keys can be inserted into: a document, a block of it, or the points. */
export type Target =
  | LatticeDocument
  | (Entry & { readonly keys: ReadonlyMap<string, Entry> })
  | (Entry & { readonly items: readonly KeyedItem[] })
type KeyedItem = Pick<Entry, 'key' | 'at' | 'item'>

/** A key, and its value as YAML text on one line; '' leaves the value to be filled in. */
export type NewKey = readonly [name: string, value: string]

/**
 * Insert keys into a mapping, each at its usual place among those that are there, in the mapping's own style.
 * @returns no edits where the mapping stands behind an alias.
 */
export function insertKeys(text: string, target: Target, added: readonly NewKey[]): TextEdit[] {
  const existing = entriesOf(target)
  const contents = 'contents' in target ? target.contents : target.at
  if (
    'contents' in target
      ? text[contents[0]] === '*'
      : contents[1] > contents[0] && !standsHere(text, contents)
  )
    return []
  const isFlow = text[contents[0]] === '{'
  const order = usualOrder([...existing.map(({ name }) => name), ...added.map(([name]) => name)])
  const sorted = [...added].sort(([a], [b]) => order(a) - order(b))
  if (existing.length === 0) return [intoEmpty(text, target, contents, isFlow, sorted)]
  const groups = new Map<Existing | undefined, NewKey[]>()
  for (const key of sorted) {
    const before = existing.filter(({ name }) => order(name) <= order(key[0])).at(-1)
    groups.set(before, [...(groups.get(before) ?? []), key])
  }
  return [...groups].map(([before, keys]) =>
    isFlow ? intoFlow(existing, before, keys) : intoBlock(text, blockStart(text, contents[0]), before, keys),
  )
}

interface Existing extends KeyedItem {
  readonly name: string
}

function entriesOf(target: Target): Existing[] {
  const entries =
    'keys' in target
      ? [...target.keys].map(([name, entry]) => ({ ...entry, name }))
      : target.items.map(item => ({ ...item, name: '' }))
  return entries.sort((a, b) => a.key[0] - b.key[0])
}

/** Ranks of names in the mapping whose keys they are; names of the user's own keep the order they come in. */
function usualOrder(names: readonly string[]): (name: string) => number {
  for (const path of ['', 'lattice', 'frames', 'sampling', 'mesh']) {
    const known = keysBelow(path).map(keyName)
    if (names.every(name => known.includes(name))) return name => known.indexOf(name)
  }
  return () => 0
}

const written = ([name, value]: NewKey): string => `${scalarText(name)}: ${value}`

/** Into a mapping without a known key: it may hold others, or nothing at all. */
function intoEmpty(
  text: string,
  target: Target,
  contents: Span,
  isFlow: boolean,
  added: readonly NewKey[],
): TextEdit {
  const keys = added.map(written)
  const [start, end] = contents
  if (isFlow)
    return insertion(start + 1, keys.join(', ') + (/^\s*\}/.test(text.slice(start + 1)) ? '' : ', '))
  if (end > start) return beforeBlock(text, blockStart(text, start), added)
  if (!('contents' in target))
    return insertion(start, `${/\s/.test(text[start - 1] ?? '') ? '' : ' '}{${keys.join(', ')}}`)
  const feed = lineBreak(text)
  return insertion(end, `${end > 0 && text[end - 1] !== '\n' ? feed : ''}${keys.join(feed)}${feed}`)
}

function intoFlow(
  existing: readonly Existing[],
  before: Existing | undefined,
  added: readonly NewKey[],
): TextEdit {
  const next = before ? existing[existing.indexOf(before) + 1] : existing[0]
  const at = next ? next.key[0] : Math.max(before!.key[1], before!.at[1])
  const keys = added.map(written).join(', ')
  return { at: [at, at], text: next ? `${keys}, ` : `, ${keys}` }
}

/** Where a block begins: at its first key, or at an anchor, tag or question mark before that. */
function blockStart(text: string, first: number): number {
  const start = lineStart(text, first)
  const property = text.slice(start, first).search(/[&!]/)
  return property < 0 ? first : start + property
}

function intoBlock(
  text: string,
  first: number,
  before: Existing | undefined,
  added: readonly NewKey[],
): TextEdit {
  if (!before) return beforeBlock(text, first, added)
  const feed = lineBreak(text)
  const lines = added.map(key => `${columnText(text, first)}${written(key)}`)
  const at = nextLine(text, Math.max(before.key[1], before.at[1]))
  const isLast = at === text.length && !text.endsWith('\n')
  return insertion(at, lines.map(line => (isLast ? feed + line : line + feed)).join(''))
}

/** Before the first key of a block. */
function beforeBlock(text: string, first: number, added: readonly NewKey[]): TextEdit {
  const feed = lineBreak(text)
  const indent = columnText(text, first)
  const lines = added.map(key => `${indent}${written(key)}`)
  const start = lineStart(text, first)
  if (/^[ \t]*$/.test(text.slice(start, first)))
    return insertion(start, lines.map(line => line + feed).join(''))
  // It shares its line with a dash: what is inserted goes between the two.
  return insertion(first, `${lines.join(feed).trimStart()}${feed}${indent}`)
}

/** Blanks up to the column of an offset. */
const columnText = (text: string, offset: number): string => ' '.repeat(offset - lineStart(text, offset))

/** Blanks by which nested blocks of the document are indented; two where there is none. */
export function indentation(text: string, { keys }: LatticeDocument): string {
  for (const { key, at } of keys.values()) {
    const own = key[0] - lineStart(text, key[0])
    const first = at[0] - lineStart(text, at[0])
    if (at[0] > lineEnd(text, key[1]) && first > own) return ' '.repeat(first - own)
  }
  return '  '
}

/**
 * Remove a key with its value and its line. A comment at the end of the line goes with it, one above stays. Nothing is
 * removed where an alias needs what stands there.
 */
export function removeEntry(text: string, { item }: Pick<Entry, 'item'>): TextEdit {
  const [start, end] = item
  const rest = text.slice(0, start) + text.slice(end)
  const needed = [...text.slice(start, end).matchAll(/&([^\s,[\]{}]+)/g)].some(([, name]) =>
    rest.includes(`*${name}`),
  )
  return { at: needed ? [start, start] : item, text: '' }
}

/** Remove some of the items of a list or mapping; the whole of it where none is left. */
export function removeItems(
  container: Pick<Entry, 'item'> & { readonly items: readonly { readonly item: Span }[] },
  removed: readonly { readonly item: Span }[],
): TextEdit[] {
  if (removed.length >= container.items.length) return [{ at: container.item, text: '' }]
  return removed.map(({ item }) => ({ at: item, text: '' }))
}

/** Replace a key's value by YAML text of one line; a block value is drawn up to the line of its key. */
export function replaceValue(text: string, { key, at }: Pick<Entry, 'key' | 'at'>, value: string): TextEdit {
  const gap = text.slice(key[1], at[0])
  const colon = gap.indexOf(':') + 1
  if (at[0] === at[1]) {
    const blanks = /^[ \t]*(?=\r?\n|$)/.exec(text.slice(at[1]))?.[0].length ?? 0
    return { at: [at[0], at[1] + blanks], text: gap.endsWith(':') ? ` ${value}` : value }
  }
  if (!gap.includes('\n')) return { at, text: value }
  const comment = /^[ \t]+#.*$/m.exec(gap.slice(colon).split('\n')[0])?.[0].trimEnd() ?? ''
  return { at: [key[1] + colon, at[1]], text: ` ${value}${comment}` }
}

/**
 * Replace the numbers of a vector, in its own layout where the count stays.
 * @param numbers YAML texts; undefined keeps a number as it is.
 */
export function replaceVector(
  text: string,
  vector: VectorValue,
  numbers: readonly (string | undefined)[],
): TextEdit[] {
  const { at, items } = vector
  if (
    !standsHere(text, at) ||
    numbers.length !== items.length ||
    items.some((item, i) => !item && numbers[i] !== undefined)
  )
    return [{ at, text: `[${numbers.map((number, i) => number ?? items[i]?.text ?? '0').join(', ')}]` }]
  return items.flatMap((item, i) => {
    const number = numbers[i]
    return item && number !== undefined && number !== item.text ? [{ at: item.at, text: number }] : []
  })
}

/** Append pieces to a path that is written out; no edits for `recommended` or an alias. */
export function appendToPath(
  text: string,
  path: PathBlock,
  pieces: readonly (readonly string[])[],
): TextEdit[] {
  const { at, recommended } = path
  if (recommended || pieces.length === 0 || !standsHere(text, at)) return []
  const added = formatPath(pieces)
  const [start, end] = at
  const first = text[start]
  if (first === '[') return [insertion(lastOfFlow(text, at), `, ${added}`)]
  if (first === '-' && /\s/.test(text[start + 1] ?? '')) {
    const feed = lineBreak(text)
    const line = `${columnText(text, start)}- ${added}`
    const next = nextLine(text, end)
    return [
      next === text.length && !text.endsWith('\n')
        ? insertion(next, feed + line)
        : insertion(next, line + feed),
    ]
  }
  const quoted = first === '"' || first === "'"
  return [insertion(quoted ? end - 1 : end, ` | ${added}`)]
}

/** Where the last entry of a list in brackets ends; a comma after it stays after what is inserted. */
function lastOfFlow(text: string, [, end]: Span): number {
  let at = end - 1
  while (/[\s,]/.test(text[at - 1])) at--
  return at
}

/** Put a break of the path in place of a separator. */
export function breakSegment(text: string, { separator: [start, end] }: PathSegment): TextEdit[] {
  if (!standsHere(text, [start, end])) return []
  const before = /\s/.test(text[start - 1]) ? '' : ' '
  const after = /\s/.test(text[end] ?? '') ? '' : ' '
  return [{ at: [start, end], text: `${before}|${after}` }]
}

/** Name points on the way of a segment, with its own kind of separator. A number of steps of its own is given up. */
export function insertLabels(text: string, segment: PathSegment, labels: readonly string[]): TextEdit[] {
  const { separator, steps } = segment
  if (!standsHere(text, separator)) return []
  const own = steps ? '–' : text.slice(...separator)
  const blank = /\s/.test(text[separator[1]] ?? '') ? ' ' : ''
  return [{ at: separator, text: `${own}${labels.map(label => `${blank}${label}${blank}${own}`).join('')}` }]
}

/**
 * Remove a segment of a path: at the end of a piece its end, in the middle a break takes its place, an only one goes
 * with its piece. No edits where the path would be empty or stands behind an alias.
 */
export function removeSegment(text: string, path: PathBlock, segment: PathSegment): TextEdit[] {
  const index = path.pieces.findIndex(({ segments }) => segments.includes(segment))
  const piece = path.pieces[index]
  if (!piece || !standsHere(text, segment.separator)) return []
  const { segments } = piece
  if (segments.length === 1) return removePiece(text, path, index)
  if (segment === segments[0]) return [{ at: [segment.from.at[0], segment.to.at[0]], text: '' }]
  if (segment === segments[segments.length - 1])
    return [{ at: [segment.from.at[1], segment.to.at[1]], text: '' }]
  return breakSegment(text, segment)
}

/** A piece goes with the break beside it. One that is an item of a list by itself is left to the user. */
function removePiece(text: string, { pieces }: PathBlock, index: number): TextEdit[] {
  const { at } = pieces[index]
  const before = pieces[index - 1]?.at
  const after = pieces[index + 1]?.at
  const onlyBreak = (from: number, to: number) => /^\s*\|\s*$/.test(text.slice(from, to))
  if (before && onlyBreak(before[1], at[0])) return [{ at: [before[1], at[1]], text: '' }]
  if (after && onlyBreak(at[1], after[0])) return [{ at: [at[0], after[0]], text: '' }]
  return []
}

const ALLOW = '# braggline: allow'

/**
 * A comment that silences a rule on the line of an offset: at its end, or on a line of its own above where the line
 * cannot hold one. A comment that is there already is extended.
 */
export function insertAllowance(text: string, offset: number, rule: string): TextEdit[] {
  const { comments, multiline } = readYaml(text)
  const stretch = multiline.find(
    ([start, end]) => lineStart(text, start) <= offset && offset <= lineEnd(text, end),
  )
  const line = lineStart(text, stretch ? stretch[0] : offset)
  const end = lineEnd(text, line)
  const instruction = (from: number, to: number) =>
    comments.find(({ at, text: comment }) => at[0] >= from && at[0] <= to && comment.startsWith(ALLOW))
  const above = line > 0 ? lineStart(text, line - 1) : line
  const known =
    (stretch ? undefined : instruction(line, end)) ?? (line > 0 ? instruction(above, line - 1) : undefined)
  const isAlone = known && (known.at[0] >= line || /^\s*$/.test(text.slice(above, known.at[0])))
  if (known && isAlone) return [insertion(known.at[0] + known.text.trimEnd().length, `, ${rule}`)]
  const hasComment = comments.some(({ at }) => at[0] >= line && at[0] <= end)
  const content = text.slice(line, end).trimEnd()
  if (!stretch && !hasComment && content !== '')
    return [insertion(line + content.length, ` ${ALLOW} ${rule}`)]
  const indent = /^[ \t]*/.exec(content)![0]
  return [insertion(line, `${indent}${ALLOW} ${rule}${lineBreak(text)}`)]
}
