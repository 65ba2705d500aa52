/** How the rules of points write coordinates: in messages, and into the file. */
import { combine, inverse, type Mat3, norm, type Vec3 } from '../../crystal/vector.ts'
import { insertKeys, type NewKey, replaceVector, scalarText } from '../../format/edits.ts'
import type { Fix, LatticeDocument, PointEntry, TextEdit } from '../../format/model.ts'
import { formatCoordinate } from '../../format/numbers.ts'
import { displayLabel } from '../../format/path.ts'
import type { Crystal } from '../../meaning/crystal.ts'
import { cartesian, fractions } from '../../meaning/wording.ts'
import type { Context } from '../check.ts'
import type { Diagnosis } from './diagnosis.ts'
import { numbersOf } from './stated.ts'

/** A place as the file would state it: `[1/2, 0, 1/2]`. */
export const statedPlace = (crystal: Crystal, fraction: Vec3): string =>
  fractions(numbersOf(crystal, fraction), crystal.dimension)

/** The same in space: `(0, 0.8678, 0.8678) Å⁻¹`, without what arithmetic leaves of a zero. */
export function cartesianPlace(crystal: Crystal, fraction: Vec3): string {
  const k = crystal.cartesianOf(fraction)
  const size = norm(k)
  return cartesian(
    k.map(x => (Math.abs(x) < SAME * size ? 0 : x)),
    crystal.unit,
  )
}

/** The coordinates as they stand in the file, in one line. */
export const writtenPlace = (text: string, { coordinates }: PointEntry): string =>
  coordinates ? `[${coordinates.items.map(item => (item ? text.slice(...item.at) : '…')).join(', ')}]` : ''

/** Numbers that differ by less are the same number. */
const SAME = 1e-12

/** The edits that put other numbers into a point; those that stay are not touched. */
export function rewriteNumbers(text: string, { coordinates }: PointEntry, numbers: Vec3): TextEdit[] {
  if (!coordinates) return []
  const texts = coordinates.items.map((item, i) =>
    item && Math.abs(item.value - numbers[i]) <= SAME ? undefined : formatCoordinate(numbers[i]),
  )
  return replaceVector(text, coordinates, texts)
}

/** The edits that write all points as what they would be on other axes. */
export const convertNumbers = ({ text }: Context, { points }: Diagnosis, axes: Mat3): TextEdit[] =>
  [...points.values()].flatMap(({ entry, stated }) =>
    stated ? rewriteNumbers(text, entry, combine(combine(stated.numbers, axes), inverse(stated.axes))) : [],
  )

/** The edits that add points to the file. */
export function definePoints(text: string, document: LatticeDocument, points: readonly NewKey[]): TextEdit[] {
  if (points.length === 0) return []
  if (document.points) return insertKeys(text, document.points, points)
  return insertKeys(text, document, [
    ['points', `{${points.map(([label, place]) => `${scalarText(label)}: ${place}`).join(', ')}}`],
  ])
}

/** A fix that changes what is computed; none where the text cannot be edited. */
export const offer = (title: string, edits: readonly TextEdit[]): Fix[] =>
  edits.length > 0 ? [{ title, safe: false, edits }] : []

/** `X`, `X and W`, `X, W and K`, with subscripts. */
export function listLabels(labels: readonly string[]): string {
  const shown = labels.map(displayLabel)
  return shown.length < 2 ? shown.join('') : `${shown.slice(0, -1).join(', ')} and ${shown.at(-1)}`
}

const NAMES_OF_FRAMES = {
  primitive: 'fractions of the primitive reciprocal vectors',
  conventional: 'fractions of the conventional reciprocal vectors',
  cartesian: 'Cartesian numbers',
  '2pi/a': 'Cartesian numbers in units of 2π/a',
} as const
export const frameInWords = (frame: keyof typeof NAMES_OF_FRAMES): string => NAMES_OF_FRAMES[frame]
