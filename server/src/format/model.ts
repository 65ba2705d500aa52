/**
 * What decoding gives: one `LatticeDocument` for each YAML document, in which every value carries its place.
 * What could not be read is `undefined` and has one problem of its own.
 */
import type { BravaisType, Centring } from '../crystal/bravais.ts'
import type { Unit } from '../crystal/units.ts'

/** UTF-16 offsets into the whole text, half open. */
export type Span = readonly [start: number, end: number]

export interface Sourced<T> {
  readonly value: T
  readonly at: Span
}

export interface TextEdit {
  readonly at: Span
  readonly text: string
}

export interface Fix {
  /** Begins with a verb. */
  readonly title: string
  /** Crystal, path and mesh stay what they were: "fix all" applies safe fixes only. */
  readonly safe: boolean
  readonly edits: readonly TextEdit[]
}

export type Severity = 'error' | 'warning' | 'info'

/** A fault of form, found while decoding. `rule` is the id of a rule of the family "file". */
export interface Problem {
  readonly rule: string
  readonly at: Span
  readonly message: string
  readonly fixes?: readonly Fix[]
  readonly related?: readonly { readonly at: Span; readonly message: string }[]
}

/** An exact rational number with safe integers, q > 0, in lowest terms. */
export interface Fraction {
  readonly p: number
  readonly q: number
}

/** A number as it was written. `value` is finite. */
export interface NumberValue {
  readonly value: number
  readonly at: Span
  readonly text: string
  /** The exact value, where the text is built of whole numbers and decimals with + − * / and whole powers only. */
  readonly exact?: Fraction
  /** Digits after the point, where the text is a plain decimal such as `0.333` or `-.5` (a whole number: 0). */
  readonly decimals?: number
  /** The lattice parameters that the expression uses, e.g. ['a', 'c']. */
  readonly uses: readonly ParameterName[]
}

/** `items[i]` is undefined where that number is malformed (it has its own problem). `at` covers the brackets. */
export interface VectorValue {
  readonly at: Span
  readonly items: readonly (NumberValue | undefined)[]
}

export const PARAMETER_NAMES = ['a', 'b', 'c', 'alpha', 'beta', 'gamma'] as const
export type ParameterName = (typeof PARAMETER_NAMES)[number]

/**
 * A key and its value: `key` is the span of the key's own characters, `at` that of the value. `item` is what to delete
 * to remove both, with the line break; it is empty where that cannot be done, such as behind an alias. A value behind
 * an alias has, with all that is in it, the place of the alias.
 */
export interface Entry {
  readonly key: Span
  readonly at: Span
  readonly item: Span
}

export interface LatticeBlock extends Entry {
  readonly bravais?: Sourced<BravaisType>
  readonly centring?: Sourced<Centring>
  readonly parameters: Partial<Record<ParameterName, NumberValue>>
  readonly height?: NumberValue
  /** No rows where `vectors` as a whole cannot be read. */
  readonly vectors?: Entry & { readonly rows: readonly (VectorValue | undefined)[] }
  /** The keys that stand in the block, also those whose value could not be read. */
  readonly keys: ReadonlyMap<string, Entry>
}

export interface AtomEntry {
  /** The whole list item, without the dash. */
  readonly at: Span
  /** With the dash and the line break: what to delete to remove the atom. */
  readonly item: Span
  readonly element?: Sourced<string>
  readonly name?: Sourced<string>
  readonly position?: VectorValue
}

export interface PointEntry {
  /** Normalised (see path.ts): Greek letters, no underscore, plain digits. */
  readonly label: string
  readonly key: Span
  readonly at: Span
  /** The whole mapping entry with its line break: what to delete to remove the point. */
  readonly item: Span
  readonly coordinates?: VectorValue
  readonly between?: {
    readonly at: Span
    readonly ends: readonly [PathLabel, PathLabel]
    readonly fraction?: NumberValue
  }
}

export interface PathLabel {
  readonly label: string
  readonly at: Span
  /** As it stands in the text. */
  readonly text: string
}

export interface PathSegment {
  readonly from: PathLabel
  readonly to: PathLabel
  /** Characters from the first label's start to the second's end (only the separator and what is in it lie between). */
  readonly at: Span
  /** The separator's own characters. */
  readonly separator: Span
  /** The segment's own number of steps, `–(60)–`. */
  readonly steps?: Sourced<number>
}

export interface PathPiece {
  readonly at: Span
  readonly labels: readonly PathLabel[]
  readonly segments: readonly PathSegment[]
}

export interface PathBlock extends Entry {
  readonly recommended: boolean
  readonly pieces: readonly PathPiece[]
}

export type AtomFrame = 'conventional' | 'primitive' | 'cartesian'
export type PointFrame = 'primitive' | 'conventional' | 'cartesian' | '2pi/a'
export const BOOK_IDS = ['setyawan-curtarolo-2010', 'hinuma-2017', 'bradley-cracknell-1972', 'none'] as const
export type BookId = (typeof BOOK_IDS)[number]

export interface SamplingBlock extends Entry {
  readonly spacing?: NumberValue
  readonly steps?: NumberValue
  readonly total?: NumberValue
  readonly keys: ReadonlyMap<string, Entry>
}

export interface MeshBlock extends Entry {
  /** undefined for the only, unnamed mesh. */
  readonly name?: string
  readonly divisions?: VectorValue
  readonly spacing?: NumberValue
  readonly shift?: VectorValue
  readonly keys: ReadonlyMap<string, Entry>
}

export interface SupercellBlock extends Entry {
  /** Rows as written: one row of three for the diagonal form. */
  readonly rows: readonly (VectorValue | undefined)[]
  readonly diagonal: boolean
}

/** An `# braggline: allow …` comment: silences `rules` on `line` (0-based line of the text it covers). */
export interface Allowance {
  readonly line: number
  readonly rules: readonly Sourced<string>[]
}

/** Keys that say how other values are meant. */
export type Foundation = 'unit' | 'labels' | 'time-reversal' | 'frames.atoms' | 'frames.points'

export interface LatticeDocument {
  /** Ordinal among the file's documents that hold anything, from 1. */
  readonly number: number
  /** From its start marker, or the start of the file, up to the next document: every place of a file is in one. */
  readonly at: Span
  /** Its mapping. */
  readonly contents: Span
  readonly title?: Sourced<string>
  readonly unit: Unit
  readonly unitEntry?: Entry
  readonly tolerance?: NumberValue
  readonly lattice?: LatticeBlock
  readonly atoms?: Entry & { readonly items: readonly AtomEntry[] }
  readonly spaceGroup?: Sourced<number | string> & { readonly key: Span }
  readonly timeReversal: boolean
  readonly timeReversalEntry?: Entry
  readonly frames: { readonly atoms: AtomFrame; readonly points: PointFrame }
  readonly framesEntry?: Entry & {
    readonly atoms?: Entry
    readonly points?: Entry
    readonly keys: ReadonlyMap<string, Entry>
  }
  readonly labels: BookId
  readonly labelsEntry?: Entry
  readonly points?: Entry & { readonly items: readonly PointEntry[] }
  readonly path?: PathBlock
  readonly sampling?: SamplingBlock
  readonly meshes: readonly MeshBlock[]
  /** The whole `mesh:` entry, whether it holds one mesh or several by name. */
  readonly meshEntry?: Entry
  readonly supercell?: SupercellBlock
  /** Severity by rule id from `checks:`, with the span of the id itself. */
  readonly checks: ReadonlyMap<string, Sourced<Severity | 'off'> & { readonly key: Span }>
  readonly checksEntry?: Entry
  /** Of the keys on which the meaning of other values rests, those whose own value could not be read: the default stands in. */
  readonly unread: ReadonlySet<Foundation>
  /** Top-level keys that stand in the document. */
  readonly keys: ReadonlyMap<string, Entry>
  /** Problems of form inside this document. */
  readonly problems: readonly Problem[]
}

export interface DecodedFile {
  readonly documents: readonly LatticeDocument[]
  /** Problems outside any document (the file is too large, YAML gave up, …). */
  readonly problems: readonly Problem[]
  readonly allowances: readonly Allowance[]
}
