/** How rational combinations of a file's numbers are written: as the numbers themselves were, exact where they were. */
import * as exact from '../format/fraction.ts'
import type { Fraction, NumberValue, ParameterName } from '../format/model.ts'
import { formatFraction, formatNumber, recogniseFraction } from '../format/numbers.ts'

export interface Sum {
  readonly value: number
  readonly exact?: Fraction
  /** All numbers in it are plain decimals: the sum is written as one where it ends. */
  readonly decimal: boolean
  /** All numbers in it are whole: a part of them may as well be a fraction. */
  readonly whole: boolean
  /** The one number that it is, but for its sign. */
  readonly single?: { readonly number: NumberValue; readonly negative: boolean }
}

const ZERO: Fraction = { p: 0, q: 1 }

/** Σ times[i]·numbers[i]. Numbers with the factor 0 play no part. */
export function sumOf(numbers: readonly NumberValue[], times: readonly Fraction[]): Sum {
  const used = numbers.flatMap((number, i) =>
    times[i].p === 0 || number.value === 0 ? [] : [{ number, by: times[i] }],
  )
  let sum: Fraction | undefined = ZERO
  let value = 0
  for (const { number, by } of used) {
    const term = number.exact && exact.multiply(number.exact, by)
    sum = sum && term && exact.add(sum, term)
    value += (number.value * by.p) / by.q
  }
  const [first, ...others] = used
  const single = first && others.length === 0 && first.by.q === 1 && Math.abs(first.by.p) === 1
  return {
    value: sum ? sum.p / sum.q : value,
    exact: sum,
    decimal: used.every(({ number }) => number.decimals !== undefined),
    whole: used.every(({ number }) => number.decimals === 0),
    single: single ? { number: first.number, negative: first.by.p < 0 } : undefined,
  }
}

/** The same plus a whole number. */
export const plusWhole = (sum: Sum, whole: number): Sum => plus(sum, { p: whole, q: 1 })

/** The same plus a fraction. */
export function plus(sum: Sum, by: Fraction): Sum {
  if (by.p === 0) return sum
  const moved = sum.exact && exact.add(sum.exact, by)
  return {
    ...sum,
    value: moved ? moved.p / moved.q : sum.value + by.p / by.q,
    exact: moved,
    single: undefined,
  }
}

/** Relaxed structures have slightly negative fractions. */
const SLIGHTLY = 0.05

/** The fraction of an atom that is not one of the file's own numbers is brought into the cell. */
export function wrapped(sum: Sum): Sum {
  const isOwn = sum.single && !sum.single.negative
  const isInside = sum.value >= -SLIGHTLY && sum.value < 1
  return isOwn || isInside ? sum : plusWhole(sum, -Math.floor(sum.value + SAME))
}

/** Digits after the point of a decimal that ends, and of one that does not. */
const MOST_DECIMALS = 12
const DIGITS = 10
/** Larger denominators are no fraction that a person would write. */
const LARGEST_DENOMINATOR = 9999
/** A fraction of thirds or sixths is one, also where plain decimals add up to it. */
const SIMPLE_DENOMINATOR = 24

/**
 * The text of a sum.
 * @param stays whether the text of an expression that uses these lattice parameters still means the same.
 * @param kind `fraction` writes parts of whole numbers as fractions, `1/2`; `length` as decimals.
 */
export function writeSum(
  sum: Sum,
  stays: (uses: readonly ParameterName[]) => boolean,
  kind: 'fraction' | 'length' = 'length',
): string {
  const { single, value } = sum
  const decimal = sum.decimal && !(sum.whole && kind === 'fraction')
  if (single && stays(single.number.uses))
    return single.negative ? negated(single.number) : single.number.text
  if (!sum.exact) return formatNumber(value, DIGITS)
  const { p, q } = sum.exact
  if (q === 1) return String(p)
  if (decimal) {
    const decimals = decimalsOf(q)
    if (decimals !== undefined) return formatNumber(value, decimals)
    return q <= SIMPLE_DENOMINATOR ? formatFraction(sum.exact) : formatNumber(value, DIGITS)
  }
  return q <= LARGEST_DENOMINATOR ? formatFraction(sum.exact) : formatNumber(value, DIGITS)
}

/** How many decimals 1/q has; undefined where it never ends, or ends late. */
function decimalsOf(q: number): number | undefined {
  for (let digits = 0; digits <= MOST_DECIMALS; digits++) if (10 ** digits % q === 0) return digits
  return undefined
}

const SIMPLE = /^[-+\u2212]?[\d.]+(?:\(\d+\))?(?:\s*\/\s*[\d.]+)?$/

function negated({ text, value }: NumberValue): string {
  if (value === 0) return text
  const bare = text.trim()
  if (!SIMPLE.test(bare)) return `-(${bare})`
  return /^[-\u2212]/.test(bare) ? bare.slice(1) : `-${bare.replace(/^\+/, '')}`
}

/** Far beyond the folds of supercells and the thirds and halves of centrings. */
const LARGEST_FACTOR = 1000
const SAME = 1e-9

/**
 * A matrix entry as the rational number that it is.
 * @throws RangeError where it is none: the caller has made a matrix that is not rational.
 */
export function rational(x: number): Fraction {
  const found = recogniseFraction(x, SAME, LARGEST_FACTOR)
  if (!found) throw new RangeError(`rational: ${x} is no fraction`)
  return found
}
