import { readFileSync } from 'node:fs'
import { join } from 'node:path'
import { Ajv } from 'ajv'
import { describe, expect, test } from 'vitest'
import type { MeshReport, Report } from '../../../server/src/exchange/report.ts'
import { isMesh } from '../../../server/src/exchange/report-sections.ts'
import { closed } from './closed.ts'
import { fixture, NAMES, reports } from './support.ts'

const one = (text: string): Report => reports(text)[0]

describe('silicon, by the closed formulas of the face-centred cubic lattice', () => {
  const a = 5.431
  const g = (2 * Math.PI) / a
  const report = one(fixture('silicon'))
  const near = (x: number) => expect.closeTo(x, 9)

  // V = a³/4; bᵢ = (2π/a)(−1, 1, 1) and so on, |b| = √3 2π/a, the angle between two is arccos(−1/3):
  // N. W. Ashcroft and N. D. Mermin, Solid State Physics (1976), ch. 5 (from memory).
  test('lattice and reciprocal lattice', () => {
    expect(report.lattice).toEqual({
      bravais: 'cF',
      dimension: 3,
      parameters: { a, b: a, c: a, alpha: 90, beta: 90, gamma: 90 },
      vectors: [
        [0, a / 2, a / 2],
        [a / 2, 0, a / 2],
        [a / 2, a / 2, 0],
      ],
      conventional: [
        [a, 0, 0],
        [0, a, 0],
        [0, 0, a],
      ],
      volume: near(a ** 3 / 4),
    })
    const angle = (Math.acos(-1 / 3) * 180) / Math.PI
    expect(report.reciprocal).toEqual({
      vectors: [
        [near(-g), near(g), near(g)],
        [near(g), near(-g), near(g)],
        [near(g), near(g), near(-g)],
      ],
      lengths: [near(Math.sqrt(3) * g), near(Math.sqrt(3) * g), near(Math.sqrt(3) * g)],
      angles: [near(angle), near(angle), near(angle)],
    })
    expect(report.changes!.conventionalFromPrimitive).toEqual([
      [-1, 1, 1],
      [1, -1, 1],
      [1, 1, -1],
    ])
  })

  // A truncated octahedron: 8 hexagons and 6 squares, 36 edges, 24 vertices; hexagons at |L|, vertices at |W|.
  test('zone', () => {
    expect(report.zone).toEqual({
      solid: 'truncated octahedron',
      faces: 14,
      edges: 36,
      vertices: 24,
      volume: near(4 * g ** 3),
      inradius: near((Math.sqrt(3) / 2) * g),
      circumradius: near((Math.sqrt(5) / 2) * g),
    })
  })

  // Diamond structure: Fd-3m, No. 227 (International Tables A), point group m-3m of order 48.
  test('symmetry', () => {
    expect(report.symmetry).toEqual({
      spaceGroup: { number: 227, symbol: 'Fd-3m' },
      pointGroup: 'm-3m',
      rotations: 48,
      timeReversal: true,
      kRotations: 48,
    })
  })

  // |k| in units of 2π/a, order of the little co-group (Oₕ, D₄ₕ, D₃d, D₂d, C₂ᵥ), points in the star:
  // L. P. Bouckaert, R. Smoluchowski and E. Wigner, Phys. Rev. 50, 58 (1936) (from memory).
  test.each([
    ['Γ', 0, 48, 1, 'inside'],
    ['X', 1, 16, 3, 'boundary'],
    ['L', Math.sqrt(3) / 2, 12, 4, 'boundary'],
    ['W', Math.sqrt(5) / 2, 8, 6, 'boundary'],
    ['K', Math.sqrt(9 / 8), 4, 12, 'boundary'],
    ['U', Math.sqrt(9 / 8), 4, 12, 'boundary'],
  ])('%s', (label, size, littleCoGroup, star, place) => {
    const point = report.points!.find(point => point.label === label)!
    expect(point).toMatchObject({
      origin: 'book',
      length: near(size * g),
      littleCoGroup,
      star,
      place,
      zone: 1,
    })
    expect(point.folded).toEqual(point.fraction)
  })

  // Lengths in 2π/a by Pythagoras between (0 1 0), (½ 1 0), (¾ ¾ 0), Γ, (½ ½ ½), (¼ 1 ¼).
  test('path', () => {
    const lengths = [
      1,
      1 / 2,
      Math.sqrt(2) / 4,
      Math.sqrt(9 / 8),
      Math.sqrt(3) / 2,
      Math.sqrt(6) / 4,
      Math.sqrt(2) / 4,
      Math.sqrt(2) / 2,
      Math.sqrt(6) / 4,
      Math.sqrt(2) / 4,
    ]
    const { pieces, segments, length, points } = report.path!
    expect(pieces).toEqual([
      ['Γ', 'X', 'W', 'K', 'Γ', 'L', 'U', 'W', 'L', 'K'],
      ['U', 'X'],
    ])
    expect(segments.map(segment => segment.length / g)).toEqual(lengths.map(near))
    const steps = lengths.map(x => Math.ceil((x * g) / 0.02))
    expect(segments.map(segment => segment.points)).toEqual(steps.map(n => n + 1))
    expect(length).toBeCloseTo(lengths.reduce((x, y) => x + y) * g, 9)
    expect(points).toBe(steps.reduce((x, y) => x + y) + 2)
  })
  // C. J. Bradley and A. P. Cracknell, The Mathematical Theory of Symmetry in Solids (1972) (from memory).
  test('letters of the lines through Γ, where the label book has letters for lines', () => {
    const lines = (text: string) => one(text).path!.segments.map(({ line }) => line)
    const path = 'lattice: {bravais: cF, a: 5.431}\npoints: {K: [3/8, 3/8, 3/4]}\npath: X – Γ – L | Γ – K\n'
    expect(lines(`${path}labels: bradley-cracknell-1972\n`)).toEqual(['Δ', 'Λ', 'Σ'])
    expect(lines(path)).toEqual([undefined, undefined, undefined])
  })

  // 29 irreducible points: test/reference/special-sets.json, face-centred cubic through Γ, q = 8.
  test('mesh', () => {
    const step = (Math.sqrt(3) * g) / 8
    expect(report.mesh).toEqual({
      divisions: [8, 8, 8],
      shift: [0, 0, 0],
      points: 512,
      irreducible: 29,
      spacing: [near(step), near(step), near(step)],
      symmetric: true,
    })
  })

  test('findings', () => expect(report.findings).toEqual({ errors: 0, warnings: 0, infos: 0 }))
})

describe('a hexagonal sheet, by the closed formulas of the plane hexagonal lattice', () => {
  const a = 2.46
  const report = one(fixture('sheet'))
  test('has two numbers where the plane has two', () => {
    expect(report.lattice!.dimension).toBe(2)
    expect(report.lattice!.volume).toBeCloseTo((a * a * Math.sqrt(3)) / 2, 9)
    expect(report.lattice!.parameters).toEqual({ a, b: a, gamma: 120 })
    expect(report.lattice!.vectors).toHaveLength(2)
    expect(report.reciprocal!.angles).toEqual([expect.closeTo(60, 9)])
    expect(report.changes!.conventionalFromPrimitive).toEqual([
      [1, 0],
      [0, 1],
    ])
    expect(report.zone).toEqual({
      solid: 'hexagon',
      edges: 6,
      vertices: 6,
      volume: expect.closeTo((8 * Math.PI ** 2) / (a * a * Math.sqrt(3)), 9),
      inradius: expect.closeTo((2 * Math.PI) / (a * Math.sqrt(3)), 9),
      circumradius: expect.closeTo((4 * Math.PI) / (3 * a), 9),
    })
    // 6mm in the plane: 12 distinct rotations, with or without −1; K is fixed by 3m, M by 2mm.
    expect(report.symmetry).toMatchObject({ kRotations: 12 })
    expect(report.symmetry).not.toHaveProperty('spaceGroup')
    const point = (label: string) => report.points!.find(point => point.label === label)
    expect(point('K')).toMatchObject({
      littleCoGroup: 6,
      star: 2,
      fraction: [expect.any(Number), expect.any(Number)],
    })
    expect(point('M')).toMatchObject({ littleCoGroup: 4, star: 3 })
    expect(report.path).toMatchObject({
      points: 61,
      segments: [{ points: 21 }, { points: 21 }, { points: 21 }],
    })
  })
  // 12 divisions of the hexagonal plane lattice under 6mm: (n² + 6n + 12)/12 for n a multiple of 6 (Burnside, by hand).
  test('mesh', () =>
    expect(report.mesh).toMatchObject({
      divisions: [12, 12],
      shift: [0, 0],
      points: 144,
      irreducible: 19,
      symmetric: true,
    }))
})

test('a chain has one number and a segment for a zone', () => {
  const report = one(fixture('chain'))
  expect(report.unit).toBe('bohr')
  expect(report.lattice).toMatchObject({
    dimension: 1,
    volume: 4,
    vectors: [[4, 0, 0]],
    parameters: { a: 4 },
  })
  expect(report.zone).toMatchObject({
    solid: 'segment',
    vertices: 2,
    volume: Math.PI / 2,
    inradius: Math.PI / 4,
  })
  expect(report.path).toMatchObject({ points: 11, length: expect.closeTo(Math.PI / 4) })
  expect(report.points!.map(({ label, fraction }) => [label, fraction])).toEqual([
    ['Γ', [0]],
    ['X', [0.5]],
  ])
  // 0.001 Å in bohr.
  expect(report.tolerance).toBeCloseTo(0.001 / 0.529177210544, 12)
})

describe('meshes', () => {
  const [named, cubic] = reports(fixture('meshes'))
  test('are reported by name where the file names them', () => {
    expect(isMesh(named.mesh!)).toBe(false)
    const { coarse, fine } = named.mesh as Record<string, MeshReport>
    expect(coarse).toMatchObject({ divisions: [4, 4, 2], shift: [0, 0, 0.5], points: 32, symmetric: true })
    // |b₁| = 4π/(√3 0.3) = 24.18 nm⁻¹, |b₃| = 2π/0.5 = 12.57 nm⁻¹, by a spacing of 2 nm⁻¹.
    expect(fine).toMatchObject({ divisions: [13, 13, 7] })
  })
  test('parts without ground are absent', () => {
    expect(cubic).not.toHaveProperty('mesh')
    expect(cubic).not.toHaveProperty('book')
    expect(cubic).not.toHaveProperty('path')
    expect(cubic.points).toEqual([])
    expect(cubic.symmetry).not.toHaveProperty('spaceGroup')
    expect(cubic).not.toHaveProperty('title')
  })
})

test('the book’s own path is walked where the file asks for it', () => {
  const report = one('lattice: {bravais: cP, a: 4}\npath: recommended\n')
  expect(report.path!.segments.length).toBeGreaterThan(3)
  expect(report.path!.points).toBeGreaterThan(100)
})

test('a path with an unknown label has its known segments, and no sum', () => {
  const { path } = one('lattice: {bravais: cP, a: 4}\npath: Γ – X – J – Γ\n')
  expect(path!.pieces).toEqual([['Γ', 'X', 'J', 'Γ']])
  expect(path!.segments.map(({ from, to }) => from + to)).toEqual(['ΓX'])
  expect(path).not.toHaveProperty('length')
  expect(path).not.toHaveProperty('points')
})

test('the unit scales lengths and k, and nothing else', () => {
  const inAngstrom = one(
    'lattice: {bravais: hP, a: 3, c: 5}\npath: Γ – M – K\nmesh: {divisions: [6, 6, 4]}\n',
  )
  const inNm = one(
    'unit: nm\nlattice: {bravais: hP, a: 0.3, c: 0.5}\npath: Γ – M – K\nmesh: {divisions: [6, 6, 4]}\n',
  )
  expect(inNm.zone!.inradius).toBeCloseTo(inAngstrom.zone!.inradius * 10, 9)
  expect(inNm.path!.points).toBe(inAngstrom.path!.points)
  expect(inNm.points!.map(({ fraction }) => fraction)).toEqual(
    inAngstrom.points!.map(({ fraction }) => fraction.map(x => expect.closeTo(x, 12))),
  )
  expect((inNm.mesh as MeshReport).irreducible).toBe((inAngstrom.mesh as MeshReport).irreducible)
})

describe.each(NAMES)('%s', name => {
  const schema = JSON.parse(
    readFileSync(join(import.meta.dirname, '../../../server/src/exchange/schema/report.schema.json'), 'utf8'),
  )
  const validate = new Ajv({ strict: true, allowUnionTypes: true }).compile(closed(schema))
  test('fits the published schema, which allows nothing else', () => {
    for (const report of reports(fixture(name)))
      expect(validate(JSON.parse(JSON.stringify(report))), JSON.stringify(validate.errors)).toBe(true)
  })
})
