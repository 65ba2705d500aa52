import type { Engine } from './engine.ts'
import type { Io } from './io.ts'
import type { Given, OptionSpec } from './options.ts'

export interface Verb {
  readonly name: string
  /** What follows the name. */
  readonly operands: string
  /** A line for the list of verbs. */
  readonly summary: string
  /** Paragraphs. */
  readonly about: readonly string[]
  readonly options: readonly OptionSpec[]
  readonly examples: readonly string[]
  /** @returns the exit status. */
  run(call: Call): Promise<number>
}

export interface Call {
  readonly given: Given
  readonly io: Io
  /** Made when first asked for: it loads the symmetry library. */
  engine(): Engine
}

/** Exit statuses. */
export const CLEAN = 0
export const FOUND = 1
export const NOT_DONE = 2

export const DOCUMENT: OptionSpec = {
  name: 'document',
  value: 'N',
  help: 'Take the Nth crystal of a file that holds several.',
}
export const OUTPUT: OptionSpec = {
  name: 'output',
  short: 'o',
  value: 'FILE',
  help: 'Write to FILE, whole or not at all, and not to standard output.',
}
export const OVERWRITE: OptionSpec = { name: 'overwrite', help: 'Let --output replace a file that is there.' }
