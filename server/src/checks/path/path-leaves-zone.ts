import type { Ends } from '../../crystal/kspace.ts'
import { add, norm, scale, subtract, tidy, type Vec3 } from '../../crystal/vector.ts'
import { type Exit, fold, leavesZone, type Zone } from '../../crystal/zone.ts'
import { standsHere } from '../../format/edits.ts'
import type { Fix } from '../../format/model.ts'
import type { Crystal } from '../../meaning/crystal.ts'
import { bookPointHere } from '../../meaning/placing.ts'
import { plain } from '../../meaning/wording.ts'
import type { Check, Context } from '../check.ts'
import { baseOf } from '../points/diagnosis.ts'
import { cartesianPlace, definePoints, offer, statedPlace } from '../points/numbers.ts'
import { excessOf } from '../points/stated.ts'
import { type CheckedSegment, nameOf, type PathEnd, segmentsOf, subjectOf } from './segments.ts'

interface Facts {
  readonly from: string
  readonly to: string
  /** How much of the segment lies before the crossing, and where it is, in primitive fractions; absent where all lies outside. */
  readonly at?: number
  readonly crossing?: Vec3
}

export const pathLeavesZone: Check<Facts> = {
  id: 'path-leaves-zone',
  severity: 'warning',
  needs: ['frames.points'],
  summary: 'A segment crosses the boundary of the first Brillouin zone.',
  why: 'Beyond it the bands are those of another line inside: the plot goes on under a label that means another point.',
  wrong: 'lattice: {bravais: cF, a: 6.46}\npoints: {Q: [0.8, 0.1, 0.2]}\npath: Γ – L – Q\n',
  right: 'lattice: {bravais: cF, a: 6.46}\npoints: {Q: [1/2, 1/4, 1/2]}\npath: Γ – L – Q\n',
  *run(context) {
    const { crystal } = context
    const { zone } = crystal
    if (!zone) return
    for (const checked of segmentsOf(crystal)) {
      const { segment, from, to, ends } = checked
      const outside = [from, to].filter(
        (end, i) => excessOf(crystal, ends[i], end.diagnosed?.slack) !== undefined,
      )
      if (outside.length === 0) continue
      const crossing = crossingOf(crystal, zone, ends, outside.includes(from))
      const where = crossing
        ? `${outside.includes(from) ? 'enters' : 'leaves'} the first zone at ${statedPlace(crystal, crossing.fraction)}, k = ${cartesianPlace(crystal, crossing.fraction)}, ${plain(crossing.at, 3)} of the way`
        : 'runs outside the first zone'
      const areBookPoints = from.bookLabel !== undefined && to.bookLabel !== undefined
      yield {
        at: segment.at,
        ...(areBookPoints && { severity: 'info' as const }),
        message: `${nameOf(checked)} ${where}.`,
        facts: { from: from.point.label, to: to.point.label, at: crossing?.at, crossing: crossing?.fraction },
        hides: [
          { rule: 'path-off-symmetry', subject: subjectOf(checked) },
          ...outside.map(({ point }) => ({ rule: 'point-outside-zone', subject: `point:${point.label}` })),
        ],
        fixes: foldedFix(context, zone, checked),
      }
    }
  },
}

/** Where a segment crosses the boundary: the last crossing where it comes from outside and ends inside. */
function crossingOf(
  crystal: Crystal,
  zone: Zone,
  [from, to]: Ends,
  beginsOutside: boolean,
): { at: number; fraction: Vec3 } | undefined {
  const exit = (start: Vec3, end: Vec3): Exit | undefined =>
    leavesZone(zone, crystal.cartesianOf(start), crystal.cartesianOf(end))
  const found = beginsOutside ? exit(to, from) : exit(from, to)
  if (!found || found.at === 0) return undefined
  const at = beginsOutside ? 1 - found.at : found.at
  return { at, fraction: add(from, scale(subtract(to, from), at)) }
}

/** More crossings than this are no path that one would fold. */
const MOST_PIECES = 8
/** Parts of a segment shorter than this are none. */
const NOTHING = 1e-6

/** The parts of a segment, each moved into the first zone by the reciprocal vector of the zone it lies in. */
export function foldedParts(crystal: Crystal, zone: Zone, [from, to]: Ends): Ends[] | undefined {
  const along = subtract(to, from)
  const place = (t: number): Vec3 => add(from, scale(along, t))
  const parts: Ends[] = []
  let t = 0
  // Just after the start: a start on the boundary belongs to the zone into which the segment runs.
  let G = fold(zone, place(NOTHING)).shift
  for (let step = 0; step < 3 * MOST_PIECES; step++) {
    const [start, end] = [subtract(place(t), G), subtract(to, G)]
    const exit = leavesZone(zone, crystal.cartesianOf(start), crystal.cartesianOf(end))
    const next = exit ? t + exit.at * (1 - t) : 1
    if (next - t > NOTHING) parts.push([tidy(start), tidy(subtract(place(next), G))])
    if (!exit || 1 - next <= NOTHING) return parts.length <= MOST_PIECES ? parts : undefined
    t = next
    G = add(G, exit.wall.index)
  }
  return undefined
}

function foldedFix({ text, crystal, document }: Context, zone: Zone, checked: CheckedSegment): Fix[] {
  const { segment, piece, index, from, to, ends } = checked
  const parts = foldedParts(crystal, zone, ends)
  if (!parts || segment.steps || !standsHere(text, segment.at)) return []
  const names = new Names(crystal, [from, to])
  const folded = parts.map(part => part.map((k, i) => names.of(k, i === 0 ? 'start' : 'end')).join(' – '))
  // Neighbours of the segment keep its ends as they are.
  const before = index > 0 && names.of(parts[0][0], 'start') !== from.point.label ? [segment.from.text] : []
  const isLast = index === piece.piece.segments.length - 1
  const after = !isLast && names.of(parts.at(-1)![1], 'end') !== to.point.label ? [segment.to.text] : []
  const path = [...before, ...folded, ...after].join(' | ')
  return offer(`Fold it into the first zone: ${folded.join(' | ')}`, [
    { at: segment.at, text: path },
    ...definePoints(text, document, names.definitions),
  ])
}

/** Labels for places: those that the file or the book has, else new ones made from the segment's. */
class Names {
  readonly definitions: [string, string][] = []
  private readonly places: { label: string; fraction: Vec3 }[]

  constructor(
    private readonly crystal: Crystal,
    private readonly ends: readonly [PathEnd, PathEnd],
  ) {
    const own = [...crystal.points.values()]
    const ofBook = [...crystal.bookPoints.values()].filter(({ label }) => !crystal.fileDefines(label))
    this.places = [...own, ...ofBook].map(({ label, fraction }) => ({ label, fraction }))
  }

  of(k: Vec3, side: 'start' | 'end'): string {
    const known = this.places.find(({ fraction }) => norm(subtract(fraction, k)) < NOTHING)
    if (known) return known.label
    const label = this.free(this.baseFor(k, side))
    this.places.push({ label, fraction: k })
    this.definitions.push([label, statedPlace(this.crystal, k)])
    return label
  }

  /** An equivalent of a book point, or of an end, is a primed one; else the two ends name the place between them. */
  private baseFor(k: Vec3, side: 'start' | 'end'): string {
    const here = bookPointHere(this.crystal, this.crystal.cartesianOf(k))
    if (here) return `${here.label}'`
    if (this.isEnd(k, side)) return `${this.ends[side === 'start' ? 0 : 1].point.label}'`
    return this.ends.map(({ point }) => baseOf(point.label)).join('')
  }

  /** Is the place the segment's end, moved by a reciprocal vector? */
  private isEnd(k: Vec3, side: 'start' | 'end'): boolean {
    const { point, diagnosed } = this.ends[side === 'start' ? 0 : 1]
    return subtract(k, diagnosed?.fraction ?? point.fraction).every(
      x => Math.abs(x - Math.round(x)) < NOTHING,
    )
  }

  private free(base: string): string {
    const isTaken = (label: string) =>
      this.places.some(place => place.label === label) || this.crystal.fileDefines(label)
    if (base.endsWith("'")) {
      let label = base
      while (isTaken(label)) label += "'"
      return label
    }
    for (let n = 1; ; n++) if (!isTaken(`${base}${n}`)) return `${base}${n}`
  }
}
