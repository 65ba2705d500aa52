/** Crystals and named points across files, by a part of their name. */
import { SymbolKind, type WorkspaceSymbol } from 'vscode-languageserver-types'
import type { Span } from '../format/model.ts'
import { displayLabel } from '../format/path.ts'
import type { DecodedFile } from '../format/model.ts'
import type { TextRange } from '../protocol.ts'

/** Nobody reads on after so many. */
const MOST = 500

export interface NamedFile {
  readonly uri: string
  readonly decoded: DecodedFile
  rangeOf(span: Span): TextRange
}

/** @param query letters that a name holds in this order, in any case; '' for all. */
export function workspaceSymbols(files: Iterable<NamedFile>, query: string): WorkspaceSymbol[] {
  const found: WorkspaceSymbol[] = []
  const letters = [...query.toLowerCase().replace(/\s+/g, '')]
  for (const { uri, decoded, rangeOf } of files) {
    const fileName = decodeURIComponentSafely(uri.slice(uri.lastIndexOf('/') + 1))
    for (const { title, points, number, contents } of decoded.documents) {
      const name = title?.value.replace(/\s+/g, ' ').trim() || crystalName(fileName, number, decoded)
      const add = (name: string, kind: SymbolKind, at: Span, containerName: string, ...also: string[]) => {
        if (found.length < MOST && [name, ...also].some(text => holds(text, letters)))
          found.push({ name, kind, location: { uri, range: rangeOf(at) }, containerName })
      }
      add(name, SymbolKind.Namespace, title?.at ?? [contents[0], contents[0]], fileName)
      for (const { label, key } of points?.items ?? [])
        add(displayLabel(label), SymbolKind.Key, key, name, label)
    }
    if (found.length >= MOST) break
  }
  return found
}

const crystalName = (fileName: string, number: number, { documents }: DecodedFile): string => {
  const stem = fileName.replace(/\.lattice\.ya?ml$/, '')
  return documents.length > 1 ? `${stem}, crystal ${number}` : stem
}

function decodeURIComponentSafely(text: string): string {
  try {
    return decodeURIComponent(text)
  } catch {
    return text
  }
}

/** True where the letters stand in the text in their order, others between them. */
function holds(text: string, letters: readonly string[]): boolean {
  let next = 0
  for (const character of text.toLowerCase()) if (character === letters[next]) next++
  return next >= letters.length
}
