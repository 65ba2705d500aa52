import type { Finding } from '../check.ts'

/** More findings of one rule than this are not read. */
const MOST = 100

/** The first findings; the last of them says how many more there are. */
export function few<F>(findings: readonly Finding<F>[]): readonly Finding<F>[] {
  if (findings.length <= MOST) return findings
  const last = findings[MOST - 1]
  return [
    ...findings.slice(0, MOST - 1),
    { ...last, message: `${last.message} There are ${findings.length - MOST} more like it.` },
  ]
}
