import type { Allowance, DecodedFile, Severity } from '../format/model.ts'
import type { Check, Context, Reported } from './check.ts'

/** Severities that a workspace or a file asks for, by rule id. */
export type Severities = ReadonlyMap<string, Severity | 'off'>

/**
 * Run all rules over one document. A rule that throws becomes one finding under `check-failed` and the others go on.
 * The file's own `checks:` wins over the workspace's severities.
 */
export function runChecks(
  checks: readonly Check[],
  subject: Omit<Context, 'ruleIds'>,
  workspace: Severities,
): Reported[] {
  const context = { ...subject, ruleIds: new Set(checks.map(check => check.id)) }
  const judge = hasAliases(subject) ? judged : (finding: Reported) => finding
  const found = checks.flatMap(check => findingsOf(check, context).map(judge))
  const hidden = new Set(
    found.flatMap(finding => (finding.hides ?? []).map(({ rule, subject }) => `${rule}/${subject}`)),
  )
  const reported: Reported[] = []
  for (const finding of found) {
    if (finding.subject !== undefined && hidden.has(`${finding.rule}/${finding.subject}`)) continue
    const asked = context.document.checks.get(finding.rule)?.value ?? workspace.get(finding.rule)
    if (asked === 'off') continue
    reported.push(asked ? { ...finding, severity: asked } : finding)
  }
  return reported
}

/** An alias repeats what stands at its anchor: an edit there changes both places, whatever the rule knows of one. */
const hasAliases = ({ text, document }: Omit<Context, 'ruleIds'>): boolean => {
  const own = text.slice(...document.at)
  return ANCHOR.test(own) && ALIAS.test(own)
}
const ANCHOR = /(?:^|[\s[{,:-])&[^\s[\]{},]/
const ALIAS = /(?:^|[\s[{,:-])\*[^\s[\]{},]/

const judged = (finding: Reported): Reported =>
  finding.fixes ? { ...finding, fixes: finding.fixes.map(fix => ({ ...fix, safe: false })) } : finding

function findingsOf(check: Check, context: Context): Reported[] {
  if (check.needs?.some(key => context.document.unread.has(key))) return []
  try {
    return [...check.run(context)].map(finding => ({ severity: check.severity, ...finding, rule: check.id }))
  } catch (error) {
    return [checkFailed(check.id, context, error)]
  }
}

function checkFailed(id: string, { document }: Context, error: unknown): Reported {
  const reason = error instanceof Error ? error.message : String(error)
  const at = document.lattice?.key ?? ([document.at[0], document.at[0]] as const)
  return {
    rule: 'check-failed',
    severity: 'info',
    at,
    message: `The rule ${id} could not be computed for this file (${reason}). This is a fault of Braggline: please report it with the file.`,
  }
}

/** Leave out what an `# braggline: allow` comment silences. `lineOf` gives the 0-based line of an offset. */
export function withoutAllowed(
  findings: readonly Reported[],
  { allowances }: DecodedFile,
  lineOf: (offset: number) => number,
): Reported[] {
  if (allowances.length === 0) return [...findings]
  const silenced = byLine(allowances)
  return findings.filter(finding => !silenced.get(lineOf(finding.at[0]))?.has(finding.rule))
}

function byLine(allowances: readonly Allowance[]): Map<number, Set<string>> {
  const silenced = new Map<number, Set<string>>()
  for (const { line, rules } of allowances) {
    const set = silenced.get(line) ?? new Set()
    for (const rule of rules) set.add(rule.value)
    silenced.set(line, set)
  }
  return silenced
}
