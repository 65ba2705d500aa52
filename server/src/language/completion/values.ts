// biome-ignore-all lint/suspicious/noTemplateCurlyInString: the skeletons are in the snippet syntax of the LSP.
/** What may stand behind a key. */
import { type CompletionItem, CompletionItemKind } from 'vscode-languageserver-types'
import { BRAVAIS } from '../../crystal/bravais.ts'
import { findKey, type KeyRow, type ValueKind } from '../../format/keys.ts'
import { parameterLines, SETTINGS } from '../skeletons.ts'
import { groupOffers } from './groups.ts'
import { type Asked, both, items, type Offer } from './item.ts'
import { latticeOffers, statedUnit } from './keys.ts'
import { endItems, pathItems } from './path.ts'
import { hasBlockBelow, isOccupied } from './place.ts'

const REST_OF_WORD = /^[^\s,\]}#'"]*/
/** A symbol of a space group may hold blanks. */
const REST_OF_SYMBOL = /^[^,\]}#'"]*/

export function valueItems(asked: Asked): CompletionItem[] {
  const { names, lists, written } = asked.place
  const row = findKey(names)
  if (!row) return []
  if (row.kind === 'path') return pathItems(asked)
  if (row.kind === 'ends' && lists.length > 0) return endItems(asked)
  if (lists.length > 0) return []
  if (isOccupied(asked.snapshot.text, asked.offset)) return []
  const rest = row.kind === 'space-group' ? REST_OF_SYMBOL : REST_OF_WORD
  return items(asked, offersFor(asked, row), written.length, rest)
}

/** Values that people begin on a new line. */
const BLOCKS = new Set<ValueKind>(['mapping', 'meshes', 'points', 'atoms', 'rows', 'severities'])

function offersFor(asked: Asked, row: KeyRow): Offer[] {
  if (row.path === 'lattice.bravais') return bravais(asked)
  if (row.kind === 'space-group') return groupOffers(asked)
  if (row.words) return words(row)
  // A container: what can stand in it, written out.
  if (asked.place.quoted) return []
  const { style, column } = asked.place
  if (asked.unasked && style === 'block' && BLOCKS.has(row.kind)) return []
  if (style === 'block' && hasBlockBelow(asked.snapshot.text, asked.offset, column)) return []
  if (row.path === 'lattice') return lattice(asked)
  return forms(asked, row)
}

const words = (row: KeyRow): Offer[] =>
  row.words!.map(({ word, meaning }) => ({
    label: word,
    kind: CompletionItemKind.EnumMember,
    detail: meaning,
    text: word,
    about: row.path === 'labels' ? `book:${word}` : `word:${row.path}:${word}`,
  }))

/** Types with the parameters that they still need. Vectors need none: beside them a type is a claim. */
function bravais({ place, snapshot: { text }, offset }: Asked): Offer[] {
  const { present, style, quoted } = place
  const unit = statedUnit(text, offset)
  const seen = new Set<string>()
  return SETTINGS.flatMap((setting): Offer[] => {
    const { type, free, note } = setting
    const { words } = BRAVAIS[type]
    const missing = present.has('vectors') || quoted ? [] : free.filter(name => !present.has(name))
    const key = `${type} ${missing.join(' ')}`
    if (seen.has(key) || (missing.length === 0 && seen.has(type))) return []
    seen.add(key).add(type)
    const lines = [type, ...parameterLines(setting, missing, { unit })]
    const needs = missing.length > 0 ? `: ${missing.join(', ')}` : ''
    return [
      {
        label: type,
        kind: CompletionItemKind.EnumMember,
        detail: `${note ? `${words}, ${note}` : words}${needs}`,
        filter: `${type} ${words}`,
        text: type,
        ...(missing.length > 0 ? { snippet: lines.join(style === 'flow' ? ', ' : '\n') } : {}),
        about: `word:lattice.bravais:${type}`,
      },
    ]
  })
}

function lattice(asked: Asked): Offer[] {
  const { style, written } = asked.place
  if (written !== '') return []
  if (style === 'flow') return latticeOffers(asked, lines => `{${lines.join(', ')}}`)
  return latticeOffers(asked, lines => lines.map(line => `\n  ${line}`).join(''))
}

/** Values that are lists or mappings: a snippet, on further lines where the key stands in a block. */
function forms({ place }: Asked, row: KeyRow): Offer[] {
  if (place.written !== '') return []
  const offer = (label: string, snippet: string): Offer => ({
    label,
    kind: CompletionItemKind.Snippet,
    about: `key:${row.path}`,
    ...both(snippet),
  })
  switch (row.kind) {
    case 'atom':
      return [
        offer('[x, y, z]', '[${1:0}, ${2:0}, ${3:0}]'),
        offer('{at: [x, y, z], name: …}', '{at: [${1:0}, ${2:0}, ${3:0}], name: ${4:up}}'),
      ]
    case 'point':
      return [
        offer('[k1, k2, k3]', '[${1:1/4}, ${2:1/4}, ${3:0}]'),
        offer('{between: …, at: …}', '{between: [${1:Γ}, ${2:X}], at: ${3:1/2}}'),
      ]
    case 'ends':
      return [offer('[LABEL, LABEL]', '[${1:Γ}, ${2:X}]')]
    case 'vector':
      return [offer('[x, y, z]', '[${1:0}, ${2:0}, ${3:0}]')]
    case 'counts':
      return [offer('[n1, n2, n3]', '[${1:8}, ${2:8}, ${3:8}]')]
    case 'matrix':
      return [
        offer('[n1, n2, n3]', '[${1:2}, ${2:2}, ${3:2}]'),
        offer(
          '[[…], […], […]]',
          '[[${1:1}, ${2:1}, ${3:0}], [${4:-1}, ${5:1}, ${6:0}], [${7:0}, ${8:0}, ${9:1}]]',
        ),
      ]
    case 'mapping':
    case 'meshes':
    case 'points':
    case 'atoms':
    case 'rows':
    case 'severities':
      return container(place, row, offer)
    default:
      return []
  }
}

function container(
  { style }: Asked['place'],
  row: KeyRow,
  offer: (label: string, snippet: string) => Offer,
): Offer[] {
  const example = row.example.replaceAll('\\', '\\\\').replaceAll('}', '\\}')
  const flow = offer(row.example, row.kind === 'severities' ? '{${1:mesh-uneven}: off}' : example)
  if (style === 'flow' || !row.skeleton) return [flow]
  const block = row.path === 'lattice.vectors' ? row.skeleton.replaceAll('\n    ', '\n  ') : row.skeleton
  return [{ ...offer(`${row.path.split('.').at(-1)} block`, block), preselect: true }, flow]
}
