/** The id of a rule, under `checks` or in a comment that allows it, leads to the rule's page. */
import type { DocumentLink } from 'vscode-languageserver-types'
import type { Snapshot } from '../analysis.ts'
import { standsHere } from '../format/edits.ts'
import type { Span } from '../format/model.ts'
import { rangeOf } from './diagnostics.ts'

/** @param rulePages as for `diagnostics`. @param known ids of the rules that have a page. */
export function documentLinks(
  snapshot: Snapshot,
  rulePages: string | undefined,
  known: ReadonlySet<string>,
): DocumentLink[] {
  if (!rulePages) return []
  const { decoded, text } = snapshot
  const places = new Map<number, { at: Span; rule: string }>()
  const add = (rule: string, at: Span) => {
    if (known.has(rule) && standsHere(text, at)) places.set(at[0], { at, rule })
  }
  for (const { checks } of decoded.documents) for (const [rule, { key }] of checks) add(rule, key)
  // A comment about several lines is listed once a line.
  for (const { rules } of decoded.allowances) for (const { value, at } of rules) add(value, at)
  return [...places.values()].map(({ at, rule }) => ({
    range: rangeOf(snapshot, at),
    target: `${rulePages}/${rule}.md`,
    tooltip: `What the rule ${rule} says`,
  }))
}
