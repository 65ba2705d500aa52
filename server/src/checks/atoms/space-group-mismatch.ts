import {
  groupOnLattice,
  type NamedSpaceGroup,
  namedSpaceGroup,
  SYMBOL_AND_NUMBER,
  spaceGroupSymbols,
} from '../../crystal/space-group.ts'
import { insertKeys, removeEntry } from '../../format/edits.ts'
import type { Fix } from '../../format/model.ts'
import { nearest } from '../../format/nearest.ts'
import { formatNumber } from '../../format/numbers.ts'
import type { Crystal } from '../../meaning/crystal.ts'
import { length } from '../../meaning/wording.ts'
import type { SymmetryOutcome } from '../../meaning/workshop.ts'
import type { Check, Context, Finding } from '../check.ts'
import { named } from '../lattice/kinship.ts'
import { coincidences } from './contacts.ts'

interface Facts {
  readonly claimed?: number
  readonly found?: number
}

export const spaceGroupMismatch: Check<Facts> = {
  id: 'space-group-mismatch',
  severity: 'error',
  needs: ['frames.atoms'],
  summary: 'The claimed space group is not the one that lattice and atoms have.',
  why: 'Either the claim or a coordinate is wrong; operations and k-point weights follow the atoms, not the claim.',
  wrong:
    'lattice: {bravais: cF, a: 5.43}\natoms:\n  - Si: [0, 0, 0]\n  - Si: [1/4, 1/4, 1/4]\nspace-group: Fm-3m\n',
  right:
    'lattice: {bravais: cF, a: 5.43}\natoms:\n  - Si: [0, 0, 0]\n  - Si: [1/4, 1/4, 1/4]\nspace-group: Fd-3m\n',
  *run(context) {
    const { document, crystal } = context
    const claim = document.spaceGroup
    if (!claim || crystal.dimension !== 3) return
    const group = namedSpaceGroup(claim.value)
    if (!group) yield unknown(claim.value, claim.at)
    else if (crystal.atoms.length > 0) yield* againstAtoms(context, group)
    else yield* againstLattice(context, group)
  },
}

function unknown(claim: number | string, at: Finding['at']): Finding<Facts> {
  const both = typeof claim === 'string' ? SYMBOL_AND_NUMBER.exec(claim) : null
  const [bySymbol, byNumber] = both ? [namedSpaceGroup(both[1]), namedSpaceGroup(Number(both[2]))] : []
  if (bySymbol && byNumber)
    return {
      at,
      message: `Symbol and number are not of one space group: ${both![1]} is number ${bySymbol.number}, and ${byNumber.number} is ${byNumber.symbol}.`,
      facts: {},
      fixes: [bySymbol, byNumber].map(group => ({
        title: `State ${nameOf(group)}`,
        safe: false,
        edits: [{ at, text: nameOf(group) }],
      })),
    }
  const near = typeof claim === 'string' ? nearest(claim, spaceGroupSymbols()) : undefined
  const meant = near
    ? `; did you mean ${near}?`
    : ': a number from 1 to 230 or a Hermann–Mauguin symbol stands here.'
  return {
    at,
    message: `No space group is called ${claim}${meant}`,
    facts: {},
    fixes: near ? [{ title: `Replace by ${near}`, safe: false, edits: [{ at, text: near }] }] : [],
  }
}

function* againstLattice({ crystal, document }: Context, group: NamedSpaceGroup): Iterable<Finding<Facts>> {
  const { type, lattice } = crystal
  if (!type?.bravais || !lattice || groupOnLattice(group, type, lattice.conventionalFromPrimitive)) return
  yield {
    at: document.spaceGroup!.at,
    message: `${nameOf(group)} needs a lattice of type ${named(group.bravais)}; this one is ${named(type.bravais)}.`,
    facts: { claimed: group.number },
  }
}

function* againstAtoms(context: Context, group: NamedSpaceGroup): Iterable<Finding<Facts>> {
  const { crystal, document } = context
  const claim = document.spaceGroup!
  if (coincidences(crystal).length > 0) return // Said there.
  const found = groupIn(crystal.symmetryOutcome)
  if (!found || found.number === group.number) return
  if (isNamed(crystal)) {
    const plain = groupIn(crystal.searchWith(withoutNames(crystal)))
    if (!plain || plain.number === group.number) return
  }
  const { number, symbol } = found
  const text = typeof claim.value === 'number' ? String(number) : symbol
  const tolerance = toleranceFor(crystal, group)
  const within = tolerance
    ? ` Within ${length(tolerance, crystal.unit)} it would be: state that as \`tolerance\`, or coordinates with more digits.`
    : ''
  yield {
    at: claim.at,
    message: `Lattice and atoms have the space group ${symbol} (${number}) within ${length(crystal.tolerance, crystal.unit, 6)}, not ${nameOf(group)}.${within}`,
    facts: { claimed: group.number, found: number },
    fixes: [
      ...(tolerance ? [looser(context, tolerance)] : []),
      { title: `State the one found, ${text}`, safe: false, edits: [{ at: claim.at, text }] },
      {
        title: 'Claim none',
        safe: false,
        edits: [removeEntry(context.text, document.keys.get('space-group')!)],
      },
    ],
  }
}

function looser({ document, text }: Context, tolerance: number): Fix {
  const written = formatNumber(tolerance)
  const edits = document.tolerance
    ? [{ at: document.tolerance.at, text: written }]
    : insertKeys(text, document, [['tolerance', written]])
  return { title: `State \`tolerance: ${written}\``, safe: false, edits }
}

const nameOf = ({ symbol, number }: NamedSpaceGroup): string => `${symbol} (${number})`

/** Undefined too where the tolerance had to be lowered: then the group may be too low. */
const groupIn = (outcome: SymmetryOutcome) =>
  outcome.state === 'found' && !outcome.symmetry.toleranceLowered ? outcome.symmetry.spaceGroup : undefined

const isNamed = ({ atoms }: Crystal): boolean => atoms.some(({ entry }) => entry.name)

/** The atoms told apart by their element alone. */
function withoutNames({ atoms }: Crystal) {
  const elements = [...new Set(atoms.map(({ element }) => element))]
  return atoms.map(({ fraction, element }) => ({ fraction, kind: elements.indexOf(element) }))
}

/** In Å: structures of three or four digits miss their symmetry by so much. */
const LOOSER = [0.005, 0.02, 0.05]

/** The tolerance within which the claim would hold. */
function toleranceFor(crystal: Crystal, group: NamedSpaceGroup): number | undefined {
  return LOOSER.map(angstroms => Number((angstroms / crystal.angstrom).toPrecision(2))).find(
    tolerance =>
      tolerance > crystal.tolerance &&
      groupIn(crystal.searchWith(crystal.atoms, tolerance))?.number === group.number,
  )
}
