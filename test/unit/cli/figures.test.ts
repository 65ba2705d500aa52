import { afterEach, beforeEach, describe, expect, test } from 'vitest'
import { HBAR2_OVER_2M } from '../../../server/src/crystal/units.ts'
import { World } from './world.ts'

let world: World
beforeEach(() => {
  world = new World()
  world.write(
    'cubic.lattice.yaml',
    'lattice: {bravais: cP, a: 4}\npath: Γ – X | M – Γ\nsampling: {steps: 2}\n',
  )
  world.write('bare.lattice.yaml', 'lattice: {bravais: cP, a: 4}\n')
})
afterEach(() => world.remove())

describe('bands', () => {
  // In units of (ħ²/2m)(2π/a)² by hand: Γ 0, half-way to X 1/16, X 1/4, M 1/2, half-way to Γ 1/8.
  test('the lowest band along a path, in eV', async () => {
    const { status, out, err } = await world.run([
      'bands',
      'cubic.lattice.yaml',
      '--format',
      'json',
      '--count',
      '2',
    ])
    expect({ status, err }).toEqual({ status: 0, err: '' })
    const { points, energyUnit } = JSON.parse(out)
    expect(energyUnit).toBe('eV')
    const unit = HBAR2_OVER_2M * ((2 * Math.PI) / 4) ** 2
    const lowest = points.map(({ energies }: { energies: number[] }) => energies[0] / unit)
    for (const [i, expected] of [0, 1 / 16, 1 / 4, 1 / 2, 1 / 8, 0].entries())
      expect(lowest[i]).toBeCloseTo(expected, 9)
    expect(points.map(({ piece, label }: { piece: number; label?: string }) => [piece, label])).toEqual([
      [1, 'Γ'],
      [1, undefined],
      [1, 'X'],
      [2, 'M'],
      [2, undefined],
      [2, 'Γ'],
    ])
    // X lies on one Bragg plane, M where two meet.
    expect(points[2].degeneracies).toEqual([2, 2])
    expect(points[3].degeneracies).toEqual([4, 4])
    // The distance runs on over the break.
    expect(points[3].distance).toBeCloseTo(points[2].distance, 12)
  })
  test('csv: a row a point, a column a band', async () => {
    const { out } = await world.run(['bands', 'cubic.lattice.yaml', '--count', '3'])
    const rows = out
      .trimEnd()
      .split('\r\n')
      .map(row => row.split(','))
    expect(rows[0]).toEqual(['piece', 'index', 'distance', 'k1', 'k2', 'k3', 'label', 'E1', 'E2', 'E3'])
    expect(rows).toHaveLength(7)
  })
  test('svg, to a file that is not there yet', async () => {
    await world.run(['bands', 'cubic.lattice.yaml', '--format', 'svg', '-o', 'bands.svg'])
    expect(world.read('bands.svg')).toMatch(/^<svg .*<\/svg>\n$/s)
    expect((await world.run(['bands', 'cubic.lattice.yaml', '-o', 'bands.svg'])).err).toMatch(/--overwrite/)
  })
  test.each([
    [['bare.lattice.yaml'], /no path/],
    [['cubic.lattice.yaml', '--count', '0'], /whole number/],
    [['cubic.lattice.yaml', '--count', '99999999'], /too many/],
    [['.'], /one file/],
  ])('%j is refused', async (args, message) => {
    const { status, out, err } = await world.run(['bands', ...args])
    expect({ status, out }).toEqual({ status: 2, out: '' })
    expect(err).toMatch(message)
  })
})

describe('draw', () => {
  test('seen from a side', async () => {
    await world.run(['draw', 'cubic.lattice.yaml', '-o', 'zone.svg', '--view', '90,0'])
    const svg = world.read('zone.svg')
    expect(svg).toMatch(/^<svg .*<\/svg>\n$/s)
    // A cube from the side is a square: all twelve edges lie in four places or are points.
    const places = [
      ...svg.matchAll(/<line x1="([^"]*)" y1="([^"]*)" x2="([^"]*)" y2="([^"]*)" class="edge/g),
    ].map(match => match.slice(1, 5).map(Number))
    expect(places).toHaveLength(12)
    const corners = new Set(
      places.flatMap(([x1, y1, x2, y2]) => [
        `${Math.round(x1)},${Math.round(y1)}`,
        `${Math.round(x2)},${Math.round(y2)}`,
      ]),
    )
    expect(corners.size).toBe(4)
  })
  test.each([['1'], ['a,b'], ['1,2,3'], ['200,0'], ['1,']])('--view %j is refused', async view => {
    const { status, err } = await world.run(['draw', 'cubic.lattice.yaml', '--view', view])
    expect(status).toBe(2)
    expect(err).toMatch(/--view/)
  })
})
