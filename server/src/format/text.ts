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
