/** What could not be looked at in a file, and why: the silence of a rule is no praise then. */
import type { DocumentAnalysis, Snapshot } from '../analysis.ts'

/** Not told where a finding of the document says what is wrong with it. */
export function limitsOf(
  { findings }: Snapshot,
  { document: { number }, crystal }: DocumentAnalysis,
): string[] {
  const outcome = crystal.lattice && crystal.symmetryOutcome
  if (outcome?.state !== 'failed') return []
  if (findings.some(({ document, severity }) => document === number && severity === 'error')) return []
  return [`nothing that needs the symmetry was checked: ${outcome.reason}`]
}
