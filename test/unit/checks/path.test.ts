/** Rules of the path. Labels: W. Setyawan and S. Curtarolo (2010), by way of test/reference/labels.json. */
import { describe, expect, test } from 'vitest'
import { annotate, check, checkFix, findingsOf } from './harness.ts'

const quiet = (text: string) => check(`\n${text}`)

describe('labels', () => {
  test('an unknown label, with the nearest one', () =>
    check(`
lattice: {bravais: tI, a: 3.8, c: 9.5}
path: Γ – X – Yy – Z
#             ^^ error path-label-unknown: Yy is not defined under \`points\`, and \`setyawan-curtarolo-2010\` has no such label for this lattice (tI: body-centred tetragonal, c > a). Did you mean Y?
`))

  test('one that is like none, with those that there are', () =>
    check(`
lattice: {bravais: cP, a: 3.9}
path: Γ – Q
#         ^ error path-label-unknown: Q is not defined under \`points\`, and \`setyawan-curtarolo-2010\` has no such label for this lattice (cP: simple cubic). It has Γ, M, R and X.
`))

  // T of the rhombohedral lattice is a label of Hinuma et al.; the others call the point Z.
  test('a label of another book', () =>
    check(`
lattice: {bravais: hR, a: 4.38, c: 30.5}
path: Γ – T
#         ^ error path-label-unknown: T is not defined under \`points\`, and \`setyawan-curtarolo-2010\` has no such label for this lattice (hR: rhombohedral, α < 90°). It is a label of \`hinuma-2017\`.
`))

  test('a label of another shape of the cell', () =>
    check(`
lattice: {bravais: tI, a: 5.8, c: 3.18}
path: Γ – Σ
#         ^ error path-label-unknown: Σ is not defined under \`points\`, and \`setyawan-curtarolo-2010\` has no such label for this lattice (tI: body-centred tetragonal, c < a). The book has it for another shape of the cell: body-centred tetragonal, c > a.
`))

  test('labels of the centred lattice of the same cell are one mistake', () =>
    check(`
lattice:
  vectors: [[5.43, 0, 0], [0, 5.43, 0], [0, 0, 5.43]]
path: Γ – X – W – K – Γ – L
#             ^ error path-label-unknown: W, K and L are no points of the lattice that the vectors span, but of the face-centred cubic one with this conventional cell: \`centring: F\` is missing.
`))

  test('which belongs to the atoms where these repeat in the cell', () => {
    const text = `lattice:
  vectors: [[3.6, 0, 0], [0, 3.6, 0], [0, 0, 3.6]]
atoms: [Cu: [0, 0, 0], Cu: [0, 1/2, 1/2], Cu: [1/2, 0, 1/2], Cu: [1/2, 1/2, 0]]
path: Γ – X – W – K – Γ – L
`
    expect(
      findingsOf(text).map(({ rule }) => rule),
      annotate(text),
    ).toEqual(['cell-not-primitive'])
  })

  test('labels in points between others', () =>
    check(`
lattice: {bravais: cP, a: 3.9}
points:
  Q: {between: [Γ, Xx], at: 0.3}
#                  ^^ error path-label-unknown: Xx is not defined under \`points\`, and \`setyawan-curtarolo-2010\` has no such label for this lattice (cP: simple cubic). Did you mean X?
  S: {between: [Γ, T], at: 0.5}
# ^ error path-label-unknown: S has no place: the points between which it lies are defined by way of S itself.
  T: {between: [S, X], at: 0.5}
# ^ error path-label-unknown: T has no place: the points between which it lies are defined by way of T itself.
`))

  test('without a book, or a lattice that can be built', () => {
    check(`
lattice: {bravais: cP, a: 3.9}
labels: none
points: {Γ: [0, 0, 0]}
path: Γ – X
#         ^ error path-label-unknown: X is not defined under \`points\`, and no label book is in force.
`)
    check(`
lattice: {bravais: tI, a: 3.8, c: }
#                              ^ error value-type: \`c\` has no value yet, such as \`5.43\`.
path: Γ – Σ – Z1 – Yy
#                  ^^ error path-label-unknown: Yy is not defined under \`points\`, and \`setyawan-curtarolo-2010\` has no such label. Did you mean Y?
`)
  })

  test('a book that recommends no path', () =>
    check(`
lattice: {bravais: cP, a: 3.9}
labels: bradley-cracknell-1972
path: recommended
#     ^^^^^^^^^^^ error path-label-unknown: The path is \`recommended\`, but \`bradley-cracknell-1972\` recommends none: write the path, or state another book under \`labels\`.
`))
})

describe('the zone', () => {
  test('a segment that crosses the boundary hides the end that lies outside', () =>
    check(`
lattice: {bravais: cP, a: 3.9}
points: {Q: [3/4, 1/4, 0]}
path: Γ – Q
#     ^^^^^ warning path-leaves-zone: Γ–Q leaves the first zone at [1/2, 1/6, 0], k = (0.8055, 0.2685, 0) Å⁻¹, 0.667 of the way.
`))

  test('the other way round it enters', () =>
    check(`
lattice: {bravais: cP, a: 3.9}
points: {Q: [3/4, 1/4, 0]}
path: Q – Γ
#     ^^^^^ warning path-leaves-zone: Q–Γ enters the first zone at [1/2, 1/6, 0], k = (0.8055, 0.2685, 0) Å⁻¹, 0.333 of the way.
`))

  // Γ–K–X in the extended zone, as phonons of face-centred cubic crystals are drawn (common practice); K is at 3/4.
  test('the extended zone is information, and K is on the way', () =>
    check(`
lattice: {bravais: cF, a: 5.43}
points: {X': [1, 1/2, 1/2]}
path: Γ – X'
#     ^^^^^^ info path-leaves-zone: Γ–X' leaves the first zone at [3/4, 3/8, 3/8], k = (0, 0.8678, 0.8678) Å⁻¹, 0.75 of the way.
#     ^^^^^^ info path-passes-point: Γ–X' passes through K, at 0.75 of its length; the path does not name it.
`))

  test('folding makes pieces, with names for their ends', () =>
    checkFix(
      "lattice: {bravais: cF, a: 5.43}\npoints: {X': [1, 1/2, 1/2]}\npath: Γ –$0 X' – L\n",
      "lattice: {bravais: cF, a: 5.43}\npoints: {X': [1, 1/2, 1/2], K': [3/4, 3/8, 3/8], K'': [-1/4, 3/8, 3/8], X'': [0, 1/2, 1/2]}\npath: Γ – K' | K'' – X'' | X' – L\n",
      { rule: 'path-leaves-zone', safe: false },
    ))

  test('a path of labels that a mistake puts elsewhere is left to that mistake', () =>
    check(`
lattice: {bravais: tI, a: 3.8, c: 9.5}
points:
  Σ: [-0.32, 0.32, 0.32]
#    ^^^^^^^^^^^^^^^^^^^ warning point-stale-parameter: Σ does not fit this lattice: it is 0.0992 Å⁻¹ from [-0.29, 0.29, 0.29], where η = (1 + a²/c²)/4 = 0.29 and not 0.32. Is it copied from another crystal?
path: Γ – Σ – Z
`))
})

describe('repetitions', () => {
  test('a segment of length zero', () =>
    check(`
lattice: {bravais: cP, a: 3.9}
points: {M1: [1/2, 1/2, 0]}
path: Γ – X – X – M – M1 – R
#         ^^^^^ warning path-repeats: X–X has length zero: its ends are one point, [0, 1/2, 0].
#                 ^^^^^^ warning path-repeats: M–M₁ has length zero: M and M₁ are one point, [1/2, 1/2, 0].
`))

  test('is taken out', () => {
    checkFix(
      'lattice: {bravais: cP, a: 3.9}\npath: Γ – X –$0 X – M – R\n',
      'lattice: {bravais: cP, a: 3.9}\npath: Γ – X | X – M – R\n',
      { safe: false },
    )
  })

  test('cube axes in turn are one line paid for three times', () =>
    check(`
lattice: {bravais: cP, a: 3.9}
points: {X1: [1/2, 0, 0], X2: [0, 0, 1/2]}
path: Γ – X | Γ – X1 | X2 – Γ
#             ^^^^^^ info path-retraces: Γ–X₁ has the bands of Γ–X: a rotation of the crystal carries one into the other.
#                      ^^^^^^ info path-retraces: X₂–Γ has the bands of Γ–X: a rotation of the crystal carries one into the other, backwards.
`))

  test('there and back', () =>
    check(`
lattice: {bravais: cP, a: 3.9}
path: Γ – X – Γ
#         ^^^^^ info path-retraces: X–Γ has the bands of Γ–X: it is the same line, backwards.
`))

  test('the two halves of a straight line are one line', () =>
    quiet("lattice: {bravais: hp, a: 2.46}\npoints: {K': [-1/3, -1/3]}\npath: K' – Γ – K\n"))

  test('in a crystal without the rotation they are two', () =>
    quiet(`lattice: {bravais: tP, a: 3.9, c: 4.1}
atoms:
  - Ti: [0, 0, 0]
  - O: [1/2, 0, 0.1]
points: {X1: [1/2, 0, 0]}
path: Γ – X | Γ – X1
`))

  test('the book’s own path retraces without a word', () =>
    quiet('lattice: {bravais: cF, a: 5.43}\npath: Γ – X – W – K – Γ – L – U – W – L – K | U – X\n'))

  test('the later segment is taken out', () =>
    checkFix(
      'lattice: {bravais: cP, a: 3.9}\npath: Γ – X – M – X –$0 Γ\n',
      'lattice: {bravais: cP, a: 3.9}\npath: Γ – X – M – X\n',
      { rule: 'path-retraces', title: 'Remove the segment X–Γ', safe: false },
    ))
})

describe('points on the way', () => {
  test('M between two corners of a hexagonal zone', () =>
    check(`
lattice: {bravais: hp, a: 2.46}
points: {K': [2/3, -1/3]}
path: K – K'
#     ^^^^^^ info path-passes-point: K–K' passes through M, at 0.5 of its length; the path does not name it.
`))

  test('the middle is named with a prime where it is not the book’s own place', () =>
    checkFix(
      "lattice: {bravais: hp, a: 2.46}\npoints:\n  K': [-1/3, 2/3]\npath: K –$0 K'\n",
      "lattice: {bravais: hp, a: 2.46}\npoints:\n  K': [-1/3, 2/3]\n  M': [0, 1/2]\npath: K – M' – K'\n",
      { title: "Name M' in the path", safe: false },
    ))

  test('and with the letter where it is', () =>
    checkFix(
      "lattice: {bravais: cP, a: 3.9}\npoints: {X': [0, -1/2, 0]}\npath: X' –$0 X\n",
      "lattice: {bravais: cP, a: 3.9}\npoints: {X': [0, -1/2, 0]}\npath: X' – Γ – X\n",
      { title: 'Name Γ in the path' },
    ))
})

describe('symmetry', () => {
  test('a segment on no line and no plane', () =>
    check(`
lattice: {bravais: cP, a: 3.9}
points: {Q: [0.1, 0.2, 0.3], V: [0.1, 0.2, 0.2]}
path: Γ – Q | Γ – V
#     ^^^^^ info path-off-symmetry: Γ–Q lies on no symmetry line or plane of the lattice.
`))

  test('in the plane it is lines that count', () =>
    check(`
lattice: {bravais: tp, a: 3.9}
points: {Q: [0.1, 0.2], V: [0.2, 0.2]}
path: Γ – Q | Γ – V
#     ^^^^^ info path-off-symmetry: Γ–Q lies on no symmetry line of the lattice.
`))

  test('a triclinic lattice has no line to lie on', () =>
    quiet(
      'lattice: {bravais: aP, a: 5.1, b: 5.9, c: 7.2, alpha: 77, beta: 83, gamma: 71}\npoints: {Q: [0.1, 0.2, 0.3]}\npath: Γ – Q\n',
    ))

  // Along Γ–K of a hexagonal zone ky/kx is 1/√3: 0.4 · 0.57735 = 0.23094.
  test('Cartesian numbers are as exact as their digits', () =>
    quiet(
      'lattice: {bravais: hP, a: 3.25, c: 5.2}\nframes: {points: cartesian}\npoints: {Q: [0.4, 0.2309, 0]}\npath: Γ – Q\n',
    ))

  test('a path around one valley', () =>
    quiet(`lattice: {bravais: cF, a: 5.43}
points:
  Q: {between: [Γ, X], at: 0.85}
  V: {between: [Γ, X], at: 0.7}
path: V – Q – X
`))
})

describe('against the book’s path', () => {
  test('points that are missed', () =>
    check(`
lattice: {bravais: cP, a: 3.9}
path: Γ – X – M – Γ
#^^^ info path-misses: The path does not visit R of the book's path, nor an equivalent.
`))

  test('a short path is short on purpose', () => quiet('lattice: {bravais: cF, a: 5.43}\npath: L – Γ – X\n'))

  test('equivalents and points on the way count as visited', () =>
    quiet(`lattice: {bravais: hp, a: 2.46}
points: {K1: [-1/3, -1/3], M1: [0, 1/2]}
path: K1 – Γ – M1
`))

  test('what is missed can be appended', () => {
    checkFix(
      'lattice: {bravais: tP, a: 3.9, c: 4.1}\n$0path: Γ – X – M – Γ – Z – R\n',
      'lattice: {bravais: tP, a: 3.9, c: 4.1}\npath: Γ – X – M – Γ – Z – R | R – A – Z | M – A\n',
      { title: 'Append R – A – Z | M – A', safe: false },
    )
    checkFix(
      'lattice: {bravais: tP, a: 3.9, c: 4.1}\n$0path:\n  - Γ – X – M – Γ\n  - Γ – Z – R\n',
      'lattice: {bravais: tP, a: 3.9, c: 4.1}\npath:\n  - Γ – X – M – Γ\n  - Γ – Z – R\n  - R – A – Z | M – A\n',
    )
  })

  test('U and K are the two sides of a break', () =>
    check(`
lattice: {bravais: cF, a: 5.43}
path: Γ – X – U – K – Γ – L – W – X
#             ^^^^^ warning path-jump: U–K is no segment of the book's path: U and K are equivalent, and the book breaks its path between them, \`U | K\`.
`))

  // … T – Z | Y – T | … of the simple orthorhombic path.
  test('a break left out between others of the book', () =>
    check(`
lattice: {bravais: oP, a: 3, b: 4, c: 5}
path: Γ – X – S – Y – Γ – Z – U – R – T – Z – Y – T | U – X | S – R
#                                         ^^^^^ warning path-jump: Z–Y is no segment of the book's path: the book breaks its path between them, \`Z | Y\`.
`))

  test('the same line drawn on purpose', () =>
    quiet('lattice: {bravais: oP, a: 3, b: 4, c: 5}\npath: Γ – Z – Y – Γ\n'))

  test('the path can be broken there', () =>
    checkFix(
      'lattice: {bravais: cF, a: 5.43}\npath: Γ – X – U –$0 K – Γ – L – W – X\n',
      'lattice: {bravais: cF, a: 5.43}\npath: Γ – X – U | K – Γ – L – W – X\n',
      { title: 'Break the path here', safe: false },
    ))
})

test('a slip of the pen by nine powers of ten is told at once', () =>
  check(`
lattice: {bravais: cP, a: 3.9}
points: {Q: [1e9, 0, 0]}
path: Γ – Q
#     ^^^^^ info path-leaves-zone: Γ–Q leaves the first zone at [1/2, 0, 0], k = (0.8055, 0, 0) Å⁻¹, 5.00·10⁻¹⁰ of the way.
`))

describe('Γ where the keyboard has none', () => {
  test.each(['G', 'GM', 'GAMMA', 'gamma'])('%s', text =>
    checkFix(
      `lattice: {bravais: cP, a: 4}\npath: $0${text} – X – M – R\n`,
      'lattice: {bravais: cP, a: 4}\npath: Γ – X – M – R\n',
      {
        rule: 'path-label-unknown',
      },
    ),
  )
})
