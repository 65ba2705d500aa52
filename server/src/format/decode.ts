/** Text to lattice file: what every part of the program reads. */
import { BRAVAIS, type BravaisType, type Centring } from '../crystal/bravais.ts'
import type { Unit } from '../crystal/units.ts'
import { readAllowances } from './allowances.ts'
import { insertKeys, removeEntry, standsHere } from './edits.ts'
import { keyName, keysBelow } from './keys.ts'
import { type MatrixValue, type MeshValue, onlyOne, READERS, type Severities } from './kinds.ts'
import {
  type AtomEntry,
  type AtomFrame,
  type BookId,
  type DecodedFile,
  type Entry,
  type LatticeBlock,
  type Foundation,
  type LatticeDocument,
  type MeshBlock,
  type NumberValue,
  PARAMETER_NAMES,
  type ParameterName,
  type PathBlock,
  type PointEntry,
  type PointFrame,
  type Problem,
  type SamplingBlock,
  type Sourced,
  type VectorValue,
} from './model.ts'
import { nearest } from './nearest.ts'
import type { MappingNode } from './nodes.ts'
import { parameterTable } from './parameters.ts'
import { type Block, type KnownEntry, kindOf, Reader } from './reader.ts'
import { readYaml, readYamlWhole, type YamlDocument, type YamlFile } from './yaml.ts'

/** Read a file. Never throws; what cannot be read is undefined and has one problem of its own. */
export function decode(text: string): DecodedFile {
  const yaml = readYaml(text)
  const file = decodeYaml(text, yaml)
  return yaml.rowsMissed() ? decodeWhole(text) : file
}

/** The same without the short way for long lists of atoms, with which it must agree. */
export const decodeWhole = (text: string): DecodedFile => decodeYaml(text, readYamlWhole(text))

function decodeYaml(text: string, yaml: YamlFile): DecodedFile {
  const { allowances, problems: ofComments } = readAllowances(text, yaml.comments, yaml.multiline)
  const documents: LatticeDocument[] = []
  const problems: Problem[] = [...yaml.problems, ...ofComments]
  for (const document of yaml.documents) {
    const isEmpty = document.contents.kind === 'nothing' && !document.contents.broken
    if (isEmpty) problems.push(...document.problems)
    else documents.push(new DocumentReader(text, document, documents.length + 1).read())
  }
  return { documents: withoutGaps(documents, text), problems, allowances }
}

/** What is empty belongs to the document before it, so that every place of the text is in one. */
function withoutGaps(documents: readonly LatticeDocument[], text: string): LatticeDocument[] {
  return documents.map((document, i) => {
    const start = i === 0 ? 0 : document.at[0]
    const end = documents[i + 1]?.at[0] ?? text.length
    return { ...document, at: [start, end] }
  })
}

class DocumentReader {
  private readonly reader: Reader

  constructor(
    private readonly text: string,
    private readonly yaml: YamlDocument,
    private readonly number: number,
  ) {
    this.reader = new Reader(text, READERS)
  }

  read(): LatticeDocument {
    const { contents } = this.yaml
    if (contents.kind === 'mapping') return this.document(contents)
    if (contents.kind === 'text') this.noMapping(contents.value.trim())
    else
      this.reader.wrong(
        contents,
        `A lattice file is a mapping of keys such as \`lattice:\`, not ${kindOf(contents)}.`,
      )
    return this.assemble({ keys: new Map(), values: new Map(), unfinished: true })
  }

  /** One word may be the first key, still without its colon. */
  private noMapping(text: string): void {
    const names = keysBelow('').map(keyName)
    const near = nearest(text, names) ?? names.find(name => text.length > 1 && name.startsWith(text))
    const hint = near ? ` Did you mean \`${near}:\`?` : ''
    this.reader.wrong(this.yaml.contents, `A lattice file is a mapping of keys such as \`lattice:\`.${hint}`)
  }

  private document(root: MappingNode): LatticeDocument {
    this.readParameters(root)
    const block = this.reader.block(root, '')
    const document = this.assemble(block)
    this.judge(document, root, block)
    return { ...document, problems: this.problems() }
  }

  /** Numbers anywhere may use the lattice's parameters, so these are read first. */
  private readParameters(root: MappingNode): void {
    const { reader } = this
    const lattice = root.entries.find(({ key }) => key.kind === 'text' && key.value === 'lattice')?.value
    if (lattice?.kind !== 'mapping') {
      reader.parameters = parameterTable(undefined)
      return
    }
    const entries = reader.entriesAhead(lattice, 'lattice')
    reader.parameters = parameterTable({
      type: entries.has('vectors') ? undefined : typeOf(entries.get('bravais')),
      isStated: name => entries.has(name),
      read: name => (reader.readAhead(entries.get(name)!) as NumberValue | undefined)?.value,
    })
    for (const name of PARAMETER_NAMES) if (entries.has(name)) reader.parameters(name)
  }

  private assemble({ keys, values }: Block): LatticeDocument {
    const { yaml, number } = this
    const get = <T>(name: string) => values.get(name) as T | undefined
    const entry = <T extends object>(name: string, value: T | undefined): (T & Entry) | undefined =>
      value && { ...value, ...keys.get(name)! }
    const list = <T>(name: string) => {
      const items = get<readonly T[]>(name)
      return entry(name, items && { items })
    }
    const frames = get<Block>('frames')
    const unread = new Set<Foundation>()
    for (const name of ['unit', 'labels', 'time-reversal'] as const)
      if (keys.has(name) && values.get(name) === undefined) unread.add(name)
    for (const name of ['atoms', 'points'] as const)
      if (keys.has('frames') && (!frames || (frames.keys.has(name) && !partOf(frames, name))))
        unread.add(`frames.${name}`)
    const frame = <T extends string>(name: string) => frames && partOf<Sourced<T>>(frames, name)?.value
    return {
      number,
      at: yaml.at,
      contents: yaml.contents.at,
      title: get('title'),
      unit: get<Sourced<Unit>>('unit')?.value ?? 'angstrom',
      unitEntry: keys.get('unit'),
      tolerance: get('tolerance'),
      lattice: entry('lattice', latticeOf(get('lattice'))),
      atoms: list<AtomEntry>('atoms'),
      spaceGroup: entry('space-group', get<Sourced<number | string>>('space-group')),
      timeReversal: get<Sourced<string>>('time-reversal')?.value !== 'no',
      timeReversalEntry: keys.get('time-reversal'),
      frames: {
        atoms: frame<AtomFrame>('atoms') ?? 'conventional',
        points: frame<PointFrame>('points') ?? 'primitive',
      },
      framesEntry: entry(
        'frames',
        frames && { atoms: frames.keys.get('atoms'), points: frames.keys.get('points'), keys: frames.keys },
      ),
      labels: get<Sourced<BookId>>('labels')?.value ?? 'setyawan-curtarolo-2010',
      labelsEntry: keys.get('labels'),
      points: list<PointEntry>('points'),
      path: entry('path', get<Omit<PathBlock, keyof Entry>>('path')),
      sampling: entry('sampling', samplingOf(get('sampling'))),
      meshes: (get<readonly MeshValue[]>('mesh') ?? []).map(mesh => meshOf(mesh, keys.get('mesh')!)),
      meshEntry: keys.get('mesh'),
      supercell: entry('supercell', get<MatrixValue>('supercell')),
      checks: get<Severities>('checks') ?? new Map(),
      unread,
      checksEntry: keys.get('checks'),
      keys,
      problems: this.problems(),
    }
  }

  /** What the form of a document demands beyond the form of each value. */
  private judge(document: LatticeDocument, root: MappingNode, block: Block): void {
    const { reader, text } = this
    const { keys, lattice } = document
    if (!keys.has('lattice') && !root.broken && !block.unfinished) {
      const at = root.entries[0]?.key.at ?? root.at
      const edits = insertKeys(text, document, [['lattice', '{bravais: , a: }']])
      reader.report('key-missing', root, at, '`lattice` is missing: without it there is no crystal.', {
        fixes: [{ title: 'Insert `lattice`', safe: false, edits }],
      })
    }
    const sampling = partOf<Block>(block, 'sampling')
    if (sampling) this.judgeSampling(sampling, keys.get('sampling')!)
    if (lattice) this.judgeLattice(lattice, partOf<Block>(block, 'lattice')!, document)
  }

  private judgeSampling(block: Block, { key }: Entry): void {
    const names = keysBelow('sampling').map(keyName)
    onlyOne(this.reader, block, names, '`sampling`')
    if (block.keys.size === 0 && !block.unfinished)
      this.reader.report(
        'key-missing',
        { aliased: false },
        key,
        '`sampling` needs one of `spacing`, `steps`, `total`.',
      )
  }

  private judgeLattice(lattice: LatticeBlock, { unfinished }: Block, document: LatticeDocument): void {
    const { reader, text } = this
    const { keys } = lattice
    const here = { aliased: !standsHere(text, lattice.at) && lattice.at[1] > lattice.at[0] }
    if (!keys.has('bravais') && !keys.has('vectors') && !unfinished) {
      const edits = insertKeys(text, lattice, [['bravais', '']])
      reader.report('key-missing', here, lattice.key, '`lattice` needs `bravais` or `vectors`.', {
        fixes: [{ title: 'Insert `bravais`', safe: false, edits }],
      })
    }
    if (keys.has('centring') && !keys.has('vectors')) {
      const why = '`centring` stands beside `vectors` only: a Bravais type says the centring itself.'
      this.misplaced(keys.get('centring')!, why, here)
    }
    const dimension = dimensionOf(lattice)
    if (keys.has('height') && dimension !== undefined && dimension !== 2)
      this.misplaced(
        keys.get('height')!,
        `\`height\` is for plane lattices; this one has ${dimension} dimension${dimension > 1 ? 's' : ''}.`,
        here,
      )
    if (document.keys.has('space-group') && dimension !== undefined && dimension < 3) {
      const why = `\`space-group\` is for three dimensions; this lattice has ${dimension}.`
      this.misplaced(document.keys.get('space-group')!, why, { aliased: false })
    }
  }

  /** A known key where it says nothing. */
  private misplaced(entry: Entry, message: string, node: { readonly aliased: boolean }): void {
    const fixes = [{ title: 'Remove it', safe: true, edits: [removeEntry(this.text, entry)] }]
    this.reader.report('key-unknown', node, entry.key, message, { fixes })
  }

  /** In the order of the text, without what a fault of syntax has brought with it. */
  private problems(): readonly Problem[] {
    const { problems: syntax, doubts, uncertain } = this.yaml
    const own = this.reader.problems.filter(
      ({ rule, at }) =>
        !(uncertain && OF_STRUCTURE.has(rule)) && !doubts.some(doubt => doubt >= at[0] && doubt <= at[1]),
    )
    return [...syntax, ...own].sort((a, b) => a.at[0] - b.at[0] || a.at[1] - b.at[1])
  }
}

/** What these say depends on what belongs to what. */
const OF_STRUCTURE: ReadonlySet<string> = new Set(['key-unknown', 'key-missing', 'value-type'])

const partOf = <T>({ values }: Block, name: string): T | undefined => values.get(name) as T | undefined

/** The Bravais type as far as it is written correctly; if not, that is a problem when its turn comes. */
function typeOf(entry: KnownEntry | undefined): BravaisType | undefined {
  if (entry?.node.kind !== 'text') return undefined
  const text = entry.node.value.trim()
  const found = entry.row.words?.find(({ word, also }) => word === text || also?.includes(text))
  return found?.word as BravaisType | undefined
}

function latticeOf(block: Block | undefined): Omit<LatticeBlock, keyof Entry> | undefined {
  if (!block) return undefined
  const parameters: Partial<Record<ParameterName, NumberValue>> = {}
  for (const name of PARAMETER_NAMES) {
    const number = partOf<NumberValue>(block, name)
    if (number) parameters[name] = number
  }
  const vectors = block.keys.get('vectors')
  return {
    bravais: partOf<Sourced<BravaisType>>(block, 'bravais'),
    centring: partOf<Sourced<Centring>>(block, 'centring'),
    parameters,
    height: partOf<NumberValue>(block, 'height'),
    vectors: vectors && {
      ...vectors,
      rows: partOf<readonly (VectorValue | undefined)[]>(block, 'vectors') ?? [],
    },
    keys: block.keys,
  }
}

/** As far as the form alone tells it. */
function dimensionOf({ bravais, vectors }: LatticeBlock): number | undefined {
  if (vectors) return vectors.rows.length > 0 ? vectors.rows.length : undefined
  return bravais && BRAVAIS[bravais.value].dimension
}

/** One way of sampling counts: the first that is stated. */
function samplingOf(block: Block | undefined): Omit<SamplingBlock, keyof Entry> | undefined {
  if (!block) return undefined
  const [first] = block.keys.keys()
  const number = (name: string) => (name === first ? partOf<NumberValue>(block, name) : undefined)
  return { spacing: number('spacing'), steps: number('steps'), total: number('total'), keys: block.keys }
}

/** Of `divisions` and `spacing` the first that is stated counts. */
function meshOf({ named, block }: MeshValue, only: Entry): MeshBlock {
  const { keys } = block
  const first = [...keys.keys()].find(name => name !== 'shift')
  return {
    ...(named ?? only),
    name: named?.name,
    divisions: first === 'divisions' ? partOf<VectorValue>(block, 'divisions') : undefined,
    spacing: first === 'spacing' ? partOf<NumberValue>(block, 'spacing') : undefined,
    shift: partOf<VectorValue>(block, 'shift'),
    keys,
  }
}
