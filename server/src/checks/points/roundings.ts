/** Points that miss a place of higher symmetry because their fractions are rounded. */
import { littleCoGroup } from '../../crystal/kspace.ts'
import { combine, norm, subtract, type Vec3 } from '../../crystal/vector.ts'
import type { NumberValue } from '../../format/model.ts'
import { recogniseFraction } from '../../format/numbers.ts'
import type { Crystal } from '../../meaning/crystal.ts'
import { type Fit, latticeGroup, type Stated } from '../../meaning/placing.ts'
import { isRoundingOf, LARGEST_K_SHIFT } from '../../meaning/rounding.ts'
import { numbersOf } from './stated.ts'

/** A rounding of exact fractions. */
export interface Rounded {
  /** The numbers of the file with the fractions put in. */
  readonly numbers: Vec3
  /** Where that is, as primitive fractions. */
  readonly fraction: Vec3
  /** Which of the numbers are roundings. */
  readonly components: readonly number[]
}

/** The rounding of a book point by which it was recognised; undefined where its exact numbers are no fractions. */
export function roundedFrom(crystal: Crystal, stated: Stated, fit: Fit): Rounded | undefined {
  if (fit.how !== 'rounded' || fit.point.parameterDependent) return undefined
  const numbers = numbersOf(crystal, fit.fraction)
  const components = [0, 1, 2].filter(i => Math.abs(numbers[i] - stated.numbers[i]) > SAME)
  if (!components.every(i => recogniseFraction(numbers[i], SAME))) return undefined
  return { numbers, fraction: fit.fraction, components }
}

/**
 * Numbers that miss a symmetry point, line or plane because fractions in them are rounded: the fewest fractions put in
 * that give the most symmetric place.
 */
export function roundedToElement(
  crystal: Crystal,
  { values, numbers, axes }: Stated,
  fraction: Vec3,
): Rounded | undefined {
  const group = latticeGroup(crystal)
  if (!group) return undefined
  const exact = values.map(value => simpleFractionOf(value))
  const candidates = exact.flatMap((x, i) => (x === undefined ? [] : [i]))
  if (candidates.length === 0) return undefined
  let best: { order: number; rounded: Rounded } | undefined
  const order = littleCoGroup(fraction, group).length
  for (const components of subsets(candidates)) {
    const put = numbers.map((x, i) => (components.includes(i) ? exact[i]! : x)) as unknown as Vec3
    const place = crystal.fractionOf(combine(put, axes))
    if (norm(crystal.cartesianOf(subtract(place, fraction))) > LARGEST_K_SHIFT * crystal.angstrom) continue
    const higher = littleCoGroup(place, group).length
    if (higher <= (best?.order ?? order)) continue
    best = { order: higher, rounded: { numbers: put, fraction: place, components } }
  }
  return best?.rounded
}

/** What arithmetic leaves between two equal fractions. */
const SAME = 1e-9
/** Denominators of symmetry points divide 12 (see symmetryPoints). */
const LARGEST_DENOMINATOR = 12

/** The fraction of which a number is a rounding and no exact value. */
function simpleFractionOf(value: NumberValue): number | undefined {
  for (let q = 1; q <= LARGEST_DENOMINATOR; q++) {
    const exact = Math.round(value.value * q) / q
    if (Math.abs(exact - value.value) <= SAME) return undefined
    if (q > 2 && isRoundingOf(value, exact)) return exact
  }
  return undefined
}

/** The non-empty subsets of a list of three at most, the smaller first. */
const subsets = (items: readonly number[]): number[][] =>
  Array.from({ length: (1 << items.length) - 1 }, (_, bits) =>
    items.filter((_, i) => ((bits + 1) >> i) & 1),
  ).sort((a, b) => a.length - b.length)
