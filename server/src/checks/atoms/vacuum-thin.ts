import { length } from '../../meaning/wording.ts'
import type { Check } from '../check.ts'

interface Facts {
  /** In the file's unit. */
  readonly vacuum: number
  readonly thickness: number
}

/** In Å. Below it the sheets still feel each other (common practice: 10 to 20 Å). */
const THINNEST = 10

/** Rounding of coordinates, relative to the height. */
const FLAT = 1e-6

export const vacuumThin: Check<Facts> = {
  id: 'vacuum-thin',
  severity: 'warning',
  needs: ['unit', 'frames.atoms'],
  summary: 'The height of a two-dimensional crystal’s computing cell leaves under 10 Å of vacuum.',
  why: 'The copies along the normal interact: bands and forces are those of a stack, not of a sheet.',
  wrong:
    'lattice: {bravais: hp, a: 2.46, height: 7}\natoms:\n  - C: [1/3, 2/3, 1/2]\n  - C: [2/3, 1/3, 1/2]\n',
  right:
    'lattice: {bravais: hp, a: 2.46, height: 20}\natoms:\n  - C: [1/3, 2/3, 1/2]\n  - C: [2/3, 1/3, 1/2]\n',
  *run({ crystal, document }) {
    const height = document.lattice?.height
    if (crystal.dimension !== 2 || !height || crystal.atoms.length === 0) return
    const { unit } = crystal
    const along = Float64Array.from(crystal.atoms, ({ fraction }) => fraction[2]).sort()
    const thickness = along[along.length - 1] - along[0]
    const vacuum = height.value - thickness
    const needed = THINNEST / crystal.angstrom
    if (vacuum >= needed) return
    if (vacuum < 0) {
      yield {
        at: height.at,
        message: `The atoms reach over ${length(thickness, unit, 2)}, more than the height of ${length(height.value, unit, 2)}: their third number is a fraction of \`height\` here. Are lengths meant? Then divide them by it.`,
        facts: { vacuum, thickness },
      }
      return
    }
    const sheet = thickness < FLAT * height.value ? 'flat sheet' : `sheet ${length(thickness, unit, 2)} thick`
    const inside = widestGap(along)
    const remedy =
      inside >= needed
        ? `; it is empty over ${length(inside, unit, 2)} inside: bring the parts that were wrapped around the cell’s end together`
        : `; it takes ${length(needed, unit, 2)} or more, a height from ${length(thickness + needed, unit, 2)}`
    yield {
      at: height.at,
      message: `A ${sheet} in a cell ${length(height.value, unit, 2)} high leaves ${length(vacuum, unit, 2)} of vacuum${remedy}.`,
      facts: { vacuum, thickness },
    }
  },
}

/** Between neighbours of a sorted list. */
function widestGap(sorted: Float64Array): number {
  let widest = 0
  for (let i = 1; i < sorted.length; i++) widest = Math.max(widest, sorted[i] - sorted[i - 1])
  return widest
}
