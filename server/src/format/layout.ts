/**
 * The usual layout of a text: indentation, blanks after `:` and `,`, columns of numbers, blanks at the ends of lines.
 * Only blanks between tokens change (and, if asked for, `-` in paths), so that comments, blank lines, quotes, the order
 * and the spelling of every number stay, and the text says what it said.
 */
import type { CST } from 'yaml'
import type { LatticeDocument, Span, TextEdit } from './model.ts'
import { dashOf, itemStart, tokenEnd } from './nodes.ts'
import type { AtomRow, Run } from './rows.ts'
import { lineBreak, lineEnd, lineStart, nextLine } from './text.ts'
import type { SyntaxTree } from './tree.ts'

export interface LayoutOptions {
  /** Blanks by which a block stands further in than its key. */
  readonly indent: number
  /** Set the numbers of lattice vectors, atoms, points and supercells below each other. */
  readonly columns: boolean
  /** Write `–` for `-` in paths. */
  readonly enDash: boolean
}

/**
 * Edits that give a text without faults of syntax its usual layout.
 * @param documents what the text says: where its paths are.
 * @param lines restrict the edits to these lines, first and last counted from 0. Indentation then changes only where all of
 *   a top-level entry's does.
 * @returns none for a text with explicit keys (`? key`) or other forms that nobody writes in a lattice file.
 */
export function layoutEdits(
  tree: SyntaxTree,
  documents: readonly LatticeDocument[],
  options: LayoutOptions,
  lines?: Span,
): TextEdit[] {
  try {
    return new Layout(tree, options).edits(documents, lines)
  } catch (error) {
    if (error === UNUSUAL) return []
    throw error
  }
}

/** Thrown and caught in this file: the text holds something whose layout is left alone. */
const UNUSUAL = Symbol('unusual')

/** A comment is held against so many lines above it. */
const FARTHEST = 1_000

/** A longer number or label stands out of its column; the others keep theirs. */
const LONGEST_ALIGNED = 14

type Block = CST.BlockMap | CST.BlockSequence

/** The column of a block's items, before and after. */
interface Columns {
  readonly old: number
  readonly new: number
}

interface Gap {
  readonly start: number
  readonly end: number
  readonly text: string
  /** What belongs to what, or the place of other lines, depends on it. */
  readonly structural: boolean
}

/** A line whose indentation moves with something else. */
interface Follower {
  /** Offset of its first character that is no blank. */
  readonly first: number
  readonly base: Columns
  /** The bracket that it stands in. */
  readonly open?: number
  /** Where there is no bracket: columns to move by. */
  readonly shift: number
}

interface Row {
  readonly numbers: readonly Span[]
}

interface Leaf {
  readonly kind: string
  readonly start: number
  readonly end: number
}

class Layout {
  private readonly text: string
  /** Blanks within a line, by their end. */
  private readonly gaps = new Map<number, Gap>()
  /** New columns of lines, by the offset of the first character that is no blank. */
  private readonly indents = new Map<number, number>()
  private readonly followers: Follower[] = []
  /** Texts whose blanks at ends of lines belong to them. */
  private readonly verbatim: Span[] = []
  /** By the offset where the content ends: the most that a comment after it may be indented. */
  private readonly ceilings = new Map<number, number>()
  private changed: Gap[] = []
  /** Where the last text in a block ends, with the blank lines that may belong to it. */
  private lastBlock = 0

  constructor(
    private readonly tree: SyntaxTree,
    private readonly options: LayoutOptions,
  ) {
    this.text = tree.text
  }

  edits(documents: readonly LatticeDocument[], lines: Span | undefined): TextEdit[] {
    const roots: Span[] = []
    for (const { value } of this.tree.documents) {
      if (value?.type === 'block-map') {
        const first = this.back(itemStart(value.items[0]))
        if (!this.beginsLine(first)) throw UNUSUAL
        this.block(value, { old: this.columnOf(first), new: 0 }, [])
        const items = value.items.map(item => this.withBlankLines(this.tree.spanOfItem(item)))
        // Keys that are further in than they should be move together: they must stand in one column.
        if (this.columnOf(first) === 0) roots.push(...items)
        else roots.push([items[0][0], items[items.length - 1][1]])
      } else if (value?.type === 'flow-collection') this.flow(value, { old: 0, new: 0 }, [])
      else if (value) throw UNUSUAL
    }
    this.moveFollowers()
    this.moveComments()
    this.alignComments()
    const gaps = [...this.gaps.values(), ...this.indentations(), ...this.ends()].filter(
      ({ start, end, text }) => this.text.slice(start, end) !== text,
    )
    const kept = lines ? this.within(lines, gaps, roots) : gaps
    const edits = [...kept.map(gap => this.smallest(gap)), ...this.dashes(documents, lines)]
    return edits.sort((a, b) => a.at[0] - b.at[0])
  }

  /** Blank lines after a text in a block may be lines of it. */
  private withBlankLines([start, end]: Span): Span {
    let after = end
    while (' \r\n'.includes(this.text[after] || 'x')) after++
    // What begins on the line that was reached is not of it.
    return [start, after < this.text.length ? Math.max(end, lineStart(this.text, after) - 1) : after]
  }

  // Places.

  private back(offset: number): number {
    return this.tree.cuts.back(offset)
  }

  private endOf(token: CST.Token): number {
    return this.tree.spanOf(token)[1]
  }

  private columnOf(offset: number): number {
    return offset - lineStart(this.text, offset)
  }

  /** Only blanks stand before it on its line. */
  private beginsLine(offset: number): boolean {
    return this.gapStart(offset) <= lineStart(this.text, offset)
  }

  private gapStart(end: number): number {
    let start = end
    while (start > 0 && (this.text[start - 1] === ' ' || this.text[start - 1] === '\t')) start--
    return start
  }

  private onOneLine(start: number, end: number): boolean {
    return !this.text.slice(start, end).includes('\n')
  }

  private skipBlanks(offset: number): number {
    while (this.text[offset] === ' ' || this.text[offset] === '\t') offset++
    return offset
  }

  /** Where a token of the old text stands on its line in the new one. */
  private newColumn(offset: number): number {
    const start = lineStart(this.text, offset)
    const first = this.skipBlanks(start)
    let column = (this.indents.get(first) ?? first - start) + offset - first
    const { changed } = this
    let low = 0
    let high = changed.length
    while (low < high) {
      const middle = (low + high) >> 1
      if (changed[middle].end <= first) low = middle + 1
      else high = middle
    }
    for (let i = low; i < changed.length && changed[i].end <= offset; i++)
      column += changed[i].text.length - (changed[i].end - changed[i].start)
    return column
  }

  // What is wanted.

  /** The blanks before an offset, unless it begins its line. */
  private setGap(end: number, text: string, structural = false): void {
    const start = this.gapStart(end)
    if (start === 0 || STARTS_LINE.has(this.text[start - 1])) return
    if (end - start === text.length && this.text.startsWith(text, start)) this.gaps.delete(end)
    else this.gaps.set(end, { start, end, text, structural })
  }

  private setIndent(first: number, column: number): void {
    if (this.text.slice(lineStart(this.text, first), first).includes('\t')) throw UNUSUAL
    this.indents.set(first, column)
  }

  // Blocks.

  private block(token: Block, columns: Columns, path: readonly string[]): void {
    if (token.type === 'block-map') this.mapping(token, columns, path)
    else this.list(token, columns, path)
  }

  private mapping({ items }: CST.BlockMap, columns: Columns, path: readonly string[]): void {
    const keys: { readonly value: number; readonly length: number }[] = []
    const rows: (Row | undefined)[] = []
    for (const item of items) {
      const { start, key, sep, value } = item
      if (start.some(({ type }) => UNUSUAL_BEFORE_KEY.has(type))) throw UNUSUAL
      if (!key && !sep) continue
      const colon = sep?.find(({ type }) => type === 'map-value-ind')
      if (!colon || !isPlainKey(key)) throw UNUSUAL
      const from = this.back(key.offset)
      if (this.beginsLine(from)) this.setIndent(from, columns.new)
      if (!this.onOneLine(from, this.endOf(key))) throw UNUSUAL
      this.setGap(this.back(colon.offset), '')
      const name = key.type === 'scalar' ? key.source : key.source.slice(1, -1)
      const names = [...path, name]
      const first = this.properties(sep!.slice(sep!.indexOf(colon) + 1))
      this.value(value, columns, names)
      const head = first ?? (value && this.back(value.offset))
      if (path.length !== 1 || path[0] !== 'points' || head === undefined) continue
      if (!this.onOneLine(from, head) || value?.type === 'block-scalar') continue
      keys.push({ value: head, length: this.endOf(key) - from })
      if (first === undefined) rows.push(this.row(value))
    }
    this.alignValues(keys)
    this.alignRows(rows)
  }

  private list({ items }: CST.BlockSequence, columns: Columns, path: readonly string[]): void {
    const rows: (Row | undefined)[] = []
    const named: Row[] = []
    const keys: { readonly value: number; readonly length: number }[] = []
    const inner = { old: columns.old + 2, new: columns.new + 2 }
    for (const item of items) {
      const dash = dashOf(item)
      const { value } = item
      if (!dash && !value) continue
      if (!dash || item.key || item.sep) throw UNUSUAL
      const from = this.back(dash.offset)
      if (this.beginsLine(from)) this.setIndent(from, columns.new)
      const props = item.start.slice(item.start.indexOf(dash) + 1)
      const first = this.properties(props, true)
      if (value?.type === 'block-map' || value?.type === 'block-seq') {
        const start = this.back(itemStart(value.items[0]))
        const isCompact = this.onOneLine(from, start)
        if (isCompact && first !== undefined) throw UNUSUAL
        if (isCompact) this.setGap(start, ' ', true)
        this.block(value, { old: this.columnOf(start), new: inner.new }, [...path, '-'])
      } else this.value(value, columns, [...path, '-'], inner)
      if (isList(path, ROWS)) rows.push(first === undefined ? this.row(value) : undefined)
      else if (isList(path, ATOMS)) this.atom(value, { keys, rows, named })
      const run = this.tree.runs.get(item)
      if (run) this.rowsOf(run, columns, isList(path, ATOMS) ? { keys, rows, named } : undefined)
    }
    this.alignValues(keys)
    this.alignRows(rows)
    this.alignRows(named)
  }

  /** Blanks after anchors and tags. Gives the first of them. */
  private properties(tokens: readonly CST.SourceToken[], afterDash = false): number | undefined {
    let first: number | undefined
    for (const { type, offset } of tokens) {
      if (type !== 'anchor' && type !== 'tag') continue
      this.setGap(this.back(offset), ' ', afterDash)
      first ??= this.back(offset)
    }
    return first
  }

  /** What stands after a colon or a dash. `inner` is where lines of its own begin. */
  private value(
    token: CST.Token | null | undefined,
    columns: Columns,
    path: readonly string[],
    inner: Columns = { old: columns.old, new: columns.new + this.options.indent },
  ): void {
    if (!token) return
    const start = this.back(token.offset)
    switch (token.type) {
      case 'block-map':
      case 'block-seq': {
        const first = this.back(itemStart(token.items[0]))
        if (!this.beginsLine(first)) throw UNUSUAL
        this.block(token, { old: this.columnOf(first), new: inner.new }, path)
        return
      }
      case 'block-scalar':
        this.setGap(start, ' ')
        this.blockScalar(token, columns, inner)
        return
      case 'alias':
      case 'scalar':
      case 'single-quoted-scalar':
      case 'double-quoted-scalar':
      case 'flow-collection':
        break
      default:
        throw UNUSUAL
    }
    // A plain scalar may be empty.
    if (tokenEnd(token) <= token.offset) return
    let shift = columns.new - columns.old
    if (this.beginsLine(start)) {
      shift = inner.new - this.columnOf(start)
      this.setIndent(start, inner.new)
    } else this.setGap(start, ' ')
    if (token.type === 'flow-collection') this.flow(token, columns, path)
    else if (token.type !== 'alias') this.longScalar(token, columns, shift)
  }

  /** Further lines of a text in one of the flow styles. */
  private longScalar(token: CST.FlowScalar, base: Columns, shift: number, open?: number): void {
    const [start, end] = this.tree.spanOf(token)
    if (this.onOneLine(start, end)) return
    if (token.type !== 'scalar') this.verbatim.push([start, end])
    for (let line = nextLine(this.text, start); line < end; line = nextLine(this.text, line)) {
      const first = this.skipBlanks(line)
      if (first < end && !/[\r\n]/.test(this.text[first])) this.followers.push({ first, base, shift, open })
    }
  }

  private blockScalar(token: CST.BlockScalar, columns: Columns, inner: Columns): void {
    const header = token.props.find(({ type }) => type === 'block-scalar-header') as
      | CST.SourceToken
      | undefined
    const from = this.back(token.offset)
    const start = nextLine(this.text, from)
    // With the blank lines after it, which belong to it where `+` keeps them.
    const length = token.props.reduce((sum, prop) => sum + ('source' in prop ? prop.source.length : 0), 0)
    const end = this.back(token.offset + length + token.source.length - 1) + 1
    if (token.source === '' || start >= end) return
    this.verbatim.push([start, end])
    this.lastBlock = end
    const indented = /^[ ]*(?=[^ \r\n])/m.exec(this.text.slice(start, end))
    if (!indented) return
    // Where the header states the indentation, it is told from the block round it.
    const isStated = /\d/.test(header?.source ?? '')
    if (isStated && columns.old !== columns.new) throw UNUSUAL
    const old = indented[0].length
    const now = isStated ? old : inner.new
    for (let line = start; line < this.text.length; line = nextLine(this.text, line)) {
      let first = line
      while (this.text[first] === ' ') first++
      // Blank lines after the text must not come to stand further in than it: they would be lines of it.
      if (line >= end && !/[\r\n]/.test(this.text[first] ?? '\n')) break
      const column = first - line
      const moved = column < old ? Math.min(column, now) : column + now - old
      this.gaps.set(first, { start: line, end: first, text: ' '.repeat(moved), structural: true })
    }
    this.ceilings.set(start + contentEnd(this.text.slice(start, end)), now - 1)
  }

  // Brackets.

  private flow(token: CST.FlowCollection, base: Columns, path: readonly string[]): void {
    const leaves = [...this.leaves(token, base)]
    const opened: number[] = []
    let before: Leaf | undefined
    for (const leaf of leaves) {
      if (leaf.kind === 'explicit-key-ind') throw UNUSUAL
      if (before && before.kind !== 'newline' && leaf.kind !== 'newline' && leaf.kind !== 'comment') {
        const wanted = gapBetween(before.kind, leaf.kind)
        if (wanted !== undefined) this.setGap(leaf.start, wanted)
      }
      if (before?.kind === 'newline' && leaf.kind !== 'newline')
        this.followers.push({ first: leaf.start, base, open: opened.at(-1), shift: base.new - base.old })
      if (leaf.kind === 'open') opened.push(leaf.start)
      else if (leaf.kind === 'close') opened.pop()
      before = leaf
    }
    this.flowRows(token, path)
  }

  private *leaves(token: CST.Token | null | undefined, base: Columns, open?: number): Generator<Leaf> {
    if (!token) return
    if (token.type !== 'flow-collection') {
      const [start, end] = this.tree.spanOf(token)
      if (end <= start) return
      if (
        token.type === 'scalar' ||
        token.type === 'double-quoted-scalar' ||
        token.type === 'single-quoted-scalar'
      )
        this.longScalar(token, base, base.new - base.old, open)
      yield { kind: token.type, start, end }
      if ('end' in token) yield* this.signs(token.end ?? [])
      return
    }
    const start = this.back(token.offset)
    yield { kind: 'open', start, end: start + 1 }
    for (const item of token.items) {
      yield* this.signs(item.start)
      yield* this.leaves(item.key, base, start)
      yield* this.signs(item.sep ?? [])
      yield* this.leaves(item.value, base, start)
    }
    for (const leaf of this.signs(token.end)) {
      yield leaf
      // What follows the outermost bracket stands outside.
      if (leaf.kind === 'close' && open === undefined) return
    }
  }

  private *signs(tokens: readonly CST.SourceToken[]): Generator<Leaf> {
    for (const { type, offset, source } of tokens) {
      if (type === 'space') continue
      const start = this.back(offset)
      const isEnd = type === 'flow-map-end' || type === 'flow-seq-end'
      yield { kind: isEnd ? 'close' : type, start, end: start + source.length }
    }
  }

  /** Rows of a matrix in brackets, where each has a line of its own. */
  private flowRows(token: CST.FlowCollection, path: readonly string[]): void {
    if (token.start.source === '{') {
      for (const { key, value } of token.items) {
        const name = key?.type === 'scalar' ? key.source : ''
        if (value?.type === 'flow-collection') this.flowRows(value, [...path, name])
      }
      return
    }
    if (!isList(path, ROWS) || token.items.length > MOST_ROWS) return
    const values = token.items.flatMap(({ value }) => (value ? [value] : []))
    const lines = new Set(values.map(value => lineStart(this.text, this.back(value.offset))))
    if (lines.size === values.length) this.alignRows(values.map(value => this.row(value)))
  }

  // Columns.

  /** Numbers in brackets on one line. */
  private row(token: CST.Token | null | undefined): Row | undefined {
    if (token?.type !== 'flow-collection' || token.start.source !== '[') return undefined
    const [open, end] = this.tree.spanOf(token)
    if (!this.onOneLine(open, end)) return undefined
    const numbers: Span[] = []
    for (const { start, key, sep, value } of token.items) {
      if (!value && !key && !sep) continue
      const isPlain = value?.type === 'scalar' && !key && !sep && start.every(({ type }) => BETWEEN.has(type))
      if (!isPlain) return undefined
      numbers.push(this.tree.spanOf(value))
    }
    return { numbers }
  }

  /** `- Pb: [0, 0, 0]` and `- Fe: {at: [0, 0, 0], name: up}` in a block. */
  private atom(token: CST.Token | null | undefined, into: AtomColumns): void {
    if (token?.type !== 'block-map') return
    // An item may hold nothing but the comments after the atom.
    const items = token.items.filter(({ key, value }) => key || value)
    if (items.length !== 1) return
    const [{ key, sep, value }] = items
    if (!key || !value || value.type !== 'flow-collection') return
    const [from, to] = this.tree.spanOf(key)
    const [start, end] = this.tree.spanOf(value)
    if (sep?.some(({ type }) => type === 'anchor' || type === 'tag') || !this.onOneLine(from, end)) return
    into.keys.push({ value: start, length: to - from })
    if (value.start.source === '[') into.rows.push(this.row(value))
    const at = value.start.source === '{' && value.items.find(item => isKey(item.key, 'at'))
    const row = at ? this.row(at.value) : undefined
    if (row) into.named.push(row)
  }

  /** Rows that were cut out of the tree. */
  private rowsOf({ rows, comments }: Run, columns: Columns, into: AtomColumns | undefined): void {
    // Lines that stay where they are matter to the comments between them only.
    const move = columns.old !== columns.new || comments.length > 0
    for (const row of rows.slice(1, -1)) {
      if (move) this.setIndent(row.dash, columns.new)
      this.atomRow(row, into)
    }
  }

  private atomRow(row: AtomRow, into: AtomColumns | undefined): void {
    const { element, value, vector, numbers, name } = row
    this.setGap(element[0], ' ')
    this.setGap(value[0], ' ')
    this.setGap(numbers[0][0], '')
    for (const i of [0, 1]) {
      this.setGap(this.skipBlanks(numbers[i][1]), '')
      this.setGap(numbers[i + 1][0], ' ')
    }
    this.setGap(vector[1] - 1, '')
    into?.keys.push({ value: value[0], length: element[1] - element[0] })
    if (value === vector) {
      into?.rows.push({ numbers })
      return
    }
    into?.named.push({ numbers })
    this.setGap(this.skipBlanks(value[0] + 1), '')
    this.setGap(vector[0], ' ')
    if (name) {
      const comma = this.skipBlanks(vector[1])
      this.setGap(comma, '')
      this.setGap(this.skipBlanks(comma + 1), ' ')
      this.setGap(name[0], ' ')
    }
    this.setGap(value[1] - 1, '')
  }

  /** Values after keys begin in one column. */
  private alignValues(keys: readonly { readonly value: number; readonly length: number }[]): void {
    if (!this.options.columns) return
    const aligned = keys.filter(({ length }) => length <= LONGEST_ALIGNED)
    const longest = aligned.reduce((most, { length }) => Math.max(most, length), 0)
    for (const { value, length } of aligned) this.setGap(value, ' '.repeat(1 + longest - length))
  }

  /** Decimals stand point below point; where a column holds fractions or expressions, right edge below right edge. */
  private alignRows(all: readonly (Row | undefined)[]): void {
    if (!this.options.columns) return
    const rows = all.flatMap(row => {
      if (!row || row.numbers.some(([start, end]) => end - start > LONGEST_ALIGNED)) return []
      return [{ ...row, texts: row.numbers.map(span => this.text.slice(...span)) }]
    })
    if (rows.length < 2) return
    const widths: { byPoint: boolean; head: number; tail: number }[] = []
    for (const { texts } of rows)
      for (const [i, text] of texts.entries())
        (widths[i] ??= { byPoint: true, head: 0, tail: 0 }).byPoint &&= DECIMAL.test(text)
    const headOf = (text: string, i: number) => {
      const point = widths[i].byPoint ? text.indexOf('.') : -1
      return point < 0 ? text.length : point
    }
    for (const { texts } of rows) {
      for (const [i, text] of texts.entries()) {
        const head = headOf(text, i)
        widths[i].head = Math.max(widths[i].head, head)
        widths[i].tail = Math.max(widths[i].tail, text.length - head)
      }
    }
    for (const { numbers, texts } of rows) {
      let left = 0
      for (const [i, text] of texts.entries()) {
        const head = headOf(text, i)
        this.setGap(numbers[i][0], ' '.repeat((i > 0 ? 1 : 0) + left + widths[i].head - head))
        left = widths[i].tail - (text.length - head)
      }
    }
  }

  // Lines that go with others.

  /** In the order of the text, without those at starts of lines. */
  private changedWithin(): Gap[] {
    const gaps = [...this.gaps.values()].filter(
      ({ start }) => start > 0 && !STARTS_LINE.has(this.text[start - 1]),
    )
    return gaps.sort((a, b) => a.end - b.end)
  }

  private moveFollowers(): void {
    if (this.followers.length === 0) return
    this.changed = this.changedWithin()
    /** How far each bracket moves; many lines may stand in one. */
    const moves = new Map<number, { readonly column: number; readonly by: number }>()
    const moveOf = (open: number) => {
      const known = moves.get(open)
      if (known) return known
      const column = this.columnOf(open)
      const move = { column, by: this.newColumn(open) - column }
      moves.set(open, move)
      return move
    }
    this.followers.sort((a, b) => a.first - b.first)
    for (const { first, base, open, shift } of this.followers) {
      const start = lineStart(this.text, first)
      if (this.text.slice(start, first).includes('\t')) {
        if (shift !== 0) throw UNUSUAL
        continue
      }
      const old = first - start
      let moved = old + shift
      if (open !== undefined) {
        const { column, by } = moveOf(open)
        if (old >= column) moved = old + by
      }
      this.indents.set(first, old > base.old ? Math.max(moved, base.new + 1) : Math.max(0, moved))
    }
  }

  /** Comments with a line of their own stand as the line below them does, or as the one above. */
  private moveComments(): void {
    const { text, indents } = this
    const isAsItWas = ([first, column]: readonly [number, number]) => this.columnOf(first) === column
    if (this.ceilings.size === 0 && [...indents].every(isAsItWas)) return
    const lines = [...indents.keys()].sort((a, b) => a - b)
    const ends = [...this.ceilings].sort((a, b) => a[0] - b[0])
    let next = 0
    let ended = 0
    for (const [first] of this.tree.comments) {
      const start = lineStart(text, first)
      if (this.gapStart(first) > start || indents.has(first)) continue
      while (next < lines.length && lines[next] < first) next++
      while (ended < ends.length && ends[ended][0] <= first) ended++
      const old = first - start
      const columnsOf = (line: number | undefined): Columns | undefined =>
        line === undefined ? undefined : { old: this.columnOf(line), new: indents.get(line)! }
      const below = columnsOf(lines[next])
      let above = next - 1
      const farthest = Math.max(0, above - FARTHEST)
      while (above > farthest && this.columnOf(lines[above]) > old) above--
      const both = [below, columnsOf(lines[above])].filter(column => column !== undefined)
      const beside = both.find(column => column.old === old) ?? both[0]
      if (!beside || text.slice(start, first).includes('\t')) continue
      let moved = old === 0 && beside.old > 0 ? 0 : Math.max(0, old + beside.new - beside.old)
      // Straight below a text in a block a comment further in would be part of it.
      const last = ends[ended - 1]
      if (last && !((lines[next - 1] ?? 0) >= last[0])) moved = Math.min(moved, last[1])
      this.gaps.set(first, { start, end: first, text: ' '.repeat(moved), structural: true })
    }
  }

  /** Comments at the ends of neighbouring lines that stand below each other go on doing so. */
  private alignComments(): void {
    if (this.tree.comments.length === 0) return
    this.changed = this.changedWithin()
    let group: number[] = []
    const close = () => {
      if (group.length > 1) {
        const ends = group.map(first => this.newColumn(this.gapStart(first)))
        const gap = Math.min(...group.map(first => first - this.gapStart(first)))
        const column = Math.max(...ends) + gap
        for (const [i, first] of group.entries()) this.setGap(first, ' '.repeat(column - ends[i]))
      }
      group = []
    }
    for (const [first] of this.tree.comments) {
      const start = lineStart(this.text, first)
      const content = this.gapStart(first)
      const before = group.at(-1)
      const goesOn =
        before !== undefined &&
        nextLine(this.text, before) === start &&
        this.columnOf(before) === this.columnOf(first)
      if (!goesOn) close()
      if (content > start && !this.text.slice(start, first).includes('\t')) group.push(first)
      else close()
    }
    close()
  }

  private *indentations(): Generator<Gap> {
    for (const [first, column] of this.indents) {
      const start = lineStart(this.text, first)
      if (first - start !== column) yield { start, end: first, text: ' '.repeat(column), structural: true }
    }
  }

  /** Blanks at the ends of lines, and one line break at the end of the text. */
  private *ends(): Generator<Gap> {
    const { text } = this
    this.verbatim.sort((a, b) => a[0] - b[0])
    const end = contentEnd(text)
    let next = 0
    for (let line = 0; line < end; line = nextLine(text, line)) {
      const stop = lineEnd(text, line)
      const last = text[stop - 1]
      if (stop === line || (last !== ' ' && last !== '\t')) continue
      while (next < this.verbatim.length && this.verbatim[next][1] <= stop) next++
      const [from, to] = this.verbatim[next] ?? [text.length, text.length]
      if (from <= stop && stop < to) continue
      const start = Math.max(line, this.gapStart(stop))
      if (start >= end) continue
      if (start > line || !this.gaps.has(stop)) yield { start, end: stop, text: '', structural: false }
    }
    if (end > 0 && this.lastBlock < end)
      yield { start: end, end: text.length, text: lineBreak(text), structural: false }
  }

  // What is given back.

  /** Edits on some lines; those that belong together all or none. */
  private within(lines: Span, gaps: readonly Gap[], roots: readonly Span[]): Gap[] {
    const first = startOfLine(this.text, lines[0])
    const last = lineEnd(this.text, startOfLine(this.text, lines[1]))
    const isIn = ({ start, end }: Gap) => start >= first && end <= last
    const structural = gaps.filter(gap => gap.structural)
    const whole = roots.filter(([start, end]) =>
      structural.every(gap => gap.end < lineStart(this.text, start) || gap.start > end || isIn(gap)),
    )
    return gaps.filter(
      gap =>
        isIn(gap) &&
        (!gap.structural ||
          whole.some(([start, end]) => gap.end >= lineStart(this.text, start) && gap.start <= end)),
    )
  }

  private smallest({ start, end, text }: Gap): TextEdit {
    let before = 0
    const old = this.text.slice(start, end)
    const most = Math.min(old.length, text.length)
    while (before < most && old[before] === text[before]) before++
    let after = 0
    while (after < most - before && old[old.length - 1 - after] === text[text.length - 1 - after]) after++
    return { at: [start + before, end - after], text: text.slice(before, text.length - after) }
  }

  private dashes(documents: readonly LatticeDocument[], lines: Span | undefined): TextEdit[] {
    if (!this.options.enDash) return []
    const first = lines ? startOfLine(this.text, lines[0]) : 0
    const last = lines ? lineEnd(this.text, startOfLine(this.text, lines[1])) : this.text.length
    const separators = documents.flatMap(({ path }) => path?.pieces ?? []).flatMap(piece => piece.segments)
    const edits = new Map<number, TextEdit>()
    for (const { separator } of separators) {
      const [start, end] = separator
      for (const at of [start, end - 1]) {
        if (at >= first && at < last && this.text[at] === '-') edits.set(at, { at: [at, at + 1], text: '–' })
      }
    }
    return [...edits.values()]
  }
}

interface AtomColumns {
  readonly keys: { readonly value: number; readonly length: number }[]
  readonly rows: (Row | undefined)[]
  readonly named: Row[]
}

/** Without the blanks and line breaks at the end of a text; other spaces may be part of what it says. */
function contentEnd(text: string): number {
  let end = text.length
  while (end > 0 && BLANKS.includes(text[end - 1])) end--
  return end
}
const BLANKS = ' \t\r\n'

function startOfLine(text: string, line: number): number {
  let start = 0
  for (let i = 0; i < line && start < text.length; i++) start = nextLine(text, start)
  return start
}

/** A matrix in brackets has no more, with what may follow its last comma. */
const MOST_ROWS = 4
const ROWS = [['lattice', 'vectors'], ['supercell']]
const ATOMS = [['atoms']]
const isList = (path: readonly string[], wanted: readonly (readonly string[])[]): boolean =>
  wanted.some(names => names.length === path.length && names.every((name, i) => name === path[i]))

const isKey = (token: CST.Token | null | undefined, name: string): boolean =>
  token?.type === 'scalar' && token.source === name

const DECIMAL = /^[-+−]?\d*\.?\d*$/
const PLAIN_KEYS: ReadonlySet<string> = new Set(['scalar', 'single-quoted-scalar', 'double-quoted-scalar'])
const isPlainKey = (token: CST.Token | null | undefined): token is CST.FlowScalar =>
  token !== null && token !== undefined && PLAIN_KEYS.has(token.type)
const UNUSUAL_BEFORE_KEY: ReadonlySet<string> = new Set(['explicit-key-ind', 'anchor', 'tag'])
/** A line starts after them. */
const STARTS_LINE: ReadonlySet<string> = new Set(['\n', '\ufeff'])
/** What may stand before a number in a row. */
const BETWEEN: ReadonlySet<string> = new Set(['space', 'comma'])
/** Signs and names that need the blank after them, or might. */
const KEEPS_BLANK: ReadonlySet<string> = new Set(['alias', 'anchor', 'tag', 'map-value-ind'])

/** The blanks between two tokens in brackets; undefined where they stay as they are. */
function gapBetween(before: string, after: string): string | undefined {
  if (after === 'close' || after === 'comma') return KEEPS_BLANK.has(before) ? undefined : ''
  if (after === 'map-value-ind') return PLAIN_KEYS.has(before) ? '' : undefined
  if (before === 'open') return ''
  if (before === 'comma' || before === 'map-value-ind' || before === 'anchor' || before === 'tag') return ' '
  return undefined
}
