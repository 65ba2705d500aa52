/** One look over a document: what its aliases stand for, whether that is within reason, and what is left open. */
import type { CST } from 'yaml'
import { type Anchors, tokenEnd } from './nodes.ts'

/** What all aliases of a document may stand for together, in characters and values. */
const MOST = 1_000_000

/** Nobody reads on after so many. */
const MOST_UNCLOSED = 100

export interface SurveyFault {
  readonly start: number
  readonly end: number
  readonly message: string
}

interface Anchor {
  readonly offset: number
  readonly token: CST.Token | undefined
}

/** One walk over a document. The depth of the tree is bounded by whoever has parsed it. */
export class Survey implements Anchors {
  readonly faults: SurveyFault[] = []
  /** What is opened and not closed, with the offset at which that is certain. */
  readonly unclosed: (SurveyFault & { readonly certain: number })[] = []
  /** The aliases stand for so much that the document must not be read. */
  excessive = false
  /** By name, in the order of the text. */
  private readonly anchors = new Map<string, Anchor[]>()
  private readonly aliases: CST.FlowScalar[] = []
  private readonly weights = new Map<CST.Token, number>()

  constructor({ start, value }: CST.Document) {
    this.props(start, value)
    this.walk(value)
    this.judge()
  }

  /** What an alias stands for; undefined for an unknown name, an anchor without a value, and a value within itself. */
  resolve(alias: CST.FlowScalar): CST.Token | undefined {
    const token = this.anchorOf(alias)?.token
    if (!token || token.type === 'alias') return undefined
    return token.offset <= alias.offset && alias.offset < tokenEnd(token) ? undefined : token
  }

  /** The last anchor of that name before the alias. */
  private anchorOf({ source, offset }: CST.FlowScalar): Anchor | undefined {
    const anchors = this.anchors.get(source.slice(1)) ?? []
    let low = 0
    let high = anchors.length
    while (low < high) {
      const middle = (low + high) >> 1
      if (anchors[middle].offset < offset) low = middle + 1
      else high = middle
    }
    return anchors[low - 1]
  }

  private walk(token: CST.Token | null | undefined): void {
    if (!token) return
    if (token.type === 'alias') this.aliases.push(token)
    if (token.type === 'double-quoted-scalar' || token.type === 'single-quoted-scalar') this.quotes(token)
    if (!('items' in token)) return
    const open = this.unclosed.length
    for (const { start, key, sep, value } of token.items as CST.CollectionItem[]) {
      this.props(start, key === undefined ? value : (key ?? undefined))
      this.walk(key)
      if (sep) this.props(sep, value)
      this.walk(value)
    }
    // What holds something unclosed is often so for that reason only.
    if (token.type === 'flow-collection' && this.unclosed.length === open) this.brackets(token)
  }

  private brackets(token: CST.FlowCollection): void {
    const { offset, source } = token.start
    const closing = source === '[' ? ']' : '}'
    if (token.end[0]?.source === closing) return
    const what = source === '[' ? 'A list' : 'A mapping'
    this.open(offset, tokenEnd(token), `${what} begins here and is not closed: \`${closing}\` is missing.`)
  }

  private quotes(token: CST.FlowScalar): void {
    const { source, offset } = token
    const quote = source[0]
    if (source.length > 1 && source.endsWith(quote)) return
    this.open(offset, tokenEnd(token), `A text begins here and is not closed: \`${quote}\` is missing.`)
  }

  private open(start: number, certain: number, message: string): void {
    if (this.unclosed.length < MOST_UNCLOSED) this.unclosed.push({ start, end: start + 1, message, certain })
  }

  private props(props: readonly CST.SourceToken[], token: CST.Token | undefined): void {
    for (const { type, source, offset } of props) {
      if (type !== 'anchor') continue
      const name = source.slice(1)
      const known = this.anchors.get(name)
      if (known) known.push({ offset, token })
      else this.anchors.set(name, [{ offset, token }])
    }
  }

  private judge(): void {
    let total = 0
    for (const alias of this.aliases) {
      const target = this.resolve(alias)
      const name = alias.source.slice(1)
      if (target) total += this.weight(target)
      else if (!this.anchorOf(alias)) this.blame(alias, `Nothing before this place is called \`&${name}\`.`)
      else if (this.anchorOf(alias)?.token)
        this.blame(alias, `\`*${name}\` stands inside of what it stands for.`)
      if (total <= MOST) continue
      this.excessive = true
      this.blame(alias, 'The aliases of this document stand for so much text that it is not read.')
      return
    }
  }

  private blame({ offset, source }: CST.FlowScalar, message: string): void {
    this.faults.push({ start: offset, end: offset + source.length, message })
  }

  /** Aliases are weighed in the order of the text, so what one stands for has its inner aliases weighed already. */
  private weight(token: CST.Token): number {
    const known = this.weights.get(token)
    if (known !== undefined) return known
    let weight = 1
    if (token.type === 'alias') {
      const target = this.resolve(token)
      weight += target ? this.weight(target) : 0
    } else if ('items' in token) {
      for (const { key, value } of token.items as CST.CollectionItem[])
        for (const part of [key, value]) if (part) weight += this.weight(part)
    } else if ('source' in token) weight += token.source.length
    this.weights.set(token, weight)
    return weight
  }
}
