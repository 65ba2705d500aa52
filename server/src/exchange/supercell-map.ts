/** The map between the zones of the primitive cell and of the supercell. Its shape is published in schema/supercell-map.json. */
import type { CellParameters } from '../crystal/cell.ts'
import { landsOnGamma, nearestImageOf, supercellFraction } from '../crystal/supercell.ts'
import { INVERSE_SYMBOL, type Unit } from '../crystal/units.ts'
import { add, IDENTITY, type Mat3, norm, scale, subtract, tidy, type Vec3 } from '../crystal/vector.ts'
import { recogniseFraction } from '../format/numbers.ts'
import { displayLabel } from '../format/path.ts'
import type { Crystal } from '../meaning/crystal.ts'
import { type LandedPoint, SupercellMap, supercellIn, type Unfolding } from '../meaning/supercell-map.ts'
import { content, count, degrees, fraction as fractionText, length, plain } from '../meaning/wording.ts'
import { inColumns } from './layout.ts'
import { knownSegments } from './path-points.ts'
import { latticeParameters } from './report.ts'
import { walkedPath } from '../meaning/sampling.ts'

export interface SupercellMapJson {
  readonly unit: Unit
  /** Rows: the supercell's vectors as combinations of the primitive ones, as many as there are dimensions. */
  readonly matrix: readonly (readonly number[])[]
  /** |det M|: primitive cells in the supercell, and primitive k-points on each of its own. */
  readonly fold: number
  readonly supercell: {
    /** Pearson symbol of its lattice as found. */
    readonly bravais?: string
    readonly parameters: Partial<CellParameters>
    readonly vectors: readonly Vec3[]
    /** An area or a length in fewer dimensions. */
    readonly volume: number
    /** From anything in the cell to its own nearest image. */
    readonly nearestImage: number
    readonly reciprocal: readonly Vec3[]
  }
  readonly points: readonly LandedJson[]
  readonly unfolds: readonly UnfoldsJson[]
  /** The places of the path that come to lie on the supercell's Γ, in order. */
  readonly pathOnGamma: readonly PathPlaceJson[]
}

export interface LandedJson {
  readonly label: string
  readonly origin: 'file' | 'book'
  readonly onPath: boolean
  /** Of the primitive reciprocal vectors. */
  readonly fraction: readonly number[]
  readonly cartesian: Vec3
  readonly landing: {
    /** Of the supercell's reciprocal vectors, in [0, 1). */
    readonly fraction: readonly number[]
    /** The shortest equivalent. */
    readonly cartesian: Vec3
    /** In the supercell's own book. */
    readonly label?: string
    readonly gamma: boolean
  }
}

export interface UnfoldsJson {
  readonly label: string
  /** Of the supercell's reciprocal vectors. */
  readonly fraction: readonly number[]
  readonly cartesian: Vec3
  /** How many of the primitive points have which label; `""` counts those without one. */
  readonly labels: Readonly<Record<string, number>>
  /** null where there are over 5,000. */
  readonly points:
    | readonly { readonly fraction: readonly number[]; readonly cartesian: Vec3; readonly label?: string }[]
    | null
}

export interface PathPlaceJson {
  readonly from: string
  readonly to: string
  /** Part of the way, 0 … 1. */
  readonly at: number
  /** Along the path, unbroken over a break; inverse length. */
  readonly distance: number
  readonly fraction: readonly number[]
  readonly cartesian: Vec3
  /** The path's sampling has a point here. */
  readonly sampled: boolean
}

/** @returns undefined where the file states no supercell that spans a cell. */
export function supercellMap(crystal: Crystal): SupercellMapJson | undefined {
  const supercell = supercellIn(crystal)
  if (!supercell || !crystal.zone) return undefined
  const map = new SupercellMap(crystal, supercell)
  const { lattice, matrix, fold } = supercell
  const { dimension } = lattice
  const entries = (v: Vec3): number[] => tidy(v).slice(0, dimension)
  const onPath = new Set(walkedPath(crystal).flatMap(({ labels }) => labels))
  const named = [
    ...crystal.points.values(),
    ...[...crystal.bookPoints.values()].filter(({ label }) => !crystal.fileDefines(label)),
  ]
  return {
    unit: crystal.unit,
    matrix: matrix.slice(0, dimension).map(row => row.slice(0, dimension)),
    fold,
    supercell: {
      bravais: crystal.typeOf(lattice.primitive, dimension)?.bravais,
      parameters: latticeParameters(lattice),
      vectors: lattice.primitive.slice(0, dimension),
      volume: lattice.volume,
      nearestImage: nearestImageOf(lattice).distance,
      reciprocal: lattice.reciprocal.slice(0, dimension),
    },
    points: named.map(point => landed(map.land(point), onPath.has(point.label), entries)),
    unfolds: map.unfoldings().map(each => unfolds(each, entries)),
    pathOnGamma: placesOnGamma(crystal, matrix).map(({ fraction, cartesian, ...place }) => ({
      ...place,
      fraction: entries(fraction),
      cartesian: tidy(cartesian),
    })),
  }
}

function landed(
  { point, landing, cartesian, isGamma, label }: LandedPoint,
  onPath: boolean,
  entries: (v: Vec3) => number[],
): LandedJson {
  return {
    label: point.label,
    origin: point.origin,
    onPath,
    fraction: entries(point.fraction),
    cartesian: tidy(point.cartesian),
    landing: { fraction: entries(landing), cartesian, ...(label ? { label } : {}), gamma: isGamma },
  }
}

function unfolds(
  { label, fraction, cartesian, points }: Unfolding,
  entries: (v: Vec3) => number[],
): UnfoldsJson {
  const labels: Record<string, number> = {}
  for (const point of points ?? []) labels[point.label ?? ''] = (labels[point.label ?? ''] ?? 0) + 1
  return {
    label,
    fraction: entries(fraction),
    cartesian: tidy(cartesian),
    labels,
    points:
      points?.map(point => ({
        fraction: entries(point.fraction),
        cartesian: point.cartesian,
        ...(point.label ? { label: point.label } : {}),
      })) ?? null,
  }
}

interface PathPlace extends Omit<PathPlaceJson, 'fraction'> {
  readonly fraction: Vec3
}

/** More places than this are a list that nobody reads. */
const MOST_PLACES = 10_000

/** Where the straight pieces of the path meet points that fold onto Γ; a joint of a piece once. */
function placesOnGamma(crystal: Crystal, matrix: Mat3): PathPlace[] {
  const places: PathPlace[] = []
  const segments = knownSegments(crystal)
  for (const [i, { piece, from, to, start, length: size, steps }] of segments.entries()) {
    const begins = segments[i - 1]?.piece !== piece
    const along = subtract(to.fraction, from.fraction)
    for (const at of meetings(supercellFraction(matrix, from.fraction), supercellFraction(matrix, along))) {
      if (at === 0 && !begins) continue
      if (places.length >= MOST_PLACES) return places
      places.push({
        from: from.label,
        to: to.label,
        at,
        distance: start + at * size,
        fraction: add(from.fraction, scale(along, at)),
        cartesian: add(from.cartesian, scale(subtract(to.cartesian, from.cartesian), at)),
        sampled: Math.abs(at * steps - Math.round(at * steps)) < SAME_PLACE,
      })
    }
  }
  return places
}
/** Parts of a segment that are told apart. */
const SAME_PLACE = 1e-6

/** The t from 0 to 1 at which from + t·along is a vector of whole numbers. */
function meetings(from: Vec3, along: Vec3): number[] {
  const main = [0, 1, 2].reduce((best, i) => (Math.abs(along[i]) > Math.abs(along[best]) ? i : best), 0)
  const step = along[main]
  if (Math.abs(step) < SAME_PLACE) return landsOnGamma(IDENTITY, from) ? [0] : []
  const [low, high] = step > 0 ? [from[main], from[main] + step] : [from[main] + step, from[main]]
  const found: number[] = []
  for (
    let whole = Math.ceil(low - SAME_PLACE);
    whole <= high + SAME_PLACE && found.length < MOST_PLACES;
    whole++
  ) {
    const at = Math.min(1, Math.max(0, (whole - from[main]) / step))
    if (landsOnGamma(IDENTITY, add(from, scale(along, at)))) found.push(at + 0)
  }
  return found.sort((s, t) => s - t)
}

/** Digits of Cartesian components: another program's output is compared with them. */
const DIGITS = 6
/** More primitive points than this are counted by their labels only. */
const MOST_LISTED = 64

export function supercellTable(map: SupercellMapJson): string {
  const { unit, fold, supercell, points, unfolds, pathOnGamma } = map
  const dimension = map.matrix.length
  const k = INVERSE_SYMBOL[unit]
  const exact = (v: readonly number[]): string => `[${v.map(x => exactText(x, fold)).join(', ')}]`
  const cartesian = (v: Vec3): string => `(${v.map(x => plain(x, DIGITS)).join(', ')})`
  const name = (label: string | undefined): string => (label === undefined ? '' : displayLabel(label))

  const { parameters, bravais, volume, nearestImage } = supercell
  const sizes = Object.entries(parameters).map(([parameter, value]) =>
    parameter.length === 1 ? `${parameter} ${length(value, unit)}` : `${GREEK[parameter]} ${degrees(value)}`,
  )
  const cell = [
    `supercell  ${map.matrix.map(row => `[${row.join(', ')}]`).join(' ')}, ${count(fold, 'primitive cell')}`,
    `lattice    ${bravais ? `${bravais}, ` : ''}${sizes.join(', ')}, ${content(volume, dimension, unit)}`,
    `images     ${length(nearestImage, unit)} to the nearest`,
  ]

  const landings = points.map(point => [
    name(point.label),
    exact(point.fraction),
    exact(point.landing.fraction),
    cartesian(point.landing.cartesian),
    point.landing.gamma ? 'Γ' : name(point.landing.label),
    point.onPath ? 'yes' : '',
  ])
  const back = unfolds.flatMap(({ label, fraction, labels, points: from }) => [
    [name(label), exact(fraction), summary(labels, from?.length ?? fold, name)],
  ])
  const gamma = unfolds[0].points
  const path = pathOnGamma.map(({ from, to, at, distance, fraction, sampled }) => [
    `${name(from)} – ${name(to)}`,
    plain(at),
    plain(distance, DIGITS),
    exact(fraction),
    sampled ? 'yes' : 'no',
  ])
  const left = (rows: readonly (readonly string[])[]): string[] =>
    inColumns(
      rows,
      rows[0].map(() => 'left' as const),
    )
  return `${[
    ...cell,
    '',
    'From the primitive zone to that of the supercell',
    ...left([['point', 'fraction', 'lands on', `k (${k})`, 'is', 'on the path'], ...landings]),
    '',
    'Back: the primitive points on each point of the supercell',
    ...left([['point', 'fraction', 'holds'], ...back]),
    ...(gamma && gamma.length <= MOST_LISTED
      ? [
          '',
          'The primitive points on Γ',
          ...left([
            ['fraction', `k (${k})`, '|k|', 'point'],
            ...gamma.map(point => [
              exact(point.fraction),
              cartesian(point.cartesian),
              plain(norm(point.cartesian), DIGITS),
              name(point.label),
            ]),
          ]),
        ]
      : []),
    ...(path.length > 0
      ? [
          '',
          'Where the path meets Γ of the supercell',
          ...left([['segment', 'at', `distance (${k})`, 'fraction', 'sampled'], ...path]),
        ]
      : []),
  ].join('\n')}\n`
}

const GREEK: Record<string, string> = { alpha: 'α', beta: 'β', gamma: 'γ' }

/** `Γ, 3 X, 28 without a label`. */
function summary(
  labels: Readonly<Record<string, number>>,
  total: number,
  name: (label: string) => string,
): string {
  const { '': unlabelled = 0, ...labelled } = labels
  const parts = Object.entries(labelled).map(([label, n]) => (n === 1 ? name(label) : `${n} ${name(label)}`))
  const rest =
    unlabelled > 0 ? [parts.length === 0 ? count(unlabelled, 'point') : `${unlabelled} without a label`] : []
  return parts.length + rest.length === 0 ? count(total, 'point') : [...parts, ...rest].join(', ')
}

const NEAR = 1e-9
/** Denominators of special points. */
const SPECIAL = 24

/** A fraction of a folded point, exact where it is a multiple of a special fraction over the fold. */
function exactText(x: number, fold: number): string {
  const found = recogniseFraction(x, NEAR, Math.min(SPECIAL * fold, LARGEST_DENOMINATOR))
  return found && found.q > SPECIAL ? `${found.p}/${found.q}` : fractionText(x)
}
const LARGEST_DENOMINATOR = 1000
