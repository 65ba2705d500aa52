/** Symmetry points found by enumeration against the points that the published tables list. */
import { describe, expect, test } from 'vitest'
import { areEquivalent, kRotations, littleCoGroup, symmetryPoints } from '../../server/src/crystal/kspace.ts'
import { latticeType } from '../../server/src/crystal/symmetry.ts'
import { inverse, type Mat3, mapMatrix, transpose, type Vec3 } from '../../server/src/crystal/vector.ts'
import { buildZone } from '../../server/src/crystal/zone.ts'
import { REFERENCE, type Reference, rowsInSpace } from './labels.ts'

function kSpaceOf({ sample, dimension }: Reference) {
  const primitive = rowsInSpace(sample.vectors)
  const reciprocal: Mat3 = mapMatrix(transpose(inverse(primitive)), x => 2 * Math.PI * x)
  // The samples are printed with nine digits or more.
  const { holohedry } = latticeType(primitive, dimension, 1e-6)!
  return { group: kRotations(holohedry, true, dimension), zone: buildZone(reciprocal, dimension) }
}

const fractionsOf = ({ points }: Reference): [string, Vec3][] =>
  Object.entries(points).map(([label, { sample }]) => [label, [sample[0], sample[1], sample[2] ?? 0]])

test.each(REFERENCE.entries)('$id: little co-groups have the orders that the check values have', entry => {
  const { group } = kSpaceOf(entry)
  expect(group).toHaveLength(entry.holohedry)
  for (const [label, k] of fractionsOf(entry))
    expect(littleCoGroup(k, group).length, label).toBe(entry.points[label].littleCoGroup)
})

describe('the points of Bradley and Cracknell (1972), table 3.6, are the symmetry points, each once', () => {
  // The triclinic table names four of the eight.
  const tables = REFERENCE.entries.filter(
    ({ id }) => id.startsWith('bradley-cracknell') && !id.includes('/aP/'),
  )
  test.each(tables)('$id', entry => {
    const { group, zone } = kSpaceOf(entry)
    const enumerated = symmetryPoints(group, zone)
    const listed = fractionsOf(entry)
    expect(enumerated).toHaveLength(listed.length)
    for (const [label, k] of listed) {
      const same = enumerated.filter(({ fraction }) => areEquivalent(fraction, k, group))
      expect(same, label).toHaveLength(1)
      expect(same[0].littleCoGroup, label).toBe(entry.points[label].littleCoGroup)
    }
  })
})
