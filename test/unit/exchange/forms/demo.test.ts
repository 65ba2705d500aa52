/** The forms of the demo, read with care as golden files and compared number by number with the report. */
import { describe, expect, test } from 'vitest'
import { fullReport } from '../../../../server/src/exchange/report-full.ts'
import type { MeshReport, Report } from '../../../../server/src/exchange/report.ts'
import { checked } from '../support.ts'
import { demo, fill } from './support.ts'

/** CODATA 2022. */
const BOHR = 0.529177210544
const PARTIALS = { '_vector.liquid': demo('forms/_vector.liquid') }

function filled(form: string, name: string, mesh?: string): { text: string; report: Report } {
  const file = `${name}.lattice.yaml`
  const lattice = demo(file)
  const { snapshot } = checked(lattice)
  return {
    text: fill(demo(`forms/${form}`), lattice, { file, partials: PARTIALS, mesh }),
    report: fullReport(file, snapshot, snapshot.documents[0]).report,
  }
}

/** All numbers of a line after its `=`, fractions too. */
const numbers = (line: string): number[] =>
  [...line.matchAll(/(-?\d+(?:\.\d+)?(?:e[+-]\d+)?)(?:\/(\d+))?/g)].map(
    ([, p, q]) => Number(p) / Number(q ?? 1),
  )
const close = (got: readonly number[], expected: readonly number[], digits = 7) => {
  expect(got).toHaveLength(expected.length)
  for (const [i, x] of expected.entries()) expect(got[i]).toBeCloseTo(x, digits)
}

describe('a band job', async () => {
  const { text, report } = filled('fellwater-bands.fw.liquid', 'lead-telluride')
  const value = (key: string) =>
    text
      .split('\n')
      .find(line => line.startsWith(`${key} `))!
      .split('=')[1]

  test('as it was read', async () => {
    await expect(text).toMatchFileSnapshot('golden/lead-telluride-bands.fw')
  })
  test('its vectors are those of the report in bohr, a/2 apart', () => {
    for (const [i, vector] of report.lattice!.vectors.entries())
      close(
        numbers(value(`cell.${i + 1}`)),
        vector.map(x => x / BOHR),
      )
    // a = 6.46 Å: every component is 0 or a/2.
    close(numbers(value('cell.1')), [0, 3.23 / BOHR, 3.23 / BOHR])
    // A face-centred cell holds a³/4.
    expect(numbers(value('cell.volume'))[0]).toBeCloseTo(6.46 ** 3 / 4 / BOHR ** 3, 4)
  })
  test('its atoms sit at the corner and in the middle of the primitive cell', () => {
    // (½, ½, ½) of the cube is ½(a₁ + a₂ + a₃): the primitive vectors sum to (a, a, a).
    close(numbers(value('atom.2')), [2, 0.5, 0.5, 0.5])
  })
  test('its segments are those of the report, with their steps', () => {
    const { segments, points } = report.path!
    expect(numbers(value('segments'))).toEqual([segments.length])
    expect(numbers(value('points'))).toEqual([points])
    const fractions = new Map(report.points!.map(({ label, fraction }) => [label, fraction]))
    for (const [i, { from, to, points }] of segments.entries()) {
      const [data] = value(`segment.${i + 1}`).split(';')
      close(numbers(data), [...fractions.get(from)!, ...fractions.get(to)!, points - 1])
    }
  })
})

describe('a phonon job', () => {
  const { text, report } = filled('fellwater-phonons.fw.liquid', 'layered-telluride', 'coarse')
  const block = (name: string) => text.split(`  << ${name}`)[1].split('\n  >>')[0].split('\n').slice(1)

  test('as it was read', async () => {
    await expect(text).toMatchFileSnapshot('golden/layered-telluride-phonons.fw')
  })
  test('its cell is that of the report, in nm', () => {
    const rows = block('cell')
    for (const [i, vector] of report.lattice!.vectors.entries())
      close(
        numbers(rows[i]),
        vector.map(x => x / 10),
      )
    // Rhombohedral axes of a = 4.38 Å, c = 30.5 Å: each rises by c/3.
    for (const row of rows) expect(numbers(row)[2]).toBeCloseTo(3.05 / 3, 7)
  })
  test('its atoms lie on the body diagonal, in the order of the file', () => {
    // (0, 0, z) of the hexagonal axes is (z, z, z) of the rhombohedral ones: c is the sum of the three.
    const expected = [
      ['Bi', 83, 0.4],
      ['Bi', 83, -0.4],
      ['Te', 52, 0],
      ['Te', 52, 0.21],
      ['Te', 52, -0.21],
    ] as const
    for (const [i, [element, number, z]] of expected.entries()) {
      const row = block('atoms')[i]
      expect(row.trim().split(/\s+/)[0]).toBe(element)
      close(numbers(row), [number, z, z, z])
    }
  })
  test('its mesh is the one that was asked for, whole', () => {
    const mesh = (report.mesh as Record<string, MeshReport>).coarse
    const rows = block('q-mesh').map(numbers)
    expect(rows).toHaveLength(mesh.irreducible!)
    expect(rows.reduce((sum, row) => sum + row[3], 0)).toBe(6 * 6 * 6)
  })
})

describe('a list of k-points', () => {
  const { text, report } = filled('fellwater-kpoints.csv.liquid', 'hexagonal-oxide')
  const rows = text
    .trimEnd()
    .split('\n')
    .slice(1)
    .map(line => line.split(';').map(Number))

  test('as it was read', async () => {
    await expect(text).toMatchFileSnapshot('golden/hexagonal-oxide-kpoints.csv')
  })
  test('is the irreducible mesh in inverse bohr', () => {
    const mesh = report.mesh as MeshReport
    expect(rows).toHaveLength(mesh.irreducible!)
    expect(rows.map(([number]) => number)).toEqual(rows.map((_, i) => i + 1))
    expect(rows.reduce((sum, row) => sum + row[4], 0)).toBeCloseTo(1, 6)
    expect(rows.reduce((sum, row) => sum + row[5], 0)).toBe(9 * 9 * 6)
    // Steps along b₃ are 2π/c/6 with c = 5.2 Å.
    const step = ((2 * Math.PI) / 5.2 / 6) * BOHR
    for (const [, , , kz] of rows) expect(kz / step).toBeCloseTo(Math.round(kz / step), 6)
    expect(Math.max(...rows.map(([, , , kz]) => kz))).toBeCloseTo(3 * step, 8)
  })
})
