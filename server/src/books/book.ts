/**
 * The form in which published tables are entered, and their formulas compiled.
 *
 * All books were entered from memory of their sources. Coordinates, places on the zone, little co-groups and equivalent
 * points were checked by computation; a letter, or the order of a path, cannot be proved that way.
 *
 * Labels are spelled as in a path: subscripts are plain digits, Greek letters stand for themselves. Γ is the centre of
 * the zone and never the letter G, Σ never S: books that use the Latin letters for other points keep them (G, S, T′).
 */
import type { BravaisType } from '../crystal/bravais.ts'
import type { Mat3 } from '../crystal/vector.ts'
import { CELL_NAMES, compileFormula, type Formula, type LinearForm, linearForm } from './formula.ts'

/** One of the axes a, b, c. */
export type Axis = 'a' | 'b' | 'c'

/** Space groups for which alone a variation holds. */
export interface Groups {
  readonly numbers: readonly number[]
  /** Point groups (short symbols) that decide it where no number is known. */
  readonly pointGroups: readonly string[]
}

export interface LineEntry {
  /** Coordinates in `t`, which is 0 at the line's first end or at the point it starts from. */
  readonly at: string
  /** `Γ–X`, and `t` at the second; absent where the line runs from a point to the boundary without a named end. */
  readonly ends?: string
  readonly t?: string
}

/**
 * One lattice variation of a book. Formulas are those of `formula.ts`. Conditions and parameters name a, b, c, α, β, γ of
 * the conventional cell (radians) and, for triclinic lattices, the angles kα, kβ, kγ and products gᵢⱼ = bᵢ·bⱼ of the
 * reciprocal vectors; coordinates name the parameters.
 */
export interface Variation {
  readonly bravais: BravaisType
  /** The condition in words; it serves as the variation's name. */
  readonly condition: string
  /** Above zero in this variation. */
  readonly positive?: readonly string[]
  /** Zero in this variation. */
  readonly zero?: readonly string[]
  /** Above zero in the reduced cell that the formulas suppose; where no cell is so, the smallest one serves. */
  readonly reducedCell?: readonly string[]
  readonly groups?: Groups
  /** The axis at the right angles of a monoclinic cell. */
  readonly uniqueAxis?: Axis
  /** The a, b, c of an hR variation are the rhombohedral axes; hexagonal ones (obverse setting) where absent. */
  readonly axes?: 'rhombohedral'
  /** The primitive vectors on the conventional axes, e.g. `(b+c)/2, (a+c)/2, (a+b)/2`. */
  readonly primitive: string
  readonly parameters?: Readonly<Record<string, string>>
  /** Fractions of the reciprocal vectors of `primitive`. */
  readonly points: Readonly<Record<string, string>>
  /** `Γ–X–M | …`; absent in books that recommend none. */
  readonly path?: string
  readonly lines?: Readonly<Record<string, LineEntry>>
  readonly doubts?: readonly string[]
}

export interface Book {
  readonly id: string
  readonly source: string
  readonly variations: readonly Variation[]
}

/**
 * A reciprocal cell with obtuse (or right) angles that is made of shortest vectors: no vector gets shorter by adding
 * another (W. Niggli; here in the weaker form of M. J. Buerger, Z. Kristallogr. 109, 42, 1957).
 */
export const OBTUSE_REDUCED: readonly string[] = [
  'g11 + 2*g12',
  'g22 + 2*g12',
  'g11 + 2*g13',
  'g33 + 2*g13',
  'g22 + 2*g23',
  'g33 + 2*g23',
  // b₁ + b₂ + b₃ is longer than each of the three.
  'g11 + g22 + 2*(g12 + g13 + g23)',
  'g11 + g33 + 2*(g12 + g13 + g23)',
  'g22 + g33 + 2*(g12 + g13 + g23)',
]
/** The same for acute angles. */
export const ACUTE_REDUCED: readonly string[] = [
  'g11 - 2*g12',
  'g22 - 2*g12',
  'g11 - 2*g13',
  'g33 - 2*g13',
  'g22 - 2*g23',
  'g33 - 2*g23',
]

export interface CompiledPoint {
  readonly label: string
  /** One a component; coefficients in the order of the variation's parameters. */
  readonly forms: readonly LinearForm[]
}

export interface CompiledLine {
  readonly label: string
  /** Coefficients of `t`. */
  readonly forms: readonly LinearForm[]
  readonly ends?: readonly [string, string]
  readonly t?: number
}

export interface CompiledVariation {
  readonly entry: Variation
  readonly positive: readonly Formula[]
  readonly zero: readonly Formula[]
  readonly reducedCell: readonly Formula[]
  /** Rows: primitive vectors on the conventional axes. */
  readonly primitive: Mat3
  readonly parameterNames: readonly string[]
  readonly parameters: readonly Formula[]
  readonly points: readonly CompiledPoint[]
  readonly path: readonly (readonly string[])[]
  readonly lines: readonly CompiledLine[]
}

/** Compiled once, when the first lattice of its kind asks for it. */
export function compiled(entry: Variation): CompiledVariation {
  let result = known.get(entry)
  if (!result) {
    result = compile(entry)
    known.set(entry, result)
  }
  return result
}
const known = new WeakMap<Variation, CompiledVariation>()

function compile(entry: Variation): CompiledVariation {
  const parameterNames = Object.keys(entry.parameters ?? {})
  const formulas = (texts: readonly string[] = []) => texts.map(text => compileFormula(text, CELL_NAMES))
  // A parameter may use those before it.
  const names = [...CELL_NAMES, ...parameterNames]
  const parameters = Object.values(entry.parameters ?? {}).map(text => compileFormula(text, names))
  return {
    entry,
    positive: formulas(entry.positive),
    zero: formulas(entry.zero),
    reducedCell: formulas(entry.reducedCell),
    primitive: triple(entry.primitive, 'c').map(
      text => linearForm(text, ['a', 'b', 'c']).coefficients,
    ) as unknown as Mat3,
    parameterNames,
    parameters,
    points: Object.entries(entry.points).map(([label, text]) => ({
      label,
      forms: triple(text, '0').map(part => linearForm(part, parameterNames)),
    })),
    path: (entry.path ?? '').split('|').flatMap(piece => (piece.trim() ? [piece.trim().split('–')] : [])),
    lines: Object.entries(entry.lines ?? {}).map(([label, { at, ends, t }]) => ({
      label,
      forms: triple(at, '0').map(part => linearForm(part, ['t'])),
      ends: ends?.split('–') as [string, string] | undefined,
      t: t === undefined ? undefined : compileFormula(t, [])([]),
    })),
  }
}

/** Three texts; plane lattices write two, `third` goes along the normal. */
function triple(text: string, third: string): string[] {
  const parts = text.split(',')
  return parts.length === 2 ? [...parts, third] : parts
}
