/**
 * The symmetry of a lattice alone: its holohedry as the whole-numbered matrices that keep the metric, its Bravais type
 * and its conventional cell. Geometry only: no symmetry library is needed.
 */
import type { BravaisType } from './bravais.ts'
import type { CellParameters } from './cell.ts'
import { cellParameters, spansLattice } from './lattice.ts'
import { type Dimension, shortBasis } from './reduction.ts'
import {
  add,
  angle,
  apply,
  combine,
  cross,
  determinant,
  dot,
  IDENTITY,
  inverse,
  type Mat3,
  mapMatrix,
  multiply,
  norm,
  scale,
  subtract,
  transpose,
  type Vec3,
} from './vector.ts'

export interface LatticeType {
  /** One of the 14 types (`oC`, `mC` for the one-face-centred ones) or the 5 of the plane; a chain has none. */
  readonly bravais?: BravaisType
  /**
   * Rows: the conventional vectors as whole-number combinations of the given ones. The usual choice: right-handed,
   * a ≤ b ≤ c where the type leaves it open (a ≤ b in oC, op, oc), unique axis c (tetragonal, hexagonal, rhombohedral
   * in the obverse setting) or b (monoclinic, β ≥ 90°), 120° between a and b of hexagonal ones. Beyond the dimension: rows of the unit matrix.
   */
  readonly conventionalFromPrimitive: Mat3
  /** The same as Cartesian rows, in the orientation of the given ones. */
  readonly conventional: Mat3
  /** Of the conventional cell as it is, not idealised. In the plane `a`, `b`, `gamma` count, on a chain `a`. */
  readonly cell: CellParameters
  /** All rotations that map the lattice onto itself, on columns of fractions of the given vectors; identity first. */
  readonly holohedry: readonly Mat3[]
  /** By how far the vectors miss the rotations within the tolerance at the worst, a length. */
  readonly misfit: number
  /** The rotations within the tolerance asked for are no group, so the ones that fit worst were left out. */
  readonly toleranceLowered: boolean
}

/** Tolerances are cut to this part of the shortest lattice vector: beyond it, any lattice fits any type. */
const LARGEST_TOLERANCE = 0.05

/** What rounding leaves of an exact symmetry, relative to the lengths compared. */
const ROUNDING = 1e-9

/** Two misfits this near to each other, relatively, are one and the same. */
const SAME_MISFIT = 1e-6

/**
 * The Bravais type that vectors really have.
 * @param primitive rows, Cartesian; beyond `dimension` they are unit normals.
 * @param tolerance by how far a vector may miss its image, a length.
 * @returns undefined for vectors that span nothing or are not finite.
 */
export function latticeType(
  primitive: Mat3,
  dimension: Dimension,
  tolerance: number,
): LatticeType | undefined {
  if (!spansLattice(primitive)) return undefined
  // An obtuse superbase would not do: a symmetry of the lattice may need the entry ±2 in it and more.
  const short = shortBasis(primitive, dimension)
  const allowed = Math.min(tolerance, LARGEST_TOLERANCE * norm(short.basis[0]))
  const rounding = ROUNDING * norm(short.basis[dimension - 1])
  const within = metricGroup(short.basis, dimension, Math.max(allowed, rounding))
  const group = within.misfit > rounding ? fullGroup(short.basis, within.group, dimension) : within.group
  const { bravais, axes } = conventionalCell(short.basis, group, dimension)
  const conventionalFromPrimitive = multiply(axes, short.change)
  const conventional = multiply(conventionalFromPrimitive, primitive)
  const there = transpose(short.change)
  const back = mapMatrix(inverse(there), Math.round)
  return {
    bravais,
    conventionalFromPrimitive,
    conventional,
    cell: cellParameters(conventional),
    holohedry: group.map(W => multiply(multiply(there, W), back)),
    misfit: within.misfit,
    toleranceLowered: within.lowered,
  }
}

/**
 * The basis nearest to a given one whose metric is exactly invariant under a group of rotations (on columns of
 * fractions): the metric is averaged over them, the orientation kept, no rotation added.
 */
export function symmetriseBasis(basis: Mat3, rotations: readonly Mat3[], dimension: Dimension): Mat3 {
  const metric = multiply(basis, transpose(basis))
  let sum = mapMatrix(metric, () => 0)
  for (const W of rotations) sum = addMatrices(sum, multiply(multiply(transpose(W), metric), W))
  const mean = mapMatrix(sum, x => x / rotations.length)
  // basis · S with S symmetric and S² = basis⁻¹ · mean · basis⁻ᵀ has this metric and turns nothing.
  const toFractions = inverse(basis)
  const strain = squareRoot(multiply(multiply(toFractions, mean), transpose(toFractions)))
  const result = multiply(basis, strain)
  return [0, 1, 2].map(i => (i < dimension ? result[i] : basis[i])) as unknown as Mat3
}

/** A symmetric root by Newton's steps in the form of Denman and Beavers (1976); near the unit matrix a few suffice. */
function squareRoot(m: Mat3): Mat3 {
  let root = m
  let inverted = IDENTITY
  for (let step = 0; step < 12; step++) {
    const next = mapMatrix(addMatrices(root, inverse(inverted)), x => x / 2)
    inverted = mapMatrix(addMatrices(inverted, inverse(root)), x => x / 2)
    root = next
  }
  return root
}

const addMatrices = (m: Mat3, n: Mat3): Mat3 => [add(m[0], n[0]), add(m[1], n[1]), add(m[2], n[2])]

/** A metric averaged over a group such as 4/m has the full symmetry, 4/mmm: what the tolerance cut off comes back. */
function fullGroup(basis: Mat3, group: readonly Mat3[], dimension: Dimension): Mat3[] {
  const ideal = symmetriseBasis(basis, group, dimension)
  return metricGroup(ideal, dimension, ROUNDING * norm(ideal[dimension - 1])).group
}

/** A lattice vector by its whole coefficients. */
interface Combination {
  readonly v: Vec3
  readonly cartesian: Vec3
  readonly length: number
}

/** Combinations of the periodic vectors with entries up to ±`most`; zero left out. */
function combinations(basis: Mat3, dimension: Dimension, most: number): Combination[] {
  const range = Array.from({ length: 2 * most + 1 }, (_, i) => i - most)
  const found: Combination[] = []
  for (const i of range)
    for (const j of dimension > 1 ? range : [0])
      for (const k of dimension > 2 ? range : [0]) {
        if (i === 0 && j === 0 && k === 0) continue
        const v: Vec3 = [i, j, k]
        const cartesian = combine(v, basis)
        found.push({ v, cartesian, length: norm(cartesian) })
      }
  return found
}

/** A lattice vector as a candidate image of a basis vector, and by how far its length misses that vector's. */
interface Image {
  readonly v: Vec3
  readonly cartesian: Vec3
  readonly miss: number
}

/**
 * Matrices that keep the metric of a shortest basis within a tolerance, as many as are a group, identity first. What
 * misses is measured as a length: differences of lengths, and of angles times the mean length of the two sides.
 */
function metricGroup(
  basis: Mat3,
  dimension: Dimension,
  tolerance: number,
): { group: Mat3[]; lowered: boolean; misfit: number } {
  const lengths = basis.map(norm)
  const products = multiply(basis, transpose(basis))
  const vectors = combinations(basis, dimension, 2)
  const imagesOf = (i: number): Image[] => {
    if (i >= dimension) return [{ v: IDENTITY[i], cartesian: basis[i], miss: 0 }]
    const images: Image[] = []
    for (const { v, cartesian, length } of vectors) {
      const miss = Math.abs(length - lengths[i])
      if (miss <= tolerance) images.push({ v, cartesian, miss })
    }
    return images
  }
  const angleMiss = (u: Image, i: number, v: Image, j: number): number =>
    (Math.abs(dot(u.cartesian, v.cartesian) - products[i][j]) * (lengths[i] + lengths[j])) /
    (2 * lengths[i] * lengths[j])

  const [us, vs, ws] = [imagesOf(0), imagesOf(1), imagesOf(2)]
  let found: { W: Mat3; miss: number }[] = []
  for (const u of us)
    for (const v of vs) {
      const plane = Math.max(u.miss, v.miss, angleMiss(u, 0, v, 1))
      if (plane > tolerance) continue
      for (const w of ws) {
        const miss = Math.max(plane, w.miss, angleMiss(u, 0, w, 2), angleMiss(v, 1, w, 2))
        if (miss > tolerance || Math.abs(determinant([u.v, v.v, w.v])) !== 1) continue
        found.push({ W: transpose([u.v, v.v, w.v]), miss })
      }
    }
  const all = found.length
  let worst = worstOf(found)
  // All symmetries of a metric are a group; only what fits by the tolerance alone may be none.
  while (worst > ROUNDING * lengths[dimension - 1] && !isGroup(found.map(({ W }) => W))) {
    found = found.filter(({ miss }) => miss < worst * (1 - SAME_MISFIT))
    worst = worstOf(found)
  }
  const group = found.map(({ W }) => W)
  return {
    group: [...group.filter(isIdentity), ...group.filter(W => !isIdentity(W))],
    lowered: found.length < all,
    misfit: worst,
  }
}

const worstOf = (found: readonly { readonly miss: number }[]): number =>
  found.reduce((worst, { miss }) => Math.max(worst, miss), 0)

const isIdentity = (W: Mat3): boolean => W.every((row, i) => row.every((x, j) => x === IDENTITY[i][j]))

/** Entries of a matrix and of a product of two are at most 2 and 12 in size: nine of them make one exact number. */
const DIGIT = 25

function isGroup(matrices: readonly Mat3[]): boolean {
  const flat = matrices.map(m => m.flat())
  const known = new Set(flat.map(m => m.reduce((key, x) => key * DIGIT + x, 0)))
  for (const m of flat)
    for (const n of flat) {
      let key = 0
      for (let i = 0; i < 9; i += 3)
        for (let j = 0; j < 3; j++)
          key = key * DIGIT + m[i] * n[j] + m[i + 1] * n[j + 3] + m[i + 2] * n[j + 6]
      if (!known.has(key)) return false
    }
  return true
}

interface ConventionalCell {
  readonly bravais?: BravaisType
  /** Rows of whole numbers on the basis. */
  readonly axes: Mat3
}

/** The conventional cell from the rotation axes of the holohedry, all in whole numbers on a shortest basis. */
function conventionalCell(basis: Mat3, group: readonly Mat3[], dimension: Dimension): ConventionalCell {
  if (dimension === 1) return { axes: IDENTITY }
  if (dimension === 2) return planeCell(basis, group)
  const along = (order: number) => axesOf(group, order, basis)
  switch (group.length) {
    case 48:
      return cubic(basis, along(4))
    case 24:
      return { bravais: 'hP', axes: hexagonalAxes(basis, along(6)[0], along(2), group) }
    case 16:
      return tetragonal(basis, along(4)[0], along(2))
    case 12:
      return rhombohedral(basis, along(3)[0], along(2), group)
    case 8:
      return orthorhombic(basis, along(2))
    case 4:
      return monoclinic(basis, group)
    default:
      return { bravais: 'aP', axes: determinant(basis) > 0 ? IDENTITY : mapMatrix(IDENTITY, x => -x + 0) }
  }
}

/** How many lattice points a cell holds. */
const pointsIn = (axes: Mat3): number => Math.abs(determinant(axes))

/** Turn the last axis round where the set is left-handed. */
const rightHanded = (axes: Mat3, basis: Mat3): Mat3 =>
  determinant(multiply(axes, basis)) > 0 ? axes : [axes[0], axes[1], negate(axes[2])]

const negate = (v: Vec3): Vec3 => scale(v, -1)

function cubic(basis: Mat3, fourfold: readonly Vec3[]): ConventionalCell {
  const axes = rightHanded(fourfold as unknown as Mat3, basis)
  const bravais = ({ 1: 'cP', 2: 'cI', 4: 'cF' } as const)[pointsIn(axes)]
  return { bravais, axes }
}

function tetragonal(basis: Mat3, c: Vec3, twofold: readonly Vec3[]): ConventionalCell {
  // The shorter pair of the two makes the smaller cell, which is P or I.
  const [a, ...others] = perpendicular(twofold, c, basis)
  const b = perpendicular(others, a, basis)[0]
  const axes = rightHanded([a, b, c], basis)
  return { bravais: pointsIn(axes) === 1 ? 'tP' : 'tI', axes }
}

/** Vectors at right angles to another one; order kept. The group's axes are meant: no angle near 90° is another. */
const perpendicular = (vectors: readonly Vec3[], to: Vec3, basis: Mat3): Vec3[] =>
  vectors.filter(v => Math.abs(angle(combine(v, basis), combine(to, basis)) - 90) < RIGHT_ANGLE_MARGIN)

/** In degrees. Axes of one point group meet at 30°, 35.3° or more. */
const RIGHT_ANGLE_MARGIN = 10

function hexagonalAxes(basis: Mat3, c: Vec3, twofold: readonly Vec3[], group: readonly Mat3[]): Mat3 {
  const a = perpendicular(twofold, c, basis)[0]
  const threefold = group.find(W => determinant(W) === 1 && orderOf(W) === 3)!
  const b = apply(threefold, a)
  return rightHanded([a, b, c], basis)
}

function rhombohedral(
  basis: Mat3,
  c: Vec3,
  twofold: readonly Vec3[],
  group: readonly Mat3[],
): ConventionalCell {
  const [a, b, third] = hexagonalAxes(basis, c, twofold, group)
  // Obverse: (2a + b + c)/3 is a lattice vector (International Tables for Crystallography, vol. A).
  const obverse = add(add(scale(a, 2), b), third).every(x => x % 3 === 0)
  return { bravais: 'hR', axes: obverse ? [a, b, third] : [negate(a), negate(b), third] }
}

function orthorhombic(basis: Mat3, twofold: readonly Vec3[]): ConventionalCell {
  const axes = twofold as unknown as Mat3
  const points = pointsIn(axes)
  if (points === 1) return { bravais: 'oP', axes: rightHanded(axes, basis) }
  if (points === 4) return { bravais: 'oF', axes: rightHanded(axes, basis) }
  const halves = centringVector(axes)
  const single = halves.findIndex(isWhole)
  if (single < 0) return { bravais: 'oI', axes: rightHanded(axes, basis) }
  const others = axes.filter((_, i) => i !== single)
  return { bravais: 'oC', axes: rightHanded([others[0], others[1], axes[single]], basis) }
}

/** The lattice vector inside a doubly primitive cell, in fractions of its axes. */
function centringVector(axes: Mat3): Vec3 {
  const toAxes = inverse(axes)
  return IDENTITY.map(e => combine(e, toAxes)).find(v => !v.every(isWhole))!
}

const isWhole = (x: number): boolean => Math.abs(x - Math.round(x)) < 0.25

function monoclinic(basis: Mat3, group: readonly Mat3[]): ConventionalCell {
  const b = axesOf(group, 2, basis)[0]
  const turn = group.find(W => determinant(W) === 1 && orderOf(W) === 2)!
  const across = combinations(basis, 3, 3)
    .filter(({ v }) => apply(turn, v).every((x, i) => x === -v[i]))
    .sort((u, w) => u.length - w.length)
    .map(({ v }) => v)
  const p = across[0]
  const q = across.find(v => norm(cross(v, p)) > 0)!
  if (pointsIn([p, b, q]) === 1) return { bravais: 'mP', axes: obtuse(basis, p, b, q) }
  // The smallest cell in the plane may be centred on the face of p or in the body: another pair of edges is then C.
  const edges = [p, q, add(p, q), subtract(p, q)]
  const cells = edges
    .flatMap(a => edges.map((c): Mat3 => [a, b, c]))
    .filter(axes => pointsIn(axes) === 2 && isWhole(centringVector(axes)[2]))
    .map(axes => ({ axes, size: norm(combine(axes[0], basis)) + norm(combine(axes[2], basis)) }))
  const { axes } = cells.reduce((least, cell) => (cell.size < least.size ? cell : least))
  return { bravais: 'mC', axes: obtuse(basis, ...axes) }
}

/** Right-handed with β ≥ 90°; the sign of the unique axis is free. */
function obtuse(basis: Mat3, a: Vec3, b: Vec3, c: Vec3): Mat3 {
  const turned = dot(combine(a, basis), combine(c, basis)) > 0 ? negate(c) : c
  return determinant(multiply([a, b, turned], basis)) > 0 ? [a, b, turned] : [a, negate(b), turned]
}

function planeCell(basis: Mat3, group: readonly Mat3[]): ConventionalCell {
  const [a, second] = sortedDistinct(group.filter(W => determinant(W) === -1).map(mirrorLine), basis)
  const turned = (order: number) => apply(group.find(W => determinant(W) === 1 && orderOf(W) === order)!, a)
  const normal = IDENTITY[2]
  const rightHandedAbout = (u: Vec3, v: Vec3): boolean => determinant(multiply([u, v, normal], basis)) > 0
  // Of the other hand: a right angle lets one vector be turned round, any other angle makes the two change places.
  const rectangular = (u: Vec3, v: Vec3): Mat3 => [u, rightHandedAbout(u, v) ? v : negate(v), normal]
  const oblique = (u: Vec3, v: Vec3): Mat3 => (rightHandedAbout(u, v) ? [u, v, normal] : [v, u, normal])
  switch (group.length) {
    case 12:
      return { bravais: 'hp', axes: oblique(a, turned(3)) }
    case 8:
      return { bravais: 'tp', axes: rectangular(a, turned(4)) }
    case 4: {
      const axes = rectangular(a, second)
      return { bravais: pointsIn(axes) === 1 ? 'op' : 'oc', axes }
    }
    default: {
      const acute = dot(basis[0], basis[1]) > 0
      return { bravais: 'mp', axes: oblique(IDENTITY[0], acute ? negate(IDENTITY[1]) : IDENTITY[1]) }
    }
  }
}

/** The line in the plane that a reflection leaves alone. */
function mirrorLine(W: Mat3): Vec3 {
  const row = [0, 1].map(i => subtract(W[i], IDENTITY[i])).find(r => norm(r) > 0)!
  return lowestTerms([-row[1], row[0], 0])
}

/** Axes of the proper rotations of one order, each once, the shortest lattice vectors along them first. */
function axesOf(group: readonly Mat3[], order: number, basis: Mat3): Vec3[] {
  const rotations = group.filter(W => determinant(W) === 1 && orderOf(W) === order)
  return sortedDistinct(rotations.map(rotationAxis), basis)
}

function sortedDistinct(vectors: readonly Vec3[], basis: Mat3): Vec3[] {
  const distinct = new Map(vectors.map(v => [String(v), v]))
  const length = (v: Vec3) => norm(combine(v, basis))
  return [...distinct.values()].sort((u, v) => length(u) - length(v))
}

/** Order of a proper rotation in whole numbers, from its trace 1 + 2 cos φ. */
export const orderOf = (W: Mat3): number => ORDERS[W[0][0] + W[1][1] + W[2][2] + 1]
const ORDERS = [2, 3, 4, 6, 1]

/** The shortest lattice vectors along all rotation axes of a group, of either sign. */
export function rotationAxes(group: readonly Mat3[]): Vec3[] {
  const proper = group.filter(W => determinant(W) === 1 && orderOf(W) > 1).map(rotationAxis)
  const distinct = new Map(proper.map(v => [String(v), v]))
  return [...distinct.values()].flatMap(v => [v, negate(v)])
}

/** The shortest whole vector along the axis of a proper rotation other than the identity. */
function rotationAxis(W: Mat3): Vec3 {
  const rows = W.map((row, i) => subtract(row, IDENTITY[i]))
  const pairs = [cross(rows[0], rows[1]), cross(rows[0], rows[2]), cross(rows[1], rows[2])]
  return lowestTerms(pairs.find(v => norm(v) > 0)!)
}

/** Without a common factor, the first entry that is not zero positive. */
function lowestTerms(v: Vec3): Vec3 {
  const common = v.reduce(gcd) * Math.sign(v.find(x => x !== 0)!)
  return v.map(x => (x === 0 ? 0 : x / common)) as unknown as Vec3
}

const gcd = (p: number, q: number): number => (q === 0 ? Math.abs(p) : gcd(q, p % q))
