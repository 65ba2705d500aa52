/** Restate a document for the supercell that it states. */
import { multiply } from '../crystal/vector.ts'
import type { Crystal } from './crystal.ts'
import { type Restatement, restate } from './rewrite.ts'
import { MOST_COPIES } from './rewrite-copies.ts'
import { supercellIn } from './supercell-map.ts'

/**
 * The document as one of its supercell: lattice by vectors where they lie in space, atoms copied, points and path at the
 * same k, meshes on the new reciprocal vectors, without the key `supercell`.
 * @returns undefined where the supercell cannot be read, is too large, or something that refers to it cannot be read.
 */
export function restateForSupercell(crystal: Crystal, text: string): Restatement | undefined {
  const supercell = supercellIn(crystal)
  if (!supercell || !crystal.lattice || !isWritable(crystal)) return undefined
  return restate(crystal, text, {
    change: multiply(supercell.matrix, crystal.lattice.primitiveFromConventional),
    centring: 'P',
    supercell: supercell.matrix,
  })
}

/** A file of that many atoms would still be one to read. */
export const isWritable = (crystal: Crystal): boolean =>
  (supercellIn(crystal)?.fold ?? 0) * Math.max(1, crystal.document.atoms?.items.length ?? 0) <= MOST_COPIES
