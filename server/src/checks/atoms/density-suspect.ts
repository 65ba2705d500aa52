import { covalentRadius } from '../../crystal/elements.ts'
import type { PlacedAtom } from '../../meaning/crystal.ts'
import { plain } from '../../meaning/wording.ts'
import type { Check } from '../check.ts'
import { contradictsVectors } from '../lattice/kinship.ts'
import { isWrittenOut } from './atoms-written-out.ts'
import { distinctAtoms } from './contacts.ts'
import { suspectedFrame, isScaleSuspected } from './suspicions.ts'
import { WIDE_GAP } from './vacuum-undeclared.ts'

interface Facts {
  /** In Å³. */
  readonly volumePerAtom: number
}

/** In Å³ an atom. Diamond has 5.7, ice 11, most metals and salts 10 to 40, potassium 75. */
const DENSEST = 4
const LOOSEST = 80
/** Hydrides under pressure come to 3 Å³ an atom. */
const DENSEST_HYDRIDE = 1.5
/** Caesium has 115 Å³, which is once the cube of its covalent diameter. */
const LOOSEST_CUBES = 1.3

export const densitySuspect: Check<Facts> = {
  id: 'density-suspect',
  severity: 'warning',
  needs: ['unit'],
  summary: 'The volume per atom is one that no solid has: under 4 or over 80 Å³.',
  why: 'Atoms are missing or there are too many of them, or a length of the cell is wrong.',
  wrong:
    'lattice: {bravais: tP, a: 9.2, c: 5.9}\natoms:\n  - Ti: [0, 0, 0]\n  - O: [0.21, 0.21, 0]\n  - O: [0.79, 0.79, 0]\n',
  right:
    'lattice: {bravais: tP, a: 4.6, c: 2.95}\natoms:\n  - Ti: [0, 0, 0]\n  - Ti: [1/2, 1/2, 1/2]\n  - O: [0.305, 0.305, 0]\n  - O: [0.695, 0.695, 0]\n  - O: [0.195, 0.805, 1/2]\n  - O: [0.805, 0.195, 1/2]\n',
  *run({ crystal, document }) {
    const { lattice, angstrom } = crystal
    if (lattice?.dimension !== 3 || !document.atoms || crystal.atoms.length === 0 || !crystal.atomsComplete)
      return
    if (
      contradictsVectors(crystal) ||
      suspectedFrame(crystal) ||
      isScaleSuspected(crystal) ||
      isWrittenOut(crystal)
    )
      return // They say why.
    if (crystal.emptySlabs.some(gap => gap !== undefined && gap * angstrom > WIDE_GAP)) return
    const atoms = distinctAtoms(crystal)
    const volume = (lattice.volume * angstrom ** 3) / atoms.length
    const { least, most } = limits(atoms)
    if (volume >= least && volume <= most) return
    const loose = volume > most
    yield {
      at: document.atoms.key,
      message: `There are ${plain(volume, 1)} Å³ of the cell to an atom; solids of these elements have ${plain(least, 1)} to ${plain(most, 0)} Å³. ${loose ? 'Atoms are missing, or the cell is too large' : 'There are too many atoms, or the cell is too small'}.`,
      facts: { volumePerAtom: volume },
    }
  },
}

function limits(atoms: readonly PlacedAtom[]): { least: number; most: number } {
  const hydrogen = atoms.filter(({ element }) => element === 'H').length
  const cubes =
    atoms.reduce((sum, { element }) => sum + (2 * (covalentRadius(element) ?? 0)) ** 3, 0) / atoms.length
  return {
    least: hydrogen >= atoms.length / 2 ? DENSEST_HYDRIDE : DENSEST,
    most: Math.max(LOOSEST, LOOSEST_CUBES * cubes),
  }
}
