/**
 * What is being written at an offset, as far as lines, their indentation and brackets tell. It need not be valid yet, and
 * nothing is decoded: the answer takes a walk over the lines of one document.
 */
import { findKey } from '../../format/keys.ts'

export interface Place {
  /** `key`: a key is begun in the mapping `names`; `value`: the scalar of `names`; `comment`: behind a `#`. */
  readonly kind: 'key' | 'value' | 'comment'
  /** Names of the keys from the top; items of lists have none. */
  readonly names: readonly string[]
  readonly style: 'block' | 'flow'
  /** What stands before the cursor of the scalar, key or comment. */
  readonly written: string
  /** Offset where that begins. */
  readonly start: number
  /** Keys that the mapping has elsewhere. */
  readonly present: ReadonlySet<string>
  /** The item of a block list begins here, behind its dash. */
  readonly inItem: boolean
  /** A colon or a dash stands right before `start`: what follows must be parted from it. */
  readonly afterColon: boolean
  /** A colon follows the word: only the key's name is being changed. */
  readonly hasColon: boolean
  /** Columns of blanks before the mapping's keys. */
  readonly column: number
  /** Lists in brackets around the offset, outermost first: the 0-based entry and where the list begins. */
  readonly lists: readonly { readonly index: number; readonly start: number }[]
  readonly quoted: boolean
}

interface Level {
  readonly column: number
  readonly dash: boolean
  readonly name: string
  readonly below: Set<string>
  /** Where its value begins. */
  readonly value: number
}

interface Flow {
  readonly open: '{' | '['
  readonly start: number
  readonly below: Set<string>
  key?: string
  index: number
  /** Where the entry's scalar begins; undefined where nothing of it stands yet. */
  token?: number
  quote?: string
}

const KEY = /^(?:([^\s#'":{}[\],&*!|>%@`-][^:#]*?|-[^\s:#][^:#]*?)|"([^"]*)"|'([^']*)')[ \t]*:(?=\s|$)/
/** A known key and a value that is not parted from it yet. */
const TIGHT = /^([a-z][\w-]*):(\S*)$/

export function placeAt(text: string, offset: number): Place {
  const walk = new Walk(text, offset)
  return walk.place()
}

class Walk {
  readonly #root: Level = { column: -1, dash: false, name: '', below: new Set(), value: 0 }
  #levels: Level[] = [this.#root]
  readonly #flows: Flow[] = []

  constructor(
    private readonly text: string,
    private readonly offset: number,
  ) {}

  place(): Place {
    const { text, offset } = this
    let at = documentStart(text, offset)
    for (;;) {
      const newline = text.indexOf('\n', at)
      const end = newline < 0 || newline >= offset ? offset : newline
      const found = this.#line(at, end, end === offset)
      if (found) return found
      at = end + 1
    }
  }

  get #last(): Level {
    return this.#levels.at(-1)!
  }

  #line(start: number, end: number, isLast: boolean): Place | undefined {
    if (this.#flows.length > 0) return this.#flow(start, end, isLast)
    const line = this.text.slice(start, end)
    let column = /^ */.exec(line)![0].length
    const content = line.slice(column)
    if (!isLast && (content.trim() === '' || content[0] === '#')) return undefined
    if (/^(?:---|\.\.\.)(?:\s|$)/.test(line)) {
      this.#levels = [{ ...this.#root, below: new Set() }]
      return isLast ? this.#nowhere(end) : undefined
    }
    if (content[0] === '#') return this.#comment(start + column)
    let inItem = false
    for (let dash = /^- +|^-$/.exec(line.slice(column)); dash; dash = /^- +|^-$/.exec(line.slice(column))) {
      this.#pop(level => level.column > column || (level.column === column && level.dash))
      const value = start + column + dash[0].length
      this.#levels.push({ column, dash: true, name: '', below: new Set(), value })
      column += dash[0].length
      inItem = true
    }
    const rest = line.slice(column)
    const key = KEY.exec(rest)
    if (key) {
      const name = (key[1] ?? key[2] ?? key[3]).trim()
      this.#pop(level => level.column >= column)
      const parent = this.#last
      const value = start + column + key[0].length
      this.#levels.push({ column, dash: false, name, below: new Set(), value })
      const found = this.#value(value, end, isLast)
      parent.below.add(name)
      return found
    }
    if (!isLast && !/^[[{]/.test(rest)) return undefined
    if (/^[[{]/.test(rest)) return this.#value(start + column, end, isLast)
    return this.#begun(start + column, column, inItem)
  }

  #pop(goes: (level: Level) => boolean): void {
    while (this.#levels.length > 1 && goes(this.#last)) this.#levels.pop()
  }

  /** What stands behind a colon or a dash. */
  #value(from: number, end: number, isLast: boolean): Place | undefined {
    const { text } = this
    const raw = text.slice(from, end)
    const begin = from + /^[ \t]*/.exec(raw)![0].length
    const first = text[begin]
    if (begin < end && (first === '{' || first === '[')) return this.#flow(begin, end, isLast)
    if (!isLast) return undefined
    const quoted = begin < end && (first === '"' || first === "'")
    const comment = quoted ? -1 : raw.search(/(?:^|[ \t])#/)
    if (comment >= 0) return this.#comment(from + raw.indexOf('#', comment))
    if (quoted && raw.slice(begin - from + 1).includes(first)) return this.#nowhere(end)
    const scalar = quoted ? begin + 1 : begin
    const { column } = this.#last
    return this.#made('value', {
      start: scalar,
      column,
      present: new Set([...(this.#levels.at(-2)?.below ?? []), ...keysBehind(text, this.offset, column)]),
      quoted,
      afterColon: scalar === from && text[from - 1] === ':',
    })
  }

  /** The last line is neither a key with its colon nor an opened bracket. */
  #begun(start: number, column: number, inItem: boolean): Place {
    const { text, offset } = this
    const rest = text.slice(start, offset)
    const comment = rest.search(/(?:^|[ \t])#/)
    if (comment >= 0) return this.#comment(start + rest.indexOf('#', comment))
    const holder =
      this.#levels.findLast(level => level.column < column || (level.dash && inItem)) ?? this.#root
    const path = this.#names().slice(0, 1)[0] === 'path' && column > 0
    if (path) {
      // A further line of a text, or an item of a list.
      const item = inItem ? start : this.#last.value
      const quote = /^\s*['"]/.exec(text.slice(item, offset))?.[0].length ?? 0
      return this.#made('value', { start: item + quote, quoted: quote > 0 })
    }
    this.#levels.length = this.#levels.indexOf(holder) + 1
    const tight = TIGHT.exec(rest)
    if (tight && findKey([...this.#names(), tight[1]]))
      return this.#made('value', {
        names: [...this.#names(), tight[1]],
        start: start + tight[1].length + 1,
        column,
        afterColon: true,
        present: new Set([...holder.below, ...keysBehind(text, offset, column)]),
      })
    const present = new Set(holder.below)
    if (!inItem) for (const name of keysBehind(text, offset, column)) present.add(name)
    return this.#made('key', { start, column, inItem, present, hasColon: colonFollows(text, offset) })
  }

  /** Reads on in brackets, from an opening one or from the start of a further line. */
  #flow(from: number, end: number, isLast: boolean): Place | undefined {
    const { text } = this
    for (let i = from; i < end; i++) {
      const top = this.#flows.at(-1)
      const c = text[i]
      if (top?.quote) {
        if (c === top.quote) top.quote = undefined
        else if (c === '\\' && top.quote === '"') i++
        continue
      }
      if (c === '#' && (i === from || /\s/.test(text[i - 1]))) {
        if (isLast) return this.#comment(i)
        return undefined
      }
      if (c === '{' || c === '[') {
        if (top) top.token ??= i
        this.#flows.push({ open: c, start: i + 1, below: new Set(), index: 0 })
      } else if (c === '}' || c === ']') {
        this.#flows.pop()
        if (this.#flows.length === 0) return isLast ? this.#afterFlow(i + 1, end) : undefined
      } else if (!top) continue
      else if (c === ',') {
        top.index++
        top.key = undefined
        top.token = undefined
      } else if (
        c === ':' &&
        top.key === undefined &&
        /[\s,}\]'"]|^$/.test(text[i + 1] ?? '') &&
        i + 1 <= end
      ) {
        const name = text
          .slice(top.token ?? i, i)
          .trim()
          .replace(/^(['"])(.*)\1$/, '$2')
        top.key = name
        top.below.add(name)
        top.token = undefined
      } else if (/['"]/.test(c) && top.token === undefined) {
        top.token = i
        top.quote = c
      } else if (!/\s/.test(c)) top.token ??= i
    }
    return isLast ? this.#inFlow() : undefined
  }

  #afterFlow(from: number, end: number): Place {
    const comment = this.text.slice(from, end).search(/\s#/)
    return comment >= 0 ? this.#comment(from + comment + 1) : this.#nowhere(end)
  }

  #inFlow(): Place {
    const { text, offset } = this
    const flows = this.#flows
    const top = flows.at(-1)!
    const names = this.#names()
    const quoted = top.quote !== undefined
    const start = (top.token ?? offset) + (quoted ? 1 : 0)
    const lists = flows.filter(({ open }) => open === '[').map(({ index, start }) => ({ index, start }))
    const closed = top.token !== undefined && /[\]}'"]\s*$/.test(text.slice(top.token, offset)) && !quoted
    if (closed) return this.#nowhere(offset)
    if (top.key !== undefined || (top.open === '[' && findKey(names)?.kind !== 'atoms')) {
      const afterColon = top.key !== undefined && text[start - 1] === ':'
      const present = new Set([...top.below, ...keysToClose(text, offset)])
      return this.#made('value', { names, style: 'flow', start, quoted, afterColon, lists, present })
    }
    const tight = TIGHT.exec(text.slice(start, offset))
    if (tight && findKey([...names, tight[1]]))
      return this.#made('value', {
        names: [...names, tight[1]],
        style: 'flow',
        start: start + tight[1].length + 1,
        afterColon: true,
        present: new Set([...top.below, ...keysToClose(text, offset)]),
      })
    const present = new Set([...top.below, ...keysToClose(text, offset)])
    return this.#made('key', {
      names,
      style: 'flow',
      start,
      quoted,
      present,
      hasColon: colonFollows(text, offset),
    })
  }

  #names(): string[] {
    const flows = this.#flows.map(({ key }) => key)
    return [...this.#levels.map(({ name }) => name), ...flows].filter((name): name is string => Boolean(name))
  }

  #comment(start: number): Place {
    return this.#made('comment', { start })
  }

  /** Behind something that is complete. */
  #nowhere(end: number): Place {
    return this.#made('comment', { start: end })
  }

  #made(kind: Place['kind'], parts: Partial<Place> & { start: number }): Place {
    return {
      kind,
      names: this.#names(),
      style: 'block',
      written: this.text.slice(parts.start, this.offset),
      present: NONE,
      inItem: false,
      afterColon: false,
      hasColon: false,
      column: /^ */.exec(this.text.slice(this.text.lastIndexOf('\n', this.offset - 1) + 1))![0].length,
      lists: [],
      quoted: false,
      ...parts,
    }
  }
}

const NONE: ReadonlySet<string> = new Set()

/** The start of the document that an offset stands in. */
function documentStart(text: string, offset: number): number {
  for (let at = text.lastIndexOf('\n---', offset - 1); at >= 0; at = text.lastIndexOf('\n---', at - 1))
    if (/\s|^$/.test(text[at + 4] ?? '') && at + 4 < offset) return at + 1
  return 0
}

/** Something stands further on in the line, so that nothing can be begun here. */
export const isOccupied = (text: string, offset: number): boolean =>
  /^[ \t]+[^\s#,}\]]/.test(text.slice(offset, offset + LONGEST_KEY))

/** The block value of a key in some column is written already, on further lines. */
export function hasBlockBelow(text: string, offset: number, column: number): boolean {
  for (let at = text.indexOf('\n', offset) + 1; at > 0; at = text.indexOf('\n', at) + 1) {
    const line = /^( *)(\S?)(.?)/.exec(text.slice(at, at + LONGEST_KEY))!
    if (line[2] === '' || line[2] === '#') continue
    return line[1].length > column || (line[1].length === column && line[2] === '-' && line[3] !== '-')
  }
  return false
}

const colonFollows = (text: string, offset: number): boolean =>
  /^[\p{L}\d'_-]*[ \t]*:(?:\s|$)/u.test(text.slice(offset, offset + LONGEST_KEY))
/** No key is longer than this. */
const LONGEST_KEY = 80

/** Keys of a block mapping on the lines after an offset. */
function keysBehind(text: string, offset: number, column: number): string[] {
  const names: string[] = []
  for (let at = text.indexOf('\n', offset) + 1; at > 0; at = text.indexOf('\n', at) + 1) {
    const end = text.indexOf('\n', at)
    const line = text.slice(at, end < 0 ? undefined : end)
    const indent = /^ */.exec(line)![0].length
    if (/^\s*(?:#|$)/.test(line) || indent > column) continue
    if (indent < column || /^(?:---|\.\.\.)(?:\s|$)|^ *- /.test(line)) break
    const key = KEY.exec(line.slice(indent))
    if (key) names.push((key[1] ?? key[2] ?? key[3]).trim())
  }
  return names
}

/** Keys of a mapping in braces between an offset and its closing brace. */
function keysToClose(text: string, offset: number): string[] {
  const names: string[] = []
  let depth = 0
  for (let i = offset; i < Math.min(text.length, offset + LONGEST_FLOW); i++) {
    const c = text[i]
    if (c === '{' || c === '[') depth++
    else if ((c === '}' || c === ']') && depth-- === 0) break
    else if (c === ',' && depth === 0) {
      const key = /^,\s*(?:(['"]?)([^\s,:{}[\]'"]+)\1)\s*:/.exec(text.slice(i, i + LONGEST_KEY))
      if (key) names.push(key[2])
    }
  }
  return names
}
/** Where an unclosed brace is given up. */
const LONGEST_FLOW = 2_000
