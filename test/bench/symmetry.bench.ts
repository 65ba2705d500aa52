import { kRotations, symmetryPoints } from '../../server/src/crystal/kspace.ts'
import { findSymmetry, latticeType, type SymmetryInput } from '../../server/src/crystal/symmetry.ts'
import type { Mat3, Vec3 } from '../../server/src/crystal/vector.ts'
import { irreducibleWedge } from '../../server/src/crystal/wedge.ts'
import { buildZone } from '../../server/src/crystal/zone.ts'
import { loadSymmetryFromDisk } from '../../server/src/symmetry-node.ts'

loadSymmetryFromDisk()

/** D. H. Lehmer's generator: the same crystals in every run. */
function generator(seed: number): () => number {
  let state = seed
  return () => {
    state = (state * 48271) % 2147483647
    return state / 2147483647
  }
}

const cube = (a: number): Mat3 => [
  [a, 0, 0],
  [0, a, 0],
  [0, 0, a],
]

/** n × n × n sites of a simple cubic net, the two kinds of rock salt on them by turns. */
function rockSalt(n: number): SymmetryInput {
  const sites = Array.from(
    { length: n ** 3 },
    (_, i): Vec3 => [Math.floor(i / n ** 2), Math.floor(i / n) % n, i % n],
  )
  return {
    dimension: 3,
    primitive: cube(2.82 * n),
    positions: sites.map(([i, j, k]): Vec3 => [i / n, j / n, k / n]),
    species: sites.map(([i, j, k]) => (i + j + k) % 2),
    tolerance: 1e-3,
  }
}

/** An odd site of the net moved: no translation is left. */
function displaced(input: SymmetryInput): SymmetryInput {
  return {
    ...input,
    positions: input.positions.map((x, i): Vec3 => (i === 7 ? [x[0], x[1], x[2] + 0.01] : x)),
  }
}

function withoutSymmetry(atoms: number): SymmetryInput {
  const random = generator(1)
  const positions = Array.from({ length: atoms }, (): Vec3 => [random(), random(), random()])
  return {
    dimension: 3,
    primitive: [
      [14, 0, 0],
      [1, 15, 0],
      [2, -1, 16],
    ],
    positions,
    species: positions.map((_, i) => i % 3),
    tolerance: 1e-3,
  }
}

const primitiveRockSalt: SymmetryInput = {
  dimension: 3,
  primitive: [
    [0, 2.82, 2.82],
    [2.82, 0, 2.82],
    [2.82, 2.82, 0],
  ],
  positions: [
    [0, 0, 0],
    [0.5, 0.5, 0.5],
  ],
  species: [11, 17],
  tolerance: 1e-3,
}

function samples(rounds: number, work: () => unknown): number[] {
  const times: number[] = []
  for (let i = -5; i < rounds; i++) {
    const started = performance.now()
    work()
    if (i >= 0) times.push(performance.now() - started)
  }
  return times
}

const search = (name: string, input: SymmetryInput, rounds = 50) => ({
  name: `symmetry: ${name}`,
  unit: 'ms',
  run: () => {
    // A search that fails is quick, and no figure.
    const found = findSymmetry(input)
    if ('failed' in found) throw new Error(`${name}: ${found.failed}`)
    return samples(rounds, () => findSymmetry(input))
  },
})

export const benches = [
  search('2 atoms, rock salt', primitiveRockSalt),
  search('40 atoms without symmetry', withoutSymmetry(40)),
  search('64 atoms, one displaced', displaced(rockSalt(4))),
  search('200 atoms without symmetry', withoutSymmetry(200)),
  search('216 atoms, one displaced', displaced(rockSalt(6)), 10),
  search('1000 atoms, rock salt written out', rockSalt(10), 20),
  {
    name: 'symmetry: lattice type, points and wedge of a face-centred cubic lattice',
    unit: 'ms',
    run: () =>
      samples(50, () => {
        const { primitive } = primitiveRockSalt
        const { holohedry } = latticeType(primitive, 3, 1e-3)!
        const k = Math.PI / 2.82
        const zone = buildZone(
          [
            [-k, k, k],
            [k, -k, k],
            [k, k, -k],
          ],
          3,
        )
        const group = kRotations(holohedry, true, 3)
        return [symmetryPoints(group, zone), irreducibleWedge(zone, group, [1, 0.6, 0.3])]
      }),
  },
]
