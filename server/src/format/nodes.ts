/**
 * A view of YAML's concrete syntax tree as texts, lists and mappings. Every node knows its place in the whole text and
 * what to delete to remove it. Behind an alias everything has the alias's place.
 */
import type { CST } from 'yaml'
import type { Cuts } from './cuts.ts'
import type { Span } from './model.ts'
import type { AtomRow, Run } from './rows.ts'
import { readScalar, type ScalarText, scalarEnd } from './scalar.ts'
import { lineStart, nextLine } from './text.ts'

export type Node = TextNode | ListNode | MappingNode | NothingNode

/** What the nodes of a document share. */
export interface Tree {
  readonly cuts: Cuts
  readonly anchors: Anchors
  /** Offsets of syntax faults in the shortened text, rising. */
  readonly faults: readonly number[]
  /** Rows cut out after an item. */
  readonly runs: ReadonlyMap<CST.CollectionItem, Run>
  /** Called where somebody needs nodes for rows that were cut out. */
  readonly missRows: () => void
}

export interface Anchors {
  /** What an alias stands for; undefined where nothing does. */
  resolve(alias: CST.FlowScalar): CST.Token | undefined
}

abstract class BaseNode {
  constructor(
    readonly at: Span,
    /** Reached through an alias: its text stands elsewhere. */
    readonly aliased: boolean,
    /** A syntax fault touches it, so that what it says is uncertain. */
    readonly broken: boolean,
  ) {}
}

/** No value: nothing is written, or `null` or `~`. */
export class NothingNode extends BaseNode {
  readonly kind = 'nothing'
}

export class TextNode extends BaseNode {
  readonly kind = 'text'
  private readonly text: ScalarText

  constructor(
    private readonly view: View,
    token: CST.FlowScalar | CST.BlockScalar,
    /** In quotes or a block: it is text whatever it looks like. */
    readonly quoted: boolean,
  ) {
    super(view.span(token.offset, scalarEnd(token)), view.aliased, view.isBroken(token))
    this.text = readScalar(token)
  }

  get value(): string {
    return this.text.value
  }

  /** The place of some characters of the value. */
  place(from: number, to: number): Span {
    return this.view.span(...this.text.place(from, to))
  }
}

export interface ListItem {
  readonly node: Node
  /** What to delete to remove the item; empty where it cannot be removed by itself. */
  readonly item: Span
}

export class ListNode extends BaseNode {
  readonly kind = 'list'

  constructor(
    private readonly view: View,
    private readonly token: CST.BlockSequence | CST.FlowCollection,
  ) {
    super(view.span(token.offset, tokenEnd(token)), view.aliased, view.isBroken(token))
  }

  get flow(): boolean {
    return this.token.type === 'flow-collection'
  }

  get length(): number {
    return listItems(this.token).length
  }

  private read: readonly ListItem[] | undefined

  get items(): readonly ListItem[] {
    const { tree } = this.view
    const items = listItems(this.token)
    if (items.some(item => tree.runs.has(item))) tree.missRows()
    this.read ??= items.map((_, i) => this.listItem(items, i))
    return this.read
  }

  /** The items, with the rows of atoms that were cut out of the text among them. */
  get itemsAndRows(): readonly (ListItem | AtomRow)[] {
    const items = listItems(this.token)
    const all: (ListItem | AtomRow)[] = []
    for (const [i, item] of items.entries()) {
      all.push(this.listItem(items, i))
      const run = this.view.tree.runs.get(item)
      if (!run) continue
      if (this.aliased) this.view.tree.missRows()
      for (const row of run.rows.slice(1, -1)) all.push(row)
    }
    return all
  }

  private listItem(items: readonly CST.CollectionItem[], i: number): ListItem {
    const { view, token } = this
    const item = items[i]
    return { node: nodeOfItem(view, item), item: view.item(token, items, i) }
  }
}

export interface MappingEntry {
  readonly key: Node
  readonly value: Node
  /** What to delete to remove the entry; empty where it cannot be removed by itself. */
  readonly item: Span
  /** The colon has been written. */
  readonly colon: boolean
}

export class MappingNode extends BaseNode {
  readonly kind = 'mapping'

  constructor(
    private readonly view: View,
    private readonly token: CST.BlockMap | CST.FlowCollection | PairToken,
  ) {
    super(view.span(token.offset, tokenEnd(token)), view.aliased, view.isBroken(token))
  }

  get flow(): boolean {
    return this.token.type !== 'block-map'
  }

  private read: readonly MappingEntry[] | undefined

  get entries(): readonly MappingEntry[] {
    this.read ??= this.readEntries()
    return this.read
  }

  private readEntries(): MappingEntry[] {
    const { view, token } = this
    const items = mappingItems(token)
    return items.map((item, i) => {
      const { start, key, sep, value } = item
      const keyOffset = key?.offset ?? (sep?.[0] ?? start.at(-1))?.offset ?? token.offset
      const colon = sep?.find(({ type }) => type === 'map-value-ind')
      const valueOffset = colon ? colon.offset + 1 : key ? tokenEnd(key) : keyOffset
      return {
        key: view.node(key ?? undefined, keyOffset),
        value: view.node(value, valueOffset),
        item: token.type === 'pair' ? view.span(token.offset, token.offset) : view.item(token, items, i),
        colon: colon !== undefined,
      }
    })
  }
}

/** `key: value` inside `[…]`: a mapping of one entry without braces. */
interface PairToken {
  readonly type: 'pair'
  readonly offset: number
  readonly item: CST.CollectionItem
}

type Collection = CST.BlockMap | CST.BlockSequence | CST.FlowCollection

/** How tokens become nodes: as they stand, or behind an alias. */
class View {
  constructor(
    readonly tree: Tree,
    private readonly alias?: Span,
  ) {}

  get aliased(): boolean {
    return this.alias !== undefined
  }

  span(start: number, end: number): Span {
    return this.alias ?? this.tree.cuts.span(start, end)
  }

  isBroken(token: CST.Token | PairToken): boolean {
    const { faults } = this.tree
    if (faults.length === 0) return false
    let low = 0
    let high = faults.length
    while (low < high) {
      const middle = (low + high) >> 1
      if (faults[middle] < token.offset) low = middle + 1
      else high = middle
    }
    // A fault may stand in the rest of a block scalar's header.
    const header = token.type === 'block-scalar' ? sum(token.props) : 0
    return low < faults.length && faults[low] <= Math.max(tokenEnd(token), token.offset + header)
  }

  node(token: CST.Token | undefined, offset: number): Node {
    switch (token?.type) {
      case 'alias':
        return this.behind(token)
      case 'scalar':
        if (NOTHING.has(token.source)) break
        return new TextNode(this, token, false)
      case 'single-quoted-scalar':
      case 'double-quoted-scalar':
      case 'block-scalar':
        return new TextNode(this, token, true)
      case 'block-seq':
        return new ListNode(this, token)
      case 'block-map':
        return new MappingNode(this, token)
      case 'flow-collection':
        return token.start.type === 'flow-map-start'
          ? new MappingNode(this, token)
          : new ListNode(this, token)
    }
    if (!token) return new NothingNode(this.span(offset, offset), this.aliased, false)
    return new NothingNode(this.span(token.offset, tokenEnd(token)), this.aliased, this.isBroken(token))
  }

  private behind(alias: CST.FlowScalar): Node {
    const at = this.span(alias.offset, tokenEnd(alias))
    const token = this.tree.anchors.resolve(alias)
    if (!token) return new NothingNode(at, true, true)
    return new View(this.tree, at).node(token, alias.offset)
  }

  pair(item: CST.CollectionItem, offset: number): Node {
    return new MappingNode(this, { type: 'pair', offset, item })
  }

  /** What to delete to remove an item of a collection. */
  item(collection: Collection, items: readonly CST.CollectionItem[], i: number): Span {
    if (this.alias) return [this.alias[0], this.alias[0]]
    const [start, end] =
      collection.type === 'flow-collection'
        ? flowItem(collection, items, i)
        : blockItem(this.tree.cuts.text, collection, items, i)
    return this.tree.cuts.span(start, end)
  }
}

const sum = (tokens: readonly CST.Token[]): number =>
  tokens.reduce((length, token) => length + ('source' in token ? token.source.length : 0), 0)

/** How YAML writes that there is no value. */
const NOTHING: ReadonlySet<string> = new Set(['', '~', 'null', 'Null', 'NULL'])

/** The node of a document's contents. */
export const rootNode = (tree: Tree, token: CST.Token | undefined, offset: number): Node =>
  new View(tree).node(token, offset)

function nodeOfItem(view: View, item: CST.CollectionItem): Node {
  if (isPair(item)) return view.pair(item, itemStart(item))
  return view.node(item.value, itemEnd(item))
}

const isPair = ({ start, key, sep }: CST.CollectionItem): boolean =>
  key !== undefined || sep !== undefined || start.some(({ type }) => type === 'explicit-key-ind')

const MEANS_AN_ITEM: ReadonlySet<string> = new Set(['seq-item-ind', 'explicit-key-ind', 'anchor', 'tag'])

/** Items that hold something, or whose dash has been written; the others hold comments and commas only. */
const listItems = (token: CST.BlockSequence | CST.FlowCollection): CST.CollectionItem[] =>
  (token.items as CST.CollectionItem[]).filter(
    item => item.value || isPair(item) || item.start.some(({ type }) => MEANS_AN_ITEM.has(type)),
  )

function mappingItems(token: CST.BlockMap | CST.FlowCollection | PairToken): CST.CollectionItem[] {
  if (token.type === 'pair') return [token.item]
  return (token.items as CST.CollectionItem[]).filter(item => item.value || isPair(item))
}

/** Offset after the last character of a token, without comments and line breaks that follow. */
export function tokenEnd(token: CST.Token | PairToken): number {
  switch (token.type) {
    case 'pair':
      return itemEnd(token.item)
    case 'block-map':
    case 'block-seq': {
      const last = (token.items as CST.CollectionItem[]).findLast(
        item => item.value || isPair(item) || dashOf(item),
      )
      return last ? itemEnd(last) : token.offset
    }
    case 'flow-collection': {
      const closing = token.end[0]
      if (closing) return closing.offset + closing.source.length
      const last = token.items.at(-1)
      return last ? itemEnd(last) : token.offset + token.start.source.length
    }
    case 'block-scalar':
      return scalarEnd(token)
    default:
      return token.offset + ('source' in token ? token.source.length : 0)
  }
}

/** The dash of an item of a block sequence. */
export const dashOf = ({ start }: CST.CollectionItem): CST.SourceToken | undefined =>
  start.find(({ type }) => type === 'seq-item-ind')

const IS_BLANK: ReadonlySet<string> = new Set(['space', 'newline', 'comment', 'comma'])

/** Where an item begins: its dash, its question mark, its key or its value. */
export function itemStart({ start, key, sep, value }: CST.CollectionItem): number {
  const first = start.find(({ type }) => !IS_BLANK.has(type)) ?? key ?? sep?.[0] ?? value
  return first?.offset ?? start[0]?.offset ?? 0
}

export function itemEnd({ start, key, sep, value }: CST.CollectionItem): number {
  if (value) return tokenEnd(value)
  const last = [...start, ...(sep ?? [])].findLast(({ type }) => !IS_BLANK.has(type))
  const end = last ? last.offset + last.source.length : 0
  return key ? Math.max(end, tokenEnd(key)) : end || itemStart({ start, key, sep, value })
}

/** Whole lines where the item stands on its own, else up to the next item on the dash's line. */
function blockItem(
  text: string,
  collection: CST.BlockMap | CST.BlockSequence,
  items: readonly CST.CollectionItem[],
  i: number,
): [number, number] {
  const start = itemStart(items[i])
  const line = lineStart(text, start)
  if (/^[ \t]*$/.test(text.slice(line, start))) return [line, nextLine(text, itemEnd(items[i]))]
  if (i > 0 || items.length < 2 || collection.offset !== start) return [start, start]
  return [start, itemStart(items[1])]
}

/**
 * The item and the comma after it. The last one leaves a comma before it, which YAML allows: so any items of a
 * collection can be removed together.
 */
function flowItem(
  collection: CST.FlowCollection,
  items: readonly CST.CollectionItem[],
  i: number,
): [number, number] {
  const start = itemStart(items[i])
  // After the last item there may be one that holds a comma and comments only.
  const trailing = collection.items[collection.items.length - 1]
  const following = items[i + 1] ?? (trailing === items[i] ? undefined : trailing)
  const comma = following?.start.findIndex(({ type }) => type === 'comma') ?? -1
  if (!following || comma < 0) return [start, itemEnd(items[i])]
  const after = following.start[comma + 1]
  const blanks = i < items.length - 1 && after?.type === 'space' ? after.source.length : 0
  return [start, following.start[comma].offset + 1 + blanks]
}

/** All block sequences under a token. */
export function* blockSequences(token: CST.Token | null | undefined): Generator<CST.BlockSequence> {
  if (token?.type !== 'block-seq' && token?.type !== 'block-map') return
  if (token.type === 'block-seq') yield token
  for (const item of token.items as CST.CollectionItem[]) {
    yield* blockSequences(item.key)
    yield* blockSequences(item.value)
  }
}
