import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { Snapshot } from '../../../server/src/analysis.ts'
import { determinant, multiply, transpose, type Mat3 } from '../../../server/src/crystal/vector.ts'
import { applyEdits } from '../../../server/src/format/edits.ts'
import { pastedLattice } from '../../../server/src/language/pasted-lattice.ts'
import { Workshop } from '../../../server/src/meaning/workshop.ts'
import { loadSymmetryFromDisk } from '../../../server/src/symmetry-node.ts'
import { directSymmetry } from '../../../server/src/symmetry-service.ts'

loadSymmetryFromDisk()
const workshop = new Workshop(directSymmetry)
const snapshotOf = (text: string) => new Snapshot(text, workshop)

/** All choices with the text that each would leave. */
function pasted(clipboard: string, text = '', offset = text.length) {
  const snapshot = snapshotOf(text)
  const { choices, reason } = pastedLattice(clipboard, snapshot, offset)
  return {
    reason,
    choices: choices.map(({ title, detail, replaces, edits }) => ({
      title,
      detail,
      replaces,
      text: applyEdits(
        text,
        edits.map(({ range, newText }) => ({
          at: [snapshot.offsetOf(range.start), snapshot.offsetOf(range.end)],
          text: newText,
        })),
      ),
    })),
  }
}
const only = (clipboard: string, text?: string) => pasted(clipboard, text).choices.map(({ text }) => text)
const metric = (m: Mat3) => multiply(m, transpose(m)).flat()

const FCC = '0 2.7155 2.7155\n2.7155 0 2.7155\n2.7155 2.7155 0'

describe('a face-centred cubic lattice', () => {
  test('exact, by type and as it is', () => {
    expect(only(`vectors in Å\n${FCC}`)).toEqual([
      'lattice:\n  bravais: cF\n  a: 5.431\n  vectors:\n    - [0, a/2, a/2]\n    - [a/2, 0, a/2]\n    - [a/2, a/2, 0]\n',
      'lattice:\n  bravais: cF\n  a: 5.431\n',
      'lattice:\n  vectors:\n    - [0, 2.7155, 2.7155]\n    - [2.7155, 0, 2.7155]\n    - [2.7155, 2.7155, 0]\n',
    ])
  })
  test('with its scale', () => {
    const scaled = 'Å\n5.431\n0.0 0.5 0.5\n0.5 0.0 0.5\n0.5 0.5 0.0'
    expect(only(scaled)[1]).toBe('lattice:\n  bravais: cF\n  a: 5.431\n')
  })
  test('in bohr states its unit', () =>
    expect(only('bohr\n10.263\n0 1/2 1/2\n1/2 0 1/2\n1/2 1/2 0')[1]).toBe(
      'unit: bohr\nlattice:\n  bravais: cF\n  a: 10.263\n',
    ))
  test('without a unit is offered in each that is plausible', () => {
    const { choices } = pasted('10.263\n0 1/2 1/2\n1/2 0 1/2\n1/2 1/2 0')
    // V = a³/4: 270.25 Å³; times 0.529177³ (CODATA): 40.05 Å³.
    const told = choices.map(({ detail }) =>
      /read in (\w+|Å): a primitive cell of (\S+) Å³/.exec(detail)!.slice(1),
    )
    expect(told).toEqual([...Array(3).fill(['Å', '270.25']), ...Array(3).fill(['bohr', '40.05'])])
  })
})

// √3/2 · 3.19 = 2.76262…
const HEXAGONAL = 'in Å\n3.19 0 0\n-1.595 2.7626 0\n0 0 5.189'
test('a rounded hexagonal lattice becomes exact', () => {
  expect(only(HEXAGONAL)[0]).toBe(
    'lattice:\n  bravais: hP\n  a: 3.19\n  c: 5.189\n  vectors:\n    - [a, 0, 0]\n    - [-a/2, sqrt(3)/2*a, 0]\n    - [0, 0, c]\n',
  )
})

test('a triclinic lattice stays as it is, first of all', () => {
  const [first, second] = only('in Å\n4.1 0.2 0\n0.3 5.2 0.4\n0.1 0.5 6.3')
  expect(first).toBe(
    'lattice:\n  vectors:\n    - [4.1, 0.2, 0]\n    - [0.3, 5.2, 0.4]\n    - [0.1, 0.5, 6.3]\n',
  )
  expect(second).toMatch(/bravais: aP/)
})

test('columns are offered, first where they are more symmetric', () => {
  const columns = 'in Å\n3.19 -1.595 0\n0 2.7626 0\n0 0 5.189'
  const [first] = pasted(columns).choices
  expect(first.detail).toContain('by columns')
  expect(first.text).toBe(only(HEXAGONAL)[0])
  expect(pasted(columns).choices.some(({ detail }) => !detail.includes('by columns'))).toBe(true)
})

describe.each([
  ['cF', FCC],
  ['hP', HEXAGONAL],
  ['cI', '-2 2 2\n2 -2 2\n2 2 -2'],
  ['tI', '-2.1 2.1 3.3\n2.1 -2.1 3.3\n2.1 2.1 -3.3'],
  ['oF', '0 2.5 3.1\n2.1 0 3.1\n2.1 2.5 0'],
  ['hR', '2.1 1.212436 9.8\n-2.1 1.212436 9.8\n0 -2.424871 9.8'],
  ['mP', '5.1 0 0\n0 6.2 0\n-1.3 0 7.4'],
  ['left-handed', '5.1 0 0\n0 0 6.2\n0 7.4 0'],
  ['rotated', '3.1 3.1 0\n-3.1 3.1 0\n0 0 4.6'],
])('%s', (_, clipboard) => {
  test('each way to write it is the same lattice, and has no error', () => {
    const numbers = clipboard
      .split('\n')
      .slice(-3)
      .map(row => row.split(/\s+/).map(Number)) as unknown as Mat3
    const { choices } = pasted(`Å\n${clipboard}`)
    expect(choices.length).toBeGreaterThan(1)
    for (const { text, detail, title } of choices) {
      if (detail.includes('by columns')) continue
      const snapshot = snapshotOf(text)
      expect(
        snapshot.findings.filter(({ severity }) => severity === 'error'),
        `${title}\n${text}`,
      ).toEqual([])
      const { lattice } = snapshot.documents[0].crystal
      expect(lattice!.volume, text).toBeCloseTo(Math.abs(determinant(numbers)), 1)
      if (detail.includes('by type')) continue
      for (const [i, x] of metric(lattice!.primitive).entries())
        expect(x, text).toBeCloseTo(metric(numbers)[i], 2)
    }
  })
})

describe('into a file', () => {
  const cubic = 'in Å\n4 0 0\n0 4 0\n0 0 4'
  const byType = (text: string, clipboard = cubic) => pasted(clipboard, text).choices[1]

  test('that has a lattice replaces it, and says so', () => {
    const text = 'title: x\nlattice:\n  bravais: hP\n  a: 3\n  c: 5\n# the path\npath: Γ – X\n'
    expect(byType(text)).toMatchObject({
      replaces: true,
      text: 'title: x\nlattice:\n  bravais: cP\n  a: 4\n# the path\npath: Γ – X\n',
    })
  })
  test('in one line', () =>
    expect(byType('lattice: {bravais: cF, a: 5}\npath: Γ – X\n').text).toBe(
      'lattice:\n  bravais: cP\n  a: 4\npath: Γ – X\n',
    ))
  test('all in braces', () =>
    expect(byType('{lattice: {bravais: cF, a: 5}, path: Γ – X}\n').text).toBe(
      '{lattice: {bravais: cP, a: 4}, path: Γ – X}\n',
    ))
  test('without one gets it at its place', () => {
    expect(byType('title: x\npath: Γ – X\n')).toMatchObject({
      replaces: false,
      text: 'title: x\nlattice:\n  bravais: cP\n  a: 4\npath: Γ – X\n',
    })
    expect(byType('# nothing yet\n').text).toBe('# nothing yet\nlattice:\n  bravais: cP\n  a: 4\n')
  })
  test('with a key that has no value yet', () =>
    expect(byType('lattice:\npath: Γ – X\n').text).toBe('lattice:\n  bravais: cP\n  a: 4\npath: Γ – X\n'))
  test('with Windows line ends keeps them', () =>
    expect(byType('title: x\r\npath: Γ – X\r\n').text).toBe(
      'title: x\r\nlattice:\r\n  bravais: cP\r\n  a: 4\r\npath: Γ – X\r\n',
    ))
  test('of several crystals: the one at the cursor', () => {
    const text = 'lattice: {bravais: cF, a: 5}\n---\nlattice: {bravais: cI, a: 3}\n'
    const [, { text: first }] = pasted(cubic, text, 0).choices
    expect(first).toBe('lattice:\n  bravais: cP\n  a: 4\n---\nlattice: {bravais: cI, a: 3}\n')
  })
  test('whose lengths have a unit: converted into it', () => {
    // 4 Å = 0.4 nm.
    expect(byType('unit: nm\npath: Γ – X\n').text).toBe(
      'unit: nm\nlattice:\n  bravais: cP\n  a: 0.4\npath: Γ – X\n',
    )
    expect(byType('sampling: {spacing: 0.02}\n', 'in nm\n0.4 0 0\n0 0.4 0\n0 0 0.4').text).toBe(
      'lattice:\n  bravais: cP\n  a: 4\nsampling: {spacing: 0.02}\n',
    )
  })
  test('whose lattice others need is left alone', () =>
    expect(pasted(cubic, 'lattice: &cell {bravais: cF, a: 5}\n---\nlattice: *cell\n', 0)).toMatchObject({
      choices: [],
    }))
})

test('a text without vectors says why there is nothing', () =>
  expect(pasted('hello')).toEqual({ choices: [], reason: expect.stringMatching(/three rows/) }))

test('any vectors with any digits: each way to write them is theirs within the rounding, and has no error', () => {
  const part = fc.integer({ min: -2_000_000, max: 2_000_000 }).map(n => n / 1e6)
  const rows = fc
    .array(fc.array(part, { minLength: 3, maxLength: 3 }), { minLength: 3, maxLength: 3 })
    .map(m => m.map((row, i) => row.map((x, j) => (i === j ? x + 4 : x))))
  fc.assert(
    fc.property(rows, fc.integer({ min: 0, max: 8 }), (m, digits) => {
      const text = m.map(row => row.map(x => x.toFixed(digits)).join(' '))
      const numbers = text.map(row => row.split(' ').map(Number)) as unknown as Mat3
      fc.pre(Math.abs(determinant(numbers)) > 8)
      for (const { text: file, detail, title } of pasted(`in Å\n${text.join('\n')}`).choices) {
        const snapshot = snapshotOf(file)
        expect(
          snapshot.findings.filter(({ severity }) => severity === 'error'),
          `${title}\n${file}`,
        ).toEqual([])
        const { lattice } = snapshot.documents[0].crystal
        // A rounding moves a vector of up to 10.4 Å by under a unit of its last digit: its square by 21 of them.
        const slack = 21 * 10 ** -digits * Number(digits >= 2) + 1e-6
        if (detail.includes('by columns') || detail.includes('by type')) continue
        for (const [i, x] of metric(lattice!.primitive).entries())
          expect(Math.abs(x - metric(numbers)[i]), `${title}\n${file}`).toBeLessThan(slack)
      }
    }),
    { numRuns: 60 },
  )
})
