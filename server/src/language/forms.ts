/** Forms of an open text: the client gathers the form and its partials, so that any file system will do. */
import type { DocumentAnalysis, Snapshot } from '../analysis.ts'
import { formData } from '../exchange/forms/data.ts'
import { faultLine, type FillForm, PREVIEW_LIMITS } from '../exchange/forms/form.ts'
import { missingPartials, MOST_PARTIALS } from '../exchange/forms/partials.ts'
import { count } from '../meaning/wording.ts'
import type { FillParams, FillResult } from '../protocol.ts'
import { fileName } from './report.ts'
import { documentOf } from './zone-view.ts'

export interface FormTools {
  readonly fillForm: FillForm
  /** Of the program. */
  readonly version: string
  /** YYYY-MM-DD. */
  readonly date: string
}

/** null where the text holds no crystal. */
export function fillAnswer(
  snapshot: Snapshot,
  params: FillParams,
  tools: FormTools,
): Promise<FillResult> | null {
  const analysis = analysisOf(snapshot, params)
  if (!analysis) return null
  const { form, partials } = params
  const answer = (rest: Omit<FillResult, 'version' | 'document'>): FillResult => ({
    version: snapshot.version,
    document: analysis.document.number,
    ...rest,
  })
  const needs = missingPartials(form.text, partials)
  if (needs.length + Object.keys(partials).length > MOST_PARTIALS)
    return Promise.resolve(answer({ fault: `${form.name} has over ${MOST_PARTIALS} partials.` }))
  if (needs.length > 0) return Promise.resolve(answer({ needs }))
  const { number } = analysis.document
  const findings = snapshot.findings.filter(({ document }) => document === number)
  const errors = findings.filter(({ severity }) => severity === 'error').length
  if (errors > 0)
    return Promise.resolve(
      answer({ fault: `The lattice file has ${count(errors, 'error')}: no form is filled from it.` }),
    )
  const known = formData({
    file: fileName(params.uri),
    analysis,
    findings,
    texts: [form.text, ...Object.values(partials).filter(text => text !== null)],
    version: tools.version,
    date: tools.date,
  })
  if ('refused' in known) return Promise.resolve(answer({ fault: `${form.name}: ${known.refused}` }))
  return tools
    .fillForm({ ...form, partials, ...known, limits: PREVIEW_LIMITS })
    .then(outcome =>
      answer('fault' in outcome ? { fault: faultLine(outcome.fault) } : { text: outcome.text }),
    )
}

function analysisOf(snapshot: Snapshot, { document, position }: FillParams): DocumentAnalysis | undefined {
  if (document === undefined && position) return snapshot.documentAt(snapshot.offsetOf(position))
  return documentOf(snapshot, document)
}
