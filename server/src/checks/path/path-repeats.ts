import { K_TOLERANCE } from '../../crystal/kspace.ts'
import { removeSegment } from '../../format/edits.ts'
import { displayLabel } from '../../format/path.ts'
import type { Check } from '../check.ts'
import { offer, statedPlace } from '../points/numbers.ts'
import { nameOf, segmentsOf } from './segments.ts'

interface Facts {
  readonly from: string
  readonly to: string
}

export const pathRepeats: Check<Facts> = {
  id: 'path-repeats',
  severity: 'warning',
  needs: ['frames.points'],
  summary: 'A segment of the path has length zero.',
  why: 'The same k-point is computed several times, and plots divide by the length.',
  wrong: 'lattice: {bravais: cP, a: 3.9}\npath: Γ – X – X – M – Γ – R\n',
  right: 'lattice: {bravais: cP, a: 3.9}\npath: Γ – X – M – Γ – R\n',
  *run({ crystal, document, text }) {
    const { zone } = crystal
    if (!zone) return
    for (const checked of segmentsOf(crystal)) {
      const { segment, from, to, ends, length } = checked
      if (length > K_TOLERANCE * zone.inradius) continue
      const [a, b] = [from.point.label, to.point.label]
      const same =
        a === b ? 'its ends are one point' : `${displayLabel(a)} and ${displayLabel(b)} are one point`
      yield {
        at: segment.at,
        message: `${nameOf(checked)} has length zero: ${same}, ${statedPlace(crystal, ends[0])}.`,
        facts: { from: a, to: b },
        fixes: offer(`Remove the segment ${nameOf(checked)}`, removeSegment(text, document.path!, segment)),
      }
    }
  },
}
