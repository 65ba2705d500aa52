/** What stands at an offset of a document: the one place where features ask it. */
import { covers } from '../analysis.ts'
import type {
  AtomEntry,
  Entry,
  LatticeDocument,
  PathLabel,
  PathPiece,
  PathSegment,
  PointEntry,
  Span,
  VectorValue,
} from '../format/model.ts'

export type Place =
  | { readonly kind: 'row'; readonly at: Span; readonly index: number; readonly row: VectorValue }
  | { readonly kind: 'lattice-value'; readonly at: Span; readonly name: string }
  | { readonly kind: 'atom'; readonly at: Span; readonly entry: AtomEntry; readonly index: number }
  | { readonly kind: 'point'; readonly at: Span; readonly entry: PointEntry }
  | { readonly kind: 'label'; readonly at: Span; readonly label: PathLabel; readonly piece?: PathPiece }
  | { readonly kind: 'segment'; readonly at: Span; readonly segment: PathSegment }
  | { readonly kind: 'key'; readonly at: Span; readonly path: readonly string[] }

export function locate(document: LatticeDocument, offset: number): Place | undefined {
  return (
    inLattice(document, offset) ??
    inPoints(document, offset) ??
    inPath(document, offset) ??
    inAtoms(document, offset) ??
    onKey(document.keys, offset, [])
  )
}

function onKey(
  keys: ReadonlyMap<string, Entry>,
  offset: number,
  above: readonly string[],
): Place | undefined {
  for (const [name, { key }] of keys)
    if (covers(key, offset)) return { kind: 'key', at: key, path: [...above, name] }
  return undefined
}

function inLattice({ lattice }: LatticeDocument, offset: number): Place | undefined {
  if (!lattice || !covers(lattice.at, offset)) return undefined
  for (const [index, row] of (lattice.vectors?.rows ?? []).entries())
    if (row && covers(row.at, offset)) return { kind: 'row', at: row.at, index, row }
  const key = onKey(lattice.keys, offset, ['lattice'])
  if (key) return key
  for (const [name, { at }] of lattice.keys)
    if (name !== 'vectors' && covers(at, offset)) return { kind: 'lattice-value', at, name }
  return undefined
}

function inPoints({ points }: LatticeDocument, offset: number): Place | undefined {
  if (!points || !covers(points.at, offset)) return undefined
  for (const entry of points.items) {
    const end = entry.between?.ends.find(label => covers(label.at, offset))
    if (end) return { kind: 'label', at: end.at, label: end }
    if (covers(entry.key, offset)) return { kind: 'point', at: entry.key, entry }
    if (covers(entry.at, offset)) return { kind: 'point', at: entry.at, entry }
  }
  return undefined
}

function inPath({ path }: LatticeDocument, offset: number): Place | undefined {
  if (!path || !covers(path.at, offset)) return undefined
  for (const piece of path.pieces) {
    const label = piece.labels.find(({ at }) => covers(at, offset))
    if (label) return { kind: 'label', at: label.at, label, piece }
    const segment = piece.segments.find(({ separator }) => covers(separator, offset))
    if (segment) return { kind: 'segment', at: segment.at, segment }
  }
  return undefined
}

function inAtoms({ atoms }: LatticeDocument, offset: number): Place | undefined {
  if (!atoms || !covers(atoms.at, offset)) return undefined
  const index = atoms.items.findIndex(({ at }) => covers(at, offset))
  if (index < 0) return undefined
  return { kind: 'atom', at: atoms.items[index].at, entry: atoms.items[index], index }
}
