/** Tests of the decoder are texts that state the problems themselves, in comments under the lines. */
import { expect } from 'vitest'
import { decode } from '../../../server/src/format/decode.ts'
import { applyEdits } from '../../../server/src/format/edits.ts'
import type { LatticeDocument, Problem } from '../../../server/src/format/model.ts'

/** All problems of a text, in its order. */
export function problemsOf(text: string): readonly Problem[] {
  const { documents, problems } = decode(text)
  return [...problems, ...documents.flatMap(document => document.problems)].sort((a, b) => a.at[0] - b.at[0])
}

/**
 * Compare the problems of a text with those that the fixture states:
 *
 *     unit: nn
 *     #     ^^ unit-unknown: message
 *
 * The carets cover the problem as far as its first line goes; in column 0 the `#` stands for the first caret. All
 * problems must be there and no others.
 */
export function check(fixture: string): void {
  const text = fixture
    .split('\n')
    .filter(line => !/^#\s*\^/.test(line))
    .join('\n')
  expect(annotate(text)).toBe(fixture)
}

export function annotate(text: string): string {
  const lines = text.split('\n')
  const under: string[][] = lines.map(() => [])
  for (const { at, rule, message } of problemsOf(text)) {
    const before = text.slice(0, at[0]).split('\n')
    const line = before.length - 1
    const column = before[line].length
    const width = Math.min(at[1] - at[0], lines[line].length - column)
    const carets = '^'.repeat(Math.max(1, column === 0 ? width - 1 : width))
    under[line].push(`#${' '.repeat(Math.max(0, column - 1))}${carets} ${rule}: ${message}`)
  }
  return lines.flatMap((line, i) => [line, ...under[i]]).join('\n')
}

/** Apply the only fix of the problem at `$0`, or the one of that title, compare the text, and see the problem gone. */
export function checkFix(before: string, after: string, title?: string): void {
  const offset = before.indexOf('$0')
  const text = before.replace('$0', '')
  const problem = problemsOf(text).find(({ at, fixes }) => at[0] <= offset && offset <= at[1] && fixes)
  const fix = problem?.fixes?.find(fix => title === undefined || fix.title === title)
  expect(fix, annotate(text)).toBeDefined()
  expect(applyEdits(text, fix!.edits)).toBe(after)
  expect(problemsOf(after).filter(({ message }) => message === problem!.message)).toEqual([])
}

/** The only document of a text without problems. */
export function documentOf(text: string): LatticeDocument {
  expect(annotate(text)).toBe(text)
  const { documents } = decode(text)
  expect(documents.length).toBe(1)
  return documents[0]
}
