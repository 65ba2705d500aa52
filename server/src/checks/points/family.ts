/** Special points that move with the shape of the cell: the places to which its parameters can move them. */
import { compiled, type Variation } from '../../books/book.ts'
import { evaluateForm } from '../../books/formula.ts'
import { BOOKS } from '../../books/index.ts'
import type { BookMatch, BookPoint } from '../../books/match.ts'
import { PLANE_LATTICES } from '../../books/plane-lattices.ts'
import { K_TOLERANCE } from '../../crystal/kspace.ts'
import { apply, dot, inverse, norm, subtract, type Vec3 } from '../../crystal/vector.ts'
import type { Crystal, PlacedPoint } from '../../meaning/crystal.ts'
import { acrossLine, acrossPlane, isOn, wholeDirection } from '../../meaning/whole-vectors.ts'

/** Digits that leave more open than this, as a fraction, do not tell one family of places from another. */
const LARGEST_SLACK = 1e-3

/**
 * Does a point lie where the book's point would lie for other parameters of the cell?
 * @param slack how well its fractions are known.
 */
export function isStale({ book }: Crystal, fraction: Vec3, own: BookPoint, slack: number): boolean {
  return book !== undefined && isInFamily(book, fraction, own.fraction, acrossFamily(own.slopes), slack)
}

/**
 * The shape of the cell, in the book's words, for which the book has a letter that it does not have here, where a point
 * lies on the line of places that such cells give it. A plane of places would say too little.
 */
export function otherShape(
  { book, document }: Crystal,
  { label, fraction }: PlacedPoint,
  slack: number,
): string | undefined {
  if (!book?.bravais || document.labels === 'none') return undefined
  const { variations } = book.book === PLANE_LATTICES.id ? PLANE_LATTICES : BOOKS[document.labels]
  return variations.find(variation => {
    if (variation.bravais !== book.bravais || !Object.hasOwn(variation.points, label)) return false
    const { one, slopes } = familyOf(variation, label, book)
    const across = acrossFamily(slopes)
    return across?.length === 2 && isInFamily(book, fraction, one, across, slack)
  })?.condition
}

/** One place of a point of a variation, and how it moves with each parameter, in the fractions of the user's cell. */
function familyOf(variation: Variation, label: string, { bookFromPrimitive }: BookMatch) {
  const { parameterNames, points } = compiled(variation)
  const { forms } = points.find(point => point.label === label)!
  // The variations of a type share their cell: κ = M⁻¹ κ′.
  const back = inverse(bookFromPrimitive)
  const carried = (numbers: readonly number[]): Vec3 => apply(back, numbers as unknown as Vec3)
  const zero = parameterNames.map(() => 0)
  return {
    one: carried(forms.map(form => evaluateForm(form, zero))),
    slopes: parameterNames.map((_, i) => carried(forms.map(form => form.coefficients[i]))),
  }
}

function isInFamily(
  { holohedry }: BookMatch,
  fraction: Vec3,
  one: Vec3,
  across: readonly Vec3[] | undefined,
  slack: number,
): boolean {
  if (!across) return false
  const tolerance = Math.min(Math.max(K_TOLERANCE, slack), LARGEST_SLACK)
  return holohedry.some(R => isOn(subtract(apply(R, fraction), one), across, tolerance))
}

/**
 * The whole vectors at right angles to a family of places: two of a line, one of a plane. undefined for a point that
 * does not move, or moves in all directions.
 */
function acrossFamily(slopes: readonly Vec3[]): readonly Vec3[] | undefined {
  const [first, ...others] = slopes.flatMap(slope => {
    const direction = norm(slope) > 0 ? wholeDirection(slope) : undefined
    return direction ? [direction] : []
  })
  if (!first) return undefined
  const normal = others.map(other => acrossPlane(first, other)).find(vector => norm(vector) > 0)
  if (!normal) return acrossLine(first)
  return others.every(other => dot(other, normal) === 0) ? [normal] : undefined
}
