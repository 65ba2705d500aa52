import type { LatticeFault } from '../../crystal/lattice.ts'
import { cross, norm, type Vec3 } from '../../crystal/vector.ts'
import type { LatticeBlock, VectorValue } from '../../format/model.ts'
import { content, length } from '../../meaning/wording.ts'
import type { Check, Context, Finding } from '../check.ts'

interface Facts {
  /** What the vectors span, in the file's unit. */
  readonly volume: number
}

export const latticeFlat: Check<Facts> = {
  id: 'lattice-flat',
  severity: 'error',
  summary: 'The lattice vectors span no volume (no area, no length).',
  why: 'Without a cell there is no reciprocal lattice, and nothing can be computed.',
  wrong: 'lattice:\n  vectors: [[1, 0, 0], [0, 1, 0], [1, 1, 0]]\n',
  right: 'lattice:\n  vectors: [[1, 0, 0], [0, 1.2, 0], [0, 0, 1.5]]\n',
  *run(context) {
    const { document, crystal } = context
    const block = document.lattice
    if (!block) return
    const { fault } = crystal.build
    if (fault?.fault === 'flat') yield flat(context, block, fault)
    if (fault?.fault === 'lengths') yield* beyondNumbers(context, block, fault.vectors)
  },
}

const SPANS = ['', 'no length', 'no area', 'no volume']

function flat(
  { crystal, document }: Context,
  block: LatticeBlock,
  { volume }: LatticeFault & { fault: 'flat' },
): Finding<Facts> {
  const dimension = crystal.dimension!
  const facts = { volume }
  const spans = `${SPANS[dimension]}${volume > 0 ? ` to speak of (${content(volume, dimension, document.unit)})` : ''}`
  if (!block.vectors)
    return { at: block.bravais!.at, message: `The cell is flat: its vectors span ${spans}.`, facts }
  const rows = block.vectors.rows as readonly VectorValue[]
  const vectors = rows.map(vectorOf)
  const zero = vectors.findIndex(v => norm(v) === 0)
  if (zero >= 0)
    return { at: rows[zero].at, message: `Vector ${zero + 1} is zero: the vectors span ${spans}.`, facts }
  for (let j = 1; j < vectors.length; j++)
    for (let i = 0; i < j; i++)
      if (areParallel(vectors[i], vectors[j]))
        return {
          at: rows[j].at,
          message: `Vector ${j + 1} is parallel to vector ${i + 1}: the vectors span ${spans}.`,
          facts,
          related: [{ at: rows[i].at, message: `Vector ${i + 1}` }],
        }
  return {
    at: block.vectors.at,
    message: `The three vectors lie in one plane: they span ${spans}. Each must lead out of the plane of the other two.`,
    facts,
  }
}

const vectorOf = ({ items }: VectorValue): Vec3 => [0, 1, 2].map(i => items[i]?.value ?? 0) as unknown as Vec3

/** The sine of their angle is rounding. */
const PARALLEL = 1e-13
const areParallel = (u: Vec3, v: Vec3): boolean => norm(cross(u, v)) <= PARALLEL * norm(u) * norm(v)

const NAMES = ['a', 'b', 'c'] as const

/** Lengths with which no double number can compute; the decoder has refused those that are not positive. */
function* beyondNumbers(
  { crystal }: Context,
  block: LatticeBlock,
  vectors: readonly number[],
): Iterable<Finding<Facts>> {
  for (const i of vectors) {
    const row = block.vectors?.rows[i]
    const number = block.parameters[NAMES[i]]
    if (!row && !number) continue // The type ties it to another length, where it is said.
    const value = row ? norm(vectorOf(row)) : number!.value
    yield {
      at: row?.at ?? number!.at,
      message: `${NAMES[i]} = ${length(value, crystal.unit)} is too ${value > 1 ? 'long' : 'short'} a vector to be computed with.`,
      facts: { volume: 0 },
    }
  }
}
