import { combine, norm, subtract, type Vec3 } from '../../crystal/vector.ts'
import { removeItems } from '../../format/edits.ts'
import type { Crystal, PlacedAtom } from '../../meaning/crystal.ts'
import { length } from '../../meaning/wording.ts'
import type { Check, Finding } from '../check.ts'
import { isWrittenOut } from './atoms-written-out.ts'
import { coincidences, nameOf } from './contacts.ts'
import { few } from './few.ts'

interface Facts {
  /** Ordinals in the file, from 0. */
  readonly atom: number
  readonly other: number
}

export const atomsCoincide: Check<Facts> = {
  id: 'atoms-coincide',
  severity: 'error',
  needs: ['unit', 'frames.atoms'],
  summary: 'Two atoms are at one place, lattice translations counted.',
  why: 'No crystal is like that: a program stops, or computes an atom too many.',
  wrong: 'lattice: {bravais: cP, a: 4.12}\natoms:\n  - Cs: [0, 0, 0]\n  - Cl: [1, 0, 0]\n',
  right: 'lattice: {bravais: cP, a: 4.12}\natoms:\n  - Cs: [0, 0, 0]\n  - Cl: [1/2, 1/2, 1/2]\n',
  *run({ crystal }) {
    if (isWrittenOut(crystal)) return
    const findings = coincidences(crystal).flatMap(([first, ...others]) =>
      others.map(other => finding(crystal, first, other)),
    )
    yield* few(findings.sort((f, g) => f.at[0] - g.at[0]))
  },
}

function finding(crystal: Crystal, first: PlacedAtom, other: PlacedAtom): Finding<Facts> {
  const { dimension, primitive } = crystal.lattice!
  const apart = subtract(other.fraction, first.fraction)
  const whole = apart.map((x, i) => (i < dimension ? Math.round(x) : 0)) as unknown as Vec3
  const away = norm(combine(subtract(apart, whole), primitive))
  const exactly = away < SAME * norm(primitive[0]) ? '' : ` but for ${length(away, crystal.unit)}`
  const translated = whole.some(x => x !== 0) ? ', a lattice vector apart' : ''
  return {
    at: other.entry.position!.at,
    message: `${nameOf(other)} is at the place of ${nameOf(first)}${exactly}${translated}.`,
    facts: { atom: other.index, other: first.index },
    related: [{ at: first.entry.position!.at, message: nameOf(first) }],
    fixes: [
      {
        title: `Remove ${nameOf(other)}`,
        safe: false,
        edits: removeItems(crystal.document.atoms!, [other.entry]),
      },
    ],
  }
}

/** What arithmetic leaves of a distance of zero, relative to a lattice vector. */
const SAME = 1e-9
