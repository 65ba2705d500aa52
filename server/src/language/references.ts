/** Definition, references and highlights of the name at a place. */
import { type DocumentHighlight, DocumentHighlightKind, type Location } from 'vscode-languageserver-types'
import type { Snapshot } from '../analysis.ts'
import { rangeOf } from './diagnostics.ts'
import { nameAt } from './mentions.ts'

/** Where a k-point is defined in the file, or the anchor that an alias means. A label of the book has no place. */
export function definition(snapshot: Snapshot, uri: string, offset: number): Location[] {
  const mentions = nameAt(snapshot, offset)?.name.mentions ?? []
  return mentions.filter(({ defines }) => defines).map(({ at }) => ({ uri, range: rangeOf(snapshot, at) }))
}

export function references(
  snapshot: Snapshot,
  uri: string,
  offset: number,
  includeDeclaration: boolean,
): Location[] {
  const mentions = nameAt(snapshot, offset)?.name.mentions ?? []
  return mentions
    .filter(({ defines }) => includeDeclaration || !defines)
    .map(({ at }) => ({ uri, range: rangeOf(snapshot, at) }))
}

export function highlights(snapshot: Snapshot, offset: number): DocumentHighlight[] {
  const mentions = nameAt(snapshot, offset)?.name.mentions ?? []
  return mentions.map(({ at, defines }) => ({
    range: rangeOf(snapshot, at),
    kind: defines ? DocumentHighlightKind.Write : DocumentHighlightKind.Read,
  }))
}
