import type { BookMatch } from '../books/match.ts'
import type { LatticeType, Symmetry, SymmetryInput } from '../crystal/symmetry.ts'
import type { Mat3 } from '../crystal/vector.ts'
import type { Zone } from '../crystal/zone.ts'
import { Memo } from './lazy.ts'

/** What the search for symmetry came to. */
export type SymmetryOutcome =
  | { readonly state: 'found'; readonly symmetry: Symmetry }
  | { readonly state: 'pending' }
  | { readonly state: 'failed'; readonly reason: string }

/** A search that may still be running: `outcome` is read anew at each look. */
export interface SymmetryJob {
  readonly outcome: SymmetryOutcome
  /** It will never run: whoever still needs it asks anew. */
  readonly dropped?: boolean
}

export interface SymmetryService {
  /** Answers at once; where the job is still pending, a later snapshot of the same text sees its end. */
  find(input: SymmetryInput): SymmetryJob
}

/** Rotations on columns of primitive fractions, and the group that they are of. */
export interface Rotations {
  readonly matrices: readonly Mat3[]
  readonly pointGroup: string
  readonly spaceGroup?: number
}

/**
 * The steps from a decoded document to a crystal that cost something, each remembered by the numbers it depends on, so
 * that an edit of a k-point recomputes neither lattice nor zone nor symmetry.
 */
export class Workshop {
  readonly zones = new Memo<Zone>(64)
  readonly types = new Memo<LatticeType | undefined>(64)
  readonly symmetries = new Memo<SymmetryJob>(32)
  readonly claims = new Memo<Rotations | undefined>(16)
  readonly matches = new Memo<BookMatch | undefined>(64)

  constructor(readonly symmetry: SymmetryService) {}
}
