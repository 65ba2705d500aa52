import { type Diagnostic, DiagnosticSeverity, type Range } from 'vscode-languageserver-types'
import type { DocumentFinding, Snapshot } from '../analysis.ts'
import type { Severity, Span } from '../format/model.ts'

export const SOURCE = 'braggline'

const SEVERITY: Record<Severity, DiagnosticSeverity> = {
  error: DiagnosticSeverity.Error,
  warning: DiagnosticSeverity.Warning,
  info: DiagnosticSeverity.Information,
}

/** @param rulePages URI of the folder with the pages of the rules, without a slash at its end; none: no links. */
export function diagnostics(snapshot: Snapshot, uri: string, rulePages?: string): Diagnostic[] {
  return snapshot.findings.map(finding => toDiagnostic(snapshot, uri, finding, rulePages))
}

function toDiagnostic(
  snapshot: Snapshot,
  uri: string,
  finding: DocumentFinding,
  rulePages?: string,
): Diagnostic {
  const diagnostic: Diagnostic = {
    range: lineRange(snapshot, finding.at),
    severity: SEVERITY[finding.severity],
    source: SOURCE,
    code: finding.rule,
    message: finding.message,
  }
  if (rulePages) diagnostic.codeDescription = { href: `${rulePages}/${finding.rule}.md` }
  if (finding.related?.length)
    diagnostic.relatedInformation = finding.related.map(({ at, message }) => ({
      location: { uri, range: rangeOf(snapshot, at) },
      message,
    }))
  return diagnostic
}

export const rangeOf = (snapshot: Snapshot, [start, end]: Span): Range => ({
  start: snapshot.positionOf(start),
  end: snapshot.positionOf(end),
})

/** A squiggle never runs over more than one line: it ends with the first one. */
function lineRange(snapshot: Snapshot, at: Span): Range {
  const range = rangeOf(snapshot, at)
  if (range.end.line === range.start.line) return range
  const newline = snapshot.text.indexOf('\n', at[0])
  const end = snapshot.text[newline - 1] === '\r' ? newline - 1 : newline
  return { start: range.start, end: snapshot.positionOf(Math.max(end, at[0])) }
}
