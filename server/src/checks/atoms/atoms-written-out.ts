import { CENTRING_TABLES } from '../../crystal/bravais.ts'
import { removeItems } from '../../format/edits.ts'
import type { Crystal } from '../../meaning/crystal.ts'
import { count } from '../../meaning/wording.ts'
import type { Check } from '../check.ts'
import { coincidences, once } from './contacts.ts'

interface Facts {
  readonly listed: number
  /** How many of them are different atoms. */
  readonly different: number
}

export const atomsWrittenOut: Check<Facts> = {
  id: 'atoms-written-out',
  severity: 'error',
  needs: ['unit', 'frames.atoms'],
  summary: 'The atoms are listed with their centring copies, which the lattice already has.',
  why: 'Atoms are the basis of the crystal, one copy at each lattice point: written out, every atom is there several times.',
  wrong: 'lattice: {bravais: cI, a: 2.87}\natoms:\n  - Fe: [0, 0, 0]\n  - Fe: [1/2, 1/2, 1/2]\n',
  right: 'lattice: {bravais: cI, a: 2.87}\natoms:\n  - Fe: [0, 0, 0]\n',
  *run({ document, crystal }) {
    if (!document.atoms || !isWrittenOut(crystal)) return
    const groups = coincidences(crystal)
    const surplus = groups.flatMap(([, ...others]) => others)
    const listed = crystal.atoms.length
    const { centring } = crystal.lattice!
    yield {
      at: document.atoms.key,
      message: `The ${listed} atoms are ${groups.length} with their centring copies, but the lattice, centred ${centring}, has the copies already: list one of each.`,
      facts: { listed, different: groups.length },
      related: surplus.slice(0, 1).map(({ entry }) => ({ at: entry.at, message: 'The first copy' })),
      fixes: [
        {
          title: `Keep one of each: remove ${count(surplus.length, 'copy', 'copies')}`,
          safe: true, // The same places are taken by the same atoms.
          edits: removeItems(
            document.atoms,
            surplus.map(({ entry }) => entry),
          ),
        },
      ],
    }
  },
}

/** No atom of a centred lattice stands alone, and those at one place are of one kind. */
export const isWrittenOut = once((crystal: Crystal): boolean => {
  const { lattice, atoms } = crystal
  if (!lattice || atoms.length === 0 || CENTRING_TABLES[lattice.centring].points === 1) return false
  const groups = coincidences(crystal)
  const grouped = groups.reduce((sum, group) => sum + group.length, 0)
  return grouped === atoms.length && groups.every(group => group.every(atom => atom.kind === group[0].kind))
})
