/** Whole-numbered vectors and what stands at right angles to them, for questions modulo reciprocal vectors. */
import { cross, dot, scale, tidy, type Vec3 } from '../crystal/vector.ts'

/** What arithmetic leaves of a whole number of the size of some dozens. */
const SAME = 1e-6
/** Directions of books are whole vectors over 24 at the finest (see their formulas). */
const LARGEST_FACTOR = 24

const gcd = (p: number, q: number): number => (q === 0 ? p : gcd(q, p % q))

/** Without a common factor; the zero vector stays. */
export function lowestTerms(v: Vec3): Vec3 {
  const common = Math.abs(v.reduce(gcd))
  return common === 0 ? v : tidy(scale(v, 1 / common))
}

/** The shortest whole vector along a direction; undefined where there is none with small numbers. */
export function wholeDirection(v: Vec3): Vec3 | undefined {
  const smallest = Math.min(...v.map(Math.abs).filter(x => x > SAME))
  for (let factor = 1; factor <= LARGEST_FACTOR; factor++) {
    const scaled = scale(v, factor / smallest)
    const whole = scaled.map(Math.round) as unknown as Vec3
    if (scaled.every((x, i) => Math.abs(x - whole[i]) < SAME)) return lowestTerms(whole)
  }
  return undefined
}

/**
 * Two whole vectors at right angles to a whole vector v without a common factor, of which all others are whole
 * combinations. So a point lies on a line along v through the origin, modulo whole vectors, when its products with both
 * are whole.
 */
export function acrossLine([x, y, z]: Vec3): readonly [Vec3, Vec3] {
  const { common, u, v } = bezout(x, y)
  if (common === 0) {
    return [
      [1, 0, 0],
      [0, 1, 0],
    ]
  }
  return [tidy([y / common, -x / common, 0]), tidy([-u * z, -v * z, common])]
}

/** The whole vector without a common factor at right angles to two whole vectors. */
export const acrossPlane = (u: Vec3, v: Vec3): Vec3 => lowestTerms(cross(u, v))

/** common = u·x + v·y, the greatest common divisor. */
function bezout(x: number, y: number): { common: number; u: number; v: number } {
  if (y === 0) return { common: Math.abs(x), u: Math.sign(x), v: 0 }
  const { common, u, v } = bezout(y, x % y)
  return { common, u: v, v: u - Math.trunc(x / y) * v }
}

/** Are the products of a vector with some whole vectors whole numbers? */
export const isOn = (d: Vec3, across: readonly Vec3[], tolerance: number): boolean =>
  across.every(n => {
    const product = dot(d, n)
    const size = Math.abs(n[0]) + Math.abs(n[1]) + Math.abs(n[2])
    return Math.abs(product - Math.round(product)) <= tolerance * size
  })
