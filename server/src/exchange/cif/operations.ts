/** Symmetry operations as CIF writes them, `-x,y+1/2,-z`, and the groups that they make. */
import { recogniseFraction } from '../../format/numbers.ts'
import { findSymmetry } from '../../crystal/symmetry.ts'
import type { Operation } from '../../crystal/symmetry-library.ts'
import {
  add,
  angle,
  apply,
  combine,
  determinant,
  IDENTITY,
  type Mat3,
  multiply,
  norm,
  transpose,
  type Vec3,
} from '../../crystal/vector.ts'

export const IDENTITY_OPERATION: Operation = { rotation: IDENTITY, translation: [0, 0, 0] }

const AXES = 'xyz'
/** A sign, then a number (perhaps a fraction), a letter, or both. */
const TERM = /([+-]?)(?:(\d+(?:\.\d*)?|\.\d+)(?:\/(\d+(?:\.\d*)?))?\*?([xyz])?|([xyz]))/y
const LONGEST = 200

/**
 * The operation of a coordinate triplet in any spelling: `-x,y+1/2,-z`, `1/2+X, -Y, 0.5-Z`, `x-y,x,z+.3333`.
 * Translations are in [0, 1). Undefined where it is no such triplet, or no operation of a lattice.
 */
export function parseTriplet(text: string): Operation | undefined {
  if (text.length > LONGEST) return undefined
  const parts = text
    .toLowerCase()
    .replace(/[−–]/g, '-')
    .replace(/[\s"']/g, '')
    .split(',')
  if (parts.length !== 3) return undefined
  const rows = parts.map(parseRow)
  if (!rows.every(row => row !== undefined)) return undefined
  const rotation = rows.map(row => row.factors) as unknown as Mat3
  if (Math.abs(determinant(rotation)) !== 1) return undefined
  return { rotation, translation: wrap(rows.map(row => row.shift) as unknown as Vec3) }
}

function parseRow(text: string): { factors: Vec3; shift: number } | undefined {
  const factors: [number, number, number] = [0, 0, 0]
  let shift = 0
  TERM.lastIndex = 0
  let terms = 0
  while (TERM.lastIndex < text.length) {
    const start = TERM.lastIndex
    const found = TERM.exec(text)
    // Only the first term goes without a sign.
    if (!found || (terms > 0 && found[1] === '')) return undefined
    if (TERM.lastIndex === start) return undefined
    terms++
    const [, sign, number, below, with_, alone] = found
    const letter = with_ ?? alone
    const size = number === undefined ? 1 : Number(number) / (below === undefined ? 1 : Number(below))
    const value = sign === '-' ? -size : size
    if (!Number.isFinite(value)) return undefined
    if (letter) factors[AXES.indexOf(letter) as 0 | 1 | 2] += value
    else shift += below === undefined ? exactShift(value, number) : value
  }
  if (terms === 0 || !factors.every(Number.isInteger)) return undefined
  return { factors, shift }
}

/** `.3333` is a third that was cut short: translations of space groups are of the order 24 at most. */
function exactShift(value: number, written: string): number {
  const decimals = written.split('.')[1]?.length ?? 0
  const found = decimals < 2 ? undefined : recogniseFraction(value, 10 ** -decimals)
  return found ? found.p / found.q : value
}

/** Coordinates that differ by less, in fractions, are one: what is left of whole numbers after some arithmetic. */
const SAME = 1e-9

const wrapOne = (x: number): number => {
  const inside = x - Math.floor(x + SAME)
  return Math.abs(inside) < SAME ? 0 : inside
}
/** Into [0, 1), a hair below 1 to 0. */
export const wrap = (v: Vec3): Vec3 => [wrapOne(v[0]), wrapOne(v[1]), wrapOne(v[2])]

/** x,y,z as CIF writes it: `-x,y+1/2,-z`. */
export const writeTriplet = ({ rotation, translation }: Operation): string =>
  rotation
    .map((row, i) => {
      const letters = row
        .map((factor, j) => (factor === 0 ? '' : `${signed(factor)}${AXES[j]}`))
        .join('')
        .replace(/^\+/, '')
      const found = recogniseFraction(translation[i], SAME)
      const size = found
        ? found.p === 0
          ? ''
          : `${found.p}${found.q === 1 ? '' : `/${found.q}`}`
        : translation[i].toFixed(6)
      return letters + (size && !size.startsWith('-') ? `+${size}` : size)
    })
    .join(',')

const signed = (factor: number): string =>
  factor === 1 ? '+' : factor === -1 ? '-' : factor > 0 ? `+${factor}` : `${factor}`

/** `first` after `then` … in the order of functions: x → p(q(x)). */
const compose = (p: Operation, q: Operation): Operation => ({
  rotation: multiply(p.rotation, q.rotation),
  translation: wrap(add(apply(p.rotation, q.translation), p.translation)),
})

/** Translations of operations differ by a 48th at least. */
const STEPS = 480
/** The same for operations that are equal modulo lattice vectors. */
export const operationKey = ({ rotation, translation }: Operation): string =>
  `${rotation.flat().join()};${translation.map(t => Math.round(t * STEPS) % STEPS).join()}`

/** 192 operations in the largest standard cell; a multiple cell has more. */
const MOST_OPERATIONS = 4 * 192

/** The group that operations generate, theirs first, identity in front; undefined where it does not close. */
export function closed(operations: readonly Operation[]): Operation[] | undefined {
  const known = new Map<string, Operation>([[operationKey(IDENTITY_OPERATION), IDENTITY_OPERATION]])
  const generators: Operation[] = []
  for (const operation of operations) {
    if (known.has(operationKey(operation))) continue
    generators.push(operation)
    const waiting = [...known.values()]
    for (let element = waiting.pop(); element; element = waiting.pop())
      for (const generator of generators) {
        const product = compose(generator, element)
        const key = operationKey(product)
        if (known.has(key)) continue
        if (known.size >= MOST_OPERATIONS) return undefined
        known.set(key, product)
        waiting.push(product)
      }
  }
  const order = new Map(operations.map((operation, i) => [operationKey(operation), i]))
  const rank = (key: string) => order.get(key) ?? operations.length
  return [
    IDENTITY_OPERATION,
    ...[...known].sort(([p], [q]) => rank(p) - rank(q)).flatMap(([, o]) => (isIdentity(o) ? [] : [o])),
  ]
}

const isIdentity = ({ rotation, translation }: Operation): boolean =>
  isUnit(rotation) && translation.every(t => t === 0)

export const isUnit = (rotation: Mat3): boolean =>
  rotation.every((row, i) => row.every((x, j) => x === IDENTITY[i][j]))

/**
 * By how much rotations (on columns of fractions) miss being symmetries of a cell: the largest difference of two
 * lengths that they make equal, or of two angles times the mean length of their sides; with the rotation at fault.
 */
export function metricMiss(rotations: readonly Mat3[], rows: Mat3): { by: number; rotation: Mat3 } {
  let worst = { by: 0, rotation: IDENTITY }
  const lengths = rows.map(norm)
  for (const rotation of rotations) {
    const images = transpose(rotation).map(column => combine(column, rows))
    for (let i = 0; i < 3; i++) {
      const j = (i + 1) % 3
      const turn = Math.abs(angle(images[i], images[j]) - angle(rows[i], rows[j])) * (Math.PI / 180)
      const by = Math.max(Math.abs(norm(images[i]) - lengths[i]), (turn * (lengths[i] + lengths[j])) / 2)
      if (by > worst.by) worst = { by, rotation }
    }
  }
  return worst
}

/** Two places in no special relation to each other or to any axis. */
const GENERAL: readonly Vec3[] = [
  [0.1234, 0.2718, 0.3977],
  [0.4142, 0.0577, 0.1618],
]
/** A cell in no special shape, rows; its metric is averaged over the group. */
const SHAPE: Mat3 = [
  [7.1, 0, 0],
  [0.9, 8.3, 0],
  [-0.6, 1.3, 9.7],
]
const TOLERANCE = 1e-4

/**
 * The number of the space-group type (International Tables, 1–230) that operations make, in whatever setting: that of
 * a crystal with two atoms on general positions in a cell that has no more symmetry than the group needs.
 * Undefined where the symmetry library finds none.
 */
export function groupNumber(operations: readonly Operation[]): number | undefined {
  const metric = multiply(SHAPE, transpose(SHAPE))
  const sum = [0, 1, 2].map(() => [0, 0, 0])
  for (const { rotation } of operations) {
    const turned = multiply(multiply(transpose(rotation), metric), rotation)
    for (const i of [0, 1, 2]) for (const j of [0, 1, 2]) sum[i][j] += turned[i][j] / operations.length
  }
  const found = findSymmetry({
    dimension: 3,
    primitive: triangular(sum as unknown as Mat3),
    positions: GENERAL.flatMap(x => operations.map(o => wrap(add(apply(o.rotation, x), o.translation)))),
    species: GENERAL.flatMap((_, i) => operations.map(() => i)),
    tolerance: TOLERANCE,
  })
  return 'failed' in found ? undefined : found.spaceGroup?.number
}

/** Rows whose products are a metric (Cholesky). */
function triangular(metric: Mat3): Mat3 {
  const rows = [0, 1, 2].map(() => [0, 0, 0])
  for (let i = 0; i < 3; i++)
    for (let j = 0; j <= i; j++) {
      let rest = metric[i][j]
      for (let k = 0; k < j; k++) rest -= rows[i][k] * rows[j][k]
      rows[i][j] = i === j ? Math.sqrt(rest) : rest / rows[j][j]
    }
  return rows as unknown as Mat3
}
