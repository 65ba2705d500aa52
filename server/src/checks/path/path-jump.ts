import { areAcrossBreak } from '../../books/lookup.ts'
import type { BookMatch } from '../../books/match.ts'
import { breakSegment } from '../../format/edits.ts'
import type { PathPiece } from '../../format/model.ts'
import { displayLabel } from '../../format/path.ts'
import type { Check } from '../check.ts'
import { offer } from '../points/numbers.ts'
import { type CheckedSegment, nameOf, segmentsOf, subjectOf } from './segments.ts'

interface Facts {
  readonly from: string
  readonly to: string
}

export const pathJump: Check<Facts> = {
  id: 'path-jump',
  severity: 'warning',
  needs: ['labels', 'frames.points'],
  summary: 'A segment joins two points between which the book’s path breaks.',
  why: 'The book goes on at another place there; a line drawn between the two is no part of the usual path.',
  wrong: 'lattice: {bravais: cF, a: 6.46}\npath: Γ – X – U – K – Γ – L – W – X\n',
  right: 'lattice: {bravais: cF, a: 6.46}\npath: Γ – X – U | K – Γ – L – W – X\n',
  *run({ crystal, text }) {
    const { book } = crystal
    if (!book) return
    for (const checked of segmentsOf(crystal)) {
      const { segment, piece, index, from, to } = checked
      if (!isJump(book, checked)) continue
      const [a, b] = [from.point.label, to.point.label]
      const equivalent = book.points.find(({ label }) => label === a)?.equivalentTo.includes(b)
      const why = equivalent
        ? `${displayLabel(a)} and ${displayLabel(b)} are equivalent, and the book breaks its path`
        : 'the book breaks its path'
      yield {
        at: segment.at,
        message: `${nameOf(checked)} is no segment of the book's path: ${why} between them, \`${segment.from.text} | ${segment.to.text}\`.`,
        facts: { from: a, to: b },
        hides: [{ rule: 'path-off-symmetry', subject: subjectOf(checked) }],
        fixes: mayBreak(piece.piece, index) ? offer('Break the path here', breakSegment(text, segment)) : [],
      }
    }
  },
}

/**
 * Neighbours on the two sides of a break in the book. Where they are not equivalent, a line between them may well be
 * meant; then the labels beside them must be the book's too.
 */
function isJump(book: BookMatch, { from, to, index, piece }: CheckedSegment): boolean {
  const [a, b] = [from.point.label, to.point.label]
  if (from.bookLabel === undefined || to.bookLabel === undefined || !areAcrossBreak(book, a, b)) return false
  if (book.points.some(({ label, equivalentTo }) => label === a && equivalentTo.includes(b))) return true
  const labels = piece.piece.labels.map(({ label }) => label)
  const four = labels.slice(Math.max(0, index - 1), index + 3)
  if (four.length < 4 || index === 0) return false
  const backwards = [...four].reverse()
  return book.path.slice(1).some((after, i) => {
    const expected = [...book.path[i].slice(-2), ...after.slice(0, 2)]
    return [four, backwards].some(order => order.every((label, j) => label === expected[j]))
  })
}

/** Both sides of a break need two labels. */
const mayBreak = ({ labels }: PathPiece, index: number): boolean => index > 0 && index < labels.length - 2
