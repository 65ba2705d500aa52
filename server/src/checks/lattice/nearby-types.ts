/** Lattice types that vectors miss by little, and the vectors that would have them. */
import { BRAVAIS, type BravaisType } from '../../crystal/bravais.ts'
import {
  type CellParameters,
  cellParameters,
  type Dimension,
  isLattice,
  latticeFromCell,
} from '../../crystal/lattice.ts'
import { namedSpaceGroup } from '../../crystal/space-group.ts'
import { type LatticeType, latticeType } from '../../crystal/symmetry.ts'
import {
  cross,
  determinant,
  distance,
  dot,
  inverse,
  type Mat3,
  mapMatrix,
  multiply,
  norm,
  scale,
  subtract,
  transpose,
  type Vec3,
} from '../../crystal/vector.ts'
import type { NumberValue, VectorValue } from '../../format/model.ts'
import type { Crystal } from '../../meaning/crystal.ts'
import { isRoundingOf, LARGEST_SHIFT } from '../../meaning/rounding.ts'
import { isSameType, isSpecialCase } from './kinship.ts'

/** Programs take a lattice for symmetric when it misses by about this, relative to its vectors (common practice). */
const PROGRAM_TOLERANCE = 1e-5
/** A miss below this is no distortion that a person means: the thermal expansion of some ten kelvin. */
const SMALL_MISFIT = 2e-4

/** What arithmetic leaves between equal numbers, relative to a vector. */
const SAME = 1e-9

/**
 * The types more symmetric than the vectors are exactly, with the misfit of each; the most symmetric first.
 * @param most the largest misfit looked at, a length; cut to a twentieth of the shortest vector.
 */
export function typesNearby(
  vectors: Mat3,
  dimension: Dimension,
  most = Number.POSITIVE_INFINITY,
): LatticeType[] {
  const exact = exactType(vectors, dimension)
  const found: LatticeType[] = []
  let reach = most
  for (;;) {
    const type = exact && latticeType(vectors, dimension, reach)
    if (!type || type.holohedry.length <= exact.holohedry.length) return found
    found.push(type)
    reach = type.misfit * (1 - SAME)
  }
}

const shortest = (vectors: Mat3, dimension: Dimension): number =>
  Math.min(...vectors.slice(0, dimension).map(norm))

/** The type that a program finds which decides as strictly as most do. */
export const exactType = (vectors: Mat3, dimension: Dimension): LatticeType | undefined =>
  latticeType(vectors, dimension, PROGRAM_TOLERANCE * shortest(vectors, dimension))

export interface NearlySymmetric {
  readonly type: LatticeType
  /** The rows that the file states, made symmetric. */
  readonly rows: readonly Vec3[]
  /** Every component is the symmetric one rounded or cut to the digits written. */
  readonly rounding: boolean
}

const known = new WeakMap<Crystal, { readonly found: NearlySymmetric | undefined }>()

/** The most symmetric type that the vectors miss by a rounding or by next to nothing, unless the file states a lower one. */
export function nearlySymmetric(crystal: Crystal): NearlySymmetric | undefined {
  const kept = known.get(crystal)
  if (kept) return kept.found
  const found = search(crystal)
  known.set(crystal, { found })
  return found
}

function search(crystal: Crystal): NearlySymmetric | undefined {
  const { lattice, document } = crystal
  const written = document.lattice?.vectors?.rows as readonly VectorValue[] | undefined
  if (!lattice || !written) return undefined
  const { primitive, dimension } = lattice
  const small = SMALL_MISFIT * shortest(primitive, dimension)
  const most = LARGEST_SHIFT / crystal.angstrom
  for (const type of typesNearby(primitive, dimension, Math.max(most, small))) {
    if (!type.bravais || isStatedLower(crystal, type.bravais)) continue
    const choices = symmetricPrimitives(type, primitive, dimension).map(rows =>
      multiply(lattice.conventionalFromPrimitive, rows).slice(0, dimension),
    )
    const rounded = choices.filter(rows => isRounded(written, rows, most))
    const fitting = rounded.length > 0 ? rounded : type.misfit <= small ? choices : []
    if (fitting.length === 0) continue
    return { type, rows: gentlest(fitting, written), rounding: rounded.length > 0 }
  }
  return undefined
}

/** The type or the space group that the file states is less symmetric than this one. */
function isStatedLower({ document }: Crystal, type: BravaisType): boolean {
  const stated = document.lattice?.bravais?.value
  if (stated && (isSpecialCase(type, stated) || !isSameType(type, stated))) return true
  const group = document.spaceGroup && namedSpaceGroup(document.spaceGroup.value)
  return group !== undefined && isSpecialCase(type, group.bravais)
}

function isRounded(written: readonly VectorValue[], rows: readonly Vec3[], most: number): boolean {
  return written.every(({ items }, i) => {
    const moved = distance(rows[i], valuesOf(items))
    return (
      moved < most &&
      items.every((item, k) => isSame(item!.value, rows[i][k], rows[i]) || isRoundingOf(item!, rows[i][k]))
    )
  })
}

const valuesOf = (items: readonly (NumberValue | undefined)[]): Vec3 =>
  [0, 1, 2].map(k => items[k]?.value ?? 0) as unknown as Vec3
const isSame = (x: number, y: number, row: Vec3): boolean => Math.abs(x - y) <= SAME * norm(row)

/** Of several, the one that changes the fewest numbers, then the one that changes them least. */
function gentlest(choices: readonly (readonly Vec3[])[], written: readonly VectorValue[]): readonly Vec3[] {
  const cost = (rows: readonly Vec3[]): number => {
    const moves = written.flatMap(({ items }, i) =>
      items.map((item, k) =>
        isSame(item!.value, rows[i][k], rows[i]) ? 0 : Math.abs(item!.value - rows[i][k]),
      ),
    )
    const size = Math.max(...moves) / norm(rows[0])
    return moves.filter(move => move > 0).length + Math.min(size, 0.5)
  }
  return choices.reduce((best, other) => (cost(other) < cost(best) ? other : best))
}

/**
 * Primitive vectors that have a type exactly, near those that have it nearly. The conventional cell may lie along any of
 * its images; lengths that must agree take one of the values that stand there or their mean; one axis keeps its
 * direction, a second the plane of both.
 */
function symmetricPrimitives(
  { bravais, conventionalFromPrimitive, holohedry }: LatticeType,
  primitive: Mat3,
  dimension: Dimension,
): Mat3[] {
  return holohedry
    .filter(W => determinant(W) > 0)
    .flatMap(W => {
      const axes = multiply(conventionalFromPrimitive, transpose(W))
      const conventional = multiply(axes, primitive)
      const toPrimitive = inverse(axes)
      return idealCells(bravais!, cellParameters(conventional)).flatMap(ideal => {
        const built = latticeFromCell(ideal, 'P', dimension)
        if (!isLattice(built)) return []
        return alignments(built.conventional, conventional, dimension).map(rows =>
          multiply(toPrimitive, rows),
        )
      })
    })
}

function idealCells(bravais: BravaisType, found: CellParameters): CellParameters[] {
  const { system } = BRAVAIS[bravais]
  const { a, b, c, alpha, beta, gamma } = found
  const right = { alpha: 90, beta: 90, gamma: 90 }
  const pair = [a, b, (a + b) / 2]
  switch (system) {
    case 'cubic':
      return [a, b, c, (a + b + c) / 3].map(side => ({ a: side, b: side, c: side, ...right }))
    case 'tetragonal':
    case 'square':
      return pair.map(side => ({ a: side, b: side, c, ...right }))
    case 'hexagonal':
    case 'rhombohedral':
      return pair.map(side => ({ a: side, b: side, c, ...right, gamma: 120 }))
    case 'orthorhombic':
    case 'rectangular':
      return [{ a, b, c, ...right }]
    case 'monoclinic':
      return [{ a, b, c, ...right, beta }]
    default:
      return [{ a, b, c, alpha, beta, gamma }]
  }
}

/** The rows of a built cell turned onto those found. */
function alignments(built: Mat3, found: Mat3, dimension: Dimension): Mat3[] {
  const axes = [0, 1, 2].slice(0, dimension)
  const pairs = axes.flatMap(i => axes.filter(j => j !== i).map(j => [i, j] as const))
  return pairs.map(([i, j]) => {
    const turn = multiply(transpose(frame(built[i], built[j])), frame(found[i], found[j]))
    return mapMatrix(multiply(built, turn), x => (Math.abs(x) < SAME * norm(built[0]) ? 0 : x))
  })
}

/** Rows: the unit vector along u, the one across it towards v, and their normal. */
function frame(u: Vec3, v: Vec3): Mat3 {
  const along = scale(u, 1 / norm(u))
  const across = subtract(v, scale(along, dot(v, along)))
  const second = scale(across, 1 / norm(across))
  return [along, second, cross(along, second)]
}
