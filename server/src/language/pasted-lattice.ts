/** A lattice block from three vectors in the clipboard: the ways to read and to write them, each with its edits. */
import type { TextEdit as ProtocolEdit } from 'vscode-languageserver-types'
import type { Snapshot } from '../analysis.ts'
import { BRAVAIS } from '../crystal/bravais.ts'
import type { CellParameters } from '../crystal/cell.ts'
import { cellParameters } from '../crystal/lattice.ts'
import { type LatticeType, latticeType, symmetriseBasis } from '../crystal/lattice-type.ts'
import { IN_ANGSTROM, type Unit } from '../crystal/units.ts'
import { type Mat3, multiply, norm, spanned, transpose } from '../crystal/vector.ts'
import { plausibleUnits, type ReadNumber, readVectors, times, vectorsOf } from '../exchange/read-vectors.ts'
import { insertKeys } from '../format/edits.ts'
import type { Entry, LatticeDocument, ParameterName, TextEdit } from '../format/model.ts'
import { evaluate, formatNumber, recogniseFraction, recogniseSurd } from '../format/numbers.ts'
import { lineBreak, lineStart } from '../format/text.ts'
import { content, degrees, length } from '../meaning/wording.ts'
import type { PastedChoice, PastedLatticeResult } from '../protocol.ts'
import { rangeOf } from './diagnostics.ts'

/** What arithmetic leaves between equal numbers, relative to a vector. */
const SAME = 1e-9
/** Programs take a lattice for symmetric when it misses by about this, relative to its vectors (common practice). */
const PROGRAM_TOLERANCE = 1e-5
/** Roundings of three components move a vector by less than one unit of the last digit; numbers a unit apart differ. */
const ROUNDINGS = 1.8
/** Of the shortest vector: what is further from symmetric is no rounding. */
const LARGEST_MISFIT = 0.01
/** Digits of a number that was computed. */
const DIGITS = 10

/** @param offset where the cursor is: the document there gets the lattice. */
export function pastedLattice(clipboard: string, snapshot: Snapshot, offset: number): PastedLatticeResult {
  const { version } = snapshot
  const reading = readVectors(clipboard)
  if ('failure' in reading) return { version, choices: [], reason: reading.failure }
  const target = targetOf(snapshot, offset)
  if (typeof target === 'string') return { version, choices: [], reason: target }
  const { read } = reading
  const rows = vectorsOf(read)
  const columns = [0, 1, 2].map(i => rows.map(row => row[i]))
  const ways = [new Vectors(rows, 'rows'), new Vectors(columns, 'columns')].flatMap(way =>
    way.type ? [way] : [],
  )
  const [first, second] = inOrder(ways, read.columns)
  if (!first) return { version, choices: [], reason: 'The three vectors span no volume.' }
  const likely = read.unit ? [read.unit] : plausibleUnits(first.matrix)
  const units = likely.length > 0 ? likely : [target.unit]
  const own = units.includes(target.unit) ? [target.unit] : []
  const choices = [...new Set([...own, ...units])].flatMap(unit => [
    ...statements(first, unit, target, true),
    ...(second ? statements(second, unit, target, false) : []),
  ])
  return { version, choices: choices.map(choice => toChoice(choice, snapshot, target)) }
}

class Vectors {
  readonly matrix: Mat3
  /** Of the coarsest number. */
  readonly rounding: number
  readonly type: LatticeType | undefined

  constructor(
    readonly rows: readonly (readonly ReadNumber[])[],
    readonly from: 'rows' | 'columns',
  ) {
    this.matrix = rows.map(row => row.map(({ value }) => value)) as unknown as Mat3
    this.rounding = Math.max(...rows.flat().map(({ rounding }) => rounding))
    const shortest = Math.min(...this.matrix.map(norm))
    const tolerance = Math.max(PROGRAM_TOLERANCE * shortest, ROUNDINGS * this.rounding)
    this.type = latticeType(this.matrix, 3, Math.min(tolerance, LARGEST_MISFIT * shortest))
  }

  /** In another unit. */
  by(factor: number): Vectors {
    const number: ReadNumber = { value: factor, rounding: 0, text: String(factor) }
    return factor === 1
      ? this
      : new Vectors(
          this.rows.map(row => row.map(each => times(each, number))),
          this.from,
        )
  }
}

/** The way that the text names; else that of the more symmetric lattice, rows before columns. One that is the same is left out. */
function inOrder(ways: readonly Vectors[], namesColumns: boolean): readonly (Vectors | undefined)[] {
  const [rows, columns] = ways
  if (!columns || isSame(rows.matrix, columns.matrix)) return [rows]
  if (namesColumns) return [columns, rows]
  const order = ({ type }: Vectors) => type!.holohedry.length
  return order(columns) > order(rows) ? [columns, rows] : [rows, columns]
}

/** The same lattice up to a rotation. */
function isSame(m: Mat3, n: Mat3): boolean {
  const [g, h] = [multiply(m, transpose(m)), multiply(n, transpose(n))]
  const size = Math.max(...g.flat().map(Math.abs))
  return g.flat().every((x, i) => Math.abs(x - h.flat()[i]) <= SAME * size)
}

interface Statement {
  readonly title: string
  readonly detail: string
  readonly keys: readonly (readonly [name: string, value: string | readonly string[]])[]
  /** To be stated; undefined where the file's own will do. */
  readonly unit?: Unit
}

function statements(read: Vectors, unit: Unit, target: Target, isFirst: boolean): Statement[] {
  const converted = target.keepsUnit ? target.unit : unit
  const vectors = read.by(IN_ANGSTROM[unit] / IN_ANGSTROM[converted])
  const { type, matrix } = vectors
  const stated = converted === target.unit ? undefined : converted
  const volume = content(spanned(read.matrix) * IN_ANGSTROM[unit] ** 3, 3, 'angstrom', 2)
  const cell = `${read.from === 'columns' ? 'read by columns, ' : ''}read in ${NAME[unit]}: a primitive cell of ${volume}`
  const told = `${cell}${converted === unit ? '' : `, written in the file's ${NAME[converted]}`}`
  const asTheyAre: Statement = {
    title: `The vectors as they are, in ${NAME[unit]}`,
    detail: told,
    keys: [
      [
        'vectors',
        vectors.rows.map(
          row =>
            `[${row.map(({ text, value }) => (Number(text) === value ? text : formatNumber(value, DIGITS))).join(', ')}]`,
        ),
      ],
    ],
    unit: stated,
  }
  const bravais = type?.bravais
  if (!bravais) return [asTheyAre]
  const exact = symmetriseBasis(matrix, type.holohedry, 3)
  const conventional = cellParameters(multiply(type.conventionalFromPrimitive, exact))
  const parameters = BRAVAIS[bravais].free[0].map(
    (name): Parameter => ({
      name,
      value: shortest(conventional[name], name in LENGTHS ? vectors.rounding : 0),
    }),
  )
  const given = stating(parameters)
  const words = `${bravais}, ${BRAVAIS[bravais].words}`
  const sizes = parameters
    .map(
      ({ name, value }) =>
        `${SYMBOL[name]} = ${name in LENGTHS ? length(value, converted, 7) : degrees(value)}`,
    )
    .join(', ')
  const byType: Statement = {
    title: `${words}: ${sizes}`,
    detail: `${told}; by type, with the vectors of the format`,
    keys: [['bravais', bravais], ...given],
    unit: stated,
  }
  if (!isFirst) return type.holohedry.length > 2 ? [byType, asTheyAre] : [asTheyAre]
  const found = exactRows(exact, conventional, vectors)
  if (!found) return type.holohedry.length > 2 ? [byType, asTheyAre] : [asTheyAre, byType]
  const lengths = stating(found.lengths)
  const withFractions: Statement = {
    title: `${words}: these vectors with exact fractions of ${lengths.map(([name, value]) => `${name} = ${value}`).join(', ')}`,
    detail: told,
    keys: [['bravais', bravais], ...lengths, ['vectors', found.rows.map(row => `[${row.join(', ')}]`)]],
    unit: stated,
  }
  return [withFractions, byType, asTheyAre]
}

const stating = (parameters: readonly Parameter[]) =>
  parameters.map(({ name, value }) => [name, formatNumber(value, DIGITS)] as const)

const NAME: Record<Unit, string> = { angstrom: 'Å', nm: 'nm', bohr: 'bohr' }
const SYMBOL: Record<ParameterName, string> = { a: 'a', b: 'b', c: 'c', alpha: 'α', beta: 'β', gamma: 'γ' }
const LENGTHS = { a: true, b: true, c: true }

interface Parameter {
  readonly name: ParameterName
  readonly value: number
}

/** The number with the fewest digits that is this one within its rounding. */
function shortest(x: number, rounding: number): number {
  for (let digits = 0; digits <= DIGITS; digits++) {
    const short = Number(x.toFixed(digits))
    if (Math.abs(short - x) <= Math.max(rounding / 2, SAME * Math.abs(x))) return short
  }
  return x
}

/** Denominators that centrings and hexagonal axes bring with them divide 6. */
const LARGEST_DENOMINATOR = 6

/** `factor` times the length of that name; the factor as a value and as it stands around the name. */
interface Part {
  readonly name: LengthName | undefined
  readonly factor: number
  readonly text: string
  /** The simplest of several parts is meant. */
  readonly size: number
}
type LengthName = 'a' | 'b' | 'c'

interface ExactRows {
  readonly lengths: readonly Parameter[]
  readonly rows: readonly (readonly string[])[]
}

/**
 * Each component as an exact part of a length of the cell, with the lengths in as few digits as give every number that
 * was written when rounded to its digits. Undefined where some component is no such part.
 */
function exactRows(
  exact: Mat3,
  cell: CellParameters,
  { rows, rounding, matrix }: Vectors,
): ExactRows | undefined {
  const same = SAME * Math.max(...matrix.map(norm))
  const parts = exact.map(row => row.map(x => partOf(x, cell, Math.max(ROUNDINGS * rounding, same))))
  if (parts.flat().some(part => !part)) return undefined
  const used = (['a', 'b', 'c'] as const).filter(name => parts.flat().some(part => part!.name === name))
  for (let digits = 0; digits <= DIGITS; digits++) {
    const lengths = used.map((name): Parameter => ({ name, value: Number(cell[name].toFixed(digits)) }))
    const valueOf = (part: Part) => part.factor * (lengths.find(({ name }) => name === part.name)?.value ?? 0)
    const isWritten = parts.every((row, i) =>
      row.every(
        (part, j) => Math.abs(valueOf(part!) - rows[i][j].value) <= rows[i][j].rounding * (1 + SAME) + same,
      ),
    )
    if (isWritten) return { lengths, rows: parts.map(row => row.map(part => part!.text)) }
  }
  return undefined
}

function partOf(x: number, cell: CellParameters, tolerance: number): Part | undefined {
  if (Math.abs(x) <= tolerance) return { name: undefined, factor: 0, text: '0', size: 0 }
  const found = (['a', 'b', 'c'] as const).flatMap(
    name => fractionOf(x / cell[name], tolerance / cell[name], name) ?? [],
  )
  return found.sort((p, q) => p.size - q.size)[0]
}

/** `a/2`, `-2*a/3`, `sqrt(3)/2*a`. */
function fractionOf(ratio: number, tolerance: number, name: LengthName): Part | undefined {
  const found = recogniseFraction(ratio, tolerance, LARGEST_DENOMINATOR)
  if (found && found.p !== 0) {
    const { p, q } = found
    const factor = p === 1 ? '' : p === -1 ? '-' : `${p}*`
    return { name, factor: p / q, text: `${factor}${name}${q === 1 ? '' : `/${q}`}`, size: q + Math.abs(p) }
  }
  const surd = recogniseSurd(ratio, tolerance)
  const number = surd === undefined ? undefined : evaluate(surd)
  if (!number || !('number' in number)) return undefined
  return { name, factor: number.number.value, text: `${surd}*${name}`, size: SURD + surd!.length }
}
/** A root is less simple than any fraction. */
const SURD = 100

interface Target {
  readonly document?: LatticeDocument
  readonly unit: Unit
  /** The file's other lengths are in its unit: vectors are brought into it. */
  readonly keepsUnit: boolean
  /** The lattice that is replaced. */
  readonly replaced?: Entry
}

/** Keys with lengths, or that may hold them. */
const WITH_LENGTHS = ['unit', 'tolerance', 'sampling', 'mesh', 'frames']

/** @returns a sentence where the document cannot be written to. */
function targetOf(snapshot: Snapshot, offset: number): Target | string {
  const document = snapshot.documentAt(offset)?.document
  if (!document) return { unit: 'angstrom', keepsUnit: false }
  const { text } = snapshot
  const replaced = document.keys.get('lattice')
  if (replaced) {
    const block = text.slice(...replaced.item)
    const rest = text.slice(0, replaced.item[0]) + text.slice(replaced.item[1])
    const isNeeded = [...block.matchAll(/&([^\s,[\]{}]+)/g)].some(([, name]) => rest.includes(`*${name}`))
    if (isNeeded)
      return 'An alias elsewhere in the file needs what stands in its lattice: that is not replaced.'
  }
  const keepsUnit = WITH_LENGTHS.some(name => document.keys.has(name))
  return { document, unit: document.unit, keepsUnit, replaced }
}

function toChoice(
  { title, detail, keys, unit }: Statement,
  snapshot: Snapshot,
  target: Target,
): PastedChoice {
  const edits = editsFor(snapshot.text, target, keys, unit)
  return {
    title,
    detail,
    replaces: target.replaced !== undefined,
    edits: edits.map(({ at, text }): ProtocolEdit => ({ range: rangeOf(snapshot, at), newText: text })),
  }
}

function editsFor(
  text: string,
  { document, replaced }: Target,
  keys: Statement['keys'],
  unit: Unit | undefined,
): TextEdit[] {
  const feed = lineBreak(text)
  const stated = unit ? ([['unit', unit]] as const) : []
  if (!document) {
    const start = text === '' || text.endsWith('\n') ? '' : feed
    const lines = [
      ...stated.map(([name, value]) => `${name}: ${value}`),
      `lattice:${inBlock(keys, '', feed)}`,
    ]
    return [{ at: [text.length, text.length], text: `${start}${lines.join(feed)}${feed}` }]
  }
  const isFlow = text[document.contents[0]] === '{'
  if (!replaced) {
    const value = isFlow ? inFlow(keys) : inBlock(keys, indentOf(text, document), feed)
    return insertKeys(text, document, [...stated, ['lattice', value]]).map(edit => ({
      ...edit,
      text: isFlow ? edit.text : edit.text.replace(/: (?=\r?\n)/, ':'),
    }))
  }
  const start = replaced.key[0]
  const colon = /^\s*:/.exec(text.slice(replaced.key[1]))?.[0].length ?? 0
  const end = start + text.slice(start, Math.max(replaced.at[1], replaced.key[1] + colon)).trimEnd().length
  const indent = ' '.repeat(start - lineStart(text, start))
  const block = isFlow ? `lattice: ${inFlow(keys)}` : `lattice:${inBlock(keys, indent, feed)}`
  return [{ at: [start, end], text: block }, ...insertKeys(text, document, stated)]
}

const indentOf = (text: string, { contents: [start] }: LatticeDocument): string =>
  ' '.repeat(start - lineStart(text, start))

const inFlow = (keys: Statement['keys']): string =>
  `{${keys.map(([name, value]) => `${name}: ${typeof value === 'string' ? value : `[${value.join(', ')}]`}`).join(', ')}}`

const inBlock = (keys: Statement['keys'], indent: string, feed: string): string =>
  keys
    .flatMap(([name, value]) =>
      typeof value === 'string'
        ? [`  ${name}: ${value}`]
        : [`  ${name}:`, ...value.map(row => `    - ${row}`)],
    )
    .map(line => `${feed}${indent}${line}`)
    .join('')
