/**
 * Which of a lattice's cells a book means: the cells that meet the conditions of one of its variations, and among them
 * the one nearest to the user's own vectors.
 */
import { BRAVAIS, type BravaisType, CENTRING_TABLES } from '../crystal/bravais.ts'
import { cellParameters } from '../crystal/lattice.ts'
import { type LatticeType, symmetriseBasis } from '../crystal/lattice-type.ts'
import type { Dimension } from '../crystal/reduction.ts'
import {
  determinant,
  IDENTITY,
  inverse,
  type Mat3,
  mapMatrix,
  multiply,
  norm,
  transpose,
} from '../crystal/vector.ts'
import { type CompiledVariation, compiled, type Variation } from './book.ts'
import { candidateCells, ROUNDING } from './cells.ts'
import type { Formula, Values } from './formula.ts'

export interface IdealLattice {
  readonly bravais: BravaisType
  readonly dimension: Dimension
  /** The user's vectors with the metric averaged over the holohedry. */
  readonly basis: Mat3
  /** The usual conventional axes, whole numbers on `basis`. */
  readonly axes: Mat3
  /** On columns of fractions of `basis`. */
  readonly holohedry: readonly Mat3[]
  readonly tolerance: number
}

export function idealLattice(
  type: LatticeType,
  bravais: BravaisType,
  primitive: Mat3,
  dimension: Dimension,
  tolerance: number,
): IdealLattice {
  return {
    bravais,
    dimension,
    basis: symmetriseBasis(primitive, type.holohedry, dimension),
    axes: type.conventionalFromPrimitive,
    holohedry: type.holohedry,
    tolerance,
  }
}

/** A conventional cell that a book may choose. */
export interface Cell {
  /** Whole numbers on the user's vectors. */
  readonly axes: Mat3
  /** The numbers of CELL_NAMES. */
  readonly values: Values
  /** Below this, a length, the vectors of two cells are alike. */
  readonly step: number
  /** The numbers of the cells that differ by such a step in one length or angle. */
  readonly shifted: () => readonly Values[]
}

/** A cell with a variation whose conditions it may meet. */
export interface Choice {
  readonly variation: CompiledVariation
  readonly cell: Cell
  /** The book's primitive vectors, whole numbers on the user's. */
  readonly basis: Mat3
  /** The variation is that of a border. */
  readonly border: boolean
  readonly reduced: boolean
}

/** The cell that a book means and the variation that it belongs to. */
export function chooseCell(entries: readonly Variation[], lattice: IdealLattice): Choice {
  const cells = new Map<string, readonly Cell[]>()
  const pairs = entries.flatMap(entry => {
    const setting = `${entry.uniqueAxis}/${entry.axes}`
    if (!cells.has(setting)) cells.set(setting, cellsFor(entry, lattice))
    const variation = compiled(entry)
    return cells.get(setting)!.flatMap(cell => {
      const exact = multiply(variation.primitive, cell.axes)
      const basis = mapMatrix(exact, x => Math.round(x) + 0)
      return isBasis(exact, basis) ? [{ variation, cell, basis }] : []
    })
  })
  const met = pairs.filter(({ variation, cell }) => missOf(variation, cell) <= cell.step)
  // The variations of a book leave no gap; should rounding open one, the cell that misses least is taken.
  const admissible = (
    met.length > 0 ? met : least(pairs, ({ variation, cell }) => missOf(variation, cell))
  ).map(
    ({ variation, cell, basis }): Choice => ({
      variation,
      cell,
      basis,
      border: variation.zero.length > 0,
      reduced: variation.reducedCell.every(condition => isAbove(condition, cell)),
    }),
  )
  const reduced = admissible.filter(choice => choice.reduced)
  // Where a centring allows no cell that is reduced in the book's sense, the formulas hold in the smallest one.
  let left = reduced.length > 0 ? reduced : least(admissible, sizeOf)
  left = least(left, ({ border }) => (border ? 0 : 1))
  left = ownCells(left, lattice)
  left = least(left, sizeOf)
  for (const i of [0, 1, 2]) left = least(left, choice => lengthsOf(choice)[i])
  return left[0]
}

/**
 * Borders between variations are no symmetries: the formulas of either side hold however near it is. So a lattice is on a
 * border only where the zone itself takes the corners on its two sides for one; in parts of the longest axis.
 */
const ON_BORDER = 1e-7

function cellsFor(entry: Variation, { bravais, axes, basis }: IdealLattice): Cell[] {
  const measure = bravais === 'aP' ? withReciprocal : (cell: readonly number[]) => cell
  return candidateCells(entry, bravais, axes, basis).map(candidate => {
    const { a, b, c, alpha, beta, gamma } = cellParameters(multiply(candidate, basis))
    const cell = [a, b, c, radians(alpha), radians(beta), radians(gamma)]
    const step = ON_BORDER * Math.max(a, b, c)
    let shifted: readonly Values[] | undefined
    return {
      axes: candidate,
      values: measure(cell),
      step,
      shifted: () => (shifted ??= shiftedCells(cell, step).map(measure)),
    }
  })
}

/** The book's primitive vectors are a basis of the lattice: whole numbers with determinant ±1. */
const isBasis = (exact: Mat3, rounded: Mat3): boolean =>
  Math.abs(determinant(rounded)) === 1 &&
  exact.every((row, i) => row.every((x, j) => Math.abs(x - rounded[i][j]) < 0.1))

/** Those with the least value of `key`, differences by rounding left aside. */
function least<T>(items: readonly T[], key: (item: T) => number): readonly T[] {
  if (items.length < 2) return items
  const keys = items.map(key)
  const limit = Math.min(...keys)
  return items.filter((_, i) => keys[i] <= limit + ROUNDING * Math.abs(limit))
}

/** The user's vectors are the book's primitive ones. */
const isOwnPrimitive = ({ basis }: Choice, lattice: IdealLattice): boolean =>
  hasSameMetric(basis, lattice.basis)

/** The user's vectors follow from the book's axes as those of a lattice file do. */
const hasOwnAxes = ({ cell, variation }: Choice, lattice: IdealLattice): boolean =>
  hasSameMetric(usualPrimitive(cell.axes, variation), lattice.basis)

/**
 * Of several cells those that are the user's own, if any is. The vectors of one cell may be another's by other names of
 * the axes: then the way they lie in space tells which is meant, and where it does not, the axes are left as they are.
 */
function ownCells(choices: readonly Choice[], lattice: IdealLattice): readonly Choice[] {
  const own = choices.filter(choice => isOwnPrimitive(choice, lattice) || hasOwnAxes(choice, lattice))
  if (own.length === 0) return choices
  const inPlace = least(own, choice => -axesInPlace(choice, lattice))
  return least(inPlace, choice => (hasOwnAxes(choice, lattice) ? 0 : 1))
}

/** How many of the book's a, b, c point along x, y, z, as tables and files have them. */
function axesInPlace({ cell }: Choice, { basis }: IdealLattice): number {
  return multiply(cell.axes, basis).filter((axis, i) => Math.abs(axis[i]) > (1 - ROUNDING) * norm(axis))
    .length
}

/** The primitive cell that a lattice file makes of these conventional axes. */
function usualPrimitive(axes: Mat3, { entry }: CompiledVariation): Mat3 {
  if (entry.axes === 'rhombohedral') return axes
  const { numerators, denominator } = CENTRING_TABLES[BRAVAIS[entry.bravais].centring]
  return mapMatrix(multiply(numerators, axes), x => x / denominator)
}

function hasSameMetric(change: Mat3, basis: Mat3): boolean {
  const own = multiply(basis, transpose(basis))
  const changed = multiply(multiply(change, own), transpose(change))
  const size = Math.max(own[0][0], own[1][1], own[2][2])
  return own.every((row, i) => row.every((x, j) => Math.abs(x - changed[i][j]) < SAME_METRIC * size))
}
/** The metric is idealised, so only rounding tells two equal ones apart. */
const SAME_METRIC = 1e-8

/** The position of g11 in CELL_NAMES. */
const G11 = 9

const isTriclinic = ({ variation }: Choice): boolean => variation.entry.bravais === 'aP'

/** The lengths by which cells are put in order: of a triclinic cell the reciprocal ones, which its books reduce. */
const lengthsOf = (choice: Choice): number[] => {
  const first = isTriclinic(choice) ? G11 : 0
  return [0, 1, 2].map(i => choice.cell.values[first + i])
}

const sizeOf = (choice: Choice): number =>
  lengthsOf(choice).reduce((sum, x) => sum + (isTriclinic(choice) ? x : x * x), 0)

const radians = (degrees: number): number => (degrees * Math.PI) / 180

/** Add the quantities of the reciprocal cell to a, b, c, α, β, γ. */
function withReciprocal(cell: readonly number[]): number[] {
  const [a, b, c, alpha, beta, gamma] = cell
  const g = inverse([
    [a * a, a * b * Math.cos(gamma), a * c * Math.cos(beta)],
    [a * b * Math.cos(gamma), b * b, b * c * Math.cos(alpha)],
    [a * c * Math.cos(beta), b * c * Math.cos(alpha), c * c],
  ])
  const angleBetween = (i: number, j: number) => Math.acos(g[i][j] / Math.sqrt(g[i][i] * g[j][j]))
  return [
    ...cell,
    angleBetween(1, 2),
    angleBetween(0, 2),
    angleBetween(0, 1),
    g[0][0],
    g[1][1],
    g[2][2],
    g[1][2],
    g[0][2],
    g[0][1],
  ]
}

/** How far the vectors of a cell must shift, a length, before a condition turns to zero; negative below it. */
function distanceFromZero(condition: Formula, { values, step, shifted }: Cell): number {
  const value = condition(values)
  return (step * value) / shifted().reduce((sum, other) => sum + Math.abs(condition(other) - value), 0)
}

const isAbove = (condition: Formula, cell: Cell): boolean =>
  condition(cell.values) >= 0 || distanceFromZero(condition, cell) >= -cell.step

/** By how much, a length, a cell misses the conditions of a variation at the worst. */
function missOf({ positive, zero }: CompiledVariation, cell: Cell): number {
  const below = positive.filter(condition => condition(cell.values) < 0)
  return Math.max(
    0,
    ...below.map(condition => -distanceFromZero(condition, cell)),
    ...zero.map(condition => Math.abs(distanceFromZero(condition, cell))),
  )
}

/** A change of the cell by no more than the tolerance leads to another variation or another reduced cell. */
export function isBorderline({ variation, cell, border }: Choice, tolerance: number): boolean {
  const conditions = [...variation.positive, ...variation.reducedCell]
  const reach = Math.max(tolerance, cell.step)
  return border || conditions.some(condition => Math.abs(distanceFromZero(condition, cell)) <= reach)
}

/** An angle changes most by a shift at the end of its shorter side. */
function shiftedCells(cell: readonly number[], step: number): number[][] {
  const [a, b, c] = cell
  const turns = [Math.min(b, c), Math.min(a, c), Math.min(a, b)].map(shorter => step / shorter)
  return [step, step, step, ...turns].map((change, i) => cell.map((x, j) => (i === j ? x + change : x)))
}

/**
 * One of the images of a cell under the holohedry, which all get the same labels: the one that is the user's cell, else
 * whose axes are the user's or nearest to them.
 */
export function preferredImage(choice: Choice, lattice: IdealLattice): { basis: Mat3; axes: Mat3 } {
  const { basis, cell, variation } = choice
  const images = lattice.holohedry.map(W => {
    const turn = transpose(W)
    const image = { basis: multiply(basis, turn), axes: multiply(cell.axes, turn) }
    return {
      ...image,
      primitive: farness(image.basis),
      usual: farness(usualPrimitive(image.axes, variation)),
    }
  })
  const first = isOwnPrimitive(choice, lattice) ? 'primitive' : 'usual'
  const second = first === 'primitive' ? 'usual' : 'primitive'
  const nearer = (p: (typeof images)[number], q: (typeof images)[number]): number =>
    p[first] - q[first] || p[second] - q[second] || firstDifference(q.basis, p.basis)
  return tidyCell(images.reduce((best, image) => (nearer(image, best) < 0 ? image : best)))
}

const tidyCell = ({ basis, axes }: { basis: Mat3; axes: Mat3 }) => ({
  basis: mapMatrix(basis, x => x + 0),
  axes: mapMatrix(axes, x => x + 0),
})

/** How far a matrix is from the unit matrix. */
const farness = (m: Mat3): number =>
  m.reduce((sum, row, i) => sum + row.reduce((s, x, j) => s + (x - IDENTITY[i][j]) ** 2, 0), 0)

const firstDifference = (m: Mat3, n: Mat3): number => {
  const [p, q] = [m.flat(), n.flat()]
  const at = p.findIndex((x, i) => x !== q[i])
  return at < 0 ? 0 : p[at] - q[at]
}
