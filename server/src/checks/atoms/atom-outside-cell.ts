import { plusWhole, sumOf, writeSum } from '../../meaning/combinations.ts'
import { count, plain } from '../../meaning/wording.ts'
import type { Check } from '../check.ts'
import { nameOf } from './contacts.ts'
import { few } from './few.ts'
import { suspectedFrame } from './suspicions.ts'

interface Facts {
  readonly atom: number
}

/** Relaxed structures have slightly negative fractions, and a molecule reaches into the next cell; more is unusual. */
const LEAST = -0.5
const MOST = 1.5
/** What arithmetic leaves of a whole number. */
const SAME = 1e-9

export const atomOutsideCell: Check<Facts> = {
  id: 'atom-outside-cell',
  severity: 'info',
  needs: ['frames.atoms'],
  summary: 'A fractional coordinate of an atom lies outside −1/2 to 3/2.',
  why: 'It is an equivalent of a place inside the cell; far outside, it is often a slip or a length.',
  wrong: 'lattice: {bravais: cP, a: 4.12}\natoms:\n  - Cs: [0, 0, 0]\n  - Cl: [5/2, 1/2, 1/2]\n',
  right: 'lattice: {bravais: cP, a: 4.12}\natoms:\n  - Cs: [0, 0, 0]\n  - Cl: [1/2, 1/2, 1/2]\n',
  *run({ crystal, document }) {
    const { dimension } = crystal
    if (!dimension || document.frames.atoms === 'cartesian' || suspectedFrame(crystal)) return
    const findings = crystal.atoms.flatMap(atom => {
      const position = atom.entry.position!
      const outside = position.items
        .slice(0, dimension)
        .filter(item => item!.value < LEAST || item!.value >= MOST)
      if (outside.length === 0) return []
      const at = outside.length === 1 ? outside[0]!.at : position.at
      const values = outside.map(item => plain(item!.value)).join(', ')
      const edits = outside.map(item => {
        const sum = sumOf([item!], [{ p: 1, q: 1 }])
        return { at: item!.at, text: writeSum(plusWhole(sum, -Math.floor(sum.value + SAME)), () => true) }
      })
      const inside = edits.map(({ text }) => text).join(', ')
      return [
        {
          at,
          message: `${nameOf(atom)} lies outside the cell (${values}); inside it would be ${inside}.`,
          facts: { atom: atom.index },
          fixes: [{ title: `Bring ${count(edits.length, 'coordinate')} into the cell`, safe: true, edits }],
        },
      ]
    })
    yield* few(findings)
  },
}
