/** What stands at an offset of a document: the one place where features ask it. */
import { covers } from '../analysis.ts'
import type {
  AtomEntry,
  Entry,
  LatticeDocument,
  MeshBlock,
  NumberValue,
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
  | { readonly kind: 'element'; readonly at: Span; readonly symbol: string }
  | { readonly kind: 'rule'; readonly at: Span; readonly id: string }
  /** One of the words that a key takes, whether or not it is one. */
  | { readonly kind: 'word'; readonly at: Span; readonly path: readonly string[] }
  | { readonly kind: 'space-group'; readonly at: Span }
  | { readonly kind: 'mesh'; readonly at: Span; readonly block: MeshBlock }
  | { readonly kind: 'recommended'; readonly at: Span }
  | { readonly kind: 'sampling'; readonly at: Span }
  | { readonly kind: 'supercell'; readonly at: Span }

export function locate(document: LatticeDocument, offset: number): Place | undefined {
  return (
    inLattice(document, offset) ??
    inPoints(document, offset) ??
    inPath(document, offset) ??
    inAtoms(document, offset) ??
    inSettings(document, offset) ??
    inBlocks(document, offset) ??
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
  for (const [name, { at }] of lattice.keys) {
    if (name === 'vectors' || !covers(at, offset)) continue
    if (name === 'bravais' || name === 'centring') return { kind: 'word', at, path: ['lattice', name] }
    return { kind: 'lattice-value', at, name }
  }
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
  if (path.recommended) return { kind: 'recommended', at: path.at }
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
  const entry = atoms.items[index]
  if (entry.element && covers(entry.element.at, offset))
    return { kind: 'element', at: entry.element.at, symbol: entry.element.value }
  return { kind: 'atom', at: entry.at, entry, index }
}

/** Keys whose values are words. */
const WORDS = ['unit', 'labels', 'time-reversal'] as const

function inSettings(document: LatticeDocument, offset: number): Place | undefined {
  for (const name of WORDS) {
    const at = document.keys.get(name)?.at
    if (at && covers(at, offset)) return { kind: 'word', at, path: [name] }
  }
  const { framesEntry, spaceGroup, checks } = document
  if (spaceGroup && covers(spaceGroup.at, offset)) return { kind: 'space-group', at: spaceGroup.at }
  if (framesEntry) {
    const key = onKey(framesEntry.keys, offset, ['frames'])
    if (key) return key
    for (const [name, { at }] of framesEntry.keys)
      if (covers(at, offset)) return { kind: 'word', at, path: ['frames', name] }
  }
  for (const [id, { key, at }] of checks) {
    if (covers(key, offset)) return { kind: 'rule', at: key, id }
    if (covers(at, offset)) return { kind: 'word', at, path: ['checks', id] }
  }
  return undefined
}

function inBlocks({ meshes, sampling, supercell }: LatticeDocument, offset: number): Place | undefined {
  for (const block of meshes) {
    const key = onKey(block.keys, offset, ['mesh'])
    if (key) return key
    if (covers(block.at, offset)) return { kind: 'mesh', at: block.at, block }
  }
  if (sampling && covers(sampling.at, offset))
    return onKey(sampling.keys, offset, ['sampling']) ?? { kind: 'sampling', at: sampling.at }
  if (supercell && covers(supercell.at, offset)) return { kind: 'supercell', at: supercell.at }
  return undefined
}

/** The number at an offset, wherever the document may hold one. */
export function numberAt(document: LatticeDocument, offset: number): NumberValue | undefined {
  const { lattice, atoms, points, sampling, meshes, supercell, tolerance } = document
  const within = <T extends { readonly at: Span }>(all: readonly (T | undefined)[]): T | undefined =>
    all.find(each => each && covers(each.at, offset))
  if (lattice && covers(lattice.at, offset)) {
    const row = within(lattice.vectors?.rows ?? [])
    return row ? within(row.items) : within([...Object.values(lattice.parameters), lattice.height])
  }
  if (atoms && covers(atoms.at, offset)) return within(within(atoms.items)?.position?.items ?? [])
  if (points && covers(points.at, offset)) {
    const entry = within(points.items)
    return entry && within([...(entry.coordinates?.items ?? []), entry.between?.fraction])
  }
  if (supercell && covers(supercell.at, offset)) return within(within(supercell.rows)?.items ?? [])
  const ofMeshes = meshes.flatMap(mesh => [
    ...(mesh.divisions?.items ?? []),
    ...(mesh.shift?.items ?? []),
    mesh.spacing,
  ])
  return within([tolerance, sampling?.spacing, sampling?.steps, sampling?.total, ...ofMeshes])
}
