import { expect, test } from 'vitest'
import { evaluate } from '../../../server/src/format/numbers.ts'
import type { NumberValue } from '../../../server/src/format/model.ts'
import { isRoundingOf } from '../../../server/src/meaning/rounding.ts'
import { generatedFile } from '../../bench/generate.ts'
import { findingsOf } from '../checks/harness.ts'

function numberOf(text: string): NumberValue {
  const read = evaluate(text)
  if (!('number' in read)) throw new Error(text)
  return { ...read.number, at: [0, text.length], text }
}

test.each([
  ['0.33', 1 / 3, true],
  ['0.667', 2 / 3, true],
  ['0.666', 2 / 3, true],
  ['-0.333', -1 / 3, true],
  ['0.25', 1 / 4, true],
  ['0.00', 0, true],
  ['0.3', 1 / 3, false],
  ['0.34', 1 / 3, false],
  ['0.0625', 0, false],
  ['-0.1', 0, false],
  ['0.668', 2 / 3, false],
  ['1/3', 1 / 3, false],
])('%s as a rounding of %d: %s', (text, exact, expected) => {
  expect(isRoundingOf(numberOf(text), exact)).toBe(expected)
})

test.each([40, 400, 4000])(
  'in a cell whose zone is tiny, points of its inside stay what they are: %d lines',
  lines => {
    const loud = findingsOf(generatedFile(lines)).filter(({ severity }) => severity !== 'info')
    expect(loud.map(({ rule, message }) => `${rule}: ${message}`)).toEqual([])
  },
)
