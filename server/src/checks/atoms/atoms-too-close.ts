import { covalentRadius } from '../../crystal/elements.ts'
import { forEachPair } from '../../crystal/neighbours.ts'
import type { Crystal, PlacedAtom } from '../../meaning/crystal.ts'
import { length } from '../../meaning/wording.ts'
import type { Check, Finding } from '../check.ts'
import { contradictsVectors } from '../lattice/kinship.ts'
import { distinctAtoms, nameOf } from './contacts.ts'
import { few } from './few.ts'
import { suspectedFrame, suspectedPrimitive, isScaleSuspected } from './suspicions.ts'

interface Facts {
  /** Ordinals in the file, from 0; the same for an atom and its own copy. */
  readonly atom: number
  readonly other: number
  /** In the file's unit. */
  readonly distance: number
}

/** The shortest bonds known (uranyl, U=O) have 0.67 times the sum of covalent radii. */
const CLOSEST = 0.6

export const atomsTooClose: Check<Facts> = {
  id: 'atoms-too-close',
  severity: 'warning',
  needs: ['unit', 'frames.atoms'],
  summary: 'Two atoms are nearer to each other than 0.6 times the sum of their covalent radii.',
  why: 'No bond is that short: a coordinate, the cell or the unit is wrong.',
  wrong: 'lattice: {bravais: cP, a: 4.12}\natoms:\n  - Cs: [0, 0, 0]\n  - Cl: [0.3, 0.2, 0.1]\n',
  right: 'lattice: {bravais: cP, a: 4.12}\natoms:\n  - Cs: [0, 0, 0]\n  - Cl: [1/2, 1/2, 1/2]\n',
  *run({ crystal }) {
    if (contradictsVectors(crystal) || suspectedFrame(crystal) || isScaleSuspected(crystal)) return // They say why.
    const pairs = closePairs(crystal)
    if (pairs.length === 0 || suspectedPrimitive(crystal)) return
    const worst = new Map<PlacedAtom, Close>()
    for (const close of pairs) {
      const known = worst.get(close.second)
      if (!known || close.distance / close.expected < known.distance / known.expected)
        worst.set(close.second, close)
    }
    yield* few([...worst.values()].map(close => finding(crystal, close)).sort((f, g) => f.at[0] - g.at[0]))
  },
}

interface Close {
  readonly first: PlacedAtom
  readonly second: PlacedAtom
  readonly distance: number
  /** The sum of the radii. */
  readonly expected: number
}

/** A file full of atoms on top of each other is wrong enough after this many. */
const MOST_PAIRS = 10_000

function closePairs(crystal: Crystal): Close[] {
  const { lattice, angstrom } = crystal
  if (!lattice) return []
  const atoms = distinctAtoms(crystal).filter(({ element }) => covalentRadius(element) !== undefined)
  const radii = atoms.map(({ element }) => covalentRadius(element)! / angstrom)
  const largest = radii.reduce((x, y) => Math.max(x, y), 0)
  if (largest === 0) return []
  const { primitive: basis, dimension } = lattice
  const close: Close[] = []
  const sites = { basis, dimension, positions: atoms.map(atom => atom.fraction) }
  forEachPair(sites, CLOSEST * 2 * largest, (i, j, distance) => {
    const expected = radii[i] + radii[j]
    if (distance < CLOSEST * expected) close.push({ first: atoms[i], second: atoms[j], distance, expected })
    return close.length < MOST_PAIRS
  })
  return close
}

function finding(crystal: Crystal, { first, second, distance, expected }: Close): Finding<Facts> {
  const own = first === second
  const away = length(distance, crystal.unit, 3)
  const other = own ? 'its own copy in a neighbouring cell' : nameOf(first)
  return {
    at: second.entry.position!.at,
    message: `${nameOf(second)} is only ${away} from ${other}; a bond between them measures about ${length(expected, crystal.unit, 2)}.`,
    facts: { atom: second.index, other: first.index, distance },
    related: own ? [] : [{ at: first.entry.position!.at, message: nameOf(first) }],
  }
}
