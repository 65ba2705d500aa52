import { describe, expect, test } from 'vitest'
import { sceneOf } from '../../../server/src/exchange/scene.ts'
import { sceneAnswer, zoneSolidAnswer } from '../../../server/src/language/zone-view.ts'
import type { TextRange, Triple } from '../../../server/src/protocol.ts'
import { checked } from './support.ts'

const dot = (u: Triple, v: Triple) => u[0] * v[0] + u[1] * v[1] + u[2] * v[2]
const scene = (text: string) => sceneOf(checked(text).snapshot)!
const cut = (text: string, { start, end }: TextRange): string =>
  text.split('\n')[start.line].slice(start.character, end.character)

// 12×12×12 points about Γ in a face-centred cubic lattice: 72 irreducible ones (common practice).
test('the irreducible mesh points lie in the wedge, and their weights are the whole', () => {
  const { wedge, meshes } = scene(
    'lattice: {bravais: cF, a: 4}\npath: Γ – X – W – K\nmesh: {divisions: [12, 12, 12]}\n',
  )
  const [{ points, weights, total }] = meshes
  expect(total).toBe(1728)
  expect(weights).toHaveLength(72)
  expect(weights.reduce((a, b) => a + b, 0)).toBeCloseTo(1, 12)
  // Each face's outer side holds none of them.
  for (const face of wedge!.faces) {
    const [u, v, w] = face.map(i => wedge!.vertices[i])
    const [a, b] = [v, w].map(end => end.map((x, i) => x - u[i]) as unknown as Triple)
    const normal: Triple = [a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]]
    for (let i = 0; i < points.length; i += 3) {
      const k: Triple = [points[i], points[i + 1], points[i + 2]]
      expect(dot(normal, k) - dot(normal, u)).toBeLessThan(1e-6)
    }
  }
})

describe('places in the text', () => {
  const text =
    'lattice:\n  vectors:\n    - [3, 0, 0]\n    - [0, 4, 0]\n    - [0, 0, 5]\npoints:\n  Q: [0.9, 0, 0]\npath: Γ – Q – Γ | Q – X\n'
  const { points, segments, vectorRanges } = scene(text)
  const q = points.find(({ label }) => label === 'Q')!

  test('of a point: its definition, and where the path names it', () => {
    expect(cut(text, q.range!)).toBe('Q: [0.9, 0, 0]')
    expect(q.mentions.map(range => cut(text, range))).toEqual(['Q', 'Q'])
  })
  test('of a segment', () => {
    expect(segments.map(({ range, piece }) => [piece, cut(text, range!)])).toEqual([
      [0, 'Γ – Q'],
      [0, 'Q – Γ'],
      [1, 'Q – X'],
    ])
  })
  test('of the direct vectors', () => {
    expect(vectorRanges.map(range => cut(text, range!))).toEqual(['[3, 0, 0]', '[0, 4, 0]', '[0, 0, 5]'])
  })
  test('a point outside has its equivalent, and the severity of what is said of it', () => {
    expect(q.place).toBe('outside')
    expect(q.folded![0]).toBeCloseTo(-0.1 * ((2 * Math.PI) / 3), 9)
    expect(segments[0].severity).toBe('warning')
  })
})

test('without symmetry there is a picture all the same', () => {
  const { snapshot } = checked('lattice: {bravais: cF, a: 4}\natoms:\n  - Si: [0, 0, x]\npath: Γ – X\n')
  const answer = sceneAnswer(snapshot)
  expect(answer.scene!.zone.solid).toBe('truncated octahedron')
  expect(answer.scene!.wedge).toBeUndefined()
})

describe('what cannot be drawn says why', () => {
  test.each([
    ['', 'The file holds no crystal yet.'],
    ['lattice: {bravais: cF}\n', /`a`|parameter/],
    ['lattice: {bravais: cF, a: six}\n', /six/],
    ['title: [\n', /./],
  ])('%j', (text, reason) => {
    const answer = sceneAnswer(checked(text).snapshot)
    expect(answer.scene).toBeNull()
    expect(answer.reason).toMatch(reason)
  })
  test('in another document, its own fault', () => {
    const { snapshot } = checked('lattice: {bravais: cF, a: 4}\n---\nlattice: {bravais: cF, a: six}\n')
    expect(sceneAnswer(snapshot, 1).scene).not.toBeNull()
    expect(sceneAnswer(snapshot, 2).reason).toMatch(/six/)
    expect(sceneAnswer(snapshot, 3).scene).toBeNull()
  })
})

// By hand: the second zone of the face-centred cubic lattice has a piece on each of the eight hexagons and six squares.
// On a square, four planes of the hexagons around it meet in a tip: four edges and one corner more. On a hexagon, three
// planes of the neighbouring squares cut off the tip of the three others: a body of seven faces with three edges in each
// corner, so with ten corners and fifteen edges, nine and four of them beyond the hexagon.
test('a further zone in one piece: shared edges and corners are there once', () => {
  const { snapshot } = checked('lattice: {bravais: cF, a: 4}\n')
  const solid = zoneSolidAnswer(snapshot, 1, 2).solid!
  expect(solid.faces).toHaveLength(8 * 7 + 6 * 5)
  expect(solid.edges).toHaveLength(36 + 8 * 9 + 6 * 4)
  expect(solid.vertices).toHaveLength(24 + 8 * 4 + 6)
  expect(zoneSolidAnswer(snapshot, 1, 99).solid).toBeNull()
  expect(zoneSolidAnswer(snapshot, 2, 2).solid).toBeNull()
})

test('the home view stands on the side of the path', () => {
  const { home, segments } = scene('lattice: {bravais: cF, a: 4}\npath: Γ – X – W – K\n')
  const [theta, phi] = home.map(angle => (angle * Math.PI) / 180)
  const eye: Triple = [Math.sin(theta) * Math.cos(phi), Math.sin(theta) * Math.sin(phi), Math.cos(theta)]
  expect(segments.reduce((sum, { from, to }) => sum + dot(eye, from.k) + dot(eye, to.k), 0)).toBeGreaterThan(
    0,
  )
  expect(scene('lattice: {bravais: hp, a: 2}\npath: Γ – M\n').home).toEqual([0, -90])
})
