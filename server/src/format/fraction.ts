/**
 * Exact rational numbers. An operation whose result, or a term on the way to it, is no safe integer gives undefined:
 * the caller goes on with the floating-point value.
 */
import type { Fraction } from './model.ts'

function gcd(a: number, b: number): number {
  while (b !== 0) [a, b] = [b, a % b]
  return a
}

/** p/q in lowest terms with q > 0; undefined where q is 0 or a part is no safe integer. */
export function fraction(p: number, q: number): Fraction | undefined {
  if (q === 0 || !Number.isSafeInteger(p) || !Number.isSafeInteger(q)) return undefined
  const divisor = gcd(Math.abs(p), Math.abs(q)) * Math.sign(q)
  return { p: p / divisor + 0, q: q / divisor } // + 0 turns −0 into 0.
}

export const negate = ({ p, q }: Fraction): Fraction => ({ p: 0 - p, q })

export function add(x: Fraction, y: Fraction): Fraction | undefined {
  const shared = gcd(x.q, y.q)
  const left = x.p * (y.q / shared)
  const right = y.p * (x.q / shared)
  if (!Number.isSafeInteger(left) || !Number.isSafeInteger(right)) return undefined
  return fraction(left + right, x.q * (y.q / shared))
}

export function multiply(x: Fraction, y: Fraction): Fraction | undefined {
  const first = gcd(Math.abs(x.p), y.q)
  const second = gcd(Math.abs(y.p), x.q)
  return fraction((x.p / first) * (y.p / second), (x.q / second) * (y.q / first))
}

export const invert = ({ p, q }: Fraction): Fraction | undefined => fraction(q, p)

/** More squarings than this overflow for every base but 0, 1 and −1. */
const LARGEST_POWER = 64

/** x to a whole power. */
export function power(x: Fraction, exponent: number): Fraction | undefined {
  if (!Number.isInteger(exponent) || Math.abs(exponent) > LARGEST_POWER) return undefined
  const base = exponent < 0 ? invert(x) : x
  let result: Fraction | undefined = { p: 1, q: 1 }
  for (let i = 0; i < Math.abs(exponent) && result; i++) result = base && multiply(result, base)
  return result
}

/** Powers of ten that are safe integers. Read, not computed: not every engine's `**` is exact. */
export const POWERS_OF_TEN = Array.from({ length: 16 }, (_, n) => Number(`1e${n}`))

/** mantissa × 10^exponent; undefined where a part of the fraction is no safe integer. */
export function fromPowerOfTen(mantissa: number, exponent: number): Fraction | undefined {
  const scale = POWERS_OF_TEN[Math.abs(exponent)]
  if (mantissa === 0) return { p: 0, q: 1 }
  if (scale === undefined || !Number.isSafeInteger(mantissa)) return undefined
  if (exponent >= 0) return fraction(mantissa * scale, 1)
  let p = mantissa
  let twos = -exponent
  let fives = -exponent
  // The denominator has these two factors only: this is quicker than a general divisor, and most numbers are decimals.
  for (; twos > 0 && p % 2 === 0; twos--) p /= 2
  for (; fives > 0 && p % 5 === 0; fives--) p /= 5
  return { p, q: twos === fives ? POWERS_OF_TEN[twos] : 2 ** twos * 5 ** fives }
}

/** The exact value of digits with a point, times a power of ten: `('1.25', -1)` is 1/8. */
export function fromDecimal(digits: string, exponent = 0): Fraction | undefined {
  const point = digits.indexOf('.')
  if (point < 0) return fromPowerOfTen(Number(digits), exponent)
  const after = digits.length - point - 1
  return fromPowerOfTen(Number(digits.slice(0, point) + digits.slice(point + 1)), exponent - after)
}
