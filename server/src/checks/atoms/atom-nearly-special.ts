import { combine, distance, inverse, norm, type Vec3 } from '../../crystal/vector.ts'
import { fraction } from '../../format/fraction.ts'
import type { Fraction, NumberValue } from '../../format/model.ts'
import { formatFraction } from '../../format/numbers.ts'
import type { Crystal, PlacedAtom } from '../../meaning/crystal.ts'
import { isRoundingOf, LARGEST_SHIFT } from '../../meaning/rounding.ts'
import { length } from '../../meaning/wording.ts'
import type { SymmetryOutcome } from '../../meaning/workshop.ts'
import type { Check, Finding } from '../check.ts'
import { coincidences, nameOf } from './contacts.ts'
import { few } from './few.ts'
import { suspectedFrame } from './suspicions.ts'

interface Facts {
  readonly atom: number
  /** How far the atom is from the exact place, in the file's unit. */
  readonly shift: number
}

export const atomNearlySpecial: Check<Facts> = {
  id: 'atom-nearly-special',
  severity: 'warning',
  needs: ['unit', 'frames.atoms'],
  summary:
    'An atom misses a more symmetric place by the rounding of a fraction, which lowers the symmetry of the crystal.',
  why: 'A program finds fewer symmetry operations: more k-points to compute, split degeneracies, and forces that should vanish.',
  wrong:
    'lattice: {bravais: hP, a: 3.21, c: 5.21}\natoms:\n  - Mg: [0.333, 2/3, 1/4]\n  - Mg: [2/3, 1/3, 3/4]\n',
  right:
    'lattice: {bravais: hP, a: 3.21, c: 5.21}\natoms:\n  - Mg: [1/3, 2/3, 1/4]\n  - Mg: [2/3, 1/3, 3/4]\n',
  *run({ crystal }) {
    const corrections = correctionsOf(crystal)
    if (corrections.size === 0) return
    const gain = gained(crystal, corrections)
    if (!gain) return
    const mattering = [...corrections.values()].filter(({ shift }) => shift > strictTolerance(crystal))
    yield* few(mattering.map(correction => finding(crystal, correction, gain)))
  },
}

/** Special positions are twelfths where their decimals never end; eighths are written out in full. */
const DENOMINATOR = 12
/** What arithmetic leaves between equal fractions. */
const SAME = 1e-9

interface Correction {
  readonly atom: PlacedAtom
  readonly numbers: readonly { readonly number: NumberValue; readonly exact: Fraction }[]
  /** Fractions of the primitive vectors at the exact place. */
  readonly fraction: Vec3
  readonly shift: number
}

function correctionsOf(crystal: Crystal): Map<PlacedAtom, Correction> {
  const { lattice, document } = crystal
  const corrections = new Map<PlacedAtom, Correction>()
  if (
    !lattice ||
    document.frames.atoms === 'cartesian' ||
    suspectedFrame(crystal) ||
    coincidences(crystal).length > 0
  )
    return corrections
  const toPrimitive = inverse(lattice.primitive)
  for (const atom of crystal.atoms) {
    const items = atom.entry.position!.items as readonly NumberValue[]
    const numbers = items.slice(0, lattice.dimension).flatMap(number => {
      const exact = exactValue(number)
      return exact ? [{ number, exact }] : []
    })
    if (numbers.length === 0) continue
    const value = (number: NumberValue): number => {
      const exact = numbers.find(n => n.number === number)?.exact
      return exact ? exact.p / exact.q : number.value
    }
    const place = crystal.atomCartesian(items.map(value) as unknown as Vec3)
    const shift = distance(place, atom.cartesian)
    if (shift < LARGEST_SHIFT / crystal.angstrom)
      corrections.set(atom, { atom, numbers, fraction: combine(place, toPrimitive), shift })
  }
  return corrections
}

/** The fraction that a number is a rounding of, where it is not the fraction itself. */
function exactValue(number: NumberValue): Fraction | undefined {
  const p = Math.round(number.value * DENOMINATOR)
  const exact = p / DENOMINATOR
  const isEnding = p % 3 === 0
  if (isEnding || Math.abs(number.value - exact) <= SAME || !isRoundingOf(number, exact)) return undefined
  return fraction(p, DENOMINATOR)
}

/** Programs take atoms for symmetric within about this part of a lattice vector (common practice). */
const PROGRAM_TOLERANCE = 1e-5

const strictTolerance = ({ lattice, dimension }: Crystal): number =>
  PROGRAM_TOLERANCE * Math.min(...lattice!.primitive.slice(0, dimension).map(norm))

interface Gain {
  readonly before: string
  readonly after: string
}

/** What the exact places bring, within the file's tolerance or at least that of a stricter program. */
function gained(crystal: Crystal, corrections: ReadonlyMap<PlacedAtom, Correction>): Gain | undefined {
  const exact = crystal.atoms.map(atom => ({
    kind: atom.kind,
    fraction: corrections.get(atom)?.fraction ?? atom.fraction,
  }))
  for (const tolerance of [crystal.tolerance, strictTolerance(crystal)]) {
    const before = crystal.searchWith(crystal.atoms, tolerance)
    const after = crystal.searchWith(exact, tolerance)
    if (operations(after) > operations(before)) return { before: nameIn(before), after: nameIn(after) }
  }
  return undefined
}

function operations(outcome: SymmetryOutcome): number {
  if (outcome.state !== 'found') return Number.NaN // Comparisons with it are false: nothing is said.
  const { operations, translationsFold } = outcome.symmetry
  return operations.length * translationsFold
}

function nameIn(outcome: SymmetryOutcome): string {
  if (outcome.state !== 'found') return ''
  const { spaceGroup, pointGroup } = outcome.symmetry
  return spaceGroup?.symbol ?? `the class ${pointGroup}`
}

function finding(
  crystal: Crystal,
  { atom, numbers, shift }: Correction,
  { before, after }: Gain,
): Finding<Facts> {
  const exact = numbers.map(({ exact }) => formatFraction(exact)).join(' and ')
  const symmetry =
    before === after
      ? 'operations of the crystal are lost'
      : `the crystal is found as ${before} instead of ${after}`
  return {
    at: numbers.length === 1 ? numbers[0].number.at : atom.entry.position!.at,
    message: `${nameOf(atom)} misses ${exact} by a rounding, ${length(shift, crystal.unit, 6)}, and ${symmetry}.`,
    facts: { atom: atom.index, shift },
    fixes: [
      {
        title: `Write ${exact}`,
        safe: true,
        edits: numbers.map(({ number, exact }) => ({ at: number.at, text: formatFraction(exact) })),
      },
    ],
  }
}
