/** The label book's own path through the zone. */
import { displayLabel, formatPath } from '../format/path.ts'
import type { Crystal } from './crystal.ts'

export interface RecommendedPath {
  /** As it may stand in a file, and as it is printed. */
  readonly text: string
  /** Labels, a list for each unbroken piece. A label means the file's own point where there is one. */
  readonly pieces: readonly (readonly string[])[]
}

/** undefined where there is no book or it recommends no path. */
export function recommendedPath({ book }: Crystal): RecommendedPath | undefined {
  if (!book || book.path.length === 0) return undefined
  return { text: formatPath(book.path, displayLabel), pieces: book.path }
}

/** What of a path leads to some labels: its pieces, cut down to the segments that begin or end at one of them. */
export function piecesThrough(pieces: RecommendedPath['pieces'], labels: ReadonlySet<string>): string[][] {
  return pieces.flatMap(piece => {
    const parts: string[][] = []
    let open: string[] | undefined
    piece.slice(1).forEach((to, i) => {
      const from = piece[i]
      if (!labels.has(from) && !labels.has(to)) open = undefined
      else if (open) open.push(to)
      else parts.push((open = [from, to]))
    })
    return parts
  })
}
