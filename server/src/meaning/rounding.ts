/** When a number of the file is another number, rounded or cut to the digits that were written. */
import type { NumberValue } from '../format/model.ts'

/** One digit is too coarse to mean a fraction by it, and from nine on no program feels the difference. */
const FEWEST_DIGITS = 2
const MOST_DIGITS = 8

/** A rounding moves an atom by less than this, in Å: a displacement of a frozen phonon is larger. */
export const LARGEST_SHIFT = 0.05
/** A rounding moves a k-point by less than this, in Å⁻¹: the usual step of a path. */
export const LARGEST_K_SHIFT = 0.02

/** What arithmetic leaves between two equal numbers of the size of one. */
const SAME = 1e-9

/**
 * Is the number a plain decimal of two to eight digits that an exact value gives when rounded or cut to those digits?
 * Also where it is that value itself: `0.25` and 1/4. How far a rounding may move something, the caller knows.
 */
export function isRoundingOf(number: NumberValue, exact: number): boolean {
  const { decimals, value } = number
  if (decimals === undefined || decimals < FEWEST_DIGITS || decimals > MOST_DIGITS) return false
  const unit = 10 ** -decimals
  if (Math.abs(value - exact) <= unit * (0.5 + SAME)) return true
  const cutOff = Math.sign(exact) * (exact - value)
  return cutOff > 0 && cutOff < unit
}

/** Half a unit of the last digit: how well a plain decimal is known. 0 for whole numbers, fractions and expressions. */
export function uncertainty({ decimals }: NumberValue): number {
  if (decimals === undefined || decimals < FEWEST_DIGITS) return 0
  return 10 ** -decimals / 2
}
