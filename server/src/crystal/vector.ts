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
  return transpose([
    scale(cross(m[1], m[2]), d),
    scale(cross(m[2], m[0]), d),
    scale(cross(m[0], m[1]), d),
  ])
}
export const mapMatrix = (m: Mat3, f: (x: number) => number): Mat3 =>
  m.map(row => row.map(f)) as unknown as Mat3

/** Angle between two vectors in degrees. */
export const angle = (u: Vec3, v: Vec3): number =>
  (Math.atan2(norm(cross(u, v)), dot(u, v)) * 180) / Math.PI
