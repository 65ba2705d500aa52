import { replaceValue } from '../../format/edits.ts'
import type { Mat3 } from '../../crystal/vector.ts'
import { length, plain } from '../../meaning/wording.ts'
import type { Check } from '../check.ts'
import { integerDeterminant } from '../../crystal/supercell.ts'
import { roundest, shortestImage } from './rounder.ts'

interface Facts {
  /** Lengths in the file's unit. */
  readonly shortest: number
  readonly rounder: number
}

/** Of the cube root of the volume (the square root of the area). A cube has 1, a face-centred cubic cell 1.12. */
const NEEDLE = 1 / 2
/** A rounder cell is worth a word when its images are this much farther apart. */
const WORTHWHILE = 1.2
/** Beyond this the factors alone take long. */
const LARGEST = 10_000

export const supercellSkewed: Check<Facts> = {
  id: 'supercell-skewed',
  severity: 'info',
  summary:
    'The shortest distance between images in a supercell is under half the cube root of its volume, and a rounder one of the same volume exists.',
  why: 'A defect or a displaced atom feels its nearest image: the atoms of a long, thin supercell are paid for and do not help.',
  wrong: 'lattice: {bravais: cP, a: 3.9}\nsupercell: [16, 1, 1]\n',
  right: 'lattice: {bravais: cP, a: 3.9}\nsupercell: [2, 2, 4]\n',
  *run({ text, crystal, document }) {
    const { supercell, lattice, unit } = crystal
    const block = document.supercell
    if (!block || !supercell || !lattice || lattice.dimension === 1) return
    const volume = Number(integerDeterminant(supercell))
    if (!(volume > 1 && volume <= LARGEST)) return
    const { primitive, dimension } = lattice
    const shortest = shortestImage(supercell, primitive, dimension)
    const mean = (volume * lattice.volume) ** (1 / dimension)
    if (shortest >= NEEDLE * mean) return
    const rounder = roundest(volume, primitive, dimension)
    if (!rounder) return
    const then = shortestImage(rounder, primitive, dimension)
    if (then < WORTHWHILE * shortest) return
    const written = matrixText(rounder, dimension)
    yield {
      at: block.at,
      message: `Images are ${length(shortest, unit, 2)} apart, ${plain(shortest / mean, 2)} of the ${ROOT[dimension]}; in ${written}, of the same ${count(volume)}, they are ${length(then, unit, 2)} apart.`,
      facts: { shortest, rounder: then },
      fixes: [{ title: `Use ${written}`, safe: false, edits: [replaceValue(text, block, written)] }],
    }
  },
}

const ROOT = ['', '', 'square root of the area', 'cube root of the volume']
const count = (volume: number): string => `${volume} primitive cells`

function matrixText(m: Mat3, dimension: number): string {
  const isDiagonal = m.every((row, i) => row.every((x, j) => i === j || x === 0))
  const rows = m.slice(0, dimension).map(row => row.slice(0, dimension))
  return isDiagonal
    ? `[${rows.map((row, i) => row[i]).join(', ')}]`
    : `[${rows.map(row => `[${row.join(', ')}]`).join(', ')}]`
}
