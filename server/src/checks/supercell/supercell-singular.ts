import type { Check } from '../check.ts'
import { integerDeterminant } from '../../crystal/supercell.ts'

interface Facts {
  /** The entry that is no whole number; absent where the determinant vanishes. */
  readonly entry?: number
}

export const supercellSingular: Check<Facts> = {
  id: 'supercell-singular',
  severity: 'error',
  summary: 'A supercell matrix has determinant 0, or entries that are no whole numbers.',
  why: 'Its rows span no cell, or one in which the crystal does not repeat.',
  wrong: 'lattice: {bravais: cP, a: 3.9}\nsupercell:\n  - [1, 1, 0]\n  - [2, 2, 0]\n  - [0, 0, 1]\n',
  right: 'lattice: {bravais: cP, a: 3.9}\nsupercell:\n  - [1, 1, 0]\n  - [-1, 1, 0]\n  - [0, 0, 1]\n',
  *run({ crystal, document }) {
    const block = document.supercell
    if (!block) return
    let areWhole = true
    for (const item of block.rows.flatMap(row => row?.items ?? [])) {
      if (!item || Number.isSafeInteger(item.value)) continue
      areWhole = false
      yield {
        at: item.at,
        message: `An entry of a supercell matrix is a whole number: it counts primitive vectors, and ${item.text.trim()} of one leads to no lattice point.`,
        facts: { entry: item.value },
      }
    }
    if (!areWhole || !crystal.supercell || integerDeterminant(crystal.supercell) !== 0n) return
    yield {
      at: block.at,
      message: `The determinant is 0: ${block.diagonal ? 'no entry may be 0' : 'one row is a combination of the others, and the new vectors span no volume'}.`,
      facts: {},
    }
  },
}
