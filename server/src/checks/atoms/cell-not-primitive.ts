import {
  BRAVAIS,
  type BravaisType,
  type Centring,
  CENTRINGS,
  CENTRING_TABLES,
  completeCell,
} from '../../crystal/bravais.ts'
import { determinant, IDENTITY, inverse, type Mat3, mapMatrix, multiply } from '../../crystal/vector.ts'
import type { Fix, Span } from '../../format/model.ts'
import type { Symmetry } from '../../crystal/symmetry.ts'
import type { Crystal } from '../../meaning/crystal.ts'
import { type Cell, restate } from '../../meaning/rewrite.ts'
import { count } from '../../meaning/wording.ts'
import type { Check, Context } from '../check.ts'
import { diagnose } from '../points/diagnosis.ts'
import { POINTS_OF_CENTRED_CELL } from '../points/point-frame-suspect.ts'
import { coincidences } from './contacts.ts'

interface Facts {
  /** How many primitive cells the stated one holds. */
  readonly fold: number
}

export const cellNotPrimitive: Check<Facts> = {
  id: 'cell-not-primitive',
  severity: 'warning',
  needs: ['frames.atoms'],
  summary: 'The atoms repeat inside the stated cell.',
  why: 'Its k-fractions refer to a smaller zone than that of the crystal: paths and labels are other lines, and bands come folded.',
  wrong: 'lattice: {bravais: cP, a: 2.87}\natoms:\n  - Fe: [0, 0, 0]\n  - Fe: [1/2, 1/2, 1/2]\n',
  right: 'lattice: {bravais: cI, a: 2.87}\natoms:\n  - Fe: [0, 0, 0]\n',
  *run(context) {
    const { crystal, document } = context
    const { symmetry } = crystal
    const block = document.lattice
    if (!symmetry || !block || symmetry.translationsFold === 1 || coincidences(crystal).length > 0) return
    const { translationsFold: fold, primitivePositions } = symmetry
    yield {
      at: block.bravais?.at ?? block.vectors!.at,
      message: `The atoms repeat: the stated cell holds ${fold} primitive cells of ${count(primitivePositions.length, 'atom')}, and its zone is ${fold} times smaller than the crystal’s. Where like atoms differ (magnetic moments), give them names.`,
      facts: { fold },
      fixes: fixesFor(context, symmetry),
      // Points of the centred lattice say the same of its cell.
      hides: [{ rule: 'point-frame-suspect', subject: POINTS_OF_CENTRED_CELL }],
    }
  },
}

function fixesFor({ crystal, text }: Context, symmetry: Symmetry): Fix[] {
  const cell = primitiveCell(crystal, symmetry)
  const restated = cell && restate(crystal, text, cell)
  if (!restated) return []
  const stated = cell.bravais
    ? ` (${cell.bravais})`
    : cell.centring === 'P'
      ? ''
      : ` (centring ${cell.centring})`
  const edits = pointsAreThere(crystal, cell)
    ? restated.edits.filter(({ at }) => !isInPoints(at, crystal))
    : restated.edits
  return [{ title: `State the primitive cell${stated}, with all that refers to it`, safe: false, edits }]
}

/** The labels fit the centred lattice already, as the numbers stand: they are not to be carried over. */
function pointsAreThere(crystal: Crystal, { centring }: Cell): boolean {
  const { whole } = diagnose(crystal)
  return (
    whole?.kind === 'centring' &&
    whole.centring === centring &&
    whole.frame === crystal.document.frames.points
  )
}

const isInPoints = ([start, end]: Span, { document: { points } }: Crystal): boolean =>
  points !== undefined && start >= points.at[0] && end <= points.at[1]

/** The stated cell with a centring, where that is the crystal's lattice; else the lattice's own type, or its own vectors. */
function primitiveCell(crystal: Crystal, { primitiveFromStated, primitive }: Symmetry): Cell | undefined {
  const { lattice, document } = crystal
  const { vectors } = document.lattice!
  const { primitiveFromConventional, dimension } = lattice!
  const finer = multiply(primitiveFromStated, primitiveFromConventional)
  const centring = CENTRINGS.find(candidate => spansTheSame(candidate, finer))
  if (centring && vectors) return { change: IDENTITY, centring }
  const type = crystal.typeOf(primitive, dimension)
  if (centring) {
    const bravais = typeWith(crystal, centring)
    if (bravais) return { change: IDENTITY, centring, bravais }
  }
  if (vectors || !type?.bravais) return { change: finer, centring: 'P' }
  return {
    change: multiply(type.conventionalFromPrimitive, finer),
    centring: BRAVAIS[type.bravais].centring,
    bravais: type.bravais,
  }
}

/** Do the conventional axes with a centring span the lattice whose vectors are these combinations of them? */
function spansTheSame(centring: Centring, finer: Mat3): boolean {
  const { numerators, denominator } = CENTRING_TABLES[centring]
  const between = multiply(
    mapMatrix(numerators, x => x / denominator),
    inverse(finer),
  )
  return (
    Math.abs(Math.abs(determinant(between)) - 1) < WHOLE &&
    between.flat().every(x => Math.abs(x - Math.round(x)) < WHOLE)
  )
}

/** Rounding of whole numbers that went through a matrix or two. */
const WHOLE = 1e-6

/** The stated type's system with another centring, where there is such a type and its parameters agree. */
function typeWith({ document, build }: Crystal, centring: Centring): BravaisType | undefined {
  const stated = document.lattice!.bravais!.value
  const letter = BRAVAIS[stated].dimension === 2 ? centring.toLowerCase() : centring
  const candidate = `${stated[0]}${letter}`
  if (!(candidate in BRAVAIS) || !build.cell) return undefined
  const completed = completeCell(candidate as BravaisType, build.cell.cell)
  return 'cell' in completed && completed.contradictions.length === 0 ? (candidate as BravaisType) : undefined
}
