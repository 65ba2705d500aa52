/** Rules of points. Coordinates of labels: W. Setyawan and S. Curtarolo (2010), by way of test/reference/labels.json. */
import { describe, expect, test } from 'vitest'
import { annotate, check, checkFix, findingsOf } from './harness.ts'

const quiet = (text: string) => check(`\n${text}`)

describe('frames', () => {
  test('conventional fractions of the face-centred cubic lattice under the default frame', () =>
    check(`
lattice: {bravais: cF, a: 5.43}
points:
#^^^^^ warning point-frame-suspect: X, W and K do not fit as fractions of the primitive reciprocal vectors, but do as fractions of the conventional reciprocal vectors.
  X: [0, 1, 0]
  W: [1/2, 1, 0]
  K: [3/4, 3/4, 0]
  L: [1/2, 1/2, 1/2]
path: Γ – X – W – K – Γ – L
`))

  test('primitive fractions under a stated conventional frame', () =>
    check(`
lattice: {bravais: cF, a: 5.43}
frames: {points: conventional}
#                ^^^^^^^^^^^^ warning point-frame-suspect: X, W and K do not fit as fractions of the conventional reciprocal vectors, but do as fractions of the primitive reciprocal vectors.
points:
  X: [1/2, 0, 1/2]
  W: [1/2, 1/4, 3/4]
  K: [3/8, 3/8, 3/4]
  L: [1/2, 1/2, 1/2]
`))

  test('one point in another frame than the others', () =>
    check(`
lattice: {bravais: cF, a: 5.43}
points:
  X: [1/2, 0, 1/2]
  W: [1/2, 1/4, 3/4]
  K: [3/4, 3/4, 0]
#    ^^^^^^^^^^^^^ warning point-frame-suspect: [3/4, 3/4, 0] is K as fractions of the conventional reciprocal vectors; as fractions of the primitive reciprocal vectors, like the other points, it is [3/8, 3/8, 3/4].
`))

  // 2π/5.43 Å = 1.1571 Å⁻¹.
  test('Cartesian numbers without their frame', () =>
    check(`
lattice: {bravais: cF, a: 5.43}
points:
#^^^^^ warning point-frame-suspect: X and L do not fit as fractions of the primitive reciprocal vectors, but do as Cartesian numbers.
  X: [0, 1.1571, 0]
  L: [0.5786, 0.5786, 0.5786]
`))

  test('units of 2π/a under the Cartesian frame', () =>
    check(`
lattice: {bravais: cF, a: 5.43}
frames: {points: cartesian}
#                ^^^^^^^^^ warning point-frame-suspect: X and L do not fit as Cartesian numbers, but do as Cartesian numbers in units of 2π/a.
points:
  X: [0, 1, 0]
  L: [0.5, 0.5, 0.5]
`))

  test('two points with names of their own that are corners in another frame', () =>
    check(`
lattice: {bravais: cF, a: 5.43}
points:
#^^^^^ warning point-frame-suspect: P and Q do not fit as fractions of the primitive reciprocal vectors, but do as fractions of the conventional reciprocal vectors (as X and K).
  P: [0, 1, 0]
  Q: [3/4, 3/4, 0]
`))

  test('points of one’s own half-way on lines of the stated frame are left alone', () =>
    quiet(`lattice: {bravais: cF, a: 5.43}
frames: {points: conventional}
points:
  P: [1/2, 0, 0]
  Q: [3/8, 3/8, 0]
`))

  test('the frame can be stated', () =>
    checkFix(
      `lattice: {bravais: cF, a: 5.43}
$0points:
  X: [0, 1, 0]
  W: [1/2, 1, 0] # from the table
`,
      `lattice: {bravais: cF, a: 5.43}
frames: {points: conventional}
points:
  X: [0, 1, 0]
  W: [1/2, 1, 0] # from the table
`,
      { title: 'State `points: conventional`', safe: false },
    ))

  test('or corrected', () =>
    checkFix(
      'lattice: {bravais: cF, a: 5.43}\nframes: {points: $0conventional}\npoints: {X: [1/2, 0, 1/2], W: [1/2, 1/4, 3/4]}\n',
      'lattice: {bravais: cF, a: 5.43}\nframes: {points: primitive}\npoints: {X: [1/2, 0, 1/2], W: [1/2, 1/4, 3/4]}\n',
      { title: 'State `points: primitive`' },
    ))

  test('or the numbers converted, those of other points too', () =>
    checkFix(
      `lattice: {bravais: cF, a: 5.43}
$0points:
  X: [0, 1, 0]
  W: [1/2, 1, 0] # from the table
  Q: [0, 0.5, 0]
`,
      `lattice: {bravais: cF, a: 5.43}
points:
  X: [1/2, 0, 1/2]
  W: [1/2, 1/4, 3/4] # from the table
  Q: [1/4, 0, 1/4]
`,
      { title: 'Convert the numbers to fractions of the primitive reciprocal vectors' },
    ))
})

describe('a conventional cell given as if primitive', () => {
  test('points of the centred lattice say which one', () =>
    check(`
lattice:
  vectors: [[5.43, 0, 0], [0, 5.43, 0], [0, 0, 5.43]]
points:
#^^^^^ warning point-frame-suspect: X, L, W and K fit the face-centred cubic lattice of these vectors, which needs \`centring: F\`; without it the vectors are a primitive cell, and its zone is smaller.
  X: [1/2, 0, 1/2]
  L: [1/2, 1/2, 1/2]
  W: [1/2, 1/4, 3/4]
  K: [3/8, 3/8, 3/4]
path: Γ – X – W – K – Γ – L
`))

  test('the centring can be stated', () =>
    checkFix(
      'lattice:\n  vectors: [[3, 0, 0], [0, 3, 0], [0, 0, 3]]\n$0points: {H: [1/2, -1/2, 1/2], P: [1/4, 1/4, 1/4], N: [0, 0, 1/2]}\n',
      'lattice:\n  vectors: [[3, 0, 0], [0, 3, 0], [0, 0, 3]]\n  centring: I\npoints: {H: [1/2, -1/2, 1/2], P: [1/4, 1/4, 1/4], N: [0, 0, 1/2]}\n',
      { title: 'State `centring: I`', safe: false },
    ))

  test('vectors that contradict their type have a finding of the lattice alone', () => {
    const text =
      'lattice:\n  bravais: cF\n  vectors: [[5.43, 0, 0], [0, 5.43, 0], [0, 0, 5.43]]\npoints: {X: [1/2, 0, 1/2], W: [1/2, 1/4, 3/4]}\npath: Γ – X – W – L\n'
    expect(
      findingsOf(text).map(({ rule }) => rule),
      annotate(text),
    ).toEqual(['lattice-type-mismatch'])
  })
})

describe('labels', () => {
  test('X and W exchanged: each names the other', () =>
    check(`
lattice: {bravais: cF, a: 5.43}
points:
  X: [1/2, 1/4, 3/4]
#    ^^^^^^^^^^^^^^^ warning point-label-mismatch: [1/2, 1/4, 3/4] is W, not X; X is at [1/2, 0, 1/2], 0.5786 Å⁻¹ away. The file has X and W exchanged.
  W: [1/2, 0, 1/2]
#    ^^^^^^^^^^^^^ warning point-label-mismatch: [1/2, 0, 1/2] is X, not W; W is at [1/2, 1/4, 3/4], 0.5786 Å⁻¹ away. The file has W and X exchanged.
path: Γ – X – W – Γ
`))

  test('exchanged labels can be exchanged back', () =>
    checkFix(
      'lattice: {bravais: cF, a: 5.43}\npoints:\n  X: [1/2, $01/4, 3/4]\n  W: [1/2, 0, 1/2]\n',
      'lattice: {bravais: cF, a: 5.43}\npoints:\n  W: [1/2, 1/4, 3/4]\n  X: [1/2, 0, 1/2]\n',
      { title: 'Exchange the labels X and W', safe: false },
    ))

  // (1/4)(b₁+b₃) is half of the way to X of the face-centred cubic lattice, 2π/5.43 Å: 0.5786 Å⁻¹ are missing.
  test('a point on a line of the label names the line', () =>
    check(`
lattice: {bravais: cF, a: 5.43}
points:
  X: [1/4, 0, 1/4]
#    ^^^^^^^^^^^^^ warning point-label-mismatch: [1/4, 0, 1/4] is not X: it lies on the line Γ–X, 0.5 of the way; X is at [1/2, 0, 1/2], 0.5786 Å⁻¹ away.
`))

  test('the coordinates can be put right, or the label', () => {
    const before = 'lattice: {bravais: cF, a: 5.43}\npoints:\n  X: [1/2, $01/4, 3/4] # corner\n'
    checkFix(before, 'lattice: {bravais: cF, a: 5.43}\npoints:\n  X: [1/2, 0, 1/2] # corner\n', {
      title: 'Replace by [1/2, 0, 1/2], the place of X',
      safe: false,
    })
    checkFix(before, 'lattice: {bravais: cF, a: 5.43}\npoints:\n  W: [1/2, 1/4, 3/4] # corner\n', {
      title: 'Label this point W',
      safe: false,
    })
  })

  test('equivalents of a point are that point: U may stand at a place of K', () =>
    quiet(
      'lattice: {bravais: cF, a: 5.43}\npoints: {K: [5/8, 1/4, 5/8], X: [0, 1/2, 1/2], L: [1/2, 0, 0]}\n',
    ))

  // K of the hexagonal zone is (1/3, 1/3, 0) for axes at 120° and (2/3, 1/3, 0) for axes at 60° (common practice).
  test('K written for hexagonal axes at 60°', () =>
    check(`
lattice: {bravais: hP, a: 2.46, c: 6.7}
points:
  K: [2/3, 1/3, 0]
#    ^^^^^^^^^^^^^ warning point-label-mismatch: [2/3, 1/3, 0] is not K: it lies on the line Γ–M, 0.667 of the way; K is at [1/3, 1/3, 0], 0.9831 Å⁻¹ away. It would be there with the sign of the first component changed, as for a and b at 60°.
`))

  test('several points for axes at 60° are one mistake', () =>
    check(`
lattice: {bravais: hP, a: 2.46, c: 6.7}
points:
#^^^^^ warning point-label-mismatch: K and H are not where their labels say, but all of them would be with the sign of the first component changed, as for a and b at 60°.
  K: [2/3, 1/3, 0]
  H: [2/3, 1/3, 1/2]
  A: [0, 0, 1/2]
`))

  test('axes in another order are one mistake', () =>
    check(`
lattice: {bravais: oP, a: 3, b: 4, c: 5}
points:
#^^^^^ warning point-label-mismatch: X, S, U and Z are not where their labels say, but all of them would be with the first component put last.
  X: [0, 1/2, 0]
  S: [0, 1/2, 1/2]
  U: [1/2, 1/2, 0]
  Z: [1/2, 0, 0]
`))
})

describe('labels of other books', () => {
  // Z of the body-centred tetragonal lattice: Setyawan–Curtarolo call it M for c < a; Bradley and Cracknell call it Z.
  test('information where the file states no book', () =>
    check(`
lattice: {bravais: tI, a: 5.8, c: 3.18}
points:
  Z: [-1/2, 1/2, 1/2]
# ^ info point-label-mismatch: Z is at the coordinates of \`bradley-cracknell-1972\`, not of \`setyawan-curtarolo-2010\`, which holds where \`labels\` is not stated.
`))

  // M is at 2π/a along x, 1.0833 Å⁻¹; Z at 2η·2π/c along z, η = (1 + c²/a²)/4 = 0.325152: 1.2849 Å⁻¹.
  test('a warning where it states one', () =>
    check(`
labels: setyawan-curtarolo-2010
lattice: {bravais: tI, a: 5.8, c: 3.18}
points:
  Z: [-1/2, 1/2, 1/2]
#    ^^^^^^^^^^^^^^^^ warning point-label-mismatch: [-1/2, 1/2, 1/2] is M, not Z; Z is at [0.325152, 0.325152, -0.325152], 1.6806 Å⁻¹ away. It is Z in \`bradley-cracknell-1972\`.
`))

  // M, S and G of tI, c > a, in Y. Hinuma et al. (2017).
  test('several letters of one book are one finding', () =>
    check(`
lattice: {bravais: tI, a: 3.8, c: 9.5}
points:
  M: [1/2, 1/2, -1/2]
# ^ info point-label-mismatch: M, S and G are at the coordinates of \`hinuma-2017\`, not of \`setyawan-curtarolo-2010\`, which holds where \`labels\` is not stated.
  S: [(1 + a^2/c^2)/4, 1 - (1 + a^2/c^2)/4, -(1 + a^2/c^2)/4]
  G: [1/2, 1/2, -a^2/(2*c^2)]
`))

  test('the book can be stated', () =>
    checkFix(
      'lattice: {bravais: tI, a: 3.8, c: 9.5}\npoints: {$0M: [1/2, 1/2, -1/2]}\n',
      'lattice: {bravais: tI, a: 3.8, c: 9.5}\nlabels: hinuma-2017\npoints: {M: [1/2, 1/2, -1/2]}\n',
      { title: 'State `labels: hinuma-2017`', safe: false },
    ))
})

describe('2π', () => {
  // X is at 2π/5.43 Å = 1.157124 Å⁻¹; times 2π 7.2704, over 2π 0.184162. L: 0.578562, over 2π 0.092081.
  test('once too often and once too little', () =>
    check(`
lattice: {bravais: cF, a: 5.43}
frames: {points: cartesian}
points:
  X: [0, 7.2704, 0]
#    ^^^^^^^^^^^^^^ warning point-two-pi: The numbers of X fit its label only over 2π: (0, 1.1571, 0) Å⁻¹.
  L: [0.0921, 0.0921, 0.0921]
#    ^^^^^^^^^^^^^^^^^^^^^^^^ warning point-two-pi: The numbers of L fit its label only times 2π: (0.5786, 0.5786, 0.5786) Å⁻¹.
  Q: [0.0921, 0.0921, 0.0921]
#    ^^^^^^^^^^^^^^^^^^^^^^^^ warning point-two-pi: The numbers of Q are no point of the label book; times 2π they are L: (0.5786, 0.5786, 0.5786) Å⁻¹.
`))

  test('the numbers can be converted', () =>
    checkFix(
      'lattice: {bravais: cP, a: 3.9}\nframes: {points: cartesian}\npoints: {X: [0, $00.128205, 0]}\n',
      'lattice: {bravais: cP, a: 3.9}\nframes: {points: cartesian}\npoints: {X: [0, 0.805537, 0]}\n',
      { safe: false },
    ))
})

describe('points that move with the shape of the cell', () => {
  // Σ = (−η, η, η), η = (1 + a²/c²)/4: 0.29 here, 0.297259 for c/a = 2.3.
  test('copied from another c/a', () =>
    check(`
lattice: {bravais: tI, a: 3.8, c: 9.5}
points:
  Σ: [-0.297259, 0.297259, 0.297259]
#    ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^ warning point-stale-parameter: Σ does not fit this lattice: it is 0.024 Å⁻¹ from [-0.29, 0.29, 0.29], where η = (1 + a²/c²)/4 = 0.29 and not 0.2973. Is it copied from another crystal?
path: Γ – X – Y – Σ – Γ
`))

  test('rounded to the digits that people write', () =>
    quiet(
      'lattice: {bravais: tI, a: 3.81, c: 9.52}\npoints: {Σ: [-0.29, 0.29, 0.29], Y: [-0.0801, 0.0801, 1/2]}\n',
    ))

  test('copied from a cell of the other shape', () =>
    check(`
lattice: {bravais: tI, a: 5.8, c: 3.18}
points:
  Σ: [-0.29, 0.29, 0.29]
#    ^^^^^^^^^^^^^^^^^^^ warning point-stale-parameter: The label book has Σ for another shape of the cell (body-centred tetragonal, c > a); this one is body-centred tetragonal, c < a. Is it copied from another crystal?
`))

  test('the value can be put right', () =>
    checkFix(
      'lattice: {bravais: tI, a: 3.8, c: 9.5}\npoints:\n  Y: [-0.1, $00.1, 1/2] # edge\n',
      'lattice: {bravais: tI, a: 3.8, c: 9.5}\npoints:\n  Y: [-0.08, 0.08, 1/2] # edge\n',
      { safe: false },
    ))
})

describe('roundings', () => {
  // |δk| for K = (1/3, 1/3) with 0.333: δ = 1/3000 (b₁ + b₂), |b₁ + b₂| = √3 · 4π/(√3 a) = 4π/a: 4π/(3000 · 2.46 Å).
  test('thirds cut short', () =>
    check(`
lattice: {bravais: hP, a: 2.46, c: 6.7}
points:
  K: [0.333, 0.333, 0]
#    ^^^^^^^^^^^^^^^^^ warning point-rounded: 0.333 is a rounding of 1/3: K misses its place by 0.0017 Å⁻¹.
  H: [0.33, 0.33, 0.5]
#    ^^^^^^^^^^^^^^^^^ warning point-rounded: 0.33 is a rounding of 1/3: H misses its place by 0.01703 Å⁻¹.
  Q: [0.333, 0.333, 0.2]
#    ^^^^^^^^^^^^^^^^^^^ warning point-rounded: 0.333 is a rounding of 1/3: Q misses a place of higher symmetry (on the line K–H, 0.4 of the way) by 0.0017 Å⁻¹.
path: Γ – K – H – Q
`))

  test('0.667 lies a little outside the zone, which is not said as well', () =>
    check(`
lattice: {bravais: hP, a: 2.46, c: 6.7}
points:
  K': [0.667, -0.333, 0]
#     ^^^^^^^^^^^^^^^^^^ warning point-rounded: 0.667 is a rounding of 2/3, -0.333 is a rounding of -1/3: K' misses a place of higher symmetry (K) by 0.0017 Å⁻¹.
`))

  test('decimals that are exact, and points that only look near', () =>
    quiet(`lattice: {bravais: cF, a: 5.43}
points:
  K: [0.375, 0.375, 0.75]
  Q: [0.33, 0.1, 0.2]
  V: [0.34, 0.34, 0.68]
`))

  test('six digits are a third', () =>
    quiet('lattice: {bravais: hP, a: 2.46, c: 6.7}\npoints: {K: [0.333333, 0.333333, 0]}\n'))

  test('the fix keeps what is not rounded', () =>
    checkFix(
      'lattice: {bravais: hP, a: 2.46, c: 6.7}\npoints:\n  Q: [0.333, 0.333, $00.20] # on K–H\n',
      'lattice: {bravais: hP, a: 2.46, c: 6.7}\npoints:\n  Q: [1/3, 1/3, 0.20] # on K–H\n',
      { safe: true },
    ))
})

describe('the zone', () => {
  // Γ–X of the simple cubic zone ends at π/a = 0.8055 Å⁻¹; 0.75 · 2π/a lies 0.25 · 2π/a = 0.4028 Å⁻¹ beyond.
  test('a point outside, with its equivalent', () =>
    check(`
lattice: {bravais: cP, a: 3.9}
points:
  Q: [3/4, 0.1, 0]
#    ^^^^^^^^^^^^^ warning point-outside-zone: Q lies 0.4028 Å⁻¹ outside the first zone, in zone 2; its equivalent inside is [-1/4, 1/10, 0].
`))

  // X′ = (0, 1, 1)·2π/a; the wall of G = (1, 1, 1)·2π/a stands at √3/2, k·G/|G| = 2/√3: (2/√3 − √3/2)·1.1571 Å⁻¹ beyond.
  // Nearer to it than Γ are (1, 1, 1) and (−1, 1, 1).
  test('a book point of another zone is information', () =>
    check(`
lattice: {bravais: cF, a: 5.43}
points:
  X': [1, 1/2, 1/2]
#     ^^^^^^^^^^^^^ info point-outside-zone: X' is X of another zone: it lies 0.334 Å⁻¹ outside the first zone, in zone 3; its equivalent inside is [0, 1/2, 1/2].
`))

  test('points on the boundary, also by the digits written, are inside', () =>
    quiet(`lattice: {bravais: cP, a: 3.9}
frames: {points: cartesian}
points:
  Q: [0.8055, 0.1234, 0]
  V: [0.8056, 0.1, 0]
`))

  test('the fix folds', () =>
    checkFix(
      'lattice: {bravais: cP, a: 3.9}\npoints: {Q: [$03/4, 0.1, 0]}\n',
      'lattice: {bravais: cP, a: 3.9}\npoints: {Q: [-1/4, 0.1, 0]}\n',
      { safe: false },
    ))
})

describe('names', () => {
  test('a book point under another name', () =>
    check(`
lattice: {bravais: cP, a: 3.9}
points:
  VBM: [0, 0, 0]
# ^^^ info point-unnamed: The label book calls this point Γ.
`))

  test('primes and indices name equivalents', () =>
    quiet("lattice: {bravais: hp, a: 2.46}\npoints: {K': [2/3, -1/3], M1: [1/2, 0], M2: [0, 1/2]}\n"))

  test('renaming takes the path along', () =>
    checkFix(
      'lattice: {bravais: oP, a: 3, b: 4, c: 5}\npoints: {$0Q: [0, 1/2, 0], V: {between: [Γ, Q], at: 0.3}}\npath: Γ – Q – V\n',
      'lattice: {bravais: oP, a: 3, b: 4, c: 5}\npoints: {"Y": [0, 1/2, 0], V: {between: [Γ, Y], at: 0.3}}\npath: Γ – Y – V\n',
      { rule: 'point-unnamed', safe: false },
    ))

  test('two names for one point, or for equivalent ones', () =>
    check(`
lattice: {bravais: cP, a: 3.9}
points:
  A: [0.1, 0.2, 0]
  B: [1/10, 1/5, 0]
# ^ info point-repeated: B is the same k-point as A.
  C: [0, -0.1, 0.2]
# ^ info point-repeated: C is equivalent to A: a rotation of the crystal carries one into the other.
  D: [0.1, 0.2, 0.3]
`))

  test('which are not equivalent in a crystal without the rotation', () =>
    quiet(`lattice: {bravais: tP, a: 3.9, c: 4.1}
atoms:
  - Ti: [0, 0, 0]
  - O: [1/2, 0, 0.1]
time-reversal: no
points:
  Q: [0.1, 0, 0]
  V: [0, 0.1, 0]
`))
})

describe('components', () => {
  test('as many as the crystal has dimensions', () =>
    check(`
lattice: {bravais: hp, a: 2.46}
points:
  Q: [0.1]
#    ^^^^^ error point-dimension: Q has 1 component; a sheet needs 2.
  V: [0.1, 0.3, 0.2]
#               ^^^ error point-dimension: V has a component 0.2 along a direction without period; it must be 0 or left out.
  T: [0.1, 0.2, 0]
`))

  test('of a chain', () =>
    check(`
lattice: {vectors: [[2.4]]}
points:
  Q: [0.25, 0.1]
#           ^^^ error point-dimension: Q has a component 0.1 along a direction without period; it must be 0 or left out.
`))

  test('nothing is said of what is still being typed', () =>
    check(`
lattice: {bravais: cF, a: 5.43}
points:
  X: [1/2, 0, 1/]
#              ^ error number-malformed: Something is missing after \`/\`.
path: Γ – X
`))
})

describe('without a label book', () => {
  test('letters are the file’s own; roundings are still seen', () =>
    check(`
lattice: {bravais: hP, a: 2.46, c: 6.7}
labels: none
points:
  X: [0.333, 0.333, 0]
#    ^^^^^^^^^^^^^^^^^ warning point-rounded: 0.333 is a rounding of 1/3: X misses a place of higher symmetry (a symmetry point without a letter) by 0.0017 Å⁻¹.
  M: [0.1, 0, 0]
`))
})
