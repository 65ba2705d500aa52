/** Plain lists of numbers as they stand in the inputs and outputs of other programs. */
import { normaliseLabel } from '../format/path.ts'
import { listedNumber } from './listed-number.ts'

export interface KList {
  readonly count: number
  /** Three numbers a point: the columns of the list, then zeros. */
  readonly points: Float64Array
  /** From 1. */
  readonly lines: Int32Array
  readonly weights?: Float64Array
  /** One unit of the last digit, of the weights; 0 for whole numbers. */
  readonly weightDigit: number
  readonly labels: ReadonlyMap<number, string>
  /** One unit of the last digit of each column, the finest of the list; 0 where all numbers are exact. */
  readonly digits: readonly number[]
  /** Lines that are no points: comments, and others. */
  readonly comments: number
  readonly skipped: readonly { readonly line: number; readonly text: string }[]
}

export interface ListColumns {
  /** From 1; undefined: the first ones. */
  readonly columns?: readonly number[]
  /** From 1; undefined: the one after the first ones, where every line has it. */
  readonly weight?: number
}

/** The numbers of one column of the lines that are points. */
interface Column {
  /** NaN where a line has none. */
  readonly values: Float64Array
  /**
   * The finest of one unit of the last digit; infinite where all numbers are exact. Programs may drop zeros at the end of a
   * number: the longest ones tell how many digits were meant.
   */
  digit: number
  /** The first point without a number; −1 where all have one. */
  without: number
}

/**
 * Lists may have many thousand lines: no object is made for a line.
 * @param dimension of the crystal: with fewer than three a third column of zeros is a component, else a weight.
 * @returns what is wrong, in one line, where no point can be read or a weight is missing.
 */
export function readKList(
  text: string,
  dimension: number,
  { columns, weight }: ListColumns,
): KList | { readonly fault: string } {
  // Nothing is read of wide tables but what is asked for.
  const looked = [...new Set([...(columns ?? [1, 2, 3, 4]), ...(weight === undefined ? [] : [weight])])]
  const needed = columns ?? [1, 2, 3].slice(0, dimension)
  const least = Math.max(...needed)
  const lineCount = linesOf(text)
  const found = new Map<number, Column>(
    looked.map(column => [
      column,
      { values: new Float64Array(lineCount), digit: Number.POSITIVE_INFINITY, without: -1 },
    ]),
  )
  const read = looked.map((column): [number, Column] => [column - 1, found.get(column)!])
  const required = needed.map(column => found.get(column)!)
  const lines = new Int32Array(lineCount)
  const labels = new Map<number, string>()
  const skipped: { line: number; text: string }[] = []
  const words = new Words(text)
  const number = new NumberReader(text)
  const digits = new Float64Array(looked.length)
  let comments = 0
  let count = 0
  for (let line = 1, from = 0; line <= lineCount; line++) {
    const end = lineEnd(text, from)
    words.read(from, end)
    const start = from
    from = end + (text.charCodeAt(end) === RETURN && text.charCodeAt(end + 1) === NEWLINE ? 2 : 1)
    if (words.count === 0 && words.isEmpty) {
      if (words.mark >= 0) comments++
      continue
    }
    for (const [n, [at, { values }]] of read.entries()) {
      const there = at < words.count && number.read(words.from[at], words.to[at])
      values[count] = there ? number.value : Number.NaN
      digits[n] = there ? number.digit : 0
    }
    if (words.count < least || required.some(({ values }) => Number.isNaN(values[count]))) {
      skipped.push({ line, text: text.slice(start, words.mark < 0 ? end : words.mark).trim() })
      continue
    }
    for (const [n, [, column]] of read.entries()) {
      if (digits[n] > 0 && digits[n] < column.digit) column.digit = digits[n]
      if (column.without < 0 && Number.isNaN(column.values[count])) column.without = count
    }
    const label = words.mark < 0 ? trailingLabel(text, words) : firstLabel(text.slice(words.mark + 1, end))
    if (label !== undefined) labels.set(count, label)
    lines[count++] = line
  }
  if (count === 0)
    return {
      fault: `no line has ${least} numbers in the columns that are looked at${skipped.length > 0 ? ` (line ${skipped[0].line}: ${JSON.stringify(skipped[0].text.slice(0, 40))})` : ''}`,
    }
  const used = columns ?? firstColumns(found, dimension, count)
  const weightColumn = weight ?? (columns ? undefined : used.length + 1)
  const weights = weightColumn === undefined ? undefined : found.get(weightColumn)!
  if (weight !== undefined && weights!.without >= 0)
    return { fault: `line ${lines[weights!.without]}: no number in the weight column ${weight}` }
  const given = weights && weights.without < 0 ? weights : undefined
  const points = new Float64Array(3 * count)
  for (const [axis, column] of used.entries()) {
    const { values } = found.get(column)!
    for (let i = 0; i < count; i++) points[3 * i + axis] = values[i]
  }
  const finest = ({ digit }: Column) => (Number.isFinite(digit) ? digit : 0)
  return {
    count,
    points,
    lines: lines.slice(0, count),
    weights: given?.values.slice(0, count),
    weightDigit: given ? finest(given) : 0,
    labels,
    digits: used.map(column => finest(found.get(column)!)),
    comments,
    skipped,
  }
}

/** A list of a sheet may have a third column: the component along the normal where it is zero throughout. */
function firstColumns(found: ReadonlyMap<number, Column>, dimension: number, count: number): number[] {
  const isComponent = (column: number) =>
    found
      .get(column)!
      .values.subarray(0, count)
      .every(value => value === 0)
  const columns = [1, 2, 3].slice(0, dimension)
  while (columns.length < 3 && isComponent(columns.length + 1)) columns.push(columns.length + 1)
  return columns
}

const NEWLINE = 10
const RETURN = 13
const ZERO = 48
const NINE = 57

function lineEnd(text: string, from: number): number {
  let at = from
  for (; at < text.length; at++) {
    const code = text.charCodeAt(at)
    if (code === NEWLINE || code === RETURN) break
  }
  return at
}

function linesOf(text: string): number {
  let lines = 1
  for (let at = 0; at < text.length; at++) {
    const code = text.charCodeAt(at)
    if (code === NEWLINE || (code === RETURN && text.charCodeAt(at + 1) !== NEWLINE)) lines++
  }
  return lines
}

const isSpace = (code: number): boolean =>
  code === 32 || (code >= 9 && code <= 13) || (code > 127 && /\s/.test(String.fromCharCode(code)))
const BRACKETS = new Set([...'[](){},;'].map(character => character.charCodeAt(0)))
const MARKS = new Set([...'#!'].map(character => character.charCodeAt(0)))

/** The words of one line after another, parted by spaces, brackets, commas and semicolons. */
class Words {
  count = 0
  /** Where each begins and ends in the text. */
  readonly from: number[] = []
  readonly to: number[] = []
  /** Where the comment begins; −1 where there is none. */
  mark = -1
  /** Nothing but spaces before the comment. */
  isEmpty = true

  constructor(private readonly text: string) {}

  read(from: number, end: number): void {
    this.count = 0
    this.mark = -1
    this.isEmpty = true
    let isInside = false
    let at = from
    for (; at < end; at++) {
      const code = this.text.charCodeAt(at)
      if (MARKS.has(code)) {
        this.mark = at
        break
      }
      const space = isSpace(code)
      if (!space) this.isEmpty = false
      const parts = space || BRACKETS.has(code)
      if (parts === isInside) {
        if (parts) this.to[this.count++] = at
        else this.from[this.count] = at
        isInside = !parts
      }
    }
    if (isInside) this.to[this.count++] = at
  }
}

/** Reads plain decimals where they stand, all else as `listedNumber` does. */
class NumberReader {
  value = 0
  digit = 0

  constructor(private readonly text: string) {}

  /** @returns whether there is a number from here to there. */
  read(from: number, to: number): boolean {
    const first = this.text.charCodeAt(from)
    const start = first === MINUS || first === PLUS ? from + 1 : from
    let point = -1
    for (let at = start; at < to; at++) {
      const code = this.text.charCodeAt(at)
      if (code === POINT && point < 0) point = at
      else if (code < ZERO || code > NINE) return this.#readOther(from, to)
    }
    const decimals = point < 0 ? 0 : to - point - 1
    const isDigitless = to - start === (point < 0 ? 0 : 1)
    if (isDigitless || decimals >= UNITS.length) return this.#readOther(from, to)
    this.value = Number(this.text.slice(from, to))
    this.digit = UNITS[decimals]
    return true
  }

  #readOther(from: number, to: number): boolean {
    const number = listedNumber(this.text.slice(from, to))
    if (!number) return false
    this.value = number.value
    this.digit = number.digit
    return true
  }
}
const MINUS = 45
const PLUS = 43
const POINT = 46
/** One unit of the last digit, by the number of decimals; whole numbers are exact. */
const UNITS = Array.from({ length: 32 }, (_, decimals) => (decimals === 0 ? 0 : 10 ** -decimals))

/** A label after the numbers. No label begins with a digit, a sign or a point: most lines end with a number. */
function trailingLabel(text: string, { count, from, to }: Words): string | undefined {
  const first = text.charCodeAt(from[count - 1])
  if (first <= NINE) return undefined
  return normaliseLabel(text.slice(from[count - 1], to[count - 1]))
}

const firstLabel = (comment: string): string | undefined =>
  normaliseLabel(comment.trim().split(/\s+/)[0] ?? '')

/** Rows of numbers, as many as a cell has vectors. @returns what is wrong, in one line. */
export function readVectors(
  text: string,
  dimension: number,
): readonly (readonly number[])[] | { readonly fault: string } {
  const rows: number[][] = []
  for (const [i, raw] of text.split(/\r\n|\r|\n/).entries()) {
    const content = raw
      .replace(/[#!].*$/, '')
      .replace(/[[\](){},;]/g, ' ')
      .trim()
    if (content === '') continue
    const numbers = content.split(/\s+/).map(listedNumber)
    if (numbers.some(number => !number) || numbers.length !== 3)
      return {
        fault: `line ${i + 1}: a vector has three numbers; here is ${JSON.stringify(content.slice(0, 40))}`,
      }
    rows.push(numbers.map(number => number!.value))
  }
  if (rows.length !== dimension && rows.length !== 3)
    return { fault: `${rows.length} vectors; the crystal has ${dimension}` }
  return rows
}
