/** Supercells of a volume, and which of them is the roundest. */
import { type Dimension, shortBasis } from '../../crystal/reduction.ts'
import { determinant, type Mat3, mapMatrix, multiply } from '../../crystal/vector.ts'

/** The shortest distance between an atom and its image. */
export const shortestImage = (matrix: Mat3, primitive: Mat3, dimension: Dimension): number =>
  shortBasis(multiply(matrix, primitive), dimension).lengths[0]

/** A diagonal matrix that is nearly as round as the best is preferred: it keeps the primitive axes. */
const NEARLY = 0.9
/** There are some ten thousand lattices of this index; beyond it only diagonal ones are tried. */
const MOST_LATTICES = 60

/** The matrix of this determinant whose shortest image distance is longest, with short rows. */
export function roundest(volume: number, primitive: Mat3, dimension: Dimension): Mat3 | undefined {
  const diagonal = best(diagonals(volume, dimension), primitive, dimension)
  const any = volume <= MOST_LATTICES ? best(sublattices(volume, dimension), primitive, dimension) : undefined
  if (!any) return diagonal?.matrix
  if (diagonal && diagonal.shortest >= NEARLY * any.shortest) return diagonal.matrix
  const { change } = shortBasis(multiply(any.matrix, primitive), dimension)
  const short = mapMatrix(multiply(change, any.matrix), Math.round)
  return determinant(short) < 0 ? mapMatrix(short, x => 0 - x) : short
}

interface Found {
  readonly matrix: Mat3
  readonly shortest: number
}

function best(matrices: Iterable<Mat3>, primitive: Mat3, dimension: Dimension): Found | undefined {
  let found: Found | undefined
  for (const matrix of matrices) {
    const shortest = shortestImage(matrix, primitive, dimension)
    if (!found || shortest > found.shortest) found = { matrix, shortest }
  }
  return found
}

function* factors(volume: number, dimension: Dimension): Iterable<readonly [number, number, number]> {
  for (let x = 1; x <= volume; x++) {
    if (volume % x !== 0) continue
    const rest = volume / x
    if (dimension === 1) {
      if (rest === 1) yield [x, 1, 1]
      continue
    }
    for (let y = 1; y <= rest; y++)
      if (rest % y === 0 && (dimension === 3 || y === rest)) yield [x, y, dimension === 3 ? rest / y : 1]
  }
}

function* diagonals(volume: number, dimension: Dimension): Iterable<Mat3> {
  for (const [x, y, z] of factors(volume, dimension))
    yield [
      [x, 0, 0],
      [0, y, 0],
      [0, 0, z],
    ]
}

/** Each sublattice of an index once, by its Hermite normal form (C. Hermite, J. reine angew. Math. 41, 191, 1851). */
function* sublattices(volume: number, dimension: Dimension): Iterable<Mat3> {
  for (const [x, y, z] of factors(volume, dimension))
    for (let p = 0; p < (dimension > 1 ? y : 1); p++)
      for (let q = 0; q < (dimension > 2 ? z : 1); q++)
        for (let r = 0; r < (dimension > 2 ? z : 1); r++)
          yield [
            [x, p, q],
            [0, y, r],
            [0, 0, z],
          ]
}
