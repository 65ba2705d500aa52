/** The effective-mass probe: points, axes, and masses of bands that are given by a formula. */
import { Ajv } from 'ajv'
import { readFileSync } from 'node:fs'
import { join } from 'node:path'
import { afterEach, beforeEach, describe, expect, test } from 'vitest'
import type { ProbeJson } from '../../../server/src/exchange/probe.ts'
import { closed } from '../exchange/closed.ts'
import { World } from './world.ts'

let world: World
beforeEach(() => {
  world = new World()
})
afterEach(() => world.remove())

/** ħ²/2mₑ, eV Å²: CODATA 2018 and 2022 agree to these digits. */
const C = 3.809982
/** Å: CODATA 2018. */
const BOHR = 0.529177211

type Vector = readonly number[]
const dot = (u: Vector, v: Vector) => u.reduce((sum, x, i) => sum + x * v[i], 0)

async function probe(text: string, ...args: string[]) {
  world.write('a.lattice.yaml', text)
  return world.run(['probe', 'a.lattice.yaml', ...args])
}
const json = async (text: string, ...args: string[]): Promise<ProbeJson> => {
  const { out, err } = await probe(text, ...args, '--format', 'json')
  expect(err).toBe('')
  return JSON.parse(out)
}

/** Energies of a band E(k) with k in Å⁻¹, for a file whose unit is `angstrom` Å. */
async function masses(text: string, at: string, band: (k: Vector) => number, angstrom = 1, digits = 17) {
  const points = (await json(text, '--at', at, '--step', '0.01')).points
  const energies = points.map(({ cartesian }) => band(cartesian.map(x => x / angstrom)))
  world.write('e.txt', `# eV\n\n${energies.map(e => e.toPrecision(digits)).join('\n')}\n`)
  return json(text, '--at', at, '--step', '0.01', '--energies', 'e.txt')
}

/** C Σ (k − k₀)·uᵢ² / mᵢ + E₀. */
const paraboloid =
  (axes: readonly Vector[], m: Vector, centre: Vector = [0, 0, 0], floor = 5) =>
  (k: Vector) =>
    floor +
    axes.reduce(
      (sum, u, i) =>
        sum +
        (C / m[i]) *
          dot(
            k.map((x, j) => x - centre[j]),
            u,
          ) **
            2,
      0,
    )

const XYZ = [
  [1, 0, 0],
  [0, 1, 0],
  [0, 0, 1],
]
const PBTE = 'lattice: {bravais: cF, a: 6.462}\natoms:\n  - Pb: [0, 0, 0]\n  - Te: [1/2, 1/2, 1/2]\n'

describe('points', () => {
  test.each([
    [PBTE, 'Γ', 19],
    ['lattice: {bravais: tp, a: 4}\n', 'Γ', 9],
    ['lattice: {vectors: [[3, 0, 0]]}\npoints: {Z: [1/2]}\n', 'Z', 3],
  ])('%j: as many as central differences need', async (text, at, count) => {
    const { points } = await json(text, '--at', at)
    expect(points).toHaveLength(count)
    expect(new Set(points.map(({ role }) => role)).size).toBe(count)
  })

  test('the step is in Å⁻¹ whatever the unit of the file', async () => {
    for (const [unit, angstrom] of [
      ['angstrom', 1],
      ['nm', 10],
      ['bohr', BOHR],
    ] as const) {
      const { points, step } = await json(
        `unit: ${unit}\nlattice: {bravais: oP, a: 12, b: 13, c: 14}\n`,
        ...['--at', 'X', '--step', '0.001'],
      )
      expect(step).toBeCloseTo(0.001 * angstrom, 10)
      const [centre, right] = points
      expect(right.cartesian[0] - centre.cartesian[0]).toBeCloseTo(0.001 * angstrom, 10)
      expect(right.offset).toEqual([expect.closeTo(0.001 * angstrom, 10), 0, 0])
    }
  })

  // L of a face-centred lattice lies along [111]; its little co-group is −3m (common practice).
  test('at L of cF the third axis is [111] and the first a two-fold axis across it', async () => {
    const { axes, axesFrom, littleCoGroup } = await json(PBTE, '--at', 'L')
    expect({ axesFrom, littleCoGroup }).toEqual({ axesFrom: 'symmetry', littleCoGroup: 12 })
    const s = 1 / Math.sqrt(3)
    expect(axes[2].map(Math.abs)).toEqual([s, s, s].map(x => expect.closeTo(x, 9)))
    // Two-fold axes of −3m with the axis [111] are ⟨1−10⟩.
    expect([...axes[0].map(Math.abs)].sort()).toEqual(
      [0, Math.SQRT1_2, Math.SQRT1_2].map(x => expect.closeTo(x, 9)),
    )
    for (const u of axes) for (const v of axes) expect(dot(u, v)).toBeCloseTo(u === v ? 1 : 0, 12)
  })

  // Γ has the whole group of the cube; X = 2π/a (0, 1, 0) has 4/mmm about y, with two-fold axes along x and z.
  test.each([
    ['Γ', XYZ],
    [
      'X',
      [
        [1, 0, 0],
        [0, 0, -1],
        [0, 1, 0],
      ],
    ],
  ])('at %s of cF they are along x, y, z, the main axis last', async (at, wanted) => {
    const { axes, axesFrom } = await json(PBTE, '--at', at)
    expect(axesFrom).toBe('symmetry')
    expect(axes).toEqual(wanted.map(axis => axis.map(x => expect.closeTo(x, 9))))
  })

  test('an orthorhombic crystal turned in space has its own axes', async () => {
    const u = [0.6, 0.8, 0]
    const v = [-0.8, 0.6, 0]
    const rows = [u.map(x => 4 * x), v.map(x => 5 * x), [0, 0, 7]]
    const { axes } = await json(
      `lattice: {vectors: ${JSON.stringify(rows)}}\nlabels: none\npoints: {G: [0, 0, 0]}\n`,
      '--at',
      'G',
    )
    for (const axis of axes)
      expect(Math.max(...[u, v, [0, 0, 1]].map(w => Math.abs(dot(axis, w))))).toBeCloseTo(1, 9)
  })

  test('monoclinic and triclinic ones have x, y, z', async () => {
    for (const lattice of [
      '{bravais: mP, a: 5, b: 6, c: 7, beta: 100}',
      '{bravais: aP, a: 5, b: 6, c: 7, alpha: 80, beta: 85, gamma: 95}',
    ]) {
      const { axes, axesFrom } = await json(`lattice: ${lattice}\n`, '--at', 'Γ')
      expect({ axes, axesFrom }).toEqual({ axes: XYZ, axesFrom: 'cartesian' })
    }
  })

  test('in the plane one mirror fixes both axes', async () => {
    // M of the hexagonal plane lattice: mirrors along and across Γ–M; b₁ + b₂ or b₁ lies along it.
    const { axes, axesFrom, points } = await json('lattice: {bravais: hp, a: 3}\n', '--at', 'M')
    expect(axesFrom).toBe('symmetry')
    const m = points[0].cartesian
    const along = axes.map(axis => Math.abs(dot(axis, m)) / Math.hypot(...m))
    expect([...along].sort((x, y) => x - y)).toEqual([expect.closeTo(0, 9), expect.closeTo(1, 9)])
  })
})

describe('masses', () => {
  const s2 = Math.SQRT1_2
  const s3 = 1 / Math.sqrt(3)
  const s6 = 1 / Math.sqrt(6)

  // An ellipsoid about [111] with longitudinal and transverse masses: the form of the band edge at L of the lead salts.
  test('an ellipsoid at L: masses, axes, tensor', async () => {
    const axes = [
      [s3, s3, s3],
      [s2, -s2, 0],
      [s6, s6, -2 * s6],
    ]
    const centre = (await json(PBTE, '--at', 'L')).points[0].cartesian
    const g = centre.map(x => x / Math.hypot(...centre))
    const band = paraboloid([g, ...across(g)], [0.24, 0.024, 0.024], centre)
    const result = (await masses(PBTE, 'L', band)).masses!
    expect(result.kind).toBe('minimum')
    expect(result.principal.map(({ mass }) => mass)).toEqual(
      [0.024, 0.024, 0.24].map(m => expect.closeTo(m, 6)),
    )
    expect(result.principal.map(({ free }) => free)).toEqual([true, true, false])
    expect(Math.abs(dot(result.principal[2].axis, g))).toBeCloseTo(1, 8)
    // By hand: 1/m_t on the diagonal less a third of the difference; a third of it, of the signs of g, beside it.
    const [t, l] = [1 / 0.024, 1 / 0.24]
    for (const i of [0, 1, 2])
      for (const j of [0, 1, 2])
        expect(result.inverseMass[i][j]).toBeCloseTo((i === j ? t : 0) + (l - t) * g[i] * g[j], 3)
    expect(result.anisotropy).toBeCloseTo(10, 4)
    expect(result.stationary).toBe(true)
    expect(result.asymmetry).toBeLessThan(1e-3)
    expect(axes).toHaveLength(3)
  })
  const across = (g: Vector): Vector[] => {
    const u = [g[1], -g[0], 0].map(x => x / Math.hypot(g[0], g[1]))
    return [u, [g[1] * u[2] - g[2] * u[1], g[2] * u[0] - g[0] * u[2], g[0] * u[1] - g[1] * u[0]]]
  }

  test.each([
    ['angstrom', 1],
    ['nm', 10],
    ['bohr', BOHR],
  ])('a turned ellipsoid in a skewed triclinic basis, lengths in %s', async (unit, angstrom) => {
    const rows = [
      [4, 0.3, -0.2],
      [9, 5, 0.4],
      [-3, 12, 6],
    ].map(row => row.map(x => (x * 1.5) / angstrom))
    const text = `unit: ${unit}\nlattice: {vectors: ${JSON.stringify(rows)}}\nlabels: none\npoints: {P: [0.31, -0.12, 0.43]}\n`
    const axes = [
      [0.36, 0.48, -0.8],
      [-0.8, 0.6, 0],
      [0.48, 0.64, 0.6],
    ]
    const centre = (await json(text, '--at', 'P')).points[0].cartesian.map(x => x / angstrom)
    const result = (await masses(text, 'P', paraboloid(axes, [0.1, -0.5, 2], centre), angstrom)).masses!
    expect(result.kind).toBe('saddle')
    expect(result.principal.map(({ mass }) => mass)).toEqual([0.1, 2, -0.5].map(m => expect.closeTo(m, 4)))
    for (const [i, u] of [axes[0], axes[2], axes[1]].entries())
      expect(Math.abs(dot(result.principal[i].axis, u))).toBeCloseTo(1, 6)
    // The direction in direct vectors is the axis itself.
    for (const { direct, axis } of result.principal) {
      const v = [0, 1, 2].map(x => direct.reduce((sum, f, i) => sum + f * rows[i][x], 0))
      expect(Math.abs(dot(v, axis)) / Math.hypot(...v)).toBeCloseTo(1, 9)
    }
    expect(result.stationary).toBe(true)
    expect(result.misfit).toBeLessThan(1e-6)
  })

  test('a band edge beside the point is told, with its place', async () => {
    const edge = [0.004, 0, 0]
    const result = (
      await masses('lattice: {bravais: oP, a: 4, b: 5, c: 6}\n', 'Γ', paraboloid(XYZ, [1, 2, 3], edge))
    ).masses!
    expect(result).toMatchObject({ stationary: false, gradientMustVanish: true })
    expect(result.extremumAt).toEqual([expect.closeTo(0.004, 8), expect.closeTo(0, 8), expect.closeTo(0, 8)])
    // dE/dk = −2 C x / m by hand.
    expect(result.gradient[0]).toBeCloseTo(-2 * C * 0.004, 6)
    const { out } = await probe(
      'lattice: {bravais: oP, a: 4, b: 5, c: 6}\n',
      '--at',
      'Γ',
      '--energies',
      'e.txt',
    )
    expect(out).toMatch(/\(!\) symmetry makes it vanish/)
    expect(out).toMatch(/0\.4 steps away/)
  })

  test('energies that break the symmetry of the point: which components, and by how much', async () => {
    const band = (k: Vector) => C * (k[0] ** 2 + k[1] ** 2 + 1.1 * k[2] ** 2 + 0.2 * k[0] * k[1])
    const { relations, asymmetry } = (await masses('lattice: {bravais: cP, a: 4}\n', 'Γ', band)).masses!
    // By hand: 1/m₁₁ = 1/m₂₂ = 1, 1/m₃₃ = 1.1, 1/m₁₂ = 0.1; the mean of a cubic point has 3.1/3 on the diagonal.
    const missOf = (...components: string[]) =>
      relations.find(relation => String(relation.components) === String(components))!.miss
    expect(missOf('12')).toBeCloseTo(0.1, 5)
    expect(missOf('13')).toBeCloseTo(0, 5)
    expect(missOf('11', '22')).toBeCloseTo(0, 5)
    expect(missOf('11', '33')).toBeCloseTo(0.1, 5)
    expect(asymmetry).toBeCloseTo(0.1, 5)
    expect(relations).toHaveLength(6)
  })

  // G. Dresselhaus, A. F. Kip and C. Kittel, Phys. Rev. 98, 368 (1955): E = A k² ± √(B²k⁴ + C²(…)).
  test('a warped band edge is said to be no paraboloid', async () => {
    const band = (k: Vector) => {
      const [x, y, z] = k.map(q => q * q)
      const k2 = x + y + z
      return C * (-4 * k2 + Math.sqrt(0.5 * k2 * k2 + 12 * (x * y + y * z + z * x)))
    }
    const { masses: result } = await masses('lattice: {bravais: cF, a: 5.43}\n', 'Γ', band)
    expect(result!.misfit).toBeGreaterThan(0.2)
    const { out } = await probe('lattice: {bravais: cF, a: 5.43}\n', '--at', 'Γ', '--energies', 'e.txt')
    expect(out).toMatch(/no paraboloid over this step/)
    const round = await masses('lattice: {bravais: cF, a: 5.43}\n', 'Γ', paraboloid(XYZ, [1, 1, 1]))
    expect(round.masses!.misfit).toBeLessThan(1e-6)
  })

  test('in two dimensions and in one', async () => {
    const sheet = (await masses('lattice: {bravais: op, a: 4, b: 5}\n', 'Γ', paraboloid(XYZ, [0.5, -2, 1])))
      .masses!
    expect(sheet.principal.map(({ mass }) => mass)).toEqual([expect.closeTo(0.5, 6), expect.closeTo(-2, 6)])
    expect(sheet.inverseMass[2]).toEqual([0, 0, 0])
    const chain = (
      await masses('lattice: {vectors: [[3, 0, 0]]}\npoints: {G: [0]}\n', 'G', paraboloid(XYZ, [0.7, 1, 1]))
    ).masses!
    expect(chain.principal.map(({ mass }) => mass)).toEqual([expect.closeTo(0.7, 6)])
  })

  test('rounded energies: the doubt is told and covers the error', async () => {
    const result = (
      await masses('lattice: {bravais: cP, a: 4}\n', 'Γ', paraboloid(XYZ, [0.5, 0.5, 0.5]), 1, 6)
    ).masses!
    // Five decimals: 2·10⁻⁵/h²/2C by hand.
    expect(result.rounding).toBeCloseTo(2e-5 / 1e-4 / (2 * C), 8)
    for (const { inverse } of result.principal)
      expect(Math.abs(inverse - 2)).toBeLessThanOrEqual(2 * result.rounding)
  })

  test('a band without curvature is flat, not of infinite mass', async () => {
    const { masses: result } = await masses('lattice: {bravais: cP, a: 4}\n', 'Γ', () => 1)
    expect(result).toMatchObject({ kind: 'flat', misfit: 0, stationary: true })
    expect(result!.principal.map(({ mass }) => mass)).toEqual([null, null, null])
  })
})

describe('energies', () => {
  const CHAIN = 'lattice: {vectors: [[3, 0, 0]]}\npoints: {G: [0]}\n'
  const given = (list: string) => {
    world.write('e.txt', list)
    return probe(CHAIN, '--at', 'G', '--energies', 'e.txt')
  }
  test('comments, blank lines, Fortran exponents, standard input', async () => {
    world.write('a.lattice.yaml', CHAIN)
    const list = '# energies\n 1.0D0\n\n1.1d+00 # right\n0.11E1\n'
    const { status, out } = await world.run(
      ['probe', 'a.lattice.yaml', '--at', 'G', '--energies', '-', '--format', 'csv'],
      { input: list },
    )
    expect(status).toBe(0)
    expect(
      out
        .trimEnd()
        .split('\n')
        .slice(1)
        .map(line => line.split(',')[6]),
    ).toEqual(['0', '0.01', '-0.01'].map(x => expect.stringContaining(x.replace('-', ''))))
  })
  test.each([
    ['1\n2\n', /ends after 2 of 3 energies/],
    ['1\n2\n3\n# more\n4\n', /line 5: this energy is one too many: the probe has 3 points/],
    ['1\n# c\nx1\n3\n', /line 3: "x1" is no number/],
    ['1\n2 3\n', /line 2: one energy a line is wanted; here are 2 words/],
    ['1\nNaN\n3\n', /line 2: "NaN" is no number/],
    ['', /ends after 0 of 3/],
    ['1\n1e999\n3\n', /line 2/],
  ])('%j is refused', async (list, message) => {
    const { status, out, err } = await given(list)
    expect({ status, out }).toEqual({ status: 2, out: '' })
    expect(err).toMatch(/^braggline: e\.txt: [^\n]*\n$/)
    expect(err).toMatch(message)
  })
})

test.each([
  [[], /--at LABEL/],
  [['--at', 'Q'], /no point is named Q/],
  [['--at', 'Γ', '--step', '0'], /no length over zero/],
  [['--at', 'Γ', '--step', 'x'], /no length over zero/],
  [['--at', 'Γ', '--step', '3'], /leaves the zone/],
  [['--at', 'Γ', '--energies', 'gone.txt'], /gone\.txt: no such file/],
])('%j is refused', async (args, message) => {
  const { status, out, err } = await probe(PBTE, ...args)
  expect({ status, out }).toEqual({ status: 2, out: '' })
  expect(err).toMatch(message)
})

test('fits the published schema, which allows nothing else', async () => {
  const schema = JSON.parse(
    readFileSync(join(import.meta.dirname, '../../../server/src/exchange/schema/probe.schema.json'), 'utf8'),
  )
  const validate = new Ajv({ strict: true, allowUnionTypes: true }).compile(closed(schema))
  for (const value of [
    await json(PBTE, '--at', 'L'),
    await masses(PBTE, 'Γ', paraboloid(XYZ, [1, 1, 1])),
    await masses('lattice: {bravais: op, a: 4, b: 5}\n', 'Γ', () => 0),
  ]) {
    validate(value)
    expect(validate.errors).toBeNull()
  }
})
