import { length } from '../../meaning/wording.ts'
import type { Check } from '../check.ts'
import { suspectedFrame, suspectedUnit } from './suspicions.ts'

interface Facts {
  /** Which primitive vector leads through the gap, from 0. */
  readonly axis: number
  /** In the file's unit. */
  readonly gap: number
}

/** In Å: wider than between the layers of any layered crystal (graphite 3.35, intercalated ones up to 8). */
export const WIDE_GAP = 8

export const vacuumUndeclared: Check<Facts> = {
  id: 'vacuum-undeclared',
  severity: 'info',
  summary: 'A three-dimensional cell has a gap of over 8 Å between its atoms: it is meant as a sheet.',
  why: 'Labels, zone and path are those of a crystal in three dimensions, with a direction along which nothing happens.',
  wrong: 'lattice: {bravais: hP, a: 2.46, c: 20}\natoms:\n  - C: [1/3, 2/3, 1/2]\n  - C: [2/3, 1/3, 1/2]\n',
  right:
    'lattice: {bravais: hp, a: 2.46, height: 20}\natoms:\n  - C: [1/3, 2/3, 1/2]\n  - C: [2/3, 1/3, 1/2]\n',
  *run({ crystal, document }) {
    const block = document.lattice
    if (
      crystal.dimension !== 3 ||
      !block ||
      !crystal.atomsComplete ||
      suspectedFrame(crystal) ||
      suspectedUnit(crystal)
    )
      return
    const wide = crystal.emptySlabs.flatMap((gap, axis) =>
      gap !== undefined && gap * crystal.angstrom > WIDE_GAP ? [{ axis, gap }] : [],
    )
    if (wide.length !== 1) return // A molecule or a chain in a box is no sheet.
    const [{ axis, gap }] = wide
    yield {
      at: block.bravais?.at ?? block.vectors!.at,
      message: `There are ${length(gap, crystal.unit, 2)} without atoms across the ${ORDINAL[axis]} primitive vector: a sheet is better stated in two dimensions, with this period as its \`height\`.`,
      facts: { axis, gap },
    }
  },
}

const ORDINAL = ['first', 'second', 'third']
