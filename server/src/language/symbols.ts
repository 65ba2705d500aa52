import { type DocumentSymbol, type Range, SymbolKind } from 'vscode-languageserver-types'
import type { DocumentAnalysis, Snapshot } from '../analysis.ts'
import type { Entry, Span } from '../format/model.ts'
import { displayLabel } from '../format/path.ts'
import { count } from '../meaning/wording.ts'
import { rangeOf } from './diagnostics.ts'

/** Beyond this many atoms the outline groups them. */
const GROUP = 100

/** The outline: one entry a crystal where the file holds several, else the parts of the one crystal. */
export function symbols(snapshot: Snapshot): DocumentSymbol[] {
  const { documents } = snapshot
  if (documents.length === 1) return partsOf(snapshot, documents[0])
  return documents.map(analysis => {
    const { document } = analysis
    const name = document.title?.value || `Crystal ${document.number}`
    return symbol(snapshot, name, SymbolKind.Namespace, document.at, document.title?.at ?? document.at, {
      detail: analysis.crystal.bravais,
      children: partsOf(snapshot, analysis),
    })
  })
}

function partsOf(snapshot: Snapshot, { document, crystal }: DocumentAnalysis): DocumentSymbol[] {
  const parts: DocumentSymbol[] = []
  const part = (name: string, kind: SymbolKind, { key, at }: Entry, more: Partial<DocumentSymbol> = {}) =>
    parts.push(symbol(snapshot, name, kind, [key[0], Math.max(key[1], at[1])], key, more))

  if (document.lattice) {
    const type = document.lattice.bravais?.value ?? crystal.type?.bravais
    part('lattice', SymbolKind.Struct, document.lattice, { detail: type })
  }
  if (document.atoms) {
    const { items } = document.atoms
    part('atoms', SymbolKind.Array, document.atoms, {
      detail: count(items.length, 'atom'),
      children: grouped(
        items.map(({ at, element, name }) =>
          symbol(snapshot, element?.value ?? '?', SymbolKind.Object, at, element?.at ?? at, {
            detail: name?.value,
          }),
        ),
      ),
    })
  }
  if (document.points) {
    part('points', SymbolKind.Module, document.points, {
      detail: count(document.points.items.length, 'point'),
      children: document.points.items.map(({ label, key, at }) =>
        symbol(snapshot, displayLabel(label), SymbolKind.Key, [key[0], Math.max(key[1], at[1])], key, {
          detail: shortText(snapshot, at),
        }),
      ),
    })
  }
  if (document.path) {
    part('path', SymbolKind.Array, document.path, {
      children: document.path.pieces.map(({ labels, at }) =>
        symbol(
          snapshot,
          labels.map(({ label }) => displayLabel(label)).join(' – '),
          SymbolKind.Event,
          at,
          at,
        ),
      ),
    })
  }
  for (const [name, entry] of document.keys) {
    if (!PARTS_OF_THEIR_OWN.has(name)) part(name, SymbolKind.Property, entry, detailOf(snapshot, entry))
  }
  return parts.sort(
    (a, b) => a.range.start.line - b.range.start.line || a.range.start.character - b.range.start.character,
  )
}

const PARTS_OF_THEIR_OWN = new Set(['lattice', 'atoms', 'points', 'path'])

/** The value as it is written, on one line. */
const detailOf = (snapshot: Snapshot, { at }: Entry): Partial<DocumentSymbol> => ({
  detail: shortText(snapshot, at),
})

const LONGEST_DETAIL = 40
/** Of a longer value its beginning. */
function shortText({ text }: Snapshot, [start, end]: Span): string {
  const line = text
    .slice(start, Math.min(end, start + 4 * LONGEST_DETAIL))
    .replace(/\s+/g, ' ')
    .trim()
  return line.length > LONGEST_DETAIL ? `${line.slice(0, LONGEST_DETAIL)}…` : line
}

function grouped(atoms: DocumentSymbol[]): DocumentSymbol[] {
  if (atoms.length <= GROUP) return atoms
  const groups: DocumentSymbol[] = []
  for (let start = 0; start < atoms.length; start += GROUP) {
    const children = atoms.slice(start, start + GROUP)
    const range: Range = { start: children[0].range.start, end: children.at(-1)!.range.end }
    groups.push({
      name: `atoms ${start + 1}–${start + children.length}`,
      kind: SymbolKind.Array,
      range,
      selectionRange: children[0].selectionRange,
      children,
    })
  }
  return groups
}

function symbol(
  snapshot: Snapshot,
  name: string,
  kind: SymbolKind,
  whole: Span,
  selection: Span,
  more: Partial<DocumentSymbol> = {},
): DocumentSymbol {
  // Clients refuse an empty name and a selection outside its range.
  const inside: Span = selection[0] >= whole[0] && selection[1] <= whole[1] ? selection : [whole[0], whole[0]]
  return {
    name: name.trim() || '?',
    kind,
    range: rangeOf(snapshot, whole),
    selectionRange: rangeOf(snapshot, inside),
    ...more,
  }
}
