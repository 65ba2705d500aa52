import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { applyFixes, chooseSafeFixes } from '../../../server/src/exchange/safe-fixes.ts'
import type { Fix, TextEdit } from '../../../server/src/format/model.ts'

const edit = (from: number, to: number, text: string): TextEdit => ({ at: [from, to], text })
const fix = (safe: boolean, ...edits: TextEdit[]): Fix => ({ title: `Fix ${edits.length}`, safe, edits })

describe('edits', () => {
  test('refer to the text before, in any order', () => {
    expect(applyFixes('abcdef', [edit(4, 5, 'E'), edit(0, 2, ''), edit(6, 6, '!')])).toBe('cdEf!')
  })
  test('two insertions at one place keep their order', () => {
    expect(applyFixes('ab', [edit(1, 1, 'x'), edit(1, 1, 'y')])).toBe('axyb')
  })
  test('new lines end as those of the text do', () => {
    expect(applyFixes('a: 1\r\nb: 2\r\n', [edit(6, 6, 'c: 3\n')])).toBe('a: 1\r\nc: 3\r\nb: 2\r\n')
    expect(applyFixes('a: 1\nb: 2\n', [edit(5, 5, 'c: 3\n')])).toBe('a: 1\nc: 3\nb: 2\n')
  })
  test('that overlap are refused', () => {
    expect(() => applyFixes('abc', [edit(0, 2, 'x'), edit(1, 3, 'y')])).toThrow(RangeError)
  })
})

describe('chosen are', () => {
  test('safe fixes only, the first of a finding', () => {
    const findings = [
      { fixes: [fix(false, edit(0, 1, 'a'))] },
      { fixes: [fix(false, edit(2, 3, 'b')), fix(true, edit(2, 3, 'c')), fix(true, edit(2, 3, 'd'))] },
      {},
    ]
    expect(chooseSafeFixes(findings).map(({ fix }) => fix.edits[0].text)).toEqual(['c'])
  })
  test('fixes that meet no earlier one: whole fixes, never half of one', () => {
    const findings = [
      { fixes: [fix(true, edit(0, 5, 'a'))] },
      { fixes: [fix(true, edit(3, 8, 'b'), edit(20, 21, 'b'))] },
      { fixes: [fix(true, edit(20, 22, 'c'))] },
    ]
    expect(chooseSafeFixes(findings).map(({ fix }) => fix.edits[0].text)).toEqual(['a', 'c'])
  })
  test('never two whose edits overlap, whatever the findings', () => {
    const edits = fc
      .tuple(fc.nat(30), fc.nat(6), fc.string({ maxLength: 2 }))
      .map(([at, size, text]) => edit(at, at + size, text))
    const disjoint = fc
      .array(edits, { minLength: 1, maxLength: 2 })
      .filter(([e, f]) => !f || e.at[1] < f.at[0])
    fc.assert(
      fc.property(fc.array(disjoint, { maxLength: 8 }), all => {
        const chosen = chooseSafeFixes(all.map(edits => ({ fixes: [fix(true, ...edits)] })))
        if (all.length > 0) expect(chosen.length).toBeGreaterThan(0)
        expect(() =>
          applyFixes(
            'x'.repeat(40),
            chosen.flatMap(({ fix }) => fix.edits),
          ),
        ).not.toThrow()
      }),
    )
  })
})
