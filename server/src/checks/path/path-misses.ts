import type { BookMatch } from '../../books/match.ts'
import type { Ends } from '../../crystal/kspace.ts'
import { apply, type Mat3, subtract, type Vec3 } from '../../crystal/vector.ts'
import { appendToPath } from '../../format/edits.ts'
import type { Fix } from '../../format/model.ts'
import { displayLabel, formatPath } from '../../format/path.ts'
import type { Crystal } from '../../meaning/crystal.ts'
import { LONGEST_LINE } from '../../meaning/placing.ts'
import { piecesThrough } from '../../meaning/recommended.ts'
import type { Check, Context } from '../check.ts'
import { diagnose, isInDoubt } from '../points/diagnosis.ts'
import { listLabels, offer } from '../points/numbers.ts'
import { type CheckedSegment, segmentsOf } from './segments.ts'

interface Facts {
  readonly missed: readonly string[]
}

export const pathMisses: Check<Facts> = {
  id: 'path-misses',
  severity: 'info',
  needs: ['labels', 'frames.points'],
  summary: 'The path visits most points of the book’s path, but not all.',
  why: 'A gap or an extremum may lie at a point that is left out. A path through two thirds of the points or less is taken as short on purpose.',
  wrong: 'lattice: {bravais: cP, a: 3.9}\npath: Γ – X – M – Γ\n',
  right: 'lattice: {bravais: cP, a: 3.9}\npath: Γ – X – M – Γ – R\n',
  *run(context) {
    const { crystal, document } = context
    const { book, kGroup } = crystal
    const { path } = document
    if (!book || !kGroup || !path || path.recommended || book.path.length === 0 || !isPathKnown(crystal))
      return
    const stars = starsOf(book, kGroup)
    const missed = stars.filter(star => !isVisited(star, segmentsOf(crystal), kGroup))
    if (missed.length === 0 || stars.length - missed.length <= MOST * stars.length) return
    const labels = missed.map(({ label }) => label)
    yield {
      at: path.key,
      message: `The path does not visit ${listLabels(labels)} of the book's path, nor an equivalent.`,
      facts: { missed: labels },
      fixes: append(context, book, labels),
    }
  },
}

/** A path through no more of the book's points is short on purpose: Γ–X and Γ–L of a cubic crystal, one valley. */
const MOST = 2 / 3

/** Something that has no place, or one in doubt, may be what is missing. */
function isPathKnown(crystal: Crystal): boolean {
  const diagnosis = diagnose(crystal)
  return crystal.pieces.every(({ points }) =>
    points.every(point => point && !isInDoubt(diagnosis, point.label)),
  )
}

interface Star {
  /** The first label of the book for it. */
  readonly label: string
  readonly labels: readonly string[]
  readonly fraction: Vec3
}

/** The points of the book's path, each star once. */
function starsOf(book: BookMatch, group: readonly Mat3[]): Star[] {
  const stars: { label: string; labels: string[]; fraction: Vec3 }[] = []
  for (const label of new Set(book.path.flat())) {
    const { fraction, equivalentTo } = book.points.find(point => point.label === label)!
    const same = stars.find(
      star =>
        equivalentTo.includes(star.label) &&
        group.some(R => isWhole(subtract(apply(R, star.fraction), fraction))),
    )
    if (same) same.labels.push(label)
    else stars.push({ label, labels: [label], fraction })
  }
  return stars
}

/** Looser than the digits of exact fractions: points that depend on the shape of the cell are known to so much. */
const SAME_PLACE = 1e-4

const isWhole = (d: Vec3): boolean => d.every(x => Math.abs(x - Math.round(x)) <= SAME_PLACE)

function isVisited(
  { labels, fraction }: Star,
  segments: readonly CheckedSegment[],
  group: readonly Mat3[],
): boolean {
  const isNamed = segments.some(({ from, to }) =>
    [from, to].some(({ point, bookLabel }) => bookLabel !== undefined && labels.includes(point.label)),
  )
  return isNamed || segments.some(({ ends }) => group.some(R => isOnSegment(apply(R, fraction), ends)))
}

/** Is k, or a point that a reciprocal vector leads to, on a segment? All in fractions, in which straight lines are straight. */
function isOnSegment(k: Vec3, [from, to]: Ends): boolean {
  const along = subtract(to, from)
  const main = along.reduce((best, x, i) => (Math.abs(x) > Math.abs(along[best]) ? i : best), 0)
  const start = k[main] - from[main]
  if (along[main] === 0) return isWhole(subtract(k, from))
  if (!(Math.abs(along[main]) <= LONGEST_LINE)) return false
  const [low, high] = [Math.min(0, along[main]), Math.max(0, along[main])]
  for (let whole = Math.ceil(low - start - SAME_PLACE); start + whole <= high + SAME_PLACE; whole++) {
    const at = (start + whole) / along[main]
    if (
      k.every(
        (x, i) =>
          Math.abs(x - from[i] - at * along[i] - Math.round(x - from[i] - at * along[i])) <= SAME_PLACE,
      )
    )
      return true
  }
  return false
}

/** Pieces of the book's path after those of the file; only where the file does not give their labels other places. */
function append({ crystal, document, text }: Context, book: BookMatch, missed: readonly string[]): Fix[] {
  const pieces = piecesThrough(book.path, new Set(missed))
  if (!document.path || pieces.flat().some(label => crystal.fileDefines(label))) return []
  return offer(`Append ${formatPath(pieces, displayLabel)}`, appendToPath(text, document.path, pieces))
}
