/** The check values of labels.json, with random cells of each variation made from its own formulas and conditions. */
import { readFileSync } from 'node:fs'
import { type BookMatch, matchBook } from '../../server/src/books/match.ts'
import type { BookName } from '../../server/src/books/index.ts'
import type { CellParameters } from '../../server/src/crystal/cell.ts'
import {
  angle,
  inverse,
  type Mat3,
  multiply,
  norm,
  transpose,
  type Vec3,
} from '../../server/src/crystal/vector.ts'

export type Random = () => number

/** A seeded generator (mulberry32). */
export function seeded(seed: number): Random {
  let state = seed
  return () => {
    state = (state + 0x6d2b79f5) | 0
    let t = Math.imul(state ^ (state >>> 15), 1 | state)
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296
  }
}

export interface ReferencePoint {
  readonly coordinates: readonly string[]
  readonly sample: readonly number[]
  readonly where: string | readonly string[]
  readonly littleCoGroup: number
}

export interface Reference {
  readonly id: string
  readonly source: string
  readonly bravais: string
  readonly dimension: 2 | 3
  readonly positive: readonly string[]
  readonly zero: readonly string[]
  readonly reducedCell: readonly string[]
  readonly free: readonly string[]
  readonly primitive: readonly (readonly string[])[]
  readonly parameters: readonly (readonly [string, string])[]
  readonly points: Readonly<Record<string, ReferencePoint>>
  readonly equivalent: readonly (readonly string[])[]
  readonly path: readonly (readonly string[])[]
  readonly lines: readonly { readonly label: string; readonly ends: readonly string[] }[]
  readonly holohedry: number
  readonly sample: {
    readonly cell: Readonly<Record<string, number>>
    readonly vectors: readonly (readonly number[])[]
    readonly parameters: Readonly<Record<string, number>>
  }
}

export const REFERENCE: {
  readonly entries: readonly Reference[]
  readonly samePoint: readonly {
    readonly entries: readonly string[]
    readonly points: readonly Partial<Record<BookName, readonly string[]>>[]
  }[]
} = JSON.parse(readFileSync(new URL('./labels.json', import.meta.url), 'utf8'))

export const entryOf = (id: string): Reference => REFERENCE.entries.find(entry => entry.id === id)!

/** Plane lattices have one book, whichever is asked for. */
export const bookOf = ({ id }: Reference): BookName =>
  (id.startsWith('plane/') ? 'setyawan-curtarolo-2010' : id.split('/')[0]) as BookName

/** Space groups for which alone the source gives the variation; one of each list. */
const SPACE_GROUPS: Record<string, number> = {
  'hinuma-2017/cP/1': 195,
  'hinuma-2017/cF/1': 202,
  'hinuma-2017/hP/1': 162,
  'hinuma-2017/oA/1': 38,
  'hinuma-2017/oA/2': 41,
}

export const match = (entry: Reference, vectors: Mat3, tolerance = 1e-6): BookMatch | undefined =>
  matchBook(bookOf(entry), vectors, entry.dimension, { tolerance, spaceGroup: SPACE_GROUPS[entry.id] })

type Scope = Readonly<Record<string, number>>

const FUNCTIONS = { sqrt: Math.sqrt, sin: Math.sin, cos: Math.cos, tan: Math.tan, PI: Math.PI }

/** The check values are formulas in JavaScript's own notation. */
function evaluate(text: string, scope: Scope): number {
  const names = Object.keys(scope)
  const key = `${text};${names}`
  let formula = formulas.get(key)
  if (!formula) {
    formula = new Function(...Object.keys(FUNCTIONS), ...names, `return ${text}`) as (
      ...values: unknown[]
    ) => number
    formulas.set(key, formula)
  }
  return formula(...Object.values(FUNCTIONS), ...Object.values(scope))
}
const formulas = new Map<string, (...values: unknown[]) => number>()

export interface Sample {
  readonly scope: Scope
  /** Primitive vectors as the source gives them. */
  readonly vectors: Mat3
  /** By label, as the source gives them. */
  readonly fractions: ReadonlyMap<string, Vec3>
}

const DEGREE = Math.PI / 180
const between = (random: Random, low: number, high: number): number => low + (high - low) * random()

/** A cell with lengths within a factor of four; the names that the variation does not leave free follow from it. */
function randomCell(entry: Reference, random: Random): Scope {
  const length = () => between(random, 0.5, 2)
  if (entry.bravais === 'aP') return randomTriclinic(entry, random)
  const cell: Record<string, number> = {}
  for (const name of entry.free) cell[name] = name.length === 1 ? length() : between(random, 35, 145) * DEGREE
  const { b, c, alpha } = cell
  if (entry.id === 'setyawan-curtarolo-2010/oF/3') cell.a = 1 / Math.sqrt(1 / b ** 2 + 1 / c ** 2)
  if (entry.id === 'setyawan-curtarolo-2010/mC/2') cell.a = b * Math.sin(alpha)
  if (entry.id === 'setyawan-curtarolo-2010/mC/4')
    cell.a = (b * Math.sin(alpha)) / Math.sqrt(1 - (b * Math.cos(alpha)) / c)
  return cell
}

/** Made from a random reciprocal cell, on which the conditions are. */
function randomTriclinic(entry: Reference, random: Random): Scope {
  const lengths = [1, 2, 3].map(() => between(random, 0.5, 2))
  const border = entry.zero.length > 0
  const angles = [0, 1, 2].map(i => (border && i === 2 ? 90 : between(random, 50, 130)) * DEGREE)
  const reciprocal = fromParameters(lengths, angles)
  const direct = transpose(inverse(reciprocal))
  return {
    a: norm(direct[0]),
    b: norm(direct[1]),
    c: norm(direct[2]),
    alpha: angle(direct[1], direct[2]) * DEGREE,
    beta: angle(direct[0], direct[2]) * DEGREE,
    gamma: angle(direct[0], direct[1]) * DEGREE,
  }
}

function fromParameters([a, b, c]: number[], [alpha, beta, gamma]: number[]): Mat3 {
  const x = Math.cos(beta)
  const y = (Math.cos(alpha) - Math.cos(beta) * Math.cos(gamma)) / Math.sin(gamma)
  return [
    [a, 0, 0],
    [b * Math.cos(gamma), b * Math.sin(gamma), 0],
    [c * x, c * y, c * Math.sqrt(1 - x * x - y * y)],
  ]
}

function withReciprocal(scope: Scope, vectors: Mat3): Scope {
  const [p, q, r] = transpose(inverse(vectors))
  const k = { kalpha: angle(q, r) * DEGREE, kbeta: angle(p, r) * DEGREE, kgamma: angle(p, q) * DEGREE }
  return { ...scope, ka: norm(p), kb: norm(q), kc: norm(r), ...k }
}

const inSpace = (row: readonly number[]): Vec3 => [row[0], row[1], row[2] ?? 0]
export const rowsInSpace = (rows: readonly (readonly number[])[]): Mat3 =>
  [...rows.map(inSpace), [0, 0, 1]].slice(0, 3) as unknown as Mat3

/** What the check values say of a conventional cell (angles in degrees) that need not be one of the variation. */
export function evaluateIn(
  entry: Reference,
  cell: CellParameters,
): {
  metric: Mat3
  fractions: Map<string, Vec3>
  /** Conditions that should be above zero. */
  conditions: { text: string; value: number }[]
} {
  const { alpha, beta, gamma } = cell
  const scope = { ...cell, alpha: alpha * DEGREE, beta: beta * DEGREE, gamma: gamma * DEGREE }
  const sample = calculate(entry, scope)
  return {
    metric: multiply(sample.vectors, transpose(sample.vectors)),
    fractions: sample.fractions,
    conditions: [...entry.positive, ...entry.reducedCell].map(text => ({
      text,
      value: evaluate(text, sample.scope),
    })),
  }
}

function calculate(
  entry: Reference,
  cell: Scope,
): { scope: Scope; vectors: Mat3; fractions: Map<string, Vec3> } {
  const vectors = rowsInSpace(entry.primitive.map(row => row.map(text => evaluate(text, cell))))
  const scope: Record<string, number> = { ...withReciprocal(cell, vectors) }
  for (const [name, text] of entry.parameters) scope[name] = evaluate(text, scope)
  const fractions = Object.entries(entry.points).map(
    ([label, { coordinates }]) => [label, inSpace(coordinates.map(text => evaluate(text, scope)))] as const,
  )
  return { scope, vectors, fractions: new Map(fractions) }
}

/** Everything that the check values say of one cell; undefined where it is no cell of the variation. */
function sampleOf(entry: Reference, cell: Scope): Sample | undefined {
  const sample = calculate(entry, cell)
  if (!sample.vectors.flat().every(Number.isFinite)) return undefined
  // Cells hard on a border belong to the tests of borders.
  const margin = 1e-3
  const holds = [...entry.positive, ...entry.reducedCell].every(text => evaluate(text, sample.scope) > margin)
  return holds && isShortest(entry, sample.vectors) ? sample : undefined
}

/** A triclinic reciprocal cell is a reduced one in all books; the check values do not repeat that. */
function isShortest(entry: Reference, vectors: Mat3): boolean {
  if (entry.bravais !== 'aP') return true
  const b = transpose(inverse(vectors))
  const combinations = [-1, 0, 1].flatMap(i => [-1, 0, 1].flatMap(j => [-1, 0, 1].map(k => [i, j, k])))
  return combinations.every(([i, j, k]) => {
    const length = norm([0, 1, 2].map(x => i * b[0][x] + j * b[1][x] + k * b[2][x]) as unknown as Vec3)
    return [i, j, k].every((n, x) => n === 0 || length >= norm(b[x]) * (1 - 1e-9))
  })
}

/** Random cells of a variation, by rejection. */
export function samples(entry: Reference, count: number, random: Random): Sample[] {
  const found: Sample[] = []
  for (let tries = 0; found.length < count; tries++) {
    if (tries > 200_000) throw new Error(`no cell of ${entry.id} found`)
    const sample = sampleOf(entry, randomCell(entry, random))
    if (sample) found.push(sample)
  }
  return found
}

/** Whole numbers with determinant ±1: another basis of the same lattice, too skewed to be a cell of any book. */
export function randomBasis(dimension: 2 | 3, random: Random): Mat3 {
  for (;;) {
    const basis = shears(dimension, random)
    if (basis.some(row => row.some(x => Math.abs(x) > 2))) return basis
  }
}

function shears(dimension: 2 | 3, random: Random): Mat3 {
  const rows = [
    [1, 0, 0],
    [0, 1, 0],
    [0, 0, 1],
  ]
  for (let step = 0; step < 6; step++) {
    const i = Math.floor(random() * dimension)
    const j = (i + 1 + Math.floor(random() * (dimension - 1))) % dimension
    const factor = random() < 0.5 ? 1 : -1
    for (let x = 0; x < 3; x++) rows[i][x] += factor * rows[j][x]
    if (random() < 0.3) rows[i] = rows[i].map(x => -x)
  }
  return rows as unknown as Mat3
}

/** A rotation of space (of the plane, for plane lattices), from a random unit quaternion (K. Shoemake, 1992). */
export function randomRotation(dimension: 2 | 3, random: Random): Mat3 {
  if (dimension === 2) {
    const turn = random() * 2 * Math.PI
    return [
      [Math.cos(turn), Math.sin(turn), 0],
      [-Math.sin(turn), Math.cos(turn), 0],
      [0, 0, 1],
    ]
  }
  const [r, s, t] = [random(), 2 * Math.PI * random(), 2 * Math.PI * random()]
  const [x, y] = [Math.sqrt(1 - r) * Math.sin(s), Math.sqrt(1 - r) * Math.cos(s)]
  const [z, w] = [Math.sqrt(r) * Math.sin(t), Math.sqrt(r) * Math.cos(t)]
  return [
    [1 - 2 * (y * y + z * z), 2 * (x * y - z * w), 2 * (x * z + y * w)],
    [2 * (x * y + z * w), 1 - 2 * (x * x + z * z), 2 * (y * z - x * w)],
    [2 * (x * z - y * w), 2 * (y * z + x * w), 1 - 2 * (x * x + y * y)],
  ]
}
