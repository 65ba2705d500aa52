/**
 * The one matcher that carries a book's cell into the user's lattice: a whole-numbered change of basis turns one metric
 * into the other, so that any setting and any choice of primitive vectors gets the book's labels in its own fractions.
 */
import type { BravaisType } from '../crystal/bravais.ts'
import type { CellParameters } from '../crystal/cell.ts'
import { cellParameters } from '../crystal/lattice.ts'
import { type LatticeType, latticeType } from '../crystal/lattice-type.ts'
import { type Dimension, reduce } from '../crystal/reduction.ts'
import {
  add,
  apply,
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
import type { CompiledVariation, Variation } from './book.ts'
import { ROUNDING } from './cells.ts'
import {
  type Choice,
  chooseCell,
  type IdealLattice,
  idealLattice,
  isBorderline,
  preferredImage,
} from './choice.ts'
import {
  CELL_NAMES,
  combineForms,
  evaluateForm,
  formText,
  fractionText,
  isFixed,
  type LinearForm,
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
 * that are a cell of the book under two namings of the axes. In two dimensions there is one book, of plane lattices; in
 * one there are the points Γ and X.
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
