/** Vectors and 3×3 matrices as plain tuples. A matrix is three rows; lattice matrices hold one vector a row. */
export type Vec3 = readonly [number, number, number]
export type Mat3 = readonly [Vec3, Vec3, Vec3]

export const IDENTITY: Mat3 = [
  [1, 0, 0],
  [0, 1, 0],
  [0, 0, 1],
]

export const add = (u: Vec3, v: Vec3): Vec3 => [u[0] + v[0], u[1] + v[1], u[2] + v[2]]
export const subtract = (u: Vec3, v: Vec3): Vec3 => [u[0] - v[0], u[1] - v[1], u[2] - v[2]]
export const scale = (u: Vec3, s: number): Vec3 => [u[0] * s, u[1] * s, u[2] * s]
export const dot = (u: Vec3, v: Vec3): number => u[0] * v[0] + u[1] * v[1] + u[2] * v[2]
export const norm = (u: Vec3): number => Math.hypot(u[0], u[1], u[2])
export const cross = (u: Vec3, v: Vec3): Vec3 => [
  u[1] * v[2] - u[2] * v[1],
  u[2] * v[0] - u[0] * v[2],
  u[0] * v[1] - u[1] * v[0],
]
export const distance = (u: Vec3, v: Vec3): number => Math.hypot(u[0] - v[0], u[1] - v[1], u[2] - v[2])

/** Row vector times matrix: the combination u₀·row₀ + u₁·row₁ + u₂·row₂ (fractions to Cartesian). */
export const combine = (u: Vec3, m: Mat3): Vec3 => [
  u[0] * m[0][0] + u[1] * m[1][0] + u[2] * m[2][0],
  u[0] * m[0][1] + u[1] * m[1][1] + u[2] * m[2][1],
  u[0] * m[0][2] + u[1] * m[1][2] + u[2] * m[2][2],
]
/** Matrix times column vector. */
export const apply = (m: Mat3, v: Vec3): Vec3 => [dot(m[0], v), dot(m[1], v), dot(m[2], v)]
export const multiply = (m: Mat3, n: Mat3): Mat3 => [combine(m[0], n), combine(m[1], n), combine(m[2], n)]
export const transpose = (m: Mat3): Mat3 => [
  [m[0][0], m[1][0], m[2][0]],
  [m[0][1], m[1][1], m[2][1]],
  [m[0][2], m[1][2], m[2][2]],
]
export const determinant = (m: Mat3): number => dot(m[0], cross(m[1], m[2]))
/** Inverse; the caller has made sure that the determinant does not vanish. */
export const inverse = (m: Mat3): Mat3 => {
  const d = 1 / determinant(m)
  return transpose([scale(cross(m[1], m[2]), d), scale(cross(m[2], m[0]), d), scale(cross(m[0], m[1]), d)])
}
export const mapMatrix = (m: Mat3, f: (x: number) => number): Mat3 =>
  m.map(row => row.map(f)) as unknown as Mat3

/** Angle between two vectors in degrees. */
export const angle = (u: Vec3, v: Vec3): number => (Math.atan2(norm(cross(u, v)), dot(u, v)) * 180) / Math.PI

/** What one, two or three vectors span: a length, an area or a volume; not negative. */
export const spanned = (rows: readonly Vec3[]): number =>
  rows.length === 3
    ? Math.abs(dot(rows[0], cross(rows[1], rows[2])))
    : rows.length === 2
      ? norm(cross(rows[0], rows[1]))
      : norm(rows[0])

/** Veltkamp's constant 2²⁷ + 1: splits a double into two halves whose products are exact. */
const SPLITTER = 134217729

/** What rounding took from the product p = a·b (T. J. Dekker, Numer. Math. 18, 224, 1971). */
function productError(a: number, b: number, p: number): number {
  const ca = SPLITTER * a
  const cb = SPLITTER * b
  const ah = ca - (ca - a)
  const bh = cb - (cb - b)
  const al = a - ah
  const bl = b - bh
  return al * bl - (p - ah * bh - al * bh - ah * bl)
}

/**
 * a₀b₀ + a₁b₁ + a₂b₂ as if computed in twice the precision and rounded once: right also where the terms nearly
 * cancel, as in a short lattice vector made of long ones (T. Ogita, S. M. Rump and S. Oishi, SIAM J. Sci. Comput. 26,
 * 1955, 2005, algorithm Dot2).
 */
function carefulSum(a0: number, b0: number, a1: number, b1: number, a2: number, b2: number): number {
  const p0 = a0 * b0
  const p1 = a1 * b1
  const p2 = a2 * b2
  const s1 = p0 + p1
  const t1 = s1 - p0
  const s2 = s1 + p2
  const t2 = s2 - s1
  const lost =
    p0 -
    (s1 - t1) +
    (p1 - t1) +
    (s1 - (s2 - t2) + (p2 - t2)) +
    (productError(a0, b0, p0) + productError(a1, b1, p1) + productError(a2, b2, p2))
  return s2 + lost
}

/** As `combine`, in twice the working precision. */
export const carefulCombine = (u: Vec3, m: Mat3): Vec3 => [
  carefulSum(u[0], m[0][0], u[1], m[1][0], u[2], m[2][0]),
  carefulSum(u[0], m[0][1], u[1], m[1][1], u[2], m[2][1]),
  carefulSum(u[0], m[0][2], u[1], m[1][2], u[2], m[2][2]),
]

/** The same numbers without negative zeros, which nobody wants to read. */
export const tidy = (u: Vec3): Vec3 => [u[0] + 0, u[1] + 0, u[2] + 0]
