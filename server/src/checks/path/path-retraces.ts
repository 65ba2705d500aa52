import { areEquivalentSegments, type Equivalence } from '../../crystal/kspace.ts'
import { IDENTITY, type Mat3, norm, subtract, add } from '../../crystal/vector.ts'
import { removeSegment } from '../../format/edits.ts'
import type { Check } from '../check.ts'
import { offer } from '../points/numbers.ts'
import { type CheckedSegment, nameOf, segmentsOf } from './segments.ts'

interface Facts {
  readonly segment: readonly [string, string]
  readonly earlier: readonly [string, string]
  readonly reversed: boolean
}

export const pathRetraces: Check<Facts> = {
  id: 'path-retraces',
  severity: 'info',
  needs: ['labels', 'frames.points'],
  summary: 'A segment is equivalent to an earlier one.',
  why: 'Both have the same bands: they are paid for twice.',
  wrong: 'lattice: {bravais: cP, a: 3.9}\npath: Γ – X | X – Γ\n',
  right: 'lattice: {bravais: cP, a: 3.9}\npath: Γ – X\n',
  *run({ crystal, document, text }) {
    const { kGroup } = crystal
    if (!kGroup) return
    const segments = segmentsOf(crystal)
    for (const [i, later] of segments.entries()) {
      for (const earlier of segments.slice(0, i)) {
        const found = retraces(later, earlier, kGroup)
        if (!found) continue
        yield {
          at: later.segment.at,
          message: `${nameOf(later)} has the bands of ${nameOf(earlier)}: ${howJoined(found)}${found.reversed ? ', backwards' : ''}.`,
          facts: { segment: labelsOf(later), earlier: labelsOf(earlier), reversed: found.reversed },
          related: [{ at: earlier.segment.at, message: `${nameOf(earlier)} is here` }],
          fixes: offer(
            `Remove the segment ${nameOf(later)}`,
            removeSegment(text, document.path!, later.segment),
          ),
        }
        break
      }
    }
  },
}

const labelsOf = ({ from, to }: CheckedSegment) => [from.point.label, to.point.label] as const

/** Lengths of equivalent segments differ by less than this part. */
const SAME_LENGTH = 1e-3

function retraces(later: CheckedSegment, earlier: CheckedSegment, group: readonly Mat3[]) {
  const { length } = later
  if (length === 0 || Math.abs(length - earlier.length) > SAME_LENGTH * length) return undefined
  // The book's own path takes some lines twice, as U–W and W–K.
  if (later.ofBook !== undefined && earlier.ofBook !== undefined && later.ofBook !== earlier.ofBook)
    return undefined
  if (areHalves(later, earlier)) return undefined
  return areEquivalentSegments(earlier.ends, later.ends, group, Math.max(later.tolerance, earlier.tolerance))
}

/** Two halves of one straight line that goes through a middle point in one go: X′–Γ–X. */
function areHalves(later: CheckedSegment, earlier: CheckedSegment): boolean {
  if (later.piece !== earlier.piece || later.index !== earlier.index + 1) return false
  const [start, middle] = earlier.ends
  const bend = subtract(add(start, later.ends[1]), add(middle, middle))
  return norm(bend) <= Math.max(later.tolerance, earlier.tolerance)
}

function howJoined({ rotation, G }: Equivalence): string {
  const isMinus = rotation.every((row, i) =>
    row.every((x, j) => x === -IDENTITY[i][j] + 0 || x === -IDENTITY[i][j]),
  )
  const isOne = rotation.every((row, i) => row.every((x, j) => x === IDENTITY[i][j]))
  if (isOne) return norm(G) === 0 ? 'it is the same line' : 'a reciprocal vector carries one into the other'
  return `${isMinus ? 'k → −k' : 'a rotation of the crystal'} carries one into the other`
}
