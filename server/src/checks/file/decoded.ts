import type { Check, Finding } from '../check.ts'

/** A rule whose findings the decoder has made while it read the document. */
export function decodedRule(rule: Omit<Check, 'run' | 'severity'>): Check {
  return {
    ...rule,
    severity: 'error',
    *run({ document }): Iterable<Finding> {
      for (const problem of document.problems) if (problem.rule === rule.id) yield problem
    },
  }
}
