/**
 * What is the matter with the points of a file: each gets one cause at most, and a cause that several share is found
 * once, so that one mistake gives one finding. The rules of points and of the path ask here.
 */
import { compiled } from '../../books/book.ts'
import { evaluateForm } from '../../books/formula.ts'
import { labelInOtherBooks } from '../../books/lookup.ts'
import { BOOKS } from '../../books/index.ts'
import type { BookMatch, BookPoint } from '../../books/match.ts'
import { PLANE_LATTICES } from '../../books/plane-lattices.ts'
import { fixedDimensions, K_TOLERANCE, littleCoGroup } from '../../crystal/kspace.ts'
import { apply, combine, dot, inverse, norm, subtract, tidy, type Vec3 } from '../../crystal/vector.ts'
import { placeInZone } from '../../crystal/zone.ts'
import type { NumberValue, PointEntry } from '../../format/model.ts'
import { recogniseFraction } from '../../format/numbers.ts'
import type { Crystal, PlacedPoint } from '../../meaning/crystal.ts'
import { bookPointHere, type Fit, fitOf, latticeGroup, nearness, type Stated } from '../../meaning/placing.ts'
import { isRoundingOf, LARGEST_K_SHIFT, uncertainty } from '../../meaning/rounding.ts'
import { acrossLine, acrossPlane, isOn, wholeDirection } from '../../meaning/whole-vectors.ts'
import {
  bookReadings,
  centredReadings,
  frameReadings,
  otherBooks,
  type Reading,
  readingsOf,
  twoPiReadings,
} from './readings.ts'

export type Cause =
  /** Fits when the file is read in another way. */
  | { readonly kind: 'reading'; readonly reading: Reading; readonly fit: Fit }
  /** A rounding of exact fractions: `numbers` are those of the file with the fractions put in. */
  | {
      readonly kind: 'rounded'
      readonly numbers: Vec3
      readonly fraction: Vec3
      readonly components: readonly number[]
    }
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

/** How well a point is known from the digits written: each fraction, and as a distance in inverse length. */
export interface Slack {
  readonly fraction: number
  readonly k: number
}
const EXACT: Slack = { fraction: 0, k: 0 }

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
    this.cases = [...crystal.points.values()].map(point => this.caseOf(point))
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
    const shape = otherShape(this.crystal, point, slackOf(this.crystal, stated).fraction)
    if (shape) return shape
    const onElement = roundedToElement(this.crystal, stated, point.fraction)
    if (onElement) return onElement
    return this.twoPiOf(item)
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
      const inReach = norm(combine(numbers, reading.axes)) <= zone.circumradius * (1 + K_TOLERANCE)
      const fit = inReach ? this.fitIn(reading, item) : undefined
      if (fit && !isLabelOfGamma(fit.label)) return { kind: 'reading', reading, fit }
    }
    return undefined
  }

  private roundedTo({ stated }: Case, fit: Fit): Cause | undefined {
    if (!stated || fit.how !== 'rounded' || fit.point.parameterDependent) return undefined
    const numbers = numbersOf(this.crystal, fit.fraction)
    const components = [0, 1, 2].filter(i => Math.abs(numbers[i] - stated.numbers[i]) > SAME)
    if (!components.every(i => recogniseFraction(numbers[i], SAME))) return undefined
    return { kind: 'rounded', numbers, fraction: fit.fraction, components }
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
/** What arithmetic leaves between two equal fractions. */
const SAME = 1e-9

const isPointwise = ({ kind }: Reading): boolean =>
  kind === 'other-book' || kind === 'two-pi' || kind === 'frame'
const hasLabel = ({ book }: Reading, label: string): boolean =>
  book.points.some(point => point.label === label)
const isLabelOf = ({ point }: Fit, label: string): boolean =>
  point.label === label || point.equivalentTo.includes(label)

/** Γ of another zone. */
const isReciprocalVector = ({ label, fraction }: Fit): boolean =>
  isLabelOfGamma(label) && norm(fraction) > SAME

/** `K'` and `K2` are names for equivalents of K. */
function isVariantOf(label: string, { point }: Fit): boolean {
  const base = baseOf(label)
  return [point.label, ...point.equivalentTo].some(other => baseOf(other) === base)
}
/** A label without its index and primes. */
export const baseOf = (label: string): string => label.replace(/[0-9']+$/, '')

/** The numbers of a point with the axes that they refer to; undefined where they cannot be read. */
function statedOf(crystal: Crystal, { coordinates }: PointEntry): Stated | undefined {
  const numbers = crystal.componentsInSpace(coordinates)
  const axes = crystal.pointAxes
  if (!coordinates || !numbers || !axes) return undefined
  return { values: coordinates.items.slice(0, crystal.dimension) as NumberValue[], numbers, axes }
}

/** The numbers with which the file would state a place. */
export const numbersOf = (
  crystal: Crystal,
  fraction: Vec3,
  axes = crystal.pointAxes ?? crystal.lattice!.reciprocal,
): Vec3 => tidy(combine(crystal.cartesianOf(fraction), inverse(axes)))

/** By how much a point is uncertain for the digits that were written. */
function slackOf(crystal: Crystal, { values, axes }: Stated): Slack {
  let fraction = 0
  let k = 0
  values.forEach((value, i) => {
    const doubt = uncertainty(value)
    if (doubt === 0) return
    fraction += doubt * Math.max(...crystal.fractionOf(axes[i]).map(Math.abs))
    k += doubt * norm(axes[i])
  })
  return { fraction, k }
}

/** Does a point lie where the book's point would lie for other parameters of the cell? */
function isStale({ book }: Crystal, fraction: Vec3, own: BookPoint, slack: number): boolean {
  return (
    book !== undefined &&
    own.parameterDependent &&
    isInFamily(book, fraction, own.fraction, own.slopes, slack)
  )
}

/** Is a place, or an equivalent, one of those to which the parameters can move a point? */
function isInFamily(
  book: BookMatch,
  fraction: Vec3,
  one: Vec3,
  slopes: readonly Vec3[],
  slack: number,
): boolean {
  const directions = slopes.flatMap(slope => {
    const direction = norm(slope) > 0 ? wholeDirection(slope) : undefined
    return direction ? [direction] : []
  })
  if (directions.length === 0) return false
  const across = acrossAll(directions)
  const tolerance = Math.max(K_TOLERANCE, slack)
  return book.holohedry.some(R => isOn(subtract(apply(R, fraction), one), across, tolerance))
}

/** A letter that the book has for another variation of this lattice type, at a place where that has it for some cell. */
function otherShape(
  { book, document }: Crystal,
  { label, fraction }: PlacedPoint,
  slack: number,
): Cause | undefined {
  if (!book?.bravais || document.labels === 'none') return undefined
  const { variations } = book.book === PLANE_LATTICES.id ? PLANE_LATTICES : BOOKS[document.labels]
  for (const variation of variations) {
    if (variation.bravais !== book.bravais || !Object.hasOwn(variation.points, label)) continue
    const { parameterNames, points } = compiled(variation)
    const { forms } = points.find(point => point.label === label)!
    // The cell of the book is the same for all variations of a type: κ = M⁻¹ κ′.
    const back = inverse(book.bookFromPrimitive)
    const one = apply(back, forms.map(form => evaluateForm(form, NO_PARAMETERS)) as unknown as Vec3)
    const slopes = parameterNames.map((_, i) =>
      apply(back, forms.map(form => form.coefficients[i]) as unknown as Vec3),
    )
    if (isInFamily(book, fraction, one, slopes, slack))
      return { kind: 'other-shape', condition: variation.condition }
  }
  return undefined
}
/** All zero. No variation has more. */
const NO_PARAMETERS = new Float64Array(16)

/** The whole vectors at right angles to some directions; none where the directions leave no room. */
function acrossAll([first, ...others]: readonly Vec3[]): readonly Vec3[] {
  const normals = others.map(other => acrossPlane(first, other)).filter(normal => norm(normal) > 0)
  if (normals.length === 0) return acrossLine(first)
  return others.every(other => dot(other, normals[0]) === 0) ? [normals[0]] : []
}

/**
 * Numbers that miss a symmetry point, line or plane because fractions in them are rounded: the fewest fractions put in
 * that give the most symmetric place.
 */
function roundedToElement(
  crystal: Crystal,
  { values, numbers, axes }: Stated,
  fraction: Vec3,
): Cause | undefined {
  const group = latticeGroup(crystal)
  if (!group) return undefined
  const exact = values.map(value => simpleFractionOf(value))
  const rounded = exact.flatMap((x, i) => (x === undefined ? [] : [i]))
  if (rounded.length === 0) return undefined
  let best: { order: number; cause: Cause } | undefined
  const order = littleCoGroup(fraction, group).length
  for (const components of subsets(rounded)) {
    const put = numbers.map((x, i) => (components.includes(i) ? exact[i]! : x)) as unknown as Vec3
    const place = crystal.fractionOf(combine(put, axes))
    if (norm(crystal.cartesianOf(subtract(place, fraction))) > LARGEST_K_SHIFT * crystal.angstrom) continue
    const higher = littleCoGroup(place, group).length
    if (higher <= (best?.order ?? order)) continue
    best = { order: higher, cause: { kind: 'rounded', numbers: put, fraction: place, components } }
  }
  return best?.cause
}

/** Denominators of symmetry points divide 12 (see symmetryPoints). */
const LARGEST_DENOMINATOR = 12

/** The fraction of which a number is a rounding and no exact value. */
function simpleFractionOf(value: NumberValue): number | undefined {
  for (let q = 1; q <= LARGEST_DENOMINATOR; q++) {
    const exact = Math.round(value.value * q) / q
    if (Math.abs(exact - value.value) <= SAME) return undefined
    if (q > 2 && isRoundingOf(value, exact)) return exact
  }
  return undefined
}

/** The non-empty subsets of a list of three at most, the smaller first. */
const subsets = (items: readonly number[]): number[][] =>
  Array.from({ length: (1 << items.length) - 1 }, (_, bits) =>
    items.filter((_, i) => ((bits + 1) >> i) & 1),
  ).sort((a, b) => a.length - b.length)

/** Is the place of the point in doubt, so that nothing can be said of a path to it? */
export function isInDoubt(diagnosis: Diagnosis, label: string): boolean {
  if (diagnosis.whole) return true
  const cause = diagnosis.points.get(label)?.cause
  if (!cause || cause.kind === 'rounded' || cause.kind === 'unnamed') return false
  return cause.kind !== 'reading' || cause.reading.kind !== 'other-book'
}

/**
 * How far beyond the first zone a point lies, in inverse length; undefined inside, on the boundary, and where neither
 * the digits written nor the file's tolerance tell it from the boundary.
 */
export function excessOf(crystal: Crystal, fraction: Vec3, slack = EXACT): number | undefined {
  const { zone } = crystal
  if (!zone) return undefined
  const k = crystal.cartesianOf(fraction)
  const { place, excess } = placeInZone(zone, k)
  return place === 'outside' && excess > slack.k + nearness(crystal, k) ? excess : undefined
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
