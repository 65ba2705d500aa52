import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { fill } from './support.ts'

const gives = (value: string) => fill(`{{ ${value} }}`)

describe('numbers', () => {
  test.each([
    ['1.005 | fixed: 2', '1.00'], // The double nearest to 1.005 lies below it.
    ['-0.0000001 | fixed: 3', '0.000'],
    ['-0.0000001 | fixed: 0', '0'],
    ['-0.0006 | fixed: 3', '-0.001'],
    ['0 | exponent: 2', '0.00e+00'],
    ['0.00012345 | exponent: 4', '1.2345e-04'],
    ['"1e-120" | exponent: 1', '1.0e-120'],
    ['0.5 | fraction', '1/2'],
    ['-0.6666666666666666 | fraction', '-2/3'],
    ['2 | fraction', '2'],
    ['0.123456 | fraction', '0.123456'],
    ['-2.5 | round', '-2'],
    ['-7 | modulo: 4', '1'],
    ['"12" | plus: 1', '13'],
    ['lattice.vectors[0] | times: 2 | join: ","', '0,6.46,6.46'],
  ])('{{ %s }}', (value, expected) => expect(gives(value)).toBe(expected))

  test.each([
    ['1 | divided_by: 0', '1 and 0 give no finite number'],
    ['1 | modulo: 0', '1 and 0 give no finite number'],
    ['1 | plus', 'one number follows the colon'],
    ['1 | plus: "x"', 'a number is needed, and this is "x"'],
    ['"" | plus: 1', 'a number is needed, and this is ""'],
    ['1 | fixed: 21', 'the number of decimals is a whole number from 0 to 20, and this is 21'],
    ['1 | fixed: 1.5', 'the number of decimals is a whole number from 0 to 20, and this is 1.5'],
    ['"1e21" | fixed: 2', 'too large for decimals'],
    ['title | fixed: 2', 'a number is needed'],
    ['lattice | fixed: 2', 'this is a group of values'],
    ['1.5 | round: 1', '`fixed` is for decimals'],
    ['1 | fixed: n: 3', 'a plain value follows the colon'],
  ])('{{ %s }} is refused', (value, message) => expect(gives(value)).toContain(message))
})

describe('columns', () => {
  test('to the right, to the left, and never beyond', () => {
    expect(gives('1.25 | fixed: 2 | width: 7')).toBe('   1.25')
    expect(gives('"Γ" | width: 3, "left"')).toBe('Γ  ')
    expect(gives('123 | width: 2')).toContain('"123" is wider than 2 columns')
    expect(gives('1 | width: 3, "centre"')).toContain('"left" or "right"')
    expect(gives('1 | width: 0')).toContain('from 1 to 1000')
  })
})

describe('units', () => {
  test.each([
    ['1 | unit: "angstrom"', '1'],
    // CODATA 2022: a₀ = 0.529177210544 Å.
    ['0.529177210544 | unit: "bohr"', '1'],
    ['0.529177210544 | per_unit: "bohr" | fixed: 9', '0.280028520'],
    ['1000 | unit: "nm", 3', '1'],
    ['1 | per_unit: "nm", 2 | fixed: 3', '100.000'],
    ['1 | unit: "Bohr"', 'did you mean bohr?'],
    ['1 | unit: "pm"', '"pm" is no unit of length'],
    ['1 | unit', 'nothing is no unit of length'],
    ['1 | unit: "nm", 4', 'the power is a whole number from 1 to 3'],
  ])('{{ %s }}', (value, expected) => expect(gives(value)).toContain(expected))

  test("from the file's own unit", () => {
    const form =
      '{{ lattice.parameters.a | unit: "angstrom" | fixed: 6 }} {{ reciprocal.lengths[0] | per_unit: "angstrom" | fixed: 6 }}'
    // 10 a₀; 2π over it.
    expect(fill(form, 'unit: bohr\nlattice: {bravais: cP, a: 10}\n')).toBe('5.291772 1.187350')
  })

  test('there and back', () => {
    fc.assert(
      fc.property(fc.double({ min: 1e-3, max: 1e3 }), x => {
        const back = Number(gives(`${x.toFixed(9)} | unit: "bohr" | per_unit: "bohr"`))
        expect(back).toBeCloseTo(Number(x.toFixed(9)), 6)
      }),
      { numRuns: 20 },
    )
  })
})

describe('labels', () => {
  test.each([
    ['"Γ" | ascii', 'Gamma'],
    ['"Σ₁" | ascii', 'Sigma1'],
    ['"Ω" | ascii', 'Omega'],
    ['"ς" | ascii', 'sigma'],
    ['"λ" | ascii', 'lambda'],
    ['"H\'" | ascii', "H'"],
    ['"ж" | ascii', 'ASCII has no name for'],
    ['"Σ1" | unicode', 'Σ₁'],
    ['"K12\'" | unicode', "K₁₂'"],
    ['path.pieces[0] | ascii | join: "-"', 'Gamma-X-W-K-Gamma-L-U-W-L-K'],
  ])('{{ %s }}', (value, expected) => expect(gives(value)).toContain(expected))
})

test('constants', () => {
  // CODATA 2022, from memory: E_h = 27.211 386 245 981 eV.
  expect(Number(gives('constants.hartree'))).toBeCloseTo(27.211386246, 6)
  expect(Number(gives('constants.pi'))).toBe(Math.PI)
})
