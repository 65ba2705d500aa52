/** What path, `sampling` and `mesh` of a document come to, in numbers. */
import { divisionsForSpacing, type Mesh } from '../crystal/mesh.ts'
import type { StepRule } from '../crystal/path.ts'
import { distance, type Vec3 } from '../crystal/vector.ts'
import type { MeshBlock } from '../format/model.ts'
import { type Crystal, DEFAULT_SPACING, type PlacedPoint } from './crystal.ts'
import { recommendedPath } from './recommended.ts'

export interface WalkedSegment {
  readonly from?: PlacedPoint
  readonly to?: PlacedPoint
  /** undefined where an end is not known. */
  readonly length?: number
  /** The number of steps that the segment itself asks for. */
  readonly steps?: number
}

export interface WalkedPiece {
  readonly labels: readonly string[]
  readonly segments: readonly WalkedSegment[]
}

/** The path with its points placed, also where the file says `recommended`. Empty where there is none. */
export function walkedPath(crystal: Crystal): WalkedPiece[] {
  if (!crystal.document.path?.recommended)
    return crystal.pieces.map(({ piece, segments }) => ({
      labels: piece.labels.map(({ label }) => label),
      segments: segments.map(({ segment, ...placed }) => ({ ...placed, steps: segment.steps?.value })),
    }))
  return (recommendedPath(crystal)?.pieces ?? []).map(labels => {
    const points = labels.map(label => crystal.pointOf(label))
    return { labels, segments: points.slice(1).map((to, i) => walk(points[i], to)) }
  })
}

const walk = (from: PlacedPoint | undefined, to: PlacedPoint | undefined): WalkedSegment => ({
  from,
  to,
  length: from && to && distance(from.cartesian, to.cartesian),
})

/** How the path is sampled; the default where the file does not say, or not legibly. */
export function stepRule({ document, angstrom }: Crystal): StepRule {
  const { spacing, steps, total } = document.sampling ?? {}
  if (steps && steps.value >= 1) return { kind: 'steps', steps: steps.value }
  if (total && total.value >= 1) return { kind: 'total', total: total.value }
  if (spacing && spacing.value > 0) return { kind: 'spacing', spacing: spacing.value }
  return { kind: 'spacing', spacing: DEFAULT_SPACING * angstrom }
}

export interface NamedMesh {
  /** undefined for the only, unnamed mesh. */
  readonly name?: string
  readonly mesh: Mesh
}

/** The meshes of the document that can be read. */
export const meshesOf = (crystal: Crystal): NamedMesh[] =>
  crystal.document.meshes.flatMap(block => {
    const mesh = meshOf(crystal, block)
    return mesh ? [{ name: block.name, mesh }] : []
  })

/**
 * The mesh that a block asks for; undefined where it cannot be read, or where its divisions follow from a spacing and
 * the rotations that they must keep are not known.
 */
export function meshOf(crystal: Crystal, { divisions, spacing, shift }: MeshBlock): Mesh | undefined {
  const { dimension, lattice, kGroup } = crystal
  if (!dimension || !lattice) return undefined
  const steps: Vec3 | undefined = shift ? crystal.componentsInSpace(shift) : [0, 0, 0]
  if (!steps) return undefined
  if (!divisions) {
    if (!spacing || !(spacing.value > 0) || !kGroup) return undefined
    return {
      divisions: divisionsForSpacing(lattice.reciprocal, dimension, spacing.value, kGroup),
      shift: steps,
    }
  }
  const numbers = [0, 1, 2].map(i =>
    i < divisions.items.length || i < dimension ? divisions.items[i]?.value : 1,
  )
  if (divisions.items.length > 3 || !numbers.every(isDivision)) return undefined
  return { divisions: numbers as unknown as Vec3, shift: steps }
}

const isDivision = (n: number | undefined): boolean => n !== undefined && Number.isInteger(n) && n >= 1
