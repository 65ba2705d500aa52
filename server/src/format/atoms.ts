/** The list of atoms. */
import { ELEMENTS, elementOf, isElement } from '../crystal/elements.ts'
import { type KeyRow, keyRow } from './keys.ts'
import type { AtomEntry, Fix, NumberValue, Sourced, Span, VectorValue } from './model.ts'
import { nearest } from './nearest.ts'
import type { ListItem, MappingEntry, MappingNode, Node, TextNode } from './nodes.ts'
import { scalarText } from './quote.ts'
import { kindOf, type Reader, replacement, shortened, visible } from './reader.ts'
import type { AtomRow } from './rows.ts'

const PLACE = keyRow('atoms.*') as KeyRow

export function readAtoms(reader: Reader, node: Node, name: string): readonly AtomEntry[] | undefined {
  if (node.kind === 'mapping') return atomsAsMapping(reader, node, name)
  if (node.kind !== 'list')
    return reader.wrong(node, `${name} is a list of \`ELEMENT: [x, y, z]\`, not ${kindOf(node)}.`)
  return node.itemsAndRows.map(item => ('dash' in item ? atomOfRow(reader, item) : atomOfItem(reader, item)))
}

/** Keys cannot repeat and have no order, so atoms are a list; block style only lacks its dashes. */
function atomsAsMapping(reader: Reader, node: MappingNode, name: string): undefined {
  const { entries } = node
  const onOneLine = entries.every(({ value }) => value.kind === 'list' && value.flow)
  const edits = entries.map(({ key }) => ({ at: [key.at[0], key.at[0]] as const, text: '- ' }))
  const fix: Fix = { title: 'Write it as a list', safe: false, edits }
  const fixes = !node.flow && onOneLine ? [fix] : []
  const first = entries[0]?.key
  const example = first?.kind === 'text' ? `- ${shortened(first.value)}: [x, y, z]` : '- ELEMENT: [x, y, z]'
  const message = `${name} is a list, in which each atom begins with a dash: \`${example}\`.`
  // Not the whole block, which may be long.
  if (!node.broken) reader.report('value-type', node, first?.at ?? node.at, message, { fixes })
  return undefined
}

function atomOfItem(reader: Reader, { node, item }: ListItem): AtomEntry {
  const { at } = node
  if (node.kind === 'mapping') return atomOfMapping(reader, node, item)
  if (node.kind === 'nothing') {
    if (!node.broken)
      reader.report('value-type', node, visible(at), 'An atom is missing here, such as `Si: [0, 0, 0]`.')
  } else if (node.kind === 'list')
    reader.wrong(node, 'The element stands before the numbers: `ELEMENT: [x, y, z]`.')
  else reader.wrong(node, `An atom is written \`ELEMENT: [x, y, z]\`; here is ${kindOf(node)}.`)
  return { at, item }
}

function atomOfMapping(reader: Reader, node: MappingNode, item: Span): AtomEntry {
  const [first, ...others] = node.entries
  const { at } = node
  if (!first) {
    reader.wrong(node, 'An atom is missing here, such as `Si: [0, 0, 0]`.')
    return { at, item }
  }
  if (others.length > 0 && !node.broken) severalAtoms(reader, node, others[0])
  const { key, value, colon } = first
  if (key.kind !== 'text') {
    reader.wrong(key, `An atom begins with the symbol of its element, not with ${kindOf(key)}.`)
    return { at, item }
  }
  if (!colon && key.broken) return { at, item }
  const element = readElement(reader, key.value, key, value)
  return { at, item, element, ...readPlace(reader, value, key) }
}

function severalAtoms(reader: Reader, node: MappingNode, { key }: MappingEntry): void {
  const start = key.at[0]
  const fix: Fix = {
    title: 'Begin an item of its own',
    safe: false,
    edits: [{ at: [start - 2, start], text: '- ' }],
  }
  const message = 'One atom stands in one item: each begins with a dash of its own.'
  reader.report('value-type', key, key.at, message, { fixes: node.flow ? [] : [fix] })
}

interface AtomPlace {
  readonly name?: Sourced<string>
  readonly position?: VectorValue
}

function readPlace(reader: Reader, node: Node, key: TextNode): AtomPlace {
  const name = `\`${shortened(key.value)}\``
  if (node.kind !== 'mapping')
    return { position: reader.value(node, PLACE, key.value, key.at) as VectorValue | undefined }
  const { values, keys, unfinished } = reader.block(node, 'atoms.*')
  if (!keys.has('at') && !unfinished)
    reader.report('key-missing', key, key.at, `${name} needs its place: \`{at: [x, y, z]}\`.`)
  return {
    name: values.get('name') as Sourced<string> | undefined,
    position: values.get('at') as VectorValue | undefined,
  }
}

/** A row that was cut out of the text, read as its nodes would have been. */
function atomOfRow(reader: Reader, row: AtomRow): AtomEntry {
  const text = reader.source
  const symbol = text.slice(...row.element)
  const element = isElement(symbol)
    ? { value: symbol, at: row.element }
    : unknownElement(reader, symbol, { at: row.element, aliased: false }, bareVector(row))
  const items = row.numbers.map(span => numberOfRow(reader, span))
  return {
    at: [row.element[0], row.value[1]],
    item: row.line,
    element,
    ...(row.value === row.vector
      ? {}
      : { name: row.name && { value: text.slice(...row.name), at: row.name } }),
    position: { at: row.vector, items },
  }
}

const bareVector = ({ value, vector }: AtomRow): Span | undefined => (value === vector ? vector : undefined)

function numberOfRow(reader: Reader, at: Span): NumberValue | undefined {
  return reader.numberText(reader.source.slice(...at), { at, aliased: false }, (from, to) => [
    at[0] + from,
    at[0] + to,
  ])
}

function readElement(
  reader: Reader,
  symbol: string,
  key: TextNode,
  value: Node,
): Sourced<string> | undefined {
  if (isElement(symbol)) return { value: symbol, at: key.at }
  return unknownElement(reader, symbol, key, value.kind === 'list' && value.flow ? value.at : undefined)
}

const SYMBOLS = ELEMENTS.map(({ symbol }) => symbol)
const BY_NAME: ReadonlyMap<string, string> = new Map([
  ...ELEMENTS.map(({ name, symbol }) => [name, symbol] as const),
  ['aluminum', 'Al'],
  ['cesium', 'Cs'],
  ['sulphur', 'S'],
  ['deuterium', 'H'],
  ['d', 'H'],
  ['tritium', 'H'],
  ['t', 'H'],
])

/** @param vector the place where it stands as a bare list, so that a name can be put beside it. */
function unknownElement(
  reader: Reader,
  symbol: string,
  key: { readonly at: Span; readonly aliased: boolean },
  vector: Span | undefined,
): undefined {
  const labelled = /^([A-Z][a-z]?)[^A-Za-z].*$/.exec(symbol)?.[1]
  if (labelled && isElement(labelled)) {
    const message = `\`${shortened(symbol)}\` is no element; like atoms are told apart by a name: \`${labelled}: {at: [x, y, z], name: ${shortened(symbol)}}\`.`
    const edits = vector && [
      { at: key.at, text: scalarText(labelled) },
      { at: [vector[0], vector[0]] as const, text: '{at: ' },
      { at: [vector[1], vector[1]] as const, text: `, name: ${symbol}}` },
    ]
    const plain = /^[A-Za-z0-9_+]+$/.test(symbol)
    const fixes: Fix[] =
      edits && plain
        ? [{ title: `Make \`${symbol}\` the name of a ${labelled} atom`, safe: false, edits }]
        : []
    reader.report('element-unknown', key, key.at, message, { fixes })
    return undefined
  }
  const near = BY_NAME.get(symbol.toLowerCase()) ?? nearest(symbol, SYMBOLS)
  const hint = near ? `; did you mean \`${near}\` (${elementOf(near)!.name})?` : '.'
  const fixes = near ? [replacement(key.at, scalarText(near))] : []
  reader.report(
    'element-unknown',
    key,
    key.at,
    `\`${shortened(symbol)}\` is no symbol of an element${hint}`,
    { fixes },
  )
  return undefined
}
