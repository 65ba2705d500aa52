/** What a refactoring is. Each leaves the crystal, the path and the mesh what they are; what it cannot keep it says. */
import { covers, type Snapshot } from '../../analysis.ts'
import type { Entry, LatticeDocument, TextEdit } from '../../format/model.ts'
import type { Crystal } from '../../meaning/crystal.ts'

/** The place in a text that is asked about. */
export interface Spot {
  readonly snapshot: Snapshot
  readonly text: string
  readonly document: LatticeDocument
  readonly crystal: Crystal
  readonly offset: number
}

export interface Change {
  readonly edits: readonly TextEdit[]
  /** What the user should look at before it is done: numbers that change, or that cannot be kept. */
  readonly confirm?: string
}

/** One entry of the menu. Asking for it is cheap: it is done with every opening of the menu. */
export interface Offer {
  /** Tells the offers of one refactoring at one spot apart. */
  readonly key: string
  readonly title: string
  /** Its change; undefined where the text does not allow it, which only the work itself can tell. */
  change(): Change | undefined
}

export interface Refactor {
  readonly id: string
  readonly kind: 'refactor.rewrite' | 'refactor.extract'
  offers(spot: Spot): readonly Offer[]
}

/** Is the spot on a key or in its value? */
export const isIn = (entry: Pick<Entry, 'key' | 'at'> | undefined, { offset }: Spot): boolean =>
  entry !== undefined && covers([entry.key[0], Math.max(entry.key[1], entry.at[1])], offset)

/** Edits as a change that needs no look. */
export const quietly = (edits: readonly TextEdit[] | undefined): Change | undefined =>
  edits && edits.length > 0 ? { edits } : undefined
