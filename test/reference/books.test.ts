/**
 * The label books against check values (labels.json, with their source): what the books say in their own cells, where
 * the points lie on our own zone, and that any basis in any orientation gets the same labels.
 */
import { describe, expect, test } from 'vitest'
import type { Book } from '../../server/src/books/book.ts'
import { BOOKS } from '../../server/src/books/index.ts'
import { linesThrough } from '../../server/src/books/lookup.ts'
import type { BookMatch } from '../../server/src/books/match.ts'
import { matchBook } from '../../server/src/books/match.ts'
import { PLANE_LATTICES } from '../../server/src/books/plane-lattices.ts'
import { areEquivalent, kRotations, littleCoGroup, segmentSymmetry } from '../../server/src/crystal/kspace.ts'
import { latticeType } from '../../server/src/crystal/lattice-type.ts'
import {
  add,
  apply,
  combine,
  inverse,
  type Mat3,
  mapMatrix,
  multiply,
  scale,
  transpose,
  type Vec3,
} from '../../server/src/crystal/vector.ts'
import { buildZone, placeInZone, type Zone } from '../../server/src/crystal/zone.ts'
import {
  bookOf,
  entryOf,
  evaluateIn,
  match,
  randomBasis,
  randomRotation,
  REFERENCE,
  type Reference,
  rowsInSpace,
  type Sample,
  samples,
  seeded,
} from './labels.ts'

const reciprocalOf = (vectors: Mat3): Mat3 => mapMatrix(transpose(inverse(vectors)), x => 2 * Math.PI * x)
const holohedryOf = (vectors: Mat3, dimension: 2 | 3): Mat3[] =>
  kRotations(latticeType(vectors, dimension, 1e-6)!.holohedry, true, dimension)
const fractionsOf = (found: BookMatch): Map<string, Vec3> =>
  new Map(found.points.map(({ label, fraction }) => [label, fraction]))
const isWhole = (v: Vec3, margin: number): boolean => v.every(x => Math.abs(x - Math.round(x)) < margin)

/** The check values of plane lattices have two components. */
function expectNear(found: Vec3, expected: readonly number[], digits: number, label: string): void {
  for (const i of [0, 1, 2]) expect(found[i], label).toBeCloseTo(expected[i] ?? 0, digits)
}

/** Lines through a far axis point that lie outside the zone in this case or are other lines of it. */
const LINES_OUTSIDE: Record<string, readonly string[]> = {
  'bradley-cracknell-1972/oF/2': ['A', 'B'],
  'bradley-cracknell-1972/oF/3': ['C', 'H'],
  'bradley-cracknell-1972/oF/4': ['D', 'G'],
}

/** How the walls of the zone that meet in a point name its place. */
function whereOn(zone: Zone, k: Vec3): string {
  const { place } = placeInZone(zone, k)
  if (place !== 'boundary') return place
  const walls = zone.walls.filter(
    wall => placeInZone({ ...zone, walls: [wall] }, k).place === 'boundary',
  ).length
  if (zone.dimension === 2) return walls === 1 ? 'edge' : 'vertex'
  return walls === 1 ? 'face' : walls === 2 ? 'edge' : 'vertex'
}

/**
 * Lattices of these variations are cells of another variation of the same book too, by naming their axes otherwise; a
 * basis that is neither cell does not say which was meant, and the one with a ≤ b ≤ c is taken.
 */
const OTHER_CELLS_SERVE = new Set([
  'setyawan-curtarolo-2010/aP/4',
  'hinuma-2017/oF/2',
  'hinuma-2017/oI/2',
  'hinuma-2017/oI/3',
  'hinuma-2017/oC/2',
  'hinuma-2017/oA/2',
  'bradley-cracknell-1972/oF/2',
  'bradley-cracknell-1972/oF/3',
  'bradley-cracknell-1972/oI/1',
  'bradley-cracknell-1972/oI/2',
  'bradley-cracknell-1972/oC/1',
  'plane/oc/2',
  'plane/hp/2',
])

test('every variation of the check values is entered, and no other', () => {
  const count = [...Object.values(BOOKS), PLANE_LATTICES].reduce(
    (sum, { variations }) => sum + variations.length,
    0,
  )
  expect(count).toBe(REFERENCE.entries.length)
})

describe.each(REFERENCE.entries)('$id', entry => {
  const cells = samples(entry, 20, seeded(1))

  test('in its own cell the printed fractions come out as printed', () => {
    const found = match(entry, rowsInSpace(entry.sample.vectors))!
    expect(found.bookFromPrimitive).toEqual([
      [1, 0, 0],
      [0, 1, 0],
      [0, 0, 1],
    ])
    expect(found.bravais).toBe(entry.bravais)
    expect(found.source).toBe(entry.source)
    expect(found.points.map(({ label }) => label)).toEqual(Object.keys(entry.points))
    const fractions = fractionsOf(found)
    for (const [label, { sample }] of Object.entries(entry.points))
      expectNear(fractions.get(label)!, sample, 9, label)
    expect(found.path).toEqual(entry.path)
    expect(found.lines.map(({ label, ends = [] }) => ({ label, ends }))).toEqual(
      entry.lines.filter(({ label }) => !LINES_OUTSIDE[entry.id]?.includes(label)),
    )
    expect(found.parameters.map(({ value }) => value)).toEqual(
      Object.values(entry.sample.parameters).map(x => expect.closeTo(x, 9)),
    )
    for (const { label, equivalentTo } of found.points)
      expect([label, ...equivalentTo].sort(), label).toEqual([...(groupOf(entry, label) ?? [label])].sort())
  })

  test('its formulas hold in random cells', () => {
    for (const { vectors, fractions } of cells) {
      const found = fractionsOf(match(entry, vectors)!)
      for (const [label, fraction] of fractions) expectNear(found.get(label)!, fraction, 8, label)
    }
  })

  test('its points lie on the zone, with their little co-groups, inequivalent but for those named', () => {
    for (const { vectors, fractions } of cells) {
      const zone = buildZone(reciprocalOf(vectors), entry.dimension)
      const group = holohedryOf(vectors, entry.dimension)
      expect(group).toHaveLength(entry.holohedry)
      for (const [label, fraction] of fractions) {
        const { where, littleCoGroup: order } = entry.points[label]
        expect([where].flat(), label).toContain(whereOn(zone, combine(fraction, zone.reciprocal)))
        expect(littleCoGroup(fraction, group), label).toHaveLength(order)
        for (const [other, place] of fractions) {
          if (other === label) continue
          const named = groupOf(entry, label)?.includes(other) ?? false
          expect(areEquivalent(fraction, place, group) !== undefined, `${label} and ${other}`).toBe(named)
        }
      }
    }
  })

  if (entry.lines.length > 0)
    test('its lines are symmetry lines, no two the same; those without a named end run to the boundary', () => {
      for (const { vectors } of cells) {
        const zone = buildZone(reciprocalOf(vectors), entry.dimension)
        const group = holohedryOf(vectors, entry.dimension)
        const found = match(entry, vectors)!
        const lookup = { reciprocal: zone.reciprocal, tolerance: 1e-6, kRotations: group }
        for (const { label, from, to, ends } of found.lines) {
          const middle = scale(add(from, to), 0.5)
          expect(linesThrough(found, middle, lookup).map(({ name }) => name)).toEqual([label])
          expect(segmentSymmetry([from, to], group, 3).freedom, label).toBe(1)
          if (!ends) expect(placeInZone(zone, combine(to, zone.reciprocal)).place, label).toBe('boundary')
        }
      }
    })

  test('in any basis and orientation the book has one of its own cells', () => {
    const random = seeded(2)
    for (const sample of cells) {
      const { found, vectors } = inAnotherBasis(entry, sample, random)
      expect(found.bravais![0]).toBe(entry.bravais[0])
      const own = referenceOf(found)
      const { metric, fractions, conditions } = evaluateIn(own, found.cell)
      if (!OTHER_PARAMETERS.has(own.bravais + own.id[0])) {
        for (const { text, value } of conditions) expect(value, text).toBeGreaterThan(-1e-6)
        const book = multiply(found.bookFromPrimitive, vectors)
        expect(multiply(book, transpose(book)).flat()).toEqual(metric.flat().map(x => expect.closeTo(x, 6)))
      }
      for (const { label, fraction } of found.points)
        expectNear(apply(found.bookFromPrimitive, fraction), fractions.get(label)!, 7, label)
    }
  })

  if (!OTHER_CELLS_SERVE.has(entry.id))
    test('in any basis and orientation the labels stand at the same points', () => {
      const random = seeded(3)
      for (const sample of cells.filter(cell => isOrdered(entry, cell))) {
        const { found, basis } = inAnotherBasis(entry, sample, random)
        expect(found.bravais).toBe(entry.bravais)
        const back = inverse(basis)
        // Fractions of the book's vectors, as the sample's.
        const carried = found.points.map(({ label, fraction }) => [label, apply(back, fraction)] as const)
        const group = holohedryOf(sample.vectors, entry.dimension)
        const common = group.some(R =>
          carried.every(([label, fraction]) => {
            const image = apply(R, sample.fractions.get(label)!)
            return isWhole([0, 1, 2].map(i => image[i] - fraction[i]) as unknown as Vec3, 1e-6)
          }),
        )
        expect(common, JSON.stringify(sample.scope)).toBe(true)
      }
    })
})

const groupOf = (entry: Reference, label: string): readonly string[] | undefined =>
  entry.equivalent.find(group => group.includes(label))

function inAnotherBasis(
  entry: Reference,
  { vectors }: Sample,
  random: () => number,
): { found: BookMatch; basis: Mat3; vectors: Mat3 } {
  const basis = randomBasis(entry.dimension, random)
  const turned = multiply(multiply(basis, vectors), randomRotation(entry.dimension, random))
  return { found: match(entry, turned)!, basis, vectors: turned }
}

/** The check values of the variation that was found. */
function referenceOf({ book, condition }: BookMatch): Reference {
  const { variations } = Object.values<Book>({ ...BOOKS, PLANE_LATTICES }).find(({ id }) => id === book)!
  const prefix = book === PLANE_LATTICES.id ? 'plane' : book
  const own = REFERENCE.entries.filter(({ id }) => id.startsWith(`${prefix}/`))
  return own[variations.findIndex(variation => variation.condition === condition)]
}

/** Bradley and Cracknell's a and c of a rhombohedral lattice are no axes of a cell: |tᵢ|² = a² + c². */
const OTHER_PARAMETERS = new Set(['hRb'])

/** Where a book leaves the order of axes open, the shortest comes first (of triclinic cells, the shortest reciprocal one). */
function isOrdered(entry: Reference, { scope, vectors }: Sample): boolean {
  const ascending = (values: number[]) => values.every((x, i) => i === 0 || values[i - 1] <= x)
  const { a, b, c } = scope
  const system = entry.bravais[0]
  if (system === 'a') {
    const lengths = transpose(inverse(vectors)).map(row => Math.hypot(...row))
    const free =
      entry.id.startsWith('setyawan') || entry.id === 'hinuma-2017/aP/2' ? lengths.slice(0, 2) : lengths
    return ascending(free)
  }
  if (entry.bravais === 'op') return ascending([a, b])
  if (system === 'o' && entry.dimension === 3 && /oP|oF|oI/.test(entry.bravais)) return ascending([a, b, c])
  if (entry.id === 'hinuma-2017/mP/1') return ascending([a, c])
  if (entry.id === 'bradley-cracknell-1972/mP/1') return ascending([a, b])
  return true
}

describe('one point in three books', () => {
  test.each(REFERENCE.samePoint.map(same => ({ ...same, name: same.entries.join(', ') })))(
    '$name',
    ({ entries, points }) => {
      const first = entryOf(entries[0])
      const vectors = rowsInSpace(first.sample.vectors)
      const type = latticeType(vectors, 3, 1e-6)!
      const group = kRotations(type.holohedry, true, 3)
      const found = entries.map(
        id => matchBook(bookOf(entryOf(id)), vectors, 3, { tolerance: 1e-6, latticeType: type })!,
      )
      const named = points.map(labels =>
        found.flatMap(({ book, points: own }) =>
          (labels[book as keyof typeof labels] ?? []).map(
            label => own.find(point => point.label === label)!.fraction,
          ),
        ),
      )
      named.forEach((places, i) => {
        for (const place of places)
          for (const [j, others] of named.entries())
            for (const other of others)
              expect(
                areEquivalent(place, other, group) !== undefined,
                JSON.stringify([points[i], points[j]]),
              ).toBe(i === j)
      })
      for (const { book, points: own } of found) {
        const mentioned = points.flatMap(labels => labels[book as keyof typeof labels] ?? [])
        expect(own.filter(({ label }) => mentioned.includes(label))).toHaveLength(mentioned.length)
      }
    },
  )
})
