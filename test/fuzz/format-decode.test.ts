/** Reading never fails, and what it gives is well formed, whatever the text. */
import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { decode, decodeWhole } from '../../server/src/format/decode.ts'
import { applyEdits } from '../../server/src/format/edits.ts'
import type { DecodedFile, Problem, Span } from '../../server/src/format/model.ts'
import { findRuns } from '../../server/src/format/rows.ts'
import { shuffled, spiced, spicy, spoiled } from './format-samples.ts'

const RUNS = Number(process.env.FUZZ_RUNS ?? 250)

/** All spans in a value, by the path of their names. */
function* spansOf(value: unknown, name = ''): Generator<{ name: string; span: Span }> {
  if (value === null || typeof value !== 'object') return
  if (value instanceof Map) {
    for (const [key, inner] of value) yield* spansOf(inner, `${name}.${key}`)
  } else if (Array.isArray(value)) {
    for (const [i, inner] of value.entries()) yield* spansOf(inner, `${name}[${i}]`)
  } else {
    for (const [key, inner] of Object.entries(value)) {
      if (SPAN_NAMES.has(key) && Array.isArray(inner) && typeof inner[0] === 'number')
        yield { name: `${name}.${key}`, span: inner as unknown as Span }
      else yield* spansOf(inner, `${name}.${key}`)
    }
  }
}
const SPAN_NAMES = new Set(['at', 'key', 'item', 'separator', 'contents'])

const RULES = new Set([
  'yaml-syntax',
  'key-unknown',
  'key-missing',
  'key-repeated',
  'value-type',
  'number-malformed',
  'unit-unknown',
  'element-unknown',
])

function validate(text: string, file: DecodedFile): void {
  for (const { name, span } of spansOf(file)) {
    const [start, end] = span
    expect(
      Number.isInteger(start) && Number.isInteger(end) && start >= 0 && end >= start && end <= text.length,
      `${name} ${span} in ${JSON.stringify(text)}`,
    ).toBe(true)
  }
  for (const problem of allProblems(file)) {
    expect(RULES).toContain(problem.rule)
    expect(problem.message, problem.message).toMatch(/^\S[^\n]*[.?]$/)
    for (const fix of problem.fixes ?? []) expect(fix.title).toMatch(/^[A-Z]/)
  }
  // Every place is in exactly one document.
  let from = 0
  for (const { at } of file.documents) {
    expect(at[0]).toBe(from)
    from = at[1]
  }
  if (file.documents.length > 0) expect(from).toBe(text.length)
  for (const [i, { number }] of file.documents.entries()) expect(number).toBe(i + 1)
  const lines = text.split('\n').length
  for (const { line, rules } of file.allowances) {
    expect(line).toBeLessThanOrEqual(lines)
    for (const { value, at } of rules) expect(text.slice(...at)).toBe(value)
  }
}

const allProblems = (file: DecodedFile): readonly Problem[] => [
  ...file.problems,
  ...file.documents.flatMap(document => document.problems),
]

/** JSON shows maps as pairs, so that two files can be compared as a whole. */
const asJson = (file: DecodedFile): string =>
  JSON.stringify(file, (_key, value) => (value instanceof Map ? [...value] : value))

describe.each([
  ['samples with stretches replaced', spoiled],
  ['lines of samples in any order', shuffled],
  ['signs of the format alone', spicy],
  ['any text', fc.string({ unit: 'binary', maxLength: 60 })],
])('%s', (_name, texts) => {
  test('gives a well-formed file', () => {
    fc.assert(
      fc.property(texts, text => validate(text, decode(text))),
      { numRuns: RUNS },
    )
  })
  test('the short way for lists of atoms agrees with the long one', () => {
    fc.assert(
      fc.property(texts, text => {
        expect(asJson(decode(text))).toBe(asJson(decodeWhole(text)))
      }),
      { numRuns: RUNS },
    )
  })
})

test('the short way agrees with the long one on long lists, whatever stands in and around them', () => {
  let cut = 0
  let kept = 0
  fc.assert(
    fc.property(spiced, text => {
      const short = decode(text)
      expect(asJson(short)).toBe(asJson(decodeWhole(text)))
      if (findRuns(text).length === 0) return
      cut++
      if (short.documents.some(({ atoms }) => (atoms?.items.length ?? 0) > 8)) kept++
    }),
    { numRuns: 2 * RUNS },
  )
  expect(cut).toBeGreaterThan(RUNS / 2)
  expect(kept).toBeGreaterThan(RUNS / 8)
})

test('a fix can be applied, and breaks nothing that was not broken', () => {
  let applied = 0
  fc.assert(
    fc.property(fc.oneof(spoiled, shuffled, spiced), text => {
      for (const { fixes = [] } of allProblems(decode(text))) {
        for (const { edits } of fixes) {
          const after = allProblems(decode(applyEdits(text, edits)))
          if (allProblems(decode(text)).every(({ rule }) => rule !== 'yaml-syntax'))
            expect(
              after.filter(({ rule }) => rule === 'yaml-syntax'),
              `${text}\n⇒\n${applyEdits(text, edits)}`,
            ).toEqual([])
          applied++
        }
      }
    }),
    { numRuns: 2 * RUNS },
  )
  expect(applied).toBeGreaterThan(RUNS / 3)
})
