/**
 * The syntax of CIF 1.1 (S. R. Hall, F. H. Allen and I. D. Brown, Acta Cryst. A47, 655, 1991; International Tables for
 * Crystallography, vol. G, ch. 2.2) and of CIF 2.0 (H. J. Bernstein et al., J. Appl. Cryst. 49, 277, 2016): text to data
 * blocks, every value with its place. Strict: what is wrong is a fault with a place, and reading goes on behind it.
 */

/** Where something stands; both count from 1, columns in characters. */
export interface Place {
  readonly line: number
  readonly column: number
}

export interface CifFault extends Place {
  readonly message: string
}

export type CifKind =
  /** Without delimiters. */
  | 'bare'
  /** In quotes or in a text field: never a number, a `?` or a `.`. */
  | 'quoted'
  /** `?`: not known. */
  | 'unknown'
  /** `.`: does not apply, or the default. */
  | 'inapplicable'
  /** A list or a table of CIF 2.0; `text` is what stands between its brackets. */
  | 'compound'

export interface CifValue extends Place {
  readonly kind: CifKind
  readonly text: string
}

export interface CifItem extends Place {
  /** As it is written. */
  readonly name: string
  /** One outside a loop. */
  readonly values: readonly CifValue[]
  /** Items of one loop share it; undefined outside a loop. */
  readonly loop?: CifLoop
}

export interface CifLoop extends Place {
  readonly items: readonly CifItem[]
  readonly rows: number
}

export interface CifBlock extends Place {
  /** What follows `data_`. */
  readonly name: string
  /** By `canonicalName`. */
  readonly items: ReadonlyMap<string, CifItem>
  readonly faults: readonly CifFault[]
}

export interface CifFile {
  readonly blocks: readonly CifBlock[]
  /** Faults outside any block. */
  readonly faults: readonly CifFault[]
}

/** Case does not count in data names; dictionaries of the second kind part category and item by a point. */
export const canonicalName = (name: string): string => name.toLowerCase().replace('.', '_')

/** Files over this many characters hold more than a crystal structure. */
export const MOST_CHARACTERS = 64_000_000
/** A block with this many faults is no CIF: the rest would only repeat it. */
const MOST_FAULTS = 20
/** Brackets in brackets of CIF 2.0. */
const DEEPEST = 64

/** Never throws; the work grows as the length of the text. */
export function parseCif(text: string): CifFile {
  if (text.length > MOST_CHARACTERS) {
    const message = `the file has ${text.length} characters; ${MOST_CHARACTERS} are read at most`
    return { blocks: [], faults: [{ message, line: 1, column: 1 }] }
  }
  return new CifReader(text).read()
}

/** Offsets to lines and columns, asked in any order, mostly a rising one. */
class Lines {
  readonly #starts = [0]
  /** Columns are counted in characters: a pair of surrogates is one. */
  readonly #pairs: boolean
  #known = { start: 0, offset: 0, column: 1 }

  constructor(private readonly text: string) {
    for (const { 0: end, index } of text.matchAll(/\r\n|\r|\n/g)) this.#starts.push(index + end.length)
    this.#pairs = /[\ud800-\udbff]/.test(text)
  }

  place(offset: number): Place {
    let low = 0
    let high = this.#starts.length - 1
    while (low < high) {
      const middle = (low + high + 1) >> 1
      if (this.#starts[middle] <= offset) low = middle
      else high = middle - 1
    }
    const start = this.#starts[low]
    if (!this.#pairs) return { line: low + 1, column: offset - start + 1 }
    // A line may be as long as the file: it is counted once, not from its start for every value.
    const known = this.#known
    const from = known.start === start && known.offset <= offset ? known : { start, offset: start, column: 1 }
    let { column } = from
    for (let i = from.offset; i < offset; i++) if ((this.text.charCodeAt(i) & 0xfc00) !== 0xdc00) column++
    this.#known = { start, offset, column }
    return { line: low + 1, column }
  }
}

interface Token {
  readonly type: 'word' | 'value' | 'end'
  readonly at: number
  readonly text: string
  readonly kind: CifKind
  /** They count where the token does: a token is scanned before the header in front of it is acted on. */
  readonly faults: readonly ScanFault[]
}
type ScanFault = readonly [at: number, message: string]
const NO_FAULTS: readonly ScanFault[] = []

class BlockBuilder {
  readonly items = new Map<string, CifItem>()
  readonly faults: CifFault[] = []
  constructor(
    readonly name: string,
    readonly place: Place,
  ) {}
}

class CifReader {
  readonly #lines: Lines
  readonly #text: string
  readonly #isVersion2: boolean
  readonly #blocks: BlockBuilder[] = []
  readonly #loose: CifFault[] = []
  #at = 0
  #scanned: ScanFault[] = []
  /** Save frames belong to dictionaries: their content is read and left. */
  #frame: BlockBuilder | undefined
  #token: Token

  constructor(text: string) {
    this.#text = text
    this.#lines = new Lines(text)
    if (text.startsWith('\ufeff')) this.#at = 1
    this.#isVersion2 = text.startsWith('#\\#CIF_2.0', this.#at)
    this.#token = this.#scan()
  }

  read(): CifFile {
    while (this.#token.type !== 'end' && !this.#hopeless) this.#entry()
    return {
      blocks: this.#blocks.map(({ name, place, items, faults }) => ({ name, items, faults, ...place })),
      faults: this.#loose,
    }
  }

  get #hopeless(): boolean {
    return this.#loose.length >= MOST_FAULTS || (this.#blocks.at(-1)?.faults.length ?? 0) >= MOST_FAULTS
  }

  get #block(): BlockBuilder | undefined {
    return this.#frame ?? this.#blocks.at(-1)
  }

  #fault(at: number, message: string): void {
    const { line, column } = this.#lines.place(at)
    ;(this.#blocks.at(-1)?.faults ?? this.#loose).push({ message, line, column })
  }

  #next(): Token {
    const token = this.#token
    for (const [at, message] of token.faults) this.#fault(at, message)
    this.#token = this.#scan()
    return token
  }

  #scan(): Token {
    // A file may hold millions of them: no array for each, and no copying of objects.
    const { type, at, text, kind } = this.#scanToken()
    if (this.#scanned.length === 0) return { type, at, text, kind, faults: NO_FAULTS }
    const faults = this.#scanned
    this.#scanned = []
    return { type, at, text, kind, faults }
  }

  #complain(at: number, message: string): void {
    this.#scanned.push([at, message])
  }

  /** A header, an item, a loop, or something that has no place here. */
  #entry(): void {
    const token = this.#next()
    const { at, text, type } = token
    if (type === 'value') {
      // One fault for a run of them.
      while (this.#token.type === 'value') this.#next()
      this.#fault(at, `the value ${shown(text)} belongs to no data name`)
      return
    }
    const word = text.toLowerCase()
    if (word.startsWith('data_')) {
      this.#frame = undefined
      this.#blocks.push(new BlockBuilder(text.slice(5), this.#lines.place(at)))
      if (text.length === 5) this.#fault(at, 'a data block without a name')
    } else if (word.startsWith('save_')) {
      if (text.length > 5) this.#frame = new BlockBuilder(text.slice(5), this.#lines.place(at))
      else this.#frame = undefined
    } else if (word === 'loop_') this.#loop(at)
    else if (text.startsWith('_')) this.#single(token)
    else this.#fault(at, `${shown(text)} is a reserved word that means nothing in a CIF`)
  }

  #single({ at, text }: Token): void {
    const place = this.#lines.place(at)
    if (this.#token.type !== 'value') {
      this.#fault(at, `${shown(text)} has no value`)
      return
    }
    this.#keep({ name: text, values: [this.#value()], ...place }, at)
  }

  #loop(at: number): void {
    const names: Token[] = []
    while (this.#token.type === 'word' && this.#token.text.startsWith('_')) names.push(this.#next())
    if (names.length === 0) {
      this.#fault(at, 'a loop without data names')
      return
    }
    const columns: CifValue[][] = names.map(() => [])
    let count = 0
    while (this.#token.type === 'value') columns[count++ % names.length].push(this.#value())
    if (count === 0) {
      this.#fault(at, 'a loop without values')
      return
    }
    const missing = (names.length - (count % names.length)) % names.length
    if (missing > 0)
      this.#fault(
        this.#token.at,
        `the loop of ${shown(names[0].text)} (line ${this.#lines.place(at).line}) has ${names.length} data names and ${count} values: the last row lacks ${missing}`,
      )
    const rows = Math.floor(count / names.length)
    const items: CifItem[] = []
    const loop: CifLoop = { items, rows, ...this.#lines.place(at) }
    names.forEach((name, i) => {
      const item = {
        name: name.text,
        values: columns[i].slice(0, rows),
        loop,
        ...this.#lines.place(name.at),
      }
      items.push(item)
      this.#keep(item, name.at)
    })
  }

  #keep(item: CifItem, at: number): void {
    const block = this.#block
    if (!block) {
      this.#fault(at, `${shown(item.name)} stands before the first data block`)
      return
    }
    const name = canonicalName(item.name)
    const before = block.items.get(name)
    if (!before) block.items.set(name, item)
    else this.#fault(at, `${shown(item.name)} is there already, on line ${before.line}`)
  }

  #value(): CifValue {
    const { at, text, kind } = this.#next()
    const { line, column } = this.#lines.place(at)
    return { kind, text, line, column }
  }

  #scanToken(): Omit<Token, 'faults'> {
    const text = this.#text
    for (;;) {
      const c = text[this.#at]
      if (c === undefined) return { type: 'end', at: this.#at, text: '', kind: 'bare' }
      if (isBlank(c)) this.#at++
      else if (c === '#') this.#at = this.#lineEnd(this.#at)
      else break
    }
    const at = this.#at
    const c = text[at]
    if (c === ';' && this.#startsLine(at)) return this.#textField(at)
    if (c === "'" || c === '"') return this.#quoted(at, c)
    if (this.#isVersion2 && (c === '[' || c === '{')) return this.#compound(at)
    let end = at
    while (end < text.length && !isBlank(text[end]) && !(this.#isVersion2 && BRACKETS.includes(text[end])))
      end++
    // A closing bracket alone, in CIF 2.0.
    if (end === at) end++
    this.#at = end
    const word = text.slice(at, end)
    if (/^(?:_|data_|save_)|^(?:loop_|stop_|global_)$/i.test(word))
      return { type: 'word', at, text: word, kind: 'bare' }
    const kind = word === '?' ? 'unknown' : word === '.' ? 'inapplicable' : 'bare'
    return { type: 'value', at, text: word, kind }
  }

  #startsLine(at: number): boolean {
    return at === 0 || isLineEnd(this.#text[at - 1]) || (at === 1 && this.#text[0] === '\ufeff')
  }

  #lineEnd(at: number): number {
    LINE_END.lastIndex = at
    return LINE_END.exec(this.#text)?.index ?? this.#text.length
  }

  /** From `;` at the start of a line to the next such. */
  #textField(at: number): Omit<Token, 'faults'> {
    FIELD_END.lastIndex = at + 1
    const close = FIELD_END.exec(this.#text)
    if (!close) {
      this.#complain(at, 'the text field that begins here is never closed by a line that begins with ;')
      this.#at = this.#text.length
      return { type: 'value', at, text: this.#text.slice(at + 1), kind: 'quoted' }
    }
    this.#at = close.index + close[0].length
    const after = this.#text[this.#at]
    if (after !== undefined && !isBlank(after))
      this.#complain(this.#at - 1, 'the ; that closes a text field must be followed by a blank')
    return { type: 'value', at, text: unfolded(this.#text.slice(at + 1, close.index)), kind: 'quoted' }
  }

  /** In CIF 1.1 a quote ends the string where a blank follows; in 2.0 always, and three of them delimit too. */
  #quoted(at: number, quote: string): Omit<Token, 'faults'> {
    const text = this.#text
    if (this.#isVersion2 && text.startsWith(quote.repeat(3), at)) {
      const close = text.indexOf(quote.repeat(3), at + 3)
      if (close < 0) this.#complain(at, `the string that begins here is never closed by ${quote.repeat(3)}`)
      const end = close < 0 ? text.length : close
      this.#at = Math.min(text.length, end + 3)
      return { type: 'value', at, text: text.slice(at + 3, end), kind: 'quoted' }
    }
    const lineEnd = this.#lineEnd(at)
    let close = text.indexOf(quote, at + 1)
    while (!this.#isVersion2 && close >= 0 && close < lineEnd - 1 && !isBlank(text[close + 1]))
      close = text.indexOf(quote, close + 1)
    if (close < 0 || close >= lineEnd) {
      this.#complain(at, `the string that begins here is not closed by ${quote} on its line`)
      this.#at = lineEnd
      return { type: 'value', at, text: text.slice(at + 1, lineEnd), kind: 'quoted' }
    }
    this.#at = close + 1
    return { type: 'value', at, text: text.slice(at + 1, close), kind: 'quoted' }
  }

  /** A list or table of CIF 2.0 as a whole; strings inside may hold brackets. */
  #compound(at: number): Omit<Token, 'faults'> {
    const text = this.#text
    const open: string[] = []
    do {
      const c = text[this.#at]
      if (c === undefined || open.length > DEEPEST) {
        this.#complain(
          at,
          c
            ? `brackets in brackets, over ${DEEPEST} deep`
            : `the ${text[at]} that stands here is never closed`,
        )
        this.#at = text.length
        break
      }
      if (c === '[' || c === '{') open.push(c === '[' ? ']' : '}')
      else if (c === open.at(-1)) open.pop()
      else if (c === '#' && isBlank(text[this.#at - 1])) this.#at = this.#lineEnd(this.#at) - 1
      else if (c === "'" || c === '"') {
        this.#quoted(this.#at, c)
        continue
      } else if (c === ';' && this.#startsLine(this.#at)) {
        this.#textField(this.#at)
        continue
      }
      this.#at++
    } while (open.length > 0)
    return { type: 'value', at, text: text.slice(at + 1, this.#at - 1), kind: 'compound' }
  }
}

const BRACKETS = ['[', ']', '{', '}']
const LINE_END = /\r|\n/g
const FIELD_END = /(?:\r\n|\r|\n);/g

const isLineEnd = (c: string): boolean => c === '\n' || c === '\r'
const isBlank = (c: string): boolean => c === ' ' || c === '\t' || isLineEnd(c)

/**
 * The text of a field without the folding of its lines and without the prefix of them, where its first line says that
 * it has such (International Tables, vol. G, ch. 2.2.7.4; the prefix is CIF 2.0's).
 */
function unfolded(content: string): string {
  const lines = content.split(/\r\n|\r|\n/)
  const head = /^([^\\]*)(\\\\?)[ \t]*$/.exec(lines[0])
  if (!head || lines.length === 1) return content
  const [, prefix, marks] = head
  if (prefix !== '' && !lines.slice(1).every(line => line.startsWith(prefix))) return content
  if (prefix === '' && marks.length === 2) return content
  const bare = lines.slice(1).map(line => line.slice(prefix.length))
  const folds = prefix === '' || marks.length === 2
  if (!folds) return bare.join('\n')
  let result = ''
  bare.forEach((line, i) => {
    const folded = /^(.*)\\[ \t]*$/.exec(line)
    result += folded ? folded[1] : i < bare.length - 1 ? `${line}\n` : line
  })
  return result
}

const MOST_SHOWN = 40
/** A word of the file, fit for a message. */
export function shown(text: string): string {
  const plain = text.replace(/\s+/g, ' ')
  return plain.length > MOST_SHOWN ? `${plain.slice(0, MOST_SHOWN)}…` : plain
}

export interface CifNumber extends Place {
  readonly value: number
  /** Standard uncertainty, in the same unit, where `5.6402(3)` states one. */
  readonly uncertainty?: number
  /** Digits after the point, or −n where an exponent leaves n digits before it unknown. */
  readonly decimals: number
  /** Without the uncertainty. */
  readonly digits: string
  readonly text: string
}

const NUMBER = /^([+-]?(?:\d+\.?(\d*)|\.(\d+)))(?:[eE]([+-]?\d{1,3}))?(?:\((\d{1,9})\))?$/

/** The number that a value states, quoted or not; undefined where it is none. */
export function numberOf({ text, line, column }: CifValue): CifNumber | undefined {
  const found = NUMBER.exec(text.trim())
  if (!found) return undefined
  const [, mantissa, after = '', alone = '', exponent = '0', spread] = found
  const decimals = (after || alone).length - Number(exponent)
  const digits = exponent === '0' ? mantissa : `${mantissa}e${exponent}`
  const value = Number(digits)
  if (!Number.isFinite(value)) return undefined
  return {
    value,
    decimals,
    digits,
    text: text.trim(),
    line,
    column,
    ...(spread === undefined ? {} : { uncertainty: Number(spread) * 10 ** -decimals }),
  }
}
