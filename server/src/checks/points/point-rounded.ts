import { distance, type Vec3 } from '../../crystal/vector.ts'
import { formatCoordinate } from '../../format/numbers.ts'
import { displayLabel } from '../../format/path.ts'
import { describePlace } from '../../meaning/placing.ts'
import { inverseLength } from '../../meaning/wording.ts'
import type { Check } from '../check.ts'
import { diagnose } from './diagnosis.ts'
import { rewriteNumbers, statedPlace } from './numbers.ts'

interface Facts {
  readonly label: string
  /** How far off the numbers are, in inverse units of the file's length. */
  readonly distance: number
  /** The exact place, as primitive fractions. */
  readonly exact: Vec3
}

export const pointRounded: Check<Facts> = {
  id: 'point-rounded',
  severity: 'warning',
  needs: ['unit', 'labels', 'frames.points'],
  summary:
    'A coordinate of a k-point is a rounding of the exact fraction at which a symmetry point, line or plane lies.',
  why: 'A program that looks for symmetry finds a lower one there: degenerate bands split, and the point counts as a general one.',
  wrong: 'lattice: {bravais: hP, a: 3.25, c: 5.2}\npoints: {K: [0.333, 0.333, 0]}\n',
  right: 'lattice: {bravais: hP, a: 3.25, c: 5.2}\npoints: {K: [1/3, 1/3, 0]}\n',
  *run({ crystal, text }) {
    const diagnosis = diagnose(crystal)
    if (diagnosis.whole) return
    for (const { point, entry, cause } of diagnosis.points.values()) {
      if (cause?.kind !== 'rounded') continue
      const { label } = point
      const exact = crystal.cartesianOf(cause.fraction)
      const off = distance(point.cartesian, exact)
      const place = describePlace(crystal, exact)
      const isNamed = place === displayLabel(label)
      const roundings = new Map(
        cause.components.map(i => [
          entry.coordinates!.items[i]!.text.trim(),
          formatCoordinate(cause.numbers[i]),
        ]),
      )
      const said = [...roundings].map(([written, meant]) => `${written} is a rounding of ${meant}`).join(', ')
      yield {
        at: entry.coordinates!.at,
        subject: `point:${label}`,
        message: `${said}: ${displayLabel(label)} misses ${isNamed ? 'its place' : 'a place of higher symmetry'}${place && !isNamed ? ` (${place})` : ''} by ${inverseLength(off, crystal.unit, 5)}.`,
        facts: { label, distance: off, exact: cause.fraction },
        hides: [{ rule: 'point-outside-zone', subject: `point:${label}` }],
        fixes: [
          {
            title: `Replace by ${statedPlace(crystal, cause.fraction)}`,
            safe: true,
            edits: rewriteNumbers(text, entry, cause.numbers),
          },
        ],
      }
    }
  },
}
