/** The lattice report of an open text, for the editor's preview and for saving. */
import type { Snapshot } from '../analysis.ts'
import { fullReport } from '../exchange/report-full.ts'
import { reportHtml } from '../exchange/report-html.ts'
import { reportMarkdown } from '../exchange/report-markdown.ts'
import type { ReportParams, ReportResult } from '../protocol.ts'

export function reportAnswer(snapshot: Snapshot, { uri, format }: ReportParams): ReportResult {
  const file = fileName(uri)
  const reports = snapshot.documents.map(analysis => fullReport(file, snapshot, analysis))
  const text = format === 'html' ? reportHtml(reports) : reportMarkdown(reports)
  return { version: snapshot.version, text, pending: snapshot.pending }
}

/** The last part of a URI as people write it; of a text that is not saved its name alone, without its scheme. */
export function fileName(uri: string): string {
  const last = uri.split(/[?#]/)[0].split(/[/:]/).at(-1) ?? ''
  try {
    return decodeURIComponent(last)
  } catch {
    return last
  }
}
