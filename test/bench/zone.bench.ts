import { isLattice, latticeFromCell } from '../../server/src/crystal/lattice.ts'
import type { Mat3 } from '../../server/src/crystal/vector.ts'
import { buildZone } from '../../server/src/crystal/zone.ts'

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

/** Reciprocal vectors of triclinic lattices with no two lengths or angles alike. */
function triclinic(count: number): Mat3[] {
  const next = random(20240229)
  const found: Mat3[] = []
  while (found.length < count) {
    const [a, b, c] = [1, 2, 3].map(i => 3 + i + 2 * next())
    const [alpha, beta, gamma] = [1, 2, 3].map(() => 70 + 40 * next())
    const lattice = latticeFromCell({ a, b, c, alpha, beta, gamma }, 'P', 3)
    if (isLattice(lattice)) found.push(lattice.reciprocal)
  }
  return found
}

const LATTICES = 64
const ROUNDS = 20
const SAMPLES = 50

/** Microseconds for one zone, each sample the mean over many lattices. */
function zoneTimes(): number[] {
  const lattices = triclinic(LATTICES)
  const sample = (): number => {
    const start = process.hrtime.bigint()
    for (let round = 0; round < ROUNDS; round++) for (const reciprocal of lattices) buildZone(reciprocal, 3)
    return Number(process.hrtime.bigint() - start) / 1000 / (ROUNDS * LATTICES)
  }
  for (let warm = 0; warm < 10; warm++) sample()
  return Array.from({ length: SAMPLES }, sample)
}

export const benches = [{ name: 'zone of a triclinic lattice', unit: 'µs', run: zoneTimes }]
