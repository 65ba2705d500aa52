/** The requests of our own between server and client, as types. Every message about a text carries its version. */
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

/** What the status item of an editor shows of one file; a notification from the server after each check. */
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
}
export const STATUS = 'braggline/status'

export interface RecommendedPathParams {
  readonly uri: string
  readonly version: number
  readonly position: { readonly line: number; readonly character: number }
}
/** The edit that writes the label book's own path into the document at the position; null where there is none. */
export const RECOMMENDED_PATH = 'braggline/recommendedPath'
