/** Which fixes may be applied together, and the applying of edits. */
import type { Fix, TextEdit } from '../format/model.ts'
import { applyEdits } from '../format/edits.ts'
import { lineBreak } from '../format/text.ts'

interface Fixable {
  readonly fixes?: readonly Fix[]
}

export interface ChosenFix<F extends Fixable> {
  readonly finding: F
  readonly fix: Fix
}

/**
 * The first safe fix of each finding, in order. A fix whose edits meet those of an earlier one is left out whole: it
 * comes again, if it is still needed, when the changed text is checked.
 */
export function chooseSafeFixes<F extends Fixable>(findings: readonly F[]): ChosenFix<F>[] {
  const chosen: ChosenFix<F>[] = []
  const taken: TextEdit[] = []
  for (const finding of findings) {
    const fix = finding.fixes?.find(({ safe, edits }) => safe && edits.length > 0)
    if (!fix || fix.edits.some(edit => taken.some(other => meet(edit, other)))) continue
    chosen.push({ finding, fix })
    taken.push(...fix.edits)
  }
  return chosen
}

/** Edits that touch count as meeting: what one of them deletes may be what the other leans on. */
const meet = (e: TextEdit, f: TextEdit): boolean => e.at[0] <= f.at[1] && f.at[0] <= e.at[1]

/** The text after the edits of fixes. New lines end as those of the text do. */
export function applyFixes(text: string, edits: readonly TextEdit[]): string {
  const newline = lineBreak(text)
  return applyEdits(
    text,
    edits.map(({ at, text: added }) => ({ at, text: added.replace(/\r?\n/g, newline) })),
  )
}
