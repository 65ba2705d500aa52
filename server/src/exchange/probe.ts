/** An effective-mass probe: its points, and what their energies say, as programs read it. */
import { littleCoGroup } from '../crystal/kspace.ts'
import {
  type AxesFrom,
  inSpace,
  type InverseMass,
  inverseMass,
  probeAxes,
  probeOffset,
  probeSteps,
} from '../crystal/probe.ts'
import { add, combine, inverse, type Mat3, scale, tidy, type Vec3 } from '../crystal/vector.ts'
import type { Crystal, PlacedPoint } from '../meaning/crystal.ts'
import { listedNumber } from './listed-number.ts'

export interface ProbePointJson {
  /** From 0. */
  readonly index: number
  /** `centre`, or the axes along which it is moved: `+1`, `-1+3`. */
  readonly role: string
  /** Of the primitive reciprocal vectors. */
  readonly fraction: readonly number[]
  /** In the file's inverse unit, as is `offset`. */
  readonly cartesian: Vec3
  readonly offset: Vec3
  /** eV. */
  readonly energy?: number
  /** What the energy is above the fitted paraboloid, eV. */
  readonly misfit?: number
}

export interface PrincipalMassJson {
  /** mₑ, negative for a maximum; null where the band is flat within rounding. */
  readonly mass: number | null
  /** 1/mₑ */
  readonly inverse: number
  /** Cartesian unit vector. */
  readonly axis: Vec3
  /** Its direction in primitive vectors, the largest component ±1. */
  readonly direct: readonly number[]
  /** The same in primitive reciprocal vectors. */
  readonly reciprocal: readonly number[]
  /** One of many: another mass is the same. */
  readonly free: boolean
}

export interface ProbeMassJson
  extends Pick<InverseMass, 'kind' | 'rounding' | 'relations' | 'asymmetry' | 'misfit' | 'stationary'> {
  /** 1/mₑ, Cartesian. */
  readonly inverseMass: Mat3
  /** 1/mₑ, along the probe's axes. */
  readonly alongAxes: Mat3
  readonly principal: readonly PrincipalMassJson[]
  /** The largest principal mass over the smallest, by size. */
  readonly anisotropy?: number
  /** eV times the file's unit of length, Cartesian; as is `gradientRounding`. */
  readonly gradient: Vec3
  readonly gradientRounding: number
  readonly gradientMustVanish: boolean
  /** Of the paraboloid's extremum, in the file's inverse unit. */
  readonly extremumAt?: Vec3
}

export interface ProbeJson {
  readonly label: string
  /** In the file's inverse unit. */
  readonly step: number
  /** Å⁻¹ */
  readonly stepInverseAngstrom: number
  readonly littleCoGroup: number
  /** Cartesian unit vectors, as many as dimensions. */
  readonly axes: readonly Vec3[]
  readonly axesFrom: AxesFrom
  readonly points: readonly ProbePointJson[]
  readonly masses?: ProbeMassJson
}

export interface Energies {
  /** eV, in the order of the points. */
  readonly values: readonly number[]
  /** Their last digit, eV. */
  readonly resolution: number
}

/**
 * @param step in Å⁻¹.
 * @returns undefined where the symmetry of the crystal is not known.
 */
export function probeJson(
  crystal: Crystal,
  at: PlacedPoint,
  step: number,
  energies?: Energies,
): ProbeJson | undefined {
  const { lattice, kGroup, angstrom } = crystal
  if (!lattice || !kGroup) return undefined
  const { dimension, reciprocal } = lattice
  const little = littleCoGroup(at.fraction, kGroup)
  const axes = probeAxes(little, reciprocal, dimension)
  const own = step * angstrom
  const result =
    energies &&
    inverseMass(energies.values, step, axes, inSpace(little, reciprocal), dimension, energies.resolution)
  const points = probeSteps(dimension).map((place, index): ProbePointJson => {
    const offset = probeOffset(place, axes, own)
    const fraction = tidy(add(at.fraction, crystal.fractionOf(offset)))
    return {
      index,
      role: place.role,
      fraction: fraction.slice(0, dimension),
      cartesian: tidy(add(at.cartesian, offset)),
      offset,
      ...(result && { energy: energies.values[index], misfit: result.misfits[index] }),
    }
  })
  return {
    label: at.label,
    step: own,
    stepInverseAngstrom: step,
    littleCoGroup: little.length,
    axes: axes.axes.slice(0, dimension),
    axesFrom: axes.from,
    points,
    ...(result && { masses: massJson(result, crystal) }),
  }
}

function massJson(result: InverseMass, crystal: Crystal): ProbeMassJson {
  const { angstrom, dimension, lattice } = crystal
  const sizes = result.principal.flatMap(({ mass }) => (mass === undefined ? [] : [Math.abs(mass)]))
  const { primitive, reciprocal } = lattice!
  const along = (axis: Vec3, rows: Mat3) => inLargest(combine(axis, inverse(rows))).slice(0, dimension)
  return {
    kind: result.kind,
    inverseMass: result.tensor,
    alongAxes: result.alongAxes,
    rounding: result.rounding,
    principal: result.principal.map(({ mass, inverse, axis, free }) => ({
      mass: mass ?? null,
      inverse,
      axis,
      direct: along(axis, primitive),
      reciprocal: along(axis, reciprocal),
      free,
    })),
    ...(sizes.length > 1 && sizes.length === dimension
      ? { anisotropy: Math.max(...sizes) / Math.min(...sizes) }
      : {}),
    // eV Å is more of eV per inverse unit where the unit of length is longer.
    gradient: tidy(scale(result.gradient, 1 / angstrom)),
    gradientRounding: result.gradientRounding / angstrom,
    gradientMustVanish: result.gradientMustVanish,
    stationary: result.stationary,
    ...(result.extremumAt && { extremumAt: tidy(scale(result.extremumAt, angstrom)) }),
    relations: result.relations,
    asymmetry: result.asymmetry,
    misfit: result.misfit,
  }
}

/** What arithmetic leaves of a component that is zero. */
const NOISE = 1e-12

function inLargest(v: Vec3): Vec3 {
  const largest = v.reduce((a, b) => (Math.abs(b) > Math.abs(a) + NOISE ? b : a))
  return v.map(x => (Math.abs(x / largest) < NOISE ? 0 : x / Math.abs(largest))) as unknown as Vec3
}

/** Digits that a double holds of a number. */
const DOUBLE = 2 ** -52

/**
 * One energy a line, in eV; blank lines and what follows a # (or !) are skipped.
 * @returns what is wrong, in one line, where it is no such list.
 */
export function readEnergies(text: string, expected: number): Energies | { readonly fault: string } {
  const values: number[] = []
  let finest = Number.POSITIVE_INFINITY
  for (const [i, line] of text.split(/\r\n|\r|\n/).entries()) {
    const content = line.replace(/[#!].*$/, '').trim()
    if (content === '') continue
    const number = listedNumber(content)
    if (!number) {
      const words = content.split(/[\s,;]+/).length
      return {
        fault:
          words > 1
            ? `line ${i + 1}: one energy a line is wanted; here are ${words} words`
            : `line ${i + 1}: ${JSON.stringify(shortened(content))} is no number`,
      }
    }
    values.push(number.value)
    finest = Math.min(finest, number.digit)
    if (values.length > expected)
      return { fault: `line ${i + 1}: this energy is one too many: the probe has ${expected} points` }
  }
  if (values.length < expected)
    return {
      fault: `the list ends after ${values.length} of ${expected} energies: one a line, in the order of the points`,
    }
  const largest = Math.max(...values.map(Math.abs))
  return { values, resolution: Math.max(finest, largest * DOUBLE) }
}

const shortened = (text: string): string => (text.length > 40 ? `${text.slice(0, 40)}…` : text)
