import type { SupercellBlock, TextEdit } from '../../format/model.ts'
import type { Check } from '../check.ts'
import { integerDeterminant } from '../../crystal/supercell.ts'

interface Facts {
  readonly determinant: number
}

export const supercellLeftHanded: Check<Facts> = {
  id: 'supercell-left-handed',
  severity: 'warning',
  summary: 'A supercell matrix has a negative determinant.',
  why: 'It turns the handedness of the vectors over. Many programs refuse that, or turn it back in silence, and then axes are not those that were meant.',
  wrong: 'lattice: {bravais: cP, a: 3.9}\nsupercell: [[0, 2, 0], [2, 0, 0], [0, 0, 2]]\n',
  right: 'lattice: {bravais: cP, a: 3.9}\nsupercell: [[2, 0, 0], [0, 2, 0], [0, 0, 2]]\n',
  *run({ crystal, document }) {
    const { supercell, dimension } = crystal
    const block = document.supercell
    if (!block || !supercell || !dimension) return
    const determinant = integerDeterminant(supercell)
    if (determinant >= 0n) return
    yield {
      at: block.at,
      message: `The determinant is ${determinant.toString().replace('-', '−')}: the new vectors are of the other hand than the primitive ones. The same supercell with the opposite sign has ${-determinant}.`,
      facts: { determinant: Number(determinant) },
      fixes: [{ title: TITLES[dimension], safe: true, edits: turnedOver(block, dimension) }],
    }
  },
}

const TITLES = ['', 'Negate the matrix', 'Negate the second row', 'Negate the matrix']

/** The same lattice spanned with the other hand: −M in odd dimensions, one negated row in the plane; |M| of a diagonal. */
function turnedOver({ rows, diagonal }: SupercellBlock, dimension: number): TextEdit[] {
  if (diagonal)
    return rows
      .flatMap(row => row?.items ?? [])
      .flatMap(item => (item && item.value < 0 ? [{ at: item.at, text: String(-item.value) }] : []))
  return rows
    .filter((_, i) => i < dimension && (dimension !== 2 || i === 1))
    .flatMap((row, i) => (row?.items ?? []).slice(0, dimension).map(item => ({ item, i })))
    .flatMap(({ item }) => (item && item.value !== 0 ? [{ at: item.at, text: String(-item.value) }] : []))
}
