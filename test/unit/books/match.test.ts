import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { BOOK_NAMES, type BookName } from '../../../server/src/books/index.ts'
import { type BookMatch, matchBook } from '../../../server/src/books/match.ts'
import {
  type BravaisType,
  BRAVAIS,
  type Centring,
  completeCell,
} from '../../../server/src/crystal/bravais.ts'
import { areEquivalent } from '../../../server/src/crystal/kspace.ts'
import { type Dimension, type Lattice, latticeFromCell } from '../../../server/src/crystal/lattice.ts'
import {
  apply,
  combine,
  determinant,
  IDENTITY,
  inverse,
  type Mat3,
  mapMatrix,
  multiply,
  norm,
  transpose,
  type Vec3,
} from '../../../server/src/crystal/vector.ts'
import { buildZone, leavesZone, placeInZone } from '../../../server/src/crystal/zone.ts'

const TOLERANCE = 1e-3
const SC: BookName = 'setyawan-curtarolo-2010'
const HINUMA: BookName = 'hinuma-2017'
const BC: BookName = 'bradley-cracknell-1972'

type Parameters = Partial<Record<'a' | 'b' | 'c' | 'alpha' | 'beta' | 'gamma', number>>

/** The primitive vectors of a Bravais lattice, as a lattice file makes them. */
function vectors(bravais: BravaisType, parameters: Parameters): Mat3 {
  const completed = completeCell(bravais, parameters)
  if (!('cell' in completed)) throw new Error('not a cell')
  const { centring, dimension } = BRAVAIS[bravais]
  return primitiveOf(completed.cell, centring, dimension)
}

function primitiveOf(cell: Required<Parameters>, centring: Centring, dimension: Dimension = 3): Mat3 {
  return (latticeFromCell(cell, centring, dimension) as Lattice).primitive
}

const match = (book: BookName, primitive: Mat3, options = {}, dimension: Dimension = 3): BookMatch =>
  matchBook(book, primitive, dimension, { tolerance: TOLERANCE, ...options })!

const fractionOf = (found: BookMatch, label: string): Vec3 =>
  found.points.find(point => point.label === label)!.fraction
const labelsOf = (found: BookMatch): string[] => found.points.map(({ label }) => label)
const reciprocalOf = (primitive: Mat3): Mat3 => mapMatrix(transpose(inverse(primitive)), x => 2 * Math.PI * x)
const lengthOf = (found: BookMatch, label: string, primitive: Mat3): number =>
  norm(combine(fractionOf(found, label), reciprocalOf(primitive)))

/** Integer rows with determinant ±1, by shears and exchanges. */
const bases = fc
  .array(fc.tuple(fc.integer({ min: 0, max: 2 }), fc.integer({ min: 1, max: 2 }), fc.constantFrom(1, -1)), {
    maxLength: 7,
  })
  .map(steps => {
    const rows = IDENTITY.map(row => [...row])
    for (const [i, offset, factor] of steps) {
      const j = (i + offset) % 3
      rows[i] = rows[i].map((x, k) => x + factor * rows[j][k])
    }
    return rows as unknown as Mat3
  })

/** One rotation of the lattice carries every label of one match to the same label of another, in another basis. */
function sameLabels(found: BookMatch, other: BookMatch, change: Mat3): boolean {
  const back = inverse(change)
  return found.holohedry.some(R =>
    found.points.every(({ label, fraction }) => {
      const there = apply(back, fractionOf(other, label))
      return areEquivalent(apply(R, fraction), there, [IDENTITY]) !== undefined
    }),
  )
}

describe('settings', () => {
  test('a file of the usual primitive cell gets the printed fractions', () => {
    const found = match(SC, vectors('cF', { a: 5.43 }))
    expect(found.bookFromPrimitive).toEqual(IDENTITY)
    // W. Setyawan and S. Curtarolo (2010), table of the face-centred cubic lattice; from memory.
    expect(found.points.find(({ label }) => label === 'W')).toMatchObject({
      fraction: [0.5, 0.25, 0.75],
      exact: ['1/2', '1/4', '3/4'],
      parameterDependent: false,
    })
  })

  test('in any basis the points of a face-centred cubic lattice stand where they do', () => {
    // |ΓX|, |ΓW|, |ΓK|, |ΓL| in units of 2π/a: 1, √5/2, 3/√8, √3/2 (elementary geometry).
    const expected = {
      X: 1,
      W: Math.sqrt(5) / 2,
      K: 3 / Math.sqrt(8),
      U: 3 / Math.sqrt(8),
      L: Math.sqrt(3) / 2,
    }
    fc.assert(
      fc.property(bases, basis => {
        const primitive = multiply(basis, vectors('cF', { a: 4 }))
        const found = match(SC, primitive)
        for (const [label, length] of Object.entries(expected))
          expect(lengthOf(found, label, primitive)).toBeCloseTo((length * 2 * Math.PI) / 4, 9)
      }),
      { numRuns: 30 },
    )
  })

  test('a left-handed set is a basis like any other', () => {
    const [a, b, c] = vectors('mP', { a: 5, b: 6, c: 7, beta: 100 })
    const found = match(HINUMA, [b, a, c])
    expect(determinant([b, a, c])).toBeLessThan(0)
    expect(fractionOf(found, 'Z').map(Math.abs)).toEqual([0.5, 0, 0])
  })

  test('hexagonal and rhombohedral axes give one and the same points', () => {
    const hexagonal = vectors('hR', { a: 4.38, c: 30.49 })
    const [a_h, c_h] = [4.38, 30.49]
    // The rhombohedral cell of a hexagonal one (International Tables for Crystallography, vol. A).
    const edge = Math.hypot(a_h / Math.sqrt(3), c_h / 3)
    const alpha = (2 * Math.asin(a_h / (2 * edge)) * 180) / Math.PI
    const rhombohedral = primitiveOf({ a: edge, b: edge, c: edge, alpha, beta: alpha, gamma: alpha }, 'P')
    const [first, second] = [match(SC, hexagonal), match(SC, rhombohedral)]
    expect(second.condition).toBe('rhombohedral, α < 90°')
    expect(second.bookFromPrimitive).toEqual(IDENTITY)
    expect(sameLabels(first, second, IDENTITY)).toBe(true)
  })

  test.each([SC, HINUMA, BC])(
    'a monoclinic lattice has the same labels whichever axis is unique: %s',
    book => {
      const [a, b, c] = [9.8, 3.1, 5.7]
      const centred = (cell: Required<Parameters>, centring: Centring) =>
        match(book, primitiveOf(cell, centring))
      const uniqueB = centred({ a, b, c, alpha: 90, beta: 104, gamma: 90 }, 'C')
      const uniqueC = centred({ a: c, b: a, c: b, alpha: 90, beta: 90, gamma: 104 }, 'A')
      // In the second cell the axes have changed places cyclically: a′ = c, b′ = a, c′ = b.
      const first = primitiveOf({ a, b, c, alpha: 90, beta: 104, gamma: 90 }, 'C')
      const [x, y, z] = primitiveOf({ a: c, b: a, c: b, alpha: 90, beta: 90, gamma: 104 }, 'A')
      expect(uniqueB.condition).toBe(uniqueC.condition)
      for (const label of labelsOf(uniqueB))
        expect(lengthOf(uniqueB, label, first)).toBeCloseTo(lengthOf(uniqueC, label, [x, y, z]), 8)
    },
  )

  test('the other angle of a monoclinic cell is the same cell', () => {
    const obtuse = vectors('mP', { a: 5.1, b: 5.2, c: 5.3, beta: 99.2 })
    const acute = vectors('mP', { a: 5.1, b: 5.2, c: 5.3, beta: 80.8 })
    for (const book of BOOK_NAMES) {
      const [first, second] = [match(book, obtuse), match(book, acute)]
      expect(first.condition).toBe(second.condition)
      for (const label of labelsOf(first))
        expect(lengthOf(first, label, obtuse)).toBeCloseTo(lengthOf(second, label, acute), 9)
    }
  })

  test('axes are left as the file names them where the book does not order them', () => {
    // The book's own vectors of this lattice begin with −b; the letters X, Y, Z go with a, b, c.
    const found = match(BC, vectors('oP', { a: 7, b: 4, c: 5 }))
    expect(fractionOf(found, 'X')).toEqual([0.5, 0, 0])
    expect(fractionOf(found, 'Y').map(Math.abs)).toEqual([0, 0.5, 0])
    expect(found.axesFromPrimitive).toEqual(IDENTITY)
  })

  test('axes are put in order where the book orders them', () => {
    const found = match(SC, vectors('oP', { a: 7, b: 4, c: 5 }))
    expect(found.cell).toMatchObject({ a: 4, b: 5, c: 7 })
    expect(fractionOf(found, 'X')).toEqual([0, 0.5, 0])
  })

  test('plane lattices have one book, whichever is asked for', () => {
    for (const book of BOOK_NAMES) {
      const found = match(book, vectors('hp', { a: 2.46 }), {}, 2)
      expect(found.book).toBe('plane-lattices')
      // K of the honeycomb with its vectors at 120°: common practice.
      expect(fractionOf(found, 'K')).toEqual([1 / 3, 1 / 3, 0])
    }
  })

  test('plane vectors at 60°', () => {
    const sixty: Mat3 = [
      [2.46, 0, 0],
      [1.23, 1.23 * Math.sqrt(3), 0],
      [0, 0, 1],
    ]
    expect(fractionOf(match(SC, sixty, {}, 2), 'K')).toEqual([2 / 3, 1 / 3, 0])
  })

  test('a chain has Γ and X', () => {
    const found = match(
      SC,
      [
        [3, 0, 0],
        [0, 1, 0],
        [0, 0, 1],
      ],
      {},
      1,
    )
    expect(found.path).toEqual([['Γ', 'X']])
    expect(fractionOf(found, 'X')).toEqual([0.5, 0, 0])
  })

  test('flat vectors are no lattice', () =>
    expect(
      matchBook(
        SC,
        [
          [1, 0, 0],
          [0, 1, 0],
          [1, 1, 0],
        ],
        3,
        { tolerance: TOLERANCE },
      ),
    ).toBeUndefined())

  test('the whole-numbered change of basis is of determinant ±1 and undone exactly', () =>
    fc.assert(
      fc.property(bases, basis => {
        const found = match(SC, multiply(basis, vectors('oI', { a: 3, b: 4, c: 5 })))
        expect(Math.abs(determinant(found.bookFromPrimitive))).toBe(1)
        expect(found.bookFromPrimitive.flat().every(Number.isInteger)).toBe(true)
        expect(found.axesFromPrimitive.flat().every(Number.isInteger)).toBe(true)
      }),
      { numRuns: 30 },
    ))
})

const cells: Record<string, fc.Arbitrary<Mat3>> = (() => {
  const length = fc.double({ min: 2, max: 12, noNaN: true })
  const oblique = fc.double({ min: 62, max: 118, noNaN: true })
  const lattice = (bravais: BravaisType, parameters: Record<string, fc.Arbitrary<number>>) =>
    fc.record(parameters).map(given => vectors(bravais, given as Parameters))
  const abc = { a: length, b: length, c: length }
  return {
    tI: lattice('tI', { a: length, c: length }),
    oF: lattice('oF', abc),
    oI: lattice('oI', abc),
    oC: lattice('oC', abc),
    hR: lattice('hR', { a: length, c: length }),
    mP: lattice('mP', { ...abc, beta: oblique }),
    mC: lattice('mC', { ...abc, beta: oblique }),
    mI: lattice('mI', { ...abc, beta: oblique }),
    aP: lattice('aP', { ...abc, alpha: oblique, beta: oblique, gamma: oblique }),
  }
})()

describe.each(Object.keys(cells))('random lattices of type %s', name => {
  test.each([SC, HINUMA])('the path of %s stays in the zone', book =>
    fc.assert(
      fc.property(cells[name], bases, (own, basis) => {
        const primitive = multiply(basis, own)
        const found = match(book, primitive, { tolerance: 1e-6 })
        const zone = buildZone(reciprocalOf(primitive), 3)
        const place = (label: string) => combine(fractionOf(found, label), zone.reciprocal)
        for (const piece of found.path) {
          expect(placeInZone(zone, place(piece[0])).place).not.toBe('outside')
          for (const [i, label] of piece.slice(1).entries())
            expect(leavesZone(zone, place(piece[i]), place(label)), label).toBeUndefined()
        }
      }),
      { numRuns: 40 },
    ),
  )

  test.each(BOOK_NAMES)('two bases that are cells of no book get the same labels of %s', book =>
    fc.assert(
      fc.property(cells[name], bases, bases, (own, first, second) => {
        // Skewed enough that neither is a cell of the book.
        const skew: Mat3 = [
          [1, 3, 0],
          [0, 1, 4],
          [0, 0, 1],
        ]
        const [p, q] = [multiply(skew, first), multiply(transpose(skew), second)]
        const options = { tolerance: 1e-6 }
        const found = match(book, multiply(p, own), options)
        const other = match(book, multiply(q, own), options)
        fc.pre(!isOwn(found) && !isOwn(other))
        expect(other.condition).toBe(found.condition)
        expect(sameLabels(found, other, multiply(q, inverse(p)))).toBe(true)
      }),
      { numRuns: 25 },
    ),
  )
})

/** The user's vectors, or the axes that follow from them, were kept. */
const isOwn = ({ bookFromPrimitive, axesFromPrimitive }: BookMatch): boolean =>
  [bookFromPrimitive, axesFromPrimitive].some(m => m.every(row => row.every(x => Math.abs(x) < 2)))

describe('borders', () => {
  // 1/a² = 1/b² + 1/c² for b = 4, c = 3: a = 12/5.
  const onBorder = { a: 2.4, b: 3, c: 4 }

  test('a border that the book knows', () => {
    const found = match(SC, vectors('oF', onBorder))
    expect(found.condition).toContain('border case')
    expect(found.borderline).toBe(true)
    // There X and X1 are the point T.
    expect(found.points.find(({ label }) => label === 'X')!.equivalentTo).toEqual(['T', 'X1'])
  })

  test.each([HINUMA, BC])('a border that %s does not know gets one of its sides', book => {
    const found = match(book, vectors('oF', onBorder))
    expect(found.borderline).toBe(true)
    const zone = buildZone(reciprocalOf(vectors('oF', onBorder)), 3)
    for (const { fraction } of found.points)
      expect(placeInZone(zone, combine(fraction, zone.reciprocal)).place).not.toBe('outside')
  })

  test.each([
    [2.3995, true, '1/a² > 1/b² + 1/c²'],
    [2.4005, true, '1/a² < 1/b² + 1/c²'],
    [2.3, false, '1/a² > 1/b² + 1/c²'],
    [2.6, false, '1/a² < 1/b² + 1/c²'],
  ])('beside it (a = %f), the side that holds', (a, borderline, condition) => {
    const found = match(SC, vectors('oF', { ...onBorder, a }))
    expect(found.borderline).toBe(borderline)
    expect(found.condition).toContain(condition)
    expect(found.condition).not.toContain('border case')
  })

  test('the borders of the C-centred monoclinic tables', () => {
    // Unique axis b, obtuse β: kγ = 90° where b = a sin β.
    const beta = 105
    const a = 6
    const right = a * Math.sin((beta * Math.PI) / 180)
    const found = match(SC, vectors('mC', { a, b: right, c: 7, beta }))
    expect(found.condition).toContain('border case kγ = 90°')
    // … and the other where −a cos β/c + a² sin² β/b² = 1.
    const b = right / Math.sqrt(1 + (a * Math.cos((beta * Math.PI) / 180)) / 7)
    expect(match(SC, vectors('mC', { a, b, c: 7, beta })).condition).toContain('border case b cos α/c')
    expect(match(HINUMA, vectors('mC', { a, b, c: 7, beta })).borderline).toBe(true)
  })

  test('a right reciprocal angle of a triclinic lattice', () => {
    const reciprocal: Mat3 = [
      [0.3, 0, 0],
      [0, 0.35, 0],
      [-0.05, -0.08, 0.4],
    ]
    const found = match(SC, transpose(inverse(reciprocal)))
    expect(found.condition).toContain('kα and kβ obtuse, border case')
    expect(found.bookFromPrimitive).toEqual(IDENTITY)
    const acute: Mat3 = [
      [0.3, 0, 0],
      [0, 0.35, 0],
      [0.05, 0.08, 0.4],
    ]
    expect(match(SC, transpose(inverse(acute))).condition).toContain('kα and kβ acute, border case')
  })

  test('a lattice a rounding away from cubic gets exact cubic points', () => {
    const rough: Mat3 = [
      [0.0001, 2.715, 2.7148],
      [2.7151, -0.0001, 2.715],
      [2.7149, 2.715, 0],
    ]
    const found = match(SC, rough)
    expect(found.bravais).toBe('cF')
    expect(found.points.find(({ label }) => label === 'K')!.exact).toEqual(['3/8', '3/8', '3/4'])
    expect(match(SC, rough, { tolerance: 1e-6 }).bravais).toBe('aP')
  })

  test('the parameters of a lattice a rounding away from tetragonal are those of the mean cell', () => {
    const found = match(SC, vectors('oI', { a: 3, b: 3.0004, c: 5 }))
    expect(found.bravais).toBe('tI')
    // η = (1 + a²/c²)/4 with a² the mean of 9 and 9.0024.
    expect(found.parameters[0]).toMatchObject({ name: 'η', value: expect.closeTo((1 + 9.0012 / 25) / 4, 6) })
  })
})

describe('groups that a book tells apart', () => {
  const cubic = vectors('cP', { a: 4 })
  const hexagonal = vectors('hP', { a: 4, c: 6 })

  // Y. Hinuma et al. (2017): X1 in the groups without a four-fold axis, K–H2 in some trigonal ones; from memory.
  test.each([
    [{ spaceGroup: 205 }, true],
    [{ spaceGroup: 221 }, false],
    [{ pointGroup: 'm-3' }, true],
    [{ pointGroup: '432' }, false],
    [{ pointGroup: 'm-3', spaceGroup: 221 }, false],
    [{}, false],
  ])('simple cubic, %j', (options, expected) =>
    expect(labelsOf(match(HINUMA, cubic, options)).includes('X1')).toBe(expected),
  )

  test.each([
    [{ spaceGroup: 162 }, 'H – K – H2'],
    [{ spaceGroup: 164 }, 'H – K'],
    [{ spaceGroup: 194 }, 'H – K'],
    [{ pointGroup: '-3' }, 'H – K – H2'],
    [{ pointGroup: '-3m' }, 'H – K'],
  ])('hexagonal, %j', (options, last) =>
    expect(match(HINUMA, hexagonal, options).path.at(-1)!.join(' – ')).toBe(last),
  )

  test('A-centred groups', () => {
    const lattice = vectors('oC', { a: 4, b: 5, c: 6 })
    expect(match(HINUMA, lattice).bravais).toBe('oC')
    expect(match(HINUMA, lattice, { spaceGroup: 38 }).bravais).toBe('oA')
  })
})

describe('what is said of a point', () => {
  const found = match(SC, vectors('oC', { a: 4, b: 5, c: 6 }))

  test('formula, parameter and slopes in the user’s fractions', () => {
    const A1 = found.points.find(({ label }) => label === 'A1')!
    expect(A1.formula).toBe('(−ζ, 1 − ζ, 1/2)')
    expect(A1.parameterDependent).toBe(true)
    expect(A1.exact).toBeUndefined()
    expect(A1.slopes).toEqual([[-1, -1, 0]])
    // ζ = (1 + a²/b²)/4
    expect(found.parameters).toEqual([
      { name: 'ζ', value: expect.closeTo(0.41, 12), formula: '(1 + a²/b²)/4' },
    ])
  })

  test('the formula follows the basis', () => {
    const [p, q, r] = vectors('oC', { a: 4, b: 5, c: 6 })
    const swapped = match(SC, [r, p, q])
    // Either of two equivalent arms.
    expect(swapped.points.find(({ label }) => label === 'A1')!.formula).toMatch(
      /^\(1\/2, (−ζ, 1 − ζ|1 − ζ, −ζ)\)$/,
    )
  })

  test('a known fault of a table is among the doubts', () => {
    const oxide = match(SC, vectors('mC', { a: 12.2, b: 3.04, c: 5.8, beta: 103.8 }))
    expect(oxide.doubts.join()).toContain('F3 = F2 + b₁ lies outside the first zone')
  })
})

test('lines end at a named point or where they leave the zone', () => {
  const primitive = vectors('cF', { a: 4 })
  const found = match(BC, primitive)
  const line = (label: string) => found.lines.find(candidate => candidate.label === label)!
  expect(line('Δ')).toMatchObject({ from: [0, 0, 0], to: [0.5, 0, 0.5], ends: ['Γ', 'X'] })
  // Σ leaves the zone at K, S at U (common practice).
  expect(line('Σ').to.map(x => expect.closeTo(x, 12))).toEqual([3 / 8, 3 / 8, 3 / 4])
  expect(line('Σ').ends).toBeUndefined()
  expect(line('S').from).toEqual([0.5, 0, 0.5])
  expect(line('S').to).toEqual([5 / 8, 1 / 4, 5 / 8].map(x => expect.closeTo(x, 12)))
})
