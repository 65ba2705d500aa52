/**
 * Three vectors out of any text: a table, a listing, brackets within brackets, the output of a program. Numbers are
 * found by their look and rows by their neighbourhood; the layout of no program is known here.
 */
import { IN_ANGSTROM, type Unit } from '../crystal/units.ts'
import { type Mat3, norm, spanned, type Vec3 } from '../crystal/vector.ts'

export interface ReadNumber {
  readonly value: number
  /** How far a rounding may have moved it: half a unit of the last digit; 0 where it is none (see FEWEST_DIGITS). */
  readonly rounding: number
  /** As a lattice file writes it. */
  readonly text: string
}

export interface ReadVectors {
  /** As they stand, the scale not applied. */
  readonly rows: readonly (readonly ReadNumber[])[]
  /** What all numbers are to be multiplied with. */
  readonly scale: ReadNumber
  /** The unit that the text names near the vectors, the scale included. */
  readonly unit?: Unit
  /** The text says that the vectors are the columns. */
  readonly columns: boolean
}

export type Reading = { readonly read: ReadVectors } | { readonly failure: string }

/** A clipboard that holds more is no table of vectors. */
const LONGEST = 200_000
/** Lines that may stand between two rows, and those above the first that may tell of a scale or a unit. */
const GAP = 2
const ABOVE = 4
const BELOW = 2
/** Rows whose numbers are no larger are in units of something. */
const SMALL = 2
/** One digit after the point is too coarse to be the rounding of something: it is meant. */
const FEWEST_DIGITS = 2
/** Of the product of the lengths: less is no volume. */
const FLAT = 1e-6

const ONE: ReadNumber = { value: 1, rounding: 0, text: '1' }
const HUNDREDTH: ReadNumber = { value: 0.01, rounding: 0, text: '0.01' }

/** Never throws. */
export function readVectors(text: string): Reading {
  if (text.length > LONGEST) return { failure: 'The text is too long to be three vectors.' }
  const commas = hasDecimalCommas(text)
  const lines = text.split(/\r\n?|\n/).map(line => lineOf(line, commas))
  const block = bestBlock(lines) ?? inOneRow(lines)
  if (!block) return { failure: 'There are no three rows of three numbers that span a volume in the text.' }
  const { rows, first, last } = block
  const near = lines.slice(Math.max(0, first - ABOVE), last + 1 + BELOW).map(line => line.text)
  const head = lines.slice(Math.max(0, first - ABOVE), first + 1).map(line => line.text)
  if (head.some(line => RECIPROCAL.test(line)))
    return { failure: 'These look like reciprocal vectors: a lattice is written by its vectors in space.' }
  const scale = block.scale ?? scaleAbove(lines, first, rows)
  if (scale.value < 0)
    return {
      failure: `The factor ${scale.text} in front of the vectors is negative; its meaning is not known.`,
    }
  const named = unitIn(near) ?? unitIn(lines.map(line => line.text))
  return {
    read: {
      rows,
      scale: named === 'pm' ? times(scale, HUNDREDTH) : scale,
      unit: named === 'pm' ? 'angstrom' : named,
      columns: near.some(line => /\bcolumns?\b/i.test(line)),
    },
  }
}

interface Line {
  readonly text: string
  readonly numbers: readonly ReadNumber[]
  /** A factor with a sign of multiplication before the other numbers. */
  readonly factor?: ReadNumber
}

interface Block {
  readonly rows: readonly (readonly ReadNumber[])[]
  readonly first: number
  readonly last: number
  readonly scale?: ReadNumber
}

const EXPONENT = '(?:[eEdD][-+]?\\d{1,3})?'
const DECIMAL = `(?:\\d+(?:\\.\\d*)?|\\.\\d+)${EXPONENT}`
/** No part of a word or of another number; with a denominator or an uncertainty perhaps. */
const NUMBER = new RegExp(
  `(?<![\\p{L}\\p{N}_.])([-+]?)(${DECIMAL})(?:\\s*/\\s*(\\d+(?:\\.\\d*)?))?(\\(\\d+\\))?(?![\\p{L}\\p{N}_.])`,
  'gu',
)

/** Numbers with a comma for a point: no point between digits anywhere, and blanks or semicolons between the numbers. */
function hasDecimalCommas(text: string): boolean {
  if (/\d\.\d/.test(text)) return false
  const rows = text.split('\n').filter(line => /\d,\d/.test(line))
  return (
    rows.length >= 3 &&
    rows.every(
      line =>
        (line.match(/\d+,\d+/g) ?? []).length <= (line.match(/[\s;|\t]+/g) ?? []).length + 1 &&
        !/\d,\d+,/.test(line) &&
        !/,\s/.test(line),
    )
  )
}

function lineOf(raw: string, commas: boolean): Line {
  const text = (commas ? raw.replace(/(\d),(\d)/g, '$1.$2') : raw)
    .replace(/[\u2212\u2012\u2013]/g, '-')
    .replace(/\u00a0/g, ' ')
    // Columns of fixed width run into each other where a number is negative.
    .replace(/(\d)([-+])(?=\d*\.\d)/g, '$1 $2')
  const all = numbersOf(text)
  const plain = numbersOf(text.replace(/\s(?:#|!|%|\/\/).*$/, ''))
  const short = plain.length >= 3 ? plain : all
  const named = short.length > 3 || /[=:]/.test(text) ? numbersOf(text.slice(lastSign(text) + 1)) : short
  const numbers =
    named.length >= 3 || (named.length === 1 && short.length > 1 && short.length <= 3) ? named : short
  const product = /^[^\d]*?([-+]?[\d.]+(?:[eEdD][-+]?\d+)?)\s*[*×·]/u.exec(text)
  const factor = product && numbers.length > 1 ? numbersOf(product[1])[0] : undefined
  return factor && numbers[0]?.value === factor.value
    ? { text, numbers: numbers.slice(1), factor }
    : { text, numbers }
}

const lastSign = (text: string): number => Math.max(text.lastIndexOf('='), text.lastIndexOf(':'))

function numbersOf(text: string): ReadNumber[] {
  return [...text.matchAll(NUMBER)].flatMap(([, sign, decimal, below]): ReadNumber[] => {
    const [mantissa, exponent = '0'] = decimal.toLowerCase().split(/[ed]/)
    const size = Number(`${mantissa}e${exponent}`)
    const value = (sign === '-' ? -size : size) / (below === undefined ? 1 : Number(below))
    if (!Number.isFinite(value)) return []
    const point = mantissa.indexOf('.')
    const decimals = point < 0 ? 0 : mantissa.length - point - 1
    const isMeant =
      below !== undefined ||
      mantissa.replace(/^0*|\./g, '').length < FEWEST_DIGITS ||
      decimals + (exponent === '0' ? 0 : 1) < FEWEST_DIGITS
    const written = `${sign === '-' ? '-' : ''}${mantissa.startsWith('.') ? '0' : ''}${mantissa.replace(/\.$/, '')}`
    const power = Number(exponent) === 0 ? '' : `e${Number(exponent)}`
    return [
      {
        value: value + 0,
        rounding: isMeant ? 0 : 10 ** (Number(exponent) - decimals) / 2,
        text: below === undefined ? `${written}${power}` : `${written}${power}/${below.replace(/\.$/, '')}`,
      },
    ]
  })
}

const INTRODUCES = /lattice|\bcell\b|vectors?\b|\baxes\b|primitive|translation/i
const OTHER =
  /\batom|position|coordinate|\bsites?\b|force|stress|strain|velocit|rotation|symmetry op|dielectric|tensor/i
const RECIPROCAL =
  /recip|\bk[- ]?(?:points?|vectors?|space)|(?:1\s*\/\s*|\bper )(?:å|ang|bohr|nm\b)|(?:å|nm|bohr|a₀)\s*(?:\^?\s*\(?-1|⁻¹)|2\s*\*?\s*(?:π|pi)\s*\//i

/** Three lines that follow each other, with three numbers each; what stands above tells the best of several. */
function bestBlock(lines: readonly Line[]): Block | undefined {
  const held = lines.flatMap((line, i) => (line.numbers.length > 0 ? [i] : []))
  let best: (Block & { readonly score: number }) | undefined
  for (let n = 0; n + 2 < held.length; n++) {
    const at = held.slice(n, n + 3)
    if (at.some((line, i) => i > 0 && line - at[i - 1] > GAP + 1)) continue
    const rows = rowsOf(at.map(i => lines[i]))
    if (!rows || !isVolume(rows)) continue
    const head = headOf(lines, at[0])
    const score =
      (INTRODUCES.test(head) ? 4 : 0) - (OTHER.test(head) ? 5 : 0) - (RECIPROCAL.test(head) ? 6 : 0)
    if (!best || score > best.score) best = { rows, first: at[0], last: at[2], score }
  }
  return best
}

/** The nearest words above a line, or on it. */
function headOf(lines: readonly Line[], first: number): string {
  if (INTRODUCES.test(lines[first].text)) return lines[first].text
  for (let i = first - 1; i >= Math.max(0, first - ABOVE); i--)
    if (/\p{L}{3}/u.test(lines[i].text)) return lines[i].text
  return lines[first].text
}

/** More numbers than three: a running number before them, lengths or other vectors after them. */
function rowsOf(three: readonly Line[]): ReadNumber[][] | undefined {
  const [{ numbers }] = three
  if (numbers.length < 3 || three.some(line => line.numbers.length !== numbers.length)) return undefined
  if (numbers.length > 7) return undefined
  const start = three.map(line => line.numbers[0].value)
  const isCounted =
    numbers.length > 3 &&
    (start.join() === '1,2,3' || start.join() === '0,1,2') &&
    three.every(line => /^-?\d+$/.test(line.numbers[0].text))
  const from = isCounted ? 1 : 0
  return three.map(({ numbers, factor }) =>
    numbers.slice(from, from + 3).map(number => (factor ? times(number, factor) : number)),
  )
}

/** Nine numbers by themselves, a scale before them perhaps: in one line, or each in one of its own. */
function inOneRow(lines: readonly Line[]): Block | undefined {
  const all = { numbers: lines.flatMap(({ factor, numbers }) => (factor ? [factor, ...numbers] : numbers)) }
  const single = lines.findIndex(({ numbers }) => numbers.length === 9 || numbers.length === 10)
  const { numbers, factor }: Pick<Line, 'numbers' | 'factor'> = single >= 0 ? lines[single] : all
  if (numbers.length !== 9 && numbers.length !== 10) return undefined
  const nine = numbers.slice(-9)
  const rows = [nine.slice(0, 3), nine.slice(3, 6), nine.slice(6)]
  if (!isVolume(rows)) return undefined
  const first = single >= 0 ? single : lines.findIndex(line => line.numbers.length > 0)
  const last = single >= 0 ? single : lines.findLastIndex(line => line.numbers.length > 0)
  return { rows, first, last, scale: factor ?? (numbers.length === 10 ? numbers[0] : undefined) }
}

const SCALE = /scal|factor|multipl|\balat\b|\ba\b|(?:lattice|cell) (?:parameter|constant)|units? of/i

/** The last number above the rows, where it stands alone. */
function scaleAbove(
  lines: readonly Line[],
  first: number,
  rows: readonly (readonly ReadNumber[])[],
): ReadNumber {
  const at = lines.findLastIndex((line, i) => i < first && line.numbers.length > 0)
  if (at < 0 || first - at > ABOVE || lines[at].numbers.length !== 1) return ONE
  const [number] = lines[at].numbers
  const isSmall = rows.every(row => row.every(({ value }) => Math.abs(value) <= SMALL))
  const words = lines[at].text.replace(/[eEdD](?=[-+]?\d)/g, '')
  const isBare = !/\p{L}{3}/u.test(words.replace(/ångström|angstroms?|bohr/giu, '')) && !/[=:]/.test(words)
  if (isBare) return !Number.isInteger(number.value) || number.value === 1 || isSmall ? number : ONE
  return isSmall && SCALE.test(words) && number.value > 0 ? number : ONE
}

function isVolume(rows: readonly (readonly ReadNumber[])[]): boolean {
  const m = rows.map(row => row.map(({ value }) => value)) as unknown as Mat3
  const size = m.reduce((product, row) => product * norm(row), 1)
  return size > 0 && spanned(m as readonly Vec3[]) > FLAT * size
}

/** A number in units of another, which is taken as exact. */
export function times(x: ReadNumber, y: ReadNumber): ReadNumber {
  if (y.value === 1) return x
  const value = x.value * y.value
  return {
    value,
    rounding: Math.abs(y.value) * x.rounding,
    text: String(Number(value.toPrecision(12))),
  }
}

const UNITS: readonly (readonly [Unit | 'pm', RegExp])[] = [
  ['angstrom', /å|\bangstr[oö]ms?\b|\bang\b|[([]\s*A\s*[)\]]/i],
  ['bohr', /\bbohrs?\b|\ba\.\s?u\.|\bau\b|a₀|\ba_?0\b|atomic units?/i],
  ['nm', /\bnm\b|nanomet/i],
  ['pm', /\bpm\b|picomet/i],
]

/** The one unit that some lines name; undefined where there is none or more than one. */
function unitIn(lines: readonly string[]): Unit | 'pm' | undefined {
  const named = UNITS.filter(([, words]) => lines.some(line => words.test(line.replace(/\u212b/g, 'Å'))))
  return named.length === 1 ? named[0][0] : undefined
}

/** The vectors in their unit, the scale applied. */
export const vectorsOf = ({ rows, scale }: ReadVectors): ReadNumber[][] =>
  rows.map(row => row.map(number => times(number, scale)))

/**
 * Units in which vectors are those of some crystal, the likeliest first. A cell is no smaller than that of a close-packed
 * metal of small atoms (beryllium: two atoms in 16.2 Å³, shortest vector 2.29 Å; from memory), and no larger than those
 * that are computed (common practice).
 */
export function plausibleUnits(rows: Mat3): Unit[] {
  const volume = spanned(rows)
  const lengths = rows.map(norm)
  return (['angstrom', 'bohr', 'nm'] as const).filter(unit => {
    const x = IN_ANGSTROM[unit]
    const [shortest, longest] = [Math.min(...lengths) * x, Math.max(...lengths) * x]
    return (
      shortest >= SHORTEST &&
      longest <= LONGEST_VECTOR &&
      volume * x ** 3 >= SMALLEST &&
      volume * x ** 3 <= LARGEST
    )
  })
}
/** In Å and Å³. */
const SHORTEST = 2.2
const LONGEST_VECTOR = 60
const SMALLEST = 8
const LARGEST = 20_000
