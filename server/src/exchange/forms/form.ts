/** What filling a form takes and gives, without the engine that does it: for the sides of a thread, and for tests. */
import type { FormData } from './data.ts'

/** Partials by their names, relative to the form's folder; null for one that was asked for and is not there. */
export type Partials = Readonly<Record<string, string | null>>

export interface FormJob {
  /** As errors name it. */
  readonly name: string
  readonly text: string
  readonly partials: Partials
  readonly data: FormData
  /** Why a top-level value is absent, by its name: `the file has no path`. */
  readonly reasons: Readonly<Record<string, string>>
  readonly limits?: FormLimits
}

export interface FormLimits {
  readonly milliseconds: number
  /** Of the text that comes out. */
  readonly characters: number
}

/** Line and column from 1, columns in characters. */
export interface FormFault {
  readonly form: string
  readonly line: number
  readonly column: number
  /** One line. */
  readonly message: string
}

export type FormOutcome = { readonly text: string } | { readonly fault: FormFault }

/** Fills a form, or says what is wrong with it. Never rejects. */
export type FillForm = (job: FormJob) => Promise<FormOutcome>

/** Longer forms are no forms, and reading one must not take seconds; in UTF-16 units, each partial too. */
export const LONGEST_FORM = 200_000

/** The longest list of k-points takes some seconds, on a busy machine more; the text must still fit in an editor. */
export const FORM_LIMITS: FormLimits = { milliseconds: 30_000, characters: 32_000_000 }
/** Beside a file that is being edited nobody waits longer. */
export const PREVIEW_LIMITS: FormLimits = { ...FORM_LIMITS, milliseconds: 10_000 }

/** `bands.liquid:12:5: there is no lattice.vectrs; did you mean vectors?` */
export const faultLine = ({ form, line, column, message }: FormFault): string =>
  `${form}:${line}:${column}: ${message}`
