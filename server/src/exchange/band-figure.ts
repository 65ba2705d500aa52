/**
 * Empty-lattice bands as a vector figure in the manner of a paper: energy in eV upwards, the path to the right with its
 * labels, breaks with two labels, lines the heavier the more states share a band. Each band is drawn exactly, as the
 * parabola that it is.
 */
import type { BandBranch, Bands, SceneName } from '../protocol.ts'
import { escapeXml } from './figure.ts'

export interface BandFigureOptions {
  /** In the figure's own units (px at 96 dpi). */
  readonly width?: number
  readonly height?: number
  readonly colours?: Partial<typeof BLACK_ON_WHITE>
}
const BLACK_ON_WHITE = { background: '#ffffff', ink: '#000000', band: '#0a58a6' }

const WIDTH = 640
const HEIGHT = 400
const FONT = 14
const LEFT = 62
const RIGHT = 22
const TOP = 16
const BOTTOM = 48

export function bandFigure(
  bands: Bands,
  { width = WIDTH, height = HEIGHT, colours }: BandFigureOptions = {},
): string {
  const { background, ink, band } = { ...BLACK_ON_WHITE, ...colours }
  const [w, h] = [width - LEFT - RIGHT, height - TOP - BOTTOM]
  const x = (distance: number) => LEFT + (bands.length > 0 ? (distance / bands.length) * w : 0)
  const y = (energy: number) => TOP + h * (1 - energy / bands.top)

  const curves = bands.segments.flatMap(({ start, length, piece, from, to, branches }) => {
    const [left, middle, right] = [start, start + length / 2, start + length].map(x)
    const curve = ([e0, e1, e2, degeneracy]: BandBranch) =>
      `<path class="band" data-piece="${piece + 1}" data-from="${escapeXml(from.label)}" data-to="${escapeXml(to.label)}" data-states="${degeneracy}" d="M${n(left)} ${n(y(e0))}Q${n(middle)} ${n(y(e1))} ${n(right)} ${n(y(e2))}" stroke-width="${n(lineWeight(degeneracy))}"/>`
    return branches.map(curve)
  })
  let clearFrom = Number.NEGATIVE_INFINITY
  const ticks = bands.ticks.flatMap(({ distance, names }) => {
    const at = n(x(distance))
    // A label that would touch the one before stands a row lower.
    const half = widthOf(names) / 2
    const isTight = x(distance) - half < clearFrom
    clearFrom = isTight ? clearFrom : x(distance) + half + GAP
    return [
      `<line class="joint" x1="${at}" y1="${TOP}" x2="${at}" y2="${n(TOP + h)}" stroke="${ink}" stroke-width="${names.length > 1 ? 1.2 : 0.6}"/>`,
      `<text class="joint-label" x="${at}" y="${n(TOP + h + (isTight ? 36 : 20))}" text-anchor="middle" fill="${ink}">${names.map(textOf).join('<tspan> | </tspan>')}</text>`,
    ]
  })
  const scale = energyTicks(bands.top).flatMap(energy => {
    const at = n(y(energy))
    return [
      `<line x1="${LEFT}" y1="${at}" x2="${LEFT + 5}" y2="${at}" stroke="${ink}"/>`,
      `<text class="energy" x="${LEFT - 8}" y="${n(y(energy) + FONT * 0.34)}" text-anchor="end" fill="${ink}" font-size="${FONT - 2}">${escapeXml(String(energy))}</text>`,
    ]
  })
  return [
    `<svg xmlns="http://www.w3.org/2000/svg" width="${n(width)}" height="${n(height)}" viewBox="0 0 ${n(width)} ${n(height)}" role="img" font-family="Georgia, 'Times New Roman', serif" font-size="${FONT}">`,
    '<title>Empty-lattice bands</title>',
    `<desc>Energies of free electrons along the path, in eV, up to ${n(bands.top)} eV.</desc>`,
    `<rect width="100%" height="100%" fill="${background}"/>`,
    `<clipPath id="frame"><rect x="${LEFT}" y="${TOP}" width="${n(w)}" height="${n(h)}"/></clipPath>`,
    `<g clip-path="url(#frame)" fill="none" stroke="${band}" stroke-linecap="round">`,
    ...curves,
    '</g>',
    ...ticks,
    ...scale,
    `<rect class="frame" x="${LEFT}" y="${TOP}" width="${n(w)}" height="${n(h)}" fill="none" stroke="${ink}"/>`,
    `<text x="18" y="${n(TOP + h / 2)}" text-anchor="middle" fill="${ink}" transform="rotate(-90 18 ${n(TOP + h / 2)})">Energy (eV)</text>`,
    '</svg>',
    '',
  ].join('\n')
}

const GAP = 5
const widthOf = (names: readonly SceneName[]): number =>
  names.reduce((sum, { base, sub }) => sum + 0.7 * FONT * [...base].length + 0.42 * FONT * sub.length, 0) +
  0.9 * FONT * (names.length - 1)

const n = (x: number): string => String(Math.round(x * 1000) / 1000 + 0)

/** In px: one state is a thin line, each doubling adds the same. */
export const lineWeight = (degeneracy: number): number => 0.9 + 0.7 * Math.log2(degeneracy)

const textOf = ({ base, sub }: SceneName): string =>
  `<tspan font-style="italic">${escapeXml(base)}</tspan>${sub ? `<tspan font-size="${n(FONT * 0.7)}" dy="4">${escapeXml(sub)}</tspan><tspan dy="-4">\u200b</tspan>` : ''}`

/** Round energies from 0 to the top, at most seven. */
export function energyTicks(top: number): number[] {
  const raw = top / 6
  const power = 10 ** Math.floor(Math.log10(raw))
  const step = [1, 2, 5, 10].map(m => m * power).find(candidate => candidate >= raw)!
  return Array.from({ length: Math.floor(top / step + 1e-9) + 1 }, (_, i) =>
    Number((i * step).toPrecision(12)),
  )
}
