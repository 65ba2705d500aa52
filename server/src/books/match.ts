/**
 * The one matcher that carries a book's cell into the user's lattice: a whole-numbered change of basis turns one metric
 * into the other, so that any setting and any choice of primitive vectors gets the book's labels in its own fractions.
 */
import { BRAVAIS, type BravaisType, CENTRING_TABLES } from '../crystal/bravais.ts'
import type { CellParameters } from '../crystal/cell.ts'
import { cellParameters, type LatticeType, latticeType, symmetriseBasis } from '../crystal/lattice-type.ts'
import { type Dimension, reduce } from '../crystal/reduction.ts'
import {
  add,
  apply,
  determinant,
  dot,
  IDENTITY,
  inverse,
  type Mat3,
  mapMatrix,
  multiply,
  norm,
  scale,
  tidy,
  transpose,
  type Vec3,
} from '../crystal/vector.ts'
import { type CompiledVariation, compiled, type Variation } from './book.ts'
import { candidateCells, ROUNDING } from './cells.ts'
import {
  CELL_NAMES,
  combineForms,
  evaluateForm,
  type Formula,
  formText,
  fractionText,
  isFixed,
  type LinearForm,
  type Values,
} from './formula.ts'
import { type BookName, BOOKS } from './index.ts'
import { PLANE_LATTICES } from './plane-lattices.ts'

export interface BookPoint {
  /** As in a path: `X`, `Γ`, `Σ1`, `T'`. */
  readonly label: string
  /** Fractions of the user's primitive reciprocal vectors. */
  readonly fraction: Vec3
  /** The same as `p/q`, where no component depends on the shape of the cell. */
  readonly exact?: readonly [string, string, string]
  readonly parameterDependent: boolean
  /** The same in the parameters of the match, e.g. `(1/2, 1/2 + ζ, ζ)`, where a component depends on them. */
  readonly formula?: string
  /** By how much the fractions change with each parameter of the match, in its order. */
  readonly slopes: readonly Vec3[]
  /** Labels of this book that name an equivalent point, by a reciprocal vector and the holohedry. */
  readonly equivalentTo: readonly string[]
}

/** A symmetry line of the book; its points are from + t (to − from), 0 ≤ t ≤ 1. */
export interface BookLine {
  readonly label: string
  readonly from: Vec3
  /** The named end, else where the line leaves the first zone. */
  readonly to: Vec3
  readonly ends?: readonly [string, string]
}

export interface BookMatch {
  /** A book's name, or `plane-lattices`, or `chain`. */
  readonly book: string
  readonly source: string
  /** The lattice type in the book's setting; a chain has none. */
  readonly bravais?: BravaisType
  /** The variation's condition in words. */
  readonly condition: string
  /** Whole numbers: the book's primitive vectors = this · the user's primitive vectors (rows). */
  readonly bookFromPrimitive: Mat3
  /** Whole numbers: the book's a, b, c on the user's primitive vectors (rows). */
  readonly axesFromPrimitive: Mat3
  /** The book's conventional cell, idealised to the lattice type; angles in degrees. */
  readonly cell: CellParameters
  /** The numbers on which the coordinates of points depend, with the book's formula in a, b, c, α, β, γ. */
  readonly parameters: readonly { readonly name: string; readonly value: number; readonly formula: string }[]
  /** An inequality of the variation is an equality within the tolerance: a small change of the cell leads to another. */
  readonly borderline: boolean
  readonly points: readonly BookPoint[]
  /** Empty where the book recommends no path. */
  readonly path: readonly (readonly string[])[]
  readonly lines: readonly BookLine[]
  readonly doubts: readonly string[]
  /** The holohedry, on columns of primitive k-fractions. */
  readonly holohedry: readonly Mat3[]
}

export interface MatchOptions {
  /** A length: lattices this near to a higher symmetry have it, those this near to a border are borderline. */
  readonly tolerance: number
  /** The crystal's, where a book tells groups of one lattice type apart; the number decides more cases. */
  readonly spaceGroup?: number
  readonly pointGroup?: string
  /** The type of `primitive`, where it is known already. */
  readonly latticeType?: LatticeType
}

/**
 * The labels of a book in a user's lattice.
 *
 * Where the book leaves a choice, the user's own vectors are kept if they are a cell of the book, or the user's own
 * conventional axes; otherwise the shortest axes come first. How the crystal is turned in space matters only for vectors
 * that are a cell of the book under two namings of the axes. In two dimensions there is one book of plane lattices, in one the points Γ and X.
 * @param primitive the user's vectors, one a row; rows beyond `dimension` are unit normals.
 * @returns undefined for vectors that are no lattice.
 */
export function matchBook(
  book: BookName,
  primitive: Mat3,
  dimension: Dimension,
  options: MatchOptions,
): BookMatch | undefined {
  const type = options.latticeType ?? latticeType(primitive, dimension, options.tolerance)
  if (!type) return undefined
  if (dimension === 1 || !type.bravais) return chain(primitive)
  const { id, source, variations } = dimension === 2 ? PLANE_LATTICES : BOOKS[book]
  const lattice = idealLattice(type, type.bravais, primitive, dimension, options.tolerance)
  const choice = chooseCell(entriesFor(variations, type.bravais, options), lattice)
  return { book: id, source, ...carry(choice, lattice) }
}

const CHAIN_SOURCE = 'common practice for chains'

function chain(primitive: Mat3): BookMatch {
  const point = (label: string, fraction: Vec3, exact: [string, string, string]): BookPoint => ({
    label,
    fraction,
    exact,
    parameterDependent: false,
    slopes: [],
    equivalentTo: [],
  })
  return {
    book: 'chain',
    source: CHAIN_SOURCE,
    condition: 'chain',
    bookFromPrimitive: IDENTITY,
    axesFromPrimitive: IDENTITY,
    cell: cellParameters(primitive),
    parameters: [],
    borderline: false,
    points: [point('Γ', [0, 0, 0], ['0', '0', '0']), point('X', [1 / 2, 0, 0], ['1/2', '0', '0'])],
    path: [['Γ', 'X']],
    lines: [],
    doubts: [],
    holohedry: [IDENTITY, [[-1, 0, 0], IDENTITY[1], IDENTITY[2]]],
  }
}

/** One-face-centred types are one lattice type in several settings, and so is the body-centred monoclinic one. */
const SAME_TYPE: Partial<Record<BravaisType, BravaisType>> = {
  oA: 'oC',
  oB: 'oC',
  mA: 'mC',
  mB: 'mC',
  mI: 'mC',
}
const typeOf = (bravais: BravaisType): BravaisType => SAME_TYPE[bravais] ?? bravais

/** The variations of a lattice type; those for certain groups where the crystal's is one of them, else the others. */
function entriesFor(
  variations: readonly Variation[],
  bravais: BravaisType,
  { spaceGroup, pointGroup }: MatchOptions,
): readonly Variation[] {
  const entries = variations.filter(entry => typeOf(entry.bravais) === typeOf(bravais))
  const own = entries.filter(({ groups }) => {
    if (!groups) return false
    if (spaceGroup !== undefined) return groups.numbers.includes(spaceGroup)
    return pointGroup !== undefined && groups.pointGroups.includes(pointGroup)
  })
  return own.length > 0 ? own : entries.filter(({ groups }) => !groups)
}

interface IdealLattice {
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

function idealLattice(
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
interface Cell {
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
interface Choice {
  readonly variation: CompiledVariation
  readonly cell: Cell
  /** The book's primitive vectors, whole numbers on the user's. */
  readonly basis: Mat3
  /** The variation is that of a border. */
  readonly border: boolean
  readonly reduced: boolean
}

function chooseCell(entries: readonly Variation[], lattice: IdealLattice): Choice {
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

function isBorderline({ variation, cell, border }: Choice, tolerance: number): boolean {
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

/** Carry points, path and lines of the chosen cell into the user's fractions. */
function carry(choice: Choice, lattice: IdealLattice): Omit<BookMatch, 'book' | 'source'> {
  const { variation, cell } = choice
  const { entry, parameterNames } = variation
  const { basis, axes } = preferredImage(choice, lattice)
  const all = Array.from(cell.values)
  while (all.length < CELL_NAMES.length) all.push(Number.NaN)
  for (const parameter of variation.parameters) all.push(parameter(all))
  const parameterValues = all.slice(all.length - parameterNames.length)
  // κ = M⁻¹ κ′ where the rows of M are the book's vectors on the user's.
  const back = mapMatrix(inverse(basis), x => Math.round(x) + 0)
  const carried = (forms: readonly LinearForm[]) => back.map(row => combineForms(row, forms))
  const holohedry = lattice.holohedry.map(transpose)
  const placed = variation.points.map(({ label, forms }) =>
    placePoint(label, carried(forms), parameterNames, parameterValues),
  )
  const points = withEquivalents(placed, holohedry, lattice)
  return {
    bravais: entry.bravais,
    condition: entry.condition,
    bookFromPrimitive: basis,
    axesFromPrimitive: axes,
    cell: cellParameters(multiply(axes, lattice.basis)),
    parameters: parameterNames.map((name, i) => ({
      name,
      value: parameterValues[i],
      formula: printed(entry.parameters![name]),
    })),
    borderline: isBorderline(choice, lattice.tolerance),
    points,
    path: variation.path,
    lines: placeLines(variation, carried, lattice),
    doubts: entry.doubts ?? [],
    holohedry,
  }
}

const printed = (formula: string): string =>
  formula.replaceAll('^2', '²').replaceAll('-', '−').replaceAll('*', ' ')

/**
 * One of the images of a cell under the holohedry, which all get the same labels: the one that is the user's cell, else
 * whose axes are the user's or nearest to them.
 */
function preferredImage(choice: Choice, lattice: IdealLattice): { basis: Mat3; axes: Mat3 } {
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

type PlacedPoint = Omit<BookPoint, 'equivalentTo'>

function placePoint(
  label: string,
  forms: readonly LinearForm[],
  names: readonly string[],
  values: readonly number[],
): PlacedPoint {
  const fraction = forms.map(form => evaluateForm(form, values) + 0) as unknown as Vec3
  const parameterDependent = !forms.every(isFixed)
  const slopes = names.map((_, i) => forms.map(form => form.coefficients[i]) as unknown as Vec3)
  if (!parameterDependent)
    return {
      label,
      fraction,
      exact: forms.map(fractionText) as [string, string, string],
      parameterDependent,
      slopes,
    }
  return {
    label,
    fraction,
    parameterDependent,
    slopes,
    formula: `(${forms.map(form => formText(form, names)).join(', ')})`,
  }
}

/** Equivalent points of one match agree to rounding, or on a border to what the tolerance leaves. */
const SAME_POINT = 1e-6
const SAME_POINT_AT_MOST = 1e-3

function withEquivalents(
  points: readonly PlacedPoint[],
  holohedry: readonly Mat3[],
  lattice: IdealLattice,
): BookPoint[] {
  const shortest = Math.min(...lattice.basis.slice(0, lattice.dimension).map(norm))
  const reach = Math.min(Math.max(lattice.tolerance / shortest, SAME_POINT), SAME_POINT_AT_MOST)
  const images = points.map(({ fraction }) => holohedry.map(R => apply(R, fraction)))
  const same = (p: Vec3, q: Vec3): boolean =>
    p.every((x, i) => Math.abs(x - q[i] - Math.round(x - q[i])) < reach)
  return points.map((point, i) => ({
    ...point,
    equivalentTo: points.flatMap(({ label, fraction }, j) =>
      i !== j && images[i].some(image => same(image, fraction)) ? [label] : [],
    ),
  }))
}

function placeLines(
  { lines }: CompiledVariation,
  carried: (forms: readonly LinearForm[]) => readonly LinearForm[],
  { basis, dimension }: IdealLattice,
): BookLine[] {
  if (lines.length === 0) return []
  const reciprocal = transpose(inverse(basis))
  const { voronoi } = reduce(reciprocal, dimension)
  return lines.map(({ label, forms, ends, t }) => {
    const own = carried(forms)
    const from = own.map(form => evaluateForm(form, [0])) as unknown as Vec3
    const along = own.map(({ coefficients }) => coefficients[0]) as unknown as Vec3
    const length =
      t ??
      untilBoundary(
        multiply([from, along, along], reciprocal),
        voronoi.map(({ vector }) => vector),
      )
    return { label, from: tidy(from), to: tidy(add(from, scale(along, length))), ends }
  })
}

/** How far one gets from a point of the zone along a direction, in units of it, until the next Bragg plane. */
function untilBoundary([from, along]: Mat3, vectors: readonly Vec3[]): number {
  const steps = vectors.map(g => {
    const rise = dot(along, g)
    if (!(rise > ROUNDING * norm(along) * norm(g))) return Number.POSITIVE_INFINITY
    return (dot(g, g) / 2 - dot(from, g)) / rise
  })
  return Math.max(0, Math.min(...steps))
}
