/**
 * Long lists of atoms are recognised in the text itself, line by line, before YAML is parsed: the YAML library takes
 * twenty times as long for them as for anything else in a file. A run of rows such as
 *
 *     - Si: [0.25, 0.25, 0.25]
 *     - Fe: {at: [1/2, 0, 0], name: Fe_up}   # a comment
 *
 * with one indentation is cut out but for its first and last row. If these two turn out to be neighbouring items of
 * one block sequence, so is every row between them: after each row the parser is in the state that it was in after the
 * first. Whoever reads the rest of the text makes sure of that, and reads the whole text otherwise.
 */
import type { Span } from './model.ts'

/** One row, as offsets into the text. */
export interface AtomRow {
  readonly dash: number
  readonly element: Span
  /** The value: the list of numbers, or the mapping that holds it. */
  readonly value: Span
  readonly vector: Span
  readonly numbers: readonly [Span, Span, Span]
  readonly name?: Span
  /** The whole line with its line break. */
  readonly line: Span
}

export interface RowComment {
  readonly from: number
  readonly to: number
}

/** Rows of one indentation that follow each other. `cut` is everything between the first and the last. */
export interface Run {
  readonly rows: readonly AtomRow[]
  readonly cut: Span
  /** Comments inside the cut. */
  readonly comments: readonly RowComment[]
}

/** Shorter runs are not worth a cut. */
const SHORTEST = 8

export function findRuns(text: string): Run[] {
  const runs: Run[] = []
  const scanner = new Scanner(text)
  for (let at = 0; at < text.length; ) {
    const row = scanner.row(at)
    if (!row) {
      const next = text.indexOf('\n', at)
      if (next < 0) break
      at = next + 1
      continue
    }
    const { run, end } = collect(scanner, row)
    if (run) runs.push(run)
    at = end
  }
  return runs
}

function collect(scanner: Scanner, first: AtomRow): { run?: Run; end: number } {
  const indent = first.dash - first.line[0]
  const rows = [first]
  const comments: RowComment[] = []
  /** Comments since the last row: they are in the cut only if a row follows. */
  let loose: RowComment[] = scanner.comment ? [scanner.comment] : []
  let at = first.line[1]
  for (;;) {
    const row = scanner.row(at)
    if (row) {
      if (row.dash - row.line[0] !== indent) break
      comments.push(...loose)
      loose = scanner.comment ? [scanner.comment] : []
      rows.push(row)
      at = row.line[1]
    } else {
      const next = scanner.emptyLine(at)
      if (next < 0) break
      if (scanner.comment) loose.push(scanner.comment)
      at = next
    }
  }
  const last = rows[rows.length - 1]
  const end = last.line[1]
  if (rows.length < SHORTEST) return { end }
  const cut: Span = [first.line[1], last.line[0]]
  return { end, run: { rows, cut, comments: comments.filter(({ from }) => from >= cut[0]) } }
}

const SPACE = 32
const TAB = 9
const LINE_FEED = 10
const CARRIAGE_RETURN = 13
const code = (character: string): number => character.charCodeAt(0)
const HASH = code('#')
const COLON = code(':')
const COMMA = code(',')
const DASH = code('-')
const PLUS = code('+')
const UNICODE_MINUS = 0x2212
const LIST_START = code('[')
const LIST_END = code(']')
const MAPPING_START = code('{')
const MAPPING_END = code('}')

const table = (characters: string): Uint8Array => {
  const marks = new Uint8Array(128)
  for (const character of characters) marks[code(character)] = 1
  return marks
}
const DIGITS = '0123456789'
const LETTERS = 'ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz'
/** What a number may hold here, besides blanks. Everything that YAML might understand otherwise is left to YAML. */
const IN_NUMBER = table(`${DIGITS}${LETTERS}.+-*/^()`)
/** After a sign. No name begins with an n, but `null` does. */
const STARTS_NUMBER = table(`${DIGITS}.(${LETTERS.replace(/n/gi, '')}`)
const IN_NAME = table(`${DIGITS}${LETTERS}_`)
const isCapital = (c: number): boolean => c >= 65 && c <= 90
const isSmall = (c: number): boolean => c >= 97 && c <= 122

/** Reads rows by character codes. Every method gives −1 or undefined where the text has another form. */
class Scanner {
  /** The comment of the line read last. */
  comment: RowComment | undefined

  constructor(private readonly text: string) {}

  private at(i: number): number {
    return this.text.charCodeAt(i) // NaN at the end, which is equal to nothing.
  }

  private spaces(i: number): number {
    while (this.at(i) === SPACE) i++
    return i
  }

  row(start: number): AtomRow | undefined {
    const dash = this.spaces(start)
    if (this.at(dash) !== DASH || this.at(dash + 1) !== SPACE) return undefined
    const from = this.spaces(dash + 1)
    if (!isCapital(this.at(from))) return undefined
    const to = isSmall(this.at(from + 1)) ? from + 2 : from + 1
    if (this.at(to) !== COLON || this.at(to + 1) !== SPACE) return undefined
    const value = this.spaces(to + 1)
    return this.at(value) === MAPPING_START
      ? this.named(start, dash, [from, to], value)
      : this.bare(start, dash, [from, to], value)
  }

  private bare(start: number, dash: number, element: Span, value: number): AtomRow | undefined {
    const numbers = this.vector(value)
    if (!numbers) return undefined
    const end = this.end
    const next = this.lineEnd(end)
    if (next < 0) return undefined
    const vector: Span = [value, end]
    return { dash, element, value: vector, vector, numbers, line: [start, next] }
  }

  /** `{at: [x, y, z]}` or `{at: [x, y, z], name: text}` */
  private named(start: number, dash: number, element: Span, value: number): AtomRow | undefined {
    const key = this.spaces(value + 1)
    if (!this.text.startsWith('at: ', key)) return undefined
    const from = this.spaces(key + 4)
    const numbers = this.vector(from)
    if (!numbers) return undefined
    const vector: Span = [from, this.end]
    let at = this.spaces(this.end)
    let name: Span | undefined
    if (this.at(at) === COMMA) {
      const second = this.spaces(at + 1)
      if (!this.text.startsWith('name: ', second)) return undefined
      const first = this.spaces(second + 6)
      let last = first
      while (IN_NAME[this.at(last)] === 1) last++
      const word = this.text.slice(first, last)
      if (!LETTERS.includes(word[0]) || /^null$/i.test(word)) return undefined
      name = [first, last]
      at = this.spaces(last)
    }
    if (this.at(at) !== MAPPING_END) return undefined
    const next = this.lineEnd(at + 1)
    if (next < 0) return undefined
    return { dash, element, value: [value, at + 1], vector, numbers, name, line: [start, next] }
  }

  /** Where the vector read last ends. */
  private end = 0

  private vector(start: number): [Span, Span, Span] | undefined {
    if (this.at(start) !== LIST_START) return undefined
    const x = this.number(start + 1, COMMA)
    const y = x && this.number(this.end, COMMA)
    const z = y && this.number(this.end, LIST_END)
    return z && [x, y, z]
  }

  /** A number up to `after`, behind which `end` then stands. */
  private number(start: number, after: number): Span | undefined {
    const from = this.spaces(start)
    let to = from
    const first = this.at(from)
    if (first === DASH || first === PLUS || first === UNICODE_MINUS) to++
    if (STARTS_NUMBER[this.at(to)] !== 1) return undefined
    let next = to
    while (IN_NUMBER[this.at(next)] === 1 || this.at(next) === UNICODE_MINUS) {
      to = next + 1
      next = this.spaces(to)
    }
    if (this.at(next) !== after) return undefined
    this.end = next + 1
    return [from, to]
  }

  /** After a value: blanks, perhaps a comment, the line break. Gives the start of the next line. */
  private lineEnd(from: number): number {
    this.comment = undefined
    let at = from
    while (this.at(at) === SPACE || this.at(at) === TAB) at++
    if (this.at(at) === HASH) {
      if (at === from) return -1
      return this.commentEnd(at)
    }
    return this.lineBreak(at)
  }

  private commentEnd(from: number): number {
    const feed = this.text.indexOf('\n', from)
    if (feed < 0) return -1
    const to = this.at(feed - 1) === CARRIAGE_RETURN ? feed - 1 : feed
    this.comment = { from, to }
    return feed + 1
  }

  private lineBreak(at: number): number {
    if (this.at(at) === LINE_FEED) return at + 1
    return this.at(at) === CARRIAGE_RETURN && this.at(at + 1) === LINE_FEED ? at + 2 : -1
  }

  /** A line of blanks or a comment alone; gives the start of the next one. */
  emptyLine(start: number): number {
    this.comment = undefined
    const at = this.spaces(start)
    return this.at(at) === HASH ? this.commentEnd(at) : this.lineBreak(at)
  }
}
