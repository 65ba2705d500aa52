import { BRAVAIS, type BravaisType, completeCell } from '../../crystal/bravais.ts'
import { cellParameters } from '../../crystal/lattice.ts'
import { IDENTITY, type Mat3, multiply, norm } from '../../crystal/vector.ts'
import type { Fix } from '../../format/model.ts'
import type { Crystal } from '../../meaning/crystal.ts'
import { keepsAll, restate } from '../../meaning/rewrite.ts'
import type { Check, Context } from '../check.ts'
import { isSpecialCase, named } from './kinship.ts'

interface Facts {
  readonly stated: BravaisType
  readonly found: BravaisType
}

export const latticeHiddenSymmetry: Check<Facts> = {
  id: 'lattice-hidden-symmetry',
  severity: 'info',
  summary: 'The lattice is more symmetric than the stated Bravais type.',
  why: 'Labels and symmetry points follow the lattice as it is, not the type that is stated.',
  wrong: 'lattice: {bravais: oP, a: 4, b: 4, c: 6}\n',
  right: 'lattice: {bravais: tP, a: 4, c: 6}\n',
  *run(context) {
    const { crystal, document } = context
    const { type } = crystal
    const bravais = document.lattice?.bravais
    const found = type?.bravais
    if (!bravais || !found || !isSpecialCase(found, bravais.value)) return
    const own = crystal.symmetry?.bravais
    const kept =
      own && crystal.atoms.length > 0 && isSpecialCase(found, own)
        ? `; the atoms keep only ${named(own)}`
        : ''
    yield {
      at: bravais.at,
      message: `The lattice is of type ${named(found)}, more symmetric than the stated ${named(bravais.value)}${kept}.`,
      facts: { stated: bravais.value, found },
      fixes: fixesFor(context, found),
    }
  },
}

function fixesFor({ crystal, text, document }: Context, found: BravaisType): Fix[] {
  const { type } = crystal
  const { bravais, vectors } = document.lattice!
  const title = `State the type ${named(found)}`
  // Beside vectors the type is a claim, and nothing else refers to it.
  if (vectors) return [{ title, safe: !crystal.isLessSymmetric, edits: [{ at: bravais!.at, text: found }] }]
  const change = axesOf(crystal, found)
  const restated = restate(crystal, text, { change, centring: BRAVAIS[found].centring, bravais: found })
  if (!restated) return []
  const isExact = type!.misfit <= SAME * norm(type!.conventional[0])
  // Atoms that keep only the stated type keep its labels too, so another type would name other points.
  const safe = isExact && keepsAll(restated) && !restated.rotation && !crystal.isLessSymmetric
  return [{ title, safe, edits: restated.edits }]
}

/** What arithmetic leaves of a misfit of zero, relative to a lattice vector. */
const SAME = 1e-9

const IN_TURN: readonly Mat3[] = [
  IDENTITY,
  [
    [0, 1, 0],
    [0, 0, 1],
    [1, 0, 0],
  ],
  [
    [0, 0, 1],
    [1, 0, 0],
    [0, 1, 0],
  ],
]

/** The axes of the higher type: the stated ones where they will do, also in turn, else the type's own. */
function axesOf({ build, lattice, type, document }: Crystal, found: BravaisType): Mat3 {
  const stated = document.lattice!.bravais!.value
  const { conventional, dimension, primitiveFromConventional } = lattice!
  if (build.cell && BRAVAIS[found].centring === BRAVAIS[stated].centring) {
    const change = IN_TURN.slice(0, dimension === 3 ? 3 : 1).find(axes => {
      const { a, b, c, alpha, beta, gamma } = cellParameters(multiply(axes, conventional))
      const completed = completeCell(
        found,
        dimension === 3 ? { a, b, c, alpha, beta, gamma } : { a, b, gamma },
      )
      return 'cell' in completed && completed.contradictions.length === 0
    })
    if (change) return change
  }
  return multiply(type!.conventionalFromPrimitive, primitiveFromConventional)
}
