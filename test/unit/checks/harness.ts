/**
 * Tests of rules are texts. The one place of the tests that knows how findings are obtained.
 */
import { expect } from 'vitest'
import { type DocumentFinding, Snapshot } from '../../../server/src/analysis.ts'
import { applyEdits } from '../../../server/src/format/edits.ts'
import type { Fix } from '../../../server/src/format/model.ts'
import { Workshop } from '../../../server/src/meaning/workshop.ts'
import { loadSymmetryFromDisk } from '../../../server/src/symmetry-node.ts'
import { directSymmetry } from '../../../server/src/symmetry-service.ts'

loadSymmetryFromDisk()
const workshop = new Workshop(directSymmetry)

export const snapshotOf = (text: string): Snapshot => new Snapshot(text, workshop)

/** All findings of a text, in its order. */
export const findingsOf = (text: string): readonly DocumentFinding[] => snapshotOf(text).findings

/**
 * Compare all findings of a text with those that the fixture itself states, in comments under the lines:
 *
 *     points: {Q: [0.75, 0, 0]}
 *     #           ^^^^^^^^^^^^ warning point-outside-zone: message
 *
 * The carets cover the finding as far as its first line goes; in column 0 the `#` stands for the first caret. All
 * findings must be there and no others, so every test also guards against false alarms.
 */
export function check(fixture: string): void {
  const text = fixture
    .split('\n')
    .filter(line => !EXPECTATION.test(line))
    .join('\n')
  expect(annotate(text)).toBe(fixture)
}
const EXPECTATION = /^#\s*\^/

/** The text with a comment under each line for each finding that begins there. */
export function annotate(text: string): string {
  const snapshot = snapshotOf(text)
  const lines = text.split('\n')
  const under: string[][] = lines.map(() => [])
  for (const { at, severity, rule, message } of snapshot.findings) {
    const { line, character } = snapshot.positionOf(at[0])
    const width = Math.min(at[1] - at[0], lines[line].length - character)
    const carets = '^'.repeat(Math.max(1, character === 0 ? width - 1 : width))
    under[line].push(`#${' '.repeat(Math.max(0, character - 1))}${carets} ${severity} ${rule}: ${message}`)
  }
  return lines.flatMap((line, i) => [line, ...under[i]]).join('\n')
}

export interface FixChoice {
  /** Title of the fix, where the finding has several or several findings stand there. */
  readonly title?: string
  /** The rule, where several findings stand there. */
  readonly rule?: string
  /** What the fix must say of itself. */
  readonly safe?: boolean
}

/**
 * Apply the fix of the finding at `$0` (the narrowest that covers it), compare the whole text, and see that the
 * finding is gone.
 */
export function checkFix(before: string, after: string, choice: FixChoice = {}): void {
  const offset = before.indexOf('$0')
  if (offset < 0) throw new Error('The text has no $0.')
  const text = before.replace('$0', '')
  const findings = findingsOf(text)
  const { finding, fix } = fixAt(findings, offset, choice)
  expect(applyEdits(text, fix.edits)).toBe(after)
  if (choice.safe !== undefined) expect(fix.safe).toBe(choice.safe)
  const ofRule = (all: readonly DocumentFinding[]) => all.filter(({ rule }) => rule === finding.rule).length
  expect(ofRule(findingsOf(after)), `findings of ${finding.rule} that are left`).toBeLessThan(
    ofRule(findings),
  )
}

function fixAt(findings: readonly DocumentFinding[], offset: number, { title, rule }: FixChoice) {
  const offers = findings
    .filter(
      finding =>
        finding.at[0] <= offset && offset <= finding.at[1] && (rule === undefined || finding.rule === rule),
    )
    .sort((f, g) => f.at[1] - f.at[0] - (g.at[1] - g.at[0]))
    .flatMap(finding => (finding.fixes ?? []).map(fix => ({ finding, fix })))
  const offer = offers.find(({ fix }) => title === undefined || fix.title === title)
  if (offer) return offer
  const there = findings.map(
    f => `${f.rule} at ${f.at.join('–')}: ${(f.fixes ?? []).map(fix => fix.title).join(' / ')}`,
  )
  throw new Error(`No such fix at ${offset}. Findings:\n${there.join('\n')}`)
}

/** The fixes that a finding of this rule offers in the text. */
export const fixesOf = (text: string, rule: string): readonly Fix[] =>
  findingsOf(text).flatMap(finding => (finding.rule === rule ? (finding.fixes ?? []) : []))

export { applyEdits }
