/** The Bravais types, their centrings and the parameters that each leaves free. */
import {
  anglesPossible,
  type AngleMiss,
  type AngleName,
  type CellParameters,
  type ParameterName,
} from './cell.ts'
import { PARAMETER_NAMES, sinDegrees } from './cell.ts'
import type { Mat3 } from './vector.ts'

export const BRAVAIS_TYPES_3D = [
  'cP',
  'cF',
  'cI',
  'tP',
  'tI',
  'oP',
  'oC',
  'oA',
  'oB',
  'oF',
  'oI',
  'hP',
  'hR',
  'mP',
  'mA',
  'mB',
  'mC',
  'mI',
  'aP',
] as const
export const BRAVAIS_TYPES_2D = ['tp', 'op', 'oc', 'hp', 'mp'] as const
export const BRAVAIS_TYPES = [...BRAVAIS_TYPES_3D, ...BRAVAIS_TYPES_2D] as const
export type BravaisType = (typeof BRAVAIS_TYPES)[number]
export const CENTRINGS = ['P', 'A', 'B', 'C', 'I', 'F', 'R'] as const
export type Centring = (typeof CENTRINGS)[number]

export interface CentringTable {
  /** Primitive vectors as combinations of the conventional a, b, c: `numerators` / `denominator`, one vector a row. */
  readonly numerators: Mat3
  readonly denominator: 1 | 2 | 3
  /** The other way round: conventional vectors as whole combinations of the primitive ones. */
  readonly conventional: Mat3
  /** Lattice points in the conventional cell. */
  readonly points: 1 | 2 | 3 | 4
}

/** The primitive cell of each centring. R: obverse setting on hexagonal axes; its primitive vectors are the rhombohedral ones. */
export const CENTRING_TABLES: Record<Centring, CentringTable> = {
  P: {
    numerators: [
      [1, 0, 0],
      [0, 1, 0],
      [0, 0, 1],
    ],
    denominator: 1,
    conventional: [
      [1, 0, 0],
      [0, 1, 0],
      [0, 0, 1],
    ],
    points: 1,
  },
  A: {
    numerators: [
      [2, 0, 0],
      [0, 1, -1],
      [0, 1, 1],
    ],
    denominator: 2,
    conventional: [
      [1, 0, 0],
      [0, 1, 1],
      [0, -1, 1],
    ],
    points: 2,
  },
  B: {
    numerators: [
      [1, 0, -1],
      [0, 2, 0],
      [1, 0, 1],
    ],
    denominator: 2,
    conventional: [
      [1, 0, 1],
      [0, 1, 0],
      [-1, 0, 1],
    ],
    points: 2,
  },
  C: {
    numerators: [
      [1, -1, 0],
      [1, 1, 0],
      [0, 0, 2],
    ],
    denominator: 2,
    conventional: [
      [1, 1, 0],
      [-1, 1, 0],
      [0, 0, 1],
    ],
    points: 2,
  },
  I: {
    numerators: [
      [-1, 1, 1],
      [1, -1, 1],
      [1, 1, -1],
    ],
    denominator: 2,
    conventional: [
      [0, 1, 1],
      [1, 0, 1],
      [1, 1, 0],
    ],
    points: 2,
  },
  F: {
    numerators: [
      [0, 1, 1],
      [1, 0, 1],
      [1, 1, 0],
    ],
    denominator: 2,
    conventional: [
      [-1, 1, 1],
      [1, -1, 1],
      [1, 1, -1],
    ],
    points: 4,
  },
  R: {
    numerators: [
      [2, 1, 1],
      [-1, 1, 1],
      [-1, -2, 1],
    ],
    denominator: 3,
    conventional: [
      [1, -1, 0],
      [0, 1, -1],
      [1, 1, 1],
    ],
    points: 3,
  },
}

export type LatticeSystem =
  | 'cubic'
  | 'tetragonal'
  | 'orthorhombic'
  | 'hexagonal'
  | 'rhombohedral'
  | 'monoclinic'
  | 'triclinic'
  | 'square'
  | 'rectangular'
  | 'oblique'

export interface BravaisInfo {
  readonly dimension: 2 | 3
  /** Lattice system; `hexagonal` in the plane too. */
  readonly system: LatticeSystem
  /** A centred rectangular plane lattice goes like C without c. */
  readonly centring: Centring
  /** How one says it: "a … lattice". */
  readonly words: string
  /** Sets of parameters that define the cell, each complete in itself, the usual one first. */
  readonly free: readonly (readonly ParameterName[])[]
}

const info = (
  system: LatticeSystem,
  centring: Centring,
  words: string,
  ...free: readonly (readonly ParameterName[])[]
): BravaisInfo => ({ dimension: 3, system, centring, words, free })

const plane = (
  system: LatticeSystem,
  centring: Centring,
  words: string,
  ...free: readonly (readonly ParameterName[])[]
): BravaisInfo => ({ dimension: 2, system, centring, words, free })

const ABC = ['a', 'b', 'c'] as const

/** A monoclinic type may have its oblique angle at any axis along which the centring does not lie. */
export const BRAVAIS: Record<BravaisType, BravaisInfo> = {
  cP: info('cubic', 'P', 'simple cubic', ['a']),
  cF: info('cubic', 'F', 'face-centred cubic', ['a']),
  cI: info('cubic', 'I', 'body-centred cubic', ['a']),
  tP: info('tetragonal', 'P', 'simple tetragonal', ['a', 'c']),
  tI: info('tetragonal', 'I', 'body-centred tetragonal', ['a', 'c']),
  oP: info('orthorhombic', 'P', 'simple orthorhombic', ABC),
  oC: info('orthorhombic', 'C', 'C-centred orthorhombic', ABC),
  oA: info('orthorhombic', 'A', 'A-centred orthorhombic', ABC),
  oB: info('orthorhombic', 'B', 'B-centred orthorhombic', ABC),
  oF: info('orthorhombic', 'F', 'face-centred orthorhombic', ABC),
  oI: info('orthorhombic', 'I', 'body-centred orthorhombic', ABC),
  hP: info('hexagonal', 'P', 'hexagonal', ['a', 'c']),
  hR: info('rhombohedral', 'R', 'rhombohedral', ['a', 'c'], ['a', 'alpha']),
  mP: info('monoclinic', 'P', 'simple monoclinic', [...ABC, 'beta'], [...ABC, 'gamma'], [...ABC, 'alpha']),
  mA: info('monoclinic', 'A', 'A-centred monoclinic', [...ABC, 'beta'], [...ABC, 'gamma']),
  mB: info('monoclinic', 'B', 'B-centred monoclinic', [...ABC, 'gamma'], [...ABC, 'alpha']),
  mC: info('monoclinic', 'C', 'C-centred monoclinic', [...ABC, 'beta'], [...ABC, 'alpha']),
  mI: info(
    'monoclinic',
    'I',
    'body-centred monoclinic',
    [...ABC, 'beta'],
    [...ABC, 'gamma'],
    [...ABC, 'alpha'],
  ),
  aP: info('triclinic', 'P', 'triclinic', [...ABC, 'alpha', 'beta', 'gamma']),
  tp: plane('square', 'P', 'square', ['a']),
  op: plane('rectangular', 'P', 'rectangular', ['a', 'b']),
  oc: plane('rectangular', 'C', 'centred rectangular', ['a', 'b']),
  hp: plane('hexagonal', 'P', 'plane hexagonal', ['a']),
  mp: plane('oblique', 'P', 'oblique', ['a', 'b', 'gamma']),
}

export type GivenParameters = Partial<Record<ParameterName, number>>
export type Axis = 'a' | 'b' | 'c'

/** The axis to which an angle belongs: the one that does not span it. */
const AXIS_OF: Record<AngleName, Axis> = { alpha: 'a', beta: 'b', gamma: 'c' }
const ANGLES = ['alpha', 'beta', 'gamma'] as const

/**
 * A stated parameter agrees with what the type demands when the two differ by less than this part of the demand.
 * Lattice parameters are written with five or six significant digits; a disagreement in those is meant, one below
 * comes from the rounding of an expression.
 */
export const PARAMETER_TOLERANCE = 1e-5

export interface Contradiction {
  readonly name: ParameterName
  readonly given: number
  /** What the type and the other parameters demand; undefined where the type has no such parameter. */
  readonly expected: number | undefined
  /** The demand in words, e.g. "a cubic lattice has a = b = c". */
  readonly why: string
}

export interface CompletedCell {
  /**
   * The conventional cell, on hexagonal axes for hR. Where parameters contradict each other the type wins, except
   * for the oblique angle of a monoclinic cell. In two dimensions c = 1 and α = β = 90°.
   */
  readonly cell: CellParameters
  /** `rhombohedral`: the parameters given were those of an hR lattice's rhombohedral axes. */
  readonly axes: 'conventional' | 'rhombohedral'
  /** Monoclinic types: the axis at which the oblique angle is. */
  readonly uniqueAxis?: Axis
  readonly contradictions: readonly Contradiction[]
}

export interface IncompleteCell {
  /** The parameters still needed, for the free set that lacks fewest. */
  readonly missing: readonly ParameterName[]
  /** The same for every set that would do. */
  readonly alternatives: readonly (readonly ParameterName[])[]
}

/** A cell that cannot be turned into a conventional one because no cell has its angles. */
export interface ImpossibleAngles {
  readonly miss: AngleMiss
}

/**
 * The whole conventional cell from the parameters that somebody wrote for a Bravais type.
 * Lengths in any one unit, angles in degrees. Parameters beyond the free ones are compared with what the type demands
 * and reported in `contradictions` where they differ. Lengths and angles themselves are not judged here (see
 * `latticeFromCell`), except for rhombohedral axes, whose angle must lie under 120° to have hexagonal ones.
 */
export function completeCell(
  type: BravaisType,
  given: GivenParameters,
): CompletedCell | IncompleteCell | ImpossibleAngles {
  const { system, centring, free } = BRAVAIS[type]
  if (system === 'monoclinic') return completeMonoclinic(type, centring, given)
  const lacking = free.map(set => set.filter(name => given[name] === undefined))
  const complete = free.filter((_, i) => lacking[i].length === 0)
  if (complete.length === 0) return incomplete(lacking)
  if (system === 'rhombohedral') return completeRhombohedral(given, complete)
  return { ...compare(demanded(system, given), given, type), axes: 'conventional' }
}

function incomplete(lacking: readonly (readonly ParameterName[])[]): IncompleteCell {
  const fewest = Math.min(...lacking.map(set => set.length))
  return { missing: lacking.find(set => set.length === fewest)!, alternatives: lacking }
}

/** The cell that the system makes of its free parameters, which are all there. */
function demanded(system: LatticeSystem, g: GivenParameters): CellParameters {
  const { a = 1, b = 1, c = 1, alpha = 90, beta = 90, gamma = 90 } = g
  switch (system) {
    case 'cubic':
      return { a, b: a, c: a, alpha: 90, beta: 90, gamma: 90 }
    case 'tetragonal':
      return { a, b: a, c, alpha: 90, beta: 90, gamma: 90 }
    case 'orthorhombic':
      return { a, b, c, alpha: 90, beta: 90, gamma: 90 }
    case 'hexagonal':
      return { a, b: a, c, alpha: 90, beta: 90, gamma: 120 }
    case 'square':
      return { a, b: a, c: 1, alpha: 90, beta: 90, gamma: 90 }
    case 'rectangular':
      return { a, b, c: 1, alpha: 90, beta: 90, gamma: 90 }
    case 'oblique':
      return { a, b, c: 1, alpha: 90, beta: 90, gamma }
    default:
      return { a, b, c, alpha, beta, gamma }
  }
}

const LENGTH_LAW: Partial<Record<LatticeSystem, string>> = {
  cubic: 'a cubic lattice has a = b = c',
  tetragonal: 'a tetragonal lattice has a = b',
  hexagonal: 'a hexagonal lattice has a = b',
  square: 'a square lattice has a = b',
}
const ANGLE_LAW: Partial<Record<LatticeSystem, string>> = {
  cubic: 'a cubic lattice has right angles only',
  tetragonal: 'a tetragonal lattice has right angles only',
  orthorhombic: 'an orthorhombic lattice has right angles only',
  hexagonal: 'a hexagonal lattice has α = β = 90° and γ = 120°',
  square: 'a square lattice has a right angle',
  rectangular: 'a rectangular lattice has a right angle',
}

const agrees = (given: number, expected: number): boolean =>
  Math.abs(given - expected) <= PARAMETER_TOLERANCE * Math.abs(expected)

/** Hold everything that was given against a cell. */
function contradictionsOf(
  cell: CellParameters,
  given: GivenParameters,
  why: (name: ParameterName) => string,
): Contradiction[] {
  return PARAMETER_NAMES.flatMap(name => {
    const value = given[name]
    if (value === undefined || agrees(value, cell[name])) return []
    return [{ name, given: value, expected: cell[name], why: why(name) }]
  })
}

const isAngle = (name: ParameterName): name is AngleName => name !== 'a' && name !== 'b' && name !== 'c'

function compare(
  cell: CellParameters,
  given: GivenParameters,
  type: BravaisType,
): { cell: CellParameters; contradictions: Contradiction[] } {
  const { system, dimension } = BRAVAIS[type]
  if (dimension === 3) {
    const why = (name: ParameterName) => (isAngle(name) ? ANGLE_LAW : LENGTH_LAW)[system]!
    return { cell, contradictions: contradictionsOf(cell, given, why) }
  }
  const { a, b, gamma, ...beyond } = given
  const contradictions = contradictionsOf(cell, { a, b, gamma }, name =>
    name !== 'gamma'
      ? LENGTH_LAW[system]!
      : system === 'hexagonal'
        ? 'a plane hexagonal lattice has γ = 120°'
        : ANGLE_LAW[system]!,
  )
  for (const name of PARAMETER_NAMES)
    if (beyond[name as keyof typeof beyond] !== undefined)
      contradictions.push({
        name,
        given: given[name]!,
        expected: undefined,
        why: 'a plane lattice has a, b and γ only; the period along its normal is `height`',
      })
  return { cell, contradictions }
}

/**
 * Hexagonal axes of a rhombohedral cell: a_h = 2a sin(α/2), c_h = a√(3(1 + 2cos α)), the latter in a form that
 * does not cancel near 120°.
 */
export function hexagonalFromRhombohedral(a: number, alpha: number): CellParameters {
  const hexagonal = 2 * a * sinDegrees(alpha / 2)
  const height = a * Math.sqrt(12 * sinDegrees((120 + alpha) / 2) * sinDegrees((120 - alpha) / 2))
  return { a: hexagonal, b: hexagonal, c: height, alpha: 90, beta: 90, gamma: 120 }
}

/** The rhombohedral axes (length and angle) of a hexagonal cell with R centring. */
export function rhombohedralFromHexagonal(a: number, c: number): { a: number; alpha: number } {
  const edge = Math.hypot(a / Math.sqrt(3), c / 3)
  return { a: edge, alpha: (2 * Math.asin(Math.min(1, a / (2 * edge))) * 180) / Math.PI }
}

/** Both readings are tried where both are complete; the one that explains more of what was written is meant. */
function completeRhombohedral(
  given: GivenParameters,
  complete: readonly (readonly ParameterName[])[],
): CompletedCell | ImpossibleAngles {
  const readings = complete.map(set =>
    set.includes('alpha') ? onRhombohedralAxes(given) : onHexagonalAxes(given),
  )
  const contradictions = (r: CompletedCell | ImpossibleAngles) =>
    'miss' in r ? Number.POSITIVE_INFINITY : r.contradictions.length
  return readings.reduce((best, other) => (contradictions(other) < contradictions(best) ? other : best))
}

function onHexagonalAxes(given: GivenParameters): CompletedCell {
  const cell = demanded('hexagonal', given)
  const why = (name: ParameterName) =>
    isAngle(name)
      ? 'the hexagonal axes of a rhombohedral lattice have α = β = 90° and γ = 120°'
      : 'the hexagonal axes of a rhombohedral lattice have a = b'
  return { cell, axes: 'conventional', contradictions: contradictionsOf(cell, given, why) }
}

function onRhombohedralAxes(given: GivenParameters): CompletedCell | ImpossibleAngles {
  const a = given.a!
  const alpha = given.alpha!
  const angles = anglesPossible(alpha, alpha, alpha)
  if (!angles.possible) return { miss: angles }
  const own: CellParameters = { a, b: a, c: a, alpha, beta: alpha, gamma: alpha }
  const contradictions = contradictionsOf(own, given, name =>
    isAngle(name) ? 'rhombohedral axes have α = β = γ' : 'rhombohedral axes have a = b = c',
  )
  return { cell: hexagonalFromRhombohedral(a, alpha), axes: 'rhombohedral', contradictions }
}

function completeMonoclinic(
  type: BravaisType,
  centring: Centring,
  given: GivenParameters,
): CompletedCell | IncompleteCell {
  const allowed = BRAVAIS[type].free.map(set => set[3] as AngleName)
  const lengths = ABC.filter(name => given[name] === undefined)
  const oblique = obliqueAngle(allowed, given)
  if (oblique === undefined) {
    const open = allowed.filter(name => given[name] === undefined)
    return incomplete(open.map(angle => [...lengths, angle]))
  }
  if (lengths.length > 0) return incomplete([lengths])
  const { a = 1, b = 1, c = 1 } = given
  const cell: CellParameters = { a, b, c, alpha: 90, beta: 90, gamma: 90, [oblique]: given[oblique] }
  const contradictions = contradictionsOf(cell, given, () => 'a monoclinic lattice has two right angles')
  if (!allowed.includes(oblique))
    contradictions.push({
      name: oblique,
      given: given[oblique]!,
      expected: 90,
      why: `${centring} centring lies along the unique axis ${AXIS_OF[oblique]}, which is no lattice type of its own`,
    })
  return { cell, axes: 'conventional', uniqueAxis: AXIS_OF[oblique], contradictions }
}

/**
 * Which of a monoclinic cell's angles is meant as the oblique one: the one that is not 90°, at an allowed axis if there
 * is a choice. If all that are stated are 90°, two of them leave the third open, which somebody forgot.
 */
function obliqueAngle(allowed: readonly AngleName[], given: GivenParameters): AngleName | undefined {
  const stated = ANGLES.filter(name => given[name] !== undefined)
  const skew = stated.filter(name => !agrees(given[name]!, 90))
  if (skew.length > 0) return allowed.find(name => skew.includes(name)) ?? skew[0]
  const forgotten = stated.length === 2 && allowed.some(name => !stated.includes(name))
  if (forgotten) return undefined
  return allowed.find(name => stated.includes(name))
}
