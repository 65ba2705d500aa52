/** Lists of k-points of other programs against a file's path and mesh. */
import { Ajv } from 'ajv'
import fc from 'fast-check'
import { readFileSync } from 'node:fs'
import { join } from 'node:path'
import { afterEach, beforeEach, describe, expect, test } from 'vitest'
import { BRAVAIS_TYPES } from '../../../server/src/crystal/bravais.ts'
import type { MatchJson } from '../../../server/src/exchange/match.ts'
import type { MeshJson } from '../../../server/src/exchange/mesh-points.ts'
import type { PathPointJson } from '../../../server/src/exchange/path-table.ts'
import {
  randomLattice,
  recombine,
  seeded,
  turned,
  unimodular,
  wholeBetween,
} from '../crystal/zone-lattices.ts'
import { closed } from '../exchange/closed.ts'
import { World } from './world.ts'

let world: World
beforeEach(() => {
  world = new World()
})
afterEach(() => world.remove())

type Row = readonly number[]
/** Å: CODATA 2018. */
const BOHR = 0.529177211
const PBTE =
  'lattice: {bravais: cF, a: 6.462}\npath: Γ – X – W – K – Γ – L | U – X\nsampling: {spacing: 0.08}\nmesh: {divisions: [4, 4, 4]}\n'

async function match(text: string, list: string, ...args: string[]) {
  world.write('a.lattice.yaml', text).write('list.txt', list)
  return world.run(['match', 'a.lattice.yaml', 'list.txt', ...args])
}
async function json(text: string, list: string, ...args: string[]): Promise<MatchJson & { status: number }> {
  const { out, err, status } = await match(text, list, ...args, '--format', 'json')
  expect(err).toBe('')
  return { ...JSON.parse(out), status }
}
async function verb<T>(text: string, ...args: string[]): Promise<T> {
  world.write('a.lattice.yaml', text)
  return JSON.parse((await world.run([...args, 'a.lattice.yaml', '--format', 'json'])).out)
}
const path = (text: string) => verb<PathPointJson[]>(text, 'path')
const mesh = (text: string, ...args: string[]) => verb<MeshJson>(text, 'mesh', ...args)

const written = (rows: readonly Row[], digits = 8) =>
  rows.map(row => row.map(x => x.toFixed(digits)).join('  ')).join('\n')

describe('a path', () => {
  test('in the frames and units that people use', async () => {
    const points = await path(PBTE)
    const frames: [RegExp, (p: PathPointJson) => Row][] = [
      [/primitive/, p => p.fraction],
      [/Cartesian in Å⁻¹ with the 2π/, p => p.cartesian],
      [/Cartesian in Å⁻¹ without/, p => p.cartesian.map(x => x / (2 * Math.PI))],
      [/bohr⁻¹ with the 2π/, p => p.cartesian.map(x => x * BOHR)],
      [/nm⁻¹ without/, p => p.cartesian.map(x => (x * 10) / (2 * Math.PI))],
      // Of a cube, 2π/a and the conventional fractions are one and the same.
      [/conventional.*2π\/a/, p => p.cartesian.map(x => (x * 6.462) / (2 * Math.PI))],
    ]
    for (const [frame, numbers] of frames) {
      const result = await json(PBTE, written(points.map(numbers)))
      expect(result).toMatchObject({ status: 0, matches: true, best: { target: 'path', faults: [] } })
      expect(result.best!.frames.join('; ')).toMatch(frame)
      expect(result.others).toEqual([])
    }
  })

  test('labels are told with their lines, header and comments counted', async () => {
    const points = await path(PBTE)
    const list = `# k-points\n\n  k_x k_y k_z\n${written(points.map(({ fraction }) => fraction))}`
    const result = await json(PBTE, list)
    expect(result).toMatchObject({ comments: 1, skipped: [{ line: 3 }], points: points.length })
    for (const { label, lines } of result.best!.labels)
      expect(lines).toEqual(points.flatMap((p, i) => (p.label === label ? [i + 4] : [])))
    expect(result.best!.labels.map(({ label }) => label).sort()).toEqual(['K', 'L', 'U', 'W', 'X', 'Γ'])
  })

  test('given to three digits', async () => {
    const points = await path(PBTE)
    for (const rows of [points.map(p => p.fraction), points.map(p => p.cartesian)])
      expect((await json(PBTE, written(rows, 3))).status).toBe(0)
  })

  test('what is missing, moved, doubled, exchanged, by line', async () => {
    const rows = (await path(PBTE)).map(({ fraction }) => fraction)
    const wrong = async (change: (rows: Row[]) => void) => {
      const changed = [...rows]
      change(changed)
      const { status, best } = await json(PBTE, written(changed))
      expect(status).toBe(1)
      return best!.faults.map(({ kind, line }) => [kind, line])
    }
    expect(await wrong(list => list.splice(4, 1))).toEqual([['missing', undefined]])
    expect(
      await wrong(list =>
        list.splice(
          4,
          1,
          list[4].map(x => x + 0.01),
        ),
      ),
    ).toEqual([['off', 5]])
    expect(await wrong(list => list.splice(4, 0, list[2]))).toEqual([['doubled', 5]])
    expect(await wrong(list => list.splice(4, 2, list[5], list[4]))).toEqual([['order', expect.any(Number)]])
  })

  test('how far a point is off, in Å⁻¹', async () => {
    const points = await path(PBTE)
    const rows = points.map(({ cartesian }, i) =>
      i === 3 ? [cartesian[0] + 0.003, ...cartesian.slice(1)] : cartesian,
    )
    const { best } = await json(PBTE, written(rows))
    expect(best!.faults).toMatchObject([{ kind: 'off', line: 4, miss: expect.closeTo(0.003, 7) }])
  })

  test('the ends of its segments alone, written as fractions and with Fortran exponents', async () => {
    const list =
      '0 0 0 # G\n1/2 0 1/2 # X\n5.0D-01, 0.25D0, 7.5d-1\n3/8 3/8 3/4\n0 0 0\n1/2 1/2 1/2\n5/8 1/4 5/8\n1/2 0 1/2\n'
    const result = await json(PBTE, list)
    expect(result).toMatchObject({ status: 0, best: { target: 'corners' } })
    const twice = list.replace('1/2 0 1/2 # X\n', '1/2 0 1/2\n1/2 0 1/2\n')
    expect(await json(PBTE, twice)).toMatchObject({
      status: 0,
      best: { target: 'corners', notes: [expect.stringMatching(/said twice/)] },
    })
  })

  test('a label at another point is told', async () => {
    const list =
      '0 0 0 # G\n1/2 0 1/2 # L\n1/2 1/4 3/4\n3/8 3/8 3/4\n0 0 0\n1/2 1/2 1/2\n5/8 1/4 5/8\n1/2 0 1/2\n'
    expect((await json(PBTE, list)).best!.notes).toEqual(['line 2 is labelled L; this is X'])
  })

  test('other steps, another lattice constant: said as such', async () => {
    const other = await path(PBTE.replace('0.08', '0.05'))
    const resampled = await match(PBTE, written(other.map(({ fraction }) => fraction)))
    expect(resampled).toMatchObject({ status: 1, out: expect.stringMatching(/sampled with other steps/) })
    const larger = (await path(PBTE)).map(({ cartesian }) => cartesian.map(x => x * 1.0125))
    const { out, status } = await match(PBTE, written(larger))
    expect(status).toBe(1)
    expect(out).toMatch(/every number times 0\.987654 gives the path/)
  })

  test('columns by number, among others', async () => {
    const rows = (await path(PBTE)).map(({ fraction }, i) => [i + 1, 7.5, ...fraction])
    expect((await json(PBTE, written(rows), '--columns', '3,4,5')).status).toBe(0)
  })
})

describe('a mesh', () => {
  test('full and irreducible, with the weights', async () => {
    for (const [args, listing] of [
      [['--full'], 'full'],
      [[], 'irreducible'],
    ] as const) {
      const { points } = await mesh(PBTE, ...args)
      const rows = points.map(({ fraction, weight }) => [...fraction, weight])
      expect(await json(PBTE, written(rows))).toMatchObject({ status: 0, best: { target: 'mesh', listing } })
    }
  })

  // By hand: of the 4×4×4 mesh of cF, Γ stands for 1 of 64 points; (1/4, 0, 0) for the 8 directions ⟨111⟩.
  test('equivalent points stand for each other; a wrong weight and a missing point are named', async () => {
    const { points } = await mesh(PBTE)
    const rows = points.map(({ fraction, weight }) => [
      ...fraction.map(x => (x === 0 ? 0 : 1 - x)),
      weight * 64,
    ])
    expect((await json(PBTE, written(rows, 6))).status).toBe(0)
    const eight = rows.findIndex(row => row[3] === 8)
    const heavy = rows.map((row, i) => (i === eight ? [...row.slice(0, 3), 6] : row))
    const { status, best } = await json(PBTE, written(heavy, 6))
    expect(status).toBe(1)
    expect(best!.faults.map(({ kind }) => kind)).toContain('weight')
    expect(best!.faults.find(({ line }) => line === eight + 1)!.message).toMatch(
      /it should be 0\.125 \(8 of 64 points\)/,
    )
    const short = await json(
      PBTE,
      written(
        rows.filter((_, i) => i !== eight),
        6,
      ),
    )
    expect(short.best!.faults).toMatchObject([
      { kind: 'missing', message: expect.stringMatching(/all of its 8/) },
    ])
  })

  test('reduced without time reversal or by no rotation but −1: still the mesh, by its weights', async () => {
    const text = 'lattice: {bravais: cP, a: 4}\nmesh: {divisions: [3, 3, 3]}\n'
    const { points } = await mesh(text, '--full')
    const seen = new Set<string>()
    const rows = points.flatMap(({ fraction }) => {
      const back = fraction.map(x => (x === 0 ? 0 : 1 - x))
      if (seen.has(back.map(x => x.toFixed(3)).join())) return []
      seen.add(fraction.map(x => x.toFixed(3)).join())
      return [[...fraction, fraction.every(x => x === 0) ? 1 : 2]]
    })
    expect(rows).toHaveLength(14)
    expect(await json(text, written(rows))).toMatchObject({ status: 0, best: { listing: 'partly reduced' } })
    const bare = await json(text, written(rows.map(row => row.slice(0, 3))))
    expect(bare).toMatchObject({ status: 1, best: { faults: [{ kind: 'weight' }] } })
  })

  test('one of several, by its name', async () => {
    const text =
      'lattice: {bravais: tP, a: 4, c: 6}\nmesh:\n  coarse: {divisions: [2, 2, 2]}\n  fine: {divisions: [4, 4, 2]}\n'
    const { points } = await mesh(text, '--name', 'fine')
    expect((await json(text, written(points.map(p => p.fraction)))).best).toMatchObject({ name: 'fine' })
  })

  test('Γ alone fits every frame, and that is said', async () => {
    const text = 'lattice: {bravais: cP, a: 4}\nmesh: {divisions: [1, 1, 1]}\n'
    const { status, others } = await json(text, '0 0 0\n')
    expect(status).toBe(0)
    expect(others.length).toBeGreaterThan(5)
    expect((await match(text, '0 0 0\n')).out).toMatch(/cannot be told from/)
  })

  test('in two dimensions, with a component along the normal or without', async () => {
    const text = 'lattice: {bravais: hp, a: 3}\nmesh: {divisions: [4, 4]}\n'
    const { points } = await mesh(text)
    for (const zero of [[], [0]])
      expect((await json(text, written(points.map(p => [...p.fraction, ...zero, p.weight])))).status).toBe(0)
  })
})

describe('the cell of a job', () => {
  const cell = async (text: string, rows: readonly Row[], unit: string) => {
    world.write('a.lattice.yaml', text).write('v.txt', written(rows, 7))
    const { out, status } = await world.run([
      'match',
      'a.lattice.yaml',
      '--vectors',
      'v.txt',
      '--vectors-unit',
      unit,
      '--format',
      'json',
    ])
    return { ...(JSON.parse(out) as MatchJson).cell!, status }
  }
  const CUBE = [
    [6.462, 0, 0],
    [0, 6.462, 0],
    [0, 0, 6.462],
  ]
  test('the conventional cell is a supercell of four, in nm', async () => {
    const found = await cell(
      PBTE,
      CUBE.map(row => row.map(x => x / 10)),
      'nm',
    )
    expect(found).toMatchObject({
      status: 0,
      related: true,
      of: 'ours',
      rotation: { angle: 0, proper: true },
    })
    expect(Math.abs(found.determinant!)).toBe(4)
    // a = −a₁ + a₂ + a₃ of the face-centred vectors (b+c)/2, (a+c)/2, (a+b)/2.
    expect(found.matrix).toEqual([
      [-1, 1, 1],
      [1, -1, 1],
      [1, 1, -1],
    ])
  })
  test('a smaller cell, and one that is strained by one per cent', async () => {
    const half = 'lattice: {bravais: cP, a: 6.462}\n'
    const primitive = [
      [0, 3.231, 3.231],
      [3.231, 0, 3.231],
      [3.231, 3.231, 0],
    ]
    expect(await cell(half, primitive, 'angstrom')).toMatchObject({ of: 'job', determinant: 4 })
    const strained = await cell(
      half,
      CUBE.map(row => row.map((x, i) => (i === 2 ? x * 1.01 : x))),
      'angstrom',
    )
    expect(strained.strain).toBeCloseTo(1, 6)
  })
  test('no cell of this lattice', async () => {
    const found = await cell(
      PBTE,
      [
        [5, 0, 0],
        [0, 6, 0],
        [0, 0, 7.7],
      ],
      'angstrom',
    )
    expect(found).toEqual({ related: false, status: 1 })
  })
  test('turned by a quarter about z in a triclinic lattice', async () => {
    const text = 'lattice: {vectors: [[4, 0, 0], [1, 5, 0], [0.5, 0.7, 6]]}\n'
    const found = await cell(
      text,
      [
        [0, 4, 0],
        [-5, 1, 0],
        [-0.7, 0.5, 6],
      ],
      'angstrom',
    )
    expect(found.rotation).toMatchObject({ angle: expect.closeTo(90, 5), proper: true })
    expect(found.rotation!.axis).toEqual([expect.closeTo(0, 6), expect.closeTo(0, 6), expect.closeTo(1, 6)])
    const mirror = await cell(
      text,
      [
        [4, 0, 0],
        [1, 5, 0],
        [0.5, 0.7, -6],
      ],
      'angstrom',
    )
    expect(mirror.rotation!.proper).toBe(true) // With −1 it is a turn by 180°, and every lattice has −1.
  })
})

describe('what helps where a list does not match', () => {
  test('an ordinal in the first column: the columns that do match are named', async () => {
    const points = await path(PBTE)
    const rows = points.map((p, i) => `${i + 1} ${written([p.fraction])}`).join('\n')
    const { status, out } = await match(PBTE, rows)
    expect(status).toBe(1)
    expect(out).toContain('--columns "2,3,4"')
    expect((await match(PBTE, rows, '--columns', '2,3,4')).status).toBe(0)
    // Columns that were asked for are taken at the word.
    expect((await match(PBTE, rows, '--columns', '1,2,3')).out).not.toContain('--columns')
  })
  test('words in the first columns', async () => {
    const points = await path(PBTE)
    const rows = points.map((p, i) => `k( ${i + 1}) = (${written([p.fraction])}), w = 1`).join('\n')
    const { status, err } = await match(PBTE, rows)
    expect(status).toBe(2)
    expect(err).toContain('--columns "4,5,6"')
    expect((await match(PBTE, rows, '--columns', '4,5,6')).status).toBe(0)
  })
  const grid = (n: Row, shift: Row): Row[] =>
    Array.from({ length: n[0] * n[1] * n[2] }, (_, i) => [
      (Math.floor(i / (n[1] * n[2])) + shift[0]) / n[0],
      ((Math.floor(i / n[2]) % n[1]) + shift[1]) / n[1],
      ((i % n[2]) + shift[2]) / n[2],
    ])
  test.each([
    [[4, 4, 4], [1 / 2, 1 / 2, 1 / 2], 'the full mesh of 4 × 4 × 4 with the shift [1/2, 1/2, 1/2]'],
    [[6, 6, 6], [0, 0, 0], 'the full mesh of 6 × 6 × 6 without a shift'],
    [[4, 3, 1], [0, 0, 1 / 2], 'the full mesh of 4 × 3 × 1 with the shift [0, 0, 1/2]'],
  ])('a mesh of %j shifted by %j', async (divisions, shift, words) => {
    const { nearest, status } = await json(PBTE, written(grid(divisions, shift)))
    expect(status).toBe(1)
    expect(nearest).toContain(words)
    expect(nearest).toContain('the file has 4 × 4 × 4 without a shift')
  })
  test('an irreducible mesh of other divisions', async () => {
    const { points } = await mesh(PBTE.replace('[4, 4, 4]', '[8, 8, 8]'))
    const { nearest } = await json(PBTE, written(points.map(p => [...p.fraction, p.weight])))
    expect(nearest).toContain('the irreducible mesh of 8 × 8 × 8 without a shift')
  })
  test('a list that is no mesh is not called one', async () => {
    const rows = grid([4, 4, 4], [1 / 2, 1 / 2, 1 / 2]).map((row, i) => (i === 9 ? [0.01, 0.2, 0.3] : row))
    expect((await json(PBTE, written(rows))).nearest).not.toContain('mesh of')
    // The ends of segments lie on a coarse mesh, but are not all of it.
    const ends = [
      [0, 0, 0],
      [1 / 2, 0, 0],
      [1 / 2, 1 / 2, 0],
      [0, 0, 0],
      [1 / 2, 1 / 2, 1 / 2],
    ]
    expect((await json(PBTE, written(ends))).nearest ?? '').not.toContain('mesh of')
  })
  test('a cell in another unit', async () => {
    const cube = [
      [6.462, 0, 0],
      [0, 6.462, 0],
      [0, 0, 6.462],
    ]
    for (const [size, unit] of [
      [1 / BOHR, 'bohr'],
      [0.1, 'nm'],
    ] as const) {
      world.write('a.lattice.yaml', PBTE).write(
        'v.txt',
        written(
          cube.map(row => row.map(x => x * size)),
          7,
        ),
      )
      const args = ['match', 'a.lattice.yaml', '--vectors', 'v.txt']
      const { out, status } = await world.run(args)
      expect(status).toBe(1)
      expect(out).toContain(`--vectors-unit ${unit}`)
      const answer = JSON.parse((await world.run([...args, '--format', 'json'])).out)
      expect(answer).toMatchObject({ matches: false, cell: { related: false, fitsIn: unit } })
      expect((await world.run([...args, '--vectors-unit', unit])).status).toBe(0)
    }
  })
})

test.each([
  [['a.lattice.yaml'], /a file and a list are wanted/],
  [['a.lattice.yaml', 'gone.txt'], /gone\.txt: no such file/],
  [['a.lattice.yaml', 'l.txt', 'm.txt'], /one file and one list/],
  [['-', '-'], /standard input can be one/],
  [['a.lattice.yaml', 'l.txt', '--columns', '1,2'], /--columns "1,2": 3 columns/],
  [['a.lattice.yaml', 'l.txt', '--columns', '0,1,2'], /from 1/],
  [['a.lattice.yaml', 'l.txt', '--columns', '4,5,6'], /no line has 6 numbers/],
  [['a.lattice.yaml', 'l.txt', '--weight-column', '9'], /line 1: no number in the weight column 9/],
  [['a.lattice.yaml', 'l.txt', '--vectors-unit', 'bohr'], /not given/],
  [['a.lattice.yaml', '--vectors', 'flat.txt'], /span no cell/],
  [['a.lattice.yaml', '--vectors', 'two.txt'], /line 1: a vector has three numbers/],
])('%j is refused', async (args, message) => {
  world
    .write('a.lattice.yaml', PBTE)
    .write('l.txt', '0 0 0\n')
    .write('flat.txt', '1 0 0\n0 1 0\n1 1 0\n')
    .write('two.txt', '1 0\n')
  const { status, out, err } = await world.run(['match', ...args])
  expect({ status, out }).toEqual({ status: 2, out: '' })
  expect(err).toMatch(/^braggline: [^\n]*\n$/)
  expect(err).toMatch(message)
})

test('fits the published schema, which allows nothing else', async () => {
  const schema = JSON.parse(
    readFileSync(join(import.meta.dirname, '../../../server/src/exchange/schema/match.schema.json'), 'utf8'),
  )
  const validate = new Ajv({ strict: true, allowUnionTypes: true }).compile(closed(schema))
  world.write('v.txt', '6.5 0 0\n0 6.5 0\n0 0 6.5\n')
  for (const [list, ...args] of [['0 0 0\n'], ['k\n.1 .2 .3 .4\n'], ['0 0 0\n', '--vectors', 'v.txt']]) {
    const { status, ...value } = await json(PBTE, list, ...args)
    validate(value)
    expect([status, validate.errors]).toEqual([1, null])
  }
})

test("samples of random lattices in the job's own cell are recognised, and a point that is moved is named", async () => {
  await fc.assert(
    fc.asyncProperty(
      fc.integer({ min: 1, max: 1e6 }),
      fc.integer({ min: 5, max: 8 }),
      async (seed, digits) => {
        const random = seeded(seed)
        const type = BRAVAIS_TYPES[seed % BRAVAIS_TYPES.length]
        const lattice = randomLattice(type, random)
        const n = lattice.dimension
        const rows = lattice.primitive.slice(0, n)
        const text = `lattice: {vectors: ${JSON.stringify(rows)}}\nlabels: none\npoints: {A: [0.1${', 0.05'.repeat(n - 1)}], B: [0.5${', 0.25'.repeat(n - 1)}], C: [0${', 0.4'.repeat(n - 1)}]}\npath: ${n > 1 ? 'A – B – C' : 'A – B'}\nsampling: {steps: 9}\nmesh: {divisions: [${[3, 4, 5].slice(0, n)}]}\n`
        // Another cell of the lattice, and turned in space where it has three dimensions.
        const cell = recombine(unimodular(random, n, 3), lattice.primitive, n)
        const inSpace = n === 3 ? turned(cell, random) : cell
        world.write('v.txt', written(inSpace, 9))
        const full = await mesh(text, '--full')
        const sampled = await path(text)
        const cartesian = (f: Row) =>
          [0, 1, 2].map(x => f.reduce((sum, u, i) => sum + u * lattice.reciprocal[i][x], 0))
        // k·aᵢ/2π are the fractions of any cell.
        const inCell = (k: Row) => cell.map(a => k.reduce((sum, x, i) => sum + x * a[i], 0) / (2 * Math.PI))
        const filledUp = (f: Row) => [...f, 0, 0].slice(0, 3)
        const lists: [string, Row[]][] = [
          ['path', sampled.map(p => filledUp(inCell(p.cartesian)))],
          ['path', sampled.map(p => p.cartesian.map(x => x * BOHR))],
          ['mesh', full.points.map(p => filledUp(inCell(cartesian(p.fraction))))],
        ]
        for (const [target, list] of lists) {
          const right = await json(text, written(list, digits), '--vectors', 'v.txt')
          expect(right).toMatchObject({ status: 0, best: { target } })
          const at = wholeBetween(random, 0, list.length - 1)
          const moved = list.map((row, i) => (i === at ? [row[0] + 0.0123, ...row.slice(1)] : row))
          const wrong = await json(text, written(moved, digits), '--vectors', 'v.txt')
          expect(wrong.status).toBe(1)
          expect(wrong.best!.faults.map(({ line }) => line)).toContain(at + 1)
        }
      },
    ),
    { numRuns: 14 },
  )
}, 120_000)
