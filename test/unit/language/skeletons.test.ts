import { expect, test } from 'vitest'
import { BRAVAIS_TYPES } from '../../../server/src/crystal/bravais.ts'
import { filledIn, SKELETONS } from '../../../server/src/language/skeletons.ts'
import { findingsOf, snapshotOf } from '../checks/harness.ts'

test('there is a skeleton for every Bravais type', () =>
  expect(SKELETONS.map(({ id }) => id)).toEqual(expect.arrayContaining([...BRAVAIS_TYPES])))

test.each(SKELETONS.map(({ id, text }) => [id, filledIn(text)]))(
  '%s, with its defaults, checks clean',
  (_, text) => expect(findingsOf(text).map(({ rule, message }) => `${rule}: ${message}`)).toEqual([]),
)

test.each(BRAVAIS_TYPES)('the parameters of %s give a lattice of no higher type', type => {
  const { text } = SKELETONS.find(({ id }) => id === type)!
  const [{ crystal }] = snapshotOf(filledIn(text)).documents
  // One-face centrings are one type, whichever the face (International Tables A, section 2.1.1).
  const oneFace = (name: string | undefined) => name?.replace(/^([om])[ABC]$/, '$1C').replace(/^mI$/, 'mC')
  expect(oneFace(crystal.type?.bravais)).toBe(oneFace(type))
})
