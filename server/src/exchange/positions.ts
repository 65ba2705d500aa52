import type { Snapshot } from '../analysis.ts'
import type { Span } from '../format/model.ts'

/** Line and column as people and SARIF count them: from 1, columns in characters (code points). */
export interface Position {
  readonly line: number
  readonly column: number
}

/** Half open like the span: the end is the position after the last character. */
export interface Region {
  readonly line: number
  readonly column: number
  readonly endLine: number
  readonly endColumn: number
}

/** Positions in one text. */
export class Positions {
  readonly #wide: boolean

  constructor(private readonly snapshot: Snapshot) {
    this.#wide = SURROGATE.test(snapshot.text)
  }

  at(offset: number): Position {
    const { line, character } = this.snapshot.positionOf(offset)
    const column = this.#wide ? [...this.snapshot.text.slice(offset - character, offset)].length : character
    return { line: line + 1, column: column + 1 }
  }

  region([start, end]: Span): Region {
    const from = this.at(start)
    const to = this.at(end)
    return { ...from, endLine: to.line, endColumn: to.column }
  }
}

/** Only a text with characters beyond the first plane has columns that differ from offsets. */
const SURROGATE = /[\ud800-\udfff]/
