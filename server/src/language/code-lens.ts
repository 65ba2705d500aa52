/** One line above path, mesh and supercell with what they come to. Computed when the line is looked at. */
import type { CodeLens, Command } from 'vscode-languageserver-types'
import type { DocumentAnalysis, Snapshot } from '../analysis.ts'
import { star } from '../crystal/kspace.ts'
import { integerDeterminant, landsOnGamma, supercellOf } from '../crystal/supercell.ts'
import { knownSegments } from '../exchange/path-points.ts'
import { meshOf } from '../meaning/sampling.ts'
import { standsHere } from '../format/edits.ts'
import type { Span } from '../format/model.ts'
import { displayLabel, formatPath } from '../format/path.ts'
import { recommendedPath } from '../meaning/recommended.ts'
import { latticeGroup } from '../meaning/placing.ts'
import { count, inverseLength } from '../meaning/wording.ts'
import { rangeOf } from './diagnostics.ts'
import { meshCounts, product, wholeNumber } from './mesh-words.ts'

type Kind = 'path' | 'mesh' | 'supercell'

/** What a client of ours can do at a click. */
const OPEN_ZONE_VIEW = 'braggline.openZoneView'
const OPEN_REPORT = 'braggline.openReport'
/** Takes the place of a document as its argument. */
const INSERT_RECOMMENDED_PATH = 'braggline.insertRecommendedPath'

export interface LensData {
  readonly uri: string
  readonly version: number
  /** Ordinal of the document in its file, from 1. */
  readonly document: number
  readonly kind: Kind
}

/** Files with more crystals are lists, and get no lenses after these. */
const MOST = 300

/** @param commands the client has the commands of the extension. */
export function codeLenses(snapshot: Snapshot, uri: string, commands: boolean): CodeLens[] {
  const lenses = snapshot.documents.flatMap(analysis => {
    const { document } = analysis
    const lens = (kind: Kind, key: Span | undefined): CodeLens[] => {
      if (!key) return []
      const data: LensData = { uri, version: snapshot.version, document: document.number, kind }
      return [{ range: rangeOf(snapshot, key), data }]
    }
    return [
      ...lens('path', document.path?.key),
      ...(commands ? recommended(snapshot, analysis) : []),
      ...lens('mesh', document.meshes.length > 0 ? document.meshEntry?.key : undefined),
      ...lens('supercell', document.supercell?.key),
    ]
  })
  return lenses.slice(0, MOST)
}

/** Beside a path of one's own: the book's, where it is another one. */
function recommended(snapshot: Snapshot, { document, crystal }: DocumentAnalysis): CodeLens[] {
  const { path } = document
  if (!path || path.recommended || !standsHere(snapshot.text, path.at)) return []
  const book = recommendedPath(crystal)
  const own = formatPath(path.pieces.map(({ labels }) => labels.map(({ label }) => label)))
  if (!book || own === formatPath(book.pieces)) return []
  const range = rangeOf(snapshot, path.key)
  const command = {
    title: 'write the recommended path',
    command: INSERT_RECOMMENDED_PATH,
    arguments: [range.start],
  }
  return [{ range, command }]
}

/** What a click opens, where the client has the command. */
const OPENS: Record<Kind, string> = {
  path: OPEN_ZONE_VIEW,
  mesh: OPEN_ZONE_VIEW,
  supercell: OPEN_REPORT,
}

/** @param commands the client has the commands of the extension. */
export function resolveLens(
  snapshot: Snapshot | undefined,
  lens: CodeLens,
  { version, document, kind }: LensData,
  commands: boolean,
): CodeLens {
  const analysis = snapshot?.version === version ? snapshot.documents[document - 1] : undefined
  const title = analysis ? TITLES[kind](analysis) : ''
  // Of a text that has moved on the client asks anew.
  const command: Command = { title: title || '…', command: commands && title ? OPENS[kind] : '' }
  return { ...lens, command }
}

const TITLES: Record<Kind, (analysis: DocumentAnalysis) => string> = {
  path: pathTitle,
  mesh: meshTitle,
  supercell: supercellTitle,
}

function pathTitle({ crystal }: DocumentAnalysis): string {
  const segments = knownSegments(crystal)
  if (segments.length === 0) return 'no point of this path is known yet'
  const length = segments.reduce((sum, segment) => sum + segment.length, 0)
  const pieces = segments.at(-1)!.piece + 1
  // Joints of a piece are listed once, both ends at a break.
  const points = segments.reduce((sum, { steps }) => sum + steps, pieces)
  return `${inverseLength(length, crystal.unit)} in ${count(segments.length, 'segment')} · ${count(points, 'point')}`
}

/** Named meshes beyond these are counted only. */
const MOST_MESHES = 4

function meshTitle({ document, crystal }: DocumentAnalysis): string {
  const words = document.meshes.slice(0, MOST_MESHES).map(block => {
    const mesh = meshOf(crystal, block)
    const name = block.name === undefined ? '' : `${block.name}: `
    if (!mesh) return `${name}not known yet`
    const { divisions, full, irreducible } = meshCounts(crystal, mesh)
    const reduced = irreducible === undefined ? '' : `, ${wholeNumber(irreducible)} irreducible`
    return `${name}${product(divisions)} = ${wholeNumber(full)}${reduced}`
  })
  const more = document.meshes.length - words.length
  return [...words, ...(more > 0 ? [`${more} more`] : [])].join(' · ')
}

/** Labels beyond these are not named. */
const MOST_LABELS = 8

function supercellTitle({ crystal }: DocumentAnalysis): string {
  const { lattice, supercell: matrix } = crystal
  if (!lattice || !matrix) return 'the supercell is not known yet'
  const supercell = supercellOf(lattice, matrix)
  if (!supercell) return 'the supercell’s vectors span no cell'
  const { fold } = supercell
  const determinant = `det ${integerDeterminant(supercell.matrix) < 0n ? '−' : ''}${wholeNumber(fold)}`
  if (fold === 1) return `${determinant} · another choice of the same cell`
  const group = latticeGroup(crystal) ?? []
  const points = new Map([...crystal.bookPoints, ...crystal.points])
  const labels = [...points.values()]
    .filter(({ fraction }) =>
      [fraction, ...star(fraction, group)].some(arm => landsOnGamma(supercell.matrix, arm)),
    )
    .map(({ label }) => displayLabel(label))
  const named = labels.slice(0, MOST_LABELS).join(', ') + (labels.length > MOST_LABELS ? ', …' : '')
  return `${determinant} · ${count(fold, 'k-point')} on Γ${named ? `, among them ${named}` : ''}`
}
