/** What the decoder says of files that are wrong in form, and that each fault is told once, on its own characters. */
import { describe, test } from 'vitest'
import { check } from './fixture.ts'

describe('half-typed files get one finding about their form', () => {
  test('an empty file', () => check(``))

  test('nothing but comments and empty documents', () =>
    check(`# nothing
---
...
---
# again
`))

  test('the first key without its colon', () =>
    check(`latt
#^^^ value-type: A lattice file is a mapping of keys such as \`lattice:\`. Did you mean \`lattice:\`?
`))

  test('a title alone', () =>
    check(`title: Silicon
#^^^^ key-missing: \`lattice\` is missing: without it there is no crystal.
`))

  test('keys without values', () =>
    check(`lattice: {bravais: cF, a: 5.43}
path:
#^^^ value-type: \`path\` has no value yet, such as \`Γ – X – W | U – X\`.
sampling:
  spacing:
# ^^^^^^^ value-type: \`spacing\` has no value yet, such as \`0.02\`.
points:
  X:
# ^ value-type: \`X\` has no value yet, such as \`[1/2, 0, 1/2]\`.
atoms:
  - Si:
#   ^^ value-type: \`Si\` has no value yet, such as \`[1/4, 1/4, 1/4]\`.
  -
# ^ value-type: An atom is missing here, such as \`Si: [0, 0, 0]\`.
`))

  test('a path that ends in a separator', () =>
    check(`lattice: {bravais: cF, a: 5.43}
path: Γ –
#       ^ value-type: A label is missing after \`–\`.
`))

  test('a path of one label', () =>
    check(`lattice: {bravais: cF, a: 5.43}
path: Γ
#     ^ value-type: A piece of a path has two labels at least; \`Γ\` stands alone.
`))

  test('a key without its colon, in a block', () =>
    check(`lattice:
  bravais: cF
  a
# ^ yaml-syntax: A colon is missing after \`a\`: a key is written \`key: value\`.
path: Γ – X
`))

  test('a key without its colon, in braces', () =>
    check(`lattice: {bravais: cF, a}
#                      ^ value-type: \`a\` has no value yet, such as \`5.43\`.
`))

  test('a colon without its blank, in braces', () =>
    check(`lattice: {bravais: cF, a:5.43}
#                      ^^^^^^ value-type: A blank is missing after the colon of \`a:\`.
`))

  test('an open list at the end of the file', () =>
    check(`lattice:
  vectors:
    - [0, 1, 1]
    - [1, 0,
#     ^ yaml-syntax: A list begins here and is not closed: \`]\` is missing.
`))

  test('an open list with more after it', () =>
    check(`lattice:
  vectors:
    - [0, 1, 1]
    - [1, 0,
#     ^ yaml-syntax: A list begins here and is not closed: \`]\` is missing.
path: Γ – X
`))

  test('an open mapping', () =>
    check(`lattice: {bravais: cF, a: 5.43
#        ^ yaml-syntax: A mapping begins here and is not closed: \`}\` is missing.
path: Γ – X
`))

  test('an open quote', () =>
    check(`lattice: {bravais: cF, a: 5.43}
title: "Silicon
#      ^ yaml-syntax: A text begins here and is not closed: \`"\` is missing.
path: Γ – X
`))

  test('an element alone', () =>
    check(`lattice: {bravais: cF, a: 5.43}
atoms:
  - S
#   ^ value-type: An atom is written \`ELEMENT: [x, y, z]\`; here is the text \`S\`.
`))
})

describe('keys', () => {
  test('unknown ones, with the nearest or their place', () =>
    check(`lattice: {bravais: cF, a: 5.43}
paths: Γ – X
#^^^^ key-unknown: \`paths\` is no key of a lattice file; did you mean \`path\`?
spacing: 0.1
#^^^^^^ key-unknown: \`spacing\` is no key of a lattice file: it belongs in \`sampling\` or in \`mesh\`.
foo: 1
#^^ key-unknown: \`foo\` is no key of a lattice file.
`))

  test('unknown ones inside of mappings', () =>
    check(`lattice: {bravais: cF, a: 5.43, centering: F, unit: nm}
#                               ^^^^^^^^^ key-unknown: \`centering\` is no key of \`lattice\`; did you mean \`centring\`?
#                                             ^^^^ key-unknown: \`unit\` is no key of \`lattice\`: it belongs at the top level.
frames: {atom: cartesian}
#        ^^^^ key-unknown: \`atom\` is no key of \`frames\`; did you mean \`atoms\`?
sampling: {step: 4}
#          ^^^^ key-unknown: \`step\` is no key of \`sampling\`; did you mean \`steps\`?
mesh: {division: [4, 4, 4]}
#      ^^^^^^^^ key-unknown: \`division\` is no key of \`mesh\`; did you mean \`divisions\`?
atoms: [Si: {place: [0, 0, 0]}]
#            ^^^^^ key-unknown: \`place\` is no key of \`atoms\`: known are \`at\`, \`name\`.
`))

  test('merges', () =>
    check(`lattice: {bravais: cF, a: 5.43}
<<: {title: x}
#^ key-unknown: A merge \`<<\` is not part of YAML 1.2: the keys are written out.
`))

  test('repeated ones, in any spelling of a label', () =>
    check(`lattice: {bravais: cF, a: 5.43}
lattice: {bravais: cP, a: 1, a: 2}
#^^^^^^ key-repeated: \`lattice\` stands here a second time; the first one is used.
points: {X1: [0, 0, 0], X_1: [0, 0, 1/2], Gamma: [0, 0, 0], Γ: [0, 0, 0]}
#                       ^^^ key-repeated: \`X_1\` stands here a second time; the first one is used.
#                                                           ^ key-repeated: \`Γ\` stands here a second time; the first one is used.
mesh: {fine: {spacing: 1}, fine: {spacing: 2}}
#                          ^^^^ key-repeated: \`fine\` stands here a second time; the first one is used.
checks: {path-misses: off, path-misses: info}
#                          ^^^^^^^^^^^ key-repeated: \`path-misses\` stands here a second time; the first one is used.
`))

  test('missing ones', () =>
    check(`lattice: {a: 5}
#^^^^^^ key-missing: \`lattice\` needs \`bravais\` or \`vectors\`.
sampling: {}
#^^^^^^^ key-missing: \`sampling\` needs one of \`spacing\`, \`steps\`, \`total\`.
mesh: {shift: [0, 0, 1/2]}
#^^^ key-missing: \`mesh\` needs \`divisions\` or \`spacing\`.
points: {Q: {between: [Γ, X]}, R: {at: 0.5}, S: {}}
#        ^ key-missing: \`Q\` needs \`at\`: \`{between: [Γ, X], at: 0.85}\`.
#                              ^ key-missing: \`R\` needs \`between\`: \`{between: [Γ, X], at: 0.85}\`.
#                                            ^ key-missing: \`S\` needs \`between\` and \`at\`: \`{between: [Γ, X], at: 0.85}\`.
atoms: [Si: {name: up}]
#       ^^ key-missing: \`Si\` needs its place: \`{at: [x, y, z]}\`.
`))

  test('two where one may stand', () =>
    check(`lattice: {bravais: cF, a: 5.43}
sampling: {spacing: 0.1, total: 5}
#                        ^^^^^ value-type: \`sampling\` has either \`spacing\` or \`total\`, not both; \`spacing\` is used.
mesh: {divisions: [2, 2, 2], spacing: 0.1}
#                            ^^^^^^^ value-type: \`mesh\` has either \`divisions\` or \`spacing\`, not both; \`divisions\` is used.
`))

  test('where they say nothing: plane lattices', () =>
    check(`lattice: {bravais: hp, a: 2.5, centring: P}
#                              ^^^^^^^^ key-unknown: \`centring\` stands beside \`vectors\` only: a Bravais type says the centring itself.
space-group: 191
#^^^^^^^^^^ key-unknown: \`space-group\` is for three dimensions; this lattice has 2.
`))

  test('where they say nothing: three dimensions', () =>
    check(`lattice: {bravais: cF, a: 5, height: 20}
#                            ^^^^^^ key-unknown: \`height\` is for plane lattices; this one has 3 dimensions.
`))

  test('where they say nothing: a chain', () =>
    check(`lattice: {vectors: [[1, 0, 0]], height: 20}
#                               ^^^^^^ key-unknown: \`height\` is for plane lattices; this one has 1 dimension.
`))
})

describe('words', () => {
  test('units', () =>
    check(`unit: Angstroms
#     ^^^^^^^^^ unit-unknown: \`Angstroms\` cannot be read as \`unit\`; did you mean \`angstrom\`?
lattice: {bravais: cF, a: 5.43}
---
unit: pm
#     ^^ unit-unknown: \`pm\` cannot be read as \`unit\`: it is one of \`angstrom\`, \`nm\`, \`bohr\`.
lattice: {bravais: cF, a: 5.43}
---
unit: [nm]
#     ^^^^ value-type: \`unit\` is one of \`angstrom\`, \`nm\`, \`bohr\`, not a list.
lattice: {bravais: cF, a: 5.43}
`))

  test('Bravais types', () =>
    check(`lattice: {bravais: fcc, a: 5}
#                  ^^^ value-type: \`fcc\` cannot be read as \`bravais\`; did you mean \`cF\`?
---
lattice: {bravais: CF, a: 5}
#                  ^^ value-type: \`CF\` cannot be read as \`bravais\`; did you mean \`cF\`?
---
lattice: {bravais: cX, a: 5}
#                  ^^ value-type: \`cX\` cannot be read as \`bravais\`: it is one of \`cP\`, \`cF\`, \`cI\`, \`tP\`, \`tI\`, \`oP\`, \`oC\`, \`oA\`, \`oB\`, \`oF\`, \`oI\`, \`hP\`, \`hR\`, \`mP\`, \`mA\`, \`mB\`, \`mC\`, \`mI\`, \`aP\`, \`tp\`, \`op\`, \`oc\`, \`hp\`, \`mp\`.
---
lattice: {bravais: oS, a: 5, b: 4, c: 3}
`))

  test('the others', () =>
    check(`lattice: {bravais: cF, a: 5.43}
time-reversal: on
#              ^^ value-type: \`on\` cannot be read as \`time-reversal\`; did you mean \`yes\`?
labels: hinuma-2018
#       ^^^^^^^^^^^ value-type: \`hinuma-2018\` cannot be read as \`labels\`; did you mean \`hinuma-2017\`?
frames: {points: 2π/a, atoms: fractional}
#                ^^^^ value-type: \`2π/a\` cannot be read as \`points\`; did you mean \`2pi/a\`?
#                             ^^^^^^^^^^ value-type: \`fractional\` cannot be read as \`atoms\`; did you mean \`primitive\`?
checks: {path-misses: false, path-jump: warn, path-repeats: }
#                     ^^^^^ value-type: \`false\` cannot be read as the severity of \`path-misses\`; did you mean \`off\`?
#                                       ^^^^ value-type: \`warn\` cannot be read as the severity of \`path-jump\`; did you mean \`warning\`?
#                                             ^^^^^^^^^^^^ value-type: \`path-repeats\` has no value yet, such as \`off\`.
`))
})

describe('values of another kind', () => {
  test('where a mapping is wanted', () =>
    check(`lattice: {bravais: cF, a: 5.43}
checks: off
#       ^^^ value-type: \`checks\` is a mapping of rules, such as \`checks: {mesh-uneven: off}\`, not the text \`off\`.
frames: cartesian
#       ^^^^^^^^^ value-type: \`frames\` is a mapping, such as \`frames: {atoms: conventional, points: primitive}\`, not the text \`cartesian\`.
points: [[0, 0, 0]]
#       ^^^^^^^^^^^ value-type: \`points\` is a mapping \`LABEL: [k1, k2, k3]\`, not a list.
mesh: [4, 4, 4]
#     ^^^^^^^^^ value-type: \`mesh\` is a mapping, such as \`mesh: {divisions: [12, 12, 12]}\`, not a list.
sampling: 0.02
#         ^^^^ value-type: \`sampling\` is a mapping, such as \`sampling: {spacing: 0.02}\`, not the text \`0.02\`.
`))

  test('where a text is wanted', () =>
    check(`lattice: {bravais: cF, a: 5.43}
title: [a]
#      ^^^ value-type: \`title\` is a text, not a list.
space-group: [225]
#            ^^^^^ value-type: \`space-group\` is a number from 1 to 230 or a Hermann–Mauguin symbol such as \`Fm-3m\`, not a list.
path: {Γ: X}
#     ^^^^^^ value-type: \`path\` is a text such as \`Γ – X\`, not a mapping.
`))

  test('a block is shown by its first line', () =>
    check(`lattice:
  - bravais: cF
# ^^^^^^^^^^^^^ value-type: \`lattice\` is a mapping, such as \`lattice: {bravais: cF, a: 5.43}\`, not a list.
  - a: 5
`))

  test('one number for all directions', () =>
    check(`lattice: {bravais: cF, a: 5.43}
mesh: {divisions: 12}
#                 ^^ value-type: \`divisions\` is a list with a number for each direction, such as \`[12, 12, 12]\`.
supercell: 2
#          ^ value-type: \`supercell\` is a list with a number for each direction, such as \`[2, 2, 2]\`.
`))

  test('vectors', () =>
    check(`lattice: {bravais: cF, a: 5.43}
points: {Q: 0 0 1/2, S: [], T: [0, 0, 0, 0], U: [0, [0], {}]}
#           ^^^^^^^ value-type: \`Q\` is a list of one to three numbers in brackets: \`[0, 0, 1/2]\`.
#                       ^^ value-type: \`S\` takes one to three numbers; here is none.
#                              ^^^^^^^^^^^^ value-type: \`T\` takes one to three numbers; here are four.
#                                                   ^^^ value-type: A number stands here, not a list.
#                                                        ^^ value-type: A number stands here, not a mapping.
supercell: []
#          ^^ value-type: \`supercell\` is a list of one, two or three rows of numbers; here is none.
`))

  test('rows', () =>
    check(`lattice:
  vectors: [1, 0, 0]
#          ^^^^^^^^^ value-type: \`vectors\` is a list of one, two or three rows of numbers; each row is a list in brackets.
---
lattice:
  vectors: [[1, 0, 0], [0, 1, 0], [0, 0, 1], [1, 1, 1]]
#          ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^ value-type: \`vectors\` is a list of one, two or three rows of numbers; here are four.
---
lattice:
  vectors: [[1, 0, 0], 5, [0, 0, 1]]
#                      ^ value-type: A row of \`vectors\` is a list of one to three numbers in brackets.
`))

  test('labels', () =>
    check(`lattice: {bravais: cF, a: 5.43}
points: {1: [0, 0, 0], "": [0, 0, 0], X-1: [0, 0, 0], Q: {between: [Γ, 5], at: 0.5}, R: {between: Γ, at: 0.5}, S: {between: [Γ], at: 0.5}}
#        ^ value-type: \`1\` is no label: a label is a letter, then letters, digits and primes.
#                      ^^ value-type: A label is missing here.
#                                     ^^^ value-type: \`X-1\` is no label: a label is a letter, then letters, digits and primes.
#                                                                      ^ value-type: \`5\` is no label: a label is a letter, then letters, digits and primes.
#                                                                                                 ^ value-type: \`between\` is a list of two labels, not the text \`Γ\`.
#                                                                                                                           ^^^ value-type: \`between\` takes two labels; here is one.
`))

  test('paths', () =>
    check(`lattice: {bravais: cF, a: 5.43}
path:
  - Γ – X
  -
# ^ value-type: A piece of the path is missing here.
  - [Γ, X]
#   ^^^^^^ value-type: A piece of the path is a text such as \`Γ – X\`, not a list.
  - Γ
#   ^ value-type: A piece of a path has two labels at least; \`Γ\` stands alone.
---
lattice: {bravais: cF, a: 5.43}
path: [Γ, X]
#     ^^^^^^ value-type: Each item is a piece of its own, of two labels at least; did you mean \`Γ – X\`?
---
lattice: {bravais: cF, a: 5.43}
path: []
#     ^^ value-type: \`path\` has no piece yet, such as \`Γ – X\`.
---
lattice: {bravais: cF, a: 5.43}
path: ""
#     ^^ value-type: The path is empty.
`))

  test('space groups', () =>
    check(`lattice: {bravais: cF, a: 5.43}
space-group: 231
#            ^^^ value-type: \`space-group\` is a number from 1 to 230 or a Hermann–Mauguin symbol such as \`Fm-3m\`, not \`231\`.
---
lattice: {bravais: cF, a: 5.43}
space-group: -3m
#            ^^^ value-type: \`space-group\` is a number from 1 to 230 or a Hermann–Mauguin symbol such as \`Fm-3m\`, not \`-3m\`.
`))

  test('tags', () =>
    check(`lattice: {bravais: cF, a: 5.43}
title: !foo x
#      ^^^^ value-type: The tag \`!foo\` means nothing in a lattice file.
tolerance: !!float 1e-3
`))
})

describe('atoms', () => {
  test('as a mapping', () =>
    check(`lattice: {bravais: cF, a: 5.43}
atoms:
  Si: [0, 0, 0]
# ^^ value-type: \`atoms\` is a list, in which each atom begins with a dash: \`- Si: [x, y, z]\`.
  Ge: [1/4, 1/4, 1/4]
`))

  test('elements', () =>
    check(`lattice: {bravais: cF, a: 5.43}
atoms:
  - Sl: [0, 0, 0]
#   ^^ element-unknown: \`Sl\` is no symbol of an element; did you mean \`Si\` (silicon)?
  - Iron: [0, 0, 0]
#   ^^^^ element-unknown: \`Iron\` is no symbol of an element; did you mean \`Fe\` (iron)?
  - fe: [0, 0, 0]
#   ^^ element-unknown: \`fe\` is no symbol of an element; did you mean \`Fe\` (iron)?
  - Fe2+: [0, 0, 0]
#   ^^^^ element-unknown: \`Fe2+\` is no element; like atoms are told apart by a name: \`Fe: {at: [x, y, z], name: Fe2+}\`.
  - Fe_up: {at: [0, 0, 0]}
#   ^^^^^ element-unknown: \`Fe_up\` is no element; like atoms are told apart by a name: \`Fe: {at: [x, y, z], name: Fe_up}\`.
  - D: [0, 0, 0]
#   ^ element-unknown: \`D\` is no symbol of an element; did you mean \`H\` (hydrogen)?
  - Qq: [0, 0, 0]
#   ^^ element-unknown: \`Qq\` is no symbol of an element.
`))

  test('places', () =>
    check(`lattice: {bravais: cF, a: 5.43}
atoms:
  - [0, 0, 0]
#   ^^^^^^^^^ value-type: The element stands before the numbers: \`ELEMENT: [x, y, z]\`.
  - Si: 0 0 0
#       ^^^^^ value-type: \`Si\` is a list of three numbers in brackets: \`[0, 0, 0]\`.
  - Si: [0, 0]
#       ^^^^^^ value-type: \`Si\` takes three numbers; here are two.
  - Si: [[0, 0, 0]]
#       ^^^^^^^^^^^ value-type: \`Si\` takes three numbers; here is one.
  - Si: [0, 0, 0]
    Ge: [0, 0, 0]
#   ^^ value-type: One atom stands in one item: each begins with a dash of its own.
`))
})

describe('numbers', () => {
  test('in a block', () =>
    check(`lattice:
  bravais: oP
  a: 5,43
#     ^ number-malformed: The decimal sign is a point.
  b: 3.8O
#       ^ number-malformed: The letter \`O\` stands in this number, where the digit \`0\` may be meant.
  c: 0x1F
#    ^^^^ number-malformed: Numbers are decimal: hexadecimal, octal and binary ones are not read.
tolerance: .inf
#          ^^^^ number-malformed: Numbers must be finite: \`.inf\` is not read.
`))

  test('a unit', () =>
    check(`lattice: {bravais: cF, a: 5.43 A}
#                             ^^ number-malformed: No unit stands beside a number: lengths are in the unit that \`unit:\` states.
`))

  test('a decimal comma in braces', () =>
    check(`lattice: {bravais: cP, a: 3,2}
#                           ^ value-type: \`2\` is a key without a colon and a value; the decimal sign is a point.
`))

  test('on the characters at fault', () =>
    check(`lattice: {bravais: cF, a: 5.43}
points: {A: [1/0, foo, 2(a)], B: [½, 1/2pi, sqrt(-1)], C: [(1, tan(90), 2 a]}
#              ^ number-malformed: This is a division by zero.
#                 ^^^ number-malformed: \`foo\` is no number: known are \`a\`, \`b\`, \`c\`, \`alpha\`, \`beta\`, \`gamma\`, \`sqrt\`, \`sin\`, \`cos\`, \`tan\`, \`pi\`.
#                       ^ number-malformed: An operator is missing before \`(\`.
#                                 ^ number-malformed: Here \`½\` is written \`1/2\`.
#                                      ^^^ number-malformed: \`/2pi\` can be read in two ways: write \`/(2*pi)\` or \`/2*pi\`.
#                                           ^^^^^^^^ number-malformed: The square root of -1 is no real number.
#                                                          ^^ number-malformed: A closing parenthesis is missing.
#                                                              ^^^^^^^ number-malformed: tan(90) is infinite.
#                                                                         ^ number-malformed: An operator or a comma is missing before \`a\`.
`))

  test('through quotes and folds', () =>
    check(`lattice: {bravais: cF, a: 5.43}
points: {A: ["1/0", '1/0', "\\x31/0"]}
#               ^ number-malformed: This is a division by zero.
#                      ^ number-malformed: This is a division by zero.
#                                ^ number-malformed: This is a division by zero.
tolerance: >-
  1e-3 +
  1/0
#   ^ number-malformed: This is a division by zero.
`))

  test('out of range', () =>
    check(`lattice: {bravais: cF, a: -5.43}
#                         ^^^^^ value-type: \`a\` must be positive; it is -5.43.
tolerance: 0
#          ^ value-type: \`tolerance\` must be positive; it is 0.
sampling: {steps: 2.5}
#                 ^^^ value-type: A whole number from 1 stands here, not 2.5.
mesh: {divisions: [0, 4, 1/2]}
#                  ^ value-type: A whole number from 1 stands here, not 0.
#                        ^^^ value-type: A whole number from 1 stands here, not 0.5.
`))

  test('parameters in a circle', () =>
    check(`lattice: {bravais: cF, a: 2*c, gamma: alpha}
#                           ^ number-malformed: \`c\` depends on itself: a → c → a.
`))

  test('a parameter that cannot be read is said once', () =>
    check(`lattice: {bravais: mP, a: 4, b: a*q, c: b, beta: 99}
#                                 ^ number-malformed: \`q\` is no number: known are \`a\`, \`b\`, \`c\`, \`alpha\`, \`beta\`, \`gamma\`, \`sqrt\`, \`sin\`, \`cos\`, \`tan\`, \`pi\`.
points: {Q: [b, c, alpha]}
`))

  test('parameters that are not stated', () =>
    check(`lattice: {vectors: [[a, 0], [0, 1]]}
#                    ^ number-malformed: \`a\` has no value: \`lattice\` does not state it.
points: {Q: [gamma, 0]}
#            ^^^^^ number-malformed: \`gamma\` has no value: \`lattice\` does not state it.
---
title: x
#^^^^ key-missing: \`lattice\` is missing: without it there is no crystal.
points: {Q: [a, 0, 0]}
#            ^ number-malformed: \`a\` has no value: there is no lattice that could state it.
`))
})

describe('YAML', () => {
  test('a tab', () =>
    check(`lattice:
	bravais: cF
#^ yaml-syntax: A tab cannot indent: use blanks.
`))

  test('indentation', () =>
    check(`lattice:
  bravais: cF
 a: 5
#^ yaml-syntax: The keys of a mapping begin in one column.
`))

  test('indentation that makes a value go on', () =>
    check(`lattice:
  bravais: cF
#          ^ yaml-syntax: A text that holds a colon needs quotes; if a key is meant, its indentation does not fit.
   a: 5
`))

  test('a dash out of line', () =>
    check(`lattice: {bravais: cF, a: 5.43}
atoms:
  - Si: [0, 0, 0]
 - Si: [0, 0, 0]
#^ yaml-syntax: The indentation here fits nothing that stands above.
`))

  test('a bracket too many', () =>
    check(`lattice: {bravais: cF, a: 5}}
#                           ^ yaml-syntax: \`}\` closes nothing that is open.
`))

  test('a comma missing', () =>
    check(`lattice: {bravais: cF, a: 5}
mesh: {divisions: [4, 4 4]}
#                       ^ number-malformed: An operator or a comma is missing before \`4\`.
points: {Q: [0, 0, 0] R: [0, 0, 0]}
#                     ^ yaml-syntax: Something is missing before \`R\`, such as a comma, an operator or a quote.
`))

  test('a comma too many', () =>
    check(`lattice: {bravais: cF, a: 5.43}
points: {Q: [0, , 0]}
#               ^ yaml-syntax: Nothing stands between two commas, or before the first.
`))

  test('a colon in a text', () =>
    check(`title: Tellurides: lead
#      ^ yaml-syntax: A text that holds a colon needs quotes; if a key is meant, its indentation does not fit.
lattice: {bravais: cF, a: 5.43}
`))

  test('a path in a block that begins too early', () =>
    check(`path: | Γ – X
#       ^^^^^ yaml-syntax: After \`|\` or \`>\` the text begins on the next line; one that holds them needs quotes.
`))

  test('a list on the line of its key', () =>
    check(`path: - Γ – X
#     ^ yaml-syntax: A list that begins with \`- \` goes on the line after its key.
`))

  test('characters that need quotes', () =>
    check(`title: @home
#      ^ yaml-syntax: A text that begins with \`@\` must be quoted.
titel: "\\q"
#^^^^ key-unknown: \`titel\` is no key of a lattice file; did you mean \`title\`?
#       ^^ yaml-syntax: \`\\q\` is no escape sequence; a backslash itself is written \`\\\\\`.
`))

  test('a comment without a blank', () =>
    check(`lattice: {bravais: cF, a: 5}#c
#                           ^^ yaml-syntax: A blank is missing before \`#\`.
`))

  test('anchors and aliases that are not there', () =>
    check(`lattice: &l {bravais: cF, a: *l}
#                            ^^ yaml-syntax: \`*l\` stands inside of what it stands for.
tolerance: *t
#          ^^ yaml-syntax: Nothing before this place is called \`&t\`.
`))

  test('the first key on the line of a marker', () =>
    check(`--- lattice: 5
#   ^ yaml-syntax: The first key goes on the line after \`---\`.
`))

  test('an unresolved merge of versions', () =>
    check(`<<<<<<< ours
#^^^^^^^^^^^ yaml-syntax: The two sides of a merge stand here side by side: keep one, and remove the lines that mark them.
lattice: {bravais: cF, a: 5}
=======
lattice: {bravais: cF, a: 6}
>>>>>>> theirs
`))

  test('brackets without end', () =>
    check(`points: {Q: [[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[[
#                                                                         ^ yaml-syntax: Lists and mappings are nested over 64 levels deep here: the document is not read.
`))
})

describe('comments', () => {
  test('instructions that are none', () =>
    check(`# braggline: alow path-misses
#            ^^^^ key-unknown: A comment can say \`braggline: allow RULE\`; \`alow\` is no instruction.
# braggline: allow
#            ^^^^^ value-type: The rule that is allowed is missing: \`# braggline: allow RULE\`.
# braggline:
#^^^^^^^^^^^ key-unknown: A comment can say \`braggline: allow RULE\`; here is nothing.
# braggline allow x
lattice: {bravais: cF, a: 5.43}
`))
})
