/** Renaming a k-point of the file, or an anchor, everywhere in its document. */
import { type Range, TextEdit } from 'vscode-languageserver-types'
import type { Snapshot } from '../analysis.ts'
import type { Span } from '../format/model.ts'
import { displayLabel, normaliseLabel } from '../format/path.ts'
import { scalarText } from '../format/quote.ts'
import { rangeOf } from './diagnostics.ts'
import { labelsOf, type Mention, type Name, nameAt } from './mentions.ts'

/** Why there is nothing to rename, or why not to this name. */
export interface Refusal {
  readonly refused: string
}

const refuse = (refused: string): Refusal => ({ refused })

/** The name that would be replaced; null where there is none. */
export function prepareRename(
  snapshot: Snapshot,
  offset: number,
): { range: Range; placeholder: string } | Refusal | null {
  const found = nameAt(snapshot, offset)
  if (!found) return null
  const reason = reasonAgainst(found.name)
  if (reason) return refuse(reason)
  const at = withoutQuotes(snapshot.text, found.here.at)
  const written = snapshot.text.slice(...at)
  const { name } = found
  // An escape such as \u0393 is no name to go on from.
  const placeholder = name.kind === 'label' && written.includes('\\') ? name.label : written
  return { range: rangeOf(snapshot, at), placeholder }
}

export function rename(snapshot: Snapshot, offset: number, typed: string): TextEdit[] | Refusal | null {
  const found = nameAt(snapshot, offset)
  if (!found) return null
  const { name } = found
  const wanted = typed.trim()
  const reason =
    reasonAgainst(name) ?? (name.kind === 'label' ? labelFault : anchorFault)(snapshot, name, wanted)
  if (reason) return refuse(reason)
  const text = name.kind === 'label' ? spelling(wanted) : wanted
  return name.mentions.map(mention => {
    const [range, newText] = name.kind === 'label' ? written(snapshot, mention, text) : [mention.at, text]
    return TextEdit.replace(rangeOf(snapshot, range), newText)
  })
}

function reasonAgainst(name: Name): string | undefined {
  if (name.kind === 'anchor') return undefined
  const { label, analysis, mentions, behind } = name
  const shown = displayLabel(label)
  if (behind.length > 0)
    return `${shown} is also meant by an alias: what stands behind it would not be renamed.`
  if (mentions.some(({ defines }) => defines)) return undefined
  const { crystal, document } = analysis
  if (crystal.bookPoints.has(label))
    return `${shown} is a label of the book; define it under points to rename it.`
  if (!crystal.book && document.labels !== 'none')
    return `${shown} has no entry under points; define it there to rename it.`
  return undefined
}

type NameOf<K extends Name['kind']> = Extract<Name, { kind: K }>

function labelFault(_: Snapshot, name: Name, wanted: string): string | undefined {
  const { label, analysis } = name as NameOf<'label'>
  const next = normaliseLabel(wanted)
  if (next === undefined)
    return `\`${wanted}\` is no label: a label is a letter, then letters, digits and primes; digits at the end are a subscript.`
  if (next === label) return undefined
  const isTaken = labelsOf(analysis.document).find(other => other.label === next)
  if (!isTaken) return undefined
  const shown = displayLabel(next)
  return isTaken.defines || analysis.crystal.fileDefines(next)
    ? `${shown} is defined in this document already.`
    : `${shown} stands in this document already, and means another point.`
}

function anchorFault({ tree }: Snapshot, name: Name, wanted: string): string | undefined {
  if (!/^[^\s,[\]{}*&]+$/u.test(wanted))
    return `\`${wanted}\` is no name of an anchor: it has no blanks, commas and brackets.`
  const uses = tree?.anchors() ?? []
  const isTaken = uses.some(use => use.name === wanted && use.name !== (name as NameOf<'anchor'>).name)
  return isTaken ? `An anchor is called \`&${wanted}\` already.` : undefined
}

/** As it was typed, but that look-alikes of letters become the letters. */
const spelling = (wanted: string): string =>
  /^[A-Za-zΓΔΣΛα-ω0-9₀-₉_']+$/.test(wanted) ? wanted : normaliseLabel(wanted)!

const QUOTES = /^["']/

/** The characters between the quotes that a whole label stands in. */
const withoutQuotes = (text: string, [start, end]: Span): Span =>
  QUOTES.test(text[start]) ? [start + 1, end - 1] : [start, end]

/**
 * The new label as it may stand at a place. A label that is a scalar by itself is quoted where some reader of YAML would
 * take it for a truth value; one in a path is a word among others.
 */
function written({ text, tree }: Snapshot, { at, alone }: Mention, label: string): [Span, string] {
  if (alone) return [at, scalarText(label)]
  const scalar = tree?.around(at[0]).at(-1)
  return [at, scalar && text[scalar[0]] === "'" ? label.replaceAll("'", "''") : label]
}
