/** How each kind of value of the key table is read. */
import { readAtoms } from './atoms.ts'
import { type KeyRow, keyName, keyRow, keysBelow } from './keys.ts'
import type { Entry, NumberValue, PointEntry, Severity, Sourced, Span, VectorValue } from './model.ts'
import { nearest } from './nearest.ts'
import type { MappingNode, Node } from './nodes.ts'
import { normaliseLabel } from './path.ts'
import { type Block, kindOf, type Reader, type Readers, replacement, shortened } from './reader.ts'

export const READERS: Readers = {
  text: (reader, node, _row, name) => reader.text(node, name),
  word: (reader, node, row, name) => reader.word(node, row, name),
  number: (reader, node, row, name) => reader.number(node, row, name),
  count: (reader, node, row, name) => reader.number(node, row, name),
  vector: (reader, node, row, name) => reader.vector(node, row, name),
  counts: readCounts,
  rows: (reader, node, row, name) => reader.rows(node, row, name),
  matrix: readMatrix,
  ends: (reader, node, _row, name) => reader.ends(node, name),
  mapping: readMapping,
  atoms: (reader, node, _row, name) => readAtoms(reader, node, name),
  atom: (reader, node, row, name) => reader.vector(node, row, name),
  'space-group': readSpaceGroup,
  points: readPoints,
  point: readPoint,
  path: (reader, node, _row, name) => reader.path(node, name),
  meshes: readMeshes,
  severities: readSeverities,
}

function readMapping(reader: Reader, node: Node, row: KeyRow, name: string): Block | undefined {
  if (node.kind === 'mapping') return reader.block(node, row.path)
  const example = `\`${keyName(row)}: ${row.example}\``
  return reader.wrong(node, `${name} is a mapping, such as ${example}, not ${kindOf(node)}.`)
}

/** The same number along all axes must be written out. */
function writtenOnce(reader: Reader, node: Node, name: string): boolean {
  const text = node.kind === 'text' ? node.value.trim() : ''
  if (!/^\d+$/.test(text)) return false
  const written = `[${text}, ${text}, ${text}]`
  reader.wrong(node, `${name} is a list with a number for each direction, such as \`${written}\`.`, [
    replacement(node.at, written),
  ])
  return true
}

function readCounts(reader: Reader, node: Node, row: KeyRow, name: string): VectorValue | undefined {
  return writtenOnce(reader, node, name) ? undefined : reader.vector(node, row, name)
}

export interface MatrixValue {
  readonly rows: readonly (VectorValue | undefined)[]
  readonly diagonal: boolean
}

function readMatrix(reader: Reader, node: Node, row: KeyRow, name: string): MatrixValue | undefined {
  if (writtenOnce(reader, node, name)) return undefined
  if (node.kind === 'list' && node.length > 0 && node.items.every(({ node }) => node.kind !== 'list')) {
    const diagonal = reader.vector(node, row, name)
    return diagonal && { rows: [diagonal], diagonal: true }
  }
  const rows = reader.rows(node, row, name)
  return rows.length > 0 ? { rows, diagonal: false } : undefined
}

const LARGEST_SPACE_GROUP = 230

function readSpaceGroup(
  reader: Reader,
  node: Node,
  _row: KeyRow,
  name: string,
): Sourced<number | string> | undefined {
  const wanted = `a number from 1 to ${LARGEST_SPACE_GROUP} or a Hermann–Mauguin symbol such as \`Fm-3m\``
  if (node.kind !== 'text') return reader.wrong(node, `${name} is ${wanted}, not ${kindOf(node)}.`)
  if (node.broken) return undefined
  const text = node.value.trim()
  const number = /^\d+$/.test(text) ? Number(text) : undefined
  const possible = number === undefined ? /^[a-z]/i.test(text) : number >= 1 && number <= LARGEST_SPACE_GROUP
  if (possible) return { value: number ?? text, at: node.at }
  return reader.wrong(node, `${name} is ${wanted}, not \`${shortened(text)}\`.`)
}

const POINT = keyRow('points.*') as KeyRow

function readPoints(reader: Reader, node: Node, _row: KeyRow, name: string): PointEntry[] | undefined {
  if (node.kind !== 'mapping')
    return reader.wrong(node, `${name} is a mapping \`LABEL: [k1, k2, k3]\`, not ${kindOf(node)}.`)
  const points: PointEntry[] = []
  const first = new Map<string, { readonly key: Span }>()
  for (const entry of node.entries) {
    const { key, value, item, colon } = entry
    if (key.kind !== 'text') {
      if (key.kind !== 'nothing' || colon) reader.wrong(key, `A label stands here, not ${kindOf(key)}.`)
      continue
    }
    if (!colon && key.broken) continue
    const label = normaliseLabel(key.value)
    if (label === undefined) {
      reader.label(key)
      continue
    }
    const earlier = first.get(label)
    if (earlier) {
      reader.repeatedKey(key.value, earlier, entry)
      continue
    }
    first.set(label, { key: key.at })
    const read = reader.value(value, POINT, key.value, key.at) as PointValue | undefined
    points.push({ label, key: key.at, at: value.at, item, ...read })
  }
  return points
}

type PointValue = Pick<PointEntry, 'coordinates' | 'between'>

function readPoint(reader: Reader, node: Node, row: KeyRow, name: string, key: Span): PointValue | undefined {
  if (node.kind !== 'mapping') return { coordinates: reader.vector(node, row, name) }
  const { keys, values, unfinished } = reader.block(node, row.path)
  const missing = ['between', 'at'].filter(needed => !keys.has(needed)).map(needed => `\`${needed}\``)
  if (missing.length > 0 && !unfinished) {
    const message = `${name} needs ${missing.join(' and ')}: \`{between: [Γ, X], at: 0.85}\`.`
    reader.report('key-missing', node, key, message)
  }
  const between = values.get('between') as ReturnType<Reader['ends']>
  return between && { between: { ...between, fraction: values.get('at') as NumberValue | undefined } }
}

/** One mesh, or several by name. */
export interface MeshValue {
  /** The name and its entry; an only mesh has none. */
  readonly named?: Entry & { readonly name: string }
  readonly block: Block
}

function readMeshes(
  reader: Reader,
  node: Node,
  row: KeyRow,
  name: string,
  key: Span,
): MeshValue[] | undefined {
  if (node.kind !== 'mapping') {
    const fixes = node.kind === 'list' && node.flow ? [wrapped(node.at, 'divisions')] : []
    const example = `\`mesh: ${row.example}\``
    return reader.wrong(node, `${name} is a mapping, such as ${example}, not ${kindOf(node)}.`, fixes)
  }
  return isOneMesh(node) ? [{ block: meshBlock(reader, node, name, key) }] : namedMeshes(reader, node)
}

const wrapped = ([start, end]: Span, key: string) => ({
  title: `Write it as \`${key}\``,
  safe: false,
  edits: [
    { at: [start, start] as const, text: `{${key}: ` },
    { at: [end, end] as const, text: '}' },
  ],
})

/** A known key, or a value that is no mesh itself, speaks for one mesh. */
function isOneMesh(node: MappingNode): boolean {
  const names = keysBelow('mesh').map(keyName)
  if (node.entries.length === 0) return true
  return node.entries.some(({ key, value }) => {
    if (key.kind !== 'text' || names.includes(key.value)) return true
    return value.kind === 'nothing' ? nearest(key.value, names) !== undefined : value.kind !== 'mapping'
  })
}

function namedMeshes(reader: Reader, node: MappingNode): MeshValue[] {
  const meshes = new Map<string, Required<MeshValue>>()
  for (const entry of node.entries) {
    const { key, value, item, colon } = entry
    if (key.kind !== 'text') {
      reader.wrong(key, `The name of a mesh stands here, not ${kindOf(key)}.`)
      continue
    }
    if (!colon && key.broken) continue
    const earlier = meshes.get(key.value)
    if (earlier) reader.repeatedKey(key.value, earlier.named, entry)
    else if (value.kind === 'mapping') {
      const named = { name: key.value, key: key.at, at: value.at, item }
      meshes.set(key.value, { named, block: meshBlock(reader, value, `\`${shortened(key.value)}\``, key.at) })
    } else if (!value.broken) {
      const message = `\`${shortened(key.value)}\` has no value yet: a mesh such as \`{divisions: [12, 12, 12]}\`.`
      reader.report('value-type', key, key.at, message)
    }
  }
  return [...meshes.values()]
}

function meshBlock(reader: Reader, node: MappingNode, name: string, key: Span): Block {
  const block = reader.block(node, 'mesh')
  const both = onlyOne(reader, block, ['divisions', 'spacing'], name)
  if (
    !both &&
    !block.unfinished &&
    !block.keys.has('divisions') &&
    !block.keys.has('spacing') &&
    !node.broken
  )
    reader.report('key-missing', node, key, `${name} needs \`divisions\` or \`spacing\`.`)
  return block
}

/** Of some keys one may stand. True where more do, which is a problem of each but the first. */
export function onlyOne(reader: Reader, { keys }: Block, names: readonly string[], name: string): boolean {
  const stated = [...keys.keys()].filter(key => names.includes(key))
  for (const key of stated.slice(1)) {
    const at = keys.get(key)!.key
    const message = `${name} has either \`${stated[0]}\` or \`${key}\`, not both; \`${stated[0]}\` is used.`
    reader.report('value-type', { aliased: false }, at, message)
  }
  return stated.length > 1
}

const SEVERITY = keyRow('checks.*') as KeyRow

/** Severities by the id of a rule, with the span of the id. */
export type Severities = ReadonlyMap<string, Sourced<Severity | 'off'> & { readonly key: Span }>

function readSeverities(reader: Reader, node: Node, row: KeyRow, name: string): Severities | undefined {
  if (node.kind !== 'mapping')
    return reader.wrong(
      node,
      `${name} is a mapping of rules, such as \`checks: ${row.example}\`, not ${kindOf(node)}.`,
    )
  const severities = new Map<string, Sourced<Severity | 'off'> & { readonly key: Span }>()
  const first = new Map<string, { readonly key: Span }>()
  for (const entry of node.entries) {
    const { key, value, colon } = entry
    if (key.kind !== 'text') {
      reader.wrong(key, `The id of a rule stands here, not ${kindOf(key)}.`)
      continue
    }
    if (!colon && key.broken) continue
    const earlier = first.get(key.value)
    if (earlier) {
      reader.repeatedKey(key.value, earlier, entry)
      continue
    }
    first.set(key.value, { key: key.at })
    const what = `the severity of \`${shortened(key.value)}\``
    const read =
      value.kind === 'nothing'
        ? reader.value(value, SEVERITY, key.value, key.at)
        : reader.word(value, SEVERITY, what)
    const severity = read as Sourced<Severity | 'off'> | undefined
    if (severity) severities.set(key.value, { ...severity, key: key.at })
  }
  return severities
}
