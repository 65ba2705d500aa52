/** Are the atoms' numbers meant in another unit or another frame than the file states? */
import { covalentRadius } from '../../crystal/elements.ts'
import { IN_ANGSTROM, type Unit, UNITS } from '../../crystal/units.ts'
import { norm, type Vec3 } from '../../crystal/vector.ts'
import type { AtomFrame, NumberValue } from '../../format/model.ts'
import type { Crystal } from '../../meaning/crystal.ts'
import type { SymmetryOutcome } from '../../meaning/workshop.ts'
import { contradictsVectors } from '../lattice/kinship.ts'
import {
  coincidences,
  distinctAtoms,
  once,
  readOn,
  type Tightest,
  tightest,
  tightestAmong,
} from './contacts.ts'

/**
 * The tightest contact of a solid, over the sum of covalent radii: metals, salts and covalent crystals lie between 0.85
 * and 1.25 (computed from the structures of the elements and simple salts), the shortest double bonds at 0.67.
 */
const ORDINARY = { least: 0.8, most: 1.3 }
const TOO_TIGHT = 0.65
const TOO_LOOSE = 1.55
/** One atom alone may be all that is typed so far: of the two of silicon it is at 1.73. */
const TOO_LOOSE_ALONE = 1.8

/** Their crystals are held together by less than bonds: 1.8 (argon) and over. */
const NOBLE = new Set(['He', 'Ne', 'Ar', 'Kr', 'Xe', 'Rn'])

const isOrdinary = (ratio: number): boolean => ratio >= ORDINARY.least && ratio <= ORDINARY.most

export interface UnitSuspicion {
  readonly unit: Unit
  readonly contact: Tightest
  /** The same contact's ratio in that unit. */
  readonly ratio: number
}

/** The unit in which the distances would be those of a solid, where they are not as stated. */
export const suspectedUnit = once((crystal): UnitSuspicion | undefined => {
  if (suspectedFrame(crystal) || contradictsVectors(crystal) || suspectedUnitsOfA(crystal)) return undefined
  const contact = tightest(crystal)
  const loose = distinctAtoms(crystal).length === 1 ? TOO_LOOSE_ALONE : TOO_LOOSE
  if (!contact || (contact.ratio >= TOO_TIGHT && contact.ratio <= loose)) return undefined
  // Between atoms that are far apart another one may stand, whose size is not known.
  if (contact.ratio > loose && crystal.atoms.some(({ element }) => covalentRadius(element) === undefined))
    return undefined
  if (NOBLE.has(contact.first.element) || NOBLE.has(contact.second.element)) return undefined
  for (const unit of UNITS) {
    const ratio = (contact.ratio * IN_ANGSTROM[unit]) / crystal.angstrom
    if (unit !== crystal.unit && isOrdinary(ratio))
      return suspectedPrimitive(crystal) ? undefined : { unit, contact, ratio }
  }
  return undefined
})

/**
 * Rows of `vectors` that are meant in units of the parameter `a`: none of their numbers uses it, they are of the order of
 * one, and the distances are those of a solid when they are multiplied by it.
 */
export const suspectedUnitsOfA = once(
  (crystal): { readonly a: NumberValue; readonly contact: Tightest } | undefined => {
    const { document, lattice } = crystal
    const { vectors, parameters } = document.lattice ?? {}
    const a = parameters?.a
    if (!vectors || !a || !lattice || document.frames.atoms === 'cartesian') return undefined
    const numbers = vectors.rows.flatMap(row => row?.items ?? [])
    if (numbers.some(number => number?.uses.length !== 0)) return undefined
    if (lattice.conventional.slice(0, lattice.dimension).some(row => norm(row) > OF_ORDER_ONE))
      return undefined
    const contact = tightest(crystal)
    if (!contact || contact.ratio >= TOO_TIGHT || !isOrdinary(contact.ratio * a.value)) return undefined
    return { a, contact }
  },
)

/** Vectors in units of a are as long as that, but for a stretched c or a long edge of a few. */
const OF_ORDER_ONE = 4

/** Lengths are meant in another unit than stated: what a distance is in Å is not known. */
export const isScaleSuspected = (crystal: Crystal): boolean =>
  suspectedUnit(crystal) !== undefined || suspectedUnitsOfA(crystal) !== undefined

export interface FrameSuspicion {
  readonly frame: AtomFrame
  readonly contact: Tightest
}

/** Fractions reach beyond a neighbouring cell only where somebody unwrapped them; a length does at once. */
const FAR_OUT = 2

/** The frame in which the atoms' numbers give the distances of a solid, where those stated can hardly be meant. */
export const suspectedFrame = once((crystal): FrameSuspicion | undefined => {
  const { document, lattice } = crystal
  const atoms = distinctAtoms(crystal)
  if (!lattice || atoms.length < 2) return undefined
  const periodic = atoms.flatMap(({ stated }) => stated.slice(0, lattice.dimension))
  const largest = periodic.reduce((most, x) => Math.max(most, Math.abs(x)), 0)
  if (document.frames.atoms !== 'cartesian')
    return largest > FAR_OUT ? sensible(crystal, 'cartesian') : undefined
  const contact = tightest(crystal)
  if (largest > 1 || !contact || contact.ratio >= TOO_TIGHT) return undefined
  return sensible(crystal, 'conventional') ?? sensible(crystal, 'primitive')
})

function sensible(crystal: Crystal, frame: AtomFrame): FrameSuspicion | undefined {
  const atoms = distinctAtoms(crystal)
  const contact = tightestAmong(crystal, atoms, readOn(crystal, atoms, crystal.atomAxesOf(frame)))
  return contact && isOrdinary(contact.ratio) ? { frame, contact } : undefined
}

/**
 * Fractions of the primitive cell under a centred lattice, where no frame is stated: the atoms are far more symmetric when
 * they are read so.
 */
export const suspectedPrimitive = once((crystal): OtherReading | undefined => {
  const { document, lattice, atoms } = crystal
  if (!lattice || lattice.centring === 'P' || document.framesEntry?.atoms || atoms.length < 2)
    return undefined
  if (!crystal.atomsComplete || coincidences(crystal).length > 0 || suspectedFrame(crystal)) return undefined
  return moreSymmetric(
    crystal,
    atoms.map(({ stated }) => stated),
  )
})

/** Each polar group is half of a centrosymmetric one: less gain than that is no sign of another reading. */
const FAR_MORE = 2
/** Of the sum of covalent radii: a reading that puts atoms nearer together is none. */
const CLOSEST = 0.6

export interface OtherReading {
  /** Numbers of symmetry operations of the stated cell, as read and in the other reading. */
  readonly now: number
  readonly then: number
}

/** Is the crystal far more symmetric when its atoms stand at these fractions of the primitive cell, one an atom? */
export function moreSymmetric(crystal: Crystal, reading: readonly Vec3[]): OtherReading | undefined {
  const { atoms } = crystal
  const now = operations(crystal.symmetryOutcome)
  const then = operations(crystal.searchWith(atoms.map(({ kind }, i) => ({ kind, fraction: reading[i] }))))
  if (!(then >= FAR_MORE * now)) return undefined
  const contact = tightestAmong(crystal, atoms, reading)
  return contact && contact.ratio < CLOSEST ? undefined : { now, then }
}

const operations = (outcome: SymmetryOutcome): number =>
  outcome.state === 'found'
    ? outcome.symmetry.operations.length * outcome.symmetry.translationsFold
    : Number.NaN
