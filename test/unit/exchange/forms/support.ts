import { readFileSync } from 'node:fs'
import { formData } from '../../../../server/src/exchange/forms/data.ts'
import { fillForm } from '../../../../server/src/exchange/forms/engine.ts'
import { faultLine, type FormLimits } from '../../../../server/src/exchange/forms/form.ts'
import { checked } from '../support.ts'

export const demo = (name: string): string =>
  readFileSync(new URL(`../../../../demo/${name}`, import.meta.url), 'utf8')

export const LEAD = demo('lead-telluride.lattice.yaml')

export interface Around {
  readonly file?: string
  readonly document?: number
  readonly partials?: Record<string, string | null>
  readonly mesh?: string
  readonly limits?: FormLimits
}

/** What a form knows of a lattice file. */
export function known(lattice: string, texts: readonly string[], { file, document = 1, mesh }: Around = {}) {
  const { snapshot } = checked(lattice)
  const analysis = snapshot.documents[document - 1]
  const findings = snapshot.findings.filter(each => each.document === document)
  return formData({
    file: file ?? 'demo.lattice.yaml',
    analysis,
    findings,
    texts,
    mesh,
    version: '1.2.3',
    date: '2026-01-31',
  })
}

/** The text that comes out, or the one line that says why not. */
export function fill(form: string, lattice = LEAD, around: Around = {}): string {
  const { partials = {}, limits } = around
  const texts = [form, ...Object.values(partials).filter(text => text !== null)]
  const data = known(lattice, texts, around)
  if ('refused' in data) return `refused: ${data.refused}`
  const outcome = fillForm({ name: 'form.liquid', text: form, partials, ...data, limits })
  return 'fault' in outcome ? faultLine(outcome.fault) : outcome.text
}
