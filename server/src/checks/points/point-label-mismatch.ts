import type { BookPoint } from '../../books/match.ts'
import { distance, type Vec3 } from '../../crystal/vector.ts'
import { insertKeys, scalarText } from '../../format/edits.ts'
import type { Fix } from '../../format/model.ts'
import { displayLabel } from '../../format/path.ts'
import type { Crystal } from '../../meaning/crystal.ts'
import { describePlace, fitOf, type NearPoint, nearestBookPoint } from '../../meaning/placing.ts'
import { inverseLength } from '../../meaning/wording.ts'
import type { Check, Context, Finding } from '../check.ts'
import { booksWith, type Cause, type Diagnosis, type DiagnosedPoint, diagnose } from './diagnosis.ts'
import { convertNumbers, listLabels, offer, rewriteNumbers, statedPlace, writtenPlace } from './numbers.ts'
import { type TurnedReading, turnedReadings } from './readings.ts'
import { numbersOf } from './stated.ts'

interface Facts {
  readonly label: string
  /** The label of the book's point at the coordinates, where there is one. */
  readonly here?: string
  /** The place of the label's own point, as primitive fractions. */
  readonly expected?: Vec3
  /** The book in which the labels fit. */
  readonly book?: string
}

export const pointLabelMismatch: Check<Facts> = {
  id: 'point-label-mismatch',
  severity: 'warning',
  needs: ['labels', 'frames.points'],
  summary: 'A label of the book stands at coordinates that are not those of its point.',
  why: 'The bands are computed at the coordinates and published under the label.',
  wrong: 'lattice: {bravais: cF, a: 6.46}\npoints: {X: [1/2, 1/4, 3/4]}\n',
  right: 'lattice: {bravais: cF, a: 6.46}\npoints: {X: [1/2, 0, 1/2]}\n',
  *run(context) {
    const diagnosis = diagnose(context.crystal)
    if (diagnosis.whole) {
      if (diagnosis.whole.kind === 'turned') yield ofBlock(context, diagnosis, diagnosis.whole)
      return
    }
    yield* ofOtherBooks(context, diagnosis)
    for (const item of diagnosis.points.values())
      if (item.cause?.kind === 'mismatch') yield ofPoint(context, diagnosis, item, item.cause)
  },
}

function ofBlock(context: Context, diagnosis: Diagnosis, { words, axes }: TurnedReading): Finding<Facts> {
  const moved = [...diagnosis.points.values()].filter(({ cause, fit }) => cause?.kind === 'reading' && !fit)
  const labels = moved.map(({ point }) => point.label)
  return {
    at: context.document.points!.key,
    message: `${listLabels(labels)} are not where their labels say, but all of them would be with ${words}.`,
    facts: { label: labels[0] },
    related: moved.map(({ point, entry }) => ({
      at: entry.coordinates!.at,
      message: `not ${displayLabel(point.label)}`,
    })),
    fixes: offer(`Rewrite the points with ${words}`, convertNumbers(context, diagnosis, axes)),
  }
}

/** Letters that mean their points in another book: one finding for each book. */
function* ofOtherBooks({ text, document }: Context, { points }: Diagnosis): Iterable<Finding<Facts>> {
  const byBook = new Map<string, DiagnosedPoint[]>()
  for (const item of points.values()) {
    if (item.cause?.kind !== 'reading' || item.cause.reading.kind !== 'other-book') continue
    const { name } = item.cause.reading
    byBook.set(name, [...(byBook.get(name) ?? []), item])
  }
  for (const [book, items] of byBook) {
    const [first, ...others] = items
    const labels = items.map(({ point }) => point.label)
    yield {
      at: first.entry.key,
      severity: 'info',
      message: `${listLabels(labels)} ${labels.length > 1 ? 'are' : 'is'} at the coordinates of \`${book}\`, not of \`${document.labels}\`, which holds where \`labels\` is not stated.`,
      facts: { label: first.point.label, book },
      related: others.map(({ point, entry }) => ({
        at: entry.key,
        message: `so is ${displayLabel(point.label)}`,
      })),
      fixes: offer(`State \`labels: ${book}\``, insertKeys(text, document, [['labels', book]])),
    }
  }
}

function ofPoint(
  context: Context,
  diagnosis: Diagnosis,
  item: DiagnosedPoint,
  { own, here, swap }: Extract<Cause, { kind: 'mismatch' }>,
): Finding<Facts> {
  const { crystal, text } = context
  const { point, entry } = item
  const { label } = point
  const name = displayLabel(label)
  const right = rightPlace(crystal, point.cartesian, own)
  const written = entry.coordinates ? writtenPlace(text, entry) : name
  const what = here ? displayLabel(here.label) : describePlace(crystal, point.cartesian)
  const place = here
    ? `${written} is ${what}, not ${name}`
    : `${written} is not ${name}: it ${what?.startsWith('a ') ? 'is' : 'lies'} ${what}`
  return {
    at: entry.coordinates?.at ?? entry.at,
    subject: `point:${label}`,
    message: `${place}; ${name} is at ${statedPlace(crystal, right.fraction)}, ${inverseLength(right.distance, crystal.unit)} away.${hint(crystal, item, here, swap)}`,
    facts: { label, here: here?.label, expected: right.fraction },
    fixes: fixesFor(context, diagnosis, item, right.fraction, here?.label, swap),
  }
}

/** A slip moves a point by less than this part of the way to the zone's nearest wall; else another point is meant. */
const SLIP = 0.5

/** The equivalent of the label's point that is meant, and how far away it is: one nearby, or else the book's own. */
function rightPlace(
  crystal: Crystal,
  k: Vec3,
  { label, fraction }: BookPoint,
): Pick<NearPoint, 'fraction' | 'distance'> {
  const near = nearestBookPoint(crystal, k, label)
  if (near && crystal.zone && near.distance < SLIP * crystal.zone.inradius) return near
  return { fraction, distance: distance(k, crystal.cartesianOf(fraction)) }
}

function hint(
  crystal: Crystal,
  { point, stated }: DiagnosedPoint,
  here: BookPoint | undefined,
  swap: string | undefined,
): string {
  if (swap) return ` The file has ${listLabels([point.label, swap])} exchanged.`
  const others = booksWith(crystal, point.label, point.fraction)
  if (others.length > 0) return ` It is ${displayLabel(point.label)} in \`${others.join('`, `')}\`.`
  if (here || !stated) return ''
  const turned = turnedReadings(crystal).find(({ axes, book }) =>
    fitOf(crystal, book, { ...stated, axes }, point.label),
  )
  return turned ? ` It would be there with ${turned.words}.` : ''
}

function fixesFor(
  { crystal, text }: Context,
  { points }: Diagnosis,
  { point, entry, stated }: DiagnosedPoint,
  right: Vec3,
  here: string | undefined,
  swap: string | undefined,
): Fix[] {
  const { label } = point
  const other = swap === undefined ? undefined : points.get(swap)
  const exchange = other && [
    { at: entry.key, text: scalarText(other.point.label) },
    { at: other.entry.key, text: scalarText(label) },
  ]
  const place = stated && rewriteNumbers(text, entry, numbersOf(crystal, right))
  const mayRename = here !== undefined && !other && !crystal.fileDefines(here)
  return [
    ...offer(`Exchange the labels ${listLabels([label, swap ?? ''])}`, exchange ?? []),
    ...offer(`Replace by ${statedPlace(crystal, right)}, the place of ${displayLabel(label)}`, place ?? []),
    ...offer(
      `Label this point ${displayLabel(here ?? '')}`,
      mayRename ? [{ at: entry.key, text: scalarText(here) }] : [],
    ),
  ]
}
