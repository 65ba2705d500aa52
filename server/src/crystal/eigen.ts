import type { Dimension } from './reduction.ts'
import { IDENTITY, type Mat3, type Vec3 } from './vector.ts'

/** Sweeps over a 3×3 matrix; five are ample, more cost nothing. */
const SWEEPS = 30

const PLANES = [
  [0, 1],
  [0, 2],
  [1, 2],
] as const

/**
 * Eigenvalues and unit eigenvectors of a symmetric matrix, of the part within the dimension (C. G. J. Jacobi, J. reine
 * angew. Math. 30, 51, 1846: plane rotations). In no order.
 */
export function symmetricEigen(m: Mat3, dimension: Dimension): { value: number; vector: Vec3 }[] {
  const a = m.map(row => [...row])
  const v = IDENTITY.map(row => [...row])
  for (let sweep = 0; sweep < SWEEPS; sweep++)
    for (const [p, q] of PLANES) {
      if (q >= dimension || a[p][q] === 0) continue
      const theta = (a[q][q] - a[p][p]) / (2 * a[p][q])
      const t = (theta < 0 ? -1 : 1) / (Math.abs(theta) + Math.hypot(theta, 1))
      const c = 1 / Math.hypot(t, 1)
      const s = t * c
      for (let k = 0; k < 3; k++) [a[k][p], a[k][q]] = [c * a[k][p] - s * a[k][q], s * a[k][p] + c * a[k][q]]
      for (const rows of [a, v])
        for (let k = 0; k < 3; k++)
          [rows[p][k], rows[q][k]] = [c * rows[p][k] - s * rows[q][k], s * rows[p][k] + c * rows[q][k]]
    }
  return [0, 1, 2].slice(0, dimension).map(i => ({ value: a[i][i], vector: v[i] as unknown as Vec3 }))
}
