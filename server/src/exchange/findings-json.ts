/** Findings as JSON: for scripts, and one a line for streams. The shape is published in schema/finding.json. */
import type { DocumentFinding, Snapshot } from '../analysis.ts'
import type { Severity } from '../format/model.ts'
import { Positions, type Region } from './positions.ts'

export interface FindingJson extends Region {
  readonly file: string
  readonly document: number
  readonly rule: string
  readonly severity: Severity
  readonly message: string
  /** Titles of the fixes on offer. */
  readonly fixes: readonly string[]
  readonly related: readonly { readonly message: string; readonly line: number; readonly column: number }[]
}

export interface Tally {
  readonly errors: number
  readonly warnings: number
  readonly infos: number
}

export interface CheckJson extends Tally {
  readonly findings: readonly FindingJson[]
  readonly files: number
}

/** What was found in one file. */
export interface CheckedFile {
  /** The name as it was asked for. */
  readonly file: string
  readonly snapshot: Snapshot
  readonly findings: readonly DocumentFinding[]
}

export const findingsJson = ({ file, snapshot, findings }: CheckedFile): FindingJson[] => {
  const positions = new Positions(snapshot)
  return findings.map(({ document, rule, severity, message, at, fixes = [], related = [] }) => ({
    file,
    document,
    rule,
    severity,
    message,
    ...positions.region(at),
    fixes: fixes.map(fix => fix.title),
    related: related.map(({ message, at }) => ({ message, ...positions.at(at[0]) })),
  }))
}

/** @param files how many were checked, those without findings included. */
export const checkJson = (findings: readonly FindingJson[], files: number): CheckJson => ({
  findings,
  files,
  ...tally(findings),
})

export function tally(findings: readonly { readonly severity: Severity }[]): Tally {
  const of = (severity: Severity) => findings.filter(finding => finding.severity === severity).length
  return { errors: of('error'), warnings: of('warning'), infos: of('info') }
}
