/** Empty-lattice bands along a document's path: as parabolas for drawing, as numbers at its sampled points. */
import { branchesAlong, type Levels, levelsAt } from '../crystal/bands.ts'
import { INVERSE_SYMBOL } from '../crystal/units.ts'
import { formatNumber } from '../format/numbers.ts'
import type { Crystal } from '../meaning/crystal.ts'
import type { Bands, SceneName } from '../protocol.ts'
import { type KnownSegment, knownSegments, type PathPoint, pathPoints } from './path-points.ts'
import { nameOf } from './scene.ts'

/** Enough for the valence and the first conduction bands of most crystals. */
export const DEFAULT_BANDS = 12
export const MOST_BANDS = 10_000
/** The frame ends a little above the highest band, in parts of its energy. */
const HEADROOM = 1.04
/** Parabolas drawn along one path: more would be a black picture. */
const MOST_BRANCHES = 4000

/**
 * The bands as they are drawn: every state of each k up to the energy below which there are `count` states at least
 * somewhere on the path. undefined where there is no path or no zone.
 */
export function bandsOf(crystal: Crystal, count = DEFAULT_BANDS): Bands | undefined {
  const { zone, unit, angstrom } = crystal
  const segments = knownSegments(crystal)
  if (!zone || segments.length === 0) return undefined
  const ends = segments.flatMap(({ from, to }) => [from, to])
  const highest = ends.map(({ fraction }) => levelsAt(zone, fraction, count, angstrom).energies[count - 1])
  const top = HEADROOM * Math.min(...highest)
  let drawn = 0
  const withBranches = segments.map(segment => {
    const { from, to } = segment
    const branches = branchesAlong(zone, from.cartesian, to.cartesian, top, angstrom)
    drawn += branches.length
    return {
      piece: segment.piece,
      from: { label: from.label, k: from.cartesian },
      to: { label: to.label, k: to.cartesian },
      start: segment.start,
      length: segment.length,
      branches:
        drawn > MOST_BRANCHES
          ? []
          : branches.map(branch => [branch.from, branch.middle, branch.to, branch.degeneracy] as const),
    }
  })
  const last = segments.at(-1)!
  return {
    unit: INVERSE_SYMBOL[unit],
    length: last.start + last.length,
    top,
    ticks: ticksOf(segments),
    segments: withBranches,
  }
}

function ticksOf(segments: readonly KnownSegment[]): Bands['ticks'] {
  const ticks: { distance: number; names: SceneName[] }[] = []
  for (const [i, { piece, from, to, start, length }] of segments.entries()) {
    const before = segments[i - 1]
    if (!before) ticks.push({ distance: start, names: [nameOf(from.label)] })
    else if (before.piece !== piece && from.label !== before.to.label)
      ticks.at(-1)!.names.push(nameOf(from.label))
    ticks.push({ distance: start + length, names: [nameOf(to.label)] })
  }
  return ticks
}

export interface BandPoint extends PathPoint, Levels {}

/** The lowest levels at each sampled point of the path. undefined where there is no zone; empty without a path. */
export function bandPoints(crystal: Crystal, count: number): BandPoint[] | undefined {
  const { zone, angstrom } = crystal
  return (
    zone &&
    pathPoints(knownSegments(crystal)).map(point => ({
      ...point,
      ...levelsAt(zone, point.fraction, count, angstrom),
    }))
  )
}

/** One row a point: where it is on the path, its fractions, its label, its energies in eV, lowest first. */
export function bandsCsv(points: readonly BandPoint[], dimension: number): string {
  const axes = Array.from({ length: dimension }, (_, i) => `k${i + 1}`)
  const bands = points[0]?.energies.map((_, i) => `E${i + 1}`) ?? []
  const head = ['piece', 'index', 'distance', ...axes, 'label', ...bands]
  const rows = points.map(({ piece, index, distance, fraction, label, energies }) => [
    piece + 1,
    index,
    formatNumber(distance),
    ...fraction.slice(0, dimension).map(x => formatNumber(x)),
    label ?? '',
    ...energies.map(energy => formatNumber(energy)),
  ])
  return [head, ...rows].map(row => `${row.join(',')}\r\n`).join('')
}

export interface BandsJson {
  readonly unit: string
  readonly energyUnit: 'eV'
  readonly points: readonly (Omit<BandPoint, 'piece' | 'fraction'> & {
    readonly piece: number
    readonly fraction: readonly number[]
  })[]
}

export const bandsJson = (points: readonly BandPoint[], { unit, dimension }: Crystal): BandsJson => ({
  unit,
  energyUnit: 'eV',
  points: points.map(point => ({
    ...point,
    piece: point.piece + 1,
    fraction: point.fraction.slice(0, dimension),
  })),
})
