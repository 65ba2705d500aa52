// biome-ignore-all lint/suspicious/noTemplateCurlyInString: the skeletons are in the snippet syntax of the LSP.
/** Keys in their mapping, with what they mean and their unit; skeletons of blocks and of whole files. */
import { type CompletionItem, CompletionItemKind } from 'vscode-languageserver-types'
import { BRAVAIS, type BravaisType } from '../../crystal/bravais.ts'
import { describeValue, findKey, type KeyRow, keyName, keysBelow, type ValueKind } from '../../format/keys.ts'
import type { Unit } from '../../crystal/units.ts'
import { UNITS } from '../../crystal/units.ts'
import { latticeLines, SETTINGS, SKELETONS, VECTOR_BLOCKS } from '../skeletons.ts'
import { elementOffers } from './elements.ts'
import { type Asked, both, items, type Offer } from './item.ts'
import { isOccupied } from './place.ts'
import { ruleOffers } from './rules.ts'

export function keyItems(asked: Asked): CompletionItem[] {
  const { place } = asked
  if (isOccupied(asked.snapshot.text, asked.offset)) return []
  return items(asked, offersAt(asked), place.written.length, /^[\p{L}\d'_-]*/u)
}

function offersAt(asked: Asked): Offer[] {
  const { names, present, style, inItem } = asked.place
  if (names.length === 0) return present.size === 0 ? [...keys(asked, ''), ...files(asked)] : keys(asked, '')
  const row = findKey(names)
  switch (row?.kind) {
    case 'atoms':
      return elementOffers(asked)
    case 'points':
      return points(asked)
    case 'severities':
      return ruleOffers(asked)
    case 'rows':
    case 'matrix':
      return style === 'block' && !inItem ? [ROW] : []
    case 'meshes':
      return [...keys(asked, 'mesh'), ...namedMeshes(asked, names.length)]
    case 'mapping':
      return row.path === 'lattice' ? [...keys(asked, 'lattice'), ...lattices(asked)] : keys(asked, row.path)
    case 'atom':
    case 'point':
      return keys(asked, row.path)
    default:
      return []
  }
}

const ROW: Offer = {
  label: '- [x, y, z]',
  kind: CompletionItemKind.Snippet,
  detail: 'one row',
  filter: '-',
  ...both('- [${1:1}, ${2:0}, ${3:0}]'),
}

function keys(asked: Asked, above: string): Offer[] {
  const { place, abilities } = asked
  const { present } = place
  const type = statedType(asked.snapshot.text, asked.offset)
  const wanted = above === 'lattice' && type ? new Set<string>(BRAVAIS[type].free.flat()) : undefined
  const elsewhere = type && ELSEWHERE[BRAVAIS[type].dimension]
  return keysBelow(above)
    .filter(row => keyName(row) !== '*' && !present.has(keyName(row)) && !elsewhere?.has(row.path))
    .map(row => ({
      label: keyName(row),
      kind: CompletionItemKind.Property,
      detail: valueInShort(row),
      rank: row.required ? 1 : wanted ? (wanted.has(keyName(row)) ? 2 : 4) : 3,
      about: `key:${row.path}`,
      ...written(row, place, abilities.asksAgain),
    }))
}

/** What a key takes, for one line without Markdown. */
const valueInShort = (row: KeyRow): string =>
  row.kind === 'word' && row.words
    ? row.words.map(({ word }) => word).join(', ')
    : describeValue(row).replaceAll('`', '')

/** Kinds of values that completion lists. */
const LISTED = new Set<ValueKind>(['word', 'path', 'space-group'])

/** What a key's item writes: with the list of its values where that opens by itself, else with a skeleton. */
function written(
  row: KeyRow,
  { hasColon, style }: Asked['place'],
  asksAgain: boolean,
): Pick<Offer, 'text' | 'snippet' | 'again'> {
  const name = keyName(row)
  if (hasColon) return { text: name }
  if (asksAgain && row.path === 'lattice' && style === 'block')
    return { text: 'lattice:\n  bravais: ', again: true }
  if (asksAgain && LISTED.has(row.kind)) return { text: `${name}: `, again: true }
  const text = `${name}: `
  return style === 'flow' || !row.skeleton ? { text } : { text, snippet: `${name}:${row.skeleton}` }
}

/** Keys that have no place beside a type of so many dimensions. */
const ELSEWHERE: Record<2 | 3, ReadonlySet<string>> = {
  2: new Set(['space-group', 'lattice.c', 'lattice.alpha', 'lattice.beta']),
  3: new Set(['lattice.height']),
}

/** The type that the document around an offset states, as the text has it. */
export function statedType(text: string, offset: number): BravaisType | undefined {
  const word = /\bbravais["']?:[ \t]*["']?(\w+)/.exec(documentText(text, offset))?.[1]
  return word !== undefined && word in BRAVAIS ? (word as BravaisType) : undefined
}

/** The unit that the document around an offset states, as the text has it. */
export function statedUnit(text: string, offset: number): Unit {
  const word = /^unit:[ \t]*["']?(\w+)/m.exec(documentText(text, offset))?.[1]
  return UNITS.find(unit => unit === word) ?? 'angstrom'
}

function documentText(text: string, offset: number): string {
  const start = text.lastIndexOf('\n---', offset - 1)
  const end = text.indexOf('\n---', offset)
  return text.slice(Math.max(0, start), end < 0 ? undefined : end)
}

/** Skeletons of a lattice, where neither type nor vectors stand yet. */
function lattices(asked: Asked): Offer[] {
  const { place } = asked
  if (place.hasColon || ['bravais', 'vectors'].some(name => place.present.has(name))) return []
  return latticeOffers(asked, place.style === 'flow' ? lines => lines.join(', ') : lines => lines.join('\n'))
}

/** Every lattice that a block can hold. */
export function latticeOffers(
  { snapshot: { text }, offset, place: { style } }: Asked,
  write: (lines: readonly string[]) => string,
): Offer[] {
  const unit = statedUnit(text, offset)
  const types = SETTINGS.map((setting): Offer => {
    const { words } = BRAVAIS[setting.type]
    const note = setting.note ? `${words}, ${setting.note}` : words
    return {
      label: `${setting.type}: ${setting.free.join(' ')}`,
      kind: CompletionItemKind.Snippet,
      detail: note,
      filter: `${setting.type} ${note}`,
      rank: 6,
      about: `word:lattice.bravais:${setting.type}`,
      ...both(write(latticeLines(setting, { unit }))),
    }
  })
  if (style === 'flow') return types
  const vectors = Object.entries(VECTOR_BLOCKS).map(
    ([name, lines]): Offer => ({
      label: VECTOR_NAMES[name as keyof typeof VECTOR_BLOCKS],
      kind: CompletionItemKind.Snippet,
      detail: 'by vectors',
      rank: 7,
      about: 'key:lattice.vectors',
      ...both(write(lines)),
    }),
  )
  return [...types, ...vectors]
}

const VECTOR_NAMES: Record<keyof typeof VECTOR_BLOCKS, string> = {
  primitive: 'vectors: primitive',
  centred: 'vectors: conventional, with centring',
  plane: 'vectors: plane lattice',
  chain: 'vectors: chain',
}

function files({ place, snapshot, offset }: Asked): Offer[] {
  if (place.style === 'flow' || place.column > 0) return []
  if (
    documentText(snapshot.text, offset)
      .replace(/^(\n?---.*|\s*#.*)$/gm, '')
      .trim() !== place.written.trim()
  )
    return []
  return SKELETONS.map(({ id, name, system, asks, words, text }) => ({
    label: `${name} (${id})`,
    kind: CompletionItemKind.File,
    detail: `${system}: ${asks}`,
    filter: `${words} ${id}`,
    rank: 7,
    ...both(text),
  }))
}

function points({ place }: Asked): Offer[] {
  if (place.hasColon) return []
  const one = (label: string, detail: string, snippet: string): Offer => ({
    label,
    kind: CompletionItemKind.Snippet,
    detail,
    about: 'key:points.*',
    ...both(snippet),
  })
  return [
    one('LABEL: [k1, k2, k3]', 'a point by its coordinates', '${1:Q}: [${2:1/4}, ${3:1/4}, ${4:0}]'),
    one(
      'LABEL: {between: …, at: …}',
      'a point part of the way between two others',
      '${1:Q}: {between: [${2:Γ}, ${3:X}], at: ${4:1/2}}',
    ),
  ].map(offer => ({ ...offer, filter: `${place.written || 'LABEL'} ${offer.label}` }))
}

function namedMeshes({ place }: Asked, depth: number): Offer[] {
  if (depth > 1 || place.hasColon || place.style === 'flow') return []
  if (['divisions', 'spacing', 'shift'].some(name => place.present.has(name))) return []
  return ['coarse', 'fine']
    .filter(name => !place.present.has(name))
    .map(name => ({
      label: name,
      kind: CompletionItemKind.Snippet,
      detail: 'a mesh of this name',
      rank: 6,
      about: 'key:mesh',
      ...both(`\${1:${name}}:\n  divisions: [\${2:8}, \${3:8}, \${4:8}]`),
    }))
}
