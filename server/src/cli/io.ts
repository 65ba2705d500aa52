import type { FillForm } from '../exchange/forms/form.ts'
import type { StartFileWorker } from './threads.ts'

/** What the command line needs of the world, so that tests can give it another one. */
export interface Stream {
  write(text: string): void
  readonly isTerminal: boolean
}

export interface Io {
  readonly cwd: string
  readonly env: Readonly<Record<string, string | undefined>>
  /** Results. */
  readonly out: Stream
  /** Everything else. */
  readonly err: Stream
  /** All of standard input. */
  readInput(): Promise<Uint8Array>
  /** Starts a thread that works on files; absent where there are none. */
  readonly startFileWorker?: StartFileWorker
  /** How many threads the machine runs at once. */
  readonly cores?: number
  /** Milliseconds from any fixed moment. */
  now(): number
  readonly fillForm: FillForm
}

/** What a user did wrong, or what could not be done, told in one line. Ends the command with status 2. */
export class Refusal extends Error {}
