/**
 * Supercells: the lattice that a matrix of whole numbers makes of a primitive one, and where k-points of one zone lie in
 * the other. Rows of M give the new vectors, A′ = M A; so B′ = M⁻ᵀ B, and columns of k-fractions go to κ′ = Mκ. Modulo
 * whole numbers |det M| primitive points come to lie on each point of the new zone.
 */
import { K_TOLERANCE } from './kspace.ts'
import { isLattice, type Lattice, latticeFromVectors } from './lattice.ts'
import { type Dimension, shortBasis } from './reduction.ts'
import { apply, combine, IDENTITY, inverse, type Mat3, tidy, transpose, type Vec3 } from './vector.ts'

export interface Supercell {
  /** Rows: its vectors as whole combinations of the primitive ones; beyond the dimension rows of the unit matrix. */
  readonly matrix: Mat3
  /** How many primitive cells it holds, |det M|. */
  readonly fold: number
  /** Of its own vectors, where they lie in space; without a centring. */
  readonly lattice: Lattice
}

/**
 * @param matrix rows as combinations of the primitive vectors; what stands beyond the dimension does not count.
 * @returns undefined where an entry is no whole number, or the vectors span no cell.
 */
export function supercellOf(primitive: Lattice, matrix: Mat3): Supercell | undefined {
  const { dimension } = primitive
  const periodic = periodicPart(matrix, dimension)
  if (!periodic.flat().every(Number.isSafeInteger)) return undefined
  const fold = Number(magnitude(integerDeterminant(periodic)))
  if (fold === 0) return undefined
  const rows = periodic.slice(0, dimension).map(row => tidy(combine(row, primitive.primitive)))
  const lattice = latticeFromVectors(rows)
  return isLattice(lattice) ? { matrix: periodic, fold, lattice } : undefined
}

const periodicPart = (m: Mat3, dimension: Dimension): Mat3 =>
  m.map((row, i) =>
    row.map((x, j) => (i < dimension && j < dimension ? x : IDENTITY[i][j])),
  ) as unknown as Mat3

/** The determinant of a matrix of whole numbers, exactly. */
export function integerDeterminant(m: Mat3): bigint {
  const [a, b, c] = m.map(row => row.map(BigInt))
  return (
    a[0] * (b[1] * c[2] - b[2] * c[1]) +
    a[1] * (b[2] * c[0] - b[0] * c[2]) +
    a[2] * (b[0] * c[1] - b[1] * c[0])
  )
}

const magnitude = (x: bigint): bigint => (x < 0n ? -x : x)

export interface NearestImage {
  /** In the lattice's unit of length. */
  readonly distance: number
  /** The translation, in multiples of the lattice's primitive vectors. */
  readonly translation: Vec3
}

/** How far anything in a cell is from its own nearest image: the length of the shortest lattice vector. */
export function nearestImageOf({ primitive, dimension }: Lattice): NearestImage {
  const { lengths, change } = shortBasis(primitive, dimension)
  return { distance: lengths[0], translation: change[0] }
}

/** Fractions of the supercell's reciprocal vectors, not brought into the first cell. */
export const supercellFraction = (matrix: Mat3, fraction: Vec3): Vec3 => tidy(apply(matrix, fraction))

/** The same modulo 1, in [0, 1); a component within `K_TOLERANCE` of a whole number is 0. */
export const landingOf = (matrix: Mat3, fraction: Vec3): Vec3 =>
  supercellFraction(matrix, fraction).map(x => {
    const rest = x - Math.floor(x)
    return rest < K_TOLERANCE || rest > 1 - K_TOLERANCE ? 0 : rest
  }) as unknown as Vec3

/** Does this primitive k-point come to lie on the supercell's Γ? That is, does the supercell hold it unfolded? */
export const landsOnGamma = (matrix: Mat3, fraction: Vec3): boolean =>
  landingOf(matrix, fraction).every(x => x === 0)

/** Longer lists of folded points and of copies serve nobody. */
export const LARGEST_FOLD = 5_000

/**
 * The primitive k-points that come to lie on one point of the supercell's zone: |det M| of them, in [0, 1), in the order of
 * their numbers. Of Γ they are exact multiples of 1/|det M|.
 * @param landing fractions of the supercell's reciprocal vectors.
 * @returns undefined where there are more than `LARGEST_FOLD`.
 */
export function unfoldedFrom(matrix: Mat3, landing: Vec3): Vec3[] | undefined {
  const classes = cosets(matrix)
  if (!classes) return undefined
  const { numerators, denominator } = wholeInverse(matrix)
  // Modulo the denominator the products below stay exact.
  const rows = numerators.map(row => row.map(x => Number(x % denominator)))
  const size = Number(denominator)
  const base = landing.every(x => x === 0) ? landing : apply(inverse(matrix), landing)
  const points = classes.map(n =>
    rows.map((row, i) => {
      const numerator = modulo(row[0] * n[0] + row[1] * n[1] + row[2] * n[2], size)
      const x = base[i] + numerator / size
      const rest = x - Math.floor(x)
      return rest > 1 - ROUNDING ? 0 : rest
    }),
  )
  return points.sort((p, q) => p[0] - q[0] || p[1] - q[1] || p[2] - q[2]) as unknown as Vec3[]
}

/** What arithmetic leaves below a whole number. */
const ROUNDING = 1e-12

const modulo = (x: number, n: number): number => ((x % n) + n) % n

/**
 * One translation of the primitive lattice for each primitive cell that the supercell holds, zero first: those that no
 * translation of the supercell carries into each other, in multiples of the primitive vectors.
 * @returns undefined where there are more than `LARGEST_FOLD`.
 */
export const translationsIn = (matrix: Mat3): Vec3[] | undefined => cosets(transpose(matrix))

/** Whole vectors that do not differ by a whole combination of the matrix's columns. Zero is the first. */
function cosets(matrix: Mat3): Vec3[] | undefined {
  const [p, q, r] = triangular(matrix)
  if (p * q * r > BigInt(LARGEST_FOLD)) return undefined
  const found: Vec3[] = []
  for (let i = 0; i < p; i++) for (let j = 0; j < q; j++) for (let k = 0; k < r; k++) found.push([i, j, k])
  return found
}

/**
 * The diagonal of the lower triangular matrix whose columns have the same whole combinations (C. Hermite, J. reine angew.
 * Math. 41, 191, 1851): the boxes of these sides, put at all combinations, fill the whole vectors without overlap.
 */
function triangular(matrix: Mat3): [bigint, bigint, bigint] {
  const columns = transpose(matrix).map(column => column.map(BigInt))
  for (let i = 0; i < 3; i++)
    for (let j = i + 1; j < 3; j++)
      while (columns[j][i] !== 0n) {
        const times = columns[i][i] / columns[j][i]
        const rest = columns[i].map((x, k) => x - times * columns[j][k])
        columns[i] = columns[j]
        columns[j] = rest
      }
  return [magnitude(columns[0][0]), magnitude(columns[1][1]), magnitude(columns[2][2])]
}

/** M⁻¹ as whole numbers over |det M|, exactly. */
export function wholeInverse(matrix: Mat3): { numerators: bigint[][]; denominator: bigint } {
  const determinant = integerDeterminant(matrix)
  const sign = determinant < 0n ? -1n : 1n
  const m = matrix.map(row => row.map(BigInt))
  const minor = (i: number, j: number): bigint => {
    const [r, s] = [(i + 1) % 3, (i + 2) % 3]
    const [t, u] = [(j + 1) % 3, (j + 2) % 3]
    return m[r][t] * m[s][u] - m[r][u] * m[s][t]
  }
  const numerators = [0, 1, 2].map(j => [0, 1, 2].map(i => sign * minor(i, j)))
  return { numerators, denominator: magnitude(determinant) }
}
