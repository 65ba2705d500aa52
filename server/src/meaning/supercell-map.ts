/** The supercell of a document: where its k-points come to lie, and which primitive points each of them stands for. */
import type { BookMatch } from '../books/match.ts'
import { K_TOLERANCE, star } from '../crystal/kspace.ts'
import { landingOf, landsOnGamma, type Supercell, supercellOf, unfoldedFrom } from '../crystal/supercell.ts'
import { combine, type Vec3 } from '../crystal/vector.ts'
import { buildZone, fold, type Zone } from '../crystal/zone.ts'
import { recogniseFraction } from '../format/numbers.ts'
import type { Crystal, PlacedPoint } from './crystal.ts'
import { bookPointHere } from './placing.ts'

/** Undefined where there is no supercell, or none that spans a cell. */
export const supercellIn = ({ lattice, supercell }: Crystal): Supercell | undefined =>
  lattice && supercell && supercellOf(lattice, supercell)

export interface LandedPoint {
  readonly point: PlacedPoint
  /** Fractions of the supercell's reciprocal vectors, in [0, 1). */
  readonly landing: Vec3
  /** Its shortest equivalent by the supercell's reciprocal vectors, Cartesian. */
  readonly cartesian: Vec3
  readonly isGamma: boolean
  /** What the label book calls it in the supercell's own zone. */
  readonly label?: string
}

export interface UnfoldedPoint {
  /** Of the primitive reciprocal vectors, in [0, 1). */
  readonly fraction: Vec3
  /** Its shortest equivalent in the primitive zone. */
  readonly cartesian: Vec3
  /** What the label book calls it in the primitive zone. */
  readonly label?: string
}

export interface Unfolding {
  /** Of the supercell's own book: `Γ`, `X`. */
  readonly label: string
  /** Fractions of the supercell's reciprocal vectors. */
  readonly fraction: Vec3
  readonly cartesian: Vec3
  /** |det M| of them; undefined where a list would be too long. */
  readonly points?: readonly UnfoldedPoint[]
}

/** Both ways between the primitive zone and the supercell's. */
export class SupercellMap {
  readonly #zone: Zone
  readonly book: BookMatch | undefined

  constructor(
    private readonly crystal: Crystal,
    readonly supercell: Supercell,
  ) {
    const { lattice } = supercell
    this.#zone = buildZone(lattice.reciprocal, lattice.dimension)
    const { labels } = crystal.document
    this.book = labels === 'none' ? undefined : crystal.bookMatch(labels, lattice)
  }

  /** Where one point of the primitive zone comes to lie. */
  land(point: PlacedPoint): LandedPoint {
    const { matrix } = this.supercell
    const landing = exactly(landingOf(matrix, point.fraction))
    return {
      point,
      landing,
      cartesian: fold(this.#zone, landing).cartesian,
      isGamma: landsOnGamma(matrix, point.fraction),
      label: labelOf(this.book, landing),
    }
  }

  /** Γ first, then the other points of the supercell's own book, with what unfolds from each. */
  unfoldings(): Unfolding[] {
    const own = (this.book?.points ?? []).filter(({ fraction }) => !isGamma(fraction))
    return [{ label: 'Γ', fraction: GAMMA }, ...own].map(({ label, fraction }) => ({
      label,
      fraction,
      cartesian: combine(fraction, this.supercell.lattice.reciprocal),
      points: unfoldedFrom(this.supercell.matrix, fraction)?.map(each => this.#placed(exactly(each))),
    }))
  }

  #placed(fraction: Vec3): UnfoldedPoint {
    const { cartesian } = fold(this.crystal.zone!, fraction)
    return { fraction, cartesian, label: bookPointHere(this.crystal, cartesian)?.label }
  }
}

const GAMMA: Vec3 = [0, 0, 0]
const isGamma = (fraction: Vec3): boolean => fraction.every(x => x === 0)

/** Multiples of 1/|det M| of special fractions: what is this near to one is that one, and is rounded once. */
const SAME = 1e-12
const LARGEST_DENOMINATOR = 1000

const exactly = (fraction: Vec3): Vec3 =>
  fraction.map(x => {
    const exact = recogniseFraction(x, SAME, LARGEST_DENOMINATOR)
    return exact ? exact.p / exact.q : x
  }) as unknown as Vec3

/** The label of a book, equivalents counted; a point's own coordinates go before those of an equivalent. */
function labelOf(book: BookMatch | undefined, fraction: Vec3): string | undefined {
  if (!book) return isGamma(fraction) ? 'Γ' : undefined
  const isHere = (image: Vec3): boolean =>
    image.every((x, i) => Math.abs(x - fraction[i] - Math.round(x - fraction[i])) <= K_TOLERANCE)
  const own = book.points.find(point => isHere(point.fraction))
  return (own ?? book.points.find(point => star(point.fraction, book.holohedry).some(isHere)))?.label
}
