/**
 * Pure translations of a crystal inside its stated cell. The symmetry library takes minutes over a large supercell and
 * cannot be interrupted, so it is only ever handed the primitive cell that is found here.
 */
import { type Dimension, reduce } from './reduction.ts'
import {
  add,
  combine,
  determinant,
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

export interface AtomicCell {
  readonly dimension: Dimension
  /** Rows: vectors of the cell. Those beyond `dimension` are unit normals, along which nothing repeats. */
  readonly basis: Mat3
  /** Fractions of the rows (along a normal: a length), one triple an atom. */
  readonly positions: readonly Vec3[]
  /** The same number means the same kind of atom. */
  readonly species: readonly number[]
}

export interface PrimitiveCell extends AtomicCell {
  /** How many primitive cells the stated cell holds. */
  readonly fold: number
  /** In fractions of the stated rows, zero first, each component in [0, 1). */
  readonly translations: readonly Vec3[]
  /** Rows: primitive vectors as combinations of the stated ones, whole multiples of 1/fold. The identity for fold 1. */
  readonly primitiveFromStated: Mat3
  /** For each stated atom its index in `positions`. */
  readonly atomOf: readonly number[]
  /** The tolerance within which the translations close to a group, a length; at most the one asked for. */
  readonly tolerance: number
}

/**
 * Find the translations that map every atom onto an atom of its kind, and the primitive cell.
 *
 * Each is a whole multiple of 1/n where n divides the number of atoms of every kind, since translations act freely on
 * each kind. Candidates lead from one atom of the rarest kind to the others of that kind; what the translations found
 * so far generate is not tried again, so a supercell of thousands of atoms costs a few passes over them.
 *
 * Positions of the primitive cell are averages over the atoms that fall together. With fold 1 all stays untouched.
 * @param tolerance how far a mapped atom may be from its partner, a length. No two atoms may lie within twice of it.
 */
export function findPrimitiveCell(stated: AtomicCell, tolerance: number): PrimitiveCell {
  const { basis, change } = reduce(stated.basis, stated.dimension)
  const toReduced = inverse(change)
  const reduced: AtomicCell = {
    ...stated,
    basis,
    positions: stated.positions.map(x => combine(x, toReduced)),
  }
  for (let used = tolerance; ; used *= LOWERED) {
    const lattice = translationLattice(reduced, used)
    if (lattice.fold === 1) return unchanged(stated, used)
    const atoms = fallTogether(reduced, lattice, used)
    if (atoms) return inStatedCell(stated, reduced, change, lattice, atoms, used)
  }
}

/** Factor on the tolerance when what it lets through does not close to a group. */
const LOWERED = 0.5

function unchanged(stated: AtomicCell, tolerance: number): PrimitiveCell {
  const atomOf = stated.positions.map((_, i) => i)
  return { ...stated, fold: 1, translations: [[0, 0, 0]], primitiveFromStated: IDENTITY, atomOf, tolerance }
}

/** A lattice that contains all whole-number vectors: rows of whole numbers over one denominator, upper triangular. */
interface FineLattice {
  readonly rows: Mat3
  readonly denominator: number
  /** Points of it in one cell. */
  readonly fold: number
}

function translationLattice(cell: AtomicCell, tolerance: number): FineLattice {
  const { positions, species } = cell
  const counts = new Map<number, number>()
  for (const kind of species) counts.set(kind, (counts.get(kind) ?? 0) + 1)
  const common = [...counts.values()].reduce(gcd)
  let lattice: FineLattice = { rows: IDENTITY, denominator: 1, fold: 1 }
  if (common === 1) return lattice

  const [rarest] = [...counts].reduce((least, entry) => (entry[1] < least[1] ? entry : least))
  const orders = divisors(common)
  const grid = new PositionGrid(cell, tolerance)
  const first = species.indexOf(rarest)
  // The atom that refuted the last candidate, a displaced one perhaps, is likely to refute the next.
  const order = [...positions.keys()]
  const isTranslation = (t: Vec3): boolean => {
    const refuting = order.findIndex(j => grid.nearest(add(positions[j], t), species[j]) < 0)
    if (refuting > 0) order.unshift(...order.splice(refuting, 1))
    return refuting < 0
  }
  for (let i = first + 1; i < positions.length && lattice.fold < common; i++) {
    if (species[i] !== rarest) continue
    for (const t of exactValues(subtract(positions[i], positions[first]), orders, cell, 2 * tolerance)) {
      if (contains(lattice, t)) break
      if (!isTranslation(fractionsOf(t))) continue
      lattice = extend(lattice, t)
      break
    }
  }
  return lattice
}

/** Whole numbers over one denominator. */
interface Rational {
  readonly numerators: Vec3
  readonly denominator: number
}

const fractionsOf = ({ numerators, denominator }: Rational): Vec3 => scale(numerators, 1 / denominator)

/** The translations of finite order that a measured one may stand for, the lowest order first. */
function* exactValues(
  t: Vec3,
  orders: readonly number[],
  { basis, dimension }: AtomicCell,
  reach: number,
): Iterable<Rational> {
  for (const denominator of orders) {
    const numerators = t.map((x, i) => (i < dimension ? Math.round(x * denominator) : 0)) as unknown as Vec3
    const exact = { numerators, denominator }
    if (norm(combine(subtract(t, fractionsOf(exact)), basis)) <= reach) yield exact
  }
}

function contains({ rows, denominator }: FineLattice, t: Rational): boolean {
  const rest = t.numerators.map(p => (p * denominator) / t.denominator)
  if (!rest.every(Number.isInteger)) return false
  for (let i = 0; i < 3; i++) {
    const times = rest[i] / rows[i][i]
    if (!Number.isInteger(times)) return false
    for (let j = i; j < 3; j++) rest[j] -= times * rows[i][j]
  }
  return true
}

function extend({ rows, denominator }: FineLattice, t: Rational): FineLattice {
  const common = (denominator / gcd(denominator, t.denominator)) * t.denominator
  const finer = upperTriangular([
    ...rows.map(row => scale(row, common / denominator)),
    scale(t.numerators, common / t.denominator),
  ])
  return { rows: finer, denominator: common, fold: Math.round(common ** 3 / determinant(finer)) }
}

/** Rows that span the same whole-number lattice, upper triangular with a positive diagonal (Hermite normal form). */
function upperTriangular(rows: readonly Vec3[]): Mat3 {
  const left = rows.map(row => [...row])
  const done: number[][] = []
  for (let column = 0; column < 3; column++) {
    for (;;) {
      const active = left.filter(row => row[column] !== 0)
      const pivot = active.reduce((least, row) =>
        Math.abs(row[column]) < Math.abs(least[column]) ? row : least,
      )
      if (active.length === 1) {
        left.splice(left.indexOf(pivot), 1)
        done.push(pivot[column] < 0 ? pivot.map(x => -x) : pivot)
        break
      }
      for (const row of active) {
        if (row === pivot) continue
        const times = Math.round(row[column] / pivot[column])
        for (let j = column; j < 3; j++) row[j] -= times * pivot[j]
      }
    }
    // Above the diagonal too, or the numbers would grow from call to call.
    for (const row of done.slice(0, column)) {
      const times = Math.floor(row[column] / done[column][column])
      for (let j = column; j < 3; j++) row[j] -= times * done[column][j]
    }
  }
  return done as unknown as Mat3
}

/** The distinct translations in one cell, zero first. */
function translationsOf({ rows, denominator }: FineLattice): Vec3[] {
  const times = rows.map((row, i) => denominator / row[i])
  const all: Vec3[] = []
  for (let i = 0; i < times[0]; i++)
    for (let j = 0; j < times[1]; j++)
      for (let k = 0; k < times[2]; k++) all.push(scale(combine([i, j, k], rows), 1 / denominator))
  return all
}

interface Averaged {
  readonly atomOf: readonly number[]
  /** Fractions of the cell that was searched. */
  readonly positions: readonly Vec3[]
  readonly species: readonly number[]
}

/** Average the atoms that the translations carry into each other; undefined where one is farther off than allowed. */
function fallTogether(cell: AtomicCell, lattice: FineLattice, tolerance: number): Averaged | undefined {
  const translations = translationsOf(lattice)
  const grid = new PositionGrid(cell, 2 * tolerance)
  const atomOf = new Array<number>(cell.positions.length).fill(-1)
  const positions: Vec3[] = []
  const species: number[] = []
  for (const [i, x] of cell.positions.entries()) {
    if (atomOf[i] >= 0) continue
    const kind = cell.species[i]
    const offsets: Vec3[] = []
    for (const t of translations) {
      const image = add(x, t)
      const j = grid.nearest(image, kind)
      if (j < 0 || atomOf[j] >= 0) return undefined
      atomOf[j] = positions.length
      offsets.push(nearestImage(subtract(cell.positions[j], image), cell.dimension))
    }
    const mean = scale(offsets.reduce(add), 1 / offsets.length)
    if (offsets.some(offset => norm(combine(subtract(offset, mean), cell.basis)) > tolerance))
      return undefined
    positions.push(add(x, mean))
    species.push(kind)
  }
  return { atomOf, positions, species }
}

function inStatedCell(
  stated: AtomicCell,
  reduced: AtomicCell,
  change: Mat3,
  lattice: FineLattice,
  atoms: Averaged,
  tolerance: number,
): PrimitiveCell {
  const { dimension } = stated
  const { fold } = lattice
  const fine = mapMatrix(lattice.rows, x => x / lattice.denominator)
  const short = reduce(multiply(fine, reduced.basis), dimension)
  const sameHand = determinant(short.basis) * determinant(stated.basis) > 0
  const primitiveFromReduced = multiply(
    sameHand ? short.change : multiply(OTHER_HAND[dimension], short.change),
    fine,
  )
  const primitiveFromStated = mapMatrix(
    multiply(primitiveFromReduced, change),
    x => Math.round(x * fold) / fold,
  )
  const toPrimitive = inverse(primitiveFromReduced)
  return {
    dimension,
    basis: multiply(primitiveFromStated, stated.basis),
    positions: atoms.positions.map(x => combine(x, toPrimitive)),
    species: atoms.species,
    fold,
    translations: translationsOf(lattice).map(t => intoCell(combine(t, change), dimension, fold)),
    primitiveFromStated,
    atomOf: atoms.atomOf,
    tolerance,
  }
}

/** What turns a basis into one of the other hand and leaves its angles as they are. */
const OTHER_HAND: Record<Dimension, Mat3> = {
  1: [
    [-1, 0, 0],
    [0, 1, 0],
    [0, 0, 1],
  ],
  2: [
    [0, 1, 0],
    [1, 0, 0],
    [0, 0, 1],
  ],
  3: [
    [-1, 0, 0],
    [0, -1, 0],
    [0, 0, -1],
  ],
}

/** Whole multiples of 1/fold, each in [0, 1). */
function intoCell(t: Vec3, dimension: Dimension, fold: number): Vec3 {
  const wrapped = t.map((x, i) =>
    i < dimension ? (((Math.round(x * fold) % fold) + fold) % fold) / fold : 0,
  )
  return wrapped as unknown as Vec3
}

/** A difference of fractions without its whole parts along the periodic directions. */
export function nearestImage(x: Vec3, dimension: Dimension): Vec3 {
  return [
    x[0] - Math.round(x[0]),
    dimension > 1 ? x[1] - Math.round(x[1]) : x[1],
    dimension > 2 ? x[2] - Math.round(x[2]) : x[2],
  ]
}

/**
 * Finds the atoms near a place in constant time. The basis must be reduced: in a skewed one the nearest image need not
 * be the one with the smallest fractions.
 */
export class PositionGrid {
  readonly #bins: Vec3
  /** How far a reach extends along each axis, in fractions. */
  readonly #margin: Vec3
  /** Linked lists: the first atom of each bin, and for each atom the next one in its bin. */
  readonly #first: Int32Array
  readonly #next: Int32Array

  /** @param reach the largest distance that will be asked about, a length. */
  constructor(
    private readonly cell: AtomicCell,
    private readonly reach: number,
  ) {
    const { basis, dimension, positions } = cell
    const columns = transpose(inverse(basis))
    const most = Math.ceil(positions.length ** (1 / dimension))
    this.#margin = columns.map(column => reach * norm(column)) as unknown as Vec3
    this.#bins = this.#margin.map((margin, i) =>
      i < dimension ? Math.max(1, Math.min(most, Math.floor(1 / (2 * margin)))) : 1,
    ) as unknown as Vec3
    this.#first = new Int32Array(this.#bins[0] * this.#bins[1] * this.#bins[2]).fill(-1)
    this.#next = new Int32Array(positions.length).fill(-1)
    for (const [i, x] of positions.entries()) {
      const bin = this.#index(this.#bin(x[0], 0), this.#bin(x[1], 1), this.#bin(x[2], 2))
      this.#next[i] = this.#first[bin]
      this.#first[bin] = i
    }
  }

  /** The atom nearest to a place within reach, of one kind where a kind is given, other than `except`; else −1. */
  nearest(x: Vec3, kind?: number, except = -1): number {
    const { basis, dimension, positions, species } = this.cell
    let best = -1
    let least = this.reach
    for (const i of this.#around(x, 0))
      for (const j of this.#around(x, 1))
        for (const k of this.#around(x, 2))
          for (let atom = this.#first[this.#index(i, j, k)]; atom >= 0; atom = this.#next[atom]) {
            if (atom === except || (kind !== undefined && species[atom] !== kind)) continue
            const away = norm(combine(nearestImage(subtract(positions[atom], x), dimension), basis))
            if (away > least) continue
            least = away
            best = atom
          }
    return best
  }

  #bin(x: number, axis: 0 | 1 | 2): number {
    const bins = this.#bins[axis]
    return Math.min(bins - 1, Math.floor((x - Math.floor(x)) * bins))
  }

  #around(x: Vec3, axis: 0 | 1 | 2): readonly number[] {
    const low = this.#bin(x[axis] - this.#margin[axis], axis)
    const high = this.#bin(x[axis] + this.#margin[axis], axis)
    return low === high ? [low] : [low, high]
  }

  #index(i: number, j: number, k: number): number {
    return (i * this.#bins[1] + j) * this.#bins[2] + k
  }
}

const gcd = (p: number, q: number): number => (q === 0 ? Math.abs(p) : gcd(q, p % q))

/** Divisors other than 1, ascending. */
function divisors(n: number): number[] {
  const all: number[] = []
  for (let d = 2; d <= n; d++) if (n % d === 0) all.push(d)
  return all
}
