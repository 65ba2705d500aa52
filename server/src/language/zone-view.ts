/** What the zone view asks of a text: the picture, the bands, further zones, figures. */
import type { DocumentAnalysis, Snapshot } from '../analysis.ts'
import { LAST_DRAWN_ZONE, type NthZone, nthZone } from '../crystal/nth-zone.ts'
import type { Dimension } from '../crystal/reduction.ts'
import type { Vec3 } from '../crystal/vector.ts'
import { bandFigure } from '../exchange/band-figure.ts'
import { bandsOf } from '../exchange/bands.ts'
import { zoneFigure } from '../exchange/figure.ts'
import { sceneOf } from '../exchange/scene.ts'
import type {
  BandsResult,
  FigureParams,
  FigureResult,
  SceneResult,
  SceneSolid,
  ZoneSolidResult,
} from '../protocol.ts'
import { rangeOf } from './diagnostics.ts'

/** @param document ordinal from 1; the first where it is not said. */
export const documentOf = (snapshot: Snapshot, document = 1): DocumentAnalysis | undefined =>
  snapshot.documents[document - 1]

export function sceneAnswer(snapshot: Snapshot, document = 1): SceneResult {
  const { version, pending } = snapshot
  const scene = sceneOf(snapshot, document - 1)
  const documents = snapshot.documents.map(each => rangeOf(snapshot, each.document.at))
  return scene
    ? { version, scene, pending, documents }
    : { version, scene: null, reason: reasonOf(snapshot, document), pending, documents }
}

/** The first error of the document says why it has no zone. */
function reasonOf(snapshot: Snapshot, document: number): string {
  if (snapshot.documents.length === 0 && snapshot.findings.length === 0)
    return 'The file holds no crystal yet.'
  const errors = snapshot.findings.filter(({ severity }) => severity === 'error')
  const own = errors.filter(finding => finding.document === document)
  return (own[0] ?? errors[0])?.message ?? 'The file has no lattice yet.'
}

export function bandsAnswer(snapshot: Snapshot, document?: number): BandsResult {
  const crystal = documentOf(snapshot, document)?.crystal
  return { version: snapshot.version, bands: (crystal && bandsOf(crystal)) ?? null }
}

export function zoneSolidAnswer(
  snapshot: Snapshot,
  document: number | undefined,
  n: number,
): ZoneSolidResult {
  const zone = documentOf(snapshot, document)?.crystal.zone
  const isDrawn = Number.isInteger(n) && n >= 1 && n <= LAST_DRAWN_ZONE
  const drawn = zone && isDrawn ? nthZone(zone, n) : undefined
  return {
    version: snapshot.version,
    solid: drawn && zone ? inOne(drawn, zone.dimension, zone.tolerance) : null,
  }
}

/** All pieces as one set of vertices, edges and faces; an edge that two pieces share is there once. */
export function inOne({ pieces }: NthZone, dimension: Dimension, tolerance: number): SceneSolid {
  const vertices: Vec3[] = []
  const known = new Map<string, number>()
  // Corners of pieces differ by rounding only, far less than the tolerance: neighbouring squares of the grid suffice.
  const indexOf = (v: Vec3): number => {
    const square = v.map(x => Math.round(x / (4 * tolerance)))
    for (let i = -1; i <= 1; i++)
      for (let j = -1; j <= 1; j++)
        for (let l = -1; l <= 1; l++) {
          const found = known.get(`${square[0] + i},${square[1] + j},${square[2] + l}`)
          if (found !== undefined) return found
        }
    known.set(String(square), vertices.length)
    return vertices.push(v) - 1
  }
  const edges = new Map<string, readonly [number, number]>()
  const faces = pieces
    .flatMap(piece => piece.faces)
    .map(face => {
      const corners = face.map(indexOf)
      corners.forEach((i, at) => {
        const j = corners[(at + 1) % corners.length]
        if (i !== j) edges.set(`${Math.min(i, j)},${Math.max(i, j)}`, [i, j])
      })
      return corners
    })
  return { vertices, edges: [...edges.values()], faces: dimension > 1 ? faces : [] }
}

export function figureAnswer(snapshot: Snapshot, { document = 1, kind, view }: FigureParams): FigureResult {
  const { version } = snapshot
  if (kind === 'bands') {
    const { bands } = bandsAnswer(snapshot, document)
    return { version, svg: bands && bandFigure(bands) }
  }
  const scene = sceneOf(snapshot, document - 1)
  return {
    version,
    svg: scene ? zoneFigure(scene, { view: scene.dimension === 3 ? view : undefined }) : null,
  }
}
