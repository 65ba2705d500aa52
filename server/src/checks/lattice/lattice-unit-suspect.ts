import type { Unit } from '../../crystal/units.ts'
import { insertKeys } from '../../format/edits.ts'
import type { Span, TextEdit } from '../../format/model.ts'
import { length, plain } from '../../meaning/wording.ts'
import type { Check, Context } from '../check.ts'
import { nameOf } from '../atoms/contacts.ts'
import { suspectedUnit } from '../atoms/suspicions.ts'

interface Facts {
  readonly unit: Unit
  /** The shortest distance for its atoms, in the file's unit, and over the sum of their covalent radii. */
  readonly distance: number
  readonly ratio: number
}

export const latticeUnitSuspect: Check<Facts> = {
  id: 'lattice-unit-suspect',
  severity: 'warning',
  summary: 'The distances between atoms are those of no solid in the stated unit, but are in another.',
  why: 'A cell in the wrong unit is another crystal: every length, every k and every band width is off.',
  wrong: 'lattice: {bravais: cF, a: 10.263}\natoms:\n  - Si: [0, 0, 0]\n  - Si: [1/4, 1/4, 1/4]\n',
  right:
    'unit: bohr\nlattice: {bravais: cF, a: 10.263}\natoms:\n  - Si: [0, 0, 0]\n  - Si: [1/4, 1/4, 1/4]\n',
  *run(context) {
    const { crystal } = context
    const suspicion = suspectedUnit(crystal)
    if (!suspicion) return
    const { unit, contact, ratio } = suspicion
    const { first, second, distance } = contact
    const pair =
      first === second ? `${nameOf(first)} and its own copy` : `${nameOf(first)} and ${nameOf(second)}`
    yield {
      at: placeOf(context),
      message: `${pair} are ${length(distance, crystal.unit)} apart, ${plain(contact.ratio, 2)} times the sum of their covalent radii, as in no solid; read in ${NAMES[unit]} it is an ordinary ${plain(ratio, 2)} times.${contact.ratio > 1 ? ' Or atoms, or a centring, are missing.' : ''}`,
      facts: { unit, distance, ratio: contact.ratio },
      fixes: [{ title: `State \`unit: ${unit}\``, safe: false, edits: statement(context, unit) }],
    }
  },
}

const NAMES: Record<Unit, string> = { angstrom: 'ångström', nm: 'nm', bohr: 'bohr' }

function placeOf({ document }: Context): Span {
  const { unitEntry, lattice } = document
  return (
    unitEntry?.at ?? (lattice!.vectors ? lattice!.vectors.at : (lattice!.parameters.a?.at ?? lattice!.key))
  )
}

const statement = ({ document, text }: Context, unit: Unit): readonly TextEdit[] =>
  document.unitEntry
    ? [{ at: document.unitEntry.at, text: unit }]
    : insertKeys(text, document, [['unit', unit]])
