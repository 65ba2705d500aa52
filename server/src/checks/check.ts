import type { DecodedFile, Fix, Foundation, LatticeDocument, Severity, Span } from '../format/model.ts'
import type { Crystal } from '../meaning/crystal.ts'

/** What a rule reads: one document, what it means, and the text for the sake of fixes. */
export interface Context {
  readonly text: string
  readonly file: DecodedFile
  readonly document: LatticeDocument
  readonly crystal: Crystal
  /** The ids of all rules, for rules about naming rules. */
  readonly ruleIds: ReadonlySet<string>
}

export interface Related {
  readonly at: Span
  readonly message: string
}

/** What a rule says of one place. `F` is what programs may read; people read the message. */
export interface Finding<F = unknown> {
  readonly at: Span
  readonly message: string
  /** Where it differs from the rule's own. */
  readonly severity?: Severity
  readonly facts?: F
  readonly fixes?: readonly Fix[]
  readonly related?: readonly Related[]
  /** What the finding is about, e.g. `point:Q`, so that another finding can hide it. */
  readonly subject?: string
  /** Findings that this one makes superfluous. */
  readonly hides?: readonly { readonly rule: string; readonly subject: string }[]
}

export interface Check<F = unknown> {
  readonly id: string
  readonly severity: Severity
  /** One sentence: what it finds. */
  readonly summary: string
  /** Why it matters to a job. */
  readonly why: string
  /** Keys on which its judgement rests: where the value of one cannot be read, the rule says nothing. */
  readonly needs?: readonly Foundation[]
  /** A file that gives exactly this finding, and one that is clean. */
  readonly wrong: string
  readonly right: string
  run(context: Context): Iterable<Finding<F>>
}

/** A finding with the rule that made it and the severity that holds in this file. */
export interface Reported extends Finding {
  readonly rule: string
  readonly severity: Severity
}
