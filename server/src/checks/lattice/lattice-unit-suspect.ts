import type { Unit } from '../../crystal/units.ts'
import { insertKeys } from '../../format/edits.ts'
import type { NumberValue, Span, TextEdit } from '../../format/model.ts'
import { length, plain } from '../../meaning/wording.ts'
import type { Check, Context, Finding } from '../check.ts'
import { nameOf, type Tightest } from '../atoms/contacts.ts'
import { suspectedUnit, suspectedUnitsOfA } from '../atoms/suspicions.ts'

interface Facts {
  /** `a` where the vectors are meant in units of that parameter. */
  readonly unit: Unit | 'a'
  /** The shortest distance for its atoms, in the file's unit, and over the sum of their covalent radii. */
  readonly distance: number
  readonly ratio: number
}

export const latticeUnitSuspect: Check<Facts> = {
  id: 'lattice-unit-suspect',
  severity: 'warning',
  needs: ['unit', 'frames.atoms'],
  summary:
    'The distances between atoms are those of no solid in the stated unit, but are in another, or with the vectors in units of a.',
  why: 'A cell in the wrong unit is another crystal: every length, every k and every band width is off.',
  wrong: 'lattice: {bravais: cF, a: 10.263}\natoms:\n  - Si: [0, 0, 0]\n  - Si: [1/4, 1/4, 1/4]\n',
  right:
    'unit: bohr\nlattice: {bravais: cF, a: 10.263}\natoms:\n  - Si: [0, 0, 0]\n  - Si: [1/4, 1/4, 1/4]\n',
  *run(context) {
    const { crystal } = context
    const ofA = suspectedUnitsOfA(crystal)
    if (ofA) yield inUnitsOfA(context, ofA)
    const suspicion = suspectedUnit(crystal)
    if (!suspicion) return
    const { unit, contact, ratio } = suspicion
    const { distance } = contact
    yield {
      at: placeOf(context),
      message: `${pairOf(contact)} are ${length(distance, crystal.unit)} apart, ${plain(contact.ratio, 2)} times the sum of their covalent radii, as in no solid; read in ${NAMES[unit]} it is an ordinary ${plain(ratio, 2)} times.${contact.ratio > 1 ? ' Or atoms, or a centring, are missing.' : ''}`,
      facts: { unit, distance, ratio: contact.ratio },
      fixes: [{ title: `State \`unit: ${unit}\``, safe: false, edits: statement(context, unit) }],
    }
  },
}

const pairOf = ({ first, second }: Tightest): string =>
  first === second ? `${nameOf(first)} and its own copy` : `${nameOf(first)} and ${nameOf(second)}`

function inUnitsOfA(
  { crystal, document }: Context,
  { a, contact }: NonNullable<ReturnType<typeof suspectedUnitsOfA>>,
): Finding<Facts> {
  const { vectors } = document.lattice!
  const { distance, ratio } = contact
  const numbers = vectors!.rows.flatMap(row => row?.items ?? []).filter(number => number !== undefined)
  return {
    at: vectors!.at,
    message: `${pairOf(contact)} are ${length(distance, crystal.unit)} apart, ${plain(ratio, 2)} times the sum of their covalent radii: the vectors seem to be in units of \`a\`, which nothing uses. Times ${length(a.value, crystal.unit)} it is an ordinary ${plain(ratio * a.value, 2)} times.`,
    facts: { unit: 'a', distance, ratio },
    fixes: [
      {
        title: 'Multiply the vectors by `a`',
        safe: false,
        edits: numbers.flatMap(number =>
          number.value === 0 ? [] : [{ at: number.at, text: timesA(number) }],
        ),
      },
    ],
  }
}

/** `a`, `-a/2`, `0.5*a`, `(1 + sqrt(3))/2*a`. */
function timesA({ text, exact, decimals }: NumberValue): string {
  const bare = text.trim()
  if (exact && (decimals === undefined || exact.q === 1)) {
    const factor = Math.abs(exact.p) === 1 ? '' : `${Math.abs(exact.p)}*`
    return `${exact.p < 0 ? '-' : ''}${factor}a${exact.q === 1 ? '' : `/${exact.q}`}`
  }
  return /[+−-]/.test(bare.slice(1)) ? `(${bare})*a` : `${bare}*a`
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
