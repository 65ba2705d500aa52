/**
 * What a YAML scalar says, and where in the source each of its characters stands: through quotes, escapes, line folds
 * and the indentation of block scalars.
 */
import { CST } from 'yaml'

export interface ScalarText {
  readonly value: string
  /** Source offsets of the characters `from` (inclusive) to `to` (exclusive) of the value. */
  place(from: number, to: number): readonly [start: number, end: number]
}

type ScalarToken = CST.FlowScalar | CST.BlockScalar

export function readScalar(token: ScalarToken): ScalarText {
  const { offset, source } = token
  if (token.type === 'scalar' && !source.includes('\n')) return straight(source, offset)
  const value = CST.resolveAsScalar(token, false, () => {})?.value ?? ''
  const whole = [offset, scalarEnd(token)] as const
  const traced = trace(token)
  // The library has the last word on what a scalar says; where it says something else, no place is known better than the whole.
  if (traced.value !== value) return { value, place: () => whole }
  return { value, place: (from, to) => traced.place(from, to, whole) }
}

/** Where the scalar ends, without the line break after a block scalar. */
export function scalarEnd(token: ScalarToken): number {
  const { offset, source } = token
  if (token.type !== 'block-scalar') return offset + source.length
  const header = token.props.reduce((length, prop) => length + ('source' in prop ? prop.source.length : 0), 0)
  const content = source.replace(/\s+$/, '').length
  if (content > 0) return offset + header + content
  return offset + (token.props[0] as CST.SourceToken).source.length
}

function straight(value: string, start: number): ScalarText {
  return { value, place: (from, to) => [start + from, start + to] }
}

/** Collects a value character by character, each with its place. */
class Trace {
  value = ''
  private readonly starts: number[] = []
  private readonly ends: number[] = []

  add(text: string, start: number, end: number): void {
    this.value += text
    for (let i = 0; i < text.length; i++) {
      this.starts.push(start)
      this.ends.push(end)
    }
  }

  /** A stretch of the source that stands in the value as it is. */
  copy(source: string, from: number, to: number, base: number): void {
    this.value += source.slice(from, to)
    for (let i = from; i < to; i++) {
      this.starts.push(base + i)
      this.ends.push(base + i + 1)
    }
  }

  place(from: number, to: number, whole: readonly [number, number]): readonly [number, number] {
    const { starts, ends } = this
    if (starts.length === 0) return whole
    const start = from < starts.length ? starts[from] : ends[starts.length - 1]
    return [start, to > from ? Math.max(start, ends[to - 1]) : start]
  }
}

function trace(token: ScalarToken): Trace {
  switch (token.type) {
    case 'double-quoted-scalar':
      return traceDoubleQuoted(token)
    case 'block-scalar':
      return traceBlock(token)
    default:
      return traceFolded(token)
  }
}

/** Plain and single-quoted scalars: lines are trimmed and joined; n line breaks in a row leave n − 1. */
function traceFolded({ type, source, offset }: CST.FlowScalar): Trace {
  const trace = new Trace()
  const quoted = type === 'single-quoted-scalar'
  const end = quoted ? source.length - 1 : source.length
  let from = quoted ? 1 : 0
  let pendingBreaks: number[] = []
  for (let first = true; ; first = false) {
    const lineFeed = source.indexOf('\n', from)
    const last = lineFeed < 0 || lineFeed >= end
    let to = last ? end : source[lineFeed - 1] === '\r' ? lineFeed - 1 : lineFeed
    if (!first) while (from < to && isBlank(source[from])) from++
    if (!last) while (to > from && isBlank(source[to - 1])) to--
    if (!first && (to > from || last)) {
      join(trace, pendingBreaks, offset)
      pendingBreaks = []
    }
    copyQuoted(trace, source, from, to, offset, quoted)
    if (last) return trace
    pendingBreaks.push(lineFeed)
    from = lineFeed + 1
  }
}

const isBlank = (character: string): boolean => character === ' ' || character === '\t'

/** One line break is a blank, more are one less. */
function join(trace: Trace, breaks: readonly number[], base: number): void {
  if (breaks.length === 1) trace.add(' ', base + breaks[0], base + breaks[0] + 1)
  for (const at of breaks.slice(1)) trace.add('\n', base + at, base + at + 1)
}

function copyQuoted(
  trace: Trace,
  source: string,
  from: number,
  to: number,
  base: number,
  quoted: boolean,
): void {
  let start = from
  if (quoted) {
    for (
      let twin = source.indexOf("''", start);
      twin >= 0 && twin + 1 < to;
      twin = source.indexOf("''", start)
    ) {
      trace.copy(source, start, twin, base)
      trace.add("'", base + twin, base + twin + 2)
      start = twin + 2
    }
  }
  trace.copy(source, start, to, base)
}

const ESCAPES: Readonly<Record<string, string>> = {
  '0': '\0',
  a: '\x07',
  b: '\b',
  e: '\x1b',
  f: '\f',
  n: '\n',
  r: '\r',
  t: '\t',
  v: '\v',
  N: '\u0085',
  _: '\u00a0',
  L: '\u2028',
  P: '\u2029',
  ' ': ' ',
  '"': '"',
  '/': '/',
  '\\': '\\',
  '\t': '\t',
}
const CODE_LENGTHS: Readonly<Record<string, number>> = { x: 2, u: 4, U: 8 }

function traceDoubleQuoted({ source, offset }: CST.FlowScalar): Trace {
  const trace = new Trace()
  const end = source.length - 1
  let i = 1
  while (i < end) {
    const from = i
    if (source[i] === '\\') {
      const [text, length] = escaped(source, i)
      i += length
      trace.add(text, offset + from, offset + i)
      continue
    }
    i = skip(source, i, end, ' \t')
    if (source[i] === '\n' || (source[i] === '\r' && source[i + 1] === '\n')) {
      i = skip(source, i, end, ' \t\r\n')
      const breaks = [...source.slice(from, i).matchAll(/\n/g)].map(({ index }) => from + index)
      join(trace, breaks, offset)
      continue
    }
    if (i === from) i++
    while (i < end && !SPECIAL.includes(source[i])) i++
    trace.copy(source, from, i, offset)
  }
  return trace
}

const SPECIAL = '\\ \t\r\n'

function skip(source: string, from: number, end: number, characters: string): number {
  let i = from
  while (i < end && characters.includes(source[i])) i++
  return i
}

/** What an escape sequence stands for and how many characters of the source it takes. */
function escaped(source: string, at: number): [text: string, length: number] {
  const code = source[at + 1]
  const lineBreak = /\\\r?\n[ \t]*/y
  lineBreak.lastIndex = at
  const continued = lineBreak.exec(source)
  if (continued) return ['', continued[0].length]
  if (Object.hasOwn(ESCAPES, code)) return [ESCAPES[code], 2]
  const digits = source.slice(at + 2, at + 2 + (CODE_LENGTHS[code] ?? 0))
  const point = /^[0-9a-fA-F]+$/.test(digits) ? Number.parseInt(digits, 16) : -1
  if (point < 0 || point > 0x10ffff) return [source.slice(at, at + 2), 2]
  return [String.fromCodePoint(point), 2 + digits.length]
}

function traceBlock(token: CST.BlockScalar): Trace {
  const trace = new Trace()
  const header = (token.props[0] as CST.SourceToken).source
  const start =
    token.offset +
    token.props.reduce((length, prop) => length + ('source' in prop ? prop.source.length : 0), 0)
  const lines = splitLines(token.source)
  const first = lines.findIndex(({ content }) => content !== '')
  if (first < 0) return trace
  const stated = Number(/[1-9]/.exec(header)?.[0] ?? 0)
  const indent = stated > 0 ? token.indent + stated : lines[first].indent
  // Blanks beyond the indentation are content too.
  const filled = lines.findLastIndex(line => line.content !== '' || line.indent > indent)
  const folded = header[0] === '>'
  let breaks: number[] = []
  let moreIndented = false
  for (const [i, line] of lines.slice(0, filled + 1).entries()) {
    const from = line.from + Math.min(indent, line.indent)
    const text = token.source.slice(from, line.to)
    const deep = text.startsWith(' ') || text.startsWith('\t')
    if (i > 0 && text !== '') {
      const asBlank = folded && !deep && !moreIndented && i > first
      if (asBlank) join(trace, breaks, start)
      else for (const at of breaks) trace.add('\n', start + at, start + at + 1)
      breaks = []
    }
    trace.copy(token.source, from, line.to, start)
    if (text !== '') moreIndented = deep
    breaks.push(line.feed)
  }
  const chomp = /[-+]/.exec(header)?.[0]
  if (chomp === '+')
    for (const { feed } of lines.slice(filled, -1))
      trace.add('\n', start + feed, start + Math.min(feed + 1, token.source.length))
  else if (chomp !== '-')
    trace.add('\n', start + breaks[0], start + Math.min(breaks[0] + 1, token.source.length))
  return trace
}

interface Line {
  readonly from: number
  readonly to: number
  /** Offset of its line feed, or of the source's end. */
  readonly feed: number
  readonly indent: number
  readonly content: string
}

function splitLines(source: string): Line[] {
  const lines: Line[] = []
  for (let from = 0; from <= source.length; ) {
    const found = source.indexOf('\n', from)
    const feed = found < 0 ? source.length : found
    const to = feed > from && source[feed - 1] === '\r' ? feed - 1 : feed
    let indent = 0
    while (from + indent < to && source[from + indent] === ' ') indent++
    lines.push({ from, to, feed, indent, content: source.slice(from + indent, to) })
    from = feed + 1
  }
  return lines
}
