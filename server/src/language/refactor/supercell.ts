import type { Restatement } from '../../meaning/rewrite.ts'
import { isWritable, restateForSupercell } from '../../meaning/rewrite-supercell.ts'
import { supercellIn } from '../../meaning/supercell-map.ts'
import type { Change, Offer, Refactor, Spot } from './refactor.ts'
import { isIn } from './refactor.ts'

export const rewriteForSupercell: Refactor = {
  id: 'rewrite-for-supercell',
  kind: 'refactor.rewrite',
  offers: spot => (isIn(spot.document.supercell, spot) ? supercellOffers(spot) : []),
}

/** Wherever in the document the spot is. */
export function supercellOffers({ crystal, text }: Spot): Offer[] {
  if (!supercellIn(crystal) || !isWritable(crystal)) return []
  return [
    {
      key: 'supercell',
      title: 'Rewrite the file for this supercell',
      change: () =>
        asChange(restateForSupercell(crystal, text), 'Lattice, atoms and points are of another cell'),
    },
  ]
}

/** A restatement, with what it could not keep. */
export function asChange(restated: Restatement | undefined, told: string): Change | undefined {
  if (!restated || restated.edits.length === 0) return undefined
  const losses = [
    ...(restated.rotation ? ['the crystal is turned in space'] : []),
    ...(restated.labelsKept ? [] : ['labels of the book come to stand elsewhere']),
    ...(restated.meshesKept ? [] : ['a mesh has other k-points']),
  ]
  return { edits: restated.edits, confirm: [told, ...losses].join('; ') }
}
