/** Each step is kept by the numbers it depends on: counted, not timed. */
import { expect, test } from 'vitest'
import { Snapshot } from '../../../server/src/analysis.ts'
import type { SymmetryInput } from '../../../server/src/crystal/symmetry.ts'
import { Workshop } from '../../../server/src/meaning/workshop.ts'
import { loadSymmetryFromDisk } from '../../../server/src/symmetry-node.ts'
import { searchSymmetry, WorkerSymmetry } from '../../../server/src/symmetry-service.ts'

loadSymmetryFromDisk()

const FILE = `lattice: {bravais: tI, a: 3.8, c: 9.5}
atoms:
  - Ti: [0, 0, 0]
  - O: [0, 0, 0.2]
  - O: [0, 0, -0.2]
points:
  Q: [0.1, 0.1, 0.1]
path: Γ – Q – X
`

function counted() {
  const searches: SymmetryInput[] = []
  const workshop = new Workshop({
    find(input) {
      searches.push(input)
      return { outcome: searchSymmetry(input) }
    },
  })
  const check = (text: string) => new Snapshot(text, workshop).findings
  const counts = () => [
    searches.length,
    workshop.zones.computed,
    workshop.types.computed,
    workshop.matches.computed,
  ]
  return { check, counts }
}

test('typing in `points`, `path` and `title` computes neither lattice nor zone nor symmetry nor labels again', () => {
  const { check, counts } = counted()
  check(FILE)
  const before = counts()
  expect(before[0]).toBeGreaterThan(0)
  for (const digit of '23456789') check(FILE.replace('[0.1, 0.1', `[0.1${digit}, 0.1`))
  check(FILE.replace('Γ – Q – X', 'Γ – X – Q'))
  check(`title: T\n${FILE}`)
  expect(counts()).toEqual(before)
})

test('moving an atom searches for symmetry again, and leaves the zone alone', () => {
  const { check, counts } = counted()
  check(FILE)
  const [searches, zones] = counts()
  check(FILE.replaceAll('0.2]', '0.21]'))
  expect(counts()[0]).toBeGreaterThan(searches)
  expect(counts()[1]).toBe(zones)
})

test('a change of the cell computes all of it', () => {
  const { check, counts } = counted()
  check(FILE)
  const [searches, zones] = counts()
  check(FILE.replace('9.5', '9.6'))
  expect(counts()[0]).toBeGreaterThan(searches)
  expect(counts()[1]).toBeGreaterThan(zones)
})

test('a large cell is searched elsewhere: pending first, found when the worker has answered', () => {
  let answer: (outcome: ReturnType<typeof searchSymmetry>) => void = () => {}
  const posted: SymmetryInput[] = []
  let told = 0
  const service = new WorkerSymmetry(
    done => {
      answer = done
      return { postMessage: input => posted.push(input), terminate: () => {} }
    },
    () => told++,
  )
  const atoms = Array.from(
    { length: 70 },
    (_, i) => `  - Si: [${i / 70}, ${((i * 7) % 70) / 70}, ${((i * i) % 31) / 31}]`,
  )
  const text = `lattice: {bravais: cP, a: 30}\natoms:\n${atoms.join('\n')}\n`
  const workshop = new Workshop(service)
  const first = new Snapshot(text, workshop)
  expect(first.documents[0].crystal.symmetryOutcome.state).toBe('pending')
  expect(first.pending).toBe(true)
  answer(searchSymmetry(posted[0]))
  expect(told).toBe(1)
  const second = new Snapshot(text, workshop)
  expect(second.pending).toBe(false)
  expect(second.documents[0].crystal.symmetryOutcome.state).toBe('found')
  service.dispose()
})

test('searches that pile up are dropped, the oldest first, and begun anew when they are asked for again', () => {
  const posted: SymmetryInput[] = []
  const service = new WorkerSymmetry(() => ({
    postMessage: input => posted.push(input),
    terminate: () => {},
  }))
  const workshop = new Workshop(service)
  const atoms = Array.from({ length: 70 }, (_, i) => `  - Si: [${i / 70}, ${((i * 7) % 70) / 70}, 0.1]`).join(
    '\n',
  )
  const stateOf = (a: number) =>
    new Snapshot(`lattice: {bravais: cP, a: ${a}}\natoms:\n${atoms}\n`, workshop).documents[0].crystal
      .symmetryOutcome.state
  const searches = () => workshop.symmetries.computed
  for (let a = 30; a < 45; a++) expect(stateOf(a)).toBe('pending')
  const before = searches()
  expect(stateOf(44)).toBe('pending')
  expect(searches()).toBe(before)
  expect(stateOf(31)).toBe('pending')
  expect(searches()).toBe(before + 1)
  expect(posted.length).toBe(1)
  service.dispose()
})

test('a search that takes too long is given up, and the next one goes on', async () => {
  let ended = 0
  const service = new WorkerSymmetry(
    () => ({ postMessage: () => {}, terminate: () => ended++ }),
    undefined,
    5,
  )
  const positions = Array.from({ length: 70 }, (_, i) => [i / 70, 0, 0] as const)
  const input: SymmetryInput = {
    dimension: 3,
    primitive: [
      [300, 0, 0],
      [0, 9, 0],
      [0, 0, 8],
    ],
    positions,
    species: positions.map(() => 1),
    tolerance: 0.001,
  }
  const job = service.find(input)
  await service.idle()
  expect(job.outcome).toEqual({ state: 'failed', reason: 'the search took longer than 0.005 s' })
  expect(ended).toBe(1)
  service.dispose()
})
