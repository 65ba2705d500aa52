/**
 * Numbers of a lattice file: expressions are read and evaluated here, and numbers are written back here.
 *
 *     sum     := product (('+' | '-') product)*
 *     product := signed (('*' | '/') signed)*
 *     signed  := ('+' | '-')* power
 *     power   := atom ('^' signed)?
 *     atom    := NUMBER | NUMBER 'pi' | NAME | FUNCTION '(' sum ')' | '(' sum ')'
 *
 * Angles of sin, cos and tan are in degrees.
 */
import { cosDegrees, sinDegrees } from '../crystal/cell.ts'
import * as exact from './fraction.ts'
import { type Fraction, PARAMETER_NAMES, type ParameterName } from './model.ts'
import { nearest } from './nearest.ts'

/** What a number is, without its place in a file. `value` is finite. */
export interface Evaluated {
  readonly value: number
  readonly exact?: Fraction
  readonly decimals?: number
  readonly uses: readonly ParameterName[]
}

/** Why a text is no number. `from` and `to` are offsets into that text, half open. */
export interface NumberFault {
  readonly from: number
  readonly to: number
  readonly message: string
  /** What to write there instead, where that is plain. */
  readonly replacement?: string
}

/** The value of a lattice parameter, or why it has none here, or `pending` where another finding has said why. */
export type ParameterValue = { readonly value: number } | { readonly fault: string } | 'pending'
export type Parameters = (name: ParameterName) => ParameterValue

export type Evaluation =
  | { readonly number: Evaluated }
  | { readonly fault: NumberFault }
  /** A parameter that it uses is malformed, which is a finding there. */
  | { readonly pending: true }

/** Deeper nesting, or a longer text, is no number that a person wrote. */
const DEEPEST = 64
const LONGEST = 1000

const PLAIN = /^[-+\u2212]?(\d+(?:\.\d*)?|\.\d+)(?:\(\d+\))?$/
const NONE: readonly ParameterName[] = []
const WITHOUT_PARAMETERS: Parameters = () => ({ fault: 'has no value here' })

/** Evaluate the text of a number. Never throws. */
export function evaluate(text: string, parameters: Parameters = WITHOUT_PARAMETERS): Evaluation {
  if (text.length > LONGEST)
    return {
      fault: { from: 0, to: text.length, message: `A number of over ${LONGEST} characters is not read.` },
    }
  const plain = plainDecimal(text)
  const read = plain ? { number: plain } : new Expression(text, parameters).read()
  return 'number' in read && Math.abs(read.number.value) > LARGEST ? { fault: tooLarge(text) } : read
}

/** Beyond this no length, fraction or count of a crystal lies, in any unit: it is a slip of the pen. */
const LARGEST = 1e12

const tooLarge = (text: string): NumberFault => ({
  from: 0,
  to: text.length,
  message: 'This number is beyond 10¹²: no length, fraction or count of a crystal is.',
})

const POINT = 46
const MINUS = 45
const PLUS = 43
const UNICODE_MINUS = 0x2212
/** So many digits are an exact whole number, so that one division gives the nearest value. */
const EXACT_DIGITS = 15

/** The short way for what nearly all numbers are: a sign, digits, perhaps a point. */
function plainDecimal(text: string): Evaluated | undefined {
  const first = text.charCodeAt(0)
  const negative = first === MINUS || first === UNICODE_MINUS
  let mantissa = 0
  let digits = 0
  let point = -1
  for (let i = negative || first === PLUS ? 1 : 0; i < text.length; i++) {
    const code = text.charCodeAt(i)
    if (code === POINT && point < 0) point = digits
    else if (code >= 48 && code <= 57) {
      mantissa = mantissa * 10 + (code - 48)
      digits++
    } else return undefined
  }
  if (digits === 0 || digits > EXACT_DIGITS) return undefined
  const decimals = point < 0 ? 0 : digits - point
  const signed = negative ? 0 - mantissa : mantissa
  return {
    value: signed / exact.POWERS_OF_TEN[decimals],
    exact: exact.fromPowerOfTen(signed, -decimals),
    decimals,
    uses: NONE,
  }
}

/** Plain decimals with many digits or an uncertainty have their decimals too. */
function decimalsOf(text: string): number | undefined {
  const digits = PLAIN.exec(text)?.[1]
  if (digits === undefined) return undefined
  const point = digits.indexOf('.')
  return point < 0 ? 0 : digits.length - point - 1
}

interface Term {
  readonly value: number
  readonly exact?: Fraction
  readonly from: number
  readonly to: number
  /** A bare number, after which `pi` may stand. */
  readonly bare?: boolean
}

type Function = (x: Term) => number | string
const FUNCTIONS: Readonly<Record<string, Function>> = {
  sqrt: ({ value }) =>
    value < 0 ? `The square root of ${formatNumber(value)} is no real number.` : Math.sqrt(value),
  sin: ({ value }) => sinDegrees(value),
  cos: ({ value }) => cosDegrees(value),
  tan: ({ value }) => {
    const cosine = cosDegrees(value)
    return cosine === 0 ? `tan(${formatNumber(value)}) is infinite.` : sinDegrees(value) / cosine
  },
}

const WORDS = [...PARAMETER_NAMES, ...Object.keys(FUNCTIONS), 'pi']
const isParameter = (name: string): name is ParameterName =>
  (PARAMETER_NAMES as readonly string[]).includes(name)

const BLANKS = /[\s\u00a0]*/y
const NUMBER = /(\d+(?:\.\d*)?|\.\d+)(?:[eE]([-+\u2212]?\d+))?/y
const UNCERTAINTY = /\(\d+\)/y
const NAME = /[\p{L}_°][\p{L}\p{N}_°]*/uy
const UNIT_OF_LENGTH = /^(å|a|a0|a₀|ang|angstroms?|ångstr[oö]ms?|nm|pm|bohrs?|au|cm|mm|m)$/i
const UNIT_OF_ANGLE = /^(°|degs?|degrees?|rad|radians?)$/i
const NOT_FINITE = /^(inf|infinity|nan)$/i

/** Letters that are taken for digits. */
const DIGIT_LIKE: Readonly<Record<string, string>> = { O: '0', o: '0', l: '1', I: '1' }

/** What people write for an operator or a name that the format spells otherwise. */
const SPELLED_OTHERWISE: Readonly<Record<string, string>> = {
  '×': '*',
  '·': '*',
  '⋅': '*',
  '÷': '/',
  '⁄': '/',
  '∕': '/',
  '√': 'sqrt',
  π: 'pi',
  α: 'alpha',
  β: 'beta',
  γ: 'gamma',
  '–': '-',
  '—': '-',
  '½': '1/2',
  '⅓': '1/3',
  '⅔': '2/3',
  '¼': '1/4',
  '¾': '3/4',
  '²': '^2',
  '³': '^3',
  ',': '.',
}

/** Reads and evaluates one expression. A fault ends it: every method then gives undefined. */
class Expression {
  private position = 0
  private depth = 0
  private fault: NumberFault | undefined
  private pending = false
  private readonly uses: ParameterName[] = []

  constructor(
    private readonly text: string,
    private readonly parameters: Parameters,
  ) {}

  read(): Evaluation {
    const result = this.sum()
    if (result && !this.fault && this.position < this.text.length) this.unexpected()
    if (this.fault) return { fault: this.fault }
    if (this.pending) return { pending: true }
    const { value, exact } = result!
    return {
      number: {
        value: value + 0,
        exact: this.uses.length > 0 ? undefined : exact,
        decimals: decimalsOf(this.text),
        uses: this.uses,
      },
    }
  }

  private fail(from: number, to: number, message: string, replacement?: string): undefined {
    this.fault ??= { from, to, message, replacement }
    return undefined
  }

  private match(pattern: RegExp): RegExpExecArray | null {
    pattern.lastIndex = this.position
    const match = pattern.exec(this.text)
    if (match) this.position = pattern.lastIndex
    return match
  }

  /** The next character after blanks, taken if it is one of these. */
  private take(...characters: string[]): string | undefined {
    this.match(BLANKS)
    const next = this.text[this.position]
    if (next === undefined || !characters.includes(next)) return undefined
    this.position++
    return next
  }

  private sum(): Term | undefined {
    let left = this.product()
    while (left) {
      const operator = this.take('+', '-', '\u2212')
      if (!operator) return left
      const right = this.product()
      if (!right) return undefined
      const minus = operator !== '+'
      const term = right.exact && minus ? exact.negate(right.exact) : right.exact
      left = this.join(
        left,
        right,
        left.value + (minus ? -right.value : right.value),
        left.exact && term && exact.add(left.exact, term),
      )
    }
    return undefined
  }

  private product(): Term | undefined {
    let left = this.factor(false)
    while (left) {
      const operator = this.take('*', '/')
      if (!operator) return left
      if (operator === '*' && this.text[this.position] === '*')
        return this.fail(this.position - 1, this.position + 1, 'A power is written with `^`.', '^')
      const right = this.factor(operator === '/')
      if (!right) return undefined
      left = operator === '*' ? this.times(left, right) : this.over(left, right)
    }
    return undefined
  }

  private times(left: Term, right: Term): Term | undefined {
    return this.join(
      left,
      right,
      left.value * right.value,
      left.exact && right.exact && exact.multiply(left.exact, right.exact),
    )
  }

  private over(left: Term, right: Term): Term | undefined {
    if (right.value === 0 && !this.pending)
      return this.fail(right.from, right.to, 'This is a division by zero.')
    const inverse = right.exact && exact.invert(right.exact)
    return this.join(
      left,
      right,
      left.value / right.value,
      left.exact && inverse && exact.multiply(left.exact, inverse),
    )
  }

  /** A signed power, or `2pi`. */
  private factor(afterSlash: boolean): Term | undefined {
    const left = this.signed()
    if (!left?.bare || left.to !== this.position || !this.text.startsWith('pi', left.to)) return left
    const number = this.text.slice(left.from, left.to)
    const pi = this.power()
    if (!pi) return undefined
    if (afterSlash) {
      const message = `\`/${number}pi\` can be read in two ways: write \`/(${number}*pi)\` or \`/${number}*pi\`.`
      return this.fail(left.from, pi.to, message)
    }
    return this.times(left, pi)
  }

  private signed(): Term | undefined {
    this.match(BLANKS)
    const from = this.position
    let negative = false
    for (let sign = this.take('+', '-', '\u2212'); sign; sign = this.take('+', '-', '\u2212')) {
      if (sign !== '+') negative = !negative
    }
    const term = this.power()
    if (!term || !negative) return term
    return { ...term, value: -term.value, exact: term.exact && exact.negate(term.exact), from }
  }

  private power(): Term | undefined {
    const base = this.atom()
    if (!base || !this.take('^')) return base
    if (!this.enter()) return undefined
    const exponent = this.signed()
    this.depth--
    if (!exponent) return undefined
    const value = base.value ** exponent.value
    if (this.pending) return { ...base, to: exponent.to, bare: false }
    if (base.value === 0 && exponent.value < 0)
      return this.fail(base.from, exponent.to, 'This is a division by zero.')
    if (Number.isNaN(value))
      return this.fail(base.from, exponent.to, 'A fractional power of a negative number is no real number.')
    const whole = exponent.exact?.q === 1 ? exponent.exact.p : undefined
    return this.join(
      base,
      exponent,
      value,
      base.exact && whole !== undefined ? exact.power(base.exact, whole) : undefined,
    )
  }

  private atom(): Term | undefined {
    this.match(BLANKS)
    const from = this.position
    const number = this.match(NUMBER)
    if (number) return this.number(number, from)
    const name = this.match(NAME)
    if (name) return this.named(name[0], from)
    if (!this.take('(')) return this.unexpected()
    return this.inParentheses(from)
  }

  /** After the opening parenthesis, up to and with the closing one. */
  private inParentheses(from: number): Term | undefined {
    if (!this.enter()) return undefined
    const inside = this.sum()
    this.depth--
    if (!inside) return undefined
    if (!this.take(')')) {
      if (this.position < this.text.length) return this.unexpected()
      return this.fail(from, this.position, 'A closing parenthesis is missing.')
    }
    return { value: inside.value, exact: inside.exact, from, to: this.position }
  }

  private enter(): boolean {
    if (++this.depth <= DEEPEST) return true
    this.fail(this.position, this.text.length, `An expression is nested over ${DEEPEST} levels deep.`)
    return false
  }

  private number([text, digits, power]: RegExpExecArray, from: number): Term | undefined {
    this.match(UNCERTAINTY)
    const to = this.position
    if (/^0[xob]/i.test(this.text.slice(from)) && text === '0') {
      const all = /^[\p{L}\p{N}.]*/u.exec(this.text.slice(from))![0]
      return this.fail(
        from,
        from + all.length,
        'Numbers are decimal: hexadecimal, octal and binary ones are not read.',
      )
    }
    const exponent = power === undefined ? 0 : Number(power.replace('\u2212', '-'))
    const value = power === undefined ? Number(digits) : Number(`${digits}e${exponent}`)
    if (!Number.isFinite(value)) return this.tooLarge(from, to)
    return { value, exact: exact.fromDecimal(digits, exponent), from, to, bare: true }
  }

  private named(name: string, from: number): Term | undefined {
    const to = this.position
    if (name === 'pi') return { value: Math.PI, from, to }
    if (Object.hasOwn(FUNCTIONS, name)) return this.call(name, from)
    if (isParameter(name)) return this.parameter(name, from)
    if (NOT_FINITE.test(name)) return this.fail(from, to, `Numbers must be finite: \`${name}\` is not read.`)
    const other = SPELLED_OTHERWISE[name]
    if (other) return this.fail(from, to, `Here \`${name}\` is written \`${other}\`.`, other)
    const digit = DIGIT_LIKE[name]
    if (digit && /[\d.]/.test(this.text[from - 1] ?? ''))
      return this.fail(
        from,
        to,
        `The letter \`${name}\` stands in this number, where the digit \`${digit}\` may be meant.`,
        digit,
      )
    if (/^e$/i.test(name) && from > 0) return this.fail(from, to, 'The power of ten after `e` is missing.')
    const blank = from > 0 && /\s/.test(this.text[from - 1]) ? from - 1 : from
    const cut = to === this.text.length ? '' : undefined
    if (from > 0 && UNIT_OF_LENGTH.test(name))
      return this.fail(
        blank,
        to,
        'No unit stands beside a number: lengths are in the unit that `unit:` states.',
        cut,
      )
    if (from > 0 && UNIT_OF_ANGLE.test(name))
      return this.fail(blank, to, 'No unit stands beside a number: angles are in degrees.', cut)
    const near = nearest(name, WORDS)
    const hint = near
      ? `; did you mean \`${near}\`?`
      : `: known are ${WORDS.map(word => `\`${word}\``).join(', ')}.`
    return this.fail(from, to, `\`${name}\` is no number${hint}`, near)
  }

  private call(name: string, from: number): Term | undefined {
    const to = this.position
    if (!this.take('('))
      return this.fail(from, to, `\`${name}\` needs its argument in parentheses: \`${name}(…)\`.`)
    const argument = this.inParentheses(from)
    if (!argument || this.pending) return argument
    const value = FUNCTIONS[name](argument)
    if (typeof value === 'string') return this.fail(from, argument.to, value)
    if (!Number.isFinite(value)) return this.tooLarge(from, argument.to)
    return { value, from, to: argument.to }
  }

  private parameter(name: ParameterName, from: number): Term | undefined {
    const to = this.position
    const found = this.parameters(name)
    if (found !== 'pending' && 'fault' in found) return this.fail(from, to, `\`${name}\` ${found.fault}.`)
    if (!this.uses.includes(name)) this.uses.push(name)
    if (found !== 'pending') return { value: found.value, from, to }
    this.pending = true
    return { value: 1, from, to } // Stands in, so that the rest is still read.
  }

  private join(left: Term, right: Term, value: number, exactly: Fraction | undefined): Term | undefined {
    const { from } = left
    const { to } = right
    if (!Number.isFinite(value) && !this.pending) return this.tooLarge(from, to)
    return { value: exactly ? exactly.p / exactly.q : value, exact: exactly, from, to }
  }

  private tooLarge(from: number, to: number): undefined {
    return this.fail(from, to, 'This number is too large to be computed with.')
  }

  /** Nothing of the grammar can stand at this position. */
  private unexpected(): undefined {
    if (this.fault) return undefined
    this.match(BLANKS)
    const from = this.position
    const rest = this.text.slice(from)
    if (rest === '') {
      if (this.text.trim() === '') return this.fail(0, this.text.length, 'A number is missing.')
      const last = this.text.trimEnd().length
      return this.fail(last - 1, last, `Something is missing after \`${this.text[last - 1]}\`.`)
    }
    const special = /^\.(inf|nan)\b/i.exec(rest)?.[0]
    if (special)
      return this.fail(from, from + special.length, `Numbers must be finite: \`${special}\` is not read.`)
    const character = String.fromCodePoint(rest.codePointAt(0)!)
    const to = from + character.length
    const other = SPELLED_OTHERWISE[character]
    if (character === ',') return this.fail(from, to, 'The decimal sign is a point.', other)
    if (other) return this.fail(from, to, `Here \`${character}\` is written \`${other}\`.`, other)
    if (/^([\p{L}_°\d(]|\.\d)/u.test(rest)) return this.withoutOperator(from)
    if (character === ')') return this.fail(from, to, 'This parenthesis was not opened.')
    if (character === '[' || character === ']')
      return this.fail(from, to, 'Only round parentheses stand in a number.')
    return this.fail(from, to, `\`${character}\` cannot stand in a number.`)
  }

  /** Two values side by side. A unit, an unknown word and the like have a better answer than "operator missing". */
  private withoutOperator(from: number): undefined {
    this.position = from
    if (this.match(NAME)) {
      const name = this.text.slice(from, this.position)
      if (name !== 'pi' && !isParameter(name) && !Object.hasOwn(FUNCTIONS, name)) {
        this.named(name, from)
        return undefined
      }
    } else if (!this.match(NUMBER)) this.position++
    const piece = this.text.slice(from, this.position)
    const gap = /\s*$/.exec(this.text.slice(0, from))![0] !== ''
    const missing = gap ? 'An operator or a comma is missing' : 'An operator is missing'
    const before = /[\p{L}\p{N}_]+$/u.exec(this.text.slice(0, from))?.[0]
    const example = before && piece !== '(' ? `, such as \`${before}*${piece}\`` : ''
    return this.fail(from, this.position, `${missing} before \`${piece}\`${example}.`)
  }
}

/** Smaller than any length, angle or fraction that means something: what is left of a zero after some arithmetic. */
const NOTHING = 1e-12
const DIGITS = 6

/**
 * A number as the file writes it, without trailing zeros and with an ASCII minus. With `digits`, rounded to so many
 * digits after the point; else to six, or to six significant ones where the number is so small or so large that these
 * would say nothing.
 */
export function formatNumber(x: number, digits?: number): string {
  const size = Math.abs(x)
  if (size < NOTHING) return '0'
  if (size >= LARGE || (digits === undefined && size < SMALL)) return String(Number(x.toPrecision(DIGITS)))
  const text = x.toFixed(digits ?? DIGITS)
  const short = text.includes('.') ? text.replace(/\.?0+$/, '') : text
  return short === '-0' ? '0' : short
}
const SMALL = 1e-4
const LARGE = 1e15

/** `1/3`, `-1/2`, `2`. */
export const formatFraction = ({ p, q }: Fraction): string => (q === 1 ? String(p) : `${p}/${q}`)

/** Denominators of special points and positions divide 24; the others up to it occur on meshes. */
const LARGEST_DENOMINATOR = 24

/** The fraction with the smallest denominator within `tolerance` of x. */
export function recogniseFraction(
  x: number,
  tolerance: number,
  largest = LARGEST_DENOMINATOR,
): Fraction | undefined {
  for (let q = 1; q <= largest; q++) {
    const p = Math.round(x * q)
    if (Math.abs(x - p / q) <= tolerance) return exact.fraction(p, q)
  }
  return undefined
}

/** Roots that hexagonal and cubic geometry brings with it. */
const ROOTS = [3, 2, 6]

/** An expression such as `sqrt(3)/2` or `-2*sqrt(2)/3` within `tolerance` of x, with a denominator of up to 12. */
export function recogniseSurd(x: number, tolerance: number): string | undefined {
  for (const root of ROOTS) {
    const found = recogniseFraction(x / Math.sqrt(root), tolerance / Math.sqrt(root), 12)
    if (!found || found.p === 0) continue
    const { p, q } = found
    const factor = p === 1 ? '' : p === -1 ? '-' : `${p}*`
    return `${factor}sqrt(${root})${q === 1 ? '' : `/${q}`}`
  }
  return undefined
}

/** A number that went through a matrix or two differs from the exact one by less. */
const SAME = 1e-9

/** A fraction of a cell or of a reciprocal vector as the file writes it: exact where it is a simple fraction. */
export function formatCoordinate(x: number, tolerance = SAME): string {
  const found = recogniseFraction(x, tolerance)
  return found ? formatFraction(found) : formatNumber(x)
}

/** `[1/2, 0, 0.123456]` */
export const formatVector = (numbers: readonly number[], tolerance = SAME): string =>
  `[${numbers.map(x => formatCoordinate(x, tolerance)).join(', ')}]`
