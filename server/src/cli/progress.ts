import type { Io } from './io.ts'

/** Work that takes less is not worth a line. */
const QUIET_MS = 1000
const ERASE_LINE = '\r\u001b[K'

/** One line on a terminal that says how far the work is, rewritten in place and erased at the end. */
export class Progress {
  readonly #start: number
  #shown = false

  constructor(private readonly io: Io) {
    this.#start = io.now()
  }

  show(text: string): void {
    if (!this.io.err.isTerminal || this.io.now() - this.#start < QUIET_MS) return
    this.io.err.write(`${ERASE_LINE}${text}`)
    this.#shown = true
  }

  /** Before anything else is written, and at the end. */
  clear(): void {
    if (this.#shown) this.io.err.write(ERASE_LINE)
    this.#shown = false
  }
}
