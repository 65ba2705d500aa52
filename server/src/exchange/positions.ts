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
  /** Where counting got to: findings come in order, and a line may be very long. */
  #counted = { line: -1, character: 0, column: 0 }

  constructor(private readonly snapshot: Snapshot) {
    this.#wide = SURROGATE.test(snapshot.text)
  }

  at(offset: number): Position {
    const { line, character } = this.snapshot.positionOf(offset)
    return {
      line: line + 1,
      column: 1 + (this.#wide ? this.#characters(line, character, offset) : character),
    }
  }

  region([start, end]: Span): Region {
    const from = this.at(start)
    const to = this.at(end)
    return { ...from, endLine: to.line, endColumn: to.column }
  }

  #characters(line: number, character: number, offset: number): number {
    const known =
      this.#counted.line === line && this.#counted.character <= character
        ? this.#counted
        : { character: 0, column: 0 }
    const between = this.snapshot.text.slice(offset - character + known.character, offset)
    const column = known.column + [...between].length
    this.#counted = { line, character, column }
    return column
  }
}

/** Only a text with characters beyond the first plane has columns that differ from offsets. */
const SURROGATE = /[\ud800-\udfff]/
