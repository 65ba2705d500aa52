import { expect, test } from 'vitest'
import { SAMPLE } from '../../../client/src/sample.ts'
import { checked } from '../exchange/support.ts'

const serious = (text: string) => checked(text).findings.filter(({ severity }) => severity !== 'info')

test('the sample of the walkthrough has one mistake, and a fix for it', () => {
  const [finding, ...others] = serious(SAMPLE)
  expect(others).toEqual([])
  expect(finding.rule).toBe('path-label-unknown')
  expect(finding.fixes!.map(({ edits }) => edits.map(({ text }) => text))).toContainEqual(['W'])
  expect(serious(SAMPLE.replace('Ww', 'W'))).toEqual([])
})
