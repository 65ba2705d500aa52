/**
 * The filters of forms: our own for numbers, units and labels, and those of LiquidJS that are safe and plain. All are
 * strict: what is absent, or no number where one is needed, is a problem and never a 0 or an empty word.
 */
import type { FilterImplOptions, Liquid } from 'liquidjs'
import { IN_ANGSTROM, type Unit, UNITS } from '../../crystal/units.ts'
import { nearest } from '../../format/nearest.ts'
import { displayLabel } from '../../format/path.ts'
import { fraction } from '../../meaning/wording.ts'
import { displayWidth } from '../layout.ts'
import { FormProblem } from './problem.ts'

export interface FilterSpec {
  readonly name: string
  /** What follows the name, as it is written. */
  readonly args: string
  readonly help: string
  /** An example with what it gives; the tests fill it in. */
  readonly example: readonly [form: string, gives: string]
}

type FilterHandler = Extract<FilterImplOptions, (...args: never) => unknown>
type Apply = (value: unknown, args: readonly unknown[], unit: Unit) => unknown
type OwnFilter = FilterSpec & { readonly apply: Apply }

const MOST_DIGITS = 20
const MOST_COLUMNS = 1_000
/** Joined or replaced, no word grows beyond this, in UTF-16 units. */
export const LONGEST_WORD = 20_000_000

const shown = (value: unknown): string => {
  if (value === null || value === undefined) return 'nothing'
  if (Array.isArray(value)) return 'a list'
  if (typeof value === 'object') return 'a group of values'
  return typeof value === 'string' ? JSON.stringify(value) : String(value)
}

function numeric(value: unknown): number {
  const number = typeof value === 'string' && value.trim() !== '' ? Number(value) : value
  if (typeof number === 'number' && Number.isFinite(number)) return number
  throw new FormProblem(`a number is needed, and this is ${shown(value)}`)
}

/** A number, or a list of them, or a list of such lists. */
const eachNumber = (value: unknown, apply: (x: number) => unknown): unknown =>
  Array.isArray(value) ? value.map(item => eachNumber(item, apply)) : apply(numeric(value))

function whole(value: unknown, least: number, most: number, what: string): number {
  const number = numeric(value)
  if (Number.isInteger(number) && number >= least && number <= most) return number
  throw new FormProblem(`${what} is a whole number from ${least} to ${most}, and this is ${shown(value)}`)
}

/** A zero has no sign: `-0.000` would be read as a mistake. */
const unsigned = (text: string): string => (/^-[0.]+(e[+-]?\d+)?$/.test(text) ? text.slice(1) : text)

function fixed(value: unknown, [digits = 6]: readonly unknown[]): unknown {
  const n = whole(digits, 0, MOST_DIGITS, 'the number of decimals')
  return eachNumber(value, x => {
    if (Math.abs(x) >= 1e21) throw new FormProblem(`${x} is too large for decimals: use exponent`)
    return unsigned(x.toFixed(n))
  })
}

function exponent(value: unknown, [digits = 6]: readonly unknown[]): unknown {
  const n = whole(digits, 0, MOST_DIGITS, 'the number of decimals')
  return eachNumber(value, x =>
    unsigned(x.toExponential(n).replace(/e([+-])(\d)$/, (_, sign, digit) => `e${sign}0${digit}`)),
  )
}

function width(value: unknown, [columns, side = 'right']: readonly unknown[]): unknown {
  const n = whole(columns, 1, MOST_COLUMNS, 'a width')
  if (side !== 'right' && side !== 'left')
    throw new FormProblem(`the side is "left" or "right", and this is ${shown(side)}`)
  const pad = (item: unknown): unknown => {
    if (Array.isArray(item)) return item.map(pad)
    const text = word(item)
    const blanks = n - displayWidth(text)
    if (blanks < 0) throw new FormProblem(`"${text}" is wider than ${n} columns`)
    return side === 'left' ? text + ' '.repeat(blanks) : ' '.repeat(blanks) + text
  }
  return pad(value)
}

function word(value: unknown): string {
  if (typeof value === 'string') return value
  if (typeof value === 'number' && Number.isFinite(value)) return String(value)
  if (typeof value === 'boolean') return String(value)
  throw new FormProblem(`a word or a number is needed, and this is ${shown(value)}`)
}

function unitNamed(value: unknown): Unit {
  const unit = UNITS.find(each => each === value)
  if (unit) return unit
  const near = typeof value === 'string' ? nearest(value, UNITS) : undefined
  throw new FormProblem(
    `${shown(value)} is no unit of length${near ? `; did you mean ${near}?` : ''} (${UNITS.join(', ')})`,
  )
}

/** @param sign 1 for lengths, −1 for inverse ones. */
const converted =
  (sign: 1 | -1): Apply =>
  (value, [to, power = 1], from) => {
    const n = whole(power, 1, 3, 'the power')
    const times = (IN_ANGSTROM[from] / IN_ANGSTROM[unitNamed(to)]) ** (sign * n)
    return eachNumber(value, x => x * times)
  }

const GREEK = [
  ...['Alpha', 'Beta', 'Gamma', 'Delta', 'Epsilon', 'Zeta', 'Eta', 'Theta', 'Iota', 'Kappa', 'Lambda', 'Mu'],
  ...['Nu', 'Xi', 'Omicron', 'Pi', 'Rho', '', 'Sigma', 'Tau', 'Upsilon', 'Phi', 'Chi', 'Psi', 'Omega'],
]
const CAPITAL_ALPHA = 0x391
const SMALL_ALPHA = 0x3b1

/** Greek letters by their names, subscripts as plain digits; whatever else is not ASCII is refused. */
function ascii(label: string): string {
  const plain = [...label.normalize('NFKC')]
    .map(character => {
      const code = character.codePointAt(0)!
      const name = GREEK[code - CAPITAL_ALPHA] || GREEK[code - SMALL_ALPHA]?.toLowerCase()
      // The second form of the small sigma stands where the capitals have a gap.
      return code === 0x3c2 ? 'sigma' : name || character
    })
    .join('')
  if (/^[\u0000-\u007f]*$/.test(plain)) return plain
  throw new FormProblem(`"${label}" has signs that ASCII has no name for`)
}

const eachWord = (value: unknown, apply: (text: string) => string): unknown =>
  Array.isArray(value) ? value.map(item => eachWord(item, apply)) : apply(word(value))

const arithmetic =
  (apply: (x: number, y: number) => number): Apply =>
  (value, args) => {
    if (args.length !== 1) throw new FormProblem('one number follows the colon')
    const y = numeric(args[0])
    return eachNumber(value, x => {
      const result = apply(x, y)
      if (Number.isFinite(result)) return result
      throw new FormProblem(`${x} and ${y} give no finite number`)
    })
  }

export const OWN_FILTERS: readonly OwnFilter[] = [
  {
    name: 'fixed',
    args: ': DECIMALS',
    help: 'With so many decimals, 6 where none are said.',
    example: ['{{ 2.5 | fixed: 3 }}', '2.500'],
    apply: fixed,
  },
  {
    name: 'exponent',
    args: ': DECIMALS',
    help: 'With a power of ten of two digits at least, 6 decimals where none are said.',
    example: ['{{ 1234 | exponent: 3 }}', '1.234e+03'],
    apply: exponent,
  },
  {
    name: 'width',
    args: ': COLUMNS',
    help: 'Filled up with blanks, at the right end of its columns; `width: 8, "left"` puts it at the left end. What is wider is refused: columns that run into each other are read as other numbers.',
    example: ['[{{ "X" | width: 4 }}][{{ "X" | width: 4, "left" }}]', '[   X][X   ]'],
    apply: width,
  },
  {
    name: 'fraction',
    args: '',
    help: 'As a fraction where it is one with a small denominator, else with decimals.',
    example: ['{{ 0.375 | fraction }}', '3/8'],
    apply: value => eachNumber(value, fraction),
  },
  {
    name: 'unit',
    args: ': "bohr"',
    help: 'A length in another unit: `angstrom`, `nm` or `bohr`. `unit: "bohr", 3` is for a volume, 2 for an area.',
    example: ['{{ 1 | unit: "nm" }}', '0.1'],
    apply: converted(1),
  },
  {
    name: 'per_unit',
    args: ': "bohr"',
    help: 'An inverse length, such as k, in the inverse of another unit; a power may follow as with `unit`.',
    example: ['{{ 1 | per_unit: "nm" }}', '10'],
    apply: converted(-1),
  },
  {
    name: 'deg',
    args: '',
    help: 'Radians as degrees.',
    example: ['{{ constants.pi | deg }}', '180'],
    apply: value => eachNumber(value, x => (x * 180) / Math.PI),
  },
  {
    name: 'rad',
    args: '',
    help: 'Degrees as radians.',
    example: ['{{ 90 | rad | fixed: 4 }}', '1.5708'],
    apply: value => eachNumber(value, x => (x * Math.PI) / 180),
  },
  {
    name: 'ascii',
    args: '',
    help: 'A label in ASCII.',
    example: ['{{ "Γ" | ascii }} {{ "Σ1" | ascii }}', 'Gamma Sigma1'],
    apply: value => eachWord(value, ascii),
  },
  {
    name: 'unicode',
    args: '',
    help: 'A label with its true subscript.',
    example: ['{{ "X1" | unicode }}', 'X₁'],
    apply: value => eachWord(value, displayLabel),
  },
  {
    name: 'plus',
    args: ': N',
    help: 'Sum.',
    example: ['{{ 2 | plus: 3 }}', '5'],
    apply: arithmetic((x, y) => x + y),
  },
  {
    name: 'minus',
    args: ': N',
    help: 'Difference.',
    example: ['{{ 2 | minus: 3 }}', '-1'],
    apply: arithmetic((x, y) => x - y),
  },
  {
    name: 'times',
    args: ': N',
    help: 'Product.',
    example: ['{{ 2 | times: 3 }}', '6'],
    apply: arithmetic((x, y) => x * y),
  },
  {
    name: 'divided_by',
    args: ': N',
    help: 'Quotient, with its decimals: `| floor` makes it whole.',
    example: ['{{ 3 | divided_by: 2 }}', '1.5'],
    apply: arithmetic((x, y) => x / y),
  },
  {
    name: 'modulo',
    args: ': N',
    help: 'Remainder, from 0 up to N.',
    example: ['{{ 7 | modulo: 4 }}', '3'],
    apply: arithmetic((x, y) => ((x % y) + y) % y),
  },
  {
    name: 'at_least',
    args: ': N',
    help: 'The larger of two.',
    example: ['{{ 2 | at_least: 5 }}', '5'],
    apply: arithmetic(Math.max),
  },
  {
    name: 'at_most',
    args: ': N',
    help: 'The smaller of two.',
    example: ['{{ 2 | at_most: 1 }}', '1'],
    apply: arithmetic(Math.min),
  },
  {
    name: 'abs',
    args: '',
    help: 'Without its sign.',
    example: ['{{ -2 | abs }}', '2'],
    apply: value => eachNumber(value, Math.abs),
  },
  {
    name: 'floor',
    args: '',
    help: 'The next whole number below.',
    example: ['{{ 2.7 | floor }}', '2'],
    apply: value => eachNumber(value, Math.floor),
  },
  {
    name: 'ceil',
    args: '',
    help: 'The next whole number above.',
    example: ['{{ 2.1 | ceil }}', '3'],
    apply: value => eachNumber(value, Math.ceil),
  },
  {
    name: 'round',
    args: '',
    help: 'The nearest whole number; for decimals take `fixed`.',
    example: ['{{ 2.5 | round }}', '3'],
    apply: (value, args) => {
      if (args.length > 0) throw new FormProblem('nothing follows: `fixed` is for decimals')
      return eachNumber(value, Math.round)
    },
  },
  {
    name: 'sum',
    args: '',
    help: 'Of a list of numbers.',
    example: ['{{ mesh.divisions | sum }}', '36'],
    apply: value => list(value).reduce((sum: number, item) => sum + numeric(item), 0),
  },
  {
    name: 'replace',
    args: ': "OLD", "NEW"',
    help: 'Each OLD by NEW; `exponent: 6 | replace: "e", "D"` is what old compilers read.',
    example: ['{{ 0.5 | exponent: 2 | replace: "e", "D" }}', '5.00D-01'],
    apply: (value, args) => {
      if (args.length !== 2) throw new FormProblem('two words follow: what is replaced, and by what')
      const [from, to] = args.map(word)
      return eachWord(value, text => replaced(text, from, to))
    },
  },
  {
    name: 'join',
    args: ': "BETWEEN"',
    help: 'A list as one word, with a blank between where nothing else is said.',
    example: ['{{ mesh.divisions | join: " x " }}', '12 x 12 x 12'],
    apply: (value, [between = ' ']) => {
      const words = list(value).map(word)
      const glue = word(between)
      const length = words.reduce((sum, { length }) => sum + length + glue.length, 0)
      if (length > LONGEST_WORD) throw tooLong()
      return words.join(glue)
    },
  },
]

function replaced(text: string, from: string, to: string): string {
  if (from === '') throw new FormProblem('an empty word cannot be replaced')
  const parts = text.split(from)
  if (text.length + parts.length * to.length > LONGEST_WORD) throw tooLong()
  return parts.join(to)
}

const tooLong = (): FormProblem =>
  new FormProblem(`the word would be longer than ${LONGEST_WORD.toLocaleString('en')} characters`)

function list(value: unknown): readonly unknown[] {
  if (Array.isArray(value)) return value
  throw new FormProblem(`a list is needed, and this is ${shown(value)}`)
}

/** Filters of LiquidJS that forms may use: for words, for lists, for either. */
const TEXT_FILTERS = ['append', 'prepend', 'upcase', 'downcase', 'capitalize', 'strip', 'split', 'truncate']
const LIST_FILTERS = ['concat', 'compact', 'map', 'reverse', 'sort', 'uniq', 'where']
const OTHER_FILTERS = ['first', 'last', 'size', 'slice']
/** Takes what is absent, and is there for it. */
const DEFAULT = 'default'

/** In the order of the reference: our own, then theirs. */
export const LIQUID_FILTERS: readonly string[] = [...TEXT_FILTERS, ...LIST_FILTERS, ...OTHER_FILTERS, DEFAULT]
export const FILTER_NAMES: readonly string[] = [...OWN_FILTERS.map(({ name }) => name), ...LIQUID_FILTERS]

/** Leaves an engine these filters only. */
export function installFilters(engine: Liquid, unit: Unit): void {
  const theirs = new Map(Object.entries(engine.filters))
  for (const name of theirs.keys()) engine.unregisterFilter(name)
  for (const { name, apply } of OWN_FILTERS)
    engine.registerFilter(
      name,
      placed((value, ...args) => apply(value, args, unit)),
    )
  for (const name of LIQUID_FILTERS) {
    const theirFilter = theirs.get(name) as FilterHandler | { handler: FilterHandler }
    const handler = typeof theirFilter === 'function' ? theirFilter : theirFilter.handler
    engine.registerFilter(name, placed(guarded(name, handler)))
  }
}

/** A problem knows the filter that it came up in. */
const placed = (handler: FilterHandler): FilterHandler =>
  function (this, value, ...args) {
    try {
      if (args.some(Array.isArray) && this.token.name !== 'concat')
        throw new FormProblem('a plain value follows the colon, without a name of its own')
      return handler.call(this, value, ...args)
    } catch (error) {
      if (error instanceof FormProblem) error.token ??= this.token
      throw error
    }
  }

function guarded(name: string, handler: FilterHandler): FilterHandler {
  if (name === DEFAULT) return handler
  return function (this, value, ...args) {
    if (TEXT_FILTERS.includes(name)) word(value)
    else if (LIST_FILTERS.includes(name)) list(value)
    else if (value === null || value === undefined) throw new FormProblem('there is no value to work on')
    if (args.some(arg => arg === null || arg === undefined))
      throw new FormProblem('what follows the colon has no value')
    return handler.call(this, value, ...args)
  }
}
