import type { Mat3 } from '../../crystal/vector.ts'
import { skewness } from '../../crystal/reduction.ts'
import type { Fix } from '../../format/model.ts'
import { restate } from '../../meaning/rewrite.ts'
import { length, plain } from '../../meaning/wording.ts'
import type { Check, Context } from '../check.ts'

interface Facts {
  /** Product of the vectors' lengths over that of the shortest basis. */
  readonly ratio: number
}

export const latticeNotReduced: Check<Facts> = {
  id: 'lattice-not-reduced',
  severity: 'info',
  summary: 'The basis is needlessly skewed: shorter vectors span the same lattice.',
  why: 'Equal divisions along skewed vectors make an uneven mesh, and coordinates are hard to read.',
  wrong: 'lattice:\n  vectors: [[4, 0, 0], [8, 5, 0], [0, 0, 6]]\n',
  right: 'lattice:\n  vectors: [[4, 0, 0], [0, 5, 0], [0, 0, 6]]\n',
  *run(context) {
    const { lattice, document } = context.crystal
    const block = document.lattice
    if (!lattice || !block?.vectors || (block.centring && block.centring.value !== 'P')) return
    const { ratio, skewed, short } = skewness(lattice.primitive, lattice.dimension)
    if (!skewed) return
    const lengths = short.lengths.map(x => length(x, document.unit)).join(', ')
    yield {
      at: block.vectors.at,
      message: `The basis is needlessly skewed: the product of its lengths is ${plain(ratio, 2)} times that of the shortest basis, whose vectors measure ${lengths}.`,
      facts: { ratio },
      fixes: fixesFor(context, short.change),
    }
  },
}

function fixesFor({ crystal, text }: Context, change: Mat3): Fix[] {
  const restated = restate(crystal, text, { change, centring: 'P' })
  return restated
    ? [
        {
          title: 'Write the shortest basis, with all that refers to it',
          safe: false,
          edits: restated.edits,
        },
      ]
    : []
}
