import type { Snapshot } from '../analysis.ts'
import { limitsOf } from '../exchange/limits.ts'
import type { Severity } from '../format/model.ts'
import type { StatusParams } from '../protocol.ts'

/** What the status item of an editor shows of a file. */
export function statusOf(snapshot: Snapshot, uri: string): StatusParams {
  const [first] = snapshot.documents
  const group = first?.crystal.document.atoms && first.crystal.symmetry?.spaceGroup
  const crystal = [first?.crystal.bravais, group && `${group.symbol} (${group.number})`]
    .filter(Boolean)
    .join(', ')
  const number = (severity: Severity) =>
    snapshot.findings.filter(finding => finding.severity === severity).length
  return {
    uri,
    version: snapshot.version,
    crystal: crystal || undefined,
    errors: number('error'),
    warnings: number('warning'),
    infos: number('info'),
    pending: snapshot.pending,
    limits: everyLimit(snapshot),
  }
}

const everyLimit = (snapshot: Snapshot): string[] =>
  snapshot.documents.flatMap(analysis => {
    const which = snapshot.documents.length > 1 ? `document ${analysis.document.number}: ` : ''
    return limitsOf(snapshot, analysis).map(limit => which + limit)
  })
