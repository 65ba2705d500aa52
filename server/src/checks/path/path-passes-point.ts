import type { BookMatch } from '../../books/match.ts'
import type { Vec3 } from '../../crystal/vector.ts'
import { norm, subtract } from '../../crystal/vector.ts'
import { insertLabels } from '../../format/edits.ts'
import type { Fix } from '../../format/model.ts'
import { displayLabel } from '../../format/path.ts'
import { bookPointsAlong, type Passed } from '../../meaning/placing.ts'
import { plain } from '../../meaning/wording.ts'
import type { Check, Context } from '../check.ts'
import { definePoints, listLabels, offer, statedPlace } from '../points/numbers.ts'
import { type CheckedSegment, nameOf, segmentsOf } from './segments.ts'

interface Facts {
  readonly from: string
  readonly to: string
  readonly passed: readonly { readonly label: string; readonly at: number }[]
}

export const pathPassesPoint: Check<Facts> = {
  id: 'path-passes-point',
  severity: 'info',
  needs: ['labels', 'frames.points'],
  summary: 'A point of the label book lies inside a segment and is not named by the path.',
  why: 'Unnamed, it may fall between two sampled points, and no plot marks it.',
  wrong: "lattice: {bravais: hP, a: 2.46, c: 6.7}\npoints: {K': [2/3, -1/3, 0]}\npath: K – K'\n",
  right:
    "lattice: {bravais: hP, a: 2.46, c: 6.7}\npoints: {M': [1/2, 0, 0], K': [2/3, -1/3, 0]}\npath: K – M' – K'\n",
  *run(context) {
    const { crystal } = context
    const { book } = crystal
    if (!book) return
    const segments = segmentsOf(crystal)
    const named = namedLabels(book, segments)
    for (const checked of segments) {
      const { segment, from, to, ends, ofBook } = checked
      if (ofBook !== undefined) continue
      const passed = onePerPlace(
        bookPointsAlong(book, ends).filter(
          ({ at, point }) => at > AT_END && at < 1 - AT_END && !named.has(point.label),
        ),
      )
      if (passed.length === 0) continue
      const labels = passed.map(({ point }) => point.label)
      yield {
        at: segment.at,
        message: `${nameOf(checked)} passes through ${listLabels(labels)}, at ${passed.map(({ at }) => plain(at, 3)).join(', ')} of its length; the path does not name ${labels.length > 1 ? 'them' : 'it'}.`,
        facts: {
          from: from.point.label,
          to: to.point.label,
          passed: passed.map(({ point, at }) => ({ label: point.label, at })),
        },
        fixes: nameThem(context, checked, passed),
      }
    }
  },
}

/** Points this near to an end, as a part of the length, are the end. */
const AT_END = 1e-5

/** The labels of the book for all places that the path names, and those of their equivalents. */
function namedLabels(book: BookMatch, segments: readonly CheckedSegment[]): Set<string> {
  const labels = new Set(segments.flatMap(({ from, to }) => [from.bookLabel, to.bookLabel]))
  return new Set(
    book.points.flatMap(({ label, equivalentTo }) => (labels.has(label) ? [label, ...equivalentTo] : [])),
  )
}

/** Of several letters for equivalent points the first stands for a place. */
const onePerPlace = (passed: readonly Passed[]): Passed[] =>
  passed.filter((item, i) => !passed.slice(0, i).some(other => Math.abs(other.at - item.at) < AT_END))

/** The book's own letter where the segment passes the book's own place, else a primed one that the file defines. */
function nameThem(
  { text, crystal, document }: Context,
  { segment }: CheckedSegment,
  passed: readonly Passed[],
): Fix[] {
  const taken = new Set([
    ...crystal.bookPoints.keys(),
    ...(document.points?.items ?? []).map(({ label }) => label),
  ])
  const defined: [string, string][] = []
  const labels = passed.map(({ point, fraction }) => {
    const own = crystal.pointOf(point.label)
    if (own && isSame(own.fraction, fraction)) return point.label
    let label = `${point.label}'`
    while (taken.has(label)) label += "'"
    taken.add(label)
    defined.push([label, statedPlace(crystal, fraction)])
    return label
  })
  return offer(`Name ${labels.map(displayLabel).join(', ')} in the path`, [
    ...insertLabels(text, segment, labels),
    ...definePoints(text, document, defined),
  ])
}

const isSame = (u: Vec3, v: Vec3): boolean => norm(subtract(u, v)) < AT_END
