/** Numbers as other programs write them into lists: decimals with any exponent letter, and fractions. */

export interface ListedNumber {
  readonly value: number
  /** One unit of its last digit; 0 for whole numbers and for fractions of whole numbers, which are exact. */
  readonly digit: number
}

const DECIMAL = /^([-+\u2212]?)(\d+\.?\d*|\.\d+)(?:[eEdDqQ]([-+\u2212]?\d{1,3}))?$/
const FRACTION = /^([-+\u2212]?\d+(?:\.\d*)?)\/(\d+(?:\.\d*)?)$/

/** undefined where the text is no number. */
export function listedNumber(text: string): ListedNumber | undefined {
  const fraction = FRACTION.exec(text)
  if (fraction) {
    const [p, q] = [listedNumber(fraction[1]), listedNumber(fraction[2])]
    if (!p || !q || q.value === 0) return undefined
    return { value: p.value / q.value, digit: 0 }
  }
  const parts = DECIMAL.exec(text)
  if (!parts) return undefined
  const [, sign, digits, exponent = '0'] = parts
  const power = Number(exponent.replace('\u2212', '-'))
  const value = Number(`${sign === '\u2212' ? '-' : sign}${digits}e${power}`)
  if (!Number.isFinite(value)) return undefined
  const point = digits.indexOf('.')
  const decimals = point < 0 ? 0 : digits.length - point - 1
  const whole = decimals === 0 && power >= 0
  return { value, digit: whole ? 0 : 10 ** (power - decimals) }
}
