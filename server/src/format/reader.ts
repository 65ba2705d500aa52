/** Nodes to values, one function for each kind of the key table. What cannot be read is undefined and a problem. */
import { KEYS, type KeyRow, keyName, keysBelow, parentPath, type Word } from './keys.ts'
import type {
  Entry,
  Fix,
  NumberValue,
  PathBlock,
  PathLabel,
  PathPiece,
  Problem,
  Sourced,
  Span,
  VectorValue,
} from './model.ts'
import { nearest } from './nearest.ts'
import type { MappingEntry, MappingNode, Node, TextNode } from './nodes.ts'
import { evaluate, type Parameters } from './numbers.ts'
import { normaliseLabel, parsePath } from './path.ts'
import { scalarText } from './quote.ts'
import { lineEnd } from './text.ts'

/** A mapping whose keys the table knows, with the values that could be read. */
export interface Block {
  /** The keys that stand there and are known. */
  readonly keys: ReadonlyMap<string, Entry>
  readonly values: ReadonlyMap<string, unknown>
  /** A key is misspelled or still being typed, or a fault of syntax is near: what seems to be missing may be there. */
  readonly unfinished: boolean
}

/** The keys of a mapping that are known, each once. */
export interface KnownEntry extends Entry {
  readonly name: string
  readonly node: Node
  readonly row: KeyRow
}

/** Reads a value of some kind; `name` is what messages call it, in backticks where it is a key, and `key` where that stands. */
type Read = (reader: Reader, node: Node, row: KeyRow, name: string, key: Span) => unknown

/** How each kind is read. */
export type Readers = Readonly<Record<KeyRow['kind'], Read>>

/** More problems of a document are not told at once: nobody reads on, and editors choke on them. */
const MOST_PROBLEMS = 1000

/** More names than this are not listed in a message. */
const MOST_LISTED = 8

const NUMBER_WORDS = ['no', 'one', 'two', 'three', 'four', 'five', 'six', 'seven', 'eight', 'nine']
const inWords = (n: number): string => NUMBER_WORDS[n] ?? String(n)
const countOf = (n: number): string => (n === 0 ? 'is none' : n === 1 ? 'is one' : `are ${inWords(n)}`)
const numbers = (n: number): string => `${inWords(n)} number${n === 1 ? '' : 's'}`

export class Reader {
  readonly problems: Problem[] = []
  parameters: Parameters = () => ({ fault: 'has no value here' })
  /** Values that were needed before their turn. */
  private readonly ahead = new Map<KeyRow, unknown>()

  /** @param source the whole text. */
  constructor(
    readonly source: string,
    private readonly readers: Readers,
  ) {}

  /** Read a key's value now; when its turn comes it will not be read again. */
  readAhead({ node, row, name, key }: KnownEntry): unknown {
    if (!this.ahead.has(row)) this.ahead.set(row, this.value(node, row, name, key))
    return this.ahead.get(row)
  }

  /** Edits behind an alias would change another place: there are none. */
  report(
    rule: string,
    node: { readonly aliased: boolean },
    at: Span,
    message: string,
    more: Partial<Problem> = {},
  ): void {
    if (this.problems.length >= MOST_PROBLEMS) return
    const { fixes = [], ...rest } = more
    const usable = node.aliased ? [] : fixes
    this.problems.push({ rule, at, message, ...rest, ...(usable.length > 0 ? { fixes: usable } : {}) })
  }

  /** The value is of a wrong kind. */
  wrong(node: Node, message: string, fixes: readonly Fix[] = []): undefined {
    // Of a block, its first line is enough to look at.
    const at: Span = [
      node.at[0],
      node.aliased ? node.at[1] : Math.min(node.at[1], lineEnd(this.source, node.at[0])),
    ]
    if (!node.broken) this.report('value-type', node, at, message, { fixes })
    return undefined
  }

  /** The known keys by name, without a word about the others: they are read again in their turn. */
  entriesAhead(node: MappingNode, path: string): ReadonlyMap<string, KnownEntry> {
    const { length } = this.problems
    const entries = this.entries(node, path)
    this.problems.length = length
    return new Map(entries.map(entry => [entry.name, entry]))
  }

  /** Every known key once, in the order of the text; the others are problems. */
  entries(node: MappingNode, path: string): KnownEntry[] {
    const rows = new Map(keysBelow(path).map(row => [keyName(row), row]))
    const known = new Map<string, KnownEntry>()
    for (const entry of node.entries) {
      const { key, value, item } = entry
      if (key.kind !== 'text') {
        if (key.kind !== 'nothing' || entry.colon) this.wrong(key, 'A key is a word here.')
        continue
      }
      const name = key.value
      const row = rows.get(name)
      if (!row) this.unknownKey(entry, key, path)
      else if (known.has(name)) this.repeatedKey(name, known.get(name)!, entry)
      else known.set(name, { name, node: value, row, item, key: key.at, at: value.at })
    }
    return [...known.values()]
  }

  private unknownKey({ colon }: MappingEntry, key: TextNode, path: string): void {
    if (key.broken) return // It is still being typed, and YAML has said so.
    const names = keysBelow(path).map(keyName)
    if (!colon) {
      this.withoutColon(key, names)
      return
    }
    const near = nearest(key.value, names)
    const where = path === '' ? 'a lattice file' : `\`${path.replace('.*', '')}\``
    if (key.value === '<<') {
      this.report(
        'key-unknown',
        key,
        key.at,
        'A merge `<<` is not part of YAML 1.2: the keys are written out.',
      )
      return
    }
    const elsewhere = KEYS.filter(row => keyName(row) === key.value && !row.path.includes('*'))
    const homes = elsewhere.map(row =>
      parentPath(row) === '' ? 'at the top level' : `in \`${parentPath(row)}\``,
    )
    const hint = near
      ? `; did you mean \`${near}\`?`
      : homes.length > 0
        ? `: it belongs ${homes.join(' or ')}.`
        : names.length > MOST_LISTED
          ? '.'
          : `: known are ${names.map(name => `\`${name}\``).join(', ')}.`
    const rename: Fix = {
      title: `Rename to \`${near}\``,
      safe: false,
      edits: [{ at: key.at, text: near ?? '' }],
    }
    this.report('key-unknown', key, key.at, `\`${shortened(key.value)}\` is no key of ${where}${hint}`, {
      fixes: near ? [rename] : [],
    })
  }

  /** Inside of braces YAML has nothing against a key alone, and takes `a:5` for one. */
  private withoutColon(key: TextNode, names: readonly string[]): void {
    const name = /^([^\s:]+):\S/.exec(key.value)?.[1]
    if (!name || !names.includes(name) || key.quoted) {
      const hint = /^\d+$/.test(key.value) ? '; the decimal sign is a point.' : '.'
      const message = `\`${shortened(key.value)}\` is a key without a colon and a value${hint}`
      this.report('value-type', key, key.at, message)
      return
    }
    const at = key.place(0, name.length + 1)[1]
    const fix: Fix = { title: 'Insert a blank', safe: false, edits: [{ at: [at, at], text: ' ' }] }
    this.report('value-type', key, key.at, `A blank is missing after the colon of \`${name}:\`.`, {
      fixes: [fix],
    })
  }

  /** The first stands; the second is a problem. */
  repeatedKey(name: string, first: { readonly key: Span }, { key, item }: MappingEntry): void {
    const shown = `\`${shortened(name)}\``
    const removal: Fix = { title: `Remove this ${shown}`, safe: false, edits: [{ at: item, text: '' }] }
    this.report('key-repeated', key, key.at, `${shown} stands here a second time; the first one is used.`, {
      fixes: item[0] < item[1] ? [removal] : [],
      related: [{ at: first.key, message: `${shown} stands here first.` }],
    })
  }

  /** All values of a mapping by their rows. */
  block(node: MappingNode, path: string): Block {
    const keys = new Map<string, Entry>()
    const values = new Map<string, unknown>()
    for (const { name, key, at, item, node: value, row } of this.entries(node, path)) {
      keys.set(name, { key, at, item })
      values.set(name, this.ahead.has(row) ? this.ahead.get(row) : this.value(value, row, name, key))
    }
    const known = new Set(keysBelow(path).map(keyName))
    const unknown = node.entries.filter(({ key }) => key.kind !== 'text' || !known.has(key.value))
    const isDoubtful = path === '' ? unknown.some(({ key }) => meansRequired(key)) : unknown.length > 0
    const unfinished = node.broken || isDoubtful || node.entries.some(({ colon }) => !colon)
    return { keys, values, unfinished }
  }

  /** The value of a key; a key without one is a problem of its own. */
  value(node: Node, row: KeyRow, name: string, key: Span): unknown {
    if (node.kind !== 'nothing') return this.readers[row.kind](this, node, row, `\`${shortened(name)}\``, key)
    if (!node.broken)
      this.report(
        'value-type',
        node,
        key,
        `\`${shortened(name)}\` has no value yet, such as \`${row.example}\`.`,
      )
    return undefined
  }

  text(node: Node, name: string): Sourced<string> | undefined {
    if (node.kind === 'text') return node.broken ? undefined : { value: node.value, at: node.at }
    return this.wrong(node, `${name} is a text, not ${kindOf(node)}.`)
  }

  /** One of the row's words. */
  word(node: Node, row: KeyRow, name: string): Sourced<string> | undefined {
    const words = row.words ?? []
    const list = words.map(({ word }) => `\`${word}\``).join(', ')
    if (node.kind !== 'text') return this.wrong(node, `${name} is one of ${list}, not ${kindOf(node)}.`)
    if (node.broken) return undefined
    const text = node.value.trim()
    const found = words.find(({ word, also }) => word === text || also?.includes(text))
    if (found) return { value: found.word, at: node.at }
    const near = meantWord(text, words)
    const hint = near ? `; did you mean \`${near}\`?` : `: it is one of ${list}.`
    const fixes = near ? [replacement(node.at, scalarText(near))] : []
    const rule = row.path === 'unit' ? 'unit-unknown' : 'value-type'
    this.report(rule, node, node.at, `\`${shortened(text)}\` cannot be read as ${name}${hint}`, { fixes })
    return undefined
  }

  number(node: Node, row: KeyRow, name: string): NumberValue | undefined {
    if (node.kind !== 'text') return this.wrong(node, `${name} is one number, not ${kindOf(node)}.`)
    if (node.broken) return undefined
    const { value } = node
    const start = value.length - value.trimStart().length
    const number = this.numberText(value.trim(), node, (from, to) => node.place(start + from, start + to))
    return number && this.inRange(number, node, row, name) ? number : undefined
  }

  /** The text of a number with its place. */
  numberText(
    text: string,
    node: { readonly at: Span; readonly aliased: boolean },
    place: (from: number, to: number) => Span,
  ): NumberValue | undefined {
    const result = evaluate(text, this.parameters)
    if ('number' in result) {
      const { value, exact, decimals, uses } = result.number
      return { value, at: node.at, text, exact, decimals, uses }
    }
    if ('pending' in result) return undefined
    const { from, to, message, replacement: right } = result.fault
    const at = from < to ? place(from, to) : node.at
    const fixes = right === undefined ? [] : [right === '' ? removal(at) : replacement(at, right)]
    this.report('number-malformed', node, at, message, { fixes })
    return undefined
  }

  private inRange({ value }: NumberValue, node: Node, row: KeyRow, name: string): boolean {
    if (row.kind === 'count' || row.kind === 'counts') {
      if (Number.isSafeInteger(value) && value >= 1) return true
      this.wrong(node, `A whole number from 1 stands here, not ${value}.`)
      return false
    }
    if (!row.positive || value > 0) return true
    this.wrong(node, `${name} must be positive; it is ${value}.`)
    return false
  }

  /** One to three numbers, or as many as the row says. */
  vector(node: Node, row: KeyRow, name: string): VectorValue | undefined {
    const wanted = row.length === undefined ? 'one to three numbers' : numbers(row.length)
    if (node.kind === 'text') return this.vectorAsText(node, name, wanted)
    if (node.kind !== 'list') return this.wrong(node, `${name} is a list of ${wanted}, not ${kindOf(node)}.`)
    if (node.broken) return undefined
    const { length } = node
    if (row.length === undefined ? length < 1 || length > 3 : length !== row.length)
      return this.wrong(node, `${name} takes ${wanted}; here ${countOf(length)}.`)
    const items = node.items.map(({ node: item }) => this.component(item, row, name))
    return { at: node.at, items }
  }

  private component(node: Node, row: KeyRow, name: string): NumberValue | undefined {
    if (node.kind === 'text') return this.number(node, row, name)
    if (node.kind !== 'nothing') return this.wrong(node, `A number stands here, not ${kindOf(node)}.`)
    if (!node.broken) this.report('value-type', node, visible(node.at), 'A number is missing here.')
    return undefined
  }

  /** `0 0 1/2`, `(0, 0, 1/2)`: a list without its brackets. */
  private vectorAsText(node: TextNode, name: string, wanted: string): undefined {
    const parts = node.value
      .replace(/^\(|\)$/g, '')
      .trim()
      .split(/\s*,\s*|\s+/)
    const all =
      parts.length > 1 &&
      parts.length <= 3 &&
      parts.every(part => 'number' in evaluate(part, this.parameters))
    const written = `[${parts.join(', ')}]`
    const fixes = all ? [replacement(node.at, written)] : []
    return this.wrong(
      node,
      `${name} is a list of ${wanted} in brackets${all ? `: \`${written}\`` : ''}.`,
      fixes,
    )
  }

  /** One to three vectors. Where the list as a whole cannot be read there are no rows. */
  rows(node: Node, row: KeyRow, name: string): readonly (VectorValue | undefined)[] {
    const wanted = 'a list of one, two or three rows of numbers'
    if (node.kind !== 'list') this.wrong(node, `${name} is ${wanted}, not ${kindOf(node)}.`)
    else if (!node.broken && node.length > 0 && node.items.every(({ node }) => node.kind === 'text')) {
      const edits = [
        { at: before(node.at), text: '[' },
        { at: after(node.at), text: ']' },
      ]
      const fixes: Fix[] = node.flow ? [{ title: 'Write it as one row', safe: false, edits }] : []
      this.wrong(node, `${name} is ${wanted}; each row is a list in brackets.`, fixes)
    } else if (!node.broken && (node.length < 1 || node.length > 3))
      this.wrong(node, `${name} is ${wanted}; here ${countOf(node.length)}.`)
    else if (!node.broken) return node.items.map(({ node: item }) => this.rowOf(item, row, name))
    return []
  }

  private rowOf(node: Node, row: KeyRow, name: string): VectorValue | undefined {
    if (node.kind !== 'nothing') return this.vector(node, row, `A row of ${name}`)
    if (!node.broken) this.report('value-type', node, visible(node.at), `A row of ${name} is missing here.`)
    return undefined
  }

  /** Two labels. */
  ends(node: Node, name: string): { at: Span; ends: readonly [PathLabel, PathLabel] } | undefined {
    if (node.kind !== 'list') return this.wrong(node, `${name} is a list of two labels, not ${kindOf(node)}.`)
    if (node.broken) return undefined
    if (node.length !== 2) return this.wrong(node, `${name} takes two labels; here ${countOf(node.length)}.`)
    const [from, to] = node.items.map(({ node: item }) => this.label(item))
    return from && to && { at: node.at, ends: [from, to] }
  }

  label(node: Node): PathLabel | undefined {
    if (node.kind !== 'text') return this.wrong(node, `A label stands here, not ${kindOf(node)}.`)
    const text = node.value.trim()
    const label = normaliseLabel(text)
    if (label !== undefined) return { label, at: node.at, text }
    if (text === '') return this.wrong(node, 'A label is missing here.')
    return this.wrong(
      node,
      `\`${shortened(text)}\` is no label: a label is a letter, then letters, digits and primes.`,
    )
  }

  path(node: Node, name: string): Omit<PathBlock, keyof Entry> | undefined {
    if (node.kind === 'text') {
      if (node.broken) return undefined
      if (node.value.trim() === 'recommended') return { recommended: true, pieces: [] }
      return { recommended: false, pieces: this.pieces(node) }
    }
    if (node.kind !== 'list')
      return this.wrong(node, `${name} is a text such as \`Γ – X\`, not ${kindOf(node)}.`)
    if (node.broken) return undefined
    const texts = node.items.map(({ node: item }) => item)
    if (texts.length === 0) return this.wrong(node, `${name} has no piece yet, such as \`Γ – X\`.`)
    const lone = texts.map(item =>
      item.kind === 'text' && normaliseLabel(item.value.trim()) !== undefined ? item.value.trim() : undefined,
    )
    if (lone.length > 1 && lone.every(label => label !== undefined)) {
      const joined = lone.join(' – ')
      return this.wrong(
        node,
        `Each item is a piece of its own, of two labels at least; did you mean \`${joined}\`?`,
        node.flow ? [replacement(node.at, joined)] : [],
      )
    }
    return { recommended: false, pieces: texts.flatMap(item => this.piecesOf(item)) }
  }

  private piecesOf(node: Node): PathPiece[] {
    if (node.kind === 'text') return node.broken ? [] : this.pieces(node)
    if (node.kind === 'nothing' && !node.broken)
      this.report('value-type', node, visible(node.at), 'A piece of the path is missing here.')
    else this.wrong(node, `A piece of the path is a text such as \`Γ – X\`, not ${kindOf(node)}.`)
    return []
  }

  private pieces(node: TextNode): PathPiece[] {
    if (node.value.trim() === '') this.wrong(node, 'The path is empty.')
    const { pieces, faults } = parsePath(node.value, (from, to) => node.place(from, to))
    for (const { at, message, fixes } of faults) this.report('value-type', node, at, message, { fixes })
    return pieces
  }
}

/** In shorter words one other letter makes another word: `pm` is not a misspelled `nm`. */
const SHORTEST_MISSPELLED = 3

/** The word that a misspelled one was probably meant to be. */
function meantWord(text: string, words: readonly Word[]): string | undefined {
  const folded = text.toLowerCase()
  const known = words.find(({ word, meant, also }) =>
    [word, ...(meant ?? []), ...(also ?? [])].some(other => other.toLowerCase() === folded),
  )
  if (known || text.length < SHORTEST_MISSPELLED) return known?.word
  return nearest(
    text,
    words.map(({ word }) => word),
  )
}

/** A misspelled key that is probably the one which a document must have. */
function meansRequired(key: Node): boolean {
  const rows = keysBelow('')
  const near = key.kind === 'text' ? nearest(key.value, rows.map(keyName)) : undefined
  return rows.some(row => row.required && keyName(row) === near)
}

export function kindOf(node: Node): string {
  switch (node.kind) {
    case 'text':
      return `the text \`${shortened(node.value.trim())}\``
    case 'list':
      return 'a list'
    case 'mapping':
      return 'a mapping'
    case 'nothing':
      return 'nothing'
  }
}

/** More of a wrong value is not repeated in a message. */
const LONGEST_QUOTE = 40
export function shortened(text: string): string {
  const line = text.replace(/\s+/g, ' ')
  return line.length > LONGEST_QUOTE ? `${line.slice(0, LONGEST_QUOTE)}…` : line
}

export const replacement = (at: Span, text: string, safe = false): Fix => ({
  title: `Replace by \`${text.trim()}\``,
  safe,
  edits: [{ at, text }],
})
const removal = (at: Span): Fix => ({ title: 'Remove it', safe: false, edits: [{ at, text: '' }] })
const before = ([start]: Span): Span => [start, start]
const after = ([, end]: Span): Span => [end, end]
/** An empty place is shown at the character before it: the dash or comma after which something is missing. */
export const visible = ([start, end]: Span): Span =>
  end > start || start === 0 ? [start, end] : [start - 1, end]
