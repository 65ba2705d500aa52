import { otherParameters } from '../../books/lookup.ts'
import type { Vec3 } from '../../crystal/vector.ts'
import { displayLabel } from '../../format/path.ts'
import type { Crystal } from '../../meaning/crystal.ts'
import { type NearPoint, nearestBookPoint } from '../../meaning/placing.ts'
import { inverseLength, plain } from '../../meaning/wording.ts'
import type { Check, Context, Finding } from '../check.ts'
import { type DiagnosedPoint, diagnose } from './diagnosis.ts'
import { offer, rewriteNumbers, statedPlace } from './numbers.ts'
import { numbersOf } from './stated.ts'

interface Facts {
  readonly label: string
  /** From the place that fits this lattice, in inverse units of the file's length; absent where the book has no such point here. */
  readonly distance?: number
  /** The place that fits, as primitive fractions. */
  readonly expected?: Vec3
}

export const pointStaleParameter: Check<Facts> = {
  id: 'point-stale-parameter',
  severity: 'warning',
  needs: ['labels', 'frames.points'],
  summary: 'A special point that moves with the shape of the cell does not fit the shape of this one.',
  why: 'Such a point lies where a symmetry line meets the boundary of the zone. Copied from another crystal it stops short of it or lies beyond.',
  wrong: 'lattice: {bravais: tI, a: 3.8, c: 9.5}\npoints: {Σ: [-0.297259, 0.297259, 0.297259]}\n',
  right:
    'lattice: {bravais: tI, a: 3.8, c: 9.5}\npoints: {Σ: [-(1 + a^2/c^2)/4, (1 + a^2/c^2)/4, (1 + a^2/c^2)/4]}\n',
  *run(context) {
    const diagnosis = diagnose(context.crystal)
    if (diagnosis.whole) return
    for (const item of diagnosis.points.values()) {
      const { cause } = item
      if (cause?.kind === 'stale') yield ofPoint(context, item, cause.own.label)
      if (cause?.kind === 'other-shape') yield ofOtherShape(context, item, cause.condition)
    }
  },
}

function ofPoint({ crystal, text }: Context, { point, entry }: DiagnosedPoint, own: string): Finding<Facts> {
  const { label } = point
  const near = nearestBookPoint(crystal, point.cartesian, own)!
  const right = statedPlace(crystal, near.fraction)
  return {
    at: entry.coordinates!.at,
    subject: `point:${label}`,
    message: `${displayLabel(label)} does not fit this lattice: it is ${inverseLength(near.distance, crystal.unit)} from ${right}${inParameters(crystal, point.fraction, near)}. Is it copied from another crystal?`,
    facts: { label, distance: near.distance, expected: near.fraction },
    fixes: offer(`Replace by ${right}`, rewriteNumbers(text, entry, numbersOf(crystal, near.fraction))),
  }
}

function ofOtherShape(
  { crystal }: Context,
  { point, entry }: DiagnosedPoint,
  condition: string,
): Finding<Facts> {
  const { label } = point
  return {
    at: entry.coordinates!.at,
    subject: `point:${label}`,
    message: `The label book has ${displayLabel(label)} for another shape of the cell (${condition}); this one is ${crystal.book!.condition}. Is it copied from another crystal?`,
    facts: { label },
  }
}

/** `, where η = (1 + a²/c²)/4 = 0.29 and not 0.2973`; the value as written only where the label's own coordinates are meant. */
function inParameters({ book, lattice }: Crystal, fraction: Vec3, { point }: NearPoint): string {
  const used = (book?.parameters ?? []).filter((_, i) => point.slopes[i]?.some(x => x !== 0))
  if (!book || !lattice || used.length === 0) return ''
  const written = otherParameters(book, point.label, fraction, {
    reciprocal: lattice.reciprocal,
    tolerance: SAME_PLACE,
  })
  const values = used.map(({ name, value, formula }) => {
    const other = written?.find(parameter => parameter.name === name)
    const not = other && plain(other.value) !== plain(value) ? ` and not ${plain(other.value)}` : ''
    return `${name} = ${formula} = ${plain(value)}${not}`
  })
  return `, where ${values.join(', ')}`
}
/** The parameters are told for numbers that lie on the book's own line of places, to the digits that people write. */
const SAME_PLACE = 1e-3
