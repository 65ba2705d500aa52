/** Wires the requests of our own about an open text: what is drawn, reported, filled in, imported, exported and rewritten. */
import type { Connection } from 'vscode-languageserver'
import type { FillForm } from './exchange/forms/form.ts'
import { appendToPathEdits } from './language/append-to-path.ts'
import { exportCifAnswer, importCifAnswer } from './language/cif.ts'
import { fillAnswer } from './language/forms.ts'
import { recommendedPathEdit } from './language/recommended-path.ts'
import { supercellEdit } from './language/refactor/index.ts'
import { reportAnswer } from './language/report.ts'
import { bandsAnswer, documentOf, figureAnswer, sceneAnswer, zoneSolidAnswer } from './language/zone-view.ts'
import {
  APPEND_TO_PATH,
  type AppendParams,
  type AppendResult,
  BANDS,
  type BandsResult,
  type DocumentParams,
  EXPORT_CIF,
  type ExportCifParams,
  type ExportCifResult,
  FIGURE,
  type FigureParams,
  type FigureResult,
  FILL,
  type FillParams,
  IMPORT_CIF,
  type ImportCifParams,
  type ImportCifResult,
  RECOMMENDED_PATH,
  type RecommendedPathParams,
  REPORT,
  type ReportParams,
  type ReportResult,
  REWRITE_FOR_SUPERCELL,
  type RewriteParams,
  SCENE,
  type SceneResult,
  ZONE_SOLID,
  type ZoneSolidParams,
  type ZoneSolidResult,
} from './protocol.ts'
import type { About, Guard } from './server-answers.ts'

export interface Surroundings {
  readonly connection: Connection
  readonly about: About
  readonly guard: Guard
  readonly fillForm: FillForm
  readonly version: string
}

export function serveRequests({ connection, about, guard, fillForm, version }: Surroundings): void {
  connection.onRequest(
    REWRITE_FOR_SUPERCELL,
    about('rewrite for supercell', null, (snapshot, { version, position }: RewriteParams) =>
      snapshot.version === version ? (supercellEdit(snapshot, snapshot.offsetOf(position)) ?? null) : null,
    ),
  )
  connection.onRequest(
    RECOMMENDED_PATH,
    about('recommended path', null, (snapshot, { position }: RecommendedPathParams) =>
      recommendedPathEdit(snapshot, position),
    ),
  )

  connection.onRequest(
    REPORT,
    about('report', null, (snapshot, params: ReportParams): ReportResult => reportAnswer(snapshot, params)),
  )

  connection.onRequest(
    IMPORT_CIF,
    guard('import of a CIF', null, (params: ImportCifParams): ImportCifResult | null =>
      importCifAnswer(params),
    ),
  )
  connection.onRequest(
    EXPORT_CIF,
    about('export as CIF', null, (snapshot, params: ExportCifParams): ExportCifResult | null =>
      exportCifAnswer(snapshot, params, version),
    ),
  )

  // The zone view. What needs a search for symmetry is left out of a picture until the search has ended.
  connection.onRequest(
    SCENE,
    about('scene', null, (snapshot, { document }: DocumentParams): SceneResult | null =>
      sceneAnswer(snapshot, document),
    ),
  )
  connection.onRequest(
    BANDS,
    about('bands', null, (snapshot, { document }: DocumentParams): BandsResult | null =>
      bandsAnswer(snapshot, document),
    ),
  )
  connection.onRequest(
    ZONE_SOLID,
    about('zone solid', null, (snapshot, { document, n }: ZoneSolidParams): ZoneSolidResult | null =>
      zoneSolidAnswer(snapshot, document, n),
    ),
  )
  connection.onRequest(
    FIGURE,
    about('figure', null, (snapshot, params: FigureParams): FigureResult | null =>
      figureAnswer(snapshot, params),
    ),
  )
  connection.onRequest(
    APPEND_TO_PATH,
    about(
      'append to path',
      null,
      (snapshot, { version, document, labels, newPiece }: AppendParams): AppendResult | null => {
        const analysis = documentOf(snapshot, document)
        if (!analysis || snapshot.version !== version) return null
        const edits = appendToPathEdits(snapshot, analysis, labels, newPiece)
        return edits && { version, edits }
      },
    ),
  )

  connection.onRequest(
    FILL,
    about('fill a form', null, (snapshot, params: FillParams) => {
      const date = new Date().toISOString().slice(0, 10)
      return fillAnswer(snapshot, params, { fillForm, version, date })
    }),
  )
}
