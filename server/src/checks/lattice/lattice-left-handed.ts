import type { Centring } from '../../crystal/bravais.ts'
import { determinant, type Mat3 } from '../../crystal/vector.ts'
import type { Fix } from '../../format/model.ts'
import { keepsAll, restate } from '../../meaning/rewrite.ts'
import { content } from '../../meaning/wording.ts'
import type { Check, Context } from '../check.ts'

interface Facts {
  /** The triple product of the rows as they stand, negative, in the file's unit. */
  readonly volume: number
}

export const latticeLeftHanded: Check<Facts> = {
  id: 'lattice-left-handed',
  severity: 'warning',
  summary: 'The three lattice vectors form a left-handed set.',
  why: 'Many programs refuse it, or turn it over in silence: then coordinates, divisions and matrices refer to other axes than meant.',
  wrong: 'lattice:\n  vectors: [[0, 4.2, 0], [5.1, 0, 0], [0, 0, 6.3]]\n',
  right: 'lattice:\n  vectors: [[5.1, 0, 0], [0, 4.2, 0], [0, 0, 6.3]]\n',
  *run(context) {
    const { lattice, document } = context.crystal
    const vectors = document.lattice?.vectors
    if (!vectors || lattice?.dimension !== 3 || lattice.handedness > 0) return
    const volume = determinant(lattice.conventional)
    yield {
      at: vectors.at,
      message: `The vectors are left-handed, (a × b)·c = ${content(volume, 3, document.unit)}: ${REMEDY[lattice.centring].advice}.`,
      facts: { volume },
      fixes: fixesFor(context),
    }
  },
}

interface Remedy {
  readonly advice: string
  readonly title: string
  readonly change: Mat3
}

const exchange = (pair: string, change: Mat3): Remedy => ({
  advice: `exchange two of them, with all that refers to them`,
  title: `Exchange ${pair}, with all that refers to them`,
  change,
})

const A_B = exchange('a and b', [
  [0, 1, 0],
  [1, 0, 0],
  [0, 0, 1],
])
const B_C = exchange('b and c', [
  [1, 0, 0],
  [0, 0, 1],
  [0, 1, 0],
])
const A_C = exchange('a and c', [
  [0, 0, 1],
  [0, 1, 0],
  [1, 0, 0],
])
/** What turns a cell of each centring into a right-handed one of the same. */
const REMEDY: Record<Centring, Remedy> = {
  P: A_B,
  C: A_B,
  F: A_B,
  I: A_B,
  A: B_C,
  B: A_C,
  // Exchanging two axes would make the reverse setting of the obverse one.
  R: {
    advice: 'turn all three over, with all that refers to them',
    title: 'Turn a, b and c over, with all that refers to them',
    change: [
      [-1, 0, 0],
      [0, -1, 0],
      [0, 0, -1],
    ],
  },
}

function fixesFor({ crystal, text }: Context): Fix[] {
  const { centring } = crystal.lattice!
  const { title, change } = REMEDY[centring]
  const restated = restate(crystal, text, { change, centring })
  return restated ? [{ title, safe: keepsAll(restated), edits: restated.edits }] : []
}
