/** The counts of a mesh in a few words, as hints and lenses show them. */
import { countOrbits, type Mesh, meshPoints } from '../crystal/mesh.ts'
import type { Crystal } from '../meaning/crystal.ts'

export interface MeshCounts {
  readonly divisions: readonly number[]
  readonly full: number
  /** undefined while the symmetry is not known, or where the mesh is too large. */
  readonly irreducible?: number
}

export function meshCounts({ dimension = 3, kGroup }: Crystal, mesh: Mesh): MeshCounts {
  const irreducible = kGroup && countOrbits(mesh, kGroup)
  return { divisions: mesh.divisions.slice(0, dimension), full: meshPoints(mesh), irreducible }
}

const LARGEST_WHOLE = 1e6

/** Larger numbers as powers of ten: nobody counts their digits. */
export function wholeNumber(n: number): string {
  if (n < LARGEST_WHOLE) return String(n)
  const [mantissa, exponent] = n.toExponential(1).split('e+')
  const power = [...exponent].map(digit => '⁰¹²³⁴⁵⁶⁷⁸⁹'[Number(digit)]).join('')
  return `${mantissa}·10${power}`
}

/** `6 × 6 × 6` */
export const product = (divisions: readonly number[]): string => divisions.map(wholeNumber).join(' × ')
