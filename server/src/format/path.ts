/** Labels of k-points and the notation of paths: `Γ – X –(20)– W | U – K`. */
import type { Fix, PathLabel, PathPiece, PathSegment, Span } from './model.ts'

const GREEK_NAMES: Readonly<Record<string, string>> = { Gamma: 'Γ', Delta: 'Δ', Sigma: 'Σ', Lambda: 'Λ' }

/** Characters that look like the letter or the sign that is meant. */
const LOOK_ALIKES: ReadonlyMap<string, string> = new Map([
  ['∑', 'Σ'],
  ['∆', 'Δ'],
  ['′', "'"],
  ['’', "'"],
  ['ʹ', "'"],
  ['´', "'"],
  // Cyrillic and Greek capitals whose glyph is a Latin letter's, and the Cyrillic twin of Γ.
  ...pairs('ГАВЕКМНОРСТХ', 'ΓABEKMHOPCTX'),
  ...pairs('ΑΒΕΖΗΙΚΜΝΟΡΤΥΧ', 'ABEZHIKMNOPTYX'),
])

function pairs(from: string, to: string): [string, string][] {
  return [...from].map((character, i) => [character, to[i]])
}

const LETTER = 'A-Za-z\u0391-\u03a9\u03b1-\u03c9'
const LABEL = new RegExp(`^([${LETTER}][${LETTER}0-9']*?)(?:(?<![0-9])_(?=[0-9]))?([0-9]*)('*)$`)
const GREEK_NAME = /^(Gamma|Delta|Sigma|Lambda)(?=[0-9']|$)/
/** Longer labels are refused: nobody writes them, and they would fill a picture. */
const LONGEST = 32

/**
 * The one spelling of a label: Greek letters for their ASCII names and look-alikes, plain digits without an underscore,
 * `'` for every prime. `X_1` and `X₁` give `X1`, `Gamma` gives `Γ`. undefined where the text is no label.
 */
export function normaliseLabel(text: string): string | undefined {
  if (text.length > LONGEST) return undefined
  const plain = [...text].map(character => LOOK_ALIKES.get(character) ?? compatible(character)).join('')
  const parts = LABEL.exec(plain)
  if (!parts) return undefined
  const [, name, digits, primes] = parts
  return (name + digits + primes).replace(GREEK_NAME, greek => GREEK_NAMES[greek])
}

/** Subscript, superscript and full-width characters are read as plain ones. */
const compatible = (character: string): string => character.normalize('NFKC')

const SUBSCRIPT_DIGITS = '₀₁₂₃₄₅₆₇₈₉'

/** A label as the trade prints it: digits at the end become a subscript. Takes any spelling; what is no label stays. */
export function displayLabel(label: string): string {
  const normalised = normaliseLabel(label) ?? label
  return normalised.replace(/\d+(?='*$)/, digits =>
    [...digits].map(digit => SUBSCRIPT_DIGITS[Number(digit)]).join(''),
  )
}

/** A path as the file writes it: `Γ – X | U – K`. `write` may give labels another form, such as `displayLabel`. */
export function formatPath(
  pieces: readonly (readonly string[])[],
  write: (label: string) => string = label => label,
): string {
  return pieces.map(labels => labels.map(write).join(' – ')).join(' | ')
}

/** Something that is no path notation, with the characters that are wrong. */
export interface PathFault {
  readonly at: Span
  readonly message: string
  readonly fixes?: readonly Fix[]
}

interface Token {
  readonly kind: 'label' | 'separator' | 'break' | 'wrong'
  readonly from: number
  readonly to: number
  readonly text: string
  readonly label?: string
  readonly steps?: { readonly value: number; readonly from: number; readonly to: number }
  readonly message?: string
  readonly replacement?: string
}

const BLANKS = /[\s\u00a0]+/y
const WORD = new RegExp(`[${LETTER}0-9_'\\p{L}\\p{No}∑∆′’ʹ´]+`, 'uy')
/** Every dash that looks like one of the two of the notation, and the arrow. */
const DASH = '[-\u2010-\u2015\u2212→]'
// The blanks are bounded, so that the time for a hostile text does not grow with its square.
const SEPARATOR = new RegExp(`${DASH}(?:\\s{0,9}\\(([^()|]{0,40})\\)\\s{0,9}${DASH})?`, 'y')
const STEPS = /\([^()|]{0,40}\)?/y
const ARROW = /(?:-+|=+)>|--+|[–—]{2,}/y

/** Places in the text of a path, as places in the file. */
export type Placing = (from: number, to: number) => Span

/**
 * Read a path. Malformed parts are faults, one for each, and what is well formed around them is still read.
 * @param text the path itself, without the quotes and line folds of YAML.
 * @param place turns offsets into `text` into spans of the file.
 */
export function parsePath(text: string, place: Placing): { pieces: PathPiece[]; faults: PathFault[] } {
  const reader = new PathReader(text, place)
  reader.read(tokens(text))
  return reader
}

function tokens(text: string): Token[] {
  const found: Token[] = []
  let from = 0
  const match = (pattern: RegExp) => {
    pattern.lastIndex = from
    return pattern.exec(text)
  }
  while (from < text.length) {
    const token = match(BLANKS) ? undefined : tokenAt(text, from, match)
    if (token) found.push(token)
    from = token ? token.to : BLANKS.lastIndex
  }
  return found
}

function tokenAt(text: string, from: number, match: (pattern: RegExp) => RegExpExecArray | null): Token {
  const arrow = match(ARROW)
  if (arrow)
    return wrong(from, arrow[0], `\`${arrow[0]}\` is no separator: write \`–\`, \`-\` or \`→\`.`, '–')
  const separator = match(SEPARATOR)
  if (separator) return separatorToken(from, separator)
  if (text[from] === '|') return { kind: 'break', from, to: from + 1, text: '|' }
  const word = match(WORD)
  if (word) {
    const label = normaliseLabel(word[0])
    if (label !== undefined) return { kind: 'label', from, to: from + word[0].length, text: word[0], label }
    return wrong(
      from,
      word[0],
      `\`${word[0]}\` is no label: a label is a letter, then letters, digits and primes.`,
    )
  }
  const steps = match(STEPS)
  if (steps)
    return wrong(from, steps[0], 'A number of steps stands between two separators, as in `Γ –(40)– X`.')
  const character = String.fromCodePoint(text.codePointAt(from)!)
  if (character === ',' || character === ';')
    return wrong(
      from,
      character,
      `Labels are joined by \`–\`, and \`|\` breaks the path; \`${character}\` does neither.`,
      ' –',
    )
  const greek =
    character === '\\' ? /^\\(Gamma|Delta|Sigma|Lambda)(?![a-z])/.exec(text.slice(from, from + 10)) : null
  if (greek)
    return wrong(from, greek[0], `The label is written \`${GREEK_NAMES[greek[1]]}\`.`, GREEK_NAMES[greek[1]])
  return wrong(from, character, `\`${character}\` cannot stand in a path.`)
}

const wrong = (from: number, text: string, message: string, replacement?: string): Token => ({
  kind: 'wrong',
  from,
  to: from + text.length,
  text,
  message,
  replacement,
})

const MOST_STEPS = 1_000_000

function separatorToken(from: number, [text, inside]: RegExpExecArray): Token {
  const token = { kind: 'separator', from, to: from + text.length, text } as const
  if (inside === undefined) return token
  const steps = inside.trim()
  const start = from + text.indexOf('(') + 1 + (inside.length - inside.trimStart().length)
  const value = /^\d+$/.test(steps) ? Number(steps) : 0
  const place = { value, from: start, to: start + steps.length }
  if (value >= 1 && value <= MOST_STEPS) return { ...token, steps: place }
  const message =
    value > MOST_STEPS
      ? `A segment has at most ${MOST_STEPS.toLocaleString('en')} steps.`
      : 'Between the parentheses stands the number of steps of this segment: a whole number from 1.'
  return { ...token, steps: place, message }
}

class PathReader {
  readonly pieces: PathPiece[] = []
  readonly faults: PathFault[] = []
  private labels: PathLabel[] = []
  private segments: PathSegment[] = []
  /** The last break with nothing beside it. */
  private blamed: Token | undefined

  constructor(
    private readonly text: string,
    private readonly place: Placing,
  ) {}

  read(tokens: readonly Token[]): void {
    let start = 0
    for (let i = 0; i <= tokens.length; i++) {
      if (i < tokens.length && tokens[i].kind !== 'break') continue
      this.piece(tokens.slice(start, i), tokens[start - 1], tokens[i])
      start = i + 1
    }
  }

  /** One piece, between the breaks `left` and `right` or the ends of the text. */
  private piece(tokens: readonly Token[], left: Token | undefined, right: Token | undefined): void {
    if (tokens.length === 0) {
      const bar = right ?? left
      if (!bar || bar === this.blamed) return
      const side = right ? 'before' : 'after'
      this.fail(bar, `No piece of the path stands ${side} this \`|\`.`, this.removal(bar))
      this.blamed = bar
      return
    }
    const before = this.faults.length
    let separator: Token | undefined
    let last: PathLabel | undefined
    for (const token of tokens) {
      if (token.kind === 'label') {
        const label: PathLabel = {
          label: token.label!,
          at: this.place(token.from, token.to),
          text: token.text,
        }
        if (last && separator) this.segment(last, separator, label)
        else this.flush()
        if (last && !separator) this.sideBySide(last, label)
        this.labels.push(label)
        last = label
        separator = undefined
      } else if (token.kind === 'separator') {
        if (token.message) this.failSteps(token)
        if (separator)
          this.fail(
            token,
            'Two separators stand side by side: a label is missing between them.',
            this.removal(token),
          )
        else if (!last && token === tokens[0])
          this.fail(token, `A label is missing before \`${token.text}\`.`, this.removal(token))
        separator ??= token
      } else {
        this.fail(
          token,
          token.message!,
          token.replacement === undefined ? [] : [this.replacement(token, token.replacement)],
        )
        this.flush()
        last = undefined
        separator = undefined
      }
    }
    if (separator && tokens.at(-1) === separator && this.faults.length === before)
      this.fail(separator, `A label is missing after \`${separator.text}\`.`)
    const only = this.segments.length === 0 ? this.labels[0] : undefined
    this.flush()
    if (only && this.faults.length === before)
      this.faults.push({
        at: only.at,
        message: `A piece of a path has two labels at least; \`${only.text}\` stands alone.`,
      })
  }

  private segment(from: PathLabel, separator: Token, to: PathLabel): void {
    const { steps, message } = separator
    this.segments.push({
      from,
      to,
      at: [from.at[0], to.at[1]],
      separator: this.place(separator.from, separator.to),
      steps: steps && !message ? { value: steps.value, at: this.place(steps.from, steps.to) } : undefined,
    })
  }

  /** What has been read without a fault in between becomes a piece, if it has a segment. */
  private flush(): void {
    const { labels, segments } = this
    if (segments.length > 0)
      this.pieces.push({ at: [labels[0].at[0], labels.at(-1)!.at[1]], labels, segments })
    this.labels = []
    this.segments = []
  }

  private sideBySide(first: PathLabel, second: PathLabel): void {
    const end = first.at[1]
    this.faults.push({
      at: second.at,
      message: `A separator is missing between \`${first.text}\` and \`${second.text}\`.`,
      fixes: [{ title: 'Insert `–`', safe: false, edits: [{ at: [end, end], text: ' –' }] }],
    })
  }

  private failSteps({ steps, message }: Token): void {
    const at = this.place(steps!.from, Math.max(steps!.to, steps!.from + 1))
    this.faults.push({ at, message: message! })
  }

  private fail({ from, to }: Token, message: string, fixes: readonly Fix[] | Fix = []): void {
    this.faults.push({
      at: this.place(from, to),
      message,
      fixes: Array.isArray(fixes) ? fixes : [fixes as Fix],
    })
  }

  /** With the blanks after it, or before it where nothing follows: a line in a block must not become longer in blanks. */
  private removal({ from, to, text }: Token): Fix {
    const after = /^[ \t]*/.exec(this.text.slice(to))![0].length
    const isLast = this.text.slice(to).trim() === ''
    const before = isLast ? from - this.text.slice(0, from).trimEnd().length : 0
    const at = this.place(from - before, isLast ? to : to + after)
    return { title: `Remove \`${text}\``, safe: false, edits: [{ at, text: '' }] }
  }

  private replacement({ from, to }: Token, text: string): Fix {
    return {
      title: `Replace by \`${text.trim()}\``,
      safe: false,
      edits: [{ at: this.place(from, to), text }],
    }
  }
}
