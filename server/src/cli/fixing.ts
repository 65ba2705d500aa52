/** Applying safe fixes to a text until none is left. */
import type { DocumentFinding, Snapshot } from '../analysis.ts'
import { tally } from '../exchange/findings-json.ts'
import { Positions } from '../exchange/positions.ts'
import { applyFixes, type ChosenFix, chooseSafeFixes } from '../exchange/safe-fixes.ts'
import type { Engine } from './engine.ts'

/** Fixes that wait for one another are done after a few rounds: what goes on longer goes in a circle. */
const MOST_ROUNDS = 20

export interface Change {
  /** In the text as it stood when the fix was applied. */
  readonly line: number
  readonly column: number
  readonly title: string
  readonly rule: string
}

export interface Fixed {
  readonly snapshot: Snapshot
  readonly changes: readonly Change[]
}

/**
 * Apply every safe fix, check again, and so on. A fix that makes an error where there was none is taken back.
 * @param only the document whose findings count; undefined for all.
 */
export async function fixAll(engine: Engine, before: Snapshot, only?: number): Promise<Fixed> {
  let snapshot = before
  const changes: Change[] = []
  const seen = new Set([before.text])
  for (let round = 0; round < MOST_ROUNDS; round++) {
    const chosen = chooseSafeFixes(
      snapshot.findings.filter(({ document }) => only === undefined || document === only),
    )
    const step = await apply(engine, snapshot, chosen)
    if (!step || seen.has(step.snapshot.text)) break
    seen.add(step.snapshot.text)
    changes.push(...step.applied.map(choice => changeOf(snapshot, choice)))
    snapshot = step.snapshot
  }
  return { snapshot, changes }
}

interface Step {
  readonly snapshot: Snapshot
  readonly applied: readonly ChosenFix<DocumentFinding>[]
}

/** All fixes at once where that does no harm, else the first one alone that does none. */
async function apply(
  engine: Engine,
  snapshot: Snapshot,
  chosen: readonly ChosenFix<DocumentFinding>[],
): Promise<Step | undefined> {
  for (const applied of chosen.length > 1 ? [chosen, ...chosen.map(choice => [choice])] : [chosen]) {
    if (applied.length === 0) return undefined
    const edits = applied.flatMap(({ fix }) => fix.edits)
    const after = await engine.check(applyFixes(snapshot.text, edits))
    if (tally(after.findings).errors <= tally(snapshot.findings).errors) return { snapshot: after, applied }
  }
  return undefined
}

function changeOf(snapshot: Snapshot, { finding, fix }: ChosenFix<DocumentFinding>): Change {
  return { ...new Positions(snapshot).at(finding.at[0]), title: fix.title, rule: finding.rule }
}
