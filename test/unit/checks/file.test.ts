import { describe, test } from 'vitest'
import { check, checkFix } from './harness.ts'

describe('key-missing', () => {
  test('points in units of 2π/a need `a`', () =>
    check(`
lattice:
  vectors: [[4, 0, 0], [0, 4, 0], [0, 0, 4]]
frames: {points: 2pi/a}
#                ^^^^^ error key-missing: Points in units of 2π/a need the parameter \`a\`, which \`lattice\` does not state.
points: {X: [0, 1/2, 0]}
`))

  test('a parameter that is there but cannot be read is not missing', () =>
    check(`
lattice: {bravais: cP, a: 4 A}
#                          ^^ error number-malformed: No unit stands beside a number: lengths are in the unit that \`unit:\` states.
`))

  test('the fix inserts the keys', () =>
    checkFix('lattice: {bravais: t$0I, a: 3.8}\n', 'lattice: {bravais: tI, a: 3.8, c: }\n', { safe: false }))
})

describe('key-unknown', () => {
  test('the name of a rule, in `checks` and in a comment', () =>
    check(`
lattice: {bravais: cP, a: 4} # braggline: allow path-jmp
#                                               ^^^^^^^^ warning key-unknown: No rule is called \`path-jmp\`; did you mean \`path-jump\`?
checks:
  path-mises: off
# ^^^^^^^^^^ error key-unknown: No rule is called \`path-mises\`; did you mean \`path-misses\`?
`))
})
