/** What can be folded: entries and list items over several lines, runs of comments, regions, documents. */
import { type FoldingRange, FoldingRangeKind } from 'vscode-languageserver-types'
import type { Snapshot } from '../analysis.ts'
import { lineStart } from '../format/text.ts'

export interface FoldingOptions {
  /** The client folds whole lines: what ends with a closing bracket keeps that line. */
  readonly lineFoldingOnly: boolean
  /** The most that the client takes; the widest are kept. */
  readonly limit?: number
}

/** Nobody looks for more, and no client shows more. */
const MOST = 5_000

export function foldingRanges(
  snapshot: Snapshot,
  { lineFoldingOnly, limit = MOST }: FoldingOptions,
): FoldingRange[] {
  const { tree, text } = snapshot
  if (!tree) return []
  const found = new Map<number, FoldingRange>()
  const add = (startLine: number, endLine: number, kind?: FoldingRangeKind): void => {
    const known = found.get(startLine)
    if (endLine <= startLine || (known && known.endLine >= endLine)) return
    found.set(startLine, kind ? { startLine, endLine, kind } : { startLine, endLine })
  }
  const { documents } = snapshot
  if (documents.length > 1) {
    for (const { document } of documents) {
      const end = document.at[0] + text.slice(...document.at).trimEnd().length
      add(snapshot.lineOf(document.at[0]), snapshot.lineOf(end))
    }
  }
  for (const { at, bracket } of tree.blocks()) {
    const end = snapshot.lineOf(at[1])
    const isAlone = bracket && /^\s*[\]}]/.test(text.slice(lineStart(text, at[1]), at[1]))
    add(snapshot.lineOf(at[0]), isAlone && lineFoldingOnly ? end - 1 : end)
  }
  for (const [start, end, kind] of comments(snapshot)) add(start, end, kind)
  const ranges = [...found.values()]
  if (ranges.length > limit)
    ranges.sort((a, b) => b.endLine - b.startLine - (a.endLine - a.startLine)).splice(Math.max(0, limit))
  return ranges.sort((a, b) => a.startLine - b.startLine)
}

const REGION = /^#\s*region\b/
const REGION_END = /^#\s*endregion\b/

/** Comments that have their lines to themselves and follow each other, and what stands between region marks. */
function comments(snapshot: Snapshot): [start: number, end: number, kind: FoldingRangeKind][] {
  const { text, tree } = snapshot
  const found: [number, number, FoldingRangeKind][] = []
  const regions: number[] = []
  let first = -1
  let last = -2
  const close = () => {
    if (last > first) found.push([first, last, FoldingRangeKind.Comment])
  }
  for (const at of tree!.comments) {
    if (!/^\s*$/.test(text.slice(lineStart(text, at[0]), at[0]))) continue
    const line = snapshot.lineOf(at[0])
    const comment = text.slice(...at)
    if (REGION.test(comment)) regions.push(line)
    const start = REGION_END.test(comment) ? regions.pop() : undefined
    if (start !== undefined) found.push([start, line, FoldingRangeKind.Region])
    if (line !== last + 1) {
      close()
      first = line
    }
    last = line
  }
  close()
  return found
}
