import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { BRAVAIS_TYPES, type BravaisType } from '../../../server/src/crystal/bravais.ts'
import { type Lattice, latticeFromVectors } from '../../../server/src/crystal/lattice.ts'
import {
  add,
  apply,
  combine,
  dot,
  type Mat3,
  norm,
  scale,
  subtract,
  type Vec3,
} from '../../../server/src/crystal/vector.ts'
import {
  buildZone,
  fold,
  LAST_ZONE,
  leavesZone,
  placeInZone,
  validateZone,
  walls,
  type Zone,
  zoneNumber,
} from '../../../server/src/crystal/zone.ts'
import {
  between,
  fromCell,
  lattice,
  randomLattice,
  seeded,
  skewed,
  turned,
  unimodular,
  vectorsWithin,
  wholeBetween,
} from './zone-lattices.ts'

const anyType = fc.constantFrom(...BRAVAIS_TYPES)
const anySize = fc.constantFrom(1e-9, 1, 1e9)
const zoneOf = (l: Lattice): Zone => buildZone(l.reciprocal, l.dimension)
const cell = (type: BravaisType, given: object): Lattice => fromCell(type, given)
const chain = (a: number): Lattice => lattice(latticeFromVectors([[a, 0, 0]]))

/** Corner and face counts of the solids (Fedorov's five, and the plane's two). */
const COUNTS: Record<string, [vertices: number, edges: number, walls: number]> = {
  'truncated octahedron': [24, 36, 14],
  'elongated dodecahedron': [18, 28, 12],
  'rhombic dodecahedron': [14, 24, 12],
  'hexagonal prism': [12, 18, 8],
  cuboid: [8, 12, 6],
  hexagon: [6, 6, 6],
  rectangle: [4, 4, 4],
  segment: [2, 1, 2],
}

/** The invariants, and the counts that the name of the solid promises. */
function expectGood(zone: Zone): void {
  expect(validateZone(zone)).toEqual([])
  expect([zone.vertices.length, zone.edges.length, zone.walls.length]).toEqual(COUNTS[zone.solid])
  expect(zone.faces.length).toBe(zone.dimension === 3 ? zone.walls.length : 0)
}

describe('every zone is sound', () => {
  test('whatever the lattice, its basis and its size', () => {
    fc.assert(
      fc.property(fc.integer(), anyType, anySize, fc.constantFrom(1, 5, 12), (seed, type, size, most) => {
        const random = seeded(seed)
        const own = randomLattice(type, random, 10)
        const l = skewed(own, unimodular(random, own.dimension, most), size)
        const zone = zoneOf(l)
        expectGood(zone)
        expect(zone.volume * l.volume * (2 * Math.PI) ** -l.dimension).toBeCloseTo(1, 9)
        // The same solid as on the lattice's own basis, only the numbers of the faces differ.
        const plain = zoneOf(own)
        expect(zone.solid).toBe(plain.solid)
        for (const name of ['inradius', 'circumradius'] as const)
          expect((zone[name] * size) / plain[name]).toBeCloseTo(1, 8)
        // And the Wigner–Seitz cell of the same lattice.
        expectGood(buildZone(l.primitive, l.dimension))
      }),
      { numRuns: 300 },
    )
  })

  test('up to axial ratios of 1:1000, skewed', () => {
    fc.assert(
      fc.property(fc.integer(), anyType, (seed, type) => {
        const random = seeded(seed)
        const own = randomLattice(type, random, 1e6) // lengths a thousand times up and down
        const l = skewed(own, unimodular(random, own.dimension, 5))
        expectGood(zoneOf(own))
        expectGood(zoneOf(l))
      }),
      { numRuns: 300 },
    )
  })

  test.each([
    ['needle', [1, 1, 1000]],
    ['plate', [1, 1000, 1000]],
    ['lath', [1, 30, 1000]],
    ['far beyond', [1, 1e4, 1e8]],
  ] as [string, [number, number, number]][])(
    'a straight %s is a cuboid of the right edges',
    (_, [a, b, c]) => {
      const random = seeded(7)
      for (let i = 0; i < 20; i++) {
        const own = cell('oP', { a, b, c })
        const zone = zoneOf(c > 1e4 ? own : skewed(own, unimodular(random, 3, 5)))
        expectGood(zone)
        expect(zone.solid).toBe('cuboid')
        expect(zone.circumradius).toBeCloseTo(Math.PI * Math.hypot(1 / a, 1 / b, 1 / c), 9)
        expect(zone.inradius * c).toBeCloseTo(Math.PI, 5)
      }
    },
  )

  test('a rounding off a higher symmetry', () => {
    for (const type of BRAVAIS_TYPES) {
      const l = cell(type, {
        a: 4,
        b: 5,
        c: 6,
        alpha: 80,
        beta: 95,
        gamma: 75,
        ...(type === 'hR' && { alpha: undefined }),
        ...(type[0] === 'm' &&
          type[1] !== 'p' && {
            alpha: type === 'mB' ? 95 : undefined,
            beta: type === 'mB' ? undefined : 95,
            gamma: undefined,
          }),
      })
      const { solid } = zoneOf(l)
      for (const by of [1e-15, 1e-13, 1e-11, 1e-9, 1e-8, 1e-7, 1e-6, 1e-5, 1e-3])
        for (let seed = 1; seed <= 6; seed++) {
          const random = seeded(seed)
          const rows = l.primitive
            .slice(0, l.dimension)
            .map(
              row =>
                row.map((x, i) => (i < l.dimension ? x + by * between(random, -4, 4) : x)) as unknown as Vec3,
            )
          const zone = zoneOf(lattice(latticeFromVectors(rows)))
          expectGood(zone)
          if (by <= 1e-8) expect([type, by, zone.solid]).toEqual([type, by, solid])
          // No slivers: what is drawn can be seen.
          for (const [i, j] of zone.edges)
            expect(norm(subtract(zone.vertices[i], zone.vertices[j]))).toBeGreaterThan(zone.tolerance / 2)
        }
    }
  })

  test('validateZone finds what is wrong', () => {
    const good = zoneOf(cell('cF', { a: 4 }))
    const moved = good.vertices.map((v, i): Vec3 => (i === 3 ? [v[0] + 1e-3, v[1], v[2]] : v))
    expect(validateZone({ ...good, vertices: moved }).join()).toMatch(
      /content.*opposite.*boundary.*not on face/,
    )
    expect(validateZone({ ...good, faces: good.faces.slice(1) }).join()).toMatch(/Euler.*shared/)
    expect(validateZone({ ...good, edges: good.edges.slice(1) }).join()).toMatch(/Euler.*no edges/)
    expect(validateZone({ ...good, walls: good.walls.slice(1) }).join()).toMatch(/no twin/)
    expect(validateZone({ ...good, volume: good.volume * 1.001 }).join()).toMatch(/volume/)
    expect(validateZone({ ...good, circumradius: 1, inradius: 1 }).join()).toMatch(/circumradius.*inradius/)
    const reversed = good.faces.map((f, i) => (i === 2 ? { ...f, vertices: [...f.vertices].reverse() } : f))
    expect(validateZone({ ...good, faces: reversed }).join()).toMatch(/clockwise/)
    const plane = zoneOf(cell('hp', { a: 4 }))
    expect(validateZone({ ...plane, walls: [...plane.walls.slice(1), plane.walls[0]] }).join()).toMatch(
      /side 0/,
    )
  })
})

describe('the shape in space', () => {
  test('faces are those of the nearest neighbours of the face-centred lattice', () => {
    // Face-centred cubic crystal: zone with 8 hexagons and 6 squares (Ashcroft and Mermin 1976, ch. 5; from memory).
    const a = 4
    const zone = zoneOf(cell('cF', { a }))
    const unit = (2 * Math.PI) / a
    const sides = zone.faces.map(f => f.vertices.length)
    expect(sides.filter(n => n === 6)).toHaveLength(8)
    expect(sides.filter(n => n === 4)).toHaveLength(6)
    for (const f of zone.faces)
      expect(f.distance / unit).toBeCloseTo(f.vertices.length === 6 ? Math.sqrt(3) / 2 : 1, 12)
    // All its corners are W points, (1, ½, 0) 2π/a: |k| = √5/2 · 2π/a (W. Setyawan and S. Curtarolo 2010).
    for (const v of zone.vertices) {
      expect(norm(v) / unit).toBeCloseTo(Math.sqrt(5) / 2, 12)
      const sorted = v.map(x => Math.abs(x) / unit).sort()
      expect(sorted[0]).toBeCloseTo(0, 12)
      expect(sorted[1]).toBeCloseTo(0.5, 12)
    }
    // All edges are √2/2 · 2π/a, four of them round X (closed formula).
    for (const [i, j] of zone.edges)
      expect(norm(subtract(zone.vertices[i], zone.vertices[j])) / unit).toBeCloseTo(Math.SQRT1_2, 12)
  })

  test('of the body-centred lattice', () => {
    // Twelve rhombi; corners at H (distance 2π/a, six) and P (√3/2 · 2π/a, eight) (Setyawan and Curtarolo 2010).
    const zone = zoneOf(cell('cI', { a: 4 }))
    expect(zone.solid).toBe('rhombic dodecahedron')
    const distances = zone.vertices.map(v => (norm(v) * 4) / (2 * Math.PI))
    expect(distances.filter(d => Math.abs(d - 1) < 1e-12)).toHaveLength(6)
    expect(distances.filter(d => Math.abs(d - Math.sqrt(3) / 2) < 1e-12)).toHaveLength(8)
    expect(zone.faces.every(f => f.vertices.length === 4)).toBe(true)
    expect((zone.inradius * 4) / (2 * Math.PI)).toBeCloseTo(Math.SQRT1_2, 12)
  })

  test('of the hexagonal lattice', () => {
    // Corners are H: |ΓK| = 4π/3a, |ΓA| = π/c (closed formulas).
    const [a, c] = [3, 5]
    const zone = zoneOf(cell('hP', { a, c }))
    expect(zone.faces.map(f => f.vertices.length).sort()).toEqual([4, 4, 4, 4, 4, 4, 6, 6])
    for (const v of zone.vertices) {
      expect(Math.hypot(v[0], v[1])).toBeCloseTo((4 * Math.PI) / (3 * a), 12)
      expect(Math.abs(v[2])).toBeCloseTo(Math.PI / c, 12)
    }
  })

  test('the direct cells: Wigner–Seitz', () => {
    // Rhombic dodecahedron for face-centred, truncated octahedron for body-centred cubic (Ashcroft and Mermin 1976, ch. 4).
    expect(buildZone(cell('cF', { a: 4 }).primitive, 3).solid).toBe('rhombic dodecahedron')
    expect(buildZone(cell('cI', { a: 4 }).primitive, 3).solid).toBe('truncated octahedron')
  })

  test.each([
    // Zones of the tetragonal body-centred lattice change when c passes a (Setyawan and Curtarolo 2010, figs. 5 and 6; from
    // memory): c < a elongated dodecahedron, c > a all fourteen faces.
    ['tI', { a: 4, c: 3.9 }, 'elongated dodecahedron'],
    ['tI', { a: 4, c: 4.1 }, 'truncated octahedron'],
    ['tI', { a: 4, c: 4 }, 'rhombic dodecahedron'],
    // A rhombohedral zone at α = 60° is that of the face-centred cube; α < 90° has 14 faces, α > 90° 12.
    ['hR', { a: 4, alpha: 60 }, 'truncated octahedron'],
    ['hR', { a: 4, alpha: 89 }, 'truncated octahedron'],
    ['hR', { a: 4, alpha: 91 }, 'rhombic dodecahedron'],
    // oF: where 1/a² = 1/b² + 1/c² (third variation of Setyawan and Curtarolo 2010) the products π²(1/b² + 1/c² − 1/a²) of two
    // opposite pairs of half diagonals vanish (closed formula), which leaves a ring of four.
    ['oF', { a: 1 / Math.sqrt(1 / 25 + 1 / 49), b: 5, c: 7 }, 'rhombic dodecahedron'],
    ['oF', { a: 4, b: 5, c: 6 }, 'truncated octahedron'],
  ] as [BravaisType, object, string][])('%s %j: %s', (type, given, solid) => {
    expect(zoneOf(cell(type, given)).solid).toBe(solid)
  })

  test('faces and sides turn counter-clockwise on a left-handed basis too', () => {
    for (const type of ['aP', 'cF', 'mC', 'hp', 'mp'] as const) {
      const l = randomLattice(type, seeded(5))
      const [a, b, c] = l.primitive
      const left = lattice(latticeFromVectors(l.dimension === 3 ? [b, a, c] : [b, a]))
      expect(left.handedness).toBe(-1)
      const zone = zoneOf(left)
      expectGood(zone)
      if (l.dimension === 2)
        zone.edges.forEach(([i, j], side) => {
          const [p, q] = [zone.vertices[i], zone.vertices[j]]
          expect(p[0] * q[1] - p[1] * q[0]).toBeGreaterThan(0)
          expect(dot(zone.walls[side].G, add(p, q))).toBeGreaterThan(0)
        })
    }
  })

  test('in the plane: K at 4π/3a and M at 2π/√3a', () => {
    const zone = zoneOf(cell('hp', { a: 2.46 }))
    for (const v of zone.vertices) expect(norm(v)).toBeCloseTo((4 * Math.PI) / (3 * 2.46), 12)
    expect(zone.inradius).toBeCloseTo((2 * Math.PI) / (Math.sqrt(3) * 2.46), 12)
    expect(zone.volume).toBeCloseTo((8 * Math.PI ** 2) / (Math.sqrt(3) * 2.46 ** 2), 10)
  })

  test('on the line: ±π/a', () => {
    for (const a of [2.5, -2.5]) {
      const zone = zoneOf(chain(a))
      expectGood(zone)
      expect(zone.vertices.map(v => v[0] * Math.sign(zone.vertices[0][0]))[0]).toBeCloseTo(Math.PI / 2.5, 12)
      expect(zone.vertices[1][0]).toBe(-zone.vertices[0][0])
      zone.vertices.forEach((v, i) => {
        expect(dot(v, zone.walls[i].G)).toBeGreaterThan(0)
      })
      expect(walls(zone)).toHaveLength(2)
    }
  })
})

describe('placeInZone', () => {
  test('agrees with the distances to all reciprocal vectors', () => {
    fc.assert(
      fc.property(fc.integer(), anyType, anySize, (seed, type, size) => {
        const random = seeded(seed)
        const own = randomLattice(type, random)
        const l = skewed(own, unimodular(random, own.dimension, 4), size)
        const zone = zoneOf(l)
        const k = randomK(zone, random, 1.3)
        const { place, excess, wall } = placeInZone(zone, k)
        // Γ is the nearest lattice point of a k inside, and no lattice point is nearer than |k| within twice |k|.
        let worst = Number.NEGATIVE_INFINITY
        for (const { G } of vectorsWithin(
          l.reciprocal,
          l.primitive,
          l.dimension,
          [0, 0, 0],
          2.7 * zone.circumradius,
        ))
          if (norm(G) > 0) worst = Math.max(worst, dot(k, G) / norm(G) - norm(G) / 2)
        // Outside, a far plane may be violated more than any wall; inside, the nearest plane is a wall.
        if (worst < 0) expect(excess / zone.inradius).toBeCloseTo(worst / zone.inradius, 9)
        else expect(excess).toBeGreaterThan(0)
        expect(place).toBe(worst > 0 ? 'outside' : 'inside')
        expect((dot(k, wall.G) / norm(wall.G) - wall.distance - excess) / zone.inradius).toBeCloseTo(0, 12)
      }),
      { numRuns: 200 },
    )
  })

  test.each([1e-9, 1, 1e9])('the boundary is 10⁻⁶ of the inradius wide, at size × %d', size => {
    const zone = zoneOf(cell('cF', { a: 4 * size }))
    const face = zone.faces[0]
    const at = (excess: number) =>
      placeInZone(zone, scale(face.G, (face.distance + excess * zone.inradius) / norm(face.G)))
    expect(at(0).place).toBe('boundary')
    expect(at(0.9e-6).place).toBe('boundary')
    expect(at(-0.9e-6).place).toBe('boundary')
    expect(at(1.1e-6).place).toBe('outside')
    expect(at(-1.1e-6).place).toBe('inside')
    expect(at(0.25).excess / zone.inradius).toBeCloseTo(0.25, 12)
    expect(at(0.25).wall).toBe(face)
  })

  test('every vertex is on the boundary, and so are the middles of edges and faces', () => {
    for (const type of BRAVAIS_TYPES) {
      const zone = zoneOf(randomLattice(type, seeded(11)))
      for (const v of zone.vertices) expect(placeInZone(zone, v).place).toBe('boundary')
      for (const [i, j] of zone.edges)
        expect(placeInZone(zone, scale(add(zone.vertices[i], zone.vertices[j]), 0.5)).place).toBe('boundary')
      for (const f of zone.faces) {
        const middle = scale(f.vertices.map(i => zone.vertices[i]).reduce(add), 1 / f.vertices.length)
        expect(placeInZone(zone, middle).place).toBe('boundary')
      }
    }
  })

  test('a k beyond all numbers is outside', () => {
    const zone = zoneOf(cell('cF', { a: 4 }))
    expect(placeInZone(zone, [1e308, -1e308, 1e308]).place).toBe('outside')
    expect(placeInZone(zone, [1e300, 0, 0]).place).toBe('outside')
  })

  test('a component off the plane does not count', () => {
    const zone = zoneOf(cell('hp', { a: 4 }))
    expect(placeInZone(zone, [0.1, 0.1, 50]).place).toBe('inside')
  })
})

/** A point in a box some times as large as the zone. */
function randomK(zone: Zone, random: () => number, times: number): Vec3 {
  const r = zone.circumradius * times
  const n = zone.dimension
  return [between(random, -r, r), n > 1 ? between(random, -r, r) : 0, n > 2 ? between(random, -r, r) : 0]
}

describe('zoneNumber', () => {
  test('counts the Bragg planes in between, as by trying all', () => {
    fc.assert(
      fc.property(fc.integer(), anyType, anySize, (seed, type, size) => {
        const random = seeded(seed)
        const own = randomLattice(type, random)
        const l = skewed(own, unimodular(random, own.dimension, 4), size)
        const zone = zoneOf(l)
        const k = randomK(zone, random, between(random, 0.3, 4))
        const length = norm(k)
        let nearer = 1
        for (const { distance } of vectorsWithin(l.reciprocal, l.primitive, l.dimension, k, length))
          if (distance < length * (1 - 1e-12)) nearer++
        expect(zoneNumber(zone, k)).toBe(nearer)
      }),
      { numRuns: 200 },
    )
  })

  test('the square lattice, by hand', () => {
    // Along x: planes at π/a (1 0), then (1 1) and (1 −1) together at 2π/a, and (2 0) there too.
    const zone = zoneOf(cell('tp', { a: 1 }))
    const at = (x: number, y = 0) => zoneNumber(zone, [x * Math.PI, y * Math.PI, 0])
    expect([at(0), at(0.99), at(1), at(1.01), at(1.99), at(2), at(2.01)]).toEqual([1, 1, 1, 2, 2, 2, 5])
    // Beyond the corner of the square both (1 0) and (0 1) are nearer, and (1 1): the fourth zone begins there.
    expect([at(0.999, 0.999), at(1, 1), at(1.001, 1.001)]).toEqual([1, 1, 4])
  })

  test('on the line every π/a begins another zone', () => {
    const zone = zoneOf(chain(3))
    const at = (x: number) => zoneNumber(zone, [(x * Math.PI) / 3, 0, 0])
    expect([0, 0.5, 1, 1.5, 2.5, -7.5].map(at)).toEqual([1, 1, 1, 2, 3, 8])
  })

  test('is 1 all over the first zone and its boundary', () => {
    for (const type of BRAVAIS_TYPES) {
      const zone = zoneOf(randomLattice(type, seeded(17)))
      for (const v of zone.vertices) {
        expect(zoneNumber(zone, v)).toBe(1)
        expect(zoneNumber(zone, scale(v, 0.99))).toBe(1)
        expect(zoneNumber(zone, scale(v, 1.01))).toBeGreaterThan(1)
      }
    }
  })

  test('fills space: equal volume for every number', () => {
    // Each zone has the volume of the first; random points fall into it in proportion (L. Brillouin 1930).
    const zone = zoneOf(cell('cI', { a: 4 }))
    const random = seeded(23)
    const counts = [0, 0, 0, 0]
    const n = 20000
    const r = 2 * zone.circumradius
    for (let i = 0; i < n; i++) {
      const number = zoneNumber(zone, [
        between(random, -r, r),
        between(random, -r, r),
        between(random, -r, r),
      ])!
      if (number <= 3) counts[number]++
    }
    const expected = (n * zone.volume) / (2 * r) ** 3
    for (const count of counts.slice(1))
      expect(Math.abs(count - expected)).toBeLessThan(5 * Math.sqrt(expected))
  })

  test('stops at the hundred-thousandth, at once however far out', () => {
    const zone = zoneOf(cell('cP', { a: 2 * Math.PI }))
    // The ball of radius r about k holds 4π/3 r³ lattice points: 100,000 at r = 28.79.
    expect(zoneNumber(zone, [28.5, 0.3, 0.2])).toBeLessThan(LAST_ZONE)
    expect(zoneNumber(zone, [29.1, 0.3, 0.2])).toBeUndefined()
    for (const far of [1e3, 1e6, 1e15, 1e100, 1e300])
      expect(zoneNumber(zone, [far, far / 3, 0])).toBeUndefined()
    const lath = zoneOf(cell('oP', { a: 1, b: 1e3, c: 1e6 }))
    for (const far of [0.1, 1, 10, 1e3, 1e9])
      for (const d of [
        [far, 0, 0],
        [0, far, 0],
        [0, 0, far],
      ] as Vec3[])
        zoneNumber(lath, d)
    expect(zoneNumber(lath, [1e3, 1e3, 1e3])).toBeUndefined()
  })
})

describe('fold', () => {
  const whole = (u: Vec3) => u.every(Number.isInteger)

  test('gives an equivalent in the zone, the shortest there is, and leaves that alone', () => {
    fc.assert(
      fc.property(
        fc.integer(),
        anyType,
        anySize,
        fc.constantFrom(0.7, 3, 1000),
        (seed, type, size, reach) => {
          const random = seeded(seed)
          const own = randomLattice(type, random)
          const l = skewed(own, unimodular(random, own.dimension, 4), size)
          const zone = zoneOf(l)
          const n = l.dimension
          const f = [0, 1, 2].map(i => (i < n ? between(random, -reach, reach) : 0)) as unknown as Vec3
          const folded = fold(zone, f)
          expect(whole(folded.shift)).toBe(true)
          f.forEach((x, i) => {
            expect(folded.fraction[i] + folded.shift[i]).toBeCloseTo(x, 9)
          })
          const cartesian = combine(folded.fraction, zone.reciprocal)
          expect(norm(subtract(cartesian, folded.cartesian)) / zone.inradius).toBeLessThan(1e-9)
          expect(folded.length).toBe(norm(folded.cartesian))
          expect(placeInZone(zone, folded.cartesian).place).toBe(folded.place)
          for (const { distance } of vectorsWithin(
            l.reciprocal,
            l.primitive,
            n,
            folded.cartesian,
            folded.length,
          ))
            expect(distance).toBeGreaterThan(folded.length * (1 - 1e-6))
          expect(fold(zone, folded.fraction)).toEqual({ ...folded, shift: [0, 0, 0] })
        },
      ),
      { numRuns: 300 },
    )
  })

  test('counts ties on special points and takes the largest fractions', () => {
    fc.assert(
      fc.property(fc.integer(), anyType, anySize, (seed, type, size) => {
        const random = seeded(seed)
        const own = randomLattice(type, random)
        const l = skewed(own, unimodular(random, own.dimension, 3), size)
        const zone = zoneOf(l)
        const n = l.dimension
        const f = [0, 1, 2].map(i => (i < n ? wholeBetween(random, -60, 60) / 12 : 0)) as unknown as Vec3
        const folded = fold(zone, f)
        const margin = folded.length * (1 + 1e-8)
        const equals = [...vectorsWithin(l.reciprocal, l.primitive, n, folded.cartesian, margin)].map(v =>
          subtract(folded.fraction, v.index),
        )
        expect(folded.ties).toBe(Math.max(1, equals.length))
        expect(folded.place).toBe(equals.length > 1 ? 'boundary' : 'inside')
        if (placeInZone(zone, combine(f, zone.reciprocal)).place === 'outside') {
          const [largest] = equals.sort((u, v) => v[0] - u[0] || v[1] - u[1] || v[2] - u[2])
          if (largest)
            largest.forEach((x, i) => {
              expect(folded.fraction[i]).toBeCloseTo(x, 9)
            })
        } else expect(folded.fraction).toEqual(f.map(x => x + 0))
      }),
      { numRuns: 400 },
    )
  })

  test('known ties: X two, L two, W four of the face-centred cube; the corner of the simple one eight', () => {
    // The number of equivalent copies of a corner is the number of zones that meet there.
    const fcc = zoneOf(cell('cF', { a: 4 }))
    expect(fold(fcc, [1 / 2, 1 / 2, 0])).toMatchObject({ ties: 2, shift: [0, 0, 0] })
    expect(fold(fcc, [1 / 2, 1 / 2, 1 / 2])).toMatchObject({ ties: 2 })
    expect(fold(fcc, [1 / 2, 1 / 4, 3 / 4])).toMatchObject({ ties: 4, fraction: [1 / 2, 1 / 4, 3 / 4] })
    expect(fold(fcc, [3 / 8, 3 / 8, 3 / 4])).toMatchObject({ ties: 3 })
    const cubic = zoneOf(cell('cP', { a: 4 }))
    expect(fold(cubic, [-1 / 2, 1 / 2, -1 / 2])).toMatchObject({ ties: 8, fraction: [-1 / 2, 1 / 2, -1 / 2] })
    expect(fold(cubic, [-3 / 2, 7 / 2, -5 / 2])).toMatchObject({
      ties: 8,
      fraction: [1 / 2, 1 / 2, 1 / 2],
      shift: [-2, 3, -3],
    })
    const bcc = zoneOf(cell('cI', { a: 4 }))
    expect(fold(bcc, [1 / 4, 1 / 4, 1 / 4])).toMatchObject({ ties: 4 }) // P: tetrahedron
    expect(fold(bcc, [1 / 2, -1 / 2, 1 / 2])).toMatchObject({ ties: 6 }) // H: octahedron
    const hexagonal = zoneOf(cell('hp', { a: 4 }))
    expect(fold(hexagonal, [1 / 3, 1 / 3, 0])).toMatchObject({ ties: 3 })
    expect(fold(hexagonal, [-2 / 3, -2 / 3, 0])).toMatchObject({ ties: 3, place: 'boundary' })
  })

  test('huge fractions keep the digits they have', () => {
    const zone = zoneOf(cell('cF', { a: 4 }))
    const folded = fold(zone, [1e9 + 0.25, -(2 ** 40) - 0.125, 7.5])
    expect(folded.shift.every(Number.isSafeInteger)).toBe(true)
    expect([folded.fraction[0] % 1, folded.fraction[1] % 1].map(x => (x + 1) % 1)).toEqual([0.25, 0.875])
    expect(folded.place).not.toBe('outside')
    expect(fold(zone, [1e300, -1e300, 0]).length).toBe(0)
    expect(fold(zone, [1e308, 1e308, -1e308]).length).toBe(0)
    expect(() => fold(zone, [Number.POSITIVE_INFINITY, 0, 0])).toThrow(RangeError)
  })

  test('has no negative zeros', () => {
    const zone = zoneOf(cell('cP', { a: 4 }))
    const { fraction, cartesian, shift } = fold(zone, [-1, -2, 3])
    for (const x of [...fraction, ...cartesian, ...shift]) expect(Object.is(x, -0)).toBe(false)
  })

  test('a point within the tolerance beyond the boundary stays', () => {
    const zone = zoneOf(cell('cP', { a: 4 }))
    const half = 0.5 * (1 + 0.5e-6)
    expect(fold(zone, [half, 0, 0])).toMatchObject({ fraction: [half, 0, 0], place: 'boundary', ties: 2 })
    expect(fold(zone, [0.5 * (1 + 2e-6), 0, 0]).shift).toEqual([1, 0, 0])
  })
})

describe('leavesZone', () => {
  test('finds the first exit, as by small steps', () => {
    fc.assert(
      fc.property(fc.integer(), anyType, anySize, (seed, type, size) => {
        const random = seeded(seed)
        const own = randomLattice(type, random)
        const zone = zoneOf(skewed(own, unimodular(random, own.dimension, 4), size))
        const from = randomK(zone, random, 0.6)
        const to = randomK(zone, random, 2)
        const exit = leavesZone(zone, from, to)
        const steps = 400
        const along = (t: number) => add(from, scale(subtract(to, from), t))
        let first: number | undefined
        for (let i = 0; i <= steps && first === undefined; i++)
          if (placeInZone(zone, along(i / steps)).place === 'outside') first = i / steps
        if (first === undefined) expect(exit === undefined || exit.at > 1 - 1 / steps).toBe(true)
        else {
          expect(exit).toBeDefined()
          expect(exit!.at).toBeLessThanOrEqual(first)
          expect(exit!.at).toBeGreaterThanOrEqual(first - 1 / steps - 1e-5)
          if (first > 0) {
            expect(placeInZone(zone, exit!.k).place).toBe('boundary')
            expect(dot(exit!.k, exit!.wall.G) / norm(exit!.wall.G) / exit!.wall.distance).toBeCloseTo(1, 6)
          }
          expect(norm(subtract(exit!.k, along(exit!.at))) / zone.inradius).toBeLessThan(1e-9)
        }
      }),
      { numRuns: 200 },
    )
  })

  test('Γ–K–X of the face-centred cube leaves at K, three quarters of the way', () => {
    // From Γ to X′ = (1, 1, 0) 2π/a the wall stands at K = (¾, ¾, 0) (Setyawan and Curtarolo 2010).
    const zone = zoneOf(cell('cF', { a: 2 * Math.PI }))
    const exit = leavesZone(zone, [0, 0, 0], [1, 1, 0])!
    expect(exit.at).toBeCloseTo(0.75, 12)
    expect(exit.k[0]).toBeCloseTo(0.75, 12)
  })

  test('a segment on the boundary, or to it, stays', () => {
    const zone = zoneOf(cell('cF', { a: 2 * Math.PI }))
    const [X, W, K, L, U]: Vec3[] = [
      [0, 1, 0],
      [0.5, 1, 0],
      [0.75, 0.75, 0],
      [0.5, 0.5, 0.5],
      [0.25, 1, 0.25],
    ]
    const pairs: [Vec3, Vec3][] = [
      [X, W],
      [W, K],
      [K, [0, 0, 0]],
      [[0, 0, 0], L],
      [L, U],
      [U, W],
      [W, L],
      [L, K],
      [U, X],
    ]
    for (const [from, to] of pairs) {
      expect(leavesZone(zone, from, to)).toBeUndefined()
      expect(leavesZone(zone, to, from)).toBeUndefined()
    }
  })

  test('from the boundary outwards it leaves at once, from outside it has left', () => {
    const zone = zoneOf(cell('cP', { a: 2 * Math.PI }))
    expect(leavesZone(zone, [0.5, 0, 0], [1, 0, 0])).toMatchObject({ at: 0, k: [0.5, 0, 0] })
    expect(leavesZone(zone, [1, 0, 0], [0, 0, 0])).toMatchObject({
      at: 0,
      k: [1, 0, 0],
      wall: { distance: 0.5 },
    })
  })
})

test('the zone turns with the crystal', () => {
  fc.assert(
    fc.property(fc.integer(), fc.constantFrom('aP', 'mC', 'hR', 'oF', 'cI'), (seed, type) => {
      const random = seeded(seed)
      const l = randomLattice(type, random)
      const other = lattice(latticeFromVectors(turned(l.primitive, random)))
      const [zone, twin] = [zoneOf(l), zoneOf(other)]
      expectGood(twin)
      // A turn keeps the fractions; the corners of one are those of the other.
      const fractions = (z: Zone, rows: Mat3) => z.vertices.map(v => apply(rows, v))
      const own = fractions(zone, l.primitive)
      for (const f of fractions(twin, other.primitive))
        expect(own.filter(g => norm(subtract(f, g)) < 1e-9)).toHaveLength(1)
    }),
  )
})
