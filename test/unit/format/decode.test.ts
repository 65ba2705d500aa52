/** What the decoder gives of sound files: values, and the place of each in the text. */
import { describe, expect, test } from 'vitest'
import { decode } from '../../../server/src/format/decode.ts'
import type { NumberValue, Span, VectorValue } from '../../../server/src/format/model.ts'
import { documentOf } from './fixture.ts'

const values = (vector: VectorValue | undefined) => vector?.items.map(item => item?.value)

test('the smallest useful file', () => {
  const text = 'lattice: {bravais: cF, a: 5.43}\npath: Γ – X\n'
  const document = documentOf(text)
  const at = (span: Span | undefined) => span && text.slice(...span)
  expect(document.number).toBe(1)
  expect(at(document.at)).toBe(text)
  expect(at(document.contents)).toBe(text.trimEnd())
  expect([...document.keys.keys()]).toEqual(['lattice', 'path'])
  expect(document.lattice?.bravais?.value).toBe('cF')
  expect(at(document.lattice?.bravais?.at)).toBe('cF')
  expect(at(document.lattice?.key)).toBe('lattice')
  expect(at(document.lattice?.at)).toBe('{bravais: cF, a: 5.43}')
  expect(at(document.lattice?.item)).toBe('lattice: {bravais: cF, a: 5.43}\n')
  expect(at(document.lattice?.keys.get('a')?.item)).toBe('a: 5.43')
  expect(document.lattice?.parameters.a).toMatchObject({
    value: 5.43,
    text: '5.43',
    decimals: 2,
    exact: { p: 543, q: 100 },
  })
  expect(at(document.path?.pieces[0].segments[0].separator)).toBe('–')
  expect(at(document.path?.pieces[0].labels[1].at)).toBe('X')
  // The defaults that the format's description states.
  expect(document).toMatchObject({
    unit: 'angstrom',
    timeReversal: true,
    frames: { atoms: 'conventional', points: 'primitive' },
    labels: 'setyawan-curtarolo-2010',
    meshes: [],
    problems: [],
  })
})

test('everything at once', () => {
  const document = documentOf(`title: >-
  Two lines,
  one title
unit: bohr
tolerance: 1e-3
lattice: {bravais: hp, a: 4.65, height: 30}
atoms:
  - B: [1/3, 2/3, 1/2]
  - N: {at: [2/3, 1/3, 1/2], name: up}
time-reversal: no
frames:
  atoms: primitive
  points: 2pi/a
labels: none
points:
  Q: [1/2, 0]
  Gamma_1: {between: [Γ, K'], at: 0.85}
path: [Γ – M –(20)– K | M – Γ, recommended – X]
sampling: {total: 400}
mesh: {coarse: {divisions: [4, 4]}, fine: {spacing: 0.1, shift: [0, 1/2]}}
supercell: [[2, 1], [0, 3]]
checks: {path-misses: off, mesh-uneven: error}
`)
  expect(document.title?.value).toBe('Two lines, one title')
  expect(document.unit).toBe('bohr')
  expect(document.tolerance?.value).toBe(0.001)
  expect(document.lattice?.height?.value).toBe(30)
  expect(
    document.atoms?.items.map(({ element, name, position }) => [
      element?.value,
      name?.value,
      values(position),
    ]),
  ).toEqual([
    ['B', undefined, [1 / 3, 2 / 3, 0.5]],
    ['N', 'up', [2 / 3, 1 / 3, 0.5]],
  ])
  expect(document.timeReversal).toBe(false)
  expect(document.frames).toEqual({ atoms: 'primitive', points: '2pi/a' })
  expect(document.labels).toBe('none')
  const [q, between] = document.points!.items
  expect([q.label, values(q.coordinates)]).toEqual(['Q', [0.5, 0]])
  expect([
    between.label,
    between.between?.ends.map(({ label }) => label),
    between.between?.fraction?.value,
  ]).toEqual(['Γ1', ['Γ', "K'"], 0.85])
  expect(document.path?.pieces.map(({ labels }) => labels.map(({ label }) => label).join())).toEqual([
    'Γ,M,K',
    'M,Γ',
    'recommended,X',
  ])
  expect(document.path?.pieces[0].segments.map(({ steps }) => steps?.value)).toEqual([undefined, 20])
  expect(document.sampling?.total?.value).toBe(400)
  expect(
    document.meshes.map(mesh => [mesh.name, values(mesh.divisions), mesh.spacing?.value, values(mesh.shift)]),
  ).toEqual([
    ['coarse', [4, 4], undefined, undefined],
    ['fine', undefined, 0.1, [0, 0.5]],
  ])
  expect(document.supercell?.rows.map(values)).toEqual([
    [2, 1],
    [0, 3],
  ])
  expect(document.supercell?.diagonal).toBe(false)
  expect([...document.checks].map(([rule, { value }]) => [rule, value])).toEqual([
    ['path-misses', 'off'],
    ['mesh-uneven', 'error'],
  ])
})

describe('words that YAML 1.1 takes for something else', () => {
  test.each(['no', 'false', '"no"'])('time-reversal: %s', word =>
    expect(documentOf(`lattice: {bravais: cP, a: 1}\ntime-reversal: ${word}\n`).timeReversal).toBe(false),
  )
  test.each(['yes', 'true', "'yes'"])('time-reversal: %s', word =>
    expect(documentOf(`lattice: {bravais: cP, a: 1}\ntime-reversal: ${word}\n`).timeReversal).toBe(true),
  )
  test('elements, labels and severities, even where a directive asks for YAML 1.1', () => {
    const document = documentOf(`%YAML 1.1
---
lattice: {bravais: cP, a: 1}
atoms: [Y: [0, 0, 0], N: [1/2, 1/2, 1/2], No: [0, 0, 1/2]]
points: {Y: [1/2, 0, 0], N: [0, 1/2, 0]}
checks: {path-misses: off}
`)
    expect(document.atoms?.items.map(({ element }) => element?.value)).toEqual(['Y', 'N', 'No'])
    expect(document.points?.items.map(({ label }) => label)).toEqual(['Y', 'N'])
    expect(document.checks.get('path-misses')?.value).toBe('off')
  })
})

describe('a lattice parameter means in every number', () => {
  const point = (lattice: string, expression: string) =>
    documentOf(`lattice: {${lattice}}\npoints: {Q: ["${expression}", 0, 0]}\n`).points!.items[0].coordinates!
      .items[0]!.value
  test.each([
    ['what is stated', 'bravais: tI, a: 4, c: 6', '1/2 + a^2/(4*c^2)', 1 / 2 + 16 / 144],
    ['what another one is', 'bravais: tI, a: c/2, c: 6', 'a', 3],
    ['a = b = c in a cubic lattice', 'bravais: cF, a: 4', 'b + c', 8],
    ['right angles in a cubic lattice', 'bravais: cF, a: 4', 'alpha + beta + gamma', 270],
    ['a = b in a tetragonal lattice', 'bravais: tP, a: 4, c: 6', 'b', 4],
    ['γ = 120° in a hexagonal lattice', 'bravais: hP, a: 4, c: 6', 'gamma', 120],
    ['the hexagonal axes of a rhombohedral lattice', 'bravais: hR, a: 4, c: 6', 'b + gamma', 124],
    ['the rhombohedral axes of one', 'bravais: hR, a: 4, alpha: 57', 'c + gamma', 61],
    ['right angles of a monoclinic lattice', 'bravais: mP, a: 4, b: 5, c: 6, beta: 99', 'alpha', 90],
    ['γ = 120° in a plane hexagonal lattice', 'bravais: hp, a: 4', 'b + gamma', 124],
    ['what is stated beyond the free ones', 'bravais: cF, a: 4, b: 5', 'b', 5],
    ['a definition beside vectors', 'a: 4, vectors: [[a, 0, 0]]', 'a/2', 2],
  ])('%s', (_what, lattice, expression, value) => expect(point(lattice, expression)).toBe(value))

  test('even where the lattice stands below', () => {
    const document = documentOf('points: {Q: [a, 0, 0]}\nlattice: {bravais: cP, a: 4}\n')
    expect(document.points?.items[0].coordinates?.items[0]).toMatchObject({ value: 4, uses: ['a'] })
  })

  test('and a number that hangs on an unreadable one is silent', () => {
    const { documents } = decode('lattice: {bravais: cP, a: 4 x}\npoints: {Q: [a, 0, 0]}\n')
    expect(documents[0].problems.map(({ rule }) => rule)).toEqual(['number-malformed'])
    expect(documents[0].points?.items[0].coordinates?.items.map(item => item?.value)).toEqual([
      undefined,
      0,
      0,
    ])
  })
})

describe('several documents', () => {
  const text = `# first
lattice: {bravais: cP, a: 1}
---
---
# second
lattice: {bravais: cI, a: 2}
...
# between
%YAML 1.2
---
{lattice: {bravais: cF, a: 3}}
`
  const { documents } = decode(text)
  test('inherit nothing; empty ones are skipped', () => {
    expect(documents.map(({ number, lattice }) => [number, lattice?.bravais?.value])).toEqual([
      [1, 'cP'],
      [2, 'cI'],
      [3, 'cF'],
    ])
  })
  test('cover the text', () => {
    expect(documents.map(({ at }) => text.slice(...at)).join('')).toBe(text)
    expect(documents.map(({ contents }) => text.slice(...contents))).toEqual([
      'lattice: {bravais: cP, a: 1}',
      'lattice: {bravais: cI, a: 2}',
      '{lattice: {bravais: cF, a: 3}}',
    ])
  })
})

describe('anchors and aliases', () => {
  const text = `lattice: {bravais: cP, a: &length 4}
points:
  Q: &q [0, 0, 1/2]
  R: *q
  S: [0, 0, *length]
atoms: &atoms
  - Si: *q
`
  const document = documentOf(text)
  test('work', () => {
    expect(document.points?.items.map(({ coordinates }) => values(coordinates))).toEqual([
      [0, 0, 0.5],
      [0, 0, 0.5],
      [0, 0, 4],
    ])
  })
  test('a value behind an alias has the place of the alias, with all that is in it', () => {
    const { coordinates } = document.points!.items[1]
    const places = [coordinates!.at, ...coordinates!.items.map(item => (item as NumberValue).at)]
    expect(places.map(at => text.slice(...at))).toEqual(['*q', '*q', '*q', '*q'])
    expect(text.slice(...document.points!.items[1].item)).toBe('  R: *q\n')
  })
  test('the last anchor of a name before the alias counts', () => {
    const { points } = documentOf(
      'lattice: {bravais: cP, a: 1}\npoints: {Q: &x [0, 0, 0], R: &x [1, 0, 0], S: *x}\n',
    )
    expect(values(points?.items[2].coordinates)).toEqual([1, 0, 0])
  })
  test('a whole block', () => {
    const { meshes } = documentOf(
      'lattice: {bravais: cP, a: 1}\nmesh: {coarse: &m {divisions: [2, 2, 2]}, fine: *m}\n',
    )
    expect(meshes.map(({ name, divisions }) => [name, values(divisions)])).toEqual([
      ['coarse', [2, 2, 2]],
      ['fine', [2, 2, 2]],
    ])
  })
})

describe('spans through quotes, escapes, folds and blocks', () => {
  test.each([
    ['plain', 'path: Γ – X', ['Γ', 'X']],
    ['quoted', "path: 'Γ – X'", ['Γ', 'X']],
    ['escaped', 'path: "\\u0393 –\\x20\\u0058\\t"', ['\\u0393', '\\u0058']],
    ['folded', 'path:\n  Γ –\n    X', ['Γ', 'X']],
    ['folded in quotes', 'path: "Γ\n  \\\n   – X"', ['Γ', 'X']],
    ['literal', 'path: |\n  Γ\n  – X', ['Γ', 'X']],
    ['folded block', 'path: >-\n\n    Γ –\n\n    X', ['Γ', 'X']],
    ['block with its own indentation', 'path: >1-\n   Γ –\n  X', ['Γ', 'X']],
    ['carriage returns', 'path: |\r\n  Γ –\r\n  X', ['Γ', 'X']],
  ])('%s', (_style, path, labels) => {
    const text = `lattice: {bravais: cP, a: 1}\n${path}\n`
    const document = documentOf(text)
    const [piece] = document.path!.pieces
    expect(piece.labels.map(({ label }) => label)).toEqual(['Γ', 'X'])
    expect(piece.labels.map(({ at }) => text.slice(...at))).toEqual(labels)
    expect(text.slice(...piece.segments[0].separator)).toBe('–')
  })
})

describe('items, which are what to delete', () => {
  const items = (text: string) => {
    const document = documentOf(text)
    const all = [...(document.atoms?.items ?? []), ...(document.points?.items ?? [])]
    return all.map(({ item }) => text.slice(...item))
  }
  const lattice = 'lattice: {bravais: cP, a: 1}\n'
  test('whole lines in blocks', () =>
    expect(
      items(
        `${lattice}atoms:\n  # first\n  - Si: [0, 0, 0] # a\n  - O:\n      at: [1, 0, 0]\n      name: up\n`,
      ),
    ).toEqual(['  - Si: [0, 0, 0] # a\n', '  - O:\n      at: [1, 0, 0]\n      name: up\n']))
  test('with a comma in brackets', () => {
    expect(items(`${lattice}points: {Q: [0, 0, 0], R: [1, 0, 0],\n  S: [0, 1, 0]}\n`)).toEqual([
      'Q: [0, 0, 0], ',
      'R: [1, 0, 0],',
      'S: [0, 1, 0]',
    ])
    expect(items(`${lattice}points: {Q: [0, 0, 0],}\n`)).toEqual(['Q: [0, 0, 0],'])
    expect(items(`${lattice}atoms: [Si: [0, 0, 0], O: [1, 0, 0]]\n`)).toEqual([
      'Si: [0, 0, 0], ',
      'O: [1, 0, 0]',
    ])
  })
  test('of a file without a last line break', () =>
    expect(items(`${lattice}points:\n  Q: [0, 0, 0]`)).toEqual(['  Q: [0, 0, 0]']))
  test('nothing behind an alias', () => {
    const { documents } = decode(`x: &p {Q: [0, 0, 0]}\n${lattice}points: *p\n`)
    expect(documents[0].points?.items.map(({ item }) => item[1] - item[0])).toEqual([0])
  })
})

describe('comments that allow a rule', () => {
  const allowed = (text: string) => {
    const { allowances } = decode(text)
    return allowances.map(({ line, rules }) => `${line}: ${rules.map(({ value }) => value).join(' ')}`)
  }
  test('at the end of a line', () =>
    expect(allowed('lattice: 5 # braggline: allow lattice-flat, path-jump path-misses\n')).toEqual([
      '0: lattice-flat path-jump path-misses',
    ]))
  test('alone above, over other comments', () =>
    expect(
      allowed('# braggline: allow a\n# a note\n  # braggline: allow b\npath: Γ – X # braggline: allow c\n'),
    ).toEqual(['3: a', '3: b', '3: c']))
  test('of a text over several lines: all of them', () => {
    expect(allowed('# braggline: allow a\npath: |\n  Γ – X\n  – W\ntitle: x\n')).toEqual([
      '1: a',
      '2: a',
      '3: a',
    ])
    expect(allowed('path: > # braggline: allow a\n  Γ – X\n')).toEqual(['0: a', '1: a'])
    expect(allowed('path: Γ – X\n  – W # braggline: allow a\n')).toEqual(['0: a', '1: a'])
  })
  test('not inside of a text', () =>
    expect(allowed('title: "# braggline: allow a"\npath: |\n  # braggline: allow b\n')).toEqual([]))
  test('with carriage returns', () =>
    expect(allowed('\r\n\r\nlattice: 5 # braggline: allow a\r\n')).toEqual(['2: a']))
})

test('what is unreadable is undefined and known as a key', () => {
  const { documents } = decode(
    'lattice: {bravais: cP, a: x, vectors: [1, 2]}\nmesh: 5\npath: [[]]\nunit: x\n',
  )
  const [document] = documents
  expect(document.lattice?.parameters.a).toBeUndefined()
  expect(document.lattice?.keys.has('a')).toBe(true)
  expect(document.lattice?.vectors?.rows).toEqual([])
  expect(document.meshes).toEqual([])
  expect(document.meshEntry).toBeDefined()
  expect(document.path?.pieces).toEqual([])
  expect(document.unitEntry).toBeDefined()
})
