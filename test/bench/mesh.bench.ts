import { spawnSync } from 'node:child_process'
import { setFlagsFromString } from 'node:v8'
import { runInNewContext } from 'node:vm'
import { kRotations } from '../../server/src/crystal/kspace.ts'
import { meshOrbits } from '../../server/src/crystal/mesh.ts'
import { findSymmetry } from '../../server/src/crystal/symmetry.ts'
import type { Vec3 } from '../../server/src/crystal/vector.ts'
import { loadSymmetryFromDisk } from '../../server/src/symmetry-node.ts'

loadSymmetryFromDisk()

/** Zinc blende: two atoms in a face-centred cubic cell, 24 rotations; with time reversal 48 in k-space. */
const found = findSymmetry({
  dimension: 3,
  primitive: [
    [0, 2.82, 2.82],
    [2.82, 0, 2.82],
    [2.82, 2.82, 0],
  ],
  positions: [
    [0, 0, 0],
    [0.25, 0.25, 0.25],
  ],
  species: [30, 16],
  tolerance: 1e-3,
})
if (!('rotations' in found)) throw new Error(found.failed)
const { rotations } = found
const group = kRotations(rotations, true, 3)

setFlagsFromString('--expose-gc')
const collectGarbage = runInNewContext('gc') as () => void

const even = (n: number): Vec3 => [n, n, n]
const SIZES = [24, 48]
const ROUNDS = 60

/** Milliseconds for a mesh, rotations given: symmetry has been found before. */
function ours(n: number, rounds = ROUNDS): number[] {
  const times: number[] = []
  for (let turn = -5; turn < rounds; turn++) {
    const start = performance.now()
    meshOrbits({ divisions: even(n), shift: [0, 0, 0] }, group)
    if (turn >= 0) times.push(performance.now() - start)
  }
  return times
}

interface Theirs {
  readonly times: number[]
  readonly irreducible: number
}

/** spglib's with rotations given, timed inside Python; it fills a table that leads from every point to its irreducible one. */
function theirs(): Map<number, Theirs> {
  const request = { rotations, divisions: SIZES.map(even), rounds: ROUNDS }
  const run = spawnSync('/usr/bin/python3', ['test/bench/mesh.py'], {
    input: JSON.stringify(request),
    encoding: 'utf8',
  })
  if (run.status !== 0)
    throw new Error(`This benchmark needs python3-spglib.\n${run.error?.message ?? run.stderr}`)
  const answers = JSON.parse(run.stdout) as Theirs[]
  return new Map(answers.map((answer, i) => [SIZES[i], answer]))
}
let known: Map<number, Theirs> | undefined

function bothCounts(n: number): void {
  known ??= theirs()
  const count = meshOrbits({ divisions: even(n), shift: [0, 0, 0] }, group)!.sizes.length
  if (known.get(n)!.irreducible !== count)
    throw new Error(`${n}³: ${count} irreducible points here, ${known.get(n)!.irreducible} there`)
}

export const benches = [
  ...SIZES.flatMap(n => [
    {
      name: `mesh: ${n}³ reduced`,
      unit: 'ms',
      run: () => {
        bothCounts(n)
        return ours(n)
      },
    },
    { name: `mesh: ${n}³ reduced by spglib`, unit: 'ms', run: () => (known ??= theirs()).get(n)!.times },
  ]),
  { name: 'mesh: 200³ reduced', unit: 'ms', run: () => ours(200, 10) },
  {
    name: 'mesh: 200³, memory beside the heap',
    unit: 'MB',
    run: () => {
      collectGarbage()
      const before = process.memoryUsage().arrayBuffers
      const orbits = meshOrbits({ divisions: even(200), shift: [0, 0, 0] }, group)!
      const taken = process.memoryUsage().arrayBuffers - before
      return [(orbits.sizes.length > 0 ? taken : 0) / 2 ** 20]
    },
  },
]
