/** The requests of our own between server and client, as types. Every message about a text carries its version. */
import type { Diagnostic, TextEdit } from 'vscode-languageserver-types'

export interface CheckedParams {
  readonly uri: string
  readonly version: number
}
export interface CheckedResult {
  readonly version: number
  readonly findings: number
}
/** Answered once this version (or a later one) of the text was checked in full, symmetry included. */
export const CHECKED = 'braggline/checked'

/**
 * What the status item of an editor shows of one file: a notification from the server after each check, to clients that
 * ask for it with `status: true` in their initialization options.
 */
export interface StatusParams {
  readonly uri: string
  readonly version: number
  /** Bravais type and space group, where they are known. */
  readonly crystal?: string
  readonly errors: number
  readonly warnings: number
  readonly infos: number
  /** A search for symmetry is still running. */
  readonly pending: boolean
  /** What could not be checked, and why: a search that was given up, say. */
  readonly limits: readonly string[]
}
export const STATUS = 'braggline/status'

export interface RecommendedPathParams {
  readonly uri: string
  readonly version: number
  readonly position: { readonly line: number; readonly character: number }
}
/** The edit that writes the label book's own path into the document at the position; null where there is none. */
export const RECOMMENDED_PATH = 'braggline/recommendedPath'

export interface RewriteParams {
  readonly uri: string
  readonly version: number
  readonly position: { readonly line: number; readonly character: number }
}
/** The edits that rewrite the document at the position for the supercell that it states; null where that cannot be done. */
export const REWRITE_FOR_SUPERCELL = 'braggline/rewriteForSupercell'

export type Triple = readonly [number, number, number]
export interface TextRange {
  readonly start: { readonly line: number; readonly character: number }
  readonly end: { readonly line: number; readonly character: number }
}
export type SceneSeverity = 'error' | 'warning' | 'info'

/** A label as it is set: `X₁` has base `X` and subscript `1`. */
export interface SceneName {
  readonly base: string
  readonly sub: string
}

export interface ScenePoint {
  readonly label: string
  readonly name: SceneName
  readonly origin: 'file' | 'book'
  /** Cartesian, inverse length with the 2π, as all vectors of a scene. */
  readonly k: Triple
  readonly place: 'inside' | 'boundary' | 'outside'
  /** Of a point outside: its equivalent in the first zone. */
  readonly folded?: Triple
  /** It is on the path, or the file defines it: it is always shown. */
  readonly named: boolean
  /** Name and value of what the hover in the text says too. */
  readonly facts: readonly (readonly [string, string])[]
  readonly severity?: SceneSeverity
  /** Where it stands in the text: its definition, else its first mention in the path. */
  readonly range?: TextRange
  /** Every place where its label stands in the path. */
  readonly mentions: readonly TextRange[]
}

export interface SceneSegment {
  readonly piece: number
  readonly from: { readonly label: string; readonly k: Triple }
  readonly to: { readonly label: string; readonly k: Triple }
  readonly length: number
  readonly severity?: SceneSeverity
  /** From the first label to the second; absent in a recommended path. */
  readonly range?: TextRange
}

export interface SceneSolid {
  readonly vertices: readonly Triple[]
  readonly edges: readonly (readonly [number, number])[]
  /** Vertices of each face, counter-clockwise as seen from outside. Empty in two and one dimensions. */
  readonly faces: readonly (readonly number[])[]
}

export interface SceneMesh {
  readonly name?: string
  /** x, y, z of each irreducible point in turn, folded into the first zone. */
  readonly points: readonly number[]
  /** Parts of the whole, one a point. */
  readonly weights: readonly number[]
  readonly total: number
}

/** What the zone view and the figures draw: finished geometry of one document. */
export interface Scene {
  readonly document: number
  readonly title: string
  readonly dimension: 1 | 2 | 3
  /** What inverse lengths are in, as it is written. */
  readonly unit: string
  readonly zone: SceneSolid & {
    readonly solid: string
    readonly inradius: number
    readonly circumradius: number
  }
  /** b₁ b₂ b₃, as many as there are dimensions. */
  readonly reciprocal: readonly Triple[]
  /** a* b* c*, the reciprocal vectors of the conventional cell. */
  readonly axes: readonly Triple[]
  /** Where the direct vectors stand, in the order of b₁ b₂ b₃; empty where the file gives parameters. */
  readonly vectorRanges: readonly (TextRange | null)[]
  readonly points: readonly ScenePoint[]
  readonly segments: readonly SceneSegment[]
  readonly wedge?: SceneSolid
  readonly meshes: readonly SceneMesh[]
  /** Reciprocal-lattice vectors whose zones touch the first one (shell 1), and those that touch these (shell 2). */
  readonly neighbours: { readonly first: readonly Triple[]; readonly second: readonly Triple[] }
  /** A good place to look from, on the side of the path: degrees from z, and about z from x. */
  readonly home: readonly [theta: number, phi: number]
  /** The zone, its points and its path in words. */
  readonly words: readonly string[]
}

export interface DocumentParams {
  readonly uri: string
  readonly version: number
  /** Ordinal in the file, from 1; the first where it is not said. */
  readonly document?: number
}
export interface SceneResult {
  readonly version: number
  readonly scene: Scene | null
  /** Why there is nothing to draw. */
  readonly reason?: string
  /** A search for symmetry is still running: the wedge and the meshes come with the next answer. */
  readonly pending: boolean
  /** Where each document of the file stands, so that the view can follow the cursor from one to the next. */
  readonly documents: readonly TextRange[]
}
export const SCENE = 'braggline/scene'

/** A parabola in one segment as a Bézier curve: energies in eV at its start, of its control point and at its end. */
export type BandBranch = readonly [from: number, middle: number, to: number, degeneracy: number]

export interface BandSegment {
  readonly piece: number
  readonly from: { readonly label: string; readonly k: Triple }
  readonly to: { readonly label: string; readonly k: Triple }
  /** Distance along the path at its start, inverse length. */
  readonly start: number
  readonly length: number
  readonly branches: readonly BandBranch[]
}

/** Empty-lattice bands along the path: all states below `top`. */
export interface Bands {
  readonly unit: string
  /** Of the whole path; distances run on over a break. */
  readonly length: number
  /** In eV. */
  readonly top: number
  /** The joints of the path; two names at a break. */
  readonly ticks: readonly { readonly distance: number; readonly names: readonly SceneName[] }[]
  readonly segments: readonly BandSegment[]
}
export interface BandsResult {
  readonly version: number
  readonly bands: Bands | null
}
export const BANDS = 'braggline/bands'

export interface AppendParams extends DocumentParams {
  readonly labels: readonly string[]
  /** Begin a new piece with them; else they go on from the path's last point. */
  readonly newPiece: boolean
}
export interface AppendResult {
  readonly version: number
  readonly edits: readonly { readonly range: TextRange; readonly newText: string }[]
}
/** The edits that write labels at the end of the path; null where it cannot be written to (behind an alias, say). */
export const APPEND_TO_PATH = 'braggline/appendToPath'

export interface ZoneSolidParams extends DocumentParams {
  /** From 2. */
  readonly n: number
}
/** The n-th zone, all its pieces in one; null where it takes too many. */
export interface ZoneSolidResult {
  readonly version: number
  readonly solid: SceneSolid | null
}
export const ZONE_SOLID = 'braggline/zoneSolid'

export interface FigureParams extends DocumentParams {
  readonly kind: 'zone' | 'bands'
  /** Where the eye stands: degrees from z, and about z from x. */
  readonly view?: readonly [theta: number, phi: number]
}
/** A vector figure; null where there is nothing to draw. */
export interface FigureResult {
  readonly version: number
  readonly svg: string | null
}
export const FIGURE = 'braggline/figure'

export interface ReportParams {
  readonly uri: string
  readonly version: number
  /** Markdown unless it says otherwise. */
  readonly format?: 'markdown' | 'html'
}
/** The lattice report of all crystals of a text. */
export interface ReportResult {
  readonly version: number
  readonly text: string
  /** A search for symmetry is still running: what needs it comes with the next answer. */
  readonly pending: boolean
}
export const REPORT = 'braggline/report'

export interface CheckTextParams {
  readonly uri: string
  readonly text: string
}
export interface CheckTextResult {
  readonly findings: readonly Diagnostic[]
}
/** All findings of a text that need not be open, symmetry included. */
export const CHECK_TEXT = 'braggline/checkText'

export interface PastedLatticeParams {
  /** What was copied. */
  readonly text: string
  /** The open text that the lattice is for; none: a new one. */
  readonly uri?: string
  readonly position?: { readonly line: number; readonly character: number }
}
/** One way to read the vectors and to write them as a lattice. */
export interface PastedChoice {
  readonly title: string
  readonly detail: string
  /** The lattice that the document has goes. */
  readonly replaces: boolean
  readonly edits: readonly TextEdit[]
}
export interface PastedLatticeResult {
  /** Of the open text; 0 of a new one. */
  readonly version: number
  /** The likeliest first. */
  readonly choices: readonly PastedChoice[]
  /** Why there are none. */
  readonly reason?: string
}
export const PASTED_LATTICE = 'braggline/pastedLattice'

/** A file to begin with, in the snippet syntax of the LSP. */
export interface SkeletonOffer {
  /** `tI`, `hR-alpha`, `vectors`: what the command for a new file may be given. */
  readonly id: string
  readonly name: string
  /** Crystal system. */
  readonly system: string
  /** Parameters that it asks for. */
  readonly asks: string
  readonly group: string
  readonly text: string
}
export interface SkeletonsResult {
  readonly skeletons: readonly SkeletonOffer[]
}
export const SKELETON_LIST = 'braggline/skeletons'

export interface FillParams extends DocumentParams {
  /** Where the cursor stands: it says which crystal is meant while `document` is not known. */
  readonly position?: { readonly line: number; readonly character: number }
  /** The name is for messages. */
  readonly form: { readonly name: string; readonly text: string }
  /** Those gathered so far; null for one that is not there or must not be read. */
  readonly partials: Readonly<Record<string, string | null>>
}
export interface FillResult {
  readonly version: number
  readonly document: number
  readonly text?: string
  /** Why there is no text, in a line, with the place in the form where it has one. */
  readonly fault?: string
  /** Partials that the form names and that are not gathered yet: ask again with them. */
  readonly needs?: readonly string[]
}
/** A form filled with what is known of a crystal. Symmetry counts: ask once the text has been checked. */
export const FILL = 'braggline/fill'

export interface ImportCifParams {
  readonly text: string
  /** What the CIF is called in the comments of the lattice file. */
  readonly source: string
}
export interface ImportCifResult {
  /** The lattice file; null where nothing could be made. */
  readonly text: string | null
  /** A name for it, without an ending. */
  readonly name: string
  /** What makes the lattice file another crystal than the CIF's, or may, and what kept blocks from being read. */
  readonly losses: readonly string[]
  readonly notes: readonly string[]
}
export const IMPORT_CIF = 'braggline/importCif'

export interface ExportCifParams extends CheckedParams {
  /** In the document that is meant. */
  readonly position: { readonly line: number; readonly character: number }
  /** What the lattice file is called in the comments of the CIF. */
  readonly source: string
}
export interface ExportCifResult {
  readonly version: number
  readonly text: string | null
  /** Why there is none. */
  readonly refusal?: string
  readonly notes: readonly string[]
}
export const EXPORT_CIF = 'braggline/exportCif'
