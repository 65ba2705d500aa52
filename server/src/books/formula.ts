/**
 * Formulas of the label books, compiled once: conditions and parameters to functions of a cell, coordinates to sums of
 * a fraction and multiples of parameters. Nothing of a lattice file is read here; a faulty formula is a fault of a book.
 */

/** What the formulas of conditions and parameters may name; angles in radians, k-quantities in reciprocal units. */
export const CELL_NAMES = [
  'a',
  'b',
  'c',
  'α',
  'β',
  'γ', // the book's conventional cell
  'kα',
  'kβ',
  'kγ', // angles between the book's reciprocal primitive vectors b₂b₃, b₁b₃, b₁b₂
  'g11',
  'g22',
  'g33',
  'g23',
  'g13',
  'g12', // gᵢⱼ = bᵢ·bⱼ, without the factor (2π)²
] as const

/** Values by place: those of CELL_NAMES, then the parameters of a variation in their order. */
export type Values = ArrayLike<number>
export type Formula = (values: Values) => number

const FUNCTIONS: Record<string, (x: number) => number> = {
  sqrt: Math.sqrt,
  sin: Math.sin,
  cos: Math.cos,
  tan: Math.tan,
}
const TOKEN = /\s*([0-9]+|[A-Za-zΑ-Ωα-ω][A-Za-zΑ-Ωα-ω0-9]*|[-+*/^()])/y

/**
 * @param text  whole numbers, `+ - * / ^` (`^` binds first and to the right), parentheses, sqrt, sin, cos, tan, π, `names`.
 * @throws SyntaxError on anything else.
 */
export function compileFormula(text: string, names: readonly string[]): Formula {
  const next = tokens(text)
  let token = next()
  const take = (): string => {
    const taken = token
    token = next()
    return taken
  }
  const expect = (wanted: string): void => {
    if (take() !== wanted) throw new SyntaxError(`'${wanted}' is missing in '${text}'`)
  }

  function sum(): Formula {
    let left = product()
    while (token === '+' || token === '-') {
      const [l, sign, r] = [left, take() === '+' ? 1 : -1, product()]
      left = v => l(v) + sign * r(v)
    }
    return left
  }
  function product(): Formula {
    let left = signed()
    while (token === '*' || token === '/') {
      const [l, operator, r] = [left, take(), signed()]
      left = operator === '*' ? v => l(v) * r(v) : v => l(v) / r(v)
    }
    return left
  }
  function signed(): Formula {
    if (token !== '-') return power()
    take()
    const inner = signed()
    return v => -inner(v)
  }
  function power(): Formula {
    const base = atom()
    if (token !== '^') return base
    take()
    const exponent = signed()
    return v => base(v) ** exponent(v)
  }
  function atom(): Formula {
    const word = take()
    if (word === '(') {
      const inner = sum()
      expect(')')
      return inner
    }
    if (/^[0-9]/.test(word)) {
      const value = Number(word)
      return () => value
    }
    if (word === 'π') return () => Math.PI
    if (Object.hasOwn(FUNCTIONS, word)) {
      const f = FUNCTIONS[word]
      expect('(')
      const inner = sum()
      expect(')')
      return v => f(inner(v))
    }
    const at = names.indexOf(word)
    if (at < 0) throw new SyntaxError(`'${word}' is not known in '${text}'`)
    return v => v[at]
  }

  const formula = sum()
  if (token !== '') throw new SyntaxError(`'${token}' is left over in '${text}'`)
  return formula
}

/** Gives the tokens one by one, then empty strings. */
function tokens(text: string): () => string {
  let at = 0
  return () => {
    TOKEN.lastIndex = at
    const found = TOKEN.exec(text)
    if (!found) {
      if (text.slice(at).trim()) throw new SyntaxError(`'${text.slice(at)}' cannot be read in '${text}'`)
      return ''
    }
    at = TOKEN.lastIndex
    return found[1]
  }
}

/** All fixed parts of published coordinates are whole multiples of 1/24 (K of the face-centred cubic lattice: 3/8). */
const PARTS = 24

/** A fixed part, counted in 24ths, and a coefficient for each name. */
export interface LinearForm {
  readonly parts: number
  readonly coefficients: readonly number[]
}

/**
 * The form of a text such as `1/2 + ζ`, `(b+c)/2` or `2*t - 1/2`.
 * @throws SyntaxError where it is not linear in `names` or its fixed part is no multiple of 1/24.
 */
export function linearForm(text: string, names: readonly string[]): LinearForm {
  const formula = compileFormula(text, names)
  const fixed = formula(names.map(() => 0))
  const coefficients = names.map((_, i) => round(formula(names.map((_, j) => (i === j ? 1 : 0))) - fixed))
  const probe = names.map((_, i) => 0.3 + i)
  const misfit = formula(probe) - coefficients.reduce((sum, c, i) => sum + c * probe[i], fixed)
  const parts = Math.round(fixed * PARTS)
  // Both differences are rounding errors of a few terms of order one, or of order one themselves.
  if (!(Math.abs(misfit) < 1e-9) || Math.abs(fixed * PARTS - parts) > 1e-9) {
    throw new SyntaxError(`'${text}' is not a fraction plus multiples of ${names.join(', ')}`)
  }
  return { parts, coefficients }
}

/** Coefficients are sixths at the finest; this takes the rounding of the differences off them. */
const round = (x: number): number => Math.round(x * 6) / 6

/** Σ weightᵢ·formᵢ, weights whole. */
export function combineForms(weights: readonly number[], forms: readonly LinearForm[]): LinearForm {
  return {
    parts: weights.reduce((sum, w, i) => sum + w * forms[i].parts, 0),
    coefficients: forms[0].coefficients.map((_, j) =>
      weights.reduce((sum, w, i) => sum + w * forms[i].coefficients[j], 0),
    ),
  }
}

export const evaluateForm = (form: LinearForm, values: Values): number =>
  form.coefficients.reduce((sum, c, i) => sum + c * values[i], form.parts / PARTS)

export const isFixed = (form: LinearForm): boolean => form.coefficients.every(c => c === 0)

/** The fixed part as `p/q` in lowest terms: `1/2`, `-3/8`, `0`. */
export function fractionText({ parts }: LinearForm): string {
  const divisor = gcd(Math.abs(parts), PARTS)
  const [p, q] = [parts / divisor, PARTS / divisor]
  return q === 1 ? `${p}` : `${p}/${q}`
}

/** `1/2 − ζ`, with the signs of print. */
export function formText(form: LinearForm, names: readonly string[]): string {
  const terms = form.coefficients.flatMap((c, i) => (c === 0 ? [] : [[c, names[i]] as const]))
  if (terms.length === 0) return fractionText(form).replace('-', '−')
  const fixed = form.parts === 0 ? '' : fractionText(form).replace('-', '−')
  return terms.reduce((text, [c, name]) => {
    const size = Math.abs(c) === 1 ? name : `${Math.abs(c)}${name}`
    if (text === '') return c < 0 ? `−${size}` : size
    return `${text} ${c < 0 ? '−' : '+'} ${size}`
  }, fixed)
}

const gcd = (m: number, n: number): number => (n === 0 ? m : gcd(n, m % n))
