/** How the files that wire the protocol answer: nothing that a request brings ends the server. */
import type { CancellationToken } from 'vscode-languageserver'
import type { Snapshot } from './analysis.ts'

/** An answer that may fail: then it is logged, and nothing is said. */
export type Guard = <P, R>(
  name: string,
  nothing: R,
  answer: (params: P) => R,
) => (params: P, token?: CancellationToken) => R

/** The answer about the text that a request names; nothing where that text is not open. */
export type About = <P extends { uri: string } | { textDocument: { uri: string } }, R>(
  name: string,
  nothing: R,
  answer: (snapshot: Snapshot, params: P) => R,
) => (params: P, token?: CancellationToken) => R
