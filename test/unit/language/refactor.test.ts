/** Refactorings leave the crystal, the path and the mesh what they are. */
import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import type { CodeAction, TextDocumentEdit } from 'vscode-languageserver-types'
import { BRAVAIS, BRAVAIS_TYPES, type BravaisType } from '../../../server/src/crystal/bravais.ts'
import { reduce } from '../../../server/src/crystal/reduction.ts'
import {
  apply,
  combine,
  determinant,
  distance,
  dot,
  inverse,
  multiply,
  subtract,
  type Vec3,
} from '../../../server/src/crystal/vector.ts'
import { applyEdits } from '../../../server/src/format/edits.ts'
import { meshesOf } from '../../../server/src/meaning/sampling.ts'
import {
  type Abilities,
  type RefactorData,
  refactorActions,
  resolveRefactor,
} from '../../../server/src/language/refactor/index.ts'
import type { Crystal } from '../../../server/src/meaning/crystal.ts'
import { snapshotOf } from '../checks/harness.ts'

const URI = 'file:///a.lattice.yaml'
const EAGER: Abilities = { versions: true, annotations: true, resolves: false }

function actionsAt(text: string, offset: number, abilities = EAGER, only?: string[]): CodeAction[] {
  const snapshot = snapshotOf(text)
  const position = snapshot.positionOf(offset)
  return refactorActions(
    snapshot,
    { uri: URI, version: 0, range: { start: position, end: position }, only },
    abilities,
  )
}

function applied(text: string, { edit }: CodeAction): string {
  const snapshot = snapshotOf(text)
  const [change] = edit!.documentChanges as TextDocumentEdit[]
  return applyEdits(
    text,
    change.edits.map(each => {
      if (!('newText' in each)) throw new Error('no plain edit')
      return {
        at: [snapshot.offsetOf(each.range.start), snapshot.offsetOf(each.range.end)],
        text: each.newText,
      }
    }),
  )
}

const confirmOf = ({ edit }: CodeAction): string =>
  Object.values(edit?.changeAnnotations ?? {})[0]?.description ?? ''

/** Apply the one action of this title at `$0`. */
function done(marked: string, title: string | RegExp): string {
  const offset = marked.indexOf('$0')
  const text = marked.replace('$0', '')
  const actions = actionsAt(text, offset)
  const found = actions.filter(action =>
    typeof title === 'string' ? action.title === title : title.test(action.title),
  )
  if (found.length !== 1)
    throw new Error(`${found.length} of ${title}: ${actions.map(a => a.title).join(' | ')}`)
  return applied(text, found[0])
}
const titles = (marked: string): string[] =>
  actionsAt(marked.replace('$0', ''), marked.indexOf('$0')).map(({ title }) => title)

const CLOSE = 2e-6
const isWhole = (x: number): boolean => Math.abs(x - Math.round(x)) < 1e-5

const crystalOf = (text: string): Crystal => snapshotOf(text).documents[0].crystal

/** The metric of the lattice, of its k-points and of the atoms, whatever the axes and the orientation. */
function invariants(crystal: Crystal): number[] {
  const { basis, dimension } = { ...reduce(crystal.lattice!.primitive, crystal.lattice!.dimension) }
  const points = [...crystal.points.values()].map(({ cartesian }) => cartesian)
  const lengths = basis.slice(0, dimension).map(v => Math.sqrt(dot(v, v)))
  return [crystal.lattice!.volume, ...lengths, ...points.flatMap(p => points.map(q => dot(p, q)))]
}

function same(text: string, action: CodeAction): void {
  const after = applied(text, action)
  const where = `${action.title}\n${text}\n became\n${after}`
  const [before, now] = [crystalOf(text), crystalOf(after)]
  expect(now.document.problems, where).toEqual([])
  const confirm = confirmOf(action)
  const comments = (file: string) => file.split('# kept').length
  expect(comments(after), where).toBe(comments(text))
  // Made exactly symmetric within the tolerance: the rule that finds the symmetry has tests of its own.
  if (/within the tolerance/.test(confirm)) return
  if (/turned in space/.test(confirm)) {
    const [old, fresh] = [invariants(before), invariants(now)]
    for (const [i, x] of old.entries())
      expect(Math.abs(x - fresh[i]), where).toBeLessThan(1e-5 * Math.max(1, Math.abs(x)))
    return
  }
  const toOld = inverse(before.lattice!.primitive)
  const change = multiply(now.lattice!.primitive, toOld)
  expect(change.flat().every(isWhole), where).toBe(true)
  expect(Math.abs(determinant(change)), where).toBeCloseTo(1, 4)
  expect(now.atoms.length, where).toBe(before.atoms.length)
  for (const atom of before.atoms) {
    const there = now.atoms.filter(
      other =>
        other.element === atom.element &&
        other.entry.name?.value === atom.entry.name?.value &&
        combine(subtract(other.cartesian, atom.cartesian), toOld).every(isWhole),
    )
    expect(there.length, where).toBeGreaterThan(0)
  }
  for (const [label, point] of before.points)
    expect(distance(point.cartesian, now.pointOf(label)!.cartesian), where).toBeLessThan(CLOSE)
  if (!/labels of the book/.test(confirm)) {
    const places = (crystal: Crystal) =>
      crystal.pieces.flatMap(({ points }) => points.map(point => point!.cartesian))
    for (const [i, k] of places(before).entries())
      expect(distance(k, places(now)[i]), where).toBeLessThan(CLOSE)
  }
  if (!/mesh/.test(confirm)) {
    const [old, fresh] = [meshesOf(before), meshesOf(now)]
    expect(fresh.length, where).toBe(old.length)
    for (const [i, { mesh }] of old.entries()) {
      const other = fresh[i].mesh
      const size = (n: Vec3) => n[0] * n[1] * n[2]
      expect(size(other.divisions), where).toBe(size(mesh.divisions))
      for (const n of [
        [0, 0, 0],
        [1, 0, 0],
        [0, 1, 0],
        [0, 0, 1],
      ]) {
        const k = n.map((x, axis) => (x + mesh.shift[axis]) / mesh.divisions[axis]) as unknown as Vec3
        // Columns of k-fractions.
        const there = apply(change, k)
        expect(
          there.every((x, axis) => isWhole(x * other.divisions[axis] - other.shift[axis])),
          where,
        ).toBe(true)
      }
    }
  }
}

const written = fc.oneof(
  fc.constantFrom('0', '1/2', '1/3', '-1/4', '2/3', '0.25', '0.1'),
  fc.integer({ min: -999, max: 999 }).map(n => String(n / 1000)),
)
const rowOf = (n: number) => fc.array(written, { minLength: n, maxLength: n }).map(x => `[${x.join(', ')}]`)
const length = fc.integer({ min: 3000, max: 9000 }).map(n => n / 1000)
const angle = fc.integer({ min: 82, max: 112 })
const lattices = fc
  .tuple(fc.constantFrom<BravaisType>(...BRAVAIS_TYPES), length, length, length, angle, angle, angle)
  .map(([bravais, a, b, c, alpha, beta, gamma]) => {
    const values: Record<string, number> = { a, b, c, alpha, beta, gamma }
    const free = BRAVAIS[bravais].free[0].map(name => `${name}: ${values[name]}`).join(', ')
    return { dimension: BRAVAIS[bravais].dimension, lattice: `lattice: {bravais: ${bravais}, ${free}}` }
  })
const vectors = fc
  .tuple(length, length, length, fc.constantFrom('P', 'P', 'C', 'I', 'F'), fc.constantFrom('0.3', '0'))
  .map(([a, b, c, centring, lean]) => ({
    dimension: 3,
    lattice: `lattice:\n  a: ${a} # kept\n  vectors:\n    - [a, 0, 0]\n    - [${lean}, ${b}, 0]\n    - [0, 0, ${c}]\n  centring: ${centring}`,
  }))
const chain = length.map(a => ({ dimension: 1, lattice: `lattice: {vectors: [[${a}, 0, 0]]}` }))

const documents = fc
  .oneof({ weight: 4, arbitrary: lattices }, vectors, chain)
  .chain(({ dimension, lattice }) =>
    fc
      .record({
        atomFrame: fc.constantFrom('conventional', 'primitive', 'cartesian'),
        pointFrame: fc.constantFrom('primitive', 'conventional', 'cartesian'),
        atoms: fc.array(rowOf(3), { minLength: 1, maxLength: 4 }),
        points: fc.tuple(rowOf(dimension), rowOf(dimension)),
        mesh: fc.oneof(
          fc.constantFrom('spacing: 0.3', 'spacing: 0.5'),
          fc
            .array(fc.integer({ min: 1, max: 6 }), { minLength: dimension, maxLength: dimension })
            .map(n => `divisions: [${n.join(', ')}]`),
        ),
      })
      .map(
        ({ atomFrame, pointFrame, atoms, points, mesh }) => `${lattice}
frames: {atoms: ${atomFrame}, points: ${pointFrame}}
atoms:
${atoms.map((at, i) => `  # kept\n  - ${['Si', 'C', 'O', 'C'][i]}: ${at} # kept\n`).join('')}points:
  P: ${points[0]} # kept
  Q: ${points[1]}
path: P – Γ – Q
mesh: {${mesh}}
`,
      ),
  )

const KEYS = ['lattice', 'atoms', 'points', 'path', 'mesh']

test('every refactoring of any document, for every lattice type', () => {
  const seen = new Set<string>()
  fc.assert(
    fc.property(documents, text => {
      for (const key of KEYS)
        for (const action of actionsAt(text, text.indexOf(`\n${key}:`) + 1)) {
          seen.add(action.title.replace(/ \(.*| \[.*|[\d.]+ Å.*|\d+ label.*/, ''))
          same(text, action)
        }
    }),
    { numRuns: 50, seed: 31 },
  )
  // None of them slept through it.
  expect([...seen].sort()).toEqual(
    [
      'Sort the atoms by element, then by coordinates',
      'State the atoms in Cartesian coordinates',
      'State the atoms in fractions of the conventional cell',
      'State the atoms in fractions of the primitive cell',
      'State the conventional vectors with their centring',
      'State the lattice by its type and parameters',
      'State the lattice by vectors',
      'State the mesh by its divisions',
      'State the mesh by the spacing ',
      'State the points in Cartesian coordinates',
      'State the points in fractions of the conventional cell',
      'State the points in fractions of the primitive cell',
      'State the points in units of 2π/a',
      'State the primitive vectors',
      'State the standard cell of the lattice',
      'Write ',
    ].sort(),
  )
})

describe('by example', () => {
  const SALT = `lattice: {bravais: cF, a: 6}
atoms:
  - Pb: [0, 0, 0] # first
  - Te: [1/2, 1/2, 1/2]
points:
  Q: [1/2, 1/4, 3/4] # W
path: Γ – X – Q
`
  test('points go there and back exactly', () => {
    const there = done(
      SALT.replace('Q: [', '$0Q: ['),
      'State the points in fractions of the conventional cell',
    )
    // W of cF is (½, 1, 0) in units of 2π/a (W. Setyawan and S. Curtarolo 2010), here in another of its images.
    expect(there).toContain('frames: {points: conventional}\n')
    expect(there).toContain('Q: [1/2, 1, 0] # W\n')
    const back = done(there.replace('Q: [', '$0Q: ['), 'State the points in fractions of the primitive cell')
    expect(back).toContain('frames: {points: primitive}\n')
    expect(back).toContain('Q: [1/2, 1/4, 3/4] # W\n')
    expect(done(SALT.replace('Q: [', '$0Q: ['), 'State the points in units of 2π/a')).toContain(
      'Q: [1/2, 1, 0]',
    )
  })
  test('atoms go there and back', () => {
    const there = done(SALT.replace('- Pb', '$0- Pb'), 'State the atoms in Cartesian coordinates')
    expect(there).toContain('frames: {atoms: cartesian}\n')
    expect(there).toContain('Te: [3, 3, 3]\n')
    const back = done(
      there.replace('- Pb', '$0- Pb'),
      'State the atoms in fractions of the conventional cell',
    )
    expect(back).toContain('Te: [1/2, 1/2, 1/2]\n')
  })
  test('one point that was meant in another frame', () => {
    const text = SALT.replace('[1/2, 1/4, 3/4]', '[$01, 0, 0]')
    expect(done(text, 'Read the numbers of Q as fractions of the conventional cell')).toContain(
      'Q: [0, 1/2, 1/2] # W',
    )
  })
  test('by vectors and back by type', () => {
    const vectors = done(`$0${SALT}`, 'State the lattice by vectors')
    expect(vectors).toContain(
      'lattice: {bravais: cF, vectors: [[6, 0, 0], [0, 6, 0], [0, 0, 6]], centring: F}\n',
    )
    expect(done(`$0${vectors}`, 'State the lattice by its type and parameters (cF)')).toBe(SALT)
  })
  test('primitive and back to conventional vectors', () => {
    const primitive = done(`$0${SALT}`, 'State the primitive vectors')
    expect(primitive).toContain('[[0, 3, 3], [3, 0, 3], [3, 3, 0]]')
    expect(primitive).toContain('Te: [1/2, 1/2, 1/2]')
    const back = done(`$0${primitive}`, 'State the conventional vectors with their centring (cF)')
    expect(back).toContain('[[6, 0, 0], [0, 6, 0], [0, 0, 6]]')
    expect(back).toContain('centring: F')
  })
  test('sorted atoms keep their comments', () => {
    const text = `lattice: {bravais: cP, a: 4}
atoms:
  # above Ti
  - $0Ti: [1/2, 1/2, 1/2] # Ti
  - O: [1/2, 1/2, 0]
  # above O
  - O: [0, 1/2, 1/2] # O
  - Ba: [0, 0, 0]
`
    expect(done(text, /^Sort/)).toBe(`lattice: {bravais: cP, a: 4}
atoms:
  # above Ti
  - Ba: [0, 0, 0]
  # above O
  - O: [0, 1/2, 1/2] # O
  - O: [1/2, 1/2, 0]
  - Ti: [1/2, 1/2, 1/2] # Ti
`)
    const products =
      'lattice: {bravais: cP, a: 4}\nframes: {atoms: cartesian}\natoms:\n  - $0O: [0.5*a, 0, 0]\n  - C: [0, 0, 0]\n'
    expect(done(products, /^Sort/)).toContain('  - C: [0, 0, 0]\n  - O: [0.5*a, 0, 0]\n')
    expect(titles(done(text, /^Sort/).replace('Ba:', '$0Ba:'))).not.toContainEqual(
      expect.stringMatching(/^Sort/),
    )
    expect(
      done('lattice: {bravais: cP, a: 4}\natoms: [$0O: [0, 0, 0], C: {at: [0, 1/2, 0], name: x}]\n', /^Sort/),
    ).toContain('atoms: [C: {at: [0, 1/2, 0], name: x}, O: [0, 0, 0]]')
  })
  test('a label of the path becomes a point, and is left to the book again', () => {
    const extracted = done(SALT.replace('– X', '– $0X'), 'Write X into the points')
    expect(extracted).toContain('  Q: [1/2, 1/4, 3/4] # W\n  X: [1/2, 0, 1/2]\n')
    expect(done(extracted.replace('X: [', '$0X: ['), /^Leave X to the label book/)).toBe(SALT)
    const all = done(SALT.replace('path:', '$0path:'), 'Write 2 labels of the path into the points')
    expect(all).toContain('Γ: [0, 0, 0]')
    expect(done('lattice: {bravais: cP, a: 4}\npath: Γ – $0M\n', 'Write M into the points')).toBe(
      'lattice: {bravais: cP, a: 4}\npoints: {M: [1/2, 1/2, 0]}\npath: Γ – M\n',
    )
  })
  test('a label that some reader would take for a truth value is quoted', () => {
    const sheet = 'lattice: {bravais: oP, a: 4, b: 5, c: 6}\npath: Γ – $0Y\n'
    expect(done(sheet, 'Write Y into the points')).toContain('points: {"Y": [0, 1/2, 0]}\n')
  })
  test('a mesh by spacing, by divisions and new', () => {
    const text = 'lattice: {bravais: cP, a: 4}\nmesh: {$0spacing: 0.2}\n'
    // 2π/4/0.2 = 7.85.
    const divisions = done(text, 'State the mesh by its divisions [8, 8, 8]')
    expect(divisions).toBe('lattice: {bravais: cP, a: 4}\nmesh: {divisions: [8, 8, 8]}\n')
    expect(done(divisions.replace('divisions', '$0divisions'), /by the spacing 0\.2 Å⁻¹/)).toBe(
      text.replace('$0', ''),
    )
    expect(
      done('lattice: {bravais: cP, a: 4}\nsampling: {$0spacing: 0.02}\n', /^Add a mesh of \[8, 8, 8\]/),
    ).toContain('mesh: {divisions: [8, 8, 8]}')
  })
  test('a supercell', () => {
    const text = 'lattice: {bravais: cP, a: 4}\natoms:\n  - Po: [0, 0, 0]\nsupercell: [$02, 1, 1]\n'
    expect(done(text, 'Rewrite the file for this supercell')).toBe(
      'lattice: {bravais: tP, vectors: [[8, 0, 0], [0, 4, 0], [0, 0, 4]]}\natoms:\n  - Po: [0, 0, 0]\n  - Po: [1/2, 0, 0]\n',
    )
  })
})

describe('what is offered', () => {
  test('nothing where there is nothing to restate', () => {
    expect(titles('$0title: x\nlattice: {bravais: cP, a: 4}\n')).toEqual([])
    expect(titles('$0')).toEqual([])
    expect(titles('lattice: {bravais: cP, $0a: 4}\n')).toEqual(['State the lattice by vectors'])
    expect(titles('lattice: {bravais: cP, a: 4}\natoms:\n  - $0Si: [0, 0, 0]\n')).toEqual([
      'State the atoms in Cartesian coordinates',
    ])
  })
  test('kinds that are asked for', () => {
    const text = 'lattice: {bravais: cF, a: 4}\npath: Γ – X\n'
    const at = text.indexOf('X')
    expect(actionsAt(text, at, EAGER, ['refactor.extract']).map(({ kind }) => kind)).toEqual([
      'refactor.extract',
      'refactor.extract',
    ])
    expect(actionsAt(text, at, EAGER, ['refactor']).length).toBe(2)
    expect(actionsAt(text, at, EAGER, ['quickfix', 'refactor.rewrite'])).toEqual([])
  })
  test('edits come when one is chosen, and not for another version of the text', () => {
    const text = 'lattice: {bravais: cF, a: 4}\n'
    const lazy: Abilities = { versions: true, annotations: true, resolves: true }
    const [action] = actionsAt(text, 3, lazy)
    expect(action.edit).toBeUndefined()
    const data = action.data as RefactorData
    const edit = resolveRefactor(snapshotOf(text), data, lazy)
    expect(edit).toEqual(actionsAt(text, 3)[0].edit)
    expect(resolveRefactor(snapshotOf(text), { ...data, version: 7 }, lazy)).toBeUndefined()
    expect(resolveRefactor(snapshotOf(text), { ...data, key: 'none' }, lazy)).toBeUndefined()
  })
  test('numbers that change are looked at where the editor can show them', () => {
    const text = 'lattice: {bravais: cF, a: 4}\n'
    expect(actionsAt(text, 3)[0].edit).toMatchObject({
      changeAnnotations: { change: { needsConfirmation: true } },
      documentChanges: [{ textDocument: { uri: URI, version: 0 } }],
    })
    const plain = actionsAt(text, 3, { versions: true, annotations: false, resolves: false })[0].edit!
    expect(plain.changeAnnotations).toBeUndefined()
    expect(JSON.stringify(plain)).not.toContain('annotationId')
  })
})
