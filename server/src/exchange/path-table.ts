/** The sampled path as a table and as JSON. */
import { INVERSE_SYMBOL } from '../crystal/units.ts'
import { tidy, type Vec3 } from '../crystal/vector.ts'
import { displayLabel } from '../format/path.ts'
import type { Crystal } from '../meaning/crystal.ts'
import { csv } from './csv.ts'
import { inColumns } from './layout.ts'
import { type KnownSegment, pathPoints, pointDirections } from './path-points.ts'

export interface PathPointJson {
  /** From 1. */
  readonly piece: number
  /** Among all points, from 0. */
  readonly index: number
  /** Along the path, unbroken over a break; inverse length. */
  readonly distance: number
  /** Of the primitive reciprocal vectors, as many as the crystal has dimensions. */
  readonly fraction: readonly number[]
  readonly cartesian: Vec3
  /** At the ends of segments. */
  readonly label?: string
  /** Unit vector: see `pointDirections`. */
  readonly direction: Vec3
}

export function pathJson(segments: readonly KnownSegment[], dimension: number): PathPointJson[] {
  const directions = pointDirections(segments)
  return pathPoints(segments).map(({ piece, fraction, cartesian, ...point }, i) => ({
    piece: piece + 1,
    ...point,
    fraction: tidy(fraction).slice(0, dimension),
    cartesian: tidy(cartesian),
    direction: tidy(directions[i]),
  }))
}

const components = (dimension: number): string[] => ['k1', 'k2', 'k3'].slice(0, dimension)

export const pathCsv = (points: readonly PathPointJson[], dimension: number): string =>
  csv([
    ['piece', 'index', 'distance', ...components(dimension), 'kx', 'ky', 'kz', 'label', 'dx', 'dy', 'dz'],
    ...points.map(({ piece, index, distance, fraction, cartesian, label, direction }) => [
      ...[piece, index, distance, ...fraction, ...cartesian],
      label ?? '',
      ...direction,
    ]),
  ])

const DIGITS = 6

export function pathTable(points: readonly PathPointJson[], { unit }: Crystal, dimension: number): string {
  const k = INVERSE_SYMBOL[unit]
  const head = [
    'piece',
    'index',
    `distance (${k})`,
    ...components(dimension),
    `kx (${k})`,
    'ky',
    'kz',
    'label',
  ]
  const rows = points.map(({ piece, index, distance, fraction, cartesian, label }) => [
    ...[piece, index].map(String),
    ...[distance, ...fraction, ...cartesian].map(decimal),
    label === undefined ? '' : displayLabel(label),
  ])
  const alignments = head.map((_, i) => (i < head.length - 1 ? ('right' as const) : ('left' as const)))
  return `${inColumns([head, ...rows], alignments).join('\n')}\n`
}

/** Plain ASCII, so that it can be pasted into another program; no negative zero. */
const decimal = (x: number): string => {
  const text = x.toFixed(DIGITS)
  return Number(text) === 0 ? (0).toFixed(DIGITS) : text
}
