/** The segments of a path as the rules see them: with roundings made good, and told from those of the book. */
import { pathSegments } from '../../books/lookup.ts'
import type { BookMatch } from '../../books/match.ts'
import { areEquivalentSegments, type Ends, K_TOLERANCE } from '../../crystal/kspace.ts'
import { norm, subtract } from '../../crystal/vector.ts'
import type { PathSegment } from '../../format/model.ts'
import { displayLabel } from '../../format/path.ts'
import type { Crystal, PlacedPiece, PlacedPoint } from '../../meaning/crystal.ts'
import { type DiagnosedPoint, type Diagnosis, diagnose, isInDoubt } from '../points/diagnosis.ts'

export interface CheckedSegment {
  readonly segment: PathSegment
  readonly piece: PlacedPiece
  /** Ordinal in the piece, from 0. */
  readonly index: number
  readonly from: PathEnd
  readonly to: PathEnd
  /** Primitive fractions. */
  readonly ends: Ends
  /** Inverse units of the file's length. */
  readonly length: number
  /** How exactly the fractions of the ends are known. */
  readonly tolerance: number
  /** Which segment of the book's own path it is, from 0. */
  readonly ofBook?: number
}

export interface PathEnd {
  readonly point: PlacedPoint
  /** What is known of a point of the file's own. */
  readonly diagnosed?: DiagnosedPoint
  /** The label of the book's point at this place, whatever the file calls it. */
  readonly bookLabel?: string
}

const known = new WeakMap<Crystal, readonly CheckedSegment[]>()

/** The segments between points that can be placed and whose place is not in doubt. */
export function segmentsOf(crystal: Crystal): readonly CheckedSegment[] {
  let segments = known.get(crystal)
  if (!segments) {
    segments = check(crystal)
    known.set(crystal, segments)
  }
  return segments
}

function check(crystal: Crystal): CheckedSegment[] {
  if (!crystal.lattice || crystal.pieces.length === 0) return []
  const diagnosis = diagnose(crystal)
  return crystal.pieces.flatMap(piece =>
    piece.segments.flatMap(({ segment, from, to }, index): CheckedSegment[] => {
      if (!from || !to || isInDoubt(diagnosis, from.label) || isInDoubt(diagnosis, to.label)) return []
      const [start, end] = [endOf(diagnosis, from), endOf(diagnosis, to)]
      const ends: Ends = [fractionOf(start), fractionOf(end)]
      const length = norm(crystal.cartesianOf(subtract(ends[1], ends[0])))
      const tolerance =
        K_TOLERANCE +
        SUM_OF_ERRORS * ((start.diagnosed?.slack.fraction ?? 0) + (end.diagnosed?.slack.fraction ?? 0))
      const checked = { segment, piece, index, from: start, to: end, ends, length, tolerance }
      return [{ ...checked, ofBook: crystal.book && segmentOfBook(crystal, crystal.book, checked) }]
    }),
  )
}
/** A rotation adds up three errors of a point. */
const SUM_OF_ERRORS = 3

function endOf({ points }: Diagnosis, point: PlacedPoint): PathEnd {
  if (point.origin === 'book') return { point, bookLabel: point.label }
  const diagnosed = points.get(point.label)
  return { point, diagnosed, bookLabel: (diagnosed?.fit ?? diagnosed?.here)?.label }
}

const fractionOf = ({ point, diagnosed }: PathEnd) => diagnosed?.fraction ?? point.fraction

interface BookSegment {
  readonly labels: readonly [string, string]
  readonly ends: Ends
  readonly length: number
}

const segmentsOfBooks = new WeakMap<BookMatch, readonly BookSegment[]>()

function bookSegments(crystal: Crystal, book: BookMatch): readonly BookSegment[] {
  let segments = segmentsOfBooks.get(book)
  if (!segments) {
    segments = pathSegments(book).map(labels => {
      const ends = labels.map(label => crystal.bookPoints.get(label)!.fraction) as unknown as Ends
      return { labels, ends, length: norm(crystal.cartesianOf(subtract(ends[1], ends[0]))) }
    })
    segmentsOfBooks.set(book, segments)
  }
  return segments
}

/** Lengths of equivalent segments differ by less than this part, whatever the tolerance of the lattice. */
const SAME_LENGTH = 1e-2

/** By its labels where they are the book's; else by the place of the whole segment. */
function segmentOfBook(
  crystal: Crystal,
  book: BookMatch,
  { from, to, ends, length, tolerance }: Omit<CheckedSegment, 'ofBook'>,
): number | undefined {
  const segments = bookSegments(crystal, book)
  const joined = ([a, b]: readonly [string, string]) => a === from.point.label && b === to.point.label
  let found = segments.findIndex(({ labels }) => joined(labels) || joined([labels[1], labels[0]]))
  if (found < 0 || from.bookLabel === undefined || to.bookLabel === undefined)
    found = segments.findIndex(
      other =>
        Math.abs(other.length - length) <= SAME_LENGTH * length &&
        areEquivalentSegments(other.ends, ends, book.holohedry, tolerance) !== undefined,
    )
  return found < 0 ? undefined : found
}

/** What a finding about a segment is about, so that another finding of the same segment can hide it. */
export const subjectOf = ({ segment }: CheckedSegment): string => `segment:${segment.at[0]}`

/** `Γ–X`, as the messages write it. */
export const nameOf = ({ from, to }: CheckedSegment): string =>
  `${displayLabel(from.point.label)}–${displayLabel(to.point.label)}`
