/**
 * The law of quiet for sampling and meshes: meshes that people rightly write get no error and no warning, and the default
 * sampling of any book's path gets nothing at all. And the opposite: half steps that break the symmetry are found.
 */
import { describe, expect, test } from 'vitest'
import type { Mat3, Vec3 } from '../../server/src/crystal/vector.ts'
import { bookOf, REFERENCE, type Random, type Reference, samples, seeded } from '../reference/labels.ts'
import { annotate, findingsOf } from '../unit/checks/harness.ts'

/** The check values give lengths of about one; crystals have some ångströms. */
const ANGSTROM = 4.5
const CELLS = 2

const OURS = /^(sampling|mesh|supercell)-|^check-failed$/

const loud = (text: string): string[] =>
  findingsOf(text)
    .filter(({ rule, severity }) => severity !== 'info' && OURS.test(rule))
    .map(({ rule, message }) => `${rule}: ${message}`)

const isQuiet = (text: string): void => expect(loud(text), annotate(text)).toEqual([])

const vectorsText = (vectors: Mat3, dimension: number): string =>
  vectors
    .slice(0, dimension)
    .map(
      row =>
        `    - [${row
          .slice(0, dimension)
          .map(x => Number((x * ANGSTROM).toFixed(9)))
          .join(', ')}]\n`,
    )
    .join('')

const meshText = (meshes: readonly (readonly number[])[]): string =>
  `mesh:\n${meshes.map((divisions, i) => `  m${i}: {divisions: [${divisions.join(', ')}]}\n`).join('')}`

const pathText = ({ path }: Reference) => path.map(piece => piece.join(' – ')).join(' | ')

describe.each(REFERENCE.entries)('$id', entry => {
  const random = seeded(20260303 + REFERENCE.entries.indexOf(entry))
  const { dimension } = entry
  const cells = samples(entry, CELLS, random).map(
    ({ vectors }) => `lattice:\n  vectors:\n${vectorsText(vectors, dimension)}`,
  )
  const labels = dimension === 3 ? `labels: ${bookOf(entry)}\n` : ''

  test('as many divisions along each vector', () => {
    const equal = [1, 2, 3, 4, 6, 7, 8, 12].map(n => Array.from({ length: dimension }, () => n))
    for (const cell of cells) isQuiet(`${cell}${meshText(equal)}`)
  })
  test('the default sampling of its path', () => {
    for (const cell of cells) {
      const text = `${cell}${labels}path: ${pathText(entry)}\n`
      expect(
        findingsOf(text).filter(({ rule }) => OURS.test(rule)),
        annotate(text),
      ).toEqual([])
    }
  })
  test('a spacing', () => {
    for (const cell of cells)
      isQuiet(`${cell}mesh: {coarse: {spacing: 0.4}, fine: {spacing: 0.15}, odd: {spacing: 0.23}}\n`)
  })
})

const between = (random: Random, low: number, high: number): string =>
  (low + (high - low) * random()).toFixed(3)

interface Family {
  readonly bravais: string
  readonly parameters: (random: Random) => string
  /**
   * Half steps that keep every rotation with equal divisions. Worked out from N W⁻ᵀ N⁻¹ s − s being whole for the holohedry
   * of each type on the vectors of the format's table of centrings.
   */
  readonly shifts: readonly string[]
  /** Each division may follow the length of its own vector. */
  readonly free: boolean
}

const A = (random: Random) => `a: ${between(random, 3, 9)}`
const AC = (random: Random) => `a: ${between(random, 3, 6)}, c: ${between(random, 7, 14)}`
const ABC = (random: Random) =>
  `a: ${between(random, 3, 4.5)}, b: ${between(random, 5, 7)}, c: ${between(random, 8, 12)}`
const BETA = (random: Random) => `${ABC(random)}, beta: ${between(random, 93, 115)}`
const GAMMA = (random: Random) => `${ABC(random)}, gamma: ${between(random, 93, 115)}`
const ANGLES = (random: Random) =>
  `${ABC(random)}, alpha: ${between(random, 75, 88)}, beta: ${between(random, 75, 88)}, gamma: ${between(random, 75, 88)}`
const AXES = (random: Random) => `a: ${between(random, 3, 4.5)}, b: ${between(random, 5, 7)}`

const ALL = ['100', '010', '001', '110', '101', '011', '111']
const FAMILIES: readonly Family[] = [
  { bravais: 'cP', parameters: A, shifts: ['111'], free: false },
  { bravais: 'cF', parameters: A, shifts: [], free: false },
  { bravais: 'cI', parameters: A, shifts: ['111'], free: false },
  { bravais: 'tP', parameters: AC, shifts: ['001', '110', '111'], free: true },
  { bravais: 'tI', parameters: AC, shifts: ['111'], free: false },
  { bravais: 'oP', parameters: ABC, shifts: ALL, free: true },
  { bravais: 'oC', parameters: ABC, shifts: ['001', '110', '111'], free: true },
  { bravais: 'oA', parameters: ABC, shifts: ['100', '011', '111'], free: true },
  { bravais: 'oF', parameters: ABC, shifts: ['110', '101', '011'], free: false },
  { bravais: 'oI', parameters: ABC, shifts: ['111'], free: false },
  { bravais: 'hP', parameters: AC, shifts: ['001'], free: true },
  { bravais: 'hR', parameters: AC, shifts: ['111'], free: false },
  { bravais: 'mP', parameters: BETA, shifts: ALL, free: true },
  { bravais: 'mP', parameters: GAMMA, shifts: ALL, free: true },
  { bravais: 'mC', parameters: BETA, shifts: ['001', '110', '111'], free: true },
  { bravais: 'mA', parameters: BETA, shifts: ['100', '011', '111'], free: true },
  { bravais: 'mB', parameters: GAMMA, shifts: ['010', '101', '111'], free: true },
  { bravais: 'aP', parameters: ANGLES, shifts: ALL, free: true },
  { bravais: 'tp', parameters: A, shifts: ['11'], free: true },
  { bravais: 'op', parameters: AXES, shifts: ['10', '01', '11'], free: true },
  { bravais: 'oc', parameters: AXES, shifts: ['11'], free: true },
  { bravais: 'hp', parameters: A, shifts: [], free: true },
  {
    bravais: 'mp',
    parameters: random => `${AXES(random)}, gamma: ${between(random, 93, 110)}`,
    shifts: ['10', '01', '11'],
    free: true,
  },
]

const shiftText = (shift: string): string => `[${[...shift].map(x => (x === '1' ? '1/2' : '0')).join(', ')}]`

describe.each(FAMILIES)('$bravais', ({ bravais, parameters, shifts, free }) => {
  const random = seeded(20260404 + FAMILIES.findIndex(family => family.bravais === bravais))
  const dimension = /p$|oc/.test(bravais) ? 2 : 3
  const texts = Array.from({ length: 4 }, () => `lattice: {bravais: ${bravais}, ${parameters(random)}}\n`)

  test('half steps that keep every rotation, with even and odd divisions', () => {
    for (const text of texts)
      for (const shift of shifts)
        for (const n of [4, 5]) {
          const divisions = Array.from({ length: dimension }, () => n).join(', ')
          isQuiet(`${text}mesh: {divisions: [${divisions}], shift: ${shiftText(shift)}}\n`)
        }
  })

  test('the other half steps are found', () => {
    const others = (dimension === 3 ? ALL : ['10', '01', '11']).filter(shift => !shifts.includes(shift))
    for (const shift of others) {
      const divisions = Array.from({ length: dimension }, () => 6).join(', ')
      const text = `${texts[0]}mesh: {divisions: [${divisions}], shift: ${shiftText(shift)}}\n`
      expect(
        findingsOf(text).map(({ rule }) => rule),
        annotate(text),
      ).toContain('mesh-breaks-symmetry')
    }
  })

  test('divisions in proportion to the reciprocal lengths', () => {
    if (!free) return
    for (const text of texts)
      for (const step of [0.12, 0.2, 0.31]) {
        const divisions = reciprocalLengths(text).map(length => Math.max(1, Math.round(length / step)))
        isQuiet(`${text}mesh: {divisions: [${divisions.join(', ')}]}\n`)
      }
  })
})

/** 2π over the distance of the lattice planes, from the primitive vectors of the format's table. */
function reciprocalLengths(text: string): number[] {
  const number = (name: string, otherwise: number): number =>
    Number(new RegExp(`\\b${name}: ([\\d.]+)`).exec(text)?.[1] ?? otherwise)
  const bravais = /bravais: (\w+)/.exec(text)![1]
  const flat = /p$|oc/.test(bravais)
  const hexagonal = /^h/.test(bravais)
  const a = number('a', 1)
  const [b, c] = [number('b', a), flat ? 1 : number('c', a)]
  const [alpha, beta, gamma] = [
    number('alpha', 90),
    number('beta', 90),
    number('gamma', hexagonal ? 120 : 90),
  ].map(x => (x * Math.PI) / 180)
  const cx = c * Math.cos(beta)
  const cy = (c * (Math.cos(alpha) - Math.cos(beta) * Math.cos(gamma))) / Math.sin(gamma)
  const rows: Vec3[] = [
    [a, 0, 0],
    [b * Math.cos(gamma), b * Math.sin(gamma), 0],
    [cx, cy, Math.sqrt(c * c - cx * cx - cy * cy)],
  ]
  const half = (i: number, j: number, sign: number): Vec3 =>
    rows[i].map((x, k) => (x + sign * rows[j][k]) / 2) as unknown as Vec3
  const letter = bravais === 'oc' ? 'C' : bravais[1]
  const vectors: Record<string, Vec3[]> = {
    C: [half(0, 1, -1), half(0, 1, 1), rows[2]],
    A: [rows[0], half(1, 2, -1), half(1, 2, 1)],
    B: [half(0, 2, -1), rows[1], half(0, 2, 1)],
  }
  const [u, v, w] = vectors[letter] ?? rows
  const cross = (x: Vec3, y: Vec3): Vec3 => [
    x[1] * y[2] - x[2] * y[1],
    x[2] * y[0] - x[0] * y[2],
    x[0] * y[1] - x[1] * y[0],
  ]
  const volume = Math.abs(u.reduce((sum, x, i) => sum + x * cross(v, w)[i], 0))
  const lengths = [cross(v, w), cross(w, u), cross(u, v)].map(g => (2 * Math.PI * Math.hypot(...g)) / volume)
  return flat ? lengths.slice(0, 2) : lengths
}
