import type { PathLabel } from '../../format/model.ts'
import { BOOKS } from '../../books/index.ts'
import { PLANE_LATTICES } from '../../books/plane-lattices.ts'
import { BRAVAIS } from '../../crystal/bravais.ts'
import { insertKeys } from '../../format/edits.ts'
import { nearest } from '../../format/nearest.ts'
import { displayLabel } from '../../format/path.ts'
import type { Check, Context, Finding } from '../check.ts'
import { listLabels } from '../points/numbers.ts'
import { centredReadings, otherBooks } from '../points/readings.ts'

interface Facts {
  readonly label: string
  /** The label that may be meant. */
  readonly nearest?: string
}

export const pathLabelUnknown: Check<Facts> = {
  id: 'path-label-unknown',
  severity: 'error',
  summary: 'A label is neither defined in the file nor in its label book.',
  why: 'Without a place there is nothing to compute.',
  wrong: 'lattice: {bravais: tI, a: 3.8, c: 9.5}\npath: Γ – Xx\n',
  right: 'lattice: {bravais: tI, a: 3.8, c: 9.5}\npath: Γ – X\n',
  *run(context) {
    const { crystal, document } = context
    yield* withoutPath(context)
    const known = knownLabels(context)
    for (const use of uses(context)) {
      if (known.has(use.label)) continue
      if (crystal.fileDefines(use.label)) continue
      if (isOfCentredCell(context, use.label)) continue
      yield unknown(context, use, known)
    }
    for (const { label, key, between, coordinates } of document.points?.items ?? []) {
      // All ends are known, and still the point has no place.
      const isCircular =
        between?.fraction &&
        !coordinates &&
        between.ends.every(end => crystal.fileDefines(end.label) || known.has(end.label))
      if (!crystal.lattice || !isCircular || crystal.points.has(label) || !leadsTo(context, label, label))
        continue
      yield {
        at: key,
        message: `${displayLabel(label)} lies between points that lie between others, ${displayLabel(label)} among them: none of them has a place.`,
        facts: { label },
      }
    }
  },
}

/** Is a point part of the way between others that go back to it? */
function leadsTo({ document }: Context, from: string, goal: string, seen = new Set<string>()): boolean {
  const entry = document.points?.items.find(({ label }) => label === from)
  return (entry?.between?.ends ?? []).some(({ label }) => {
    if (label === goal) return true
    if (seen.has(label)) return false
    seen.add(label)
    return leadsTo({ document } as Context, label, goal, seen)
  })
}

function* withoutPath({ document, crystal }: Context): Iterable<Finding<Facts>> {
  if (!document.path?.recommended) return
  const { book } = crystal
  const hasNone = document.labels === 'none' || book?.path.length === 0
  if (!hasNone) return
  const which = book ? `\`${book.book}\` recommends no path` : 'there is no label book to recommend a path'
  yield {
    at: document.path.at,
    message: `The path is \`recommended\`, but ${which}: write the path, or state another book under \`labels\`.`,
    facts: { label: 'recommended' },
  }
}

/** Labels in the path and in points between others. */
function uses({ document }: Context): PathLabel[] {
  const inPath = (document.path?.pieces ?? []).flatMap(({ labels }) => labels)
  const inPoints = (document.points?.items ?? []).flatMap(({ between }) => between?.ends ?? [])
  return [...inPath, ...inPoints]
}

/**
 * Labels that mean something. Where the lattice is not known, or the vectors contradict the type that is stated beside
 * them, all letters that the book has for the type count: the lattice's own findings come first.
 */
function knownLabels({ crystal, document }: Context): Set<string> {
  const known = new Set(crystal.bookPoints.keys())
  if (document.labels === 'none') return known
  const stated = document.lattice?.bravais?.value
  const found = crystal.type?.bravais
  if (crystal.book && (!stated || stated === found || !document.lattice?.vectors)) return known
  const dimension = stated ? BRAVAIS[stated].dimension : (crystal.dimension ?? 3)
  const { variations } = dimension === 2 ? PLANE_LATTICES : BOOKS[document.labels]
  for (const { bravais, points } of variations)
    if (!stated || familyOf(bravais) === familyOf(stated))
      for (const label of Object.keys(points)) known.add(label)
  return known
}

/** Centrings of one face are one type in several settings. */
const familyOf = (bravais: string): string =>
  bravais.replace(/^([om])[ABCI]$/, (type, system) => (type === 'oI' ? type : `${system}C`))

/** The rule `cell-not-primitive` speaks of a cell that holds several: the letters of the true lattice come with its fix. */
function isOfCentredCell({ crystal, document }: Context, label: string): boolean {
  const { symmetry } = crystal
  if (!symmetry || symmetry.translationsFold === 1 || document.labels === 'none') return false
  if (document.checks.get('cell-not-primitive')?.value === 'off') return false
  return centredReadings(crystal).some(({ book }) => book.points.some(point => point.label === label))
}

function unknown(context: Context, use: PathLabel, known: ReadonlySet<string>): Finding<Facts> {
  const { crystal, document } = context
  const all = new Set([...(document.points?.items ?? []).map(({ label }) => label), ...known])
  const near = nearest(use.label, all)
  const name = displayLabel(use.label)
  const centred = centredReadings(crystal).find(({ book }) =>
    book.points.some(point => point.label === use.label),
  )
  const fixes = near
    ? [{ title: `Replace by ${displayLabel(near)}`, safe: false, edits: [{ at: use.at, text: near }] }]
    : []
  if (centred?.kind === 'centring' && document.lattice)
    fixes.push({
      title: `State \`centring: ${centred.centring}\``,
      safe: false,
      edits: [...insertKeys(context.text, document.lattice, [['centring', centred.centring]])],
    })
  return {
    at: use.at,
    message: `${name} is neither defined under \`points\` nor a label of ${bookInWords(context)}.${meant(context, use.label, near)}${labels(context, near)}`,
    facts: { label: use.label, nearest: near },
    fixes,
  }
}

function bookInWords({ crystal, document }: Context): string {
  if (document.labels === 'none') return 'a label book: `labels` is `none`'
  const { book } = crystal
  if (!book) return `\`${document.labels}\``
  return `\`${book.book}\` for this lattice${book.bravais ? ` (${book.bravais}, ${book.condition})` : ''}`
}

/** Where the letter does exist, or which one is near. */
function meant({ crystal, document }: Context, label: string, near: string | undefined): string {
  const has = (book: { points: readonly { label: string }[] }) =>
    book.points.some(point => point.label === label)
  const centred = centredReadings(crystal).find(({ book }) => has(book))
  if (centred?.kind === 'centring' && centred.book.bravais)
    return ` It is one of the ${BRAVAIS[centred.book.bravais].words} lattice of these vectors: is \`centring: ${centred.centring}\` missing?`
  const others = otherBooks(crystal).filter(({ book }) => has(book))
  if (others.length > 0) return ` It is one of \`${others.map(({ name }) => name).join('`, `')}\`.`
  if (crystal.book && document.labels !== 'none' && crystal.dimension === 3) {
    const other = BOOKS[document.labels].variations.find(
      ({ bravais, points }) => bravais === crystal.book?.bravais && Object.hasOwn(points, label),
    )
    if (other) return ` It is one of another variation: ${other.condition}.`
  }
  return near ? ` Did you mean ${displayLabel(near)}?` : ''
}

const labels = ({ crystal }: Context, near: string | undefined): string =>
  near || crystal.bookPoints.size === 0 ? '' : ` Known are ${listLabels([...crystal.bookPoints.keys()])}.`
