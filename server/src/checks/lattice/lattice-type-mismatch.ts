import { BRAVAIS, type BravaisType, type Centring, CENTRINGS } from '../../crystal/bravais.ts'
import { isLattice, latticeFromVectors } from '../../crystal/lattice.ts'
import type { LatticeType } from '../../crystal/symmetry.ts'
import type { Fix, ParameterName, Sourced } from '../../format/model.ts'
import { insertKeys } from '../../format/edits.ts'
import { formatNumber } from '../../format/numbers.ts'
import type { Crystal } from '../../meaning/crystal.ts'
import { count, degrees, length, plain } from '../../meaning/wording.ts'
import type { Check, Context, Finding } from '../check.ts'
import { classOf, contradictsVectors, isSameType, isSpecialCase, named, typeThatFits } from './kinship.ts'
import { nearlySymmetric, typesNearby } from './nearby-types.ts'

interface Facts {
  readonly stated?: BravaisType
  /** What the lattice is, where that is another type. */
  readonly found?: BravaisType
  /** How far vectors miss the stated type, in the file's unit. */
  readonly misfit?: number
}

export const latticeTypeMismatch: Check<Facts> = {
  id: 'lattice-type-mismatch',
  severity: 'error',
  summary: 'The parameters or vectors contradict the stated Bravais type.',
  why: 'Either the type or the numbers are wrong, and which of them a program believes is chance.',
  wrong: 'lattice: {bravais: oP, a: 4, b: 5, c: 6, beta: 99}\n',
  right: 'lattice: {bravais: mP, a: 4, b: 5, c: 6, beta: 99}\n',
  *run(context) {
    const { bravais, vectors } = context.document.lattice ?? {}
    yield* centringFault(context)
    if (!bravais) return
    if (vectors) yield* vectorsAgainst(context, bravais)
    else yield* parametersAgainst(context, bravais)
  },
}

/** A centring that a lattice of this dimension cannot have. */
function* centringFault({ document, crystal }: Context): Iterable<Finding<Facts>> {
  const { centring, bravais } = document.lattice ?? {}
  if (!centring || crystal.build.fault?.fault !== 'centring') return
  yield {
    at: centring.at,
    message: `${crystal.dimension === 2 ? 'A plane lattice is never' : 'A chain is never'} centred ${centring.value}: ${crystal.dimension === 2 ? 'P and C are possible' : 'only P is possible'}.`,
    facts: { stated: bravais?.value },
  }
}

const SYMBOL: Record<ParameterName, string> = { a: 'a', b: 'b', c: 'c', alpha: 'α', beta: 'β', gamma: 'γ' }

function* parametersAgainst(
  { document, crystal }: Context,
  bravais: Sourced<BravaisType>,
): Iterable<Finding<Facts>> {
  const { parameters } = document.lattice!
  const given = Object.fromEntries(Object.entries(parameters).map(([name, number]) => [name, number!.value]))
  const fitting = typeThatFits(bravais.value, given)
  for (const { name, given: value, expected, why } of crystal.build.contradictions ?? []) {
    const number = parameters[name]
    if (!number) continue
    const write = name in LENGTHS ? (x: number) => length(x, crystal.unit) : degrees
    const should = expected === undefined ? '' : `; that would be ${SYMBOL[name]} = ${write(expected)}`
    const fixes: Fix[] = []
    if (expected !== undefined) {
      const text = formatNumber(expected)
      fixes.push({ title: `Replace by ${text}`, safe: false, edits: [{ at: number.at, text }] })
    }
    if (fitting)
      fixes.push({
        title: `State the type ${named(fitting)}`,
        safe: false,
        edits: [{ at: bravais.at, text: fitting }],
      })
    yield {
      at: number.at,
      message: `${SYMBOL[name]} = ${write(value)}, but ${why}${should}.`,
      facts: { stated: bravais.value, found: fitting },
      related: [{ at: bravais.at, message: `The stated type: ${named(bravais.value)}` }],
      fixes,
    }
  }
}
const LENGTHS = { a: true, b: true, c: true }

function* vectorsAgainst(context: Context, bravais: Sourced<BravaisType>): Iterable<Finding<Facts>> {
  const { crystal, document } = context
  const { lattice, type } = crystal
  const stated = bravais.value
  if (!lattice) return
  if (BRAVAIS[stated].dimension !== lattice.dimension) {
    const vectors = count(lattice.dimension, 'vector')
    yield {
      at: bravais.at,
      message: `${named(stated)} is a type in ${BRAVAIS[stated].dimension} dimensions, but there ${lattice.dimension === 1 ? 'is' : 'are'} ${vectors}.`,
      facts: { stated },
    }
    return
  }
  const found = type?.bravais
  if (!found || !contradictsVectors(crystal)) return
  if (nearlySymmetric(crystal)?.type.bravais === classOf(stated)) return // Said by lattice-nearly-symmetric.
  const centring = meantCentring(crystal, stated)
  const misfit = misfitTo(crystal, stated)
  const remedy = centring
    ? ` With \`centring: ${centring}\` they would be: the rows are the edges of the conventional cell.`
    : misfit === undefined
      ? ''
      : ` They miss it by ${length(misfit, crystal.unit)}.`
  yield {
    at: bravais.at,
    message: `The vectors span a lattice of type ${named(found)}, not ${named(stated)}: ${sizes(type!, crystal)}.${remedy}`,
    facts: { stated, found, misfit },
    related: [{ at: document.lattice!.vectors!.at, message: 'The vectors' }],
    fixes: [
      ...(centring ? [statedCentring(context, centring)] : []),
      { title: `State the type ${named(found)}`, safe: false, edits: [{ at: bravais.at, text: found }] },
    ],
  }
}

/** By how much the vectors miss the stated type, a length; undefined where they are far from it. */
const misfitTo = ({ lattice }: Crystal, stated: BravaisType): number | undefined =>
  typesNearby(lattice!.primitive, lattice!.dimension).findLast(
    ({ bravais }) => bravais && (isSameType(bravais, stated) || isSpecialCase(bravais, stated)),
  )?.misfit

function statedCentring({ document, text }: Context, centring: Centring): Fix {
  const block = document.lattice!
  const edits = block.centring
    ? [{ at: block.centring.at, text: centring }]
    : insertKeys(text, block, [['centring', centring]])
  return { title: `State \`centring: ${centring}\``, safe: false, edits }
}

/** The cell that was found: what the eye compares with the numbers in the file. */
function sizes({ cell }: LatticeType, { unit, dimension }: Crystal): string {
  const { a, b, c, alpha, beta, gamma } = cell
  if (dimension === 2)
    return `its cell is ${plain(a)} × ${length(b, unit)} with an angle of ${degrees(gamma)}`
  const angles = [alpha, beta, gamma].map(degrees).join(', ')
  return `its cell is ${plain(a)} × ${plain(b)} × ${length(c, unit)} with angles of ${angles}`
}

/** The centring with which the rows would be of the stated type. */
function meantCentring(crystal: Crystal, stated: BravaisType): Centring | undefined {
  const { conventional, dimension, centring } = crystal.lattice!
  const rows = conventional.slice(0, dimension)
  const own = BRAVAIS[stated].centring
  return [own, ...CENTRINGS].find(candidate => {
    if (candidate === centring) return false
    const lattice = latticeFromVectors(rows, candidate)
    if (!isLattice(lattice)) return false
    const found = crystal.typeOf(lattice.primitive, dimension)?.bravais
    return found !== undefined && isSameType(found, stated)
  })
}
