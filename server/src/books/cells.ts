/**
 * The cells of a lattice among which a book may choose: the axes of one crystal can be named in several ways, and each
 * book orders them by conditions of its own. A cell is given by its rows of whole numbers on the user's vectors.
 */
import { BRAVAIS, type BravaisType, CENTRING_TABLES } from '../crystal/bravais.ts'
import { reduce, shortBasis } from '../crystal/reduction.ts'
import {
  combine,
  dot,
  IDENTITY,
  inverse,
  type Mat3,
  mapMatrix,
  multiply,
  scale,
  transpose,
  type Vec3,
} from '../crystal/vector.ts'
import type { Variation } from './book.ts'

/** Two sums of squares this near to each other, relatively, are equal but for rounding. */
export const ROUNDING = 1e-9

/**
 * Conventional cells for a variation.
 * @param axes  the lattice's usual conventional vectors (see `latticeType`), rows of whole numbers on `basis`.
 * @param basis the user's vectors, Cartesian rows.
 */
export function candidateCells(
  entry: Variation,
  bravais: BravaisType,
  axes: Mat3,
  basis: Mat3,
): readonly Mat3[] {
  const [a, b, c] = axes
  switch (BRAVAIS[bravais].system) {
    case 'rectangular':
      return [axes, [b, a, c]]
    case 'orthorhombic':
      return permutations(axes)
    case 'oblique':
      return pairsAcross(a, b, c, basis).map(([u, v]) => [u, v, c])
    case 'monoclinic': {
      const pairs = pairsAcross(a, c, b, basis)
      if (entry.uniqueAxis === 'a') return pairs.map(([u, v]) => [b, u, v])
      if (entry.uniqueAxis === 'c') return pairs.map(([u, v]) => [u, v, b])
      return pairs.map(([u, v]) => [u, b, v])
    }
    case 'triclinic':
      return triclinicCells(basis)
    case 'rhombohedral':
      return [entry.axes === 'rhombohedral' ? rhombohedralAxes(axes) : axes]
    default:
      return [axes]
  }
}

function rhombohedralAxes(hexagonal: Mat3): Mat3 {
  const { numerators, denominator } = CENTRING_TABLES.R
  return mapMatrix(multiply(numerators, hexagonal), x => Math.round(x / denominator))
}

const permutations = ([a, b, c]: Mat3): Mat3[] => [
  [a, b, c],
  [a, c, b],
  [b, a, c],
  [b, c, a],
  [c, a, b],
  [c, b, a],
]

/** The bases of the net of p and q made of two vectors of its obtuse superbase, either sign of the second. */
function pairsAcross(p: Vec3, q: Vec3, normal: Vec3, basis: Mat3): [Vec3, Vec3][] {
  const net: Mat3 = [p, q, normal]
  const { voronoi } = reduce(multiply(net, basis), 2)
  // The subsets {v₀}, {v₁}, {v₂} of the superbase.
  const superbase = [1, 2, 4].map(s => combine(voronoi[s - 1].coefficients, net))
  return superbase.flatMap((u, i) =>
    superbase.flatMap((v, j): [Vec3, Vec3][] =>
      i === j
        ? []
        : [
            [u, v],
            [u, scale(v, -1)],
          ],
    ),
  )
}

/**
 * Cells of a triclinic lattice whose reciprocal angles are all acute or all obtuse: of shortest reciprocal vectors, of the
 * user's own (which may be as short), and of three vectors of the obtuse superbase, for books that know obtuse angles only.
 */
function triclinicCells(basis: Mat3): Mat3[] {
  const reciprocal = transpose(inverse(basis))
  const { voronoi } = reduce(reciprocal, 3)
  const superbase = [1, 2, 4, 8].map(s => voronoi[s - 1].coefficients)
  const obtuse = superbase.map((_, left) => superbase.filter((_, i) => i !== left) as unknown as Mat3)
  return [shortBasis(reciprocal, 3).change, IDENTITY, ...obtuse]
    .flatMap(rows => sameSide(rows, reciprocal))
    .flatMap(rows => permutations(mapMatrix(transpose(inverse(rows)), Math.round)))
}

/** The signs with which three vectors meet at angles that are all acute, or all obtuse; right angles are both. */
function sameSide(rows: Mat3, reciprocal: Mat3): Mat3[] {
  const signs: Vec3[] = [
    [1, 1, 1],
    [-1, 1, 1],
    [1, -1, 1],
    [1, 1, -1],
  ]
  const [u, v, w] = multiply(rows, reciprocal)
  const slack = ROUNDING * Math.max(dot(u, u), dot(v, v), dot(w, w))
  const products: Vec3 = [dot(v, w), dot(u, w), dot(u, v)]
  return signs.flatMap(([r, s, t]): Mat3[] => {
    const signed = [s * t * products[0], r * t * products[1], r * s * products[2]]
    const fits = signed.every(x => x <= slack) || signed.every(x => x >= -slack)
    return fits ? [[scale(rows[0], r), scale(rows[1], s), scale(rows[2], t)]] : []
  })
}
