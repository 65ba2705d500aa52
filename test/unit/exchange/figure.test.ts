/** The geometry that is drawn is the geometry that is reported. */
import { describe, expect, test } from 'vitest'
import { bandFigure, energyTicks } from '../../../server/src/exchange/band-figure.ts'
import { bandPoints, bandsCsv, bandsOf } from '../../../server/src/exchange/bands.ts'
import { zoneFigure } from '../../../server/src/exchange/figure.ts'
import { sceneOf } from '../../../server/src/exchange/scene.ts'
import { checked, fixture, NAMES, reports } from './support.ts'

type Point = readonly [number, number]
const attribute = (tag: string, name: string): string => new RegExp(` ${name}="([^"]*)"`).exec(tag)?.[1] ?? ''
const tags = (svg: string, name: string, kind: string): string[] =>
  [...svg.matchAll(new RegExp(`<${name} [^>]*class="${kind}[" ][^>]*>`, 'g'))].map(([tag]) => tag)
const ends = (tag: string): [Point, Point] => [
  [Number(attribute(tag, 'x1')), Number(attribute(tag, 'y1'))],
  [Number(attribute(tag, 'x2')), Number(attribute(tag, 'y2'))],
]
/** Whole px keep what 0.001 of rounding would part. */
const key = ([x, y]: Point): string => `${Math.round(x * 20)},${Math.round(y * 20)}`

const cases = NAMES.flatMap(name =>
  checked(fixture(name)).snapshot.documents.map((_, ordinal) => ({ name, ordinal })),
)

describe.each(cases)('$name, document $ordinal', ({ name, ordinal }) => {
  const { snapshot } = checked(fixture(name))
  const report = reports(fixture(name))[ordinal]
  const scene = sceneOf(snapshot, ordinal)
  if (!scene) {
    test('has no lattice', () => expect(report.lattice).toBeUndefined())
    return
  }

  test.each([undefined, [61, 17], [33, -140]] as const)('the zone, seen from %j', view => {
    const svg = zoneFigure(scene, { view })
    const edges = tags(svg, 'line', 'edge').map(ends)
    expect(edges).toHaveLength(report.zone!.edges)
    // No two vertices fall together in a general view.
    expect(new Set(edges.flat().map(key)).size).toBe(report.zone!.vertices)
    expect(svg).not.toMatch(/NaN|Infinity|undefined/)
  })

  test('an edge is as long as it is, on the scale of the reciprocal vectors', () => {
    const [theta, phi] = [61, 17].map(angle => (angle * Math.PI) / 180)
    const right = [-Math.sin(phi), Math.cos(phi), 0]
    const up = [-Math.cos(theta) * Math.cos(phi), -Math.cos(theta) * Math.sin(phi), Math.sin(theta)]
    const across = (k: readonly number[]) =>
      [right, up].map(axis => axis.reduce((sum, x, i) => sum + x * k[i], 0))
    const svg = zoneFigure(scene, { view: [61, 17] })
    const origin = tags(svg, 'line', 'vector').map(ends)[0][0]
    // The figure's scale from the first reciprocal vector of the report; then every point of the report is where it should be.
    const tips = tags(svg, 'polygon', 'arrow').map(tag =>
      attribute(tag, 'points').split(' ')[0].split(',').map(Number),
    )
    const [bx, by] = across(report.reciprocal!.vectors[0])
    const scale = Math.hypot(tips[0][0] - origin[0], tips[0][1] - origin[1]) / Math.hypot(bx, by)
    const circles = tags(svg, 'circle', 'point')
    expect(circles.length > 0).toBe((report.points ?? []).length > 0)
    for (const circle of circles) {
      const label = attribute(circle, 'data-label')
      const [x, y] = across(report.points!.find(point => point.label === label)!.cartesian)
      expect(Number(attribute(circle, 'cx'))).toBeCloseTo(origin[0] + scale * x, 1)
      expect(Number(attribute(circle, 'cy'))).toBeCloseTo(origin[1] - scale * y, 1)
    }
  })

  test('each label of the path stands in it, as text with a true subscript', () => {
    const svg = zoneFigure(scene)
    const texts = [...svg.matchAll(/<text class="point-label"[^>]*>(.*?)<\/text>/g)].map(([, inner]) =>
      inner.replace(/<[^>]*>/g, ''),
    )
    for (const label of report.path?.pieces.flat() ?? []) {
      if (!report.points!.some(point => point.label === label)) continue
      expect(texts).toContain(label.replaceAll("'", '′'))
    }
    expect(svg).not.toMatch(/<image|href/)
    const paths = tags(svg, 'line', 'path')
    expect(paths).toHaveLength(report.path?.segments.length ?? 0)
  })

  test('the bands: as long as the path, labels and breaks at its joints', () => {
    const bands = bandsOf(snapshot.documents[ordinal].crystal)
    if (!bands) {
      expect(report.path?.segments ?? []).toEqual([])
      return
    }
    // Of a path with an unknown label the report tells no length, and the bands what is known.
    if (report.path?.length === undefined) return
    expect(bands.length).toBeCloseTo(report.path.length, 9)
    const labels = bands.ticks.flatMap(({ names }) => names.map(({ base, sub }) => base + sub))
    expect(labels).toEqual(report.path.pieces.flat())
    const svg = bandFigure(bands)
    expect(tags(svg, 'line', 'joint')).toHaveLength(bands.ticks.length)
    expect(tags(svg, 'path', 'band').length).toBe(
      bands.segments.reduce((sum, { branches }) => sum + branches.length, 0),
    )
    expect(svg).not.toMatch(/NaN|Infinity|undefined/)
  })

  test('the table of bands: a row for each sampled point of the report', () => {
    const { crystal } = snapshot.documents[ordinal]
    const points = bandPoints(crystal, 5)!
    if (!report.path || report.path.points !== undefined)
      expect(points).toHaveLength(report.path?.points ?? 0)
    const [head, ...rows] = bandsCsv(points, crystal.dimension!).trimEnd().split('\r\n')
    expect(rows).toHaveLength(points.length)
    for (const row of rows) expect(row.split(',')).toHaveLength(head.split(',').length)
  })
})

test('what a file says is no markup', () => {
  const { snapshot } = checked(
    'title: "</title><script>alert(1)</script>"\nlattice: {bravais: cP, a: 3}\npath: Γ – X\n',
  )
  expect(zoneFigure(sceneOf(snapshot)!)).not.toContain('<script')
})

test('hidden edges of a cube: the three behind, dashed', () => {
  const { snapshot } = checked('lattice: {bravais: cP, a: 3}\n')
  const svg = zoneFigure(sceneOf(snapshot)!, { view: [60, 30] })
  const hidden = tags(svg, 'line', 'edge hidden')
  expect(hidden).toHaveLength(3)
  for (const tag of hidden) expect(attribute(tag, 'stroke-dasharray')).not.toBe('')
})

test.each([
  [17, [0, 5, 10, 15]],
  [2.2, [0, 0.5, 1, 1.5, 2]],
  [0.06, [0, 0.01, 0.02, 0.03, 0.04, 0.05, 0.06]],
])('energies beside an axis up to %d eV', (top, ticks) => expect(energyTicks(top)).toEqual(ticks))
