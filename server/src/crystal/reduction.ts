/**
 * Reduction of a lattice basis and the Voronoi vectors that follow from it.
 *
 * A lattice in n ≤ 3 dimensions has an obtuse superbase: n + 1 vectors that add up to nothing, any n of which are a
 * basis, with vᵢ·vⱼ ≤ 0 for i ≠ j (E. Selling, J. reine angew. Math. 77, 143, 1874; B. N. Delone, 1933). The sums of its
 * proper subsets are the only vectors whose bisecting planes can bound the Voronoi cell, and the products
 * pᵢⱼ = −vᵢ·vⱼ tell its type (J. H. Conway and N. J. A. Sloane, Proc. R. Soc. A 436, 55, 1992).
 *
 * The cell is the Minkowski sum of one segment a pair, pᵢⱼ (v*ᵢ − v*ⱼ), where v* is the basis dual to v₀ … vₙ₋₁ and
 * v*ₙ = 0. These segments are its edges: an edge is as long as its product is large, and it is gone where the product
 * vanishes. So the size of an edge decides what vanishes, which has a meaning in space and does not depend on the
 * unit of length.
 */
import { CENTRING_TABLES, CENTRINGS } from './bravais.ts'
import {
  add,
  angle,
  carefulCombine,
  cross,
  determinant,
  dot,
  IDENTITY,
  type Mat3,
  multiply,
  norm,
  scale,
  spanned,
  tidy,
  type Vec3,
} from './vector.ts'

export type Dimension = 1 | 2 | 3

export type Solid =
  | 'truncated octahedron'
  | 'elongated dodecahedron'
  | 'rhombic dodecahedron'
  | 'hexagonal prism'
  | 'cuboid'
  | 'hexagon'
  | 'rectangle'
  | 'segment'

export interface VoronoiVector {
  readonly vector: Vec3
  readonly length: number
  /** Whole numbers: the vector as a combination of the rows given. */
  readonly coefficients: Vec3
}

export interface Reduction {
  readonly dimension: Dimension
  /**
   * A shortest possible basis (H. Minkowski, 1905), shortest vector first, with the handedness of the rows given; in
   * space its angles are all acute or none is. In two and one dimensions the remaining rows are those given.
   */
  readonly basis: Mat3
  /** Whole numbers: basis = change · rows given. */
  readonly change: Mat3
  /** n + 1 vectors that add up to nothing; the first n have the handedness of the rows given. In order of length, in space. */
  readonly superbase: readonly Vec3[]
  /** pᵢⱼ = −vᵢ·vⱼ for each of `PAIRS[dimension]`, none below zero by more than rounding. */
  readonly products: readonly number[]
  /** The edge of the Voronoi cell that belongs to each pair, a Cartesian vector as long as the edge. */
  readonly edges: readonly Vec3[]
  /** Bit i is set where edge i is longer than half the `tolerance`; the others count as vanished. */
  readonly present: number
  /** ±vᵢ and ±(vᵢ + vⱼ). Entry s − 1 is the sum of the superbase vectors whose bits are set in s. */
  readonly voronoi: readonly VoronoiVector[]
  /** What the Voronoi cell is. */
  readonly kind: Solid
  /** The volume (area, length) of the lattice's primitive cell, from the reduced basis. */
  readonly volume: number
  /** Distance below which two things about the cell are one (see `cellTolerance`). */
  readonly tolerance: number
}

/** The pairs of superbase vectors, in the order of `products` and `edges`. */
export const PAIRS: Record<Dimension, readonly (readonly [number, number])[]> = {
  1: [[0, 1]],
  2: [
    [0, 1],
    [0, 2],
    [1, 2],
  ],
  3: [
    [0, 1],
    [0, 2],
    [0, 3],
    [1, 2],
    [1, 3],
    [2, 3],
  ],
}

/** A point this near to a wall is on it: in parts of the cell's inradius. */
const BOUNDARY = 1e-6
/** For cells much longer than wide: the rounding of long vectors, in parts of the cell's size, must not pass for shape. */
const BOUNDARY_OF_SIZE = 4e-9
/** … and at most this part of the inradius, so that the cell keeps all its directions whatever its proportions. */
const BOUNDARY_AT_MOST = 1e-3
/** An edge is made obtuse while it is inside out by more than this part of the shortest vector. */
const ACUTE = 1e-9
/** A projection of a half is as good as a half; only beyond it is a vector made shorter. */
const HALF = 0.5 + 1e-9
/** Lengths within this part of each other count as equal when vectors are put in order. */
const SAME_LENGTH = 1e-9
/** Rounds of any of the loops below. Euclid's steps shrink fast; ten are ordinary, hundreds only where rounding rules. */
const MOST_ROUNDS = 400

/**
 * Distance below which two things about a Voronoi cell are one: 10⁻⁶ of its inradius, or, for needles and plates more
 * than some hundred times longer than thin, 4·10⁻⁹ of half the sum of its edges.
 */
const cellTolerance = (inradius: number, size: number): number =>
  Math.min(Math.max(BOUNDARY * inradius, BOUNDARY_OF_SIZE * size), BOUNDARY_AT_MOST * inradius)

/** Work space, for one reduction at a time: the vectors of the superbase and their coefficients in the rows given … */
const v = new Float64Array(12)
const m = new Float64Array(12)
/** … and the product and the edge vector of each pair. */
const p = new Float64Array(6)
const e = new Float64Array(18)

const vectorAt = (i: number): Vec3 => [v[3 * i] + 0, v[3 * i + 1] + 0, v[3 * i + 2] + 0]
const coefficientsAt = (i: number): Vec3 => [m[3 * i] + 0, m[3 * i + 1] + 0, m[3 * i + 2] + 0]

const product = (i: number, j: number): number =>
  v[3 * i] * v[3 * j] + v[3 * i + 1] * v[3 * j + 1] + v[3 * i + 2] * v[3 * j + 2]

/** Vector i += factor · vector j, with its coefficients. */
function addTo(i: number, j: number, factor: number): void {
  for (let x = 0; x < 3; x++) {
    v[3 * i + x] += factor * v[3 * j + x]
    m[3 * i + x] += factor * m[3 * j + x]
  }
}

function negate(i: number): void {
  for (let x = 3 * i; x < 3 * i + 3; x++) {
    v[x] = -v[x]
    m[x] = -m[x]
  }
}

function swap(i: number, j: number): void {
  for (let x = 0; x < 3; x++) {
    const vi = v[3 * i + x]
    const mi = m[3 * i + x]
    v[3 * i + x] = v[3 * j + x]
    m[3 * i + x] = m[3 * j + x]
    v[3 * j + x] = vi
    m[3 * j + x] = mi
  }
}

/** The vectors anew from their whole coefficients, so that rounding does not pile up over the steps. */
function refresh(rows: Mat3, count: number): void {
  for (let i = 0; i < count; i++) {
    const exact = carefulCombine([m[3 * i], m[3 * i + 1], m[3 * i + 2]], rows)
    v[3 * i] = exact[0]
    v[3 * i + 1] = exact[1]
    v[3 * i + 2] = exact[2]
  }
}

/** Shorten vectors by whole multiples of each other while that helps (Gauss's step, pair by pair). */
function shortenPairs(n: number): boolean {
  let changed = false
  for (let round = 0; round < MOST_ROUNDS; round++) {
    let again = false
    for (let i = 0; i < n; i++) {
      const square = product(i, i)
      for (let j = 0; j < n; j++) {
        if (i === j) continue
        const ratio = product(i, j) / square
        if (!(Math.abs(ratio) > HALF)) continue
        addTo(j, i, -Math.round(ratio))
        again = true
      }
    }
    if (!again) break
    changed = true
  }
  return changed
}

/** Fill `p` and `e` from the superbase. */
function measure(n: Dimension, rows: Mat3): void {
  const a = vectorAt(0)
  const b = n > 1 ? vectorAt(1) : rows[1]
  const c = n > 2 ? vectorAt(2) : rows[2]
  const normal = cross(b, c)
  const content = dot(a, normal)
  const dual: Vec3[] = [scale(normal, 1 / content)]
  if (n > 1) dual.push(scale(cross(c, a), 1 / content))
  if (n > 2) dual.push(scale(cross(a, b), 1 / content))
  dual.push([0, 0, 0])
  for (let k = 0; k < PAIRS[n].length; k++) {
    const [i, j] = PAIRS[n][k]
    p[k] = -product(i, j)
    for (let x = 0; x < 3; x++) e[3 * k + x] = p[k] * (dual[i][x] - dual[j][x])
  }
}

const edgeLength = (k: number): number => Math.hypot(e[3 * k], e[3 * k + 1], e[3 * k + 2])

/**
 * Selling's steps until no product is positive. Each shortens the sum of the squares by 2 vᵢ·vⱼ or more, so they end;
 * the bound on their number only guards against rounding. Every step turns the handedness over; their number is returned.
 */
function makeObtuse(n: Dimension, rows: Mat3): number {
  const pairs = PAIRS[n]
  for (let step = 0; step < MOST_ROUNDS; step++) {
    measure(n, rows)
    let shortest = Number.POSITIVE_INFINITY
    for (let i = 0; i <= n; i++) shortest = Math.min(shortest, product(i, i))
    const limit = ACUTE * Math.sqrt(shortest)
    let acute = 0
    while (acute < pairs.length && !(p[acute] < 0 && edgeLength(acute) > limit)) acute++
    if (acute === pairs.length) return step
    const [i, j] = pairs[acute]
    for (let k = 0; k <= n; k++) if (k !== i && k !== j) addTo(k, i, n === 3 ? 1 : 2)
    negate(i)
  }
  return MOST_ROUNDS
}

/** Put the superbase in order of length; equal ones stay as they are. Gives the number of exchanges. */
function sortByLength(count: number): number {
  let exchanges = 0
  for (let i = 1; i < count; i++)
    for (let j = i; j > 0 && product(j, j) < product(j - 1, j - 1) * (1 - SAME_LENGTH); j--) {
      swap(j, j - 1)
      exchanges++
    }
  return exchanges
}

/**
 * Reduce a lattice basis: its obtuse superbase, the Voronoi vectors and the shortest basis.
 * However skewed the basis, this ends: whole multiples take out long shears first, as in Euclid's algorithm, and
 * vectors are made anew from whole coefficients, so that no rounding piles up.
 * @param rows lattice vectors, one a row, in any one unit. In two (one) dimensions the rows beyond the second (first)
 *   are no lattice vectors but must stand at right angles to the lattice and to each other.
 * @throws RangeError when the vectors are flat or not finite: the caller has made sure that they are neither.
 */
export function reduce(rows: Mat3, dimension: Dimension): Reduction {
  const n = dimension
  if (!(Math.abs(determinant(rows)) > 0 && Number.isFinite(determinant(rows))))
    throw new RangeError('reduce: the vectors span no volume')
  m.fill(0)
  for (let i = 0; i < n; i++) {
    m[4 * i] = 1
    for (let x = 0; x < 3; x++) v[3 * i + x] = rows[i][x]
  }
  for (let round = 0; round < MOST_ROUNDS && shortenPairs(n); round++) refresh(rows, n)
  completeSuperbase(n)
  let turns = 0
  for (let round = 0; round < MOST_ROUNDS; round++) {
    const steps = makeObtuse(n, rows)
    if (steps === 0) break
    turns += steps
    refresh(rows, n + 1)
  }
  turns += sortByLength(n + 1)
  if (turns % 2 === 1) turnOver(n)
  refresh(rows, n + 1)
  measure(n, rows)
  return describe(rows, n)
}

/** Change the handedness of the superbase, which stays obtuse. */
function turnOver(n: Dimension): void {
  if (n === 2) swap(1, 2)
  else for (let i = 0; i <= n; i++) negate(i)
}

function completeSuperbase(n: number): void {
  for (let x = 0; x < 3; x++) {
    v[3 * n + x] = 0
    m[3 * n + x] = 0
  }
  for (let i = 0; i < n; i++) addTo(n, i, -1)
}

/** Make the result out of the work space. */
function describe(rows: Mat3, n: Dimension): Reduction {
  const voronoi = voronoiVectors(rows, n)
  const superbase: Vec3[] = []
  for (let i = 0; i <= n; i++) superbase.push(voronoi[(1 << i) - 1].vector)
  const products: number[] = []
  const edges: Vec3[] = []
  const lengths: number[] = []
  for (let k = 0; k < PAIRS[n].length; k++) {
    products.push(p[k])
    edges.push([e[3 * k], e[3 * k + 1], e[3 * k + 2]])
    lengths.push(edgeLength(k))
  }
  const least = voronoi.reduce((x, { length }) => Math.min(x, length), Number.POSITIVE_INFINITY)
  const size = lengths.reduce((x, y) => x + y) / 2
  const tolerance = cellTolerance(least / 2, size)
  const present = presentEdges(n, products, lengths, tolerance / 2)
  const { basis, change } = shortest(rows, n, voronoi)
  return {
    dimension: n,
    basis,
    change,
    superbase,
    products,
    edges,
    present,
    voronoi,
    kind: solidOf(n, present),
    volume: spanned(basis.slice(0, n)),
    tolerance,
  }
}

/** The sums of superbase vectors, each with its opposite, which is the sum of all others. */
function voronoiVectors(rows: Mat3, n: Dimension): VoronoiVector[] {
  const all = (1 << (n + 1)) - 1
  const voronoi: VoronoiVector[] = new Array(all - 1)
  for (let subset = 1; subset < 1 << n; subset++) {
    const first = coefficientsAt(31 - Math.clz32(subset & -subset))
    const others = subset & (subset - 1)
    const coefficients = others === 0 ? first : add(first, voronoi[others - 1].coefficients)
    const vector = tidy(carefulCombine(coefficients, rows))
    const length = norm(vector)
    voronoi[subset - 1] = { vector, length, coefficients }
    voronoi[all - subset - 1] = { vector: opposite(vector), length, coefficients: opposite(coefficients) }
  }
  return voronoi
}

const opposite = (u: Vec3): Vec3 => [0 - u[0], 0 - u[1], 0 - u[2]]

/** Sets of the first n superbase vectors, one of each class modulo 2, single vectors first. */
const CLASSES: Record<Dimension, readonly number[]> = { 1: [1], 2: [1, 2, 3], 3: [1, 2, 4, 3, 5, 6, 7] }

/**
 * The shortest basis: the shortest vector of the lattice, then always the shortest that makes a basis with those before.
 * In up to three dimensions all of them are Voronoi vectors, because each is the shortest of its class modulo 2; and such
 * vectors make a basis as soon as they are independent modulo 2.
 */
function shortest(
  rows: Mat3,
  n: Dimension,
  voronoi: readonly VoronoiVector[],
): { basis: Mat3; change: Mat3 } {
  const chosen: number[] = []
  const reached = new Set([0])
  while (chosen.length < n) {
    let best = 0
    let length = Number.POSITIVE_INFINITY
    for (const set of CLASSES[n]) {
      const candidate = voronoi[set - 1].length
      if (reached.has(set) || candidate >= length * (1 - SAME_LENGTH)) continue
      best = set
      length = candidate
    }
    chosen.push(best)
    for (const set of [...reached]) reached.add(set ^ best)
  }
  const signs = bestSigns(chosen.map(set => voronoi[set - 1].vector))
  if (handednessOf(chosen) * signs.reduce((x, y) => x * y) < 0) {
    // Turning all three over keeps their angles; in the plane only the second can be turned.
    for (let i = n === 2 ? 1 : 0; i < n; i++) signs[i] = -signs[i]
  }
  const basis = [...rows]
  const change = [...IDENTITY]
  chosen.forEach((set, i) => {
    basis[i] = tidy(scale(voronoi[set - 1].vector, signs[i]))
    change[i] = tidy(scale(voronoi[set - 1].coefficients, signs[i]))
  })
  return { basis: basis as unknown as Mat3, change: change as unknown as Mat3 }
}

/** Determinant of sets of superbase vectors, written as rows of zeros and ones. */
function handednessOf(sets: readonly number[]): number {
  const row = (i: number): Vec3 =>
    i < sets.length ? [sets[i] & 1, (sets[i] >> 1) & 1, (sets[i] >> 2) & 1] : IDENTITY[i]
  return determinant([row(0), row(1), row(2)])
}

/** Signs that make the angles of three vectors all acute or none acute, whichever is possible. */
function bestSigns(vectors: readonly Vec3[]): number[] {
  const signs = vectors.map(() => 1)
  if (vectors.length < 3) return signs
  const [u, v, w] = vectors
  const sign = (a: Vec3, b: Vec3): number => {
    const d = dot(a, b)
    return Math.abs(d) <= ACUTE * norm(a) * norm(b) ? 0 : Math.sign(d)
  }
  const [uv, uw, vw] = [sign(u, v), sign(u, w), sign(v, w)]
  const wanted = uv * uw * vw > 0 ? 1 : -1
  const fits = (s: number) => s === 0 || s === wanted
  for (const sv of [1, -1])
    for (const sw of [1, -1]) if (fits(uv * sv) && fits(uw * sw) && fits(vw * sv * sw)) return [1, sv, sw]
  return signs
}

/** Which edges there are. Those kept must join the superbase into one piece, or the cell would be flat. */
function presentEdges(
  n: Dimension,
  products: readonly number[],
  lengths: readonly number[],
  shortest: number,
): number {
  let present = 0
  for (let k = 0; k < products.length; k++) if (products[k] > 0 && lengths[k] > shortest) present |= 1 << k
  while (!isJoined(n, present)) {
    let longest = -1
    for (let k = 0; k < lengths.length; k++)
      if (!(present & (1 << k)) && !(longest >= 0 && lengths[k] <= lengths[longest])) longest = k
    present |= 1 << longest
  }
  return present
}

function isJoined(n: Dimension, present: number): boolean {
  let reached = 1
  for (let round = 0; round < n; round++)
    for (let k = 0; k < PAIRS[n].length; k++) {
      const both = (1 << PAIRS[n][k][0]) | (1 << PAIRS[n][k][1])
      if (present & (1 << k) && reached & both) reached |= both
    }
  return reached === (1 << (n + 1)) - 1
}

/** The type of the Voronoi cell from the products that do not vanish. */
function solidOf(n: Dimension, present: number): Solid {
  const pairs = PAIRS[n].filter((_, k) => present & (1 << k))
  if (n === 1) return 'segment'
  if (n === 2) return pairs.length === 3 ? 'hexagon' : 'rectangle'
  if (pairs.length === 6) return 'truncated octahedron'
  if (pairs.length === 5) return 'elongated dodecahedron'
  if (pairs.length === 3) return 'cuboid'
  const isRing = [0, 1, 2, 3].every(i => pairs.filter(pair => pair.includes(i)).length === 2)
  return isRing ? 'rhombic dodecahedron' : 'hexagonal prism'
}

export interface ShortBasis {
  readonly basis: Mat3
  readonly change: Mat3
  readonly lengths: readonly number[]
}

/** The shortest basis alone, as `Reduction` has it, with its lengths. */
export function shortBasis(rows: Mat3, dimension: Dimension): ShortBasis {
  const { basis, change } = reduce(rows, dimension)
  return { basis, change, lengths: basis.slice(0, dimension).map(norm) }
}

/**
 * A basis is needlessly skewed when the product of its lengths exceeds that of the shortest basis by more than this
 * factor. Cells of the literature stay below it, monoclinic ones too whose axes follow a glide plane (a = 5.7, c = 6.5,
 * β = 127° gives 1.19); beyond it a mesh of equal steps and the coordinates suffer visibly.
 */
export const SKEWED = 1.25

export interface Skewness {
  /** Product of the lengths over that of the shortest basis; 1 for a basis that cannot be shortened. */
  readonly ratio: number
  /** `ratio` is over `SKEWED` and the rows are not the primitive vectors of a centred or rhombohedral cell. */
  readonly skewed: boolean
  readonly short: ShortBasis
}

/** How much longer a basis is than it needs to be. Rows as in `reduce`. */
export function skewness(rows: Mat3, dimension: Dimension): Skewness {
  const short = shortBasis(rows, dimension)
  let ratio = 1
  for (let i = 0; i < dimension; i++) ratio *= norm(rows[i]) / short.lengths[i]
  return { ratio, skewed: ratio > SKEWED && !isCustomaryCell(rows, dimension), short }
}

/** Angles within this of 90° (120°), in degrees, count as such when a cell is recognised: coordinates of four digits. */
const RECOGNISED = 0.05

/**
 * Are these the primitive vectors that a table of centrings makes of an orthogonal, monoclinic or hexagonal cell, in
 * any order and with any signs? Such cells are long by custom (a body-centred one with c much longer than a) and
 * nobody wants them shortened. A rhombohedral cell is the case R.
 */
function isCustomaryCell(rows: Mat3, dimension: Dimension): boolean {
  const centrings =
    dimension === 3 ? CENTRINGS.filter(c => c !== 'P') : dimension === 2 ? (['C'] as const) : []
  return centrings.some(centring =>
    arrangements(rows, dimension).some(rearranged => {
      const cell = multiply(CENTRING_TABLES[centring].conventional, rearranged)
      return isConventional(cell, centring === 'R', dimension)
    }),
  )
}

const ORDERS_3 = [
  [0, 1, 2],
  [1, 2, 0],
  [2, 0, 1],
  [1, 0, 2],
  [0, 2, 1],
  [2, 1, 0],
] as const

function arrangements(rows: Mat3, dimension: Dimension): Mat3[] {
  const orders = dimension === 3 ? ORDERS_3 : ORDERS_3.filter(o => o[2] === 2)
  const signs = dimension === 3 ? [0, 1, 2, 3] : [0, 1]
  return orders.flatMap(order =>
    signs.map(
      (bits): Mat3 => [
        scale(rows[order[0]], bits & 1 ? -1 : 1),
        scale(rows[order[1]], bits & 2 ? -1 : 1),
        rows[order[2]],
      ],
    ),
  )
}

function isConventional(cell: Mat3, hexagonal: boolean, dimension: Dimension): boolean {
  const near = (i: number, j: number, degrees: number) =>
    Math.abs(angle(cell[i], cell[j]) - degrees) < RECOGNISED
  if (dimension === 2) return near(0, 1, 90)
  const right = [near(1, 2, 90), near(0, 2, 90), near(0, 1, 90)]
  const count = right.filter(Boolean).length
  if (hexagonal) return right[0] && right[1] && near(0, 1, 120) && sameLength(cell[0], cell[1])
  if (count === 3) return true
  // A monoclinic cell is customary only where it is not itself needlessly skewed.
  return count === 2 && lengthRatio(cell) <= SKEWED
}

/** Lengths that agree to the four digits that `RECOGNISED` allows angles. */
const sameLength = (a: Vec3, b: Vec3): boolean => Math.abs(norm(a) - norm(b)) < 1e-3 * norm(a)

function lengthRatio(rows: Mat3): number {
  const { lengths } = shortBasis(rows, 3)
  return (norm(rows[0]) * norm(rows[1]) * norm(rows[2])) / (lengths[0] * lengths[1] * lengths[2])
}
