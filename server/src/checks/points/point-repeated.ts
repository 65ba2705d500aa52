import { K_TOLERANCE, areEquivalent } from '../../crystal/kspace.ts'
import { apply, type Mat3, subtract, type Vec3 } from '../../crystal/vector.ts'
import { displayLabel } from '../../format/path.ts'
import type { Check } from '../check.ts'
import { baseOf, type DiagnosedPoint, diagnose, isInDoubt } from './diagnosis.ts'

interface Facts {
  readonly label: string
  readonly first: string
  /** The very same k up to a reciprocal vector; else a rotation of the crystal joins the two. */
  readonly same: boolean
}

export const pointRepeated: Check<Facts> = {
  id: 'point-repeated',
  severity: 'info',
  needs: ['labels', 'frames.points'],
  summary: 'Two labels stand for one k-point, or for equivalent ones.',
  why: 'Both have the same energies: what is computed at one need not be computed at the other.',
  wrong: 'lattice: {bravais: cP, a: 3.9}\npoints:\n  Q: [0.1, 0.2, 0]\n  V: [0, 0.1, 0.2]\n',
  right: 'lattice: {bravais: cP, a: 3.9}\npoints:\n  Q: [0.1, 0.2, 0]\n  V: [0, 0.1, 0.3]\n',
  *run({ crystal }) {
    const { kGroup } = crystal
    const diagnosis = diagnose(crystal)
    if (!kGroup || diagnosis.points.size < 2) return
    const known = new Map<string, DiagnosedPoint>()
    for (const item of diagnosis.points.values()) {
      // Letters of the book for its own equivalent points are as they should be; other faults are told as such.
      if (isInDoubt(diagnosis, item.point.label) || item.fit || item.cause?.kind === 'unnamed') continue
      const name = nameOfStar(item.fraction, kGroup)
      const first = known.get(name)
      if (!first) {
        known.set(name, item)
        continue
      }
      const same = isNothing(subtract(item.fraction, first.fraction))
      const { label } = item.point
      if (!same && baseOf(label) === baseOf(first.point.label)) continue
      yield {
        at: item.entry.key,
        message: same
          ? `${displayLabel(label)} is the same k-point as ${displayLabel(first.point.label)}.`
          : `${displayLabel(label)} is equivalent to ${displayLabel(first.point.label)}: ${howJoined(first.fraction, item.fraction, kGroup)} carries one into the other.`,
        facts: { label, first: first.point.label, same },
        related: [{ at: first.entry.key, message: `${displayLabel(first.point.label)} is here` }],
      }
    }
  },
}

const isNothing = (d: Vec3): boolean => d.every(x => Math.abs(x - Math.round(x)) <= K_TOLERANCE)

const howJoined = (from: Vec3, to: Vec3, group: readonly Mat3[]): string =>
  areEquivalent(from, to, group)?.rotation.every((row, i) => row.every((x, j) => x === (i === j ? -1 : 0)))
    ? 'k → −k'
    : 'a rotation of the crystal'

/** Whole parts of a reciprocal vector to which fractions are rounded: simple fractions are in the middle of a part. */
const PARTS = 720_720
const MIDDLE = 0.37

/** One text for a k-point and all its equivalents, so that many points need no comparison in pairs. */
function nameOfStar(fraction: Vec3, group: readonly Mat3[]): string {
  let least: number[] | undefined
  for (const R of group) {
    const image = apply(R, fraction).map(x => modulo(Math.floor(x * PARTS + MIDDLE)))
    if (!least || isBefore(image, least)) least = image
  }
  return String(least)
}

const modulo = (n: number): number => ((n % PARTS) + PARTS) % PARTS
const isBefore = ([a, b, c]: number[], [p, q, r]: number[]): boolean =>
  a < p || (a === p && (b < q || (b === q && c < r)))
