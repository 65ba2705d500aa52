/** A mesh as the list of k-points with weights that a job sums over. */
import { isSymmetricMesh, LARGEST_LISTING, type Mesh, meshOrbits, meshPoints } from '../crystal/mesh.ts'
import { IDENTITY } from '../crystal/vector.ts'
import type { Crystal } from '../meaning/crystal.ts'

export interface MeshJson {
  readonly divisions: readonly number[]
  /** In mesh steps. */
  readonly shift: readonly number[]
  /** All rotations of the k-group map the mesh onto itself. */
  readonly symmetric: boolean
  /** Fractions of the primitive reciprocal vectors in [0, 1); the weights add up to 1. */
  readonly points: readonly { readonly fraction: readonly number[]; readonly weight: number }[]
}

/** A longer list serves no job, and is more text than can be held. */
export const MOST_MESH_POINTS = 1_000_000

/**
 * @param full every point, each with the same weight; else one of each set that the rotations make of one.
 * @returns undefined where the symmetry is not known, or there are too many points to list.
 */
export function meshJson({ kGroup, dimension }: Crystal, mesh: Mesh, full: boolean): MeshJson | undefined {
  const total = meshPoints(mesh)
  if (!kGroup || total > LARGEST_LISTING) return undefined
  const { points, sizes } = meshOrbits(mesh, full ? [IDENTITY] : kGroup)!
  if (sizes.length > MOST_MESH_POINTS) return undefined
  const fraction = (i: number) =>
    mesh.divisions.slice(0, dimension).map((n, axis) => inCell((points[3 * i + axis] + mesh.shift[axis]) / n))
  return {
    divisions: mesh.divisions.slice(0, dimension),
    shift: mesh.shift.slice(0, dimension),
    symmetric: isSymmetricMesh(mesh, kGroup),
    points: Array.from(sizes, (size, i) => ({ fraction: fraction(i), weight: size / total })),
  }
}

const inCell = (x: number): number => x - Math.floor(x)
