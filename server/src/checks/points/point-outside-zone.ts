import type { Vec3 } from '../../crystal/vector.ts'
import { fold, zoneNumber } from '../../crystal/zone.ts'
import { displayLabel } from '../../format/path.ts'
import { inverseLength } from '../../meaning/wording.ts'
import type { Check } from '../check.ts'
import { diagnose, isInDoubt } from './diagnosis.ts'
import { offer, rewriteNumbers, statedPlace } from './numbers.ts'
import { excessOf, numbersOf } from './stated.ts'

interface Facts {
  readonly label: string
  /** Distance beyond the nearest wall, in inverse units of the file's length. */
  readonly excess: number
  /** Number of the zone; absent beyond the 100,000th. */
  readonly zone?: number
  /** The shortest equivalent, as primitive fractions. */
  readonly folded: Vec3
}

export const pointOutsideZone: Check<Facts> = {
  id: 'point-outside-zone',
  severity: 'warning',
  needs: ['frames.points'],
  summary: 'A k-point lies outside the first Brillouin zone.',
  why: 'It has the bands of its equivalent inside, but a path drawn to it is another line than the one to the equivalent.',
  wrong: 'lattice: {bravais: cF, a: 6.46}\npoints: {Q: [0.8, 0.1, 0.2]}\n',
  right: 'lattice: {bravais: cF, a: 6.46}\npoints: {Q: [-0.2, 0.1, 0.2]}\n',
  *run({ crystal, text }) {
    const { zone, unit } = crystal
    const diagnosis = diagnose(crystal)
    if (!zone) return
    for (const { point, entry, fraction, slack, stated, here } of diagnosis.points.values()) {
      const { label } = point
      const excess = isInDoubt(diagnosis, label) ? undefined : excessOf(crystal, fraction, slack)
      if (excess === undefined) continue
      const folded = fold(zone, fraction)
      const number = zoneNumber(zone, crystal.cartesianOf(fraction))
      const inside = statedPlace(crystal, folded.fraction)
      const name = displayLabel(label)
      const isNamed = here && here.label !== label
      const what = isNamed
        ? `${name} is ${displayLabel(here.label)} of another zone: it lies`
        : `${name} lies`
      yield {
        at: entry.coordinates?.at ?? entry.at,
        ...(here && { severity: 'info' as const }),
        subject: `point:${label}`,
        message: `${what} ${inverseLength(excess, unit)} outside the first zone, in zone ${number ?? 'beyond the 100,000th'}; its equivalent inside is ${inside}.`,
        facts: { label, excess, zone: number, folded: folded.fraction },
        fixes: stated
          ? offer(`Replace by ${inside}`, rewriteNumbers(text, entry, numbersOf(crystal, folded.fraction)))
          : [], // Not safe: a path to it becomes another line.
      }
    }
  },
}
