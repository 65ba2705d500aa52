/** From the `lattice` block to a `Lattice`, or to the reason why there is none. */
import {
  BRAVAIS,
  type BravaisType,
  type CompletedCell,
  completeCell,
  type Contradiction,
} from '../crystal/bravais.ts'
import {
  type Dimension,
  type Lattice,
  type LatticeFault,
  latticeFromCell,
  latticeFromVectors,
} from '../crystal/lattice.ts'
import { norm, type Vec3 } from '../crystal/vector.ts'
import type { LatticeDocument, ParameterName, VectorValue } from '../format/model.ts'

export interface LatticeBuild {
  readonly dimension?: Dimension
  readonly lattice?: Lattice
  /** Why there is no lattice although everything could be read. */
  readonly fault?: LatticeFault
  /** Parameters that the type needs and the file does not state. */
  readonly missing?: readonly ParameterName[]
  /** Parameters that the type does not allow as stated. */
  readonly contradictions?: readonly Contradiction[]
  readonly cell?: CompletedCell
}

export function buildLattice(document: LatticeDocument): LatticeBuild {
  const block = document.lattice
  if (!block) return {}
  return block.vectors ? fromVectors(document, block.vectors.rows) : fromType(document)
}

function fromVectors(document: LatticeDocument, rows: readonly (VectorValue | undefined)[]): LatticeBuild {
  if (rows.length < 1 || rows.length > 3) return {}
  const dimension = rows.length as Dimension
  const vectors = rows.map(row => vectorInSpace(row, dimension))
  if (vectors.some(vector => !vector)) return { dimension }
  const centring = document.lattice?.centring?.value ?? 'P'
  const built = withinReach(latticeFromVectors(vectors as Vec3[], centring))
  return 'fault' in built ? { dimension, fault: built } : { dimension, lattice: built }
}

/**
 * Vectors that differ more than this in length are no crystal's: beyond it double numbers do not hold both, and whoever
 * counts the cells along the long one never ends.
 */
const MOST_UNEQUAL = 1e6

function withinReach(built: Lattice | LatticeFault): Lattice | LatticeFault {
  if ('fault' in built) return built
  const lengths = built.conventional.slice(0, built.dimension).map(norm)
  const [least, most] = [Math.min(...lengths), Math.max(...lengths)]
  if (most <= MOST_UNEQUAL * least) return built
  // The odd one out is the one farther from the middle of the scale.
  const middle = Math.exp(lengths.reduce((sum, x) => sum + Math.log(x), 0) / lengths.length)
  return { fault: 'lengths', vectors: [lengths.indexOf(most / middle > middle / least ? most : least)] }
}

/** Rows of a plane lattice lie in xy, a chain's along x; components that are left out are 0. */
function vectorInSpace(row: VectorValue | undefined, dimension: Dimension): Vec3 | undefined {
  if (!row || row.items.length < dimension || row.items.length > 3) return undefined
  const numbers = [0, 0, 0]
  for (const [i, item] of row.items.entries()) {
    if (!item || (i >= dimension && item.value !== 0)) return undefined
    numbers[i] = item.value
  }
  return numbers as unknown as Vec3
}

function fromType(document: LatticeDocument): LatticeBuild {
  const block = document.lattice!
  const type = block.bravais?.value
  if (!type) return {}
  const { dimension, centring } = BRAVAIS[type]
  const given = Object.fromEntries(
    Object.entries(block.parameters).map(([name, number]) => [name, number!.value]),
  )
  const completed = completeCell(type, given)
  if ('missing' in completed) return { dimension, missing: completed.missing }
  if ('miss' in completed) return { dimension, fault: { fault: 'angles', miss: completed.miss } }
  const built = withinReach(latticeFromCell(completed.cell, centring, dimension))
  const { contradictions } = completed
  if ('fault' in built) return { dimension, fault: built, contradictions, cell: completed }
  return { dimension, lattice: built, contradictions, cell: completed }
}

/** The one-face-centred types are one type, whichever face it is. */
export const anyFace = (type: BravaisType): BravaisType =>
  /^o[AB]$/.test(type) ? 'oC' : /^m[ABI]$/.test(type) ? 'mC' : type

/** Unequal enough that no lattice of a type keeps a symmetry that the type does not ask for. */
const FACTORS: Readonly<Record<string, number>> = { a: 1, b: 1.0713, c: 1.1547 }
const TURNS: Readonly<Record<string, number>> = { alpha: 2.3, beta: 3.1, gamma: 4.7 }

/** A lattice of a type with its free parameters shifted a little: it has the type's own symmetry and no more. */
export function distortedLattice(
  type: BravaisType,
  { cell, uniqueAxis }: CompletedCell,
): Lattice | undefined {
  const { free, centring, dimension } = BRAVAIS[type]
  const oblique = uniqueAxis && ({ a: 'alpha', b: 'beta', c: 'gamma' } as const)[uniqueAxis]
  const names = free.find(set => !oblique || set.includes(oblique)) ?? free[0]
  const shifted = names.map(name => [
    name,
    name in FACTORS ? cell[name] * FACTORS[name] : cell[name] + TURNS[name],
  ])
  const completed = completeCell(type, Object.fromEntries(shifted))
  if (!('cell' in completed)) return undefined
  const built = latticeFromCell(completed.cell, centring, dimension)
  return 'fault' in built ? undefined : built
}
