/**
 * Effective masses from energies around a k-point: which points to compute, and what their energies say.
 *
 * Central differences of second order (M. Abramowitz and I. A. Stegun, *Handbook of Mathematical Functions* (1964),
 * 25.3.23 and 25.3.26) along orthogonal axes. A tensor is even, so a rotation and its product with −1 ask the same of it:
 * mirrors count as two-fold axes.
 */
import { symmetricEigen } from './eigen.ts'
import { orderOf } from './lattice-type.ts'
import type { Dimension } from './reduction.ts'
import { HBAR2_OVER_2M } from './units.ts'
import {
  add,
  apply,
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
  tidy,
  transpose,
  type Vec3,
} from './vector.ts'

/** What the axes were taken from: all three by symmetry, one by symmetry and two across it, or x, y, z. */
export type AxesFrom = 'symmetry' | 'one axis' | 'cartesian'

export interface ProbeAxes {
  /** Unit vectors, right-handed; beyond the dimension they play no part. */
  readonly axes: Mat3
  readonly from: AxesFrom
}

/** Rotations that act on columns of k-fractions, as they act on Cartesian columns. */
export const inSpace = (group: readonly Mat3[], reciprocal: Mat3): Mat3[] => {
  const toSpace = transpose(reciprocal)
  const back = inverse(toSpace)
  return group.map(R => multiply(multiply(toSpace, R), back))
}

/** Directions are one, or at right angles, within this: lattices are symmetric within a tolerance only. */
const ALIKE = 1e-3

const isAlong = (u: Vec3, v: Vec3): boolean => norm(cross(u, v)) < ALIKE
const isAcross = (u: Vec3, v: Vec3): boolean => Math.abs(dot(u, v)) < ALIKE

interface Axis {
  readonly direction: Vec3
  readonly order: number
}

/**
 * Orthogonal axes around a k-point: the principal axes of its little co-group where that fixes them, the one main axis
 * and two across it, else x, y, z. In two dimensions one mirror fixes both.
 * @param little whole-numbered, on columns of k-fractions.
 */
export function probeAxes(little: readonly Mat3[], reciprocal: Mat3, dimension: Dimension): ProbeAxes {
  const cartesian: ProbeAxes = { axes: IDENTITY, from: 'cartesian' }
  if (dimension === 1) return { ...cartesian, from: 'symmetry' }
  if (dimension === 2) return axesInPlane(little, reciprocal) ?? cartesian
  const lines = axesOf(little, reciprocal)
  const main = lines.filter(({ order }) => order > 2)
  if (main.length === 1) return acrossMain(main[0].direction, lines)
  // Of a cubic group the four-fold axes, else the two-fold ones, are three at right angles; so are those of 222.
  const fourfold = lines.filter(({ order }) => order === 4)
  const three = fourfold.length === 3 ? fourfold : lines.filter(({ order }) => order === 2)
  if (three.length !== 3) return cartesian
  return { axes: ordered(three.map(({ direction }) => direction)), from: 'symmetry' }
}

function axesInPlane(little: readonly Mat3[], reciprocal: Mat3): ProbeAxes | undefined {
  const mirrors = little.filter(R => R[0][0] * R[1][1] - R[0][1] * R[1][0] < 0)
  const normals = inSpace(mirrors, reciprocal).map(R => directionOf(addMatrix(scaleMatrix(R, -1), IDENTITY)))
  const first = nearestTo([1, 0, 0], normals)
  return first && { axes: ordered([first, cross([0, 0, 1], first), [0, 0, 1]]), from: 'symmetry' }
}

/** The axes of rotation and the normals of mirrors, each once, with the highest order. */
function axesOf(little: readonly Mat3[], reciprocal: Mat3): Axis[] {
  const found: Axis[] = []
  const proper = little.map(R => (determinant(R) < 0 ? mapMatrix(R, x => -x) : R))
  const turning = proper.filter(R => orderOf(R) > 1)
  for (const [i, R] of inSpace(turning, reciprocal).entries()) {
    const order = orderOf(turning[i])
    // The mean of the powers of a rotation is the projector on its axis.
    let power = IDENTITY
    let sum = IDENTITY
    for (let n = 1; n < order; n++) {
      power = multiply(power, R)
      sum = addMatrix(sum, power)
    }
    const direction = directionOf(sum)
    const at = found.findIndex(axis => isAlong(axis.direction, direction))
    if (at < 0) found.push({ direction, order })
    else if (order > found[at].order) found[at] = { direction: found[at].direction, order }
  }
  return found
}

function acrossMain(main: Vec3, lines: readonly Axis[]): ProbeAxes {
  const across = lines.map(({ direction }) => direction).filter(direction => isAcross(direction, main))
  const fixed = nearestTo([1, 0, 0], across)
  const start: Vec3 = Math.abs(main[0]) < 0.9 ? [1, 0, 0] : [0, 1, 0]
  const first = fixed ?? unit(subtract(start, scale(main, dot(start, main))))
  const third = pointingUp(main)
  return { axes: orthonormal([first, cross(third, first), third]), from: fixed ? 'symmetry' : 'one axis' }
}

/** The direction of the largest column of a matrix of rank one. */
function directionOf(m: Mat3): Vec3 {
  const columns = transpose(m)
  return pointingUp(unit(columns.reduce((u, v) => (norm(v) > norm(u) * (1 + ALIKE) ? v : u))))
}

const unit = (v: Vec3): Vec3 => scale(v, 1 / norm(v))

/** Of the two senses of a direction the one whose largest component is positive. */
function pointingUp(v: Vec3): Vec3 {
  const largest = v.reduce((a, b) => (Math.abs(b) > Math.abs(a) + ALIKE ? b : a))
  return tidy(largest < 0 ? scale(v, -1) : v)
}

function nearestTo(wanted: Vec3, directions: readonly Vec3[]): Vec3 | undefined {
  const nearness = (v: Vec3) => Math.abs(dot(v, wanted))
  return directions.reduce<Vec3 | undefined>(
    (best, v) => (!best || nearness(v) > nearness(best) + ALIKE ? v : best),
    undefined,
  )
}

const ORDERS = [
  [0, 1, 2],
  [0, 2, 1],
  [1, 0, 2],
  [1, 2, 0],
  [2, 0, 1],
  [2, 1, 0],
]

/** Three orthogonal directions in the order that is nearest to x, y, z. */
function ordered(directions: readonly Vec3[]): Mat3 {
  const nearness = (order: readonly number[]) =>
    order.reduce((sum, from, i) => sum + Math.abs(directions[from][i]), 0)
  const best = ORDERS.reduce((a, b) => (nearness(b) > nearness(a) + ALIKE ? b : a))
  return orthonormal(best.map(i => pointingUp(directions[i])) as unknown as Mat3)
}

/** Gram and Schmidt, the third completing a right-handed set. */
function orthonormal([u, v]: Mat3): Mat3 {
  const first = unit(u)
  const second = unit(subtract(v, scale(first, dot(v, first))))
  return [tidy(first), tidy(second), tidy(cross(first, second))]
}

const addMatrix = (m: Mat3, n: Mat3): Mat3 => [add(m[0], n[0]), add(m[1], n[1]), add(m[2], n[2])]
const scaleMatrix = (m: Mat3, s: number): Mat3 => mapMatrix(m, x => x * s)

/** How many steps a point is away along each axis. */
export interface ProbeStep {
  readonly role: string
  readonly steps: Vec3
}

const AXIS_PAIRS = [
  [0, 1],
  [0, 2],
  [1, 2],
] as const

/** The centre, the axial points, the mixed points: 19 in three dimensions, 9 in two, 3 in one. */
export function probeSteps(dimension: Dimension): ProbeStep[] {
  const at = (...moves: (readonly [axis: number, sign: number])[]): ProbeStep => {
    const steps = [0, 0, 0]
    for (const [axis, sign] of moves) steps[axis] = sign
    return {
      role: moves.map(([axis, sign]) => `${sign > 0 ? '+' : '-'}${axis + 1}`).join('') || 'centre',
      steps: steps as unknown as Vec3,
    }
  }
  const signs = [1, -1]
  const axial = [0, 1, 2].slice(0, dimension).flatMap(i => signs.map(s => at([i, s])))
  const mixed = AXIS_PAIRS.filter(([, j]) => j < dimension).flatMap(([i, j]) =>
    signs.flatMap(s => signs.map(t => at([i, s], [j, t]))),
  )
  return [at(), ...axial, ...mixed]
}

/** The Cartesian offset of a point. */
export const probeOffset = ({ steps }: ProbeStep, { axes }: ProbeAxes, step: number): Vec3 =>
  tidy(
    scale(
      [0, 1, 2].reduce<Vec3>((sum, i) => add(sum, scale(axes[i], steps[i])), [0, 0, 0]),
      step,
    ),
  )

/** What symmetry asks of the components along the probe's axes, and by how much they miss it. */
export interface Relation {
  readonly kind: 'vanishes' | 'equal'
  /** Component ij, and the other one where two are equal; axes from 1. */
  readonly components: readonly string[]
  /** 1/mₑ. */
  readonly miss: number
}

export interface InverseMass {
  /** 1/mₑ, Cartesian; rows and columns beyond the dimension are zero. */
  readonly tensor: Mat3
  /** 1/mₑ, along the probe's axes. */
  readonly alongAxes: Mat3
  /** As many as dimensions, the largest inverse mass first. */
  readonly principal: readonly {
    /** 1/mₑ. */
    readonly inverse: number
    /** mₑ; undefined where the band is flat within rounding. */
    readonly mass?: number
    /** Cartesian unit vector. */
    readonly axis: Vec3
    /** Another principal mass is the same within rounding or by symmetry: the axis is one of many. */
    readonly free: boolean
  }[]
  /** What the rounding of the energies can make of a component of the tensor, 1/mₑ. */
  readonly rounding: number
  /** eV Å, Cartesian. */
  readonly gradient: Vec3
  /** What the rounding of the energies can make of a component of the gradient, eV Å. */
  readonly gradientRounding: number
  /** Symmetry leaves the gradient no direction. */
  readonly gradientMustVanish: boolean
  /** Where the fitted paraboloid has its extremum, in Å⁻¹ from k₀; undefined where a direction is flat. */
  readonly extremumAt?: Vec3
  /** False where the gradient is more than rounding and the extremum farther off than `OFF_EXTREMUM` steps. */
  readonly stationary: boolean
  readonly kind: 'minimum' | 'maximum' | 'saddle' | 'flat'
  readonly relations: readonly Relation[]
  /** Largest miss of a component from the tensor's mean over the little co-group, 1/mₑ. */
  readonly asymmetry: number
  /** What each energy is above the paraboloid, eV, in the order of the points. */
  readonly misfits: readonly number[]
  /** Largest misfit over the largest energy difference to the centre. */
  readonly misfit: number
}

/** The extremum may be this part of a step beside k₀: less changes no mass by a per cent. */
export const OFF_EXTREMUM = 0.05
/** Masses are equal within this part of the largest: differences of the step's square, of a band of ordinary shape. */
const SAME_MASS = 1e-4

/**
 * @param energies   in eV, in the order of `probeSteps`.
 * @param step       in Å⁻¹.
 * @param little     the little co-group as it acts on Cartesian columns.
 * @param resolution the last digit of the energies, eV.
 */
export function inverseMass(
  energies: readonly number[],
  step: number,
  { axes }: ProbeAxes,
  little: readonly Mat3[],
  dimension: Dimension,
  resolution: number,
): InverseMass {
  const points = probeSteps(dimension)
  const energyAt = new Map(points.map(({ role }, i) => [role, energies[i]]))
  const e = (role: string): number => energyAt.get(role)!
  const centre = e('centre')
  const axis = (i: number) => i + 1
  const second = [0, 1, 2].map(() => [0, 0, 0])
  const slope = [0, 0, 0]
  for (let i = 0; i < dimension; i++) {
    const [up, down] = [e(`+${axis(i)}`), e(`-${axis(i)}`)]
    second[i][i] = (up - centre + (down - centre)) / step ** 2
    slope[i] = (up - down) / (2 * step)
  }
  for (const [i, j] of AXIS_PAIRS.filter(([, j]) => j < dimension)) {
    const at = (s: string, t: string) => e(`${s}${axis(i)}${t}${axis(j)}`)
    second[i][j] = (at('+', '+') - at('+', '-') - (at('-', '+') - at('-', '-'))) / (4 * step ** 2)
    second[j][i] = second[i][j]
  }
  const curvature = second as unknown as Mat3
  const along = slope as unknown as Vec3
  // ħ²/mₑ is twice the constant.
  const alongAxes = scaleMatrix(curvature, 1 / (2 * HBAR2_OVER_2M))
  const toSpace = (m: Mat3): Mat3 => multiply(multiply(transpose(axes), m), axes)
  const inAxes = little.map(R => multiply(multiply(axes, R), transpose(axes)))
  const mean = meanTensor(alongAxes, inAxes)
  // Each of the three energies is off by half a digit at most: two digits in the second difference.
  const rounding = (2 * resolution) / step ** 2 / (2 * HBAR2_OVER_2M)
  const gradientRounding = resolution / (2 * step)
  const principal = principalAxes(alongAxes, dimension, rounding).map(({ value, vector, free }) => ({
    inverse: value,
    mass: Math.abs(value) > rounding && value !== 0 ? 1 / value : undefined,
    axis: pointingUp(apply(transpose(axes), vector)),
    free,
  }))
  const flat = principal.some(({ mass }) => mass === undefined)
  const gradient = tidy(apply(transpose(axes), along))
  const extremumAt = flat ? undefined : extremumOf(toSpace(curvature), gradient, axes, dimension)
  const misfits = points.map(({ steps }, i) => {
    const q = scale(steps, step)
    return energies[i] - centre - dot(along, q) - dot(q, apply(curvature, q)) / 2
  })
  const span = Math.max(...energies.map(energy => Math.abs(energy - centre)))
  const steepest = Math.max(...along.map(Math.abs))
  const strongest = Math.max(...curvature.flat().map(Math.abs))
  const away = extremumAt ? norm(extremumAt) : steepest / strongest
  return {
    tensor: mapMatrix(toSpace(alongAxes), x => x + 0),
    alongAxes,
    principal,
    rounding,
    gradient,
    gradientRounding,
    gradientMustVanish: isZeroMatrix(meanOf(inAxes), dimension),
    extremumAt,
    stationary: steepest <= gradientRounding || steepest === 0 || away <= OFF_EXTREMUM * step,
    kind: kindOf(principal),
    relations: relationsOf(alongAxes, inAxes, dimension),
    asymmetry: Math.max(...addMatrix(alongAxes, scaleMatrix(mean, -1)).flat().map(Math.abs)),
    misfits,
    misfit: span > 0 ? Math.max(...misfits.map(Math.abs)) / span : 0,
  }
}

function kindOf(principal: InverseMass['principal']): InverseMass['kind'] {
  if (principal.some(({ mass }) => mass === undefined)) return 'flat'
  if (principal.every(({ inverse }) => inverse > 0)) return 'minimum'
  return principal.every(({ inverse }) => inverse < 0) ? 'maximum' : 'saddle'
}

/** −D⁻¹ g, within the crystal's directions. */
function extremumOf(curvature: Mat3, gradient: Vec3, axes: Mat3, dimension: Dimension): Vec3 {
  let filled = curvature
  for (let i: number = dimension; i < 3; i++)
    filled = addMatrix(filled, axes[i].map(x => scale(axes[i], x)) as unknown as Mat3)
  return tidy(scale(apply(inverse(filled), gradient), -1))
}

const meanOf = (group: readonly Mat3[]): Mat3 => scaleMatrix(group.reduce(addMatrix), 1 / group.length)

/** Rotations are orthogonal within the tolerance of the lattice only. */
const isZeroMatrix = (m: Mat3, dimension: Dimension): boolean =>
  m.every((row, i) => row.every((x, j) => i >= dimension || j >= dimension || Math.abs(x) < ALIKE))

/** The mean of R T Rᵀ. */
const meanTensor = (tensor: Mat3, group: readonly Mat3[]): Mat3 =>
  meanOf(group.map(R => multiply(multiply(R, tensor), transpose(R))))

/** Which components no invariant tensor has, and which are the same in each. */
function relationsOf(tensor: Mat3, group: readonly Mat3[], dimension: Dimension): Relation[] {
  const invariants: Mat3[] = []
  for (let i = 0; i < dimension; i++)
    for (let j = i; j < dimension; j++) {
      const unitTensor = [0, 1, 2].map(r =>
        [0, 1, 2].map(c => ((r === i && c === j) || (r === j && c === i) ? 1 : 0)),
      ) as unknown as Mat3
      invariants.push(meanTensor(unitTensor, group))
    }
  const relations: Relation[] = []
  const name = (i: number, j: number) => `${i + 1}${j + 1}`
  for (const [i, j] of AXIS_PAIRS.filter(([, j]) => j < dimension)) {
    if (invariants.every(T => Math.abs(T[i][j]) < ALIKE))
      relations.push({ kind: 'vanishes', components: [name(i, j)], miss: Math.abs(tensor[i][j]) })
    if (invariants.every(T => Math.abs(T[i][i] - T[j][j]) < ALIKE))
      relations.push({
        kind: 'equal',
        components: [name(i, i), name(j, j)],
        miss: Math.abs(tensor[i][i] - tensor[j][j]),
      })
  }
  return relations
}

/** Largest first. */
function principalAxes(tensor: Mat3, dimension: Dimension, rounding: number) {
  const eigen = symmetricEigen(tensor, dimension)
  const near = Math.max(2 * rounding, SAME_MASS * Math.max(...eigen.map(({ value }) => Math.abs(value))))
  return eigen
    .map(({ value, vector }, i) => ({
      value,
      vector,
      free: eigen.some((other, j) => j !== i && Math.abs(other.value - value) <= near),
    }))
    .sort((x, y) => y.value - x.value)
}
