/** Labels of the book become points of the file, and back. */
import { combine, distance, inverse, type Vec3 } from '../../crystal/vector.ts'
import { insertKeys, type NewKey, removeItems, scalarText } from '../../format/edits.ts'
import type { PointEntry, TextEdit } from '../../format/model.ts'
import { displayLabel } from '../../format/path.ts'
import { covers } from '../../analysis.ts'
import { numberText } from '../../meaning/rewrite-frames.ts'
import { count } from '../../meaning/wording.ts'
import { locate } from '../locate.ts'
import type { Offer, Refactor, Spot } from './refactor.ts'
import { isIn, quietly } from './refactor.ts'

export const extractPoint: Refactor = {
  id: 'extract-point',
  kind: 'refactor.extract',
  offers(spot) {
    const { crystal, document, offset } = spot
    const { path } = document
    if (!path || !isIn(path, spot) || !crystal.pointAxes) return []
    const ofBook = (label: string) => !crystal.fileDefines(label) && crystal.bookPoints.has(label)
    const offer = (key: string, title: string, labels: readonly string[]): Offer => ({
      key,
      title,
      change: () => quietly(written(spot, labels)),
    })
    const place = locate(document, offset)
    const here = place?.kind === 'label' && ofBook(place.label.label) ? [place.label.label] : []
    const all = [...new Set(path.pieces.flatMap(({ labels }) => labels.map(({ label }) => label)))].filter(
      ofBook,
    )
    return [
      ...here.map(label => offer(`one/${label}`, `Write ${displayLabel(label)} into the points`, [label])),
      ...(all.length > here.length
        ? [offer('all', `Write ${count(all.length, 'label')} of the path into the points`, all)]
        : []),
    ]
  },
}

/** Entries with the book's coordinates in the file's frame. */
function written({ crystal, document, text }: Spot, labels: readonly string[]): TextEdit[] {
  const { dimension } = crystal.lattice!
  const toFrame = inverse(crystal.pointAxes!)
  const isPrimitive = document.frames.points === 'primitive'
  const added = labels.map((label): NewKey => {
    const { fraction, cartesian } = crystal.bookPoints.get(label)!
    const numbers: Vec3 = isPrimitive ? fraction : combine(cartesian, toFrame)
    return [label, `[${numbers.slice(0, dimension).map(numberText).join(', ')}]`]
  })
  if (document.points) return insertKeys(text, document.points, added)
  const block = added.map(([label, numbers]) => `${scalarText(label)}: ${numbers}`).join(', ')
  return insertKeys(text, document, [['points', `{${block}}`]])
}

export const forgetPoint: Refactor = {
  id: 'forget-point',
  kind: 'refactor.rewrite',
  offers(spot) {
    const { document, text, offset } = spot
    const { points } = document
    if (!points || !isIn(points, spot)) return []
    const same = points.items.filter(entry => isOfBook(spot, entry))
    const here = same.find(({ key, at }) => covers([key[0], Math.max(key[1], at[1])], offset))
    const offer = (key: string, title: string, entries: readonly PointEntry[]): Offer => ({
      key,
      title,
      change: () => quietly(removeItems(points, entries)),
    })
    const removable = same.filter(({ item }) => item[1] > item[0] && !text.slice(...item).includes('&'))
    return [
      ...(here && removable.includes(here)
        ? [
            offer(
              'one',
              `Leave ${displayLabel(here.label)} to the label book, which has it at the same place`,
              [here],
            ),
          ]
        : []),
      ...(removable.length > 1
        ? [
            offer(
              'all',
              `Leave the ${removable.length} points to the label book that it has at the same places`,
              removable,
            ),
          ]
        : []),
    ]
  },
}

/** Within what is written of a coordinate of ten digits, relative to the size of the zone. */
const SAME_PLACE = 1e-8

function isOfBook({ crystal }: Spot, { label }: PointEntry): boolean {
  const own = crystal.points.get(label)
  const book = crystal.bookPoints.get(label)
  if (!own || !book || !crystal.zone) return false
  return distance(own.cartesian, book.cartesian) <= SAME_PLACE * crystal.zone.circumradius
}
