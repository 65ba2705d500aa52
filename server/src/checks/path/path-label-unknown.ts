import { BOOKS } from '../../books/index.ts'
import { PLANE_LATTICES } from '../../books/plane-lattices.ts'
import { BRAVAIS } from '../../crystal/bravais.ts'
import { insertKeys } from '../../format/edits.ts'
import type { PathLabel } from '../../format/model.ts'
import { nearest } from '../../format/nearest.ts'
import { displayLabel } from '../../format/path.ts'
import type { Check, Context, Finding } from '../check.ts'
import { listLabels, offer } from '../points/numbers.ts'
import { centredReadings, otherBooks, type Reading } from '../points/readings.ts'

interface Facts {
  readonly label: string
  /** The label that may be meant. */
  readonly nearest?: string
  /** A centring under which the label would be known. */
  readonly centring?: string
}

export const pathLabelUnknown: Check<Facts> = {
  id: 'path-label-unknown',
  severity: 'error',
  needs: ['labels'],
  summary: 'A label is neither defined in the file nor in its label book.',
  why: 'Without a place there is nothing to compute.',
  wrong: 'lattice: {bravais: tI, a: 3.8, c: 9.5}\npath: Γ – Xx\n',
  right: 'lattice: {bravais: tI, a: 3.8, c: 9.5}\npath: Γ – X\n',
  *run(context) {
    yield* recommendedByNobody(context)
    const known = knownLabels(context)
    const unknown = uses(context).filter(
      ({ label }) => !known.has(label) && !context.crystal.fileDefines(label),
    )
    if (unknown.length > 0) yield* ofUnknown(context, unknown, known)
    yield* ofCircles(context)
  },
}

/** Labels in the path and in points between others. */
function uses({ document }: Context): PathLabel[] {
  const inPath = (document.path?.pieces ?? []).flatMap(({ labels }) => labels)
  const inPoints = (document.points?.items ?? []).flatMap(({ between }) => between?.ends ?? [])
  return [...inPath, ...inPoints]
}

/**
 * Labels of the book that mean something. Where the lattice is not known, or the vectors contradict the type that is
 * stated beside them, all letters that the book has for the type count: the findings of the lattice come first.
 */
function knownLabels({ crystal, document }: Context): Set<string> {
  const known = new Set(crystal.bookPoints.keys())
  const stated = document.lattice?.bravais?.value
  if (document.labels === 'none') return known
  if (crystal.book && (!stated || !document.lattice?.vectors || stated === crystal.type?.bravais))
    return known
  const dimension = stated ? BRAVAIS[stated].dimension : (crystal.dimension ?? 3)
  const { variations } = dimension === 2 ? PLANE_LATTICES : BOOKS[document.labels]
  for (const { bravais, points } of variations)
    if (!stated || settingOf(bravais) === settingOf(stated))
      for (const label of Object.keys(points)) known.add(label)
  return known
}

/** Centrings of one face are one type in several settings, and so is the body-centred monoclinic one. */
const settingOf = (bravais: string): string => bravais.replace(/^o[AB]$/, 'oC').replace(/^m[ABI]$/, 'mC')

function* ofUnknown(
  context: Context,
  unknown: readonly PathLabel[],
  known: ReadonlySet<string>,
): Iterable<Finding<Facts>> {
  const centred = centredReadings(context.crystal).find(reading =>
    unknown.every(({ label }) => hasLabel(reading, label)),
  )
  if (centred?.kind === 'centring') {
    if (!isToldByAtoms(context)) yield ofCentredLattice(context, unknown, centred)
    return
  }
  for (const use of unknown) yield ofLabel(context, use, known)
}

const hasLabel = ({ book }: Pick<Reading, 'book'>, label: string): boolean =>
  book.points.some(point => point.label === label)

/** The rule `cell-not-primitive` speaks of such a cell, and the labels come with its fix. */
const isToldByAtoms = ({ crystal, document }: Context): boolean =>
  (crystal.symmetry?.translationsFold ?? 1) > 1 && document.checks.get('cell-not-primitive')?.value !== 'off'

/** One mistake, one finding: the vectors are those of the conventional cell. */
function ofCentredLattice(
  { text, document }: Context,
  unknown: readonly PathLabel[],
  { centring, book }: Extract<Reading, { kind: 'centring' }>,
): Finding<Facts> {
  const [first, ...others] = unknown
  const labels = [...new Set(unknown.map(({ label }) => label))]
  const words = book.bravais ? BRAVAIS[book.bravais].words : centring
  return {
    at: first.at,
    message: `${listLabels(labels)} ${labels.length > 1 ? 'are no points' : 'is no point'} of the lattice that the vectors span, but of the ${words} one with this conventional cell: \`centring: ${centring}\` is missing.`,
    facts: { label: first.label, centring },
    related: others.map(({ at, label }) => ({ at, message: `${displayLabel(label)} likewise` })),
    fixes: offer(
      `State \`centring: ${centring}\``,
      insertKeys(text, document.lattice!, [['centring', centring]]),
    ),
  }
}

/** How Γ is written where the keyboard has none. */
const CENTRE = /^(g|gm|gamma)$/i

function ofLabel(context: Context, { label, at }: PathLabel, known: ReadonlySet<string>): Finding<Facts> {
  const own = context.document.points?.items.map(entry => entry.label) ?? []
  const near = CENTRE.test(label) && known.has('Γ') ? 'Γ' : nearest(label, [...own, ...known])
  const book = bookInWords(context)
  return {
    at,
    message: `${displayLabel(label)} is not defined under \`points\`, and ${book}.${elsewhere(context, label) ?? suggestion(context, near)}`,
    facts: { label, nearest: near },
    fixes: near ? offer(`Replace by ${displayLabel(near)}`, [{ at, text: near }]) : [],
  }
}

function bookInWords({ crystal, document }: Context): string {
  const { book } = crystal
  if (document.labels === 'none') return 'no label book is in force'
  if (!book) return `\`${document.labels}\` has no such label`
  const type = book.bravais ? ` (${book.bravais}: ${book.condition})` : ''
  return `\`${book.book}\` has no such label for this lattice${type}`
}

const suggestion = ({ crystal }: Context, near: string | undefined): string => {
  if (near) return ` Did you mean ${displayLabel(near)}?`
  return crystal.bookPoints.size > 0 ? ` It has ${listLabels([...crystal.bookPoints.keys()])}.` : ''
}

/** Where the letter does exist: in another book, or for another shape of the cell. */
function elsewhere({ crystal, document }: Context, label: string): string | undefined {
  const { book } = crystal
  if (!book || document.labels === 'none') return undefined
  const others = otherBooks(crystal).filter(other => hasLabel(other, label))
  if (others.length > 0) return ` It is a label of \`${others.map(({ name }) => name).join('`, `')}\`.`
  const { variations } = crystal.dimension === 2 ? PLANE_LATTICES : BOOKS[document.labels]
  const other = variations.find(
    ({ bravais, points }) => bravais === book.bravais && Object.hasOwn(points, label),
  )
  return other && ` The book has it for another shape of the cell: ${other.condition}.`
}

/** The word `recommended` stands for a path that a book must have. */
function* recommendedByNobody({ document, crystal }: Context): Iterable<Finding<Facts>> {
  const { book } = crystal
  if (!document.path?.recommended || (document.labels !== 'none' && book?.path.length !== 0)) return
  const reason = book ? `\`${book.book}\` recommends none` : 'there is no label book'
  yield {
    at: document.path.at,
    message: `The path is \`recommended\`, but ${reason}: write the path, or state another book under \`labels\`.`,
    facts: { label: 'recommended' },
  }
}

/** Points that lie between each other have no place. */
function* ofCircles({ document }: Context): Iterable<Finding<Facts>> {
  const ends = new Map(
    (document.points?.items ?? []).map(({ label, between }) => [
      label,
      between?.ends.map(end => end.label) ?? [],
    ]),
  )
  const leadsBack = (label: string, goal: string, seen = new Set<string>()): boolean =>
    (ends.get(label) ?? []).some(next => {
      if (next === goal) return true
      if (seen.has(next)) return false
      seen.add(next)
      return leadsBack(next, goal, seen)
    })
  for (const { label, key } of document.points?.items ?? []) {
    if (!leadsBack(label, label)) continue
    yield {
      at: key,
      message: `${displayLabel(label)} has no place: the points between which it lies are defined by way of ${displayLabel(label)} itself.`,
      facts: { label },
    }
  }
}
