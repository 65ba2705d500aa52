/** Faults of YAML's syntax in words of our own: what is wrong there, and what would be right. */
import type { YAMLParseError } from 'yaml'
import { lineEnd } from './text.ts'

export interface SyntaxFault {
  readonly start: number
  readonly end: number
  readonly message: string
  /**
   * - `local`: what stands around it can still be read.
   * - `structure`: what belongs to what is uncertain from there on.
   * - `unclosed`: something that is opened is not closed. It is found where that would have ended, and better told
   *   where it begins.
   */
  readonly kind: 'local' | 'structure' | 'unclosed'
}

const UNCLOSED = /must (?:be sufficiently indented and )?end with a|missing closing ["']quote/i
const LOCAL_CODES: ReadonlySet<string> = new Set([
  'ALIAS_PROPS',
  'BAD_ALIAS',
  'BAD_DIRECTIVE',
  'BAD_DQ_ESCAPE',
  'BAD_PROP_ORDER',
  'BAD_SCALAR_START',
  'KEY_OVER_1024_CHARS',
  'MULTIPLE_ANCHORS',
  'MULTIPLE_TAGS',
  'TAG_RESOLVE_FAILED',
])
const LOCAL_MESSAGES =
  /implicit map keys need to be followed|missing , |missing space after :|must be separated|unexpected empty item|unexpected ,/i

function kindOf({ code, message }: YAMLParseError): SyntaxFault['kind'] {
  if (UNCLOSED.test(message)) return 'unclosed'
  return LOCAL_CODES.has(code) || LOCAL_MESSAGES.test(message) ? 'local' : 'structure'
}

/** One fault of the structure brings others with it: only the first is told, and no other on its line or at its place. */
export function withoutConsequences<
  F extends { readonly start: number; readonly kind?: SyntaxFault['kind'] },
>(faults: readonly F[], text: string): F[] {
  const told: F[] = []
  let structural: F | undefined
  for (const fault of [...faults].sort((a, b) => a.start - b.start)) {
    const isStructural = fault.kind === 'structure'
    if (told.at(-1)?.start === fault.start) continue
    if (structural && (isStructural || fault.start < lineEnd(text, structural.start))) continue
    if (isStructural) structural = fault
    told.push(fault)
  }
  return told
}

/** @param text the text that the error's offsets refer to. */
export function syntaxFault(error: YAMLParseError, text: string): SyntaxFault {
  const [from, to] = error.pos
  const start = Math.max(0, Math.min(from, text.length))
  // An escape sequence is a backslash and what follows.
  const length = error.code === 'BAD_DQ_ESCAPE' ? 2 : to - from
  const end = Math.max(start, Math.min(from + length, text.length))
  const there = text
    .slice(start, Math.min(end, start + LONGEST_QUOTE))
    .replace(/\s+/g, ' ')
    .trim()
  const message = explain(error, there)
  return { start, end, message, kind: kindOf(error) }
}

/** More of the text is not repeated in a message. */
const LONGEST_QUOTE = 24

function explain({ code, message }: YAMLParseError, there: string): string {
  for (const [pattern, text] of BY_MESSAGE) if (pattern.test(message)) return text(there)
  return BY_CODE[code]?.(there) ?? 'YAML cannot read the text here.'
}

type Explanation = (there: string) => string

const quoted = (there: string): string => (there === '' ? 'This' : `\`${there}\``)

/** The library has one code for several faults: its own message tells them apart. */
const BY_MESSAGE: readonly (readonly [RegExp, Explanation])[] = [
  [
    /implicit map keys need to be followed/i,
    there =>
      there.includes(':')
        ? `A blank is missing after the colon of \`${there}\`.`
        : `A colon is missing after \`${there}\`: a key is written \`key: value\`.`,
  ],
  [
    /must (?:be sufficiently indented and )?end with a \]/,
    () => 'A list that is opened with `[` is not closed: `]` is missing.',
  ],
  [
    /must (?:be sufficiently indented and )?end with a \}/,
    () => 'A mapping that is opened with `{` is not closed: `}` is missing.',
  ],
  [/missing closing "quote/i, () => 'The closing `"` is missing.'],
  [/missing closing 'quote/i, () => "The closing `'` is missing."],
  [/missing , between|missing , or : between/i, () => 'A comma is missing between the entries.'],
  [/missing space after :/i, () => 'A blank is missing after the colon.'],
  [/comments must be separated/i, () => 'A blank is missing before `#`.'],
  [/tags and anchors must be separated/i, () => 'A blank is missing here.'],
  [/without - indicator/, () => 'An item of a list begins with `- `.'],
  [/unexpected empty item|unexpected ,/i, () => 'Nothing stands between two commas, or before the first.'],
  [
    /nested mappings are not allowed/i,
    () => 'A text that holds a colon needs quotes; if a key is meant, its indentation does not fit.',
  ],
  [/block collection cannot start on same line/i, () => 'The first key goes on the line after `---`.'],
  [/all sequence items must start/i, () => 'The items of a list begin in one column.'],
  [/all mapping items must start/i, () => 'The keys of a mapping begin in one column.'],
  [/directives-end/i, () => 'A directive is followed by a line `---`.'],
  [/doc-end without/i, () => '`...` ends a document, but none has begun.'],
  [
    /unexpected block-seq-ind on same line/i,
    () => 'A list that begins with `- ` goes on the line after its key.',
  ],
  [
    /not a yaml token/i,
    () => 'After `|` or `>` the text begins on the next line; one that holds them needs quotes.',
  ],
  [
    /at node end/i,
    there => `Something is missing before ${quoted(there)}, such as a comma, an operator or a quote.`,
  ],
  [/block scalar/i, () => 'The lines of a block text are indented more than its key, and all alike.'],
  [/unexpected flow-(?:seq|map)-end/i, there => `${quoted(there)} closes nothing that is open.`],
]

const BY_CODE: Readonly<Record<string, Explanation>> = {
  ALIAS_PROPS: () => 'An alias has no anchor or tag of its own.',
  BAD_ALIAS: () => 'An anchor or alias needs a name.',
  BAD_COLLECTION_TYPE: () => 'The tag does not fit this value.',
  BAD_DIRECTIVE: () => 'This directive is malformed.',
  BAD_DQ_ESCAPE: there => `${quoted(there)} is no escape sequence; a backslash itself is written \`\\\\\`.`,
  BAD_INDENT: () => 'The indentation does not fit what stands above.',
  BAD_PROP_ORDER: () => 'An anchor or tag stands directly before its value.',
  BAD_SCALAR_START: there => `A text that begins with ${quoted(there.slice(0, 1))} must be quoted.`,
  BLOCK_AS_IMPLICIT_KEY: () => 'The indentation here fits nothing that stands above.',
  BLOCK_IN_FLOW: () => 'Inside of brackets, entries are separated by commas and lists have brackets.',
  KEY_OVER_1024_CHARS: () => 'A key is longer than YAML allows.',
  MISSING_CHAR: () => 'Something is missing here.',
  MULTILINE_IMPLICIT_KEY: () =>
    'A key stands on one line: here the indentation does not fit, or a colon or quote is missing above.',
  MULTIPLE_ANCHORS: () => 'A value has one anchor at most.',
  MULTIPLE_TAGS: () => 'A value has one tag at most.',
  RESOURCE_EXHAUSTION: () => 'The text is nested so deeply that it is not read.',
  TAB_AS_INDENT: () => 'A tab cannot indent: use blanks.',
  TAG_RESOLVE_FAILED: () => 'The tag does not fit this value.',
  UNEXPECTED_TOKEN: there => `${quoted(there)} cannot stand here.`,
}
