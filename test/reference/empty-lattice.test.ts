/** Free-electron levels at the symmetry points of the cubic lattices (empty-lattice.json, with its source). */
import { readFileSync } from 'node:fs'
import { describe, expect, test } from 'vitest'
import type { BravaisType } from '../../server/src/crystal/bravais.ts'
import { levelsAt } from '../../server/src/crystal/bands.ts'
import { HBAR2_OVER_2M } from '../../server/src/crystal/units.ts'
import { combine, inverse, scale, type Vec3 } from '../../server/src/crystal/vector.ts'
import { buildZone } from '../../server/src/crystal/zone.ts'
import { fromCell } from '../unit/crystal/zone-lattices.ts'

interface Point {
  readonly k: Vec3
  readonly levels: readonly { readonly E: number; readonly degeneracy: number }[]
}
const { levels } = JSON.parse(readFileSync(new URL('./empty-lattice.json', import.meta.url), 'utf8')) as {
  levels: Record<string, Record<string, Point>>
}
const TYPES: Record<string, BravaisType> = { fcc: 'cF', bcc: 'cI', sc: 'cP' }
const A = 4.2

describe.each(Object.keys(TYPES))('%s', name => {
  const { reciprocal } = fromCell(TYPES[name], { a: A })
  const zone = buildZone(reciprocal, 3)
  const unit = (2 * Math.PI) / A

  test.each(Object.entries(levels[name]))('%s', (_, point) => {
    const states = point.levels.flatMap(({ E, degeneracy }) =>
      Array<[number, number]>(degeneracy).fill([E, degeneracy]),
    )
    const fraction = combine(scale(point.k, unit), inverse(reciprocal))
    const found = levelsAt(zone, fraction, states.length, 1)
    expect(found.degeneracies).toEqual(states.map(([, degeneracy]) => degeneracy))
    found.energies.forEach((energy, i) => {
      expect(energy / (HBAR2_OVER_2M * unit ** 2)).toBeCloseTo(states[i][0], 9)
    })
  })
})
