/**
 * What is the matter with the points of a file: each gets one cause at most, and a cause that several share is found
 * once, so that one mistake gives one finding. The rules of points and of the path ask here.
 */
import { labelInOtherBooks } from '../../books/lookup.ts'
import type { BookPoint } from '../../books/match.ts'
import { fixedDimensions, K_TOLERANCE, littleCoGroup } from '../../crystal/kspace.ts'
import { isFiniteVector } from '../../crystal/units.ts'
import { combine, norm, type Vec3 } from '../../crystal/vector.ts'
import type { PointEntry } from '../../format/model.ts'
import type { Crystal, PlacedPoint } from '../../meaning/crystal.ts'
import { bookPointHere, type Fit, fitOf, latticeGroup, type Stated } from '../../meaning/placing.ts'
import { isStale, otherShape } from './family.ts'
import {
  bookReadings,
  centredReadings,
  frameReadings,
  otherBooks,
  type Reading,
  readingsOf,
  twoPiReadings,
} from './readings.ts'
import { type Rounded, roundedFrom, roundedToElement } from './roundings.ts'
import { EXACT, excessOf, type Slack, slackOf, statedOf } from './stated.ts'

export type Cause =
  /** Fits when the file is read in another way. */
  | { readonly kind: 'reading'; readonly reading: Reading; readonly fit: Fit }
  | ({ readonly kind: 'rounded' } & Rounded)
  /** The book's point for other values of the parameters on which it depends. */
  | { readonly kind: 'stale'; readonly own: BookPoint }
  /** A point that the book has for cells of another shape only, told by `condition`. */
  | { readonly kind: 'other-shape'; readonly condition: string }
  /** A label of the book at another place; `swap` is the label that stands at its place. */
  | { readonly kind: 'mismatch'; readonly own: BookPoint; readonly here?: BookPoint; readonly swap?: string }
  /** No label of the book, at a place of the book. */
  | { readonly kind: 'unnamed'; readonly here: Fit }

export interface DiagnosedPoint {
  readonly point: PlacedPoint
  readonly entry: PointEntry
  /** undefined for a point that is stated as part of the way between two others. */
  readonly stated?: Stated
  /** The book's point of the same label. */
  readonly own?: BookPoint
  /** The numbers mean that point, or an equivalent of it. */
  readonly fit?: Fit
  /** The book's point at this place, whatever the label. */
  readonly here?: Fit
  readonly cause?: Cause
  /** Where the point is taken to be, roundings made good. */
  readonly fraction: Vec3
  readonly slack: Slack
}

export interface Diagnosis {
  readonly points: ReadonlyMap<string, DiagnosedPoint>
  /** A reading of the whole block under which all its labels fit, where as stated they do not. */
  readonly whole?: Reading
}

const diagnoses = new WeakMap<Crystal, Diagnosis>()

export function diagnose(crystal: Crystal): Diagnosis {
  let diagnosis = diagnoses.get(crystal)
  if (!diagnosis) {
    diagnosis = new Examination(crystal).result()
    diagnoses.set(crystal, diagnosis)
  }
  return diagnosis
}

interface Case {
  readonly point: PlacedPoint
  readonly entry: PointEntry
  readonly stated?: Stated
  readonly own?: BookPoint
  readonly fit?: Fit
  readonly here?: Fit
}

const GAMMA = 'Γ'
const isLabelOfGamma = (label: string): boolean => label === GAMMA

class Examination {
  private readonly cases: readonly Case[]

  constructor(private readonly crystal: Crystal) {
    // Numbers so large that their products overflow have no place.
    const placed = [...crystal.points.values()].filter(point => isFiniteVector(point.fraction))
    this.cases = placed.map(point => this.caseOf(point))
  }

  result(): Diagnosis {
    const judged = this.readings().map(reading => this.judge(reading))
    const whole = this.wholeReading(judged) ?? this.readingOfLoosePoints()
    const points = this.cases.map(item => this.diagnosed(item, this.causeOf(item, judged, whole)))
    return { points: new Map(points.map(item => [item.point.label, item])), whole }
  }

  /** Other readings are tried where a label does not fit, other books and a missing centring where labels are none of the book. */
  private readings(): Reading[] {
    if (this.suspects.length > 0) return readingsOf(this.crystal)
    const own = this.cases.filter(({ own }) => !own)
    const isNamed = own.some(({ here, point }) => here && !isVariantOf(point.label, here))
    return [
      ...(isNamed ? bookReadings(this.crystal) : []),
      ...(own.length >= SEVERAL ? centredReadings(this.crystal) : []),
    ]
  }

  private caseOf(point: PlacedPoint): Case {
    const { crystal } = this
    const { book } = crystal
    const entry = point.entry!
    const stated = statedOf(crystal, entry)
    const own = book?.points.find(({ label }) => label === point.label)
    if (!book) return { point, entry, stated }
    if (stated) {
      const fit = own && fitOf(crystal, book, stated, own.label)
      return { point, entry, stated, own, fit, here: fit ?? fitOf(crystal, book, stated) }
    }
    const there = bookPointHere(crystal, point.cartesian)
    const here: Fit | undefined = there && {
      label: there.label,
      point: there,
      fraction: point.fraction,
      how: 'exact',
    }
    const fits = there && own && (there === own || there.equivalentTo.includes(own.label))
    return { point, entry, own, here, fit: fits ? here : undefined }
  }

  /** Labels of the book whose numbers are not the book's. */
  private get suspects(): Case[] {
    return this.cases.filter(({ own, fit, stated }) => own && !fit && stated && !isLabelOfGamma(own.label))
  }

  private judge(reading: Reading): Judged {
    const fits = new Map<Case, Fit>()
    let against = 0
    for (const item of this.cases) {
      if (!item.stated || isLabelOfGamma(item.point.label)) continue
      const known =
        reading.book === this.crystal.book ? item.own !== undefined : hasLabel(reading, item.point.label)
      if (!known) continue
      const fit = this.fitIn(reading, item, item.point.label)
      if (fit && !item.fit) fits.set(item, fit)
      else if (!fit && (item.fit || reading.kind === 'centring')) against++
    }
    return { reading, fits, against }
  }

  private fitIn({ axes, book, lattice }: Reading, { stated }: Case, label?: string): Fit | undefined {
    return fitOf(this.crystal, book, { ...stated!, axes }, label, lattice)
  }

  /**
   * The reading under which the whole block makes sense: all labels fit, or where there are none, all points are places
   * of the book.
   */
  private wholeReading(judged: readonly Judged[]): Reading | undefined {
    const { suspects } = this
    const all = judged.filter(({ reading, fits, against }) => {
      if (against > 0 || reading.kind === 'two-pi' || reading.kind === 'other-book') return false
      if (reading.kind === 'frame') return fits.size > 0 && suspects.every(item => fits.has(item))
      return fits.size >= SEVERAL && suspects.every(item => fits.has(item))
    })
    const best = all.reduce((a, b) => (b.fits.size > a.fits.size ? b : a), all[0])
    if (best && (best.fits.size > SEVERAL || !this.isSwap(best)))
      return this.likelier(best, judged) ? best.reading : undefined
    return undefined
  }

  /** Another explanation of the same points goes before: another book, a factor of 2π. */
  private likelier({ reading, fits }: Judged, judged: readonly Judged[]): boolean {
    const before = judged.slice(
      0,
      judged.findIndex(other => other.reading === reading),
    )
    return before.every(other => other.fits.size < fits.size || !isPointwise(other.reading))
  }

  private isSwap({ fits }: Judged): boolean {
    return [...fits.keys()].every(item => this.swapOf(item) !== undefined)
  }

  /** Points without labels of the book speak for another frame when all are places of the book there. */
  private readingOfLoosePoints(): Reading | undefined {
    const loose = this.cases.filter(
      ({ own, here, stated }) => !own && stated && (!here || isReciprocalVector(here)),
    )
    const anyFit = this.cases.some(({ own, fit }) => own && fit && !isLabelOfGamma(own.label))
    if (loose.length < SEVERAL || anyFit) return undefined
    // On a line of the stated frame a point may well be meant: Δ half-way looks like a corner of another frame. A place in
    // general, or Γ of another zone, is hardly meant.
    if (!loose.some(item => item.here || this.freedom(item) > 1)) return undefined
    return frameReadings(this.crystal).find(reading =>
      loose.every(item => {
        const fit = this.fitIn(reading, item)
        return fit && fit.how !== 'rounded' && !isLabelOfGamma(fit.label)
      }),
    )
  }

  private freedom({ point }: Case): number {
    const { lattice } = this.crystal
    const group = latticeGroup(this.crystal)
    return lattice && group ? fixedDimensions(littleCoGroup(point.fraction, group), lattice.dimension) : 0
  }

  /** The label of the file that stands at this one's place while this one stands at that one's. */
  private swapOf({ point, own, fit, here }: Case): string | undefined {
    if (!own || fit || !here) return undefined
    const other = this.cases.find(
      item =>
        item.own &&
        !item.fit &&
        item.point !== point &&
        isLabelOf(here, item.own.label) &&
        item.here !== undefined &&
        isLabelOf(item.here, own.label),
    )
    return other?.point.label
  }

  private causeOf(item: Case, judged: readonly Judged[], whole: Reading | undefined): Cause | undefined {
    const { own, fit, here, stated } = item
    if (whole) {
      const meant = stated && !isLabelOfGamma(item.point.label) ? this.fitIn(whole, item) : undefined
      if (meant) return { kind: 'reading', reading: whole, fit: meant }
    }
    if (fit) return this.roundedTo(item, fit)
    if (!own) return this.causeOfOwnName(item, judged)
    const swap = this.swapOf(item)
    if (!swap) {
      const reading = this.readingOf(item, judged)
      if (reading) return { kind: 'reading', reading: reading.reading, fit: reading.fits.get(item)! }
    }
    if (
      !here &&
      stated &&
      isStale(this.crystal, item.point.fraction, own, slackOf(this.crystal, stated).fraction)
    )
      return { kind: 'stale', own }
    return { kind: 'mismatch', own, here: here?.point, swap }
  }

  /** The reading of a single point that explains most points with it. */
  private readingOf(item: Case, judged: readonly Judged[]): Judged | undefined {
    const fitting = judged.filter(({ reading, fits }) => isPointwise(reading) && fits.has(item))
    return fitting.reduce<Judged | undefined>((a, b) => (a && a.fits.size >= b.fits.size ? a : b), undefined)
  }

  private causeOfOwnName(item: Case, judged: readonly Judged[]): Cause | undefined {
    const { here, point, stated } = item
    const book = this.readingOf(item, judged)
    if (book) return { kind: 'reading', reading: book.reading, fit: book.fits.get(item)! }
    if (here) {
      const rounded = this.roundedTo(item, here)
      if (rounded) return rounded
      if (here.how === 'rounded') return undefined
      // Of a point of another zone the rule about that says what it is.
      const isElsewhere = excessOf(this.crystal, here.fraction) !== undefined
      return isElsewhere || isVariantOf(point.label, here) ? undefined : { kind: 'unnamed', here }
    }
    if (!stated) return undefined
    const condition = otherShape(this.crystal, point, slackOf(this.crystal, stated).fraction)
    if (condition) return { kind: 'other-shape', condition }
    const rounded = roundedToElement(this.crystal, stated, point.fraction)
    return rounded ? { kind: 'rounded', ...rounded } : this.twoPiOf(item)
  }

  /** A name of the file's own says nothing of the place: here only many digits speak for a factor of 2π. */
  private twoPiOf(item: Case): Cause | undefined {
    const { zone } = this.crystal
    const { values, numbers } = item.stated!
    if (
      !zone ||
      !values.every(({ decimals, value }) => value === 0 || (decimals ?? MANY_DIGITS) >= MANY_DIGITS)
    )
      return undefined
    for (const reading of twoPiReadings(this.crystal)) {
      const inReach = norm(combine(numbers, reading.axes)) <= zone.circumradius * BEYOND_ROUNDING
      const fit = inReach ? this.fitIn(reading, item) : undefined
      if (fit && !isLabelOfGamma(fit.label)) return { kind: 'reading', reading, fit }
    }
    return undefined
  }

  private roundedTo({ stated }: Case, fit: Fit): Cause | undefined {
    const rounded = stated && roundedFrom(this.crystal, stated, fit)
    return rounded && { kind: 'rounded', ...rounded }
  }

  private diagnosed(
    { point, entry, stated, own, fit, here }: Case,
    cause: Cause | undefined,
  ): DiagnosedPoint {
    const settled = cause?.kind === 'rounded' ? cause.fraction : ((fit ?? here)?.fraction ?? point.fraction)
    const slack = stated ? slackOf(this.crystal, stated) : EXACT
    return { point, entry, stated, own, fit, here, cause, fraction: settled, slack }
  }
}

interface Judged {
  readonly reading: Reading
  /** The points that fit their label in this reading and not as stated. */
  readonly fits: ReadonlyMap<Case, Fit>
  /** How many fit as stated and not in this reading. */
  readonly against: number
}

/** One point does not speak for a slip that has as many forms as these. */
const SEVERAL = 2
/** So many digits after the point fit a place by accident once in ten thousand times. */
const MANY_DIGITS = 4
/** A corner of the zone is as far from Γ as its circumradius says, but for the digits written. */
const BEYOND_ROUNDING = 1.001
/** What arithmetic leaves of a zero. */
const NOTHING = 1e-9

const isPointwise = ({ kind }: Reading): boolean =>
  kind === 'other-book' || kind === 'two-pi' || kind === 'frame'
const hasLabel = ({ book }: Reading, label: string): boolean =>
  book.points.some(point => point.label === label)
const isLabelOf = ({ point }: Fit, label: string): boolean =>
  point.label === label || point.equivalentTo.includes(label)

/** Γ of another zone. */
const isReciprocalVector = ({ label, fraction }: Fit): boolean =>
  isLabelOfGamma(label) && norm(fraction) > NOTHING

/** `K'` and `K2` are names for equivalents of K. */
function isVariantOf(label: string, { point }: Fit): boolean {
  const base = baseOf(label)
  return [point.label, ...point.equivalentTo].some(other => baseOf(other) === base)
}
/** A label without its index and primes. */
export const baseOf = (label: string): string => label.replace(/[0-9']+$/, '')

/** Is the place of the point in doubt, so that nothing can be said of a path to it? */
export function isInDoubt(diagnosis: Diagnosis, label: string): boolean {
  if (diagnosis.whole) return true
  const cause = diagnosis.points.get(label)?.cause
  if (!cause || cause.kind === 'rounded' || cause.kind === 'unnamed') return false
  return cause.kind !== 'reading' || cause.reading.kind !== 'other-book'
}

/** The other books in which a letter stands at a place. */
export function booksWith(crystal: Crystal, label: string, fraction: Vec3): string[] {
  const { lattice, zone } = crystal
  const group = latticeGroup(crystal)
  if (!lattice || !zone || !group) return []
  const others = otherBooks(crystal).map(({ book }) => book)
  const lookup = { reciprocal: lattice.reciprocal, tolerance: K_TOLERANCE * zone.inradius, kRotations: group }
  return labelInOtherBooks(label, fraction, others, lookup).map(({ book }) => book)
}
