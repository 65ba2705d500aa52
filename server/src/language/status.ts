import type { Snapshot } from '../analysis.ts'
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
    limits: limitsOf(snapshot),
  }
}

/** Why rules that need the symmetry were silent, where no finding of the document says what is wrong with it. */
const limitsOf = ({ documents, findings }: Snapshot): string[] =>
  documents.flatMap(({ document: { number }, crystal }) => {
    const outcome = crystal.lattice && crystal.symmetryOutcome
    if (outcome?.state !== 'failed') return []
    if (findings.some(({ document, severity }) => document === number && severity === 'error')) return []
    const which = documents.length > 1 ? `document ${number}: ` : ''
    return [`${which}nothing that needs the symmetry was checked: ${outcome.reason}`]
  })
