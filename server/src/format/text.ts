import type { Span } from './model.ts'
/** Lines and blanks of a text. Offsets are in UTF-16 units. */

const BYTE_ORDER_MARK = '\ufeff'

/** Offset of the first character of the line that `offset` stands in; a byte order mark is before the first line. */
export function lineStart(text: string, offset: number): number {
  const start = text.lastIndexOf('\n', offset - 1) + 1
  return start === 0 && offset > 0 && text[0] === BYTE_ORDER_MARK ? 1 : start
}

/** Offset of the line's end, before its line break. */
export function lineEnd(text: string, offset: number): number {
  const end = text.indexOf('\n', offset)
  if (end < 0) return text.length
  return end > offset && text[end - 1] === '\r' ? end - 1 : end
}

/** Offset of the next line's start, or the text's end. */
export function nextLine(text: string, offset: number): number {
  const end = text.indexOf('\n', offset)
  return end < 0 ? text.length : end + 1
}

/** The line break that the text uses. */
export const lineBreak = (text: string): string => {
  const first = text.indexOf('\n')
  return first > 0 && text[first - 1] === '\r' ? '\r\n' : '\n'
}

/** 0-based numbers of lines for offsets that are asked for in rising order. */
export class LineCounter {
  private line = 0
  private next: number

  constructor(private readonly text: string) {
    this.next = nextLine(text, 0)
  }

  lineOf(offset: number): number {
    while (offset >= this.next && this.next < this.text.length) {
      this.line++
      this.next = nextLine(this.text, this.next)
    }
    // A line break at the very end begins one more line.
    return offset >= this.next && this.text.endsWith('\n') ? this.line + 1 : this.line
  }
}

/** What a column counts: bytes, half-words or whole characters of the text in that encoding. */
export type Columns = 'utf-8' | 'utf-16' | 'utf-32'

/** How many columns lie between two offsets of one line. */
export function columnsBetween(text: string, from: number, to: number, columns: Columns): number {
  if (columns === 'utf-16') return to - from
  let count = 0
  for (const character of text.slice(from, to)) count += widthIn(columns, character)
  return count
}

/** The offset so many columns into the line; its end where the line is shorter, the character's start inside of one. */
export function offsetAfter(text: string, [from, to]: Span, column: number, columns: Columns): number {
  if (columns === 'utf-16') return Math.min(from + column, to)
  let [offset, count] = [from, 0]
  for (const character of text.slice(from, to)) {
    count += widthIn(columns, character)
    if (count > column) break
    offset += character.length
  }
  return offset
}

function widthIn(columns: Columns, character: string): number {
  const code = character.codePointAt(0)!
  if (columns === 'utf-32' || code < 0x80) return 1
  return code < 0x800 ? 2 : code < 0x10000 ? 3 : 4
}
