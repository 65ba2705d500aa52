/** Where a name stands in a document: labels of k-points in whatever spelling, anchors and their aliases. */
import type { DocumentAnalysis, Snapshot } from '../analysis.ts'
import { standsHere } from '../format/edits.ts'
import type { LatticeDocument, Span } from '../format/model.ts'

export interface Mention {
  /** For a label in quotes with them. */
  readonly at: Span
  /** The place that gives the name its meaning. */
  readonly defines: boolean
  /** It is a scalar by itself, not a word of a path. */
  readonly alone: boolean
}

export type Name =
  | {
      readonly kind: 'label'
      /** In its one spelling. */
      readonly label: string
      readonly analysis: DocumentAnalysis
      readonly mentions: readonly Mention[]
      /** Places of aliases behind which the label stands too. */
      readonly behind: readonly Span[]
    }
  | { readonly kind: 'anchor'; readonly name: string; readonly mentions: readonly Mention[] }

export interface NameHere {
  readonly name: Name
  /** The place that was asked about. */
  readonly here: Mention
}

const touches = ([start, end]: Span, offset: number): boolean => start <= offset && offset <= end

export function nameAt(snapshot: Snapshot, offset: number): NameHere | undefined {
  const analysis = snapshot.documentAt(offset)
  if (!analysis) return undefined
  const { text } = snapshot
  const label = labelsOf(analysis.document).find(({ at }) => touches(at, offset) && standsHere(text, at))
  if (!label) return anchorAt(snapshot, offset)
  const all = labelsOf(analysis.document).filter(other => other.label === label.label)
  const mentions = all.filter(({ at }) => standsHere(text, at)).sort((a, b) => a.at[0] - b.at[0])
  const behind = all.filter(({ at }) => !standsHere(text, at)).map(({ at }) => at)
  return { name: { kind: 'label', label: label.label, analysis, mentions, behind }, here: label }
}

function anchorAt({ tree }: Snapshot, offset: number): NameHere | undefined {
  for (const { name, anchor, aliases } of tree?.anchors() ?? []) {
    const mentions = [
      { at: anchor, defines: true, alone: false },
      ...aliases.map(at => ({ at, defines: false, alone: false })),
    ]
    // The sign before the name belongs to it.
    const here = mentions.find(({ at }) => touches([at[0] - 1, at[1]], offset))
    if (here) return { name: { kind: 'anchor', name, mentions }, here }
  }
  return undefined
}

interface LabelMention extends Mention {
  readonly label: string
}

/** Every label of a document: under `points`, in `between` and in the path. */
export function labelsOf({ points, path }: LatticeDocument): LabelMention[] {
  const found: LabelMention[] = []
  for (const { label, key, between } of points?.items ?? []) {
    found.push({ label, at: key, defines: true, alone: true })
    for (const end of between?.ends ?? [])
      found.push({ label: end.label, at: end.at, defines: false, alone: true })
  }
  for (const { labels } of path?.pieces ?? [])
    for (const { label, at } of labels) found.push({ label, at, defines: false, alone: false })
  return found
}
