import { describe, expect, test } from 'vitest'
import { Refusal } from '../../../server/src/cli/io.ts'
import { type OptionSpec, ordinal, readOptions } from '../../../server/src/cli/options.ts'

const SPECS: OptionSpec[] = [
  { name: 'fix', help: '' },
  { name: 'format', value: 'FORMAT', choices: ['text', 'json'], help: '' },
  { name: 'at', value: 'K', repeatable: true, help: '' },
  { name: 'output', short: 'o', value: 'FILE', help: '' },
  { name: 'document', value: 'N', help: '' },
]
const refused = (...args: string[]) => {
  try {
    readOptions(args, SPECS)
  } catch (error) {
    expect(error).toBeInstanceOf(Refusal)
    return (error as Error).message
  }
  throw new Error('was accepted')
}

test('options, operands and their order', () => {
  const given = readOptions(
    ['a', '--fix', '-o', 'out', '--at', '-1/2,0,0', '--at=1,2,3', '-', '--', '--fix'],
    SPECS,
  )
  expect(given.operands).toEqual(['a', '-', '--fix'])
  expect(given.has('fix')).toBe(true)
  expect(given.value('output')).toBe('out')
  expect(given.values('at')).toEqual(['-1/2,0,0', '1,2,3'])
  expect(given.value('format')).toBeUndefined()
})

describe('refused in one line', () => {
  test.each([
    [['--formt', 'json'], /unknown option --formt; did you mean --format\?/],
    [['--quux'], /^unknown option --quux$/],
    [['-x'], /unknown option -x/],
    [['--format'], /needs a value/],
    [['--format', 'jso'], /did you mean json\?/],
    [['--format='], /needs a value/],
    [['--fix=yes'], /takes no value/],
    [['-o', 'a', '-o', 'b'], /given twice/],
  ])('%j', (args, message) => {
    expect(refused(...args)).toMatch(message)
    expect(refused(...args)).not.toContain('\n')
  })
})

test.each(['0', '-1', '1.5', 'two', '1e3', '9999999999'])('%s is no ordinal', text => {
  expect(() => ordinal(readOptions(['--document', text], SPECS), 'document')).toThrow(Refusal)
})
test('an ordinal', () => expect(ordinal(readOptions(['--document', '12'], SPECS), 'document')).toBe(12))
