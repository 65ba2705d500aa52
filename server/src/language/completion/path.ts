/** Labels of k-points: in a path the ones to go to next come first, each with its place and the length of the step. */
import { type CompletionItem, CompletionItemKind } from 'vscode-languageserver-types'
import { distance } from '../../crystal/vector.ts'
import { displayLabel, normaliseLabel } from '../../format/path.ts'
import type { Crystal, PlacedPoint } from '../../meaning/crystal.ts'
import { recommendedPath } from '../../meaning/recommended.ts'
import { fractions, inverseLength } from '../../meaning/wording.ts'
import { type Asked, items, type Offer } from './item.ts'

const REST_OF_LABEL = /^[\p{L}\d'_]*/u
/** The label begun at the end of a text: letters, digits and primes. */
const begun = (text: string): string => /[\p{L}\d'_]*$/u.exec(text)![0]

export function pathItems(asked: Asked): CompletionItem[] {
  const crystal = asked.snapshot.documentAt(asked.offset)?.crystal
  if (!crystal?.lattice) return []
  const { written, afterColon } = asked.place
  const word = begun(written)
  const before = written.slice(0, written.length - word.length)
  const labels = labelsIn(before)
  const offers = labelOffers(crystal, { labels, isNewPiece: /(?:^|\|)\s*$/.test(before), word })
  const gap = gapBefore(before)
  const spaced = gap === '' ? offers : offers.map(offer => ({ ...offer, text: gap + offer.text }))
  if (labels.length > 0)
    return items(asked, [...restOfBook(crystal, before, gap), ...spaced], word.length, REST_OF_LABEL)
  const whole = afterColon || asked.place.lists.length > 0 || before.trim() === '' ? wholePaths(crystal) : []
  return items(asked, [...whole, ...spaced], word.length, REST_OF_LABEL)
}

/** Labels as ends of `between`. */
export function endItems(asked: Asked): CompletionItem[] {
  const crystal = asked.snapshot.documentAt(asked.offset)?.crystal
  if (!crystal?.lattice) return []
  const word = begun(asked.place.written)
  const list = asked.place.lists.at(-1)
  const labels = list ? labelsIn(asked.snapshot.text.slice(list.start, asked.offset - word.length)) : []
  return items(asked, labelOffers(crystal, { labels, isNewPiece: false, word }), word.length, REST_OF_LABEL)
}

const labelsIn = (text: string): string[] =>
  [...text.matchAll(/[\p{L}][\p{L}\d'_₀-₉]*/gu)].map(([label]) => normaliseLabel(label) ?? label)

/** What is to be written before a label so that it is parted from what stands there. */
function gapBefore(before: string): string {
  if (/[\p{L}\d'_₀-₉]\s+$/u.test(before)) return '– '
  return /[–→|-]$/.test(before) ? ' ' : ''
}

interface Walk {
  readonly labels: readonly string[]
  readonly isNewPiece: boolean
  readonly word: string
}

function labelOffers(crystal: Crystal, { labels, isNewPiece, word }: Walk): Offer[] {
  const last = isNewPiece ? undefined : labels.at(-1)
  const from = last === undefined ? undefined : crystal.pointOf(last)
  const next = isNewPiece ? starts(crystal, labels) : nextOf(crystal, labels)
  const points = [...new Map([...crystal.bookPoints, ...crystal.points]).values()]
  return points
    .map(point => {
      const step = from && distance(from.cartesian, point.cartesian)
      const order = next.indexOf(point.label)
      const here = point.label === last
      const rank = here ? 8 : order >= 0 ? 2 : 5
      return { point, step, order, rank }
    })
    .sort((p, q) => p.rank - q.rank || p.order - q.order || (p.step ?? 0) - (q.step ?? 0))
    .map(({ point, step, order, rank }) => ({
      ...labelOffer(
        crystal,
        point,
        word,
        step === undefined ? '' : `, ${inverseLength(step, crystal.unit)} from ${displayLabel(last!)}`,
      ),
      rank,
      preselect: order === 0 && from !== undefined,
    }))
}

function labelOffer(crystal: Crystal, point: PlacedPoint, word: string, step: string): Offer {
  const { label, fraction, origin } = point
  const ascii = ASCII.find(([greek]) => label.startsWith(greek))
  const spelled = ascii && label.replace(...ascii)
  const filter = spelled && (/^[A-Za-z]/.test(word) ? spelled : `${label} ${spelled}`)
  return {
    label,
    kind: origin === 'file' ? CompletionItemKind.Variable : CompletionItemKind.Constant,
    detail: `${fractions(fraction, crystal.dimension)}${step}`,
    text: label,
    ...(filter ? { filter } : {}),
  }
}

/** What is typed where the keyboard has no Greek. */
const ASCII: readonly [greek: string, spelled: string][] = [
  ['Γ', 'Gamma'],
  ['Σ', 'Sigma'],
  ['Δ', 'Delta'],
  ['Λ', 'Lambda'],
]

/** Where the book's path goes on from the last label: what has not been walked first, then backwards. */
function nextOf(crystal: Crystal, labels: readonly string[]): string[] {
  const last = labels.at(-1)
  const steps = (recommendedPath(crystal)?.pieces ?? []).flatMap(piece =>
    piece.slice(1).map((to, i) => [piece[i], to] as const),
  )
  const walked = new Set(labels.slice(1).flatMap((to, i) => [`${labels[i]} ${to}`, `${to} ${labels[i]}`]))
  const open = ([from, to]: readonly [string, string]) => !walked.has(`${from} ${to}`)
  const forward = steps.filter(([from]) => from === last)
  const backward = steps.filter(([, to]) => to === last).map(([from, to]) => [to, from] as const)
  const all = [...forward.filter(open), ...backward.filter(open)]
  return [...new Set(all.map(([, to]) => to))]
}

/** Where the book's pieces begin, first those that no label of the path stands for yet. */
function starts(crystal: Crystal, labels: readonly string[]): string[] {
  const firsts = (recommendedPath(crystal)?.pieces ?? []).map(([first]) => first)
  return [...new Set(labels.length === 0 ? firsts : firsts.slice(1))]
}

const plainPath = (text: string): string =>
  text
    .replace(/\s*(?:–(?:\(\d+\)–)?|→|-)\s*/g, ' – ')
    .replace(/\s*\|\s*/g, ' | ')
    .replace(/\s+/g, ' ')

/** The rest of the book's own path, where what stands is its beginning. */
function restOfBook(crystal: Crystal, before: string, gap: string): Offer[] {
  const path = recommendedPath(crystal)
  const begin = plainPath(before).trimStart()
  if (!path?.text.startsWith(begin.trimEnd())) return []
  const rest = path.text.slice(begin.trimEnd().length)
  if (/^[\p{L}\d'₀-₉]/u.test(rest) && /[\p{L}\d'₀-₉]$/u.test(begin.trimEnd())) return []
  const lead = gap === '– ' ? '' : gap
  const text = lead + (gap === '– ' ? rest.trimStart() : rest.replace(/^[\s–|]*/, ''))
  if (rest.trim() === '' || !/[\s]/.test(text.trim())) return []
  return [
    {
      label: text.trim(),
      kind: CompletionItemKind.Value,
      detail: 'the rest of the label book’s own path',
      description: 'rest of the book’s path',
      text,
      rank: 4,
    },
  ]
}

/** The book's own path, written out or by name. */
function wholePaths(crystal: Crystal): Offer[] {
  const path = recommendedPath(crystal)
  if (!path) return []
  const offer = (label: string, detail: string, rank: number): Offer => ({
    label,
    kind: CompletionItemKind.Value,
    detail,
    text: label,
    rank,
    about: `book:${crystal.document.labels}`,
  })
  return [
    { ...offer('recommended', 'the label book’s own path, whatever the cell', 0), preselect: true },
    offer(path.text, 'the label book’s own path, written out', 1),
  ]
}
