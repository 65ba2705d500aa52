/** How numbers are written in messages, hovers and reports: short, with their unit, exact where they are exact. */
import { INVERSE_SYMBOL, SYMBOL, type Unit } from '../crystal/units.ts'
import type { Vec3 } from '../crystal/vector.ts'
import { formatNumber, recogniseFraction } from '../format/numbers.ts'

/** Enough to tell two places apart, few enough to read. */
const DIGITS = 4

const MINUS = '−'
const SUPERSCRIPTS: Record<string, string> = {
  '-': '⁻',
  0: '⁰',
  1: '¹',
  2: '²',
  3: '³',
  4: '⁴',
  5: '⁵',
  6: '⁶',
  7: '⁷',
  8: '⁸',
  9: '⁹',
}

/** What arithmetic leaves of a zero, in any unit that the format knows. */
const NOISE = 1e-12

/** Fixed digits in the ordinary range, powers of ten outside it. Uses a true minus. */
export function plain(x: number, digits = DIGITS): string {
  if (Math.abs(x) < NOISE) return '0'
  const size = Math.abs(x)
  if (size >= 1e6 || size < 10 ** -digits / 2) {
    const [mantissa, exponent] = x.toExponential(2).split('e')
    const power = [...exponent.replace('+', '')].map(c => SUPERSCRIPTS[c]).join('')
    return `${mantissa.replace('-', MINUS)}·10${power}`
  }
  const fixed = x.toFixed(digits)
  const text = fixed.includes('.') ? fixed.replace(/\.?0+$/, '') : fixed
  return (text === '-0' ? '0' : text).replace('-', MINUS)
}

export const length = (x: number, unit: Unit, digits = DIGITS): string =>
  `${plain(x, digits)} ${SYMBOL[unit]}`
export const inverseLength = (x: number, unit: Unit, digits = DIGITS): string =>
  `${plain(x, digits)} ${INVERSE_SYMBOL[unit]}`
export const degrees = (x: number): string => `${plain(x, 3)}°`
const POWER = ['', '', '²', '³']
/** A length, an area or a volume. */
export const content = (x: number, dimension: number, unit: Unit, digits = DIGITS): string =>
  `${plain(x, digits)} ${SYMBOL[unit]}${POWER[dimension]}`
export const inverseContent = (x: number, dimension: number, unit: Unit, digits = DIGITS): string =>
  dimension === 1 ? inverseLength(x, unit, digits) : `${plain(x, digits)} ${SYMBOL[unit]}⁻${POWER[dimension]}`

export const cartesian = (v: readonly number[], unit?: Unit): string =>
  `(${v.map(x => plain(x)).join(', ')})${unit ? ` ${INVERSE_SYMBOL[unit]}` : ''}`

/** A fraction as a person would write it in the file: `1/3` where it is one, else decimals. Uses an ASCII minus. */
export function fraction(x: number): string {
  const exact = recogniseFraction(x, FRACTION_TOLERANCE)
  if (!exact) return formatNumber(x)
  return exact.q === 1 ? String(exact.p) : `${exact.p}/${exact.q}`
}
/** A fraction this near to a simple one is that one: it went through a matrix or two. */
const FRACTION_TOLERANCE = 1e-9

/** A vector of fractions as the file writes it: `[1/2, 0, 1/2]`, with as many components as the crystal has dimensions. */
export const fractions = (v: Vec3 | readonly number[], dimension = 3): string =>
  `[${v.slice(0, dimension).map(fraction).join(', ')}]`

/** `one thing`, `2 things`. */
export const count = (n: number, thing: string, things = `${thing}s`): string =>
  `${n} ${n === 1 ? thing : things}`
