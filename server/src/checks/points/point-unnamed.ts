import { scalarText } from '../../format/edits.ts'
import type { PathLabel } from '../../format/model.ts'
import { displayLabel } from '../../format/path.ts'
import type { Check, Context } from '../check.ts'
import { booksWith, diagnose } from './diagnosis.ts'

interface Facts {
  readonly label: string
  /** What the label book calls this place. */
  readonly known: string
}

export const pointUnnamed: Check<Facts> = {
  id: 'point-unnamed',
  severity: 'info',
  needs: ['labels', 'frames.points'],
  summary: 'A point of the label book has a name of the file’s own.',
  why: 'Readers know the point by its letter, and path and book then speak of the same place.',
  wrong: 'lattice: {bravais: cP, a: 3.9}\npoints: {Q: [0, 1/2, 0]}\n',
  right: 'lattice: {bravais: cP, a: 3.9}\npoints: {X: [0, 1/2, 0]}\n',
  *run(context) {
    const { crystal } = context
    const diagnosis = diagnose(crystal)
    if (diagnosis.whole) return
    for (const { point, entry, cause } of diagnosis.points.values()) {
      if (cause?.kind !== 'unnamed') continue
      const { label } = point
      const known = cause.here.label
      const others = booksWith(crystal, label, point.fraction)
      const elsewhere =
        others.length > 0 ? `; ${displayLabel(label)} is its letter in \`${others.join('`, `')}\`` : ''
      yield {
        at: entry.key,
        message: `The label book calls this point ${displayLabel(known)}${elsewhere}.`,
        facts: { label, known },
        fixes: context.crystal.fileDefines(known)
          ? []
          : [
              {
                title: `Rename ${displayLabel(label)} to ${displayLabel(known)}`,
                safe: false, // A name may say more than the letter does: VBM.
                edits: usesOf(context, label)
                  .map(({ at }) => ({ at, text: known }))
                  .concat({ at: entry.key, text: scalarText(known) }),
              },
            ],
      }
    }
  },
}

/** Where a label is used: in the path, and in points between others. */
function usesOf({ document }: Context, label: string): PathLabel[] {
  const inPath = (document.path?.pieces ?? []).flatMap(({ labels }) => labels)
  const inPoints = (document.points?.items ?? []).flatMap(({ between }) => between?.ends ?? [])
  return [...inPath, ...inPoints].filter(use => use.label === label)
}
