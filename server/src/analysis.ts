/** The one pipeline: text → decoded documents → crystals → findings. Each stage is computed once, on demand. */
import type { Check, Reported } from './checks/check.ts'
import { CHECKS } from './checks/index.ts'
import { runChecks, type Severities, withoutAllowed } from './checks/run.ts'
import { decode } from './format/decode.ts'
import type { DecodedFile, LatticeDocument, Span } from './format/model.ts'
import { SyntaxTree } from './format/tree.ts'
import { type Columns, columnsBetween, offsetAfter } from './format/text.ts'
import { Crystal } from './meaning/crystal.ts'
import { lazy } from './meaning/lazy.ts'
import type { Workshop } from './meaning/workshop.ts'

/** What each rule says of itself, for those who explain them. */
export const RULES: readonly Pick<Check, 'id' | 'severity' | 'summary' | 'why'>[] = CHECKS

export interface Settings {
  /** Severities that the workspace or the caller asks for. */
  readonly severities: Severities
}
export const DEFAULT_SETTINGS: Settings = { severities: new Map() }

export interface DocumentFinding extends Reported {
  /** Ordinal of the document in its file, from 1. */
  readonly document: number
}

export interface DocumentAnalysis {
  readonly document: LatticeDocument
  readonly crystal: Crystal
}

/** One version of one text under one set of settings. It never changes. */
export class Snapshot {
  constructor(
    readonly text: string,
    private readonly workshop: Workshop,
    readonly settings: Settings = DEFAULT_SETTINGS,
    readonly version = 0,
    /** What columns count. */
    private readonly columns: Columns = 'utf-16',
  ) {}

  readonly #decoded = lazy(() => decode(this.text))
  get decoded(): DecodedFile {
    return this.#decoded()
  }

  readonly #tree = lazy(() => SyntaxTree.of(this.text))
  /** The form of the text; undefined where it is too large or too deep to be read. */
  get tree(): SyntaxTree | undefined {
    return this.#tree()
  }

  readonly #documents = lazy((): readonly DocumentAnalysis[] =>
    this.decoded.documents.map(document => ({ document, crystal: new Crystal(document, this.workshop) })),
  )
  get documents(): readonly DocumentAnalysis[] {
    return this.#documents()
  }

  readonly #findings = lazy((): readonly DocumentFinding[] => {
    const { decoded, text } = this
    const loose = decoded.problems.map(problem => ({ ...problem, severity: 'error' as const, document: 1 }))
    const found = this.documents.flatMap(({ document, crystal }) =>
      runChecks(CHECKS, { text, file: decoded, document, crystal }, this.settings.severities).map(
        finding => ({
          ...finding,
          document: document.number,
        }),
      ),
    )
    const kept = withoutAllowed([...loose, ...found], decoded, offset => this.lineOf(offset))
    return (kept as DocumentFinding[]).sort((a, b) => a.at[0] - b.at[0] || a.at[1] - b.at[1])
  })
  /** All findings of the file in the order of the text. */
  get findings(): readonly DocumentFinding[] {
    return this.#findings()
  }

  /** True while a symmetry search is still running: asking again later may give more findings. */
  get pending(): boolean {
    return this.documents.some(
      ({ crystal }) => crystal.lattice && crystal.symmetryOutcome.state === 'pending',
    )
  }

  readonly #lines = lazy(() => {
    const starts = [0]
    for (let i = this.text.indexOf('\n'); i >= 0; i = this.text.indexOf('\n', i + 1)) starts.push(i + 1)
    return starts
  })

  /** 0-based line of an offset. */
  lineOf(offset: number): number {
    const starts = this.#lines()
    let low = 0
    let high = starts.length - 1
    while (low < high) {
      const middle = (low + high + 1) >> 1
      if (starts[middle] <= offset) low = middle
      else high = middle - 1
    }
    return low
  }

  /** 0-based line and column. */
  positionOf(offset: number): { line: number; character: number } {
    const line = this.lineOf(offset)
    return { line, character: columnsBetween(this.text, this.#lines()[line], offset, this.columns) }
  }

  offsetOf(position: { line: number; character: number }): number {
    const starts = this.#lines()
    if (position.line >= starts.length) return this.text.length
    const end = position.line + 1 < starts.length ? starts[position.line + 1] : this.text.length
    return offsetAfter(this.text, [starts[position.line], end], position.character, this.columns)
  }

  /** The document that an offset stands in. */
  documentAt(offset: number): DocumentAnalysis | undefined {
    return this.documents.find(({ document }) => covers(document.at, offset)) ?? this.documents.at(-1)
  }
}

export const covers = (span: Span, offset: number): boolean => span[0] <= offset && offset <= span[1]
