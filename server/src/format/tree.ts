/**
 * The form of a text, apart from what it says: YAML's concrete syntax tree, for folding, selecting, anchors and layout.
 * Places are offsets into the whole text. Texts with faults have a tree too, as far as it goes.
 */
import { type CST, Lexer, Parser } from 'yaml'
import { Cuts } from './cuts.ts'
import type { Span } from './model.ts'
import { itemEnd, itemStart, tokenEnd } from './nodes.ts'
import { type AtomRow, findRuns, type Run } from './rows.ts'
import { DEEPEST, MOST_CHARACTERS, MOST_FOR_YAML, verifiedRuns, withoutControls } from './yaml.ts'

/** An anchor and the aliases that mean it; the spans are those of the name, without its sign. */
export interface AnchorUse {
  readonly name: string
  readonly anchor: Span
  readonly aliases: readonly Span[]
}

type Collection = CST.BlockMap | CST.BlockSequence | CST.FlowCollection

export class SyntaxTree {
  private constructor(
    readonly text: string,
    readonly documents: readonly CST.Document[],
    readonly cuts: Cuts,
    /** Rows of atoms that are cut out after an item. */
    readonly runs: ReadonlyMap<CST.CollectionItem, Run>,
    /** In the order of the text. */
    readonly comments: readonly Span[],
  ) {}

  /** undefined where the text is too large or too deep. Long lists of atoms go the short way of `rows.ts`. */
  static of(text: string): SyntaxTree | undefined {
    if (text.length > MOST_CHARACTERS) return undefined
    const readable = withoutControls(text)
    const runs = findRuns(readable)
    return (runs.length > 0 && SyntaxTree.#parse(readable, runs)) || SyntaxTree.#parse(readable, [])
  }

  static #parse(text: string, runs: readonly Run[]): SyntaxTree | undefined {
    const cuts = new Cuts(
      text,
      runs.map(({ cut }) => cut),
    )
    if (cuts.text.length > MOST_FOR_YAML) return undefined
    const documents: CST.Document[] = []
    const comments: Span[] = runs.flatMap(run => run.comments.map(({ from, to }) => [from, to] as const))
    const parser = new Parser()
    const take = (token: CST.Token) => {
      if (token.type === 'document') documents.push(token)
    }
    let isScalar = false
    for (const lexeme of new Lexer().lex(cuts.text)) {
      if (!isScalar && lexeme[0] === '#')
        comments.push(cuts.span(parser.offset, parser.offset + lexeme.trimEnd().length))
      isScalar = !isScalar && lexeme === SCALAR_FOLLOWS
      for (const token of parser.next(lexeme)) take(token)
      if (parser.stack.length > DEEPEST + 1) return undefined
    }
    for (const token of parser.end()) take(token)
    const verified = verifiedRuns(documents, runs, cuts)
    comments.sort((a, b) => a[0] - b[0])
    return verified && new SyntaxTree(text, documents, cuts, verified, comments)
  }

  spanOf(token: CST.Token): Span {
    return this.cuts.span(token.offset, tokenEnd(token))
  }

  /** Of an item with its dash or key, without what was cut out after it. */
  spanOfItem(item: CST.CollectionItem): Span {
    return this.cuts.span(itemStart(item), itemEnd(item))
  }

  /** Everything that covers an offset, from the document down. */
  around(offset: number): Span[] {
    const found: Span[] = []
    const add = (span: Span): boolean => {
      const isThere = span[0] <= offset && offset <= span[1]
      if (isThere && span[1] > span[0]) found.push(span)
      return isThere
    }
    for (const [i, { offset: start, value }] of this.documents.entries()) {
      const next = this.documents[i + 1]
      const end = next ? this.cuts.back(next.offset) : this.text.length
      if (add([i === 0 ? 0 : this.cuts.back(start), end])) this.#around(value, offset, add)
    }
    return found
  }

  #around(token: CST.Token | null | undefined, offset: number, add: (span: Span) => boolean): void {
    if (!token || !add(this.spanOf(token)) || !isCollection(token)) return
    for (const item of token.items as CST.CollectionItem[]) {
      if (add(this.spanOfItem(item))) {
        this.#around(item.key, offset, add)
        this.#around(item.value, offset, add)
      }
      const rows = this.runs.get(item)?.rows.slice(1, -1) ?? []
      const row = rows.find(({ line }) => line[0] <= offset && offset < line[1])
      if (row && add([row.dash, row.value[1]])) aroundRow(row, add)
    }
  }

  /**
   * What goes over several lines: entries from their key on, items of lists from their dash on, each with the span of the
   * closing bracket where it ends with one.
   */
  blocks(): { readonly at: Span; readonly bracket: boolean }[] {
    const found: { at: Span; bracket: boolean }[] = []
    const text = this.cuts.text
    const walk = (token: CST.Token | null | undefined): void => {
      if (!token || !isCollection(token)) return
      for (const item of token.items as CST.CollectionItem[]) {
        const start = itemStart(item)
        const end = itemEnd(item)
        const line = text.indexOf('\n', start)
        if (line >= 0 && line < end)
          found.push({ at: this.cuts.span(start, end), bracket: item.value?.type === 'flow-collection' })
        walk(item.key)
        walk(item.value)
      }
    }
    for (const { value } of this.documents) walk(value)
    return found
  }

  /** Anchors in the order of the text. An alias means the last anchor of its name before it in its document. */
  anchors(): AnchorUse[] {
    return this.documents.flatMap(({ start, value }) => {
      const uses: (AnchorUse & { aliases: Span[] })[] = []
      const byName = new Map<string, Span[]>()
      const name = ({ offset, source }: { offset: number; source: string }) =>
        this.cuts.span(offset + 1, offset + source.length)
      const props = (tokens: readonly CST.SourceToken[]): void => {
        for (const token of tokens) {
          if (token.type !== 'anchor') continue
          const aliases: Span[] = []
          byName.set(token.source.slice(1), aliases)
          uses.push({ name: token.source.slice(1), anchor: name(token), aliases })
        }
      }
      const walk = (token: CST.Token | null | undefined): void => {
        if (!token) return
        if (token.type === 'alias') byName.get(token.source.slice(1))?.push(name(token))
        if (!isCollection(token)) return
        for (const item of token.items as CST.CollectionItem[]) {
          props(item.start)
          walk(item.key)
          if (item.sep) props(item.sep)
          walk(item.value)
        }
      }
      props(start)
      walk(value)
      return uses
    })
  }
}

/** The lexer's mark: what comes next is the text of a scalar. */
const SCALAR_FOLLOWS = '\x1f'

const isCollection = (token: CST.Token): token is Collection =>
  token.type === 'block-map' || token.type === 'block-seq' || token.type === 'flow-collection'

function aroundRow({ element, value, vector, numbers, name }: AtomRow, add: (span: Span) => boolean): void {
  for (const span of [[element[0], value[1]] as const, element, value, vector, ...numbers]) add(span)
  if (name) add(name)
}
