import { readdirSync, readFileSync } from 'node:fs'
import { join } from 'node:path'
import fc from 'fast-check'
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
    const found = hover(snapshot, position, { links: true })
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

describe('on what the trade knows by name', () => {
  test('an element: name, number, covalent radius with its source', () => {
    // B. Cordero et al., Dalton Trans. 2008, 2832, table 2: lead 1.46 Å.
    const text = hoverAt('lattice: {bravais: cF, a: 4.95}\natoms:\n  - P$0b: [0, 0, 0]\n')
    expect(text).toContain('lead, atomic number 82')
    expect(text).toContain('1.46 Å')
  })

  test('a unit: its size in the others', () =>
    // CODATA 2022: a₀ = 0.529177210544 Å.
    expect(hoverAt('unit: bo$0hr\nlattice: {bravais: cP, a: 7}\n')).toContain('0.529177 Å'))

  test('a Bravais type: its centring and what it takes', () => {
    const text = hoverAt('lattice: {bravais: c$0F, a: 5.43}\n')
    expect(text).toContain('4 lattice points')
  })

  test('a label book: whose it is', () =>
    expect(hoverAt('lattice: {bravais: cF, a: 5.43}\nlabels: hinu$0ma-2017\n')).toContain('128, 140 (2017)'))

  test('a rule, under `checks` and in a comment', () => {
    expect(hoverAt('lattice: {bravais: cF, a: 5.43}\nchecks: {path-mis$0ses: off}\n')).toContain(
      'path-misses',
    )
    expect(hoverAt('lattice: {bravais: cF, a: 5.43} # braggline: allow path-mis$0ses\n')).toContain(
      'path-misses',
    )
  })

  test('a space group: number, symbol, point group; whether the atoms have it', () => {
    // International Tables A: no. 225, Fm-3m, point group m-3m; no. 216 is F-43m.
    const rockSalt = 'lattice: {bravais: cF, a: 5.64}\natoms:\n  - Na: [0, 0, 0]\n  - Cl: [1/2, 1/2, 1/2]\n'
    const right = hoverAt(`${rockSalt}space-group: 22$05\n`)
    expect(right).toMatch(/Fm-3m.*225[\s\S]*m-3m[\s\S]*Found/)
    expect(hoverAt(`${rockSalt}space-group: F-4$03m\n`)).toMatch(/216[\s\S]*have Fm-3m \(225\)/)
  })
})

test('on an expression: its value', () =>
  // √3/2 = 0.8660254.
  expect(hoverAt('lattice: {bravais: cP, a: sqrt($03)/2 + 2}\n')).toContain('`sqrt(3)/2 + 2` = 2.866025'))

describe('on blocks', () => {
  test('a mesh: points, irreducible ones, spacing', () => {
    // 4 × 4 × 4 with Γ on the simple cubic lattice: 10 irreducible points, (n+1)(n+2)(n+3)/6 with n = 2 (closed formula).
    const text = hoverAt('lattice: {bravais: cP, a: 4}\nmesh:\n  divisions: [4, $04, 4]\n')
    expect(text).toContain('| points | 64 |')
    expect(text).toContain('| irreducible | 10 |')
    // 2π/4/4 = 0.3927 Å⁻¹.
    expect(text).toContain('0.3927, 0.3927, 0.3927 Å⁻¹')
  })

  test('the word that stands for the path of the book', () => {
    // Γ–X–M–Γ–R–X|M–R for the simple cubic lattice (Setyawan and Curtarolo 2010, CUB).
    const text = hoverAt('lattice: {bravais: cP, a: 4}\npath: recom$0mended\n')
    expect(text).toContain('Γ – X – M – Γ – R – X | M – R')
    expect(text).toContain('Setyawan')
  })

  test('sampling: steps and points of the whole path', () => {
    // Two pieces of two and one segments with 10 steps each: 30 steps, 30 + 2 points.
    const text = hoverAt('lattice: {bravais: cP, a: 4}\npath: Γ – X – M | R – M\nsampling:\n  steps: 1$00\n')
    expect(text).toContain('| steps | 30 |')
    expect(text).toContain('| points | 32 |')
  })

  test('a supercell: how many cells, and the nearest image', () => {
    const text = hoverAt('lattice: {bravais: cP, a: 4}\nsupercell: [2, 2, $03]\n')
    expect(text).toContain('12 primitive cells')
    expect(text).toContain('| nearest image | 8 Å |')
  })
})

test('a key inside an atom, a point and a mesh', () => {
  const cell = 'lattice: {bravais: cP, a: 4}\n'
  expect(hoverAt(`${cell}atoms:\n  - Fe: {at: [0, 0, 0], na$0me: up}\n`)).toContain('Tells like atoms apart')
  expect(hoverAt(`${cell}points:\n  Q: {betw$0een: [Γ, X], at: 1/2}\n`)).toContain('The labels of two points')
  expect(hoverAt(`${cell}mesh:\n  fine: {shi$0ft: [0, 0, 0], divisions: [2, 2, 2]}\n`)).toContain(
    'Shift of the whole mesh',
  )
})

test('the report is linked to for clients that have the command only', () => {
  const { text, position } = marked('lattice: {bravais: cF, a: 5.43}\npath: Γ – X$0\n')
  const value = (links: boolean) =>
    (hover(snapshotOf(text), position, { links })!.contents as { value: string }).value
  expect(value(true)).toContain('(command:braggline.openReport)')
  expect(value(false)).not.toContain('command:')
})

test('nothing that is typed makes it throw or grow long', () =>
  fc.assert(
    fc.property(
      fc.constantFrom(...FILES.map(([, text]) => text)),
      fc.nat(),
      fc.nat({ max: 40 }),
      (text, place, gap) => {
        const offset = place % (text.length + 1)
        const cut = text.slice(0, offset) + text.slice(offset + gap)
        const snapshot = snapshotOf(cut)
        for (const at of [offset, Math.max(0, offset - 3), Math.min(cut.length, offset + 9)]) {
          const found = hover(snapshot, snapshot.positionOf(at), { links: true })
          const value = found ? (found.contents as { value: string }).value : ''
          expect(value.split('\n').length, value).toBeLessThanOrEqual(15)
          expect(value).not.toMatch(/NaN|undefined|Infinity|\[object/)
        }
      },
    ),
    { numRuns: 150 },
  ))
