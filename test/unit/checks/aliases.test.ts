import { expect, test } from 'vitest'
import { findingsOf } from './harness.ts'

test('where an alias repeats an anchored value, no fix counts as safe', () => {
  const text = 'lattice: {bravais: cP, a: 4}\natoms:\n  - Na: &x [1.75, 0, 0]\npoints: {Q: *x}\n'
  const fixes = findingsOf(text).flatMap(({ fixes = [] }) => fixes)
  expect(fixes.length).toBeGreaterThan(0)
  expect(fixes.filter(({ safe }) => safe)).toEqual([])
})

test('products and powers are no aliases', () => {
  const text = 'lattice: {bravais: cP, a: 2*2}\natoms:\n  - Na: [1.75, 0, 0]\n'
  expect(findingsOf(text).some(({ fixes = [] }) => fixes.some(({ safe }) => safe))).toBe(true)
})
