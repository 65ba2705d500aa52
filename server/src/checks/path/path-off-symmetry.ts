import { segmentSymmetry } from '../../crystal/kspace.ts'
import type { Mat3 } from '../../crystal/vector.ts'
import { latticeGroup } from '../../meaning/placing.ts'
import type { Check } from '../check.ts'
import { nameOf, segmentsOf, subjectOf } from './segments.ts'

interface Facts {
  readonly from: string
  readonly to: string
}

export const pathOffSymmetry: Check<Facts> = {
  id: 'path-off-symmetry',
  severity: 'info',
  needs: ['labels', 'frames.points'],
  summary: 'The inside of a segment lies on no symmetry line or plane of the lattice.',
  why: 'Bands along it have no symmetry labels, and extrema are rarely found there: an end may be another point than meant.',
  wrong: 'lattice: {bravais: cP, a: 3.9}\npoints: {Q: [0.1, 0.2, 0.3]}\npath: Γ – Q\n',
  right: 'lattice: {bravais: cP, a: 3.9}\npoints: {Q: [0.1, 0.2, 0]}\npath: Γ – Q\n',
  *run({ crystal }) {
    const { dimension } = crystal
    const group = latticeGroup(crystal)
    if (!dimension || !group || !hasElements(group)) return
    for (const checked of segmentsOf(crystal)) {
      const { segment, from, to, ends, length, tolerance, ofBook } = checked
      if (ofBook !== undefined || length === 0) continue
      if (segmentSymmetry(ends, group, dimension, tolerance).freedom !== dimension) continue
      yield {
        at: segment.at,
        subject: subjectOf(checked),
        message: `${nameOf(checked)} lies on no symmetry line${dimension === 3 ? ' or plane' : ''} of the lattice.`,
        facts: { from: from.point.label, to: to.point.label },
      }
    }
  },
}

/** A group of ±1 alone leaves no line and no plane to lie on. */
const hasElements = (group: readonly Mat3[]): boolean =>
  group.some(R => R.some((row, i) => row.some((x, j) => x !== (i === j ? R[0][0] : 0))))
