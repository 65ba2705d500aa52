/** From a document to what the zone view and the figures draw: finished geometry, nothing left to compute. */
import type { DocumentFinding, Snapshot } from '../analysis.ts'
import { isSymmetricMesh, meshOrbits, meshPoints } from '../crystal/mesh.ts'
import { shellsAround } from '../crystal/shells.ts'
import { INVERSE_SYMBOL } from '../crystal/units.ts'
import { add, apply, combine, dot, type Mat3, type Vec3 } from '../crystal/vector.ts'
import { irreducibleWedge } from '../crystal/wedge.ts'
import { fold, placeInZone, type Zone } from '../crystal/zone.ts'
import type { LatticeDocument, Span } from '../format/model.ts'
import { displayLabel } from '../format/path.ts'
import type { Crystal, PlacedPoint } from '../meaning/crystal.ts'
import { pointFacts } from '../meaning/facts.ts'
import { count, inverseLength } from '../meaning/wording.ts'
import type {
  Scene,
  SceneMesh,
  SceneName,
  ScenePoint,
  SceneSegment,
  SceneSeverity,
  SceneSolid,
  TextRange,
} from '../protocol.ts'
import { meshesOf, walkedPath } from '../meaning/sampling.ts'

/** More irreducible points than this are no picture any more. */
const MOST_MESH_POINTS = 20_000

/** The scene of the n-th document (from 0); undefined where it has no zone. */
export function sceneOf(snapshot: Snapshot, ordinal = 0): Scene | undefined {
  const analysis = snapshot.documents[ordinal]
  const { lattice, zone } = analysis?.crystal ?? {}
  if (!analysis || !lattice || !zone) return undefined
  const { document, crystal } = analysis
  const marks = new Marks(snapshot, document)
  const points = pointsOf(crystal, zone, marks)
  const segments = segmentsOf(crystal, marks)
  const wedge = crystal.kGroup && irreducibleWedge(zone, crystal.kGroup, meanDirection(segments))
  return {
    document: document.number,
    title: document.title?.value ?? '',
    dimension: lattice.dimension,
    unit: INVERSE_SYMBOL[crystal.unit],
    zone: { ...solid(zone), solid: zone.solid, inradius: zone.inradius, circumradius: zone.circumradius },
    reciprocal: lattice.reciprocal.slice(0, lattice.dimension),
    axes: lattice.conventionalReciprocal.slice(0, lattice.dimension),
    vectorRanges: (document.lattice?.vectors?.rows ?? []).map(row => (row ? marks.range(row.at) : null)),
    points,
    segments,
    wedge: wedge && solid(wedge),
    meshes: meshes(crystal, zone, wedge?.direction),
    neighbours: shellsAround(zone),
    home: homeOf(lattice.dimension, segments),
    words: inWords(crystal, zone, points, segments),
  }
}

const solid = ({
  vertices,
  edges,
  faces,
}: {
  vertices: readonly Vec3[]
  edges: Zone['edges']
  faces: readonly { vertices: readonly number[] }[]
}): SceneSolid => ({
  vertices,
  edges,
  faces: faces.filter(face => face.vertices.length > 2).map(face => face.vertices),
})

/** Where things stand in the text, and the worst that is said of each place. */
class Marks {
  readonly #findings: readonly DocumentFinding[]
  constructor(
    private readonly snapshot: Snapshot,
    document: LatticeDocument,
  ) {
    this.#findings = snapshot.findings.filter(finding => finding.document === document.number)
  }

  range([start, end]: Span): TextRange {
    return { start: this.snapshot.positionOf(start), end: this.snapshot.positionOf(end) }
  }

  worstWithin([start, end]: Span): SceneSeverity | undefined {
    const inside = this.#findings
      .filter(({ at }) => at[0] >= start && at[1] <= end)
      .map(({ severity }) => severity)
    return (['error', 'warning', 'info'] as const).find(severity => inside.includes(severity))
  }
}

/** `X1` is set as X with the subscript 1. */
export const nameOf = (label: string): SceneName => {
  const [, base, sub, primes] = /^(.*?)(\d*)('*)$/s.exec(label)!
  return { base: base + primes.replaceAll("'", '′'), sub }
}

function pointsOf(crystal: Crystal, zone: Zone, marks: Marks): ScenePoint[] {
  const onPath = new Map<string, Span[]>()
  for (const { piece } of crystal.pieces)
    for (const { label, at } of piece.labels) onPath.set(label, [...(onPath.get(label) ?? []), at])
  for (const { labels } of walkedPath(crystal))
    for (const label of labels) if (!onPath.has(label)) onPath.set(label, [])

  const all = [
    ...crystal.points.values(),
    ...[...crystal.bookPoints.values()].filter(({ label }) => !crystal.fileDefines(label)),
  ]
  return all.map(point => {
    const mentions = onPath.get(point.label) ?? []
    const at: Span | undefined = point.entry ? [point.entry.key[0], point.entry.at[1]] : mentions[0]
    return {
      ...placed(crystal, zone, point),
      named: point.origin === 'file' || onPath.has(point.label),
      severity: at && marks.worstWithin(at),
      range: at && marks.range(at),
      mentions: mentions.map(mention => marks.range(mention)),
    }
  })
}

function placed(crystal: Crystal, zone: Zone, point: PlacedPoint): Omit<ScenePoint, 'named' | 'mentions'> {
  const { place } = placeInZone(zone, point.cartesian)
  return {
    label: point.label,
    name: nameOf(point.label),
    origin: point.origin,
    k: point.cartesian,
    place,
    ...(place === 'outside' ? { folded: fold(zone, point.fraction).cartesian } : {}),
    facts: pointFacts(crystal, point),
  }
}

function segmentsOf(crystal: Crystal, marks: Marks): SceneSegment[] {
  const spans = crystal.pieces.map(({ segments }) => segments.map(({ segment }) => segment.at))
  return walkedPath(crystal).flatMap(({ segments }, piece) =>
    segments.flatMap(({ from, to, length }, i) => {
      if (!from || !to || length === undefined) return []
      const at = spans[piece]?.[i]
      return {
        piece,
        from: { label: from.label, k: from.cartesian },
        to: { label: to.label, k: to.cartesian },
        length,
        severity: at && marks.worstWithin(at),
        range: at && marks.range(at),
      }
    }),
  )
}

/** A little from above, and so far beside the path that its lines do not cover each other. */
const HOME = { theta: 72, phi: 24, beside: 32 }

function homeOf(dimension: number, segments: readonly SceneSegment[]): readonly [number, number] {
  if (dimension < 3) return FROM_ABOVE
  const [x, y] = segments.length > 0 ? meanDirection(segments) : [0, 0]
  if (Math.hypot(x, y) === 0) return [HOME.theta, HOME.phi]
  return [HOME.theta, Math.round((Math.atan2(y, x) * 180) / Math.PI) - HOME.beside]
}
/** With x to the right and y upwards. */
const FROM_ABOVE = [0, -90] as const

const meanDirection = (segments: readonly SceneSegment[]): Vec3 => {
  const sum = segments.reduce<Vec3>(
    (total, { from, to, length }) => {
      const weighted = [0, 1, 2].map(i => (from.k[i] + to.k[i]) * length) as unknown as Vec3
      return add(total, weighted)
    },
    [0, 0, 0],
  )
  return sum.some(x => x !== 0) ? sum : [1, 0, 0]
}

const meshes = (crystal: Crystal, zone: Zone, wedge: Vec3 | undefined): SceneMesh[] => {
  const { kGroup } = crystal
  if (!kGroup) return []
  return meshesOf(crystal).flatMap(({ name, mesh }) => {
    const total = meshPoints(mesh)
    if (total > MOST_MESH_POINTS * kGroup.length) return []
    const orbits = meshOrbits(mesh, kGroup)
    if (!orbits || orbits.sizes.length > MOST_MESH_POINTS) return []
    const isSymmetric = isSymmetricMesh(mesh, kGroup)
    const points = Array.from(orbits.sizes, (_, i) => {
      const fraction = mesh.divisions.map((n, axis) => (orbits.points[3 * i + axis] + mesh.shift[axis]) / n)
      const folded = fold(zone, fraction as unknown as Vec3)
      return isSymmetric && wedge ? inWedge(folded.fraction, kGroup, zone, wedge) : folded.cartesian
    })
    return { name, points: points.flat(), weights: Array.from(orbits.sizes, size => size / total), total }
  })
}

/** The image of a point of the zone that lies in the irreducible wedge: the one furthest along the wedge's direction. */
function inWedge(fraction: Vec3, group: readonly Mat3[], { reciprocal }: Zone, direction: Vec3): Vec3 {
  let best: Vec3 = combine(fraction, reciprocal)
  for (const R of group) {
    const image = combine(apply(R, fraction), reciprocal)
    if (dot(image, direction) > dot(best, direction)) best = image
  }
  return best
}

function inWords(
  crystal: Crystal,
  zone: Zone,
  points: readonly ScenePoint[],
  segments: readonly SceneSegment[],
): string[] {
  const outside = points
    .filter(({ place, named }) => named && place === 'outside')
    .map(({ label }) => displayLabel(label))
  const pieces = walkedPath(crystal).map(({ labels }) => labels.map(displayLabel).join(' – '))
  const length = segments.reduce((sum, segment) => sum + segment.length, 0)
  const parts =
    zone.dimension === 3
      ? `${count(zone.faces.length, 'face')}, ${count(zone.edges.length, 'edge')}, ${count(zone.vertices.length, 'vertex', 'vertices')}`
      : count(zone.vertices.length, 'corner')
  return [
    `The first zone is a ${zone.solid}${zone.dimension === 1 ? '' : ` with ${parts}`}; its nearest wall is ${inverseLength(zone.inradius, crystal.unit)} from Γ.`,
    `Points: ${points.map(({ label }) => displayLabel(label)).join(', ') || 'none'}.`,
    ...(outside.length > 0 ? [`Outside the zone: ${outside.join(', ')}.`] : []),
    pieces.length > 0
      ? `Path: ${pieces.join(' | ')}; length ${inverseLength(length, crystal.unit)}.`
      : 'No path.',
  ]
}
