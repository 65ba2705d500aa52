import { lineEnd, lineStart } from '../../format/text.ts'
import type { PlacedAtom } from '../../meaning/crystal.ts'
import type { TextEdit } from '../../format/model.ts'
import type { Refactor, Spot } from './refactor.ts'
import { isIn, quietly } from './refactor.ts'

export const sortAtoms: Refactor = {
  id: 'sort-atoms',
  kind: 'refactor.rewrite',
  offers(spot) {
    const { crystal, document } = spot
    if (!isIn(document.atoms, spot) || !crystal.atomsComplete || crystal.atoms.length < 2) return []
    const order = [...crystal.atoms].sort(byElement)
    if (order.every((atom, i) => atom === crystal.atoms[i])) return []
    return [
      {
        key: 'element',
        title: 'Sort the atoms by element, then by coordinates',
        change: () => quietly(sorted(spot, order)),
      },
    ]
  },
}

/** Coordinates that differ by less are one. */
const SAME = 1e-9

function byElement(p: PlacedAtom, q: PlacedAtom): number {
  const names = compare(p.element, q.element) || compare(p.entry.name?.value ?? '', q.entry.name?.value ?? '')
  if (names !== 0) return names
  for (const i of [0, 1, 2] as const)
    if (Math.abs(p.stated[i] - q.stated[i]) > SAME) return p.stated[i] - q.stated[i]
  return p.index - q.index
}
const compare = (s: string, t: string): number => (s < t ? -1 : s > t ? 1 : 0)

/** The items' own characters change places; in a list of lines, whole lines do, with the comments above and behind. */
function sorted({ document, text }: Spot, order: readonly PlacedAtom[]): TextEdit[] | undefined {
  const items = document.atoms!.items
  const [from, to] = [items[0].at[0], items.at(-1)!.at[1]]
  // An alias must stay behind its anchor.
  if (ANCHOR_OR_ALIAS.test(text.slice(from, to))) return undefined
  if (text[document.atoms!.at[0]] === '[') {
    if (text.slice(from, to).includes('#')) return undefined
    return items.map(({ at }, i) => ({ at, text: text.slice(...order[i].entry.at) }))
  }
  const ends = items.map(({ at }) => lineEnd(text, at[1]))
  const starts = items.map(({ at }, i) =>
    i === 0 ? lineStart(text, at[0]) : ends[i - 1] + feedAt(text, ends[i - 1]),
  )
  return items.map((_, i) => {
    const { index } = order[i]
    return { at: [starts[i], ends[i]], text: text.slice(starts[index], ends[index]) }
  })
}

/** `2*a` is none. */
const ANCHOR_OR_ALIAS = /[\s[{,][&*][^\s,\]}]/

const feedAt = (text: string, end: number): number => (text[end] === '\r' ? 2 : 1)
