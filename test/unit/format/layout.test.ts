import { describe, expect, test } from 'vitest'
import { decode } from '../../../server/src/format/decode.ts'
import { applyEdits } from '../../../server/src/format/edits.ts'
import { type LayoutOptions, layoutEdits } from '../../../server/src/format/layout.ts'
import type { Span } from '../../../server/src/format/model.ts'
import { SyntaxTree } from '../../../server/src/format/tree.ts'

const USUAL: LayoutOptions = { indent: 2, columns: true, enDash: false }

function laidOut(text: string, options: Partial<LayoutOptions> = {}, lines?: Span): string {
  const edits = layoutEdits(SyntaxTree.of(text)!, decode(text).documents, { ...USUAL, ...options }, lines)
  return applyEdits(text, edits)
}

/** From the first text to the second, and no further. */
function check(before: string, after: string, options: Partial<LayoutOptions> = {}): void {
  expect(laidOut(before, options)).toBe(after)
  expect(laidOut(after, options)).toBe(after)
}

describe('blanks', () => {
  test('one after a colon, a comma and a dash, none within brackets', () =>
    check(
      'title :   T\nlattice: { bravais:cF , a :5.43}\npath:\n  -   Γ – X\n',
      'title: T\nlattice: { bravais:cF , a :5.43}\npath:\n  - Γ – X\n'.replace(
        '{ bravais:cF , a :5.43}',
        '{bravais:cF, a :5.43}',
      ),
    ))
  test('of a comment and between the words of a number stay', () =>
    check(
      'lattice: {bravais: cP, a:   4  +  1}   #  a   comment \n',
      'lattice: {bravais: cP, a: 4  +  1}   #  a   comment\n',
    ))
  test('at the ends of lines go, but not within texts', () =>
    check(
      'title: |\n  two  \n  lines\n\nlattice: {bravais: cP, a: 4}  \n  \npath: "Γ – X  \n  – M"\t\n\n\n',
      'title: |\n  two  \n  lines\n\nlattice: {bravais: cP, a: 4}\n\npath: "Γ – X  \n  – M"\n',
    ))
  test('that a name in YAML needs stay', () =>
    check('points: {Q: &q [1, 0, 0], R: *q , S: *q }\n', 'points: {Q: &q [1, 0, 0], R: *q , S: *q }\n'))
  test('the last line ends with a line break, of the kind that the text uses', () =>
    check('title: T\r\nunit: nm', 'title: T\r\nunit: nm\r\n'))
})

describe('indentation', () => {
  test('is that of the editor, with comments along', () =>
    check(
      `# at the top
lattice:
    # the cell
    a: 4
    vectors:
    - [a, 0, 0]
    - [0, a, 0] # b
      # in between
    -   - 0
        - 0
        - a
    # at the end
atoms:
- Po: [0, 0, 0]
`,
      `# at the top
lattice:
  # the cell
  a: 4
  vectors:
    - [a, 0, 0]
    - [0, a, 0] # b
      # in between
    - - 0
      - 0
      - a
    # at the end
atoms:
  - Po: [0, 0, 0]
`,
    ))
  test('may be four', () => check('lattice:\n  a: 4\n', 'lattice:\n    a: 4\n', { indent: 4 }))
  test('takes texts over several lines along', () =>
    check(
      'path:\n      - Γ –\n        X\n      - >-\n          U\n\n          – X\n      - "K –\n          L"\n',
      'path:\n  - Γ –\n    X\n  - >-\n    U\n\n    – X\n  - "K –\n      L"\n',
    ))
  test('a comment below a text in a block stays a comment', () =>
    check('title: |\n      T\n   # no title\nunit: nm\n', 'title: |\n  T\n # no title\nunit: nm\n'))
  test('brackets over several lines keep their form', () =>
    check(
      'lattice:\n    vectors:   [[1, 0, 0],\n                [0, 1, 0],\n      # c\n      [0, 0, 1]\n    ]\n'.replace(
        '\n    ]',
        ']',
      ),
      'lattice:\n  vectors: [[1, 0, 0],\n            [0, 1, 0],\n    # c\n    [0, 0, 1]]\n',
    ))
})

describe('columns', () => {
  test('point below point, right edge below right edge where there are fractions', () =>
    check(
      `lattice:
  vectors:
    - [10.5, -a, 0]
    - [.25, 1/2 , 0]
    - [-3, 0, 1/3]
`,
      `lattice:
  vectors:
    - [10.5,   -a,   0]
    - [  .25, 1/2,   0]
    - [-3,      0, 1/3]
`,
    ))
  test('values below each other in atoms and points', () =>
    check(
      `atoms:
  - Pb: [0, 0, 0]
  # one more
  - O: [1/2, 1/2, 1/2]   # here
  - Fe: {at: [0.25, 0, 0], name: up}
  - Fe: {at: [-0.125, 0, 0] , name: down}
points:
  Q: [1/2, 0, 0]

  "N": &n [0, 0, -1/2]
  X12: {between: [Q, N], at: 1/3}
  R: *n
`,
      `atoms:
  - Pb: [  0,   0,   0]
  # one more
  - O:  [1/2, 1/2, 1/2]   # here
  - Fe: {at: [ 0.25,  0, 0], name: up}
  - Fe: {at: [-0.125, 0, 0], name: down}
points:
  Q:   [1/2, 0, 0]

  "N": &n [0, 0, -1/2]
  X12: {between: [Q, N], at: 1/3}
  R:   *n
`,
    ))
  test('a long expression stands out and moves nobody', () =>
    check(
      'points:\n  Q: [-(1 + a^2/c^2)/8, 0, 0]\n  R: [1/2, 0, 0]\n  S: [-1, 0, 0]\n',
      'points:\n  Q: [-(1 + a^2/c^2)/8, 0, 0]\n  R: [1/2, 0, 0]\n  S: [ -1, 0, 0]\n',
    ))
  test('long lists of atoms likewise', () => {
    const rows = Array.from({ length: 12 }, (_, i) => `- ${i % 2 ? 'O' : 'Ti'}: [0, ${i}, 1/2 ]`)
    const aligned = rows.map((_, i) => `  - ${i % 2 ? 'O: ' : 'Ti:'} [0, ${String(i).padStart(2)}, 1/2]`)
    check(`atoms:\n${rows.join('\n')}\n`, `atoms:\n${aligned.join('\n')}\n`)
  })
  test('comments at the ends of lines stay below each other', () =>
    check(
      'points:\n  Q: [1/2, 0, 0]   # one\n  R: [-1/2, 0, 0]  # two\n  S: [0, 0, 0]  # three\n',
      'points:\n  Q: [ 1/2, 0, 0]  # one\n  R: [-1/2, 0, 0]  # two\n  S: [   0, 0, 0]  # three\n',
    ))
  test('only where they are asked for', () =>
    check(
      'points:\n  Q: [1/2,0, 0]\n  R: [0, 0,  0]\n',
      'points:\n  Q: [1/2,0, 0]\n  R: [0, 0, 0]\n'.replace('1/2,0', '1/2, 0'),
      {
        columns: false,
      },
    ))
})

describe('some lines', () => {
  const TEXT = 'lattice:\n    a :  4\n    b: 4\npoints:\n    Q:  [1, 0, 0]\n'
  test('change their blanks; the indentation of an entry changes with all of it', () => {
    expect(laidOut(TEXT, {}, [1, 1])).toBe(TEXT.replace('a :  4', 'a: 4'))
    expect(laidOut(TEXT, {}, [3, 4])).toBe(TEXT.replace('    Q:  ', '  Q: '))
  })
})

describe('dashes', () => {
  const TEXT = 'lattice: {bravais: cF, a: 4}\npath:\n  - Γ - X -(20)- W\n  - "L-Γ"\n'
  test('stay', () => check(TEXT, TEXT))
  test('become en dashes where that is asked for', () =>
    check(TEXT, 'lattice: {bravais: cF, a: 4}\npath:\n  - Γ – X –(20)– W\n  - "L–Γ"\n', { enDash: true }))
})

test.each([
  ['explicit keys', '? title\n:   T\n'],
  ['anchors before keys', '&k  title:   T\n'],
  ['a document on the line of its mark', '--- "x"   \n'],
])('a text with %s is left alone', (_, text) => expect(laidOut(text)).toBe(text))

test('edits are as small as can be', () => {
  const text = 'points:\n  Q:   [1,  0, 0]\n'
  expect(layoutEdits(SyntaxTree.of(text)!, decode(text).documents, USUAL)).toEqual([
    { at: [13, 15], text: '' },
    { at: [19, 20], text: '' },
  ])
})
