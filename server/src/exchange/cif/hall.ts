/**
 * Space groups by their Hall symbols (S. R. Hall, Acta Cryst. A37, 517, 1981; International Tables for Crystallography,
 * vol. B, ch. 1.4, appendix A1.4.2): the symbol is a list of generators, so that any setting can be stated.
 */
import type { Operation } from '../../crystal/symmetry-library.ts'
import {
  add,
  apply,
  inverse,
  type Mat3,
  mapMatrix,
  multiply,
  scale,
  subtract,
  type Vec3,
} from '../../crystal/vector.ts'
import { closed, parseTriplet, wrap } from './operations.ts'

const LATTICES: Readonly<Record<string, readonly Vec3[]>> = {
  P: [],
  A: [[0, 1 / 2, 1 / 2]],
  B: [[1 / 2, 0, 1 / 2]],
  C: [[1 / 2, 1 / 2, 0]],
  I: [[1 / 2, 1 / 2, 1 / 2]],
  R: [[2 / 3, 1 / 3, 1 / 3]],
  H: [[2 / 3, 1 / 3, 0]],
  F: [
    [0, 1 / 2, 1 / 2],
    [1 / 2, 0, 1 / 2],
  ],
}

const TRANSLATIONS: Readonly<Record<string, Vec3>> = {
  a: [1 / 2, 0, 0],
  b: [0, 1 / 2, 0],
  c: [0, 0, 1 / 2],
  n: [1 / 2, 1 / 2, 1 / 2],
  u: [1 / 4, 0, 0],
  v: [0, 1 / 4, 0],
  w: [0, 0, 1 / 4],
  d: [1 / 4, 1 / 4, 1 / 4],
}

/** Rotations about z as coordinate triplets; about x and y they follow by the cyclic exchange of the letters. */
const ABOUT_Z: Readonly<Record<string, string>> = {
  1: 'x,y,z',
  2: '-x,-y,z',
  3: '-y,x-y,z',
  4: '-y,x,z',
  6: 'x-y,x,z',
}
/** Twofold rotations across z: along a − b and a + b. */
const ACROSS_Z: Readonly<Record<string, string>> = { "'": '-y,-x,-z', '"': 'y,x,-z' }
const DIAGONAL = 'z,x,y'

const matrix = (triplet: string): Mat3 => parseTriplet(triplet)!.rotation

/** x → y → z → x, so often. */
const CYCLE = matrix(DIAGONAL)
function cycled(rotation: Mat3, times: number): Mat3 {
  let result = rotation
  for (let i = 0; i < times; i++) result = multiply(multiply(CYCLE, result), inverse(CYCLE))
  return mapMatrix(result, x => Math.round(x) + 0)
}
/** How often to cycle what is said of z. */
const FROM_Z: Readonly<Record<string, number>> = { z: 0, x: 1, y: 2 }
const DIRECTIONS: Readonly<Record<string, Vec3>> = { x: [1, 0, 0], y: [0, 1, 0], z: [0, 0, 1] }

/** One generator: improper or not, order, then screws, axes and translations in any order. */
const GENERATOR = /^(-?)([12346])([1-5xyz'"*abcnuvwd]*)$/
const LONGEST = 60

/** The operations that a Hall symbol names, those of the centring among them; undefined where it is none. */
export function operationsOfHall(symbol: string): readonly Operation[] | undefined {
  if (symbol.length > LONGEST) return undefined
  const found = /^\s*([^()]*?)\s*(?:\(([^()]*)\))?\s*$/.exec(symbol.replace(/=/g, '"').replace(/_/g, ' '))
  if (!found) return undefined
  const [, body, change] = found
  const [lattice, ...words] = body.trim().split(/\s+/)
  const head = /^(-?)([PABCIRHF])$/i.exec(lattice)
  if (!head || words.length === 0 || words.length > MOST_GENERATORS) return undefined
  const generators: Operation[] = LATTICES[head[2].toUpperCase()].map(translation => ({
    rotation: matrix('x,y,z'),
    translation,
  }))
  if (head[1] === '-') generators.push({ rotation: matrix('-x,-y,-z'), translation: [0, 0, 0] })
  let before: Before | undefined
  for (const [i, word] of words.entries()) {
    const read = generatorOf(word, i, before)
    if (!read) return undefined
    generators.push(read.operation)
    before = read
  }
  const moved = change === undefined ? generators : inOtherAxes(generators, change)
  return moved && closed(moved)
}
const MOST_GENERATORS = 4

interface Before {
  readonly order: string
  readonly axis: string
}

function generatorOf(
  word: string,
  position: number,
  before: Before | undefined,
): (Before & { operation: Operation }) | undefined {
  const found = GENERATOR.exec(word.toLowerCase())
  if (!found) return undefined
  const [, bar, order, rest] = found
  const axis = /[xyz'"*]/.exec(rest)?.[0] ?? usualAxis(order, position, before)
  const along = before && before.axis in FROM_Z ? before.axis : 'z'
  let rotation: Mat3
  if (axis === '*') rotation = matrix(DIAGONAL)
  else if (axis in ACROSS_Z) rotation = cycled(matrix(ACROSS_Z[axis]), FROM_Z[along])
  else rotation = cycled(matrix(ABOUT_Z[order]), FROM_Z[axis])
  if ((axis === '*' && order !== '3') || (axis in ACROSS_Z && order !== '2')) return undefined
  let translation: Vec3 = [0, 0, 0]
  for (const sign of rest) {
    if (sign in TRANSLATIONS) translation = add(translation, TRANSLATIONS[sign])
    else if (/\d/.test(sign) && axis in DIRECTIONS)
      translation = add(translation, scale(DIRECTIONS[axis], Number(sign) / Number(order)))
  }
  if (bar) rotation = mapMatrix(rotation, x => -x + 0)
  return { order, axis, operation: { rotation, translation: wrap(translation) } }
}

/** The axis of a generator that states none, by its place in the symbol. */
function usualAxis(order: string, position: number, before: Before | undefined): string {
  if (position === 0 || order === '1') return 'z'
  if (position === 1 && order === '2') return before?.order === '3' || before?.order === '6' ? "'" : 'x'
  return order === '3' ? '*' : 'z'
}

/** A shift of the origin in twelfths, `(0 0 4)`, or new coordinates by a triplet, `(x-y,x+y,z)`. */
function inOtherAxes(generators: readonly Operation[], change: string): Operation[] | undefined {
  const twelfths = change.trim().split(/\s+/).map(Number)
  const isShift = twelfths.length === 3 && twelfths.every(Number.isInteger)
  const to: Operation | undefined = isShift
    ? { rotation: matrix('x,y,z'), translation: scale(twelfths as unknown as Vec3, 1 / 12) }
    : parseTriplet(change)
  if (!to) return undefined
  const back = mapMatrix(inverse(to.rotation), x => Math.round(x) + 0)
  return generators.map(({ rotation, translation }) => {
    const turned = multiply(multiply(to.rotation, rotation), back)
    const moved = add(apply(to.rotation, translation), to.translation)
    return { rotation: turned, translation: wrap(subtract(moved, apply(turned, to.translation))) }
  })
}
