import { readFileSync } from 'node:fs'
import { join } from 'node:path'
import { Snapshot } from '../../../server/src/analysis.ts'
import type { CheckedFile } from '../../../server/src/exchange/findings-json.ts'
import { type Report, reportOf } from '../../../server/src/exchange/report.ts'
import { type FullReport, fullReport } from '../../../server/src/exchange/report-full.ts'
import { Workshop } from '../../../server/src/meaning/workshop.ts'
import { loadSymmetryFromDisk } from '../../../server/src/symmetry-node.ts'
import { directSymmetry } from '../../../server/src/symmetry-service.ts'

loadSymmetryFromDisk()
const workshop = new Workshop(directSymmetry)

export const FIXTURES = join(import.meta.dirname, 'fixtures')
export const fixture = (name: string): string => readFileSync(join(FIXTURES, `${name}.lattice.yaml`), 'utf8')
export const NAMES = ['silicon', 'draft', 'sheet', 'chain', 'meshes'] as const

export function checked(text: string, file = 'a.lattice.yaml'): CheckedFile {
  const snapshot = new Snapshot(text, workshop)
  return { file, snapshot, findings: snapshot.findings }
}

export function reports(text: string, file = 'a.lattice.yaml'): Report[] {
  const { snapshot, findings } = checked(text, file)
  return snapshot.documents.map(analysis =>
    reportOf(
      file,
      analysis,
      findings.filter(({ document }) => document === analysis.document.number),
    ),
  )
}

export function fullReports(text: string, file = 'a.lattice.yaml'): FullReport[] {
  const { snapshot } = checked(text, file)
  return snapshot.documents.map(analysis => fullReport(file, snapshot, analysis))
}
