/** How one cell lies in the lattice of another: the whole-numbered matrix, the rotation and the strain between them. */
import { symmetricEigen } from './eigen.ts'
import { type Dimension, shortBasis } from './reduction.ts'
import {
  combine,
  determinant,
  dot,
  IDENTITY,
  inverse,
  type Mat3,
  mapMatrix,
  multiply,
  norm,
  transpose,
  type Vec3,
} from './vector.ts'

export interface CellRelation {
  /** Whole numbers, rows: the job's vectors as combinations of ours, or ours as combinations of the job's. */
  readonly matrix: Mat3
  readonly of: 'ours' | 'job'
  /** Determinant of the matrix: 1 or −1 where both are cells of one lattice. */
  readonly determinant: number
  /** Rows: job = matrix · ours · stretch · turn (rows are vectors); orthogonal, −1 as determinant where improper. */
  readonly turn: Mat3
  /** Degrees; of an improper one, of its proper part (turn times −1). */
  readonly angle: number
  /** Cartesian unit vector; undefined where nothing turns. */
  readonly axis?: Vec3
  readonly proper: boolean
  /** Largest change of a length, as a part of 1; negative where the job's cell is compressed most. */
  readonly strain: number
}

/** Two cells are of one crystal up to this strain: thermal expansion and functionals stay below (common practice). */
export const LARGEST_STRAIN = 0.05
/** Turns below this are rounding, in degrees: vectors written to four digits turn by less. */
const NO_TURN = 0.02
/** Larger cells of one lattice are not looked for. */
const LARGEST_FOLD = 1000

/**
 * How a cell can lie in the lattice of another, the simplest first: a symmetric lattice has several ways that strain it
 * no more than the first. In three dimensions turns with −1 are left out: every
 * lattice has −1. A sheet may be mirrored.
 * @param job rows; beyond the dimension unit normals, as in `ours`.
 * @returns none where neither cell lies in the lattice of the other.
 */
export function relateCells(ours: Mat3, job: Mat3, dimension: Dimension): CellRelation[] {
  const ratio = Math.abs(determinant(job) / determinant(ours))
  if (!(ratio > 0) || ratio > LARGEST_FOLD || ratio < 1 / LARGEST_FOLD) return []
  const found = [
    ...(ratio > 1 - 3 * LARGEST_STRAIN ? embeddings(ours, job, dimension, 'ours') : []),
    ...(ratio < 1 - 3 * LARGEST_STRAIN ? embeddings(job, ours, dimension, 'job') : []),
  ]
  const least = Math.min(...found.map(({ strain }) => Math.abs(strain)))
  return found
    .filter(({ strain, proper }) => (proper || dimension < 3) && Math.abs(strain) <= least + SAME_STRAIN)
    .sort((one, other) => Number(other.proper) - Number(one.proper) || one.angle - other.angle)
}
/** Vectors written to five digits leave this much open. */
const SAME_STRAIN = 1e-5

/** Every matrix that makes of `small` a cell like `large`; where it stands as it is, that one alone. */
function embeddings(small: Mat3, large: Mat3, dimension: Dimension, of: CellRelation['of']): CellRelation[] {
  const asItStands = relation(
    rounded(multiply(large, inverse(small)), dimension),
    small,
    large,
    dimension,
    of,
  )
  if (asItStands && asItStands.angle <= NO_TURN && asItStands.proper) return [asItStands]
  const short = shortBasis(large, dimension)
  const rows = [0, 1, 2].slice(0, dimension)
  const fine = shortBasis(small, dimension)
  const candidates = rows.map(i => alike(fine.basis, norm(short.basis[i]), dimension))
  const found: CellRelation[] = []
  const back = inverse(short.change)
  const choose = (chosen: Vec3[]): void => {
    if (found.length >= MOST_TRIED) return
    const i = chosen.length
    if (i === dimension) {
      const whole = [...chosen, ...IDENTITY.slice(dimension)] as unknown as Mat3
      const matrix = rounded(multiply(back, multiply(whole, fine.change)), dimension)
      const one = relation(matrix, small, large, dimension, of)
      if (one) found.push(one)
      return
    }
    for (const v of candidates[i]) {
      const here = combine(v, fine.basis)
      const fits = chosen.every((u, j) => {
        const wanted = dot(short.basis[i], short.basis[j])
        const size = norm(short.basis[i]) * norm(short.basis[j])
        return Math.abs(dot(here, combine(u, fine.basis)) - wanted) <= 2 * LARGEST_STRAIN * size
      })
      if (fits) choose([...chosen, v])
    }
  }
  choose([])
  return found
}
/** The 48 settings of a cubic cell, and what a few per cent of strain let pass beside them. */
const MOST_TRIED = 2000

/** Whole vectors whose length is within the largest strain of a given one. */
function alike(basis: Mat3, length: number, dimension: Dimension): Vec3[] {
  const reach = transpose(inverse(basis)).map((dual, i) =>
    i < dimension ? Math.ceil(length * (1 + LARGEST_STRAIN) * norm(dual)) : 0,
  )
  const found: Vec3[] = []
  for (let p = -reach[0]; p <= reach[0]; p++)
    for (let q = -reach[1]; q <= reach[1]; q++)
      for (let r = -reach[2]; r <= reach[2]; r++) {
        const away = norm(combine([p, q, r], basis)) / length - 1
        if (Math.abs(away) <= LARGEST_STRAIN) found.push([p, q, r])
      }
  return found
}

const rounded = (m: Mat3, dimension: Dimension): Mat3 =>
  m.map((row, i) =>
    row.map((x, j) => (i < dimension && j < dimension ? Math.round(x) + 0 : IDENTITY[i][j])),
  ) as unknown as Mat3

function relation(
  matrix: Mat3,
  small: Mat3,
  large: Mat3,
  dimension: Dimension,
  of: CellRelation['of'],
): CellRelation | undefined {
  const fold = Math.round(determinant(matrix))
  if (fold === 0 || !Number.isFinite(fold)) return undefined
  const made = multiply(matrix, small)
  // Rows: large = made · F; seen from the job, F is turned round.
  const forward = multiply(inverse(made), large)
  const F = of === 'ours' ? forward : inverse(forward)
  const turn = orthogonalPart(F)
  const stretch = multiply(F, transpose(turn))
  const changes = symmetricEigen(stretch, dimension).map(({ value }) => value - 1)
  const strain = changes.reduce((a, b) => (Math.abs(b) > Math.abs(a) ? b : a))
  if (!(Math.abs(strain) <= LARGEST_STRAIN)) return undefined
  const proper = determinant(turn) > 0
  const { angle, axis } = turnOf(proper ? turn : mapMatrix(turn, x => -x))
  return { matrix, of, determinant: fold, turn, angle, axis, proper, strain }
}

/** The orthogonal factor of a matrix by Newton's steps (N. J. Higham, SIAM J. Sci. Stat. Comput. 7, 1160, 1986). */
function orthogonalPart(m: Mat3): Mat3 {
  let turn = m
  for (let step = 0; step < 40; step++) {
    const other = transpose(inverse(turn))
    turn = turn.map((row, i) => row.map((x, j) => (x + other[i][j]) / 2)) as unknown as Mat3
  }
  return turn
}

/** Of a matrix that acts on rows. */
function turnOf(m: Mat3): { angle: number; axis?: Vec3 } {
  const cos = (m[0][0] + m[1][1] + m[2][2] - 1) / 2
  const odd: Vec3 = [m[1][2] - m[2][1], m[2][0] - m[0][2], m[0][1] - m[1][0]]
  const angle = (Math.atan2(norm(odd) / 2, cos) * 180) / Math.PI
  if (angle <= NO_TURN) return { angle: 0 }
  const symmetric = m.map((row, i) => row.map((x, j) => (x + m[j][i]) / 2)) as unknown as Mat3
  const { vector } = symmetricEigen(symmetric, 3).reduce((a, b) => (b.value > a.value ? b : a))
  return { angle, axis: dot(vector, odd) < 0 ? (vector.map(x => -x) as unknown as Vec3) : vector }
}
