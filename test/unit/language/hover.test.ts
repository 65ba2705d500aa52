import { readdirSync, readFileSync } from 'node:fs'
import { join } from 'node:path'
import { describe, expect, test } from 'vitest'
import { hover } from '../../../server/src/language/hover.ts'
import { marked } from '../../protocol/client.ts'
import { snapshotOf } from '../checks/harness.ts'

function hoverAt(source: string): string | undefined {
  const { text, position } = marked(source)
  const found = hover(snapshotOf(text), position)
  return found ? (found.contents as { value: string }).value : undefined
}

const FILES = ['demo', 'demo/drafts'].flatMap(folder =>
  readdirSync(folder)
    .filter(name => name.endsWith('.lattice.yaml'))
    .map(name => [name, readFileSync(join(folder, name), 'utf8')] as const),
)

test.each(FILES)('at every place of %s a hover is short and whole', (_, text) => {
  const snapshot = snapshotOf(text)
  for (let offset = 0; offset <= text.length; offset++) {
    const position = snapshot.positionOf(offset)
    const found = hover(snapshot, position)
    const value = found ? (found.contents as { value: string }).value : ''
    expect(value.split('\n').length, value).toBeLessThanOrEqual(15)
    expect(value).not.toMatch(/NaN|undefined|Infinity|\[object/)
  }
})

describe('on a k-point', () => {
  test('outside: by how much, in which zone, and its equivalent inside', () => {
    // Simple cubic, a = 4 Å: b = π/2 = 1.5708 Å⁻¹; (0.75, 0, 0) is b/4 = 0.3927 Å⁻¹ beyond the wall, in the 2nd zone.
    const text = hoverAt('lattice: {bravais: cP, a: 4}\npoints:\n  Q: [0.75$0, 0, 0]\n')
    expect(text).toContain('outside by 0.3927 Å⁻¹, in the 2nd zone')
    expect(text).toContain('[-1/4, 0, 0]')
  })

  test('its little co-group and star: X of the face-centred cubic lattice, 16 and 3 (common practice)', () =>
    expect(hoverAt('lattice: {bravais: cF, a: 5.43}\npath: Γ – X$0\n')).toContain('16 rotations; star of 3'))
})

test('on a vector: a·b = 2π', () =>
  expect(hoverAt('lattice:\n  vectors: [[4, 0, 0$0], [0, 4, 0], [0, 0, 4]]\n')).toContain('a·b = 2π'))

test('on an atom: its site symmetry, m-3m in rock salt (International Tables, Fm-3m, site 4a)', () =>
  expect(
    hoverAt('lattice: {bravais: cF, a: 5.64}\natoms:\n  - Na: [0, 0, 0$0]\n  - Cl: [1/2, 1/2, 1/2]\n'),
  ).toContain('m-3m'))

test('on a key: what it means', () =>
  expect(hoverAt('lattice: {bravais: cP, a: 4}\nunit$0: angstrom\n')).toContain('Å'))
