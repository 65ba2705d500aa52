/** What holds of every rule: its examples are its first tests. */
import { describe, expect, test } from 'vitest'
import { CHECKS } from '../../../server/src/checks/index.ts'
import { annotate, findingsOf } from './harness.ts'

describe.each(CHECKS)('$id', rule => {
  test('the wrong example gives this finding and no other', () => {
    expect(
      findingsOf(rule.wrong).map(finding => finding.rule),
      annotate(rule.wrong),
    ).toEqual([rule.id])
  })
  test('the right example is clean', () => expect(annotate(rule.right)).toBe(rule.right))
  test('its summary is one sentence', () => expect(rule.summary).toMatch(/^[A-Z0-9][^.]*(\.\d[^.]*)*\.$/))
  test('it says why, in sentences', () => expect(rule.why).toMatch(/^[A-Z0-9].*\.$/s))
  test('its messages are sentences of one line', () => {
    for (const { message } of findingsOf(rule.wrong)) expect(message).toMatch(/^\S[^\n]*[.?]$/)
  })
})

test('ids are unique and in small letters', () => {
  const ids = CHECKS.map(rule => rule.id)
  expect(new Set(ids).size).toBe(ids.length)
  for (const id of ids) expect(id).toMatch(/^[a-z]+(-[a-z]+)*$/)
})
