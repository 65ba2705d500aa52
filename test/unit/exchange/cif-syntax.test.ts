/** CIF 1.1 and 2.0 as texts: International Tables for Crystallography, vol. G, ch. 2.2; Bernstein et al. (2016). */
import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { numberOf, parseCif } from '../../../server/src/exchange/cif/syntax.ts'

const only = (text: string) => {
  const { blocks, faults } = parseCif(text)
  expect(faults).toEqual([])
  expect(blocks.length).toBe(1)
  return blocks[0]
}
const values = (text: string, name = '_a') =>
  only(`data_x\n${text}`)
    .items.get(name)
    ?.values.map(({ kind, text }) => `${kind} ${text}`)
const faultsOf = (text: string) => {
  const { blocks, faults } = parseCif(text)
  return [...faults, ...blocks.flatMap(block => block.faults)].map(
    ({ line, column, message }) => `${line}:${column} ${message}`,
  )
}

describe('values', () => {
  test.each([
    ['_a 1.2(3)', ['bare 1.2(3)']],
    ['_a ?', ['unknown ?']],
    ['_a .', ['inapplicable .']],
    ["_a '?'", ['quoted ?']],
    // A quote ends the string only where a blank follows.
    ["_a 'a dog's life'", ["quoted a dog's life"]],
    ['_a "O" # not a comment inside', ['quoted O']],
    ['_a x#y', ['bare x#y']],
    ['_a\n;line one\nline; two\n;\n', ['quoted line one\nline; two']],
    // A semicolon that does not begin a line is a character like others.
    ['_a ;x', ['bare ;x']],
    ['loop_ _a _b 1 2 3 4', ['bare 1', 'bare 3']],
    ['loop_\n_A\n1\n;2\n;\n\'3\' "4"', ['bare 1', 'quoted 2', 'quoted 3', 'quoted 4']],
    // Folded lines: a backslash at the end of a line takes the line break away.
    ['_a\n;\\\nlong \\\nline\n;', ['quoted long line']],
    ['_a data', ['bare data']],
  ])('%j', (text, expected) => {
    expect(values(text)).toEqual(expected)
    expect(values(text.replaceAll('\n', '\r\n'))?.join('').replaceAll('\r', '')).toBe(expected.join(''))
  })

  test('names are of any case, with a point for the first underscore of a category', () => {
    expect([...only('data_x _Cell_Length_A 1 _cell.length_b 2').items.keys()]).toEqual([
      '_cell_length_a',
      '_cell_length_b',
    ])
  })

  test('a mark at the start of the file is no part of it', () => {
    expect(only('\ufeffdata_x _a 1').items.get('_a')?.values[0]).toMatchObject({ line: 1 })
  })

  test('places count lines and characters from 1', () => {
    const { items } = only("data_x\r\n_a '𝒳' \r_b\t2\n")
    expect(items.get('_a')?.values[0]).toMatchObject({ line: 2, column: 4 })
    expect(items.get('_b')).toMatchObject({ line: 3, column: 1 })
    expect(only('data_x _𝒳 1').items.get('_𝒳')?.values[0]).toMatchObject({ line: 1, column: 11 })
  })

  test('blocks in turn; save frames belong to none', () => {
    const { blocks } = parseCif('data_one _a 1\nsave_f _a 2 save_\n_b 3\ndata_two _a 4')
    expect(blocks.map(({ name, items }) => [name, [...items.keys()]])).toEqual([
      ['one', ['_a', '_b']],
      ['two', ['_a']],
    ])
  })
})

describe('CIF 2.0', () => {
  const two = (text: string) => {
    const block = parseCif(`#\\#CIF_2.0\ndata_x\n${text}`).blocks[0]
    expect(block.faults).toEqual([])
    return block.items.get('_a')?.values.map(({ kind, text }) => `${kind} ${text}`)
  }
  test.each([
    ["_a '''it's\nlong'''", ["quoted it's\nlong"]],
    ['_a [1 [2 3] "]"]', ['compound 1 [2 3] "]"']],
    ["_a {'k':1}", ["compound 'k':1"]],
    ['_a\n;> \\\\\n> pre\\\n> fix\n;', ['quoted prefix']],
  ])('%j', (text, expected) => expect(two(text)).toEqual(expected))
})

describe('faults', () => {
  test.each([
    ["data_x\n_a 'open\n_b 1", "2:4 the string that begins here is not closed by ' on its line"],
    [
      'data_x\n_a\n;open\n',
      '3:1 the text field that begins here is never closed by a line that begins with ;',
    ],
    ['data_x\n_a _b 1', '2:1 _a has no value'],
    ['data_x\n_a 1 2', '2:6 the value 2 belongs to no data name'],
    ['data_x\n_a 1\n_A 2', '3:1 _A is there already, on line 2'],
    ['data_x loop_ 1 2', '1:8 a loop without data names'],
    ['data_x loop_ _a _b', '1:8 a loop without values'],
    ['_a 1', '1:1 _a stands before the first data block'],
    ['data_x stop_', '1:8 stop_ is a reserved word that means nothing in a CIF'],
    [
      'data_x\nloop_ _a _b\n1 2\n3\n_c 4',
      '5:1 the loop of _a (line 2) has 2 data names and 3 values: the last row lacks 1',
    ],
  ])('%j', (text, expected) => expect(faultsOf(text)[0]).toBe(expected))

  test('a fault counts for the block that it stands in', () => {
    const { blocks } = parseCif("data_one _a 1\ndata_two 'open\n")
    expect(blocks.map(({ faults }) => faults.length > 0)).toEqual([false, true])
  })
})

describe('numbers', () => {
  const read = (text: string) => numberOf({ kind: 'bare', text, line: 1, column: 1 })
  test.each([
    ['5.6402(3)', 5.6402, 0.0003, 4],
    ['-.5', -0.5, undefined, 1],
    ['12', 12, undefined, 0],
    ['90.(2)', 90, 2, 0],
    ['1.5e-2(1)', 0.015, 0.001, 3],
    ['+3', 3, undefined, 0],
  ])('%s', (text, value, uncertainty, decimals) => {
    const found = read(text)
    expect(found?.value).toBe(value)
    expect(found?.decimals).toBe(decimals)
    if (uncertainty === undefined) expect(found?.uncertainty).toBeUndefined()
    else expect(found?.uncertainty).toBeCloseTo(uncertainty, 12)
  })
  test.each(['', '.', '1.2.3', 'x', '1(2', '0x10', 'NaN', '1e999', '1/3'])('%j is none', text =>
    expect(read(text)).toBeUndefined(),
  )
})

test('whatever was written as a value is read back', () => {
  const bare = fc
    .stringMatching(/^[A-Za-z0-9+-][A-Za-z0-9.+()-]{0,8}$/)
    .filter(s => !/^(data_|save_)|^(loop|stop|global)_$/i.test(s))
  const quoted = fc.stringMatching(/^[ -~]{0,12}$/).filter(s => !/'[ \t]/.test(s) && !s.endsWith("'"))
  const field = fc
    .stringMatching(/^[ -~\n]{0,20}$/)
    .filter(s => !/\n;/.test(s) && !/^[^\\]*\\+[ \t]*(\n|$)/.test(s))
  const value = fc.oneof(
    bare.map(s => [s, s] as const),
    quoted.map(s => [`'${s}'`, s] as const),
    field.map(s => [`\n;${s}\n;\n`, s] as const),
  )
  fc.assert(
    fc.property(fc.array(value, { minLength: 1, maxLength: 12 }), list => {
      const block = only(`data_x loop_ _a ${list.map(([written]) => written).join(' ')}`)
      expect(block.faults).toEqual([])
      expect(block.items.get('_a')?.values.map(({ text }) => text)).toEqual(list.map(([, meant]) => meant))
    }),
  )
})
