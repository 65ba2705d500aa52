import type { Vec3 } from '../../crystal/vector.ts'
import { displayLabel } from '../../format/path.ts'
import { cartesian } from '../../meaning/wording.ts'
import type { Check } from '../check.ts'
import { diagnose } from './diagnosis.ts'
import { offer, rewriteNumbers } from './numbers.ts'
import { numbersOf } from './stated.ts'

interface Facts {
  readonly label: string
  /** The label of the book's point that is meant. */
  readonly meant: string
  /** What the numbers must be multiplied by: 2π or 1/2π. */
  readonly factor: number
}

export const pointTwoPi: Check<Facts> = {
  id: 'point-two-pi',
  severity: 'warning',
  needs: ['labels', 'frames.points'],
  summary: 'A Cartesian k-point is a point of the label book, but for a factor of 2π.',
  why: 'Programs differ in whether the 2π is part of k: this point lies six times too near to Γ, or too far from it.',
  wrong: 'lattice: {bravais: cP, a: 3.9}\nframes: {points: cartesian}\npoints: {X: [0, 0.128205, 0]}\n',
  right: 'lattice: {bravais: cP, a: 3.9}\nframes: {points: cartesian}\npoints: {X: [0, pi/3.9, 0]}\n',
  *run({ crystal, document, text }) {
    const diagnosis = diagnose(crystal)
    for (const { point, entry, cause } of diagnosis.points.values()) {
      if (cause?.kind !== 'reading' || cause.reading.kind !== 'two-pi') continue
      const { label } = point
      const { factor } = cause.reading
      const times = factor > 1 ? 'times 2π' : 'over 2π'
      const unit = document.frames.points === 'cartesian' ? document.unit : undefined
      const meant: Vec3 = numbersOf(crystal, cause.fit.fraction)
      const name = displayLabel(label)
      const isOwn = cause.fit.label === label || cause.fit.point.equivalentTo.includes(label)
      const what = isOwn
        ? `The numbers of ${name} fit its label only ${times}`
        : `The numbers of ${name} are no point of the label book; ${times} they are ${displayLabel(cause.fit.label)}`
      yield {
        at: entry.coordinates!.at,
        message: `${what}: ${cartesian(meant, unit)}.`,
        facts: { label, meant: cause.fit.label, factor },
        fixes: offer(`Replace by the numbers ${times}`, rewriteNumbers(text, entry, meant)),
      }
    }
  },
}
