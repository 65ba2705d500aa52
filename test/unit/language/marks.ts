/** Tests of language features are texts with marks: `⟦…⟧` round what is found, `$0` where it is asked. */
import type { Range } from 'vscode-languageserver-types'
import { readdirSync, readFileSync } from 'node:fs'
import { join } from 'node:path'
import { snapshotOf } from '../checks/harness.ts'

/** The offset of `$0`, and the text without it. */
export function atCursor(source: string): { text: string; offset: number } {
  const offset = source.indexOf('$0')
  if (offset < 0) throw new Error('The text has no $0.')
  return { text: source.replace('$0', ''), offset }
}

/** The text with brackets round each of the ranges, which do not overlap. */
export function bracketed(text: string, ranges: readonly Range[]): string {
  const snapshot = snapshotOf(text)
  const spans = ranges.map(({ start, end }) => [snapshot.offsetOf(start), snapshot.offsetOf(end)] as const)
  let marked = text
  for (const [start, end] of spans.sort((a, b) => b[0] - a[0]))
    marked = `${marked.slice(0, start)}⟦${marked.slice(start, end)}⟧${marked.slice(end)}`
  return marked
}

/** The files of the demo with their texts. */
export const DEMO_FILES = ['demo', 'demo/drafts'].flatMap(folder =>
  readdirSync(folder)
    .filter(name => name.endsWith('.lattice.yaml'))
    .map(name => [name, readFileSync(join(folder, name), 'utf8')] as const),
)
