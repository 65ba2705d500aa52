/** Edits from text to text. */
import { describe, expect, test } from 'vitest'
import { decode } from '../../../server/src/format/decode.ts'
import {
  appendToPath,
  applyEdits,
  breakSegment,
  indentation,
  insertAllowance,
  insertKeys,
  insertLabels,
  type NewKey,
  overlap,
  removeEntry,
  removeItems,
  removeSegment,
  replaceValue,
  replaceVector,
  standsHere,
} from '../../../server/src/format/edits.ts'
import type { LatticeDocument, TextEdit } from '../../../server/src/format/model.ts'

const LATTICE = 'lattice: {bravais: cF, a: 5.43}\n'

/** Decode a text, make edits from it, and apply them. */
function edit(text: string, make: (document: LatticeDocument) => readonly TextEdit[]): string {
  return applyEdits(text, make(decode(text).documents[0]))
}

describe('applying', () => {
  const insert = (at: number, text: string): TextEdit => ({ at: [at, at], text })
  test('places refer to the text before; insertions at one place keep their order', () => {
    expect(
      applyEdits('abc', [
        { at: [1, 2], text: 'X' },
        insert(0, '1'),
        insert(1, '2'),
        insert(1, '3'),
        insert(3, '4'),
      ]),
    ).toBe('1a23Xc4')
    expect(applyEdits('abc', [])).toBe('abc')
  })
  test.each([
    [
      [
        { at: [0, 2], text: '' },
        { at: [1, 3], text: '' },
      ],
    ],
    [
      [
        { at: [0, 2], text: '' },
        { at: [1, 1], text: 'x' },
      ],
    ],
    [[{ at: [2, 4], text: '' }]],
    [[{ at: [2, 1], text: '' }]],
    [[{ at: [-1, 1], text: '' }]],
  ] as [TextEdit[]][])('what overlaps or leaves the text is refused: %j', edits =>
    expect(() => applyEdits('abc', edits)).toThrow(RangeError),
  )
  test('overlapping can be asked before', () => {
    expect(overlap({ at: [0, 2], text: '' }, { at: [1, 3], text: '' })).toBe(true)
    expect(overlap({ at: [0, 2], text: '' }, { at: [2, 3], text: '' })).toBe(false)
    expect(overlap(insert(2, 'a'), insert(2, 'b'))).toBe(true)
    expect(overlap({ at: [0, 2], text: '' }, insert(0, 'b'))).toBe(false)
  })
})

describe('keys inserted', () => {
  const inserted = (text: string, ...keys: NewKey[]) =>
    edit(text, document => insertKeys(text, document, keys))

  test('at their usual place', () =>
    expect(
      inserted(
        `# top\ntitle: x\n\n# the lattice\n${LATTICE}path: Γ – X\n`,
        ['labels', 'none'],
        ['unit', 'nm'],
        ['checks', '{a: off}'],
      ),
    ).toBe(
      `# top\ntitle: x\nunit: nm\n\n# the lattice\n${LATTICE}labels: none\npath: Γ – X\nchecks: {a: off}\n`,
    ))
  test('before the first key, under the comment of the file', () =>
    expect(inserted(`# top\n${LATTICE}`, ['title', 'x'])).toBe(`# top\ntitle: x\n${LATTICE}`))
  test('after a block with what belongs to it', () =>
    expect(inserted(`lattice:\n  bravais: cF\n  a: 5 # a\n\npath: Γ – X`, ['atoms', '[Si: [0, 0, 0]]'])).toBe(
      `lattice:\n  bravais: cF\n  a: 5 # a\natoms: [Si: [0, 0, 0]]\n\npath: Γ – X`,
    ))
  test('at the end of a text without a last line break', () =>
    expect(inserted('lattice: {bravais: cF, a: 5}', ['path', 'Γ – X'])).toBe(
      'lattice: {bravais: cF, a: 5}\npath: Γ – X',
    ))
  test('after a text of several lines', () =>
    expect(inserted(`title: |\n  a\n  b\n${LATTICE}`, ['unit', 'nm'])).toBe(
      `title: |\n  a\n  b\nunit: nm\n${LATTICE}`,
    ))
  test('with the line break of the file', () =>
    expect(inserted('lattice: {bravais: cF, a: 5}\r\n', ['path', 'Γ – X'])).toBe(
      'lattice: {bravais: cF, a: 5}\r\npath: Γ – X\r\n',
    ))
  test('in braces', () => {
    expect(
      inserted('{lattice: {bravais: cF, a: 5}, path: Γ – X}\n', ['labels', 'none'], ['mesh', '{spacing: 1}']),
    ).toBe('{lattice: {bravais: cF, a: 5}, labels: none, path: Γ – X, mesh: {spacing: 1}}\n')
    expect(inserted('{}\n', ['lattice', '{bravais: cF, a: 5}'], ['title', 'x'])).toBe(
      '{title: x, lattice: {bravais: cF, a: 5}}\n',
    )
  })
  test('beside keys that nobody knows', () => {
    expect(inserted('  foo: 1\n', ['title', 'x'])).toBe('  title: x\n  foo: 1\n')
    expect(inserted('{foo: 1}\n', ['title', 'x'])).toBe('{title: x, foo: 1}\n')
    expect(
      edit('lattice:\n  foo: 1\n', document =>
        insertKeys('lattice:\n  foo: 1\n', document.lattice!, [['a', '5']]),
      ),
    ).toBe('lattice:\n  a: 5\n  foo: 1\n')
  })
  test('into the second document only', () => {
    const text = `${LATTICE}---\n${LATTICE}`
    expect(applyEdits(text, insertKeys(text, decode(text).documents[1], [['path', 'Γ – X']]))).toBe(
      `${LATTICE}---\n${LATTICE}path: Γ – X\n`,
    )
  })
  test('into a document that holds nothing', () => {
    const text = '# empty\n---\nnothing\n'
    const document = { ...decode(text).documents[0], contents: [text.length, text.length] as const }
    expect(applyEdits(text, insertKeys(text, document, [['title', 'x']]))).toBe(`${text}title: x\n`)
  })

  const lattice = (text: string, ...keys: NewKey[]) =>
    edit(text, document => insertKeys(text, document.lattice!, keys))
  test('into a block', () =>
    expect(
      lattice('lattice:\n    a: 5 # length\n    gamma: 90\n', ['bravais', 'mP'], ['c', ''], ['b', '4']),
    ).toBe('lattice:\n    bravais: mP\n    a: 5 # length\n    b: 4\n    c: \n    gamma: 90\n'))
  test('into a mapping in braces', () =>
    expect(lattice('lattice: {bravais: tI, a: 3.8}\n', ['c', '9.5'])).toBe(
      'lattice: {bravais: tI, a: 3.8, c: 9.5}\n',
    ))
  test('into braces over several lines', () =>
    expect(lattice('lattice: {\n  bravais: tI, # type\n  a: 3.8,\n}\n', ['c', '9.5'])).toBe(
      'lattice: {\n  bravais: tI, # type\n  a: 3.8, c: 9.5,\n}\n',
    ))
  test('frames, points, sampling, mesh', () => {
    const text = `${LATTICE}frames:\n  points: cartesian\npoints:\n  Q: [0, 0, 0]\n  # last\nmesh: {spacing: 1}\nsampling: {steps: 4}\n`
    expect(
      edit(text, document => [
        ...insertKeys(text, document.framesEntry!, [['atoms', 'primitive']]),
        ...insertKeys(text, document.points!, [['Y', '[0, 1/2, 0]']]),
        ...insertKeys(text, document.meshes[0], [['shift', '[0, 0, 1/2]']]),
      ]),
    ).toBe(
      `${LATTICE}frames:\n  atoms: primitive\n  points: cartesian\npoints:\n  Q: [0, 0, 0]\n  "Y": [0, 1/2, 0]\n  # last\nmesh: {spacing: 1, shift: [0, 0, 1/2]}\nsampling: {steps: 4}\n`,
    )
  })
  test('into a mapping that has no value yet', () =>
    expect(
      edit('lattice:\npath: Γ – X\n', ({ keys }) =>
        insertKeys('lattice:\npath: Γ – X\n', { ...keys.get('lattice')!, keys: new Map() }, [['a', '5']]),
      ),
    ).toBe('lattice: {a: 5}\npath: Γ – X\n'))
  test('not behind an alias', () => {
    const text = `x: &l {bravais: cF, a: 5}\nlattice: *l\n`
    expect(insertKeys(text, decode(text).documents[0].lattice!, [['c', '1']])).toEqual([])
  })
})

describe('entries and items removed', () => {
  const removed = (text: string, ...names: string[]) =>
    edit(text, ({ keys }) => names.map(name => removeEntry(text, keys.get(name)!)))
  test('with their lines', () =>
    expect(
      removed(`${LATTICE}# about\npath: # broken\n  - Γ – X # one\n  - U – X\n# more\ntitle: x\n`, 'path'),
    ).toBe(`${LATTICE}# about\n# more\ntitle: x\n`))
  test('several in braces', () => {
    const text = '{title: x, lattice: {bravais: cF, a: 5}, unit: nm, path: Γ – X}\n'
    expect(removed(text, 'title', 'unit')).toBe('{lattice: {bravais: cF, a: 5}, path: Γ – X}\n')
    expect(removed(text, 'unit', 'path')).toBe('{title: x, lattice: {bravais: cF, a: 5}, }\n')
  })
  test('not where an alias needs what stands there', () => {
    const text = `${LATTICE}title: &t x\npoints: {Q: [0, 0, 0]}\ncopy: *t\n`
    expect(removed(text, 'title')).toBe(text)
  })
  test('all items: with their key', () => {
    const text = `${LATTICE}points:\n  Q: [0, 0, 0]\n  R: [1, 0, 0]\n`
    const points = (document: LatticeDocument) => document.points!
    expect(edit(text, document => removeItems(points(document), points(document).items))).toBe(LATTICE)
    expect(edit(text, document => removeItems(points(document), points(document).items.slice(1)))).toBe(
      `${LATTICE}points:\n  Q: [0, 0, 0]\n`,
    )
  })
})

describe('values replaced', () => {
  const replaced = (text: string, name: string, value: string) =>
    edit(text, ({ keys }) => [replaceValue(text, keys.get(name)!, value)])
  test.each([
    ['path: Γ – X # note', 'path: recommended # note'],
    ['path:', 'path: recommended'],
    ['path: ', 'path: recommended'],
    ['path: # note\n  - Γ – X # one\n  - U – X # two', 'path: recommended # note # two'],
    ['path: |\n  Γ – X\n  – W', 'path: recommended'],
    ['path:\n  Γ – X –\n  W', 'path: recommended'],
    ['path: "Γ – X"', 'path: recommended'],
    ['"path" : Γ – X', '"path" : recommended'],
    ['path: [Γ – X,\n  U – X]', 'path: recommended'],
  ])('%j', (before, after) =>
    expect(replaced(`${LATTICE}${before}\ntitle: x\n`, 'path', 'recommended')).toBe(
      `${LATTICE}${after}\ntitle: x\n`,
    ),
  )

  test('numbers of a vector in its own layout', () => {
    const text = `${LATTICE}points:\n  Q: [ 0.333,  0.5, # half\n       0 ]\n  R:\n    - 0.667\n    - 0\n    - 0\n`
    expect(
      edit(text, ({ points }) => [
        ...replaceVector(text, points!.items[0].coordinates!, ['1/3', undefined, '0']),
        ...replaceVector(text, points!.items[1].coordinates!, ['2/3', undefined, '1/4']),
      ]),
    ).toBe(`${LATTICE}points:\n  Q: [ 1/3,  0.5, # half\n       0 ]\n  R:\n    - 2/3\n    - 0\n    - 1/4\n`)
  })
  test('a vector of another length, or behind an alias, as a whole', () => {
    const text = `${LATTICE}points: {Q: &q [0, 0.333], R: *q}\n`
    const [q, r] = decode(text).documents[0].points!.items
    expect(applyEdits(text, replaceVector(text, q.coordinates!, [undefined, '1/3', '0']))).toBe(
      `${LATTICE}points: {Q: &q [0, 1/3, 0], R: *q}\n`,
    )
    expect(applyEdits(text, replaceVector(text, r.coordinates!, [undefined, '1/3']))).toBe(
      `${LATTICE}points: {Q: &q [0, 0.333], R: [0, 1/3]}\n`,
    )
    expect(standsHere(text, q.coordinates!.at)).toBe(true)
    expect(standsHere(text, r.coordinates!.at)).toBe(false)
  })
})

describe('paths', () => {
  const appended = (path: string) => {
    const text = `${LATTICE}path: ${path}\ntitle: x\n`
    return edit(text, document =>
      appendToPath(text, document.path!, [
        ['Γ', 'L'],
        ['U', 'X1'],
      ]),
    ).slice(`${LATTICE}path: `.length, -'\ntitle: x\n'.length)
  }
  test.each([
    ['Γ – X # note', 'Γ – X | Γ – L | U – X1 # note'],
    ['"Γ – X"', '"Γ – X | Γ – L | U – X1"'],
    ["'Γ – X'", "'Γ – X | Γ – L | U – X1'"],
    ['|\n  Γ – X\n  – W', '|\n  Γ – X\n  – W | Γ – L | U – X1'],
    ['[Γ – X, X – W]', '[Γ – X, X – W, Γ – L | U – X1]'],
    ['[Γ – X,\n  X – W, ]', '[Γ – X,\n  X – W, Γ – L | U – X1, ]'],
    ['\n  - Γ – X # one\n  - X – W', '\n  - Γ – X # one\n  - X – W\n  - Γ – L | U – X1'],
    ['recommended', 'recommended'],
  ])('pieces appended to %j', (before, after) => expect(appended(before)).toBe(after))

  const changed = (
    path: string,
    change: (text: string, document: LatticeDocument) => readonly TextEdit[],
  ) => {
    const text = `${LATTICE}path: ${path}\n`
    return edit(text, document => change(text, document)).slice(`${LATTICE}path: `.length, -1)
  }
  const segment = (document: LatticeDocument, piece: number, index: number) =>
    document.path!.pieces[piece].segments[index]

  test('a break in place of a separator', () => {
    expect(changed('Γ – X – U – K', (text, d) => breakSegment(text, segment(d, 0, 1)))).toBe('Γ – X | U – K')
    expect(changed('Γ-X-U-K', (text, d) => breakSegment(text, segment(d, 0, 1)))).toBe('Γ-X | U-K')
    expect(changed('Γ – X –(20)– U – K', (text, d) => breakSegment(text, segment(d, 0, 1)))).toBe(
      'Γ – X | U – K',
    )
  })
  test('points named on the way, with the separator that is there', () => {
    expect(changed("K → K'", (text, d) => insertLabels(text, segment(d, 0, 0), ['M']))).toBe("K → M → K'")
    expect(changed("K-K'", (text, d) => insertLabels(text, segment(d, 0, 0), ['M', 'N']))).toBe("K-M-N-K'")
    expect(changed('Γ –(20)– X', (text, d) => insertLabels(text, segment(d, 0, 0), ['K']))).toBe('Γ – K – X')
  })
  test.each([
    ['Γ – X – W', 0, 0, 'X – W'],
    ['Γ – X – W', 0, 1, 'Γ – X'],
    ['Γ – X – W – K', 0, 1, 'Γ – X | W – K'],
    ['Γ – X | W – K | U – X', 1, 0, 'Γ – X | U – X'],
    ['Γ – X | W – K', 0, 0, 'W – K'],
    ['Γ – X', 0, 0, 'Γ – X'],
    ['[Γ – X, W – K]', 0, 0, '[Γ – X, W – K]'],
  ])('a segment of %s removed', (path, piece, index, after) =>
    expect(changed(path, (text, d) => removeSegment(text, d.path!, segment(d, piece, index)))).toBe(after),
  )
})

describe('allowances', () => {
  const allowed = (marked: string, rule = 'path-jump') => {
    const offset = marked.indexOf('$0')
    const text = marked.replace('$0', '')
    return applyEdits(text, insertAllowance(text, offset, rule))
  }
  test.each([
    ['path: $0Γ – X\n', 'path: Γ – X # braggline: allow path-jump\n'],
    ['path: $0Γ – X  \r\n', 'path: Γ – X # braggline: allow path-jump  \r\n'],
    ['path: $0Γ – X', 'path: Γ – X # braggline: allow path-jump'],
    ['path: $0Γ – X # braggline: allow a, b\n', 'path: Γ – X # braggline: allow a, b, path-jump\n'],
    ['path: $0Γ – X # a note\n', '# braggline: allow path-jump\npath: Γ – X # a note\n'],
    ['points:\n  Q: $0[0, 0] # a note\n', 'points:\n  # braggline: allow path-jump\n  Q: [0, 0] # a note\n'],
    ['# braggline: allow a\npath: $0Γ – X\n', '# braggline: allow a, path-jump\npath: Γ – X\n'],
    [
      'x: 1 # braggline: allow a\npath: $0Γ – X\n',
      'x: 1 # braggline: allow a\npath: Γ – X # braggline: allow path-jump\n',
    ],
    ['path: |\n  Γ – X\n  – $0W\n', '# braggline: allow path-jump\npath: |\n  Γ – X\n  – W\n'],
    [
      '# braggline: allow a\npath: |\n  Γ – X\n  – $0W\n',
      '# braggline: allow a, path-jump\npath: |\n  Γ – X\n  – W\n',
    ],
    ['path: Γ –\n  $0W\n', '# braggline: allow path-jump\npath: Γ –\n  W\n'],
    ['path: ["Γ –\n  $0W"]\n', '# braggline: allow path-jump\npath: ["Γ –\n  W"]\n'],
  ])('%j', (before, after) => expect(allowed(before)).toBe(after))
})

test('the indentation of a document', () => {
  const of = (text: string) => indentation(text, decode(text).documents[0])
  expect(of('lattice:\n    bravais: cF\n')).toBe('    ')
  expect(of('atoms:\n- Si: [0, 0, 0]\nlattice:\n   a: 5\n')).toBe('   ')
  expect(of(LATTICE)).toBe('  ')
})
