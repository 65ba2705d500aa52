/** Other ways to read a file's k-points: in another frame, with 2π, by another book, with axes in another order. */
import { BOOK_NAMES, type BookName } from '../../books/index.ts'
import type { BookMatch } from '../../books/match.ts'
import type { Centring } from '../../crystal/bravais.ts'
import { isLattice, type Lattice, latticeFromVectors } from '../../crystal/lattice.ts'
import { angle, IDENTITY, type Mat3, mapMatrix, multiply, transpose } from '../../crystal/vector.ts'
import type { PointFrame } from '../../format/model.ts'
import type { Crystal } from '../../meaning/crystal.ts'

interface Basis {
  /** The axes to which the numbers refer in this reading, one a row. */
  readonly axes: Mat3
  readonly book: BookMatch
  /** The lattice that the book was matched to. */
  readonly lattice: Lattice
}

export type Reading = Basis &
  (
    | { readonly kind: 'other-book'; readonly name: BookName }
    /** The numbers were meant to be this many times as large. */
    | { readonly kind: 'two-pi'; readonly factor: number }
    | { readonly kind: 'frame'; readonly frame: PointFrame }
    | { readonly kind: 'centring'; readonly centring: Centring; readonly frame: 'primitive' | 'conventional' }
    | { readonly kind: 'turned'; readonly words: string }
  )

export type TurnedReading = Extract<Reading, { kind: 'turned' }>

/** Fractions are mostly taken for other fractions, Cartesian numbers for other Cartesian numbers. */
const OTHER_FRAMES: Record<PointFrame, readonly PointFrame[]> = {
  primitive: ['conventional', 'cartesian', '2pi/a'],
  conventional: ['primitive', 'cartesian', '2pi/a'],
  cartesian: ['2pi/a', 'primitive', 'conventional'],
  '2pi/a': ['cartesian', 'primitive', 'conventional'],
}

/**
 * The readings of a document other than the stated one, the likelier first. Those that come to the same are left out, and
 * other books where the file states one.
 */
export function readingsOf(crystal: Crystal): Reading[] {
  return [
    ...bookReadings(crystal),
    ...twoPiReadings(crystal),
    ...frameReadings(crystal),
    ...centredReadings(crystal),
    ...turnedReadings(crystal),
  ]
}

/** Other books, where the file does not state one. */
export function bookReadings(crystal: Crystal): Reading[] {
  const { lattice, pointAxes, document } = crystal
  if (!lattice || !pointAxes || document.labelsEntry) return []
  return otherBooks(crystal).map(({ name, book }) => ({
    kind: 'other-book',
    name,
    book,
    axes: pointAxes,
    lattice,
  }))
}

/** The other label books of a three-dimensional lattice. */
export function otherBooks(crystal: Crystal): { name: BookName; book: BookMatch }[] {
  const own = crystal.book?.book
  if (!own || !BOOK_NAMES.includes(own as BookName)) return []
  return BOOK_NAMES.flatMap(name => {
    const book = name === own ? undefined : crystal.bookMatch(name)
    return book ? [{ name, book }] : []
  })
}

export function twoPiReadings({ lattice, book, pointAxes, document }: Crystal): Reading[] {
  const frame = document.frames.points
  if (!lattice || !book || !pointAxes || frame === 'primitive' || frame === 'conventional') return []
  return [2 * Math.PI, 1 / (2 * Math.PI)].map(factor => ({
    kind: 'two-pi',
    factor,
    axes: mapMatrix(pointAxes, x => x * factor),
    book,
    lattice,
  }))
}

export function frameReadings(crystal: Crystal): Reading[] {
  const { lattice, book, pointAxes, document } = crystal
  if (!lattice || !book || !pointAxes) return []
  const found: Reading[] = []
  for (const frame of OTHER_FRAMES[document.frames.points]) {
    const axes = crystal.axesOfFrame(frame)
    if (axes && [pointAxes, ...found.map(other => other.axes)].every(other => !areSame(axes, other)))
      found.push({ kind: 'frame', frame, axes, book, lattice })
  }
  return found
}

/** Axes that differ by less come to the same k-points, as far as digits show. */
const SAME_AXES = 1e-6

const areSame = (m: Mat3, n: Mat3): boolean => {
  const size = Math.max(...m.flat().map(Math.abs))
  return m.every((row, i) => row.every((x, j) => Math.abs(x - n[i][j]) <= SAME_AXES * size))
}

/**
 * The stated cell with a centring that the file does not state: someone wrote the conventional vectors and the points of
 * the centred lattice.
 */
export function centredReadings(crystal: Crystal): Reading[] {
  const { lattice, document } = crystal
  if (lattice?.centring !== 'P' || lattice.dimension !== 3 || document.labels === 'none') return []
  if (!document.lattice?.vectors) return []
  const { labels } = document
  return CENTRED.flatMap((centring): Reading[] => {
    const centred = latticeFromVectors(lattice.conventional, centring)
    const book = isLattice(centred) ? crystal.bookMatch(labels, centred) : undefined
    if (!isLattice(centred) || !book) return []
    return (['primitive', 'conventional'] as const).map(frame => ({
      kind: 'centring',
      centring,
      frame,
      book,
      lattice: centred,
      axes: frame === 'primitive' ? centred.reciprocal : centred.conventionalReciprocal,
    }))
  })
}
const CENTRED: readonly Centring[] = ['F', 'I', 'C', 'A', 'B', 'R']

/** Slips of the hand: the same numbers, but for a sign, an order or a factor. */
export function turnedReadings({ lattice, book, pointAxes }: Crystal): TurnedReading[] {
  if (!lattice || !book || !pointAxes) return []
  const between = Math.round(angle(lattice.primitive[0], lattice.primitive[1]))
  return TURNS.filter(({ turn }) => keepsDimension(turn, lattice.dimension)).map(({ words, turn }) => ({
    kind: 'turned',
    // Hexagonal axes enclose 60° in some books and programs, 120° in others.
    words:
      turn[0][0] * turn[1][1] < 0 && OTHER_ANGLE[between]
        ? `${words}, as for a and b at ${OTHER_ANGLE[between]}`
        : words,
    axes: multiply(transpose(turn), pointAxes),
    book,
    lattice,
  }))
}

const OTHER_ANGLE: Record<number, string> = { 60: '120°', 120: '60°' }

interface Turn {
  /** After "with". */
  readonly words: string
  /** What was meant = turn · numbers as written (columns). */
  readonly turn: Mat3
}

const ORDINALS = ['first', 'second', 'third']

/** Slips of one hand movement: a sign, two or three components out of order, a cell doubled along one axis. */
const TURNS: readonly Turn[] = [
  ...[0, 1, 2].map(i => ({
    words: `the sign of the ${ORDINALS[i]} component changed`,
    turn: diagonal(i, -1),
  })),
  ...[
    [1, 0, 2],
    [0, 2, 1],
    [2, 1, 0],
  ].map(order => {
    const [i, j] = order.flatMap((to, from) => (to === from ? [] : [from]))
    return {
      words: `the ${ORDINALS[i]} and the ${ORDINALS[j]} component exchanged`,
      turn: permutation(order),
    }
  }),
  { words: 'the last component put first', turn: permutation([2, 0, 1]) },
  { words: 'the first component put last', turn: permutation([1, 2, 0]) },
  ...[0, 1, 2].flatMap(i => [
    { words: `the ${ORDINALS[i]} component halved`, turn: diagonal(i, 1 / 2) },
    { words: `the ${ORDINALS[i]} component doubled`, turn: diagonal(i, 2) },
  ]),
]

function diagonal(at: number, factor: number): Mat3 {
  return IDENTITY.map((row, i) => row.map(x => (i === at ? x * factor : x))) as unknown as Mat3
}

/** Component i of the result is component order[i]. */
function permutation(order: readonly number[]): Mat3 {
  return order.map(from => IDENTITY[from]) as unknown as Mat3
}

const keepsDimension = (turn: Mat3, dimension: number): boolean =>
  turn.every((row, i) => i < dimension || row.every((x, j) => x === IDENTITY[i][j]))
