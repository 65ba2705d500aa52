/** Short facts beside the text that states what they follow from. Each kind can be turned off; nothing here waits. */
import { type InlayHint, InlayHintKind, type Range } from 'vscode-languageserver-types'
import type { DocumentAnalysis, Snapshot } from '../analysis.ts'
import { placeInZone, zoneNumber } from '../crystal/zone.ts'
import { meshOf } from '../meaning/sampling.ts'
import { standsHere } from '../format/edits.ts'
import { displayLabel } from '../format/path.ts'
import { lineEnd } from '../format/text.ts'
import { pointFacts } from '../meaning/facts.ts'
import { content, count, inverseLength } from '../meaning/wording.ts'
import { meshCounts, product, wholeNumber } from './mesh-words.ts'
import type { EditorSettings } from './settings.ts'

/** What a hint needs to be explained later: which one it is, in which version of which text. */
export interface HintData {
  readonly uri: string
  readonly version: number
  /** Its ordinal among all hints of the text. */
  readonly index: number
}

/** More would hide the text. */
const MOST = 500

interface Hint {
  readonly at: number
  readonly label: string
  readonly tooltip: () => string
}

export function inlayHints(
  snapshot: Snapshot,
  uri: string,
  range: Range,
  shown: EditorSettings['inlayHints'],
): InlayHint[] {
  const start = snapshot.offsetOf(range.start)
  const end = snapshot.offsetOf(range.end)
  return allHints(snapshot, shown).flatMap(({ at, label }, index): InlayHint[] => {
    if (at < start || at > end) return []
    const data: HintData = { uri, version: snapshot.version, index }
    return [{ position: snapshot.positionOf(at), label, kind: InlayHintKind.Type, paddingLeft: true, data }]
  })
}

/** The same hint with its explanation, where the text is still what it was. */
export function resolveHint(
  snapshot: Snapshot,
  hint: InlayHint,
  { version, index }: HintData,
  shown: EditorSettings['inlayHints'],
): InlayHint {
  const found = snapshot.version === version ? allHints(snapshot, shown)[index] : undefined
  return found && found.label === hint.label ? { ...hint, tooltip: found.tooltip() } : hint
}

function allHints(snapshot: Snapshot, shown: EditorSettings['inlayHints']): Hint[] {
  const hints = snapshot.documents.flatMap(analysis => [
    ...(shown.volume ? volume(snapshot, analysis) : []),
    ...(shown.zoneNumbers ? zoneNumbers(analysis) : []),
    ...(shown.pathLengths ? pathLengths(snapshot, analysis) : []),
    ...(shown.meshCounts ? counts(analysis) : []),
  ])
  return hints.filter(({ at }) => snapshot.text[at - 1] !== undefined).slice(0, MOST)
}

const CONTENTS = ['', 'length', 'area', 'volume']

function volume({ text }: Snapshot, { document, crystal }: DocumentAnalysis): Hint[] {
  const { lattice, unit } = crystal
  if (!document.lattice || !lattice) return []
  const { key, at } = document.lattice
  const isBlock = lineEnd(text, key[1]) < at[0]
  const { dimension } = lattice
  const what = CONTENTS[dimension]
  return [
    {
      at: isBlock ? key[1] + 1 : at[1],
      label: `${what} ${content(lattice.volume, dimension, unit, digitsFor(lattice.volume))}`,
      tooltip: () =>
        `${what[0].toUpperCase()}${what.slice(1)} of the primitive cell: ${content(lattice.volume, dimension, unit)}.`,
    },
  ]
}

/** Four figures or so. */
const digitsFor = (x: number): number => Math.max(0, Math.min(4, 3 - Math.floor(Math.log10(Math.abs(x)))))

function zoneNumbers({ document, crystal }: DocumentAnalysis): Hint[] {
  const { zone } = crystal
  if (!zone) return []
  return (document.points?.items ?? []).flatMap(({ label, at }): Hint[] => {
    const point = crystal.points.get(label)
    if (!point || placeInZone(zone, point.cartesian).place !== 'outside') return []
    const number = zoneNumber(zone, point.cartesian)
    return [
      {
        at: at[1],
        label: number === undefined ? 'beyond zone 100,000' : `zone ${number}`,
        tooltip: () => {
          const facts = pointFacts(crystal, point).filter(([name]) => name === 'place' || name === 'folded')
          return `${displayLabel(label)}: ${facts.map(([name, value]) => (name === 'place' ? value : `${name} ${value}`)).join('; ')}.`
        },
      },
    ]
  })
}

/** Of each piece; where there is only one, its lens says it. */
function pathLengths({ text }: Snapshot, { crystal }: DocumentAnalysis): Hint[] {
  const { pieces, unit } = crystal
  const here = pieces.filter(({ piece }) => standsHere(text, piece.at))
  if (pieces.length < 2) return []
  return here.flatMap(({ piece, segments }): Hint[] => {
    const lengths = segments.map(({ length }) => length)
    if (lengths.some(length => length === undefined)) return []
    const length = lengths.reduce<number>((sum, each) => sum + each!, 0)
    return [
      {
        at: piece.at[1],
        label: inverseLength(length, unit, 3),
        tooltip: () =>
          `${piece.labels.map(({ label }) => displayLabel(label)).join(' – ')}: ${count(segments.length, 'segment')}, ${inverseLength(length, unit)} long.`,
      },
    ]
  })
}

function counts({ document, crystal }: DocumentAnalysis): Hint[] {
  return document.meshes.flatMap((block): Hint[] => {
    const mesh = meshOf(crystal, block)
    const entry = block.keys.get(block.divisions ? 'divisions' : 'spacing')
    if (!mesh || !entry) return []
    const { divisions, full, irreducible } = meshCounts(crystal, mesh)
    const label =
      irreducible === undefined
        ? wholeNumber(full)
        : `${wholeNumber(full)}, ${wholeNumber(irreducible)} irreducible`
    return [
      {
        at: entry.at[1],
        label: label.length > LONGEST ? label.replace('irreducible', 'irr.') : label,
        tooltip: () =>
          `${product(divisions)} = ${count(full, 'k-point')}${irreducible === undefined ? '' : `, ${irreducible} of them irreducible`}.`,
      },
    ]
  })
}

/** Longer hints are taken for code. */
const LONGEST = 24
