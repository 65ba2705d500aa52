import { describe, expect, test } from 'vitest'
import { check, checkFix, findingsOf } from './harness.ts'

describe('sampling-coarse', () => {
  test('a spacing that is too wide, in the unit of the file', () =>
    check(`
unit: bohr
lattice: {bravais: cP, a: 7.4}
path: Γ – X – M – Γ – R
sampling: {spacing: 0.06}
#                   ^^^^ warning sampling-coarse: Γ–R gets 14 points, 0.057 a₀⁻¹ apart. 3 other segments are too coarse as well. Bands take 0.011 a₀⁻¹ or so.
`))
  test('few steps are replaced by a spacing', () =>
    checkFix(
      'lattice: {bravais: cP, a: 3.9}\npath: Γ – X – M – Γ – R\nsampling:\n  steps: $06\n',
      'lattice: {bravais: cP, a: 3.9}\npath: Γ – X – M – Γ – R\nsampling:\n  spacing: 0.02\n',
      { safe: false },
    ))
  // X–M of a cube of 3.9 Å: π/3.9 = 0.8055 Å⁻¹; M–Γ is √2 of it: 1.139/0.02 = 57 steps.
  test('a segment’s own steps', () =>
    checkFix(
      'lattice: {bravais: cP, a: 3.9}\npath: Γ – X – M –($02)– Γ – R\n',
      'lattice: {bravais: cP, a: 3.9}\npath: Γ – X – M –(57)– Γ – R\n',
    ))
  // |Γ–X| = π/18 = 0.1745 Å⁻¹: at 0.06 it gets 3 steps of 0.058, at 0.05 four of 0.044.
  test('a short segment of few points', () => {
    const text = 'lattice: {bravais: cP, a: 18}\npath: Γ – X\nsampling: {spacing: 0.06}\n'
    expect(findingsOf(text).map(({ rule }) => rule)).toEqual(['sampling-coarse'])
    expect(findingsOf(text.replace('0.06', '0.05'))).toEqual([])
  })
  test('nothing is said of points whose place is in doubt', () => {
    const text =
      'lattice: {bravais: cP, a: 3.9}\nframes: {points: cartesian}\npoints: {X: [0, 0.1282, 0]}\npath: Γ – X\nsampling: {steps: 5}\n'
    expect(findingsOf(text).map(({ rule }) => rule)).toEqual(['point-two-pi'])
  })
})

describe('sampling-uneven', () => {
  test('equal steps in unequal segments', () =>
    check(`
lattice: {bravais: tP, a: 3.9, c: 16}
path: Γ – X – M – Γ – Z – R – A – Z | X – R | M – A
sampling: {steps: 40}
#                 ^^ info sampling-uneven: The steps differ 5.8-fold: 0.028 Å⁻¹ in A–Z, 0.005 Å⁻¹ in Γ–Z.
`))
  // Lengths of the book's path: 3.9: π/3.9·(1 + 1 + √2) twice, π/16 three times: 5.6896 + 0.5890 = 6.0895; /360.
  test('one spacing with as many points', () =>
    checkFix(
      'lattice: {bravais: tP, a: 3.9, c: 16}\npath: Γ – X – M – Γ – Z – R – A – Z | X – R | M – A\nsampling: {steps: $040}\n',
      'lattice: {bravais: tP, a: 3.9, c: 16}\npath: Γ – X – M – Γ – Z – R – A – Z | X – R | M – A\nsampling: {spacing: 0.017}\n',
    ))
  // K–Γ is three times as long as W–K: 3/(2√2) and 1/(2√2).
  test('threefold is what a cube’s path has', () =>
    check(`
lattice: {bravais: cF, a: 5.43}
path: Γ – X – W – K – Γ – L – U – W – L – K | U – X
sampling: {steps: 40}
`))
  test('more points are asked for in one segment', () =>
    check(`
lattice: {bravais: cP, a: 3.9}
path: Γ –(200)– X – M – Γ – R
`))
  test('a tiny segment has one step at least', () =>
    check(`
lattice: {bravais: cP, a: 3.9}
points:
  Q: {between: [Γ, X], at: 0.995}
path: Γ – Q – X – M – Γ – R
`))
})
