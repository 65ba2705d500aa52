import { matchBook } from '../../server/src/books/match.ts'
import { latticeType } from '../../server/src/crystal/lattice-type.ts'
import { type Mat3, multiply } from '../../server/src/crystal/vector.ts'

/** A seeded generator (mulberry32), so that every run sees the same lattices. */
function random(seed: number): () => number {
  let state = seed
  return () => {
    state = (state + 0x6d2b79f5) | 0
    let t = Math.imul(state ^ (state >>> 15), 1 | state)
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296
  }
}

/** A product of shears: another basis of the same lattice. */
function unimodular(next: () => number): Mat3 {
  let m: Mat3 = [
    [1, 0, 0],
    [0, 1, 0],
    [0, 0, 1],
  ]
  for (let step = 0; step < 4; step++) {
    const i = Math.floor(next() * 3)
    const j = (i + 1 + Math.floor(next() * 2)) % 3
    const shear = [0, 1, 2].map(r => [0, 1, 2].map(c => (r === c ? 1 : r === i && c === j ? 1 : 0)))
    m = multiply(shear as unknown as Mat3, m)
  }
  return m
}

const LATTICES: Record<string, Mat3> = {
  cF: [
    [0, 3.2, 3.2],
    [3.2, 0, 3.2],
    [3.2, 3.2, 0],
  ],
  mC: [
    [6.1, -1.5, 0],
    [6.1, 1.5, 0],
    [-1.4, 0, 5.6],
  ],
  aP: [
    [6.1, 0.2, -0.4],
    [1.3, 7.2, 0.5],
    [-0.8, 1.9, 8.3],
  ],
}
const TOLERANCE = 0.001

function match(vectors: Mat3, known: boolean, count: number): number[] {
  const next = random(7)
  const samples: number[] = []
  for (let i = -200; i < count; i++) {
    const basis = multiply(unimodular(next), vectors)
    const type = known ? latticeType(basis, 3, TOLERANCE) : undefined
    const started = performance.now()
    matchBook('setyawan-curtarolo-2010', basis, 3, { tolerance: TOLERANCE, latticeType: type })
    if (i >= 0) samples.push(performance.now() - started)
  }
  return samples
}

export const benches = Object.entries(LATTICES).flatMap(([name, vectors]) => [
  { name: `labels: ${name} in random bases`, unit: 'ms', run: () => match(vectors, true, 1000) },
  {
    name: `labels: ${name} in random bases, with its lattice type`,
    unit: 'ms',
    run: () => match(vectors, false, 300),
  },
])
