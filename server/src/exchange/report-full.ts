/** The report with what only pages for people show: each finding, and what the figure of the zone is drawn from. */
import type { DocumentAnalysis, Snapshot } from '../analysis.ts'
import type { Scene } from '../protocol.ts'
import { type FindingJson, findingsJson } from './findings-json.ts'
import { limitsOf } from './limits.ts'
import { type Report, reportOf } from './report.ts'
import { sceneOf } from './scene.ts'

export interface FullReport {
  readonly report: Report
  readonly findings: readonly FindingJson[]
  /** What could not be looked at, and why. */
  readonly limits: readonly string[]
  /** Absent where the document has no zone. */
  readonly scene?: Scene
}

/** @param file the name as it was asked for. */
export function fullReport(file: string, snapshot: Snapshot, analysis: DocumentAnalysis): FullReport {
  const { number } = analysis.document
  const findings = snapshot.findings.filter(({ document }) => document === number)
  return {
    report: reportOf(file, analysis, findings),
    findings: findingsJson({ file, snapshot, findings }),
    limits: limitsOf(snapshot, analysis),
    scene: sceneOf(snapshot, number - 1),
  }
}
