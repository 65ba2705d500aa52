/** Plain lists of numbers as they stand in the inputs and outputs of other programs. */
import { normaliseLabel } from '../format/path.ts'
import { type ListedNumber, listedNumber } from './listed-number.ts'

export interface KList {
  /** Columns of the list, one entry a point. */
  readonly points: readonly (readonly number[])[]
  /** From 1. */
  readonly lines: readonly number[]
  readonly weights?: readonly number[]
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

interface Row {
  readonly line: number
  readonly numbers: readonly (ListedNumber | undefined)[]
  readonly label?: string
}

/**
 * @param dimension of the crystal: with fewer than three a third column of zeros is a component, else a weight.
 * @returns what is wrong, in one line, where no point can be read or a weight is missing.
 */
export function readKList(
  text: string,
  dimension: number,
  { columns, weight }: ListColumns,
): KList | { readonly fault: string } {
  const rows: Row[] = []
  const skipped: { line: number; text: string }[] = []
  let comments = 0
  // Nothing is read of wide tables but what is asked for.
  const looked = [...(columns ?? [1, 2, 3, 4]), ...(weight === undefined ? [] : [weight])]
  const least = columns ? Math.max(...columns) : dimension
  for (const [i, raw] of text.split(/\r\n|\r|\n/).entries()) {
    const mark = raw.search(/[#!]/)
    const content = (mark < 0 ? raw : raw.slice(0, mark)).trim()
    if (content === '') {
      if (mark >= 0) comments++
      continue
    }
    const words = content
      .replace(/[[\](){},;]/g, ' ')
      .trim()
      .split(/\s+/)
    const numbers: (ListedNumber | undefined)[] = []
    for (const column of looked) numbers[column - 1] = listedNumber(words[column - 1] ?? '')
    const chosen = columns ? columns.map(column => numbers[column - 1]) : numbers.slice(0, dimension)
    if (words.length < least || chosen.some(number => !number)) {
      skipped.push({ line: i + 1, text: content })
      continue
    }
    const trailing = words.at(-1)!
    const label = normaliseLabel((mark < 0 ? trailing : raw.slice(mark + 1)).trim().split(/\s+/)[0] ?? '')
    rows.push({ line: i + 1, numbers, label })
  }
  if (rows.length === 0)
    return {
      fault: `no line has ${least} numbers in the columns that are looked at${skipped.length > 0 ? ` (line ${skipped[0].line}: ${JSON.stringify(skipped[0].text.slice(0, 40))})` : ''}`,
    }
  const used = columns ?? firstColumns(rows, dimension)
  const weightColumn = weight ?? (columns ? undefined : used.length + 1)
  const weights =
    weightColumn === undefined ? undefined : rows.map(({ numbers }) => numbers[weightColumn - 1])
  const without = weights?.findIndex(number => !number) ?? -1
  if (weight !== undefined && without >= 0)
    return { fault: `line ${rows[without].line}: no number in the weight column ${weight}` }
  const given = without < 0 && weights ? (weights as ListedNumber[]) : undefined
  return {
    points: rows.map(({ numbers }) => used.map(column => numbers[column - 1]!.value)),
    lines: rows.map(({ line }) => line),
    weights: given?.map(({ value }) => value),
    weightDigit: given ? finest(given) : 0,
    labels: new Map(rows.flatMap(({ label }, i) => (label === undefined ? [] : [[i, label] as const]))),
    digits: used.map(column => finest(rows.map(({ numbers }) => numbers[column - 1]!))),
    comments,
    skipped,
  }
}

/** A list of a sheet may have a third column: the component along the normal where it is zero throughout. */
function firstColumns(rows: readonly Row[], dimension: number): number[] {
  const isComponent = (column: number) => rows.every(({ numbers }) => numbers[column - 1]?.value === 0)
  const columns = [1, 2, 3].slice(0, dimension)
  while (columns.length < 3 && isComponent(columns.length + 1)) columns.push(columns.length + 1)
  return columns
}

/** Programs may drop zeros at the end of a number: the longest ones tell how many digits were meant. */
function finest(numbers: readonly ListedNumber[]): number {
  let digit = Number.POSITIVE_INFINITY
  for (const number of numbers) if (number.digit > 0 && number.digit < digit) digit = number.digit
  return Number.isFinite(digit) ? digit : 0
}

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
