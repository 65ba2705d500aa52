/**
 * The law of quiet for points and paths: every book's own path in its own cell gets nothing, over random cells of each
 * variation. And the opposite: planted mistakes are found.
 *
 * Cells, coordinates and paths are those of the check values (test/reference/labels.json), evaluated by their own
 * formulas; nothing here is taken from the books of the program.
 */
import { describe, expect, test } from 'vitest'
import {
  apply,
  combine,
  determinant,
  inverse,
  type Mat3,
  mapMatrix,
  multiply,
  transpose,
  type Vec3,
} from '../../server/src/crystal/vector.ts'
import { areEquivalent, K_TOLERANCE, kRotations } from '../../server/src/crystal/kspace.ts'
import { latticeType } from '../../server/src/crystal/symmetry.ts'
import {
  bookOf,
  REFERENCE,
  type Random,
  type Reference,
  randomBasis,
  type Sample,
  samples,
  seeded,
} from '../reference/labels.ts'
import { annotate, findingsOf } from '../unit/checks/harness.ts'

/** The check values give lengths of about one; crystals have some ångströms. */
const ANGSTROM = 4.5
const CELLS = 3
/** Cells of each variation for each planted mistake. */
const DRAWS = 2

/** Variations that the source gives for certain space groups only, here without atoms to have one. */
const NEED_A_GROUP = [
  'hinuma-2017/cP/1',
  'hinuma-2017/cF/1',
  'hinuma-2017/hP/1',
  'hinuma-2017/oA/1',
  'hinuma-2017/oA/2',
]
const ENTRIES = REFERENCE.entries.filter(({ id }) => !NEED_A_GROUP.includes(id))

interface Case {
  readonly entry: Reference
  readonly vectors: Mat3
  readonly points: ReadonlyMap<string, Vec3>
}

const scaled = ({ vectors, fractions }: Sample, entry: Reference): Case => ({
  entry,
  vectors: vectors.map((row, i) =>
    i < entry.dimension ? row.map(x => x * ANGSTROM) : row,
  ) as unknown as Mat3,
  points: fractions,
})

const rightHanded = (basis: Mat3): Mat3 => (determinant(basis) < 0 ? mapMatrix(basis, x => -x) : basis)

/** The same lattice on other vectors, with the coordinates that the points have there. */
const onBasis = ({ entry, vectors, points }: Case, basis: Mat3): Case => ({
  entry,
  vectors: multiply(basis, vectors),
  points: new Map([...points].map(([label, k]) => [label, apply(basis, k)])),
})

const number = (x: number, digits: number) => String(Number(x.toFixed(digits)))

/** As a person writes it: a fraction where it is one. */
function coordinate(x: number, digits: number): string {
  for (const q of [1, 2, 3, 4, 6, 8]) {
    const p = Math.round(x * q)
    if (Math.abs(x - p / q) < 1e-9) return q === 1 ? `${p + 0}` : `${p}/${q}`
  }
  return number(x, digits)
}

const vectorText = (row: readonly number[], dimension: number, write: (x: number) => string) =>
  `[${row.slice(0, dimension).map(write).join(', ')}]`

const pathText = ({ path }: Reference) => path.map(piece => piece.join(' – ')).join(' | ')

interface Form {
  /** Digits of coordinates that are no fractions; no points are written without. */
  readonly digits?: number
  readonly points?: ReadonlyMap<string, Vec3>
  readonly more?: string
}

function fileOf(
  { entry, vectors, points }: Case,
  { digits, points: written = points, more = '' }: Form = {},
): string {
  const { dimension } = entry
  const rows = vectors
    .slice(0, dimension)
    .map(row => `    - ${vectorText(row, dimension, x => number(x, 9))}\n`)
  const labels = dimension === 3 ? `labels: ${bookOf(entry)}\n` : ''
  const lines =
    digits === undefined
      ? []
      : [...written].map(
          ([label, k]) => `  "${label}": ${vectorText(k, dimension, x => coordinate(x, digits))}\n`,
        )
  const path = entry.path.length > 0 ? `path: ${pathText(entry)}\n` : ''
  return `lattice:\n  vectors:\n${rows.join('')}${labels}${lines.length > 0 ? `points:\n${lines.join('')}` : ''}${path}${more}`
}

const ours = (rule: string): boolean => /^(point|path|supercell)-|^check-failed$/.test(rule)

/** Everything above information, and any information about points and paths. */
const said = (text: string): string[] =>
  findingsOf(text)
    .filter(({ rule, severity }) => severity !== 'info' || ours(rule))
    .map(({ rule, message }) => `${rule}: ${message}`)

const isQuiet = (text: string): void => expect(said(text), annotate(text)).toEqual([])

/** Book points that their source puts outside the zone, or leaves there for some axial ratios: information is due. */
const OUTSIDE: Record<string, readonly string[]> = {
  'setyawan-curtarolo-2010/mC/1': ['F3'],
  'bradley-cracknell-1972/mB/1': ['Z', 'M'],
}
const inZone = ({ entry, points }: Case): ReadonlyMap<string, Vec3> =>
  new Map([...points].filter(([label]) => !OUTSIDE[entry.id]?.includes(label)))

/** Here the shape of the cell alone says which axis is which; elsewhere a book leaves several cells to choose from. */
const isFixed = ({ id, bravais }: Reference): boolean =>
  /^[cth]/.test(bravais) || (id.startsWith('setyawan') && bravais.startsWith('o'))

/** Which of these variations a lattice has is a matter of which axis is called a: bare vectors do not say. */
const AXES_DECIDE = [
  'hinuma-2017/oF/2',
  'hinuma-2017/oI/2',
  'hinuma-2017/oI/3',
  'hinuma-2017/oC/2',
  'plane/oc/2',
]

describe.each(ENTRIES)('$id', entry => {
  const random = seeded(20260101 + ENTRIES.indexOf(entry))
  const cells = samples(entry, CELLS, random).map(sample => scaled(sample, entry))

  test('its path in its own cell', () => {
    for (const item of cells) isQuiet(fileOf(item))
  })
  test.each([4, 6])('its points written to %d digits', digits => {
    for (const item of cells) isQuiet(fileOf(item, { digits, points: inZone(item) }))
  })
  test.each([4, 6])('its points in Cartesian numbers of %d digits', digits => {
    for (const item of cells) {
      const points = inSpace({ ...item, points: inZone(item) })
      isQuiet(fileOf(item, { digits, points, more: 'frames: {points: cartesian}\n' }))
    }
  })
  test('in other bases of the lattice', () => {
    if (AXES_DECIDE.includes(entry.id)) return
    for (const item of cells) {
      const other = onBasis(item, rightHanded(randomBasis(entry.dimension, random)))
      isQuiet(fileOf(other, { digits: isFixed(entry) ? 6 : undefined }))
    }
  })
})

/** Twelve atoms at (0, y, z), the signs and cyclic orders of it: the cubic groups Pm-3 and Fm-3, class m-3. */
const twelve = (y: number, z: number): string =>
  [
    [0, y, z],
    [z, 0, y],
    [y, z, 0],
  ]
    .flatMap(place =>
      [1, -1].flatMap(s => [1, -1].map(t => place.map((x, i) => (place[i] === y ? s * x : t * x)))),
    )
    .map(place => `  - C: [${place.map(x => x + 0).join(', ')}]\n`)
    .join('')

/** Variations that hold for certain classes of crystals: the atoms make the class. */
describe('variations for certain groups', () => {
  test.each([
    ['hinuma-2017/cP/1', `lattice: {bravais: cP, a: 6.5}\natoms:\n${twelve(0.12, 0.3)}`],
    ['hinuma-2017/cF/1', `lattice: {bravais: cF, a: 13}\natoms:\n${twelve(0.06, 0.15)}`],
  ])('%s', (id, text) => {
    const entry = REFERENCE.entries.find(other => other.id === id)!
    isQuiet(`${text}labels: hinuma-2017\npath: ${pathText(entry)}\n`)
  })
})

/** A slip planted into all points of a file: the points as they are written, and what else the file says. */
interface Planted {
  readonly text: string
  /** Does any label stand at a place that is not its own, up to the symmetry of the lattice? */
  readonly isMistake: boolean
}
type Slip = (item: Case, random: Random) => Planted | undefined

const differs = ({ entry, vectors, points }: Case, written: ReadonlyMap<string, Vec3>): boolean => {
  const group = kRotations(latticeType(vectors, entry.dimension, 1e-3)!.holohedry, true, entry.dimension)
  return [...written].some(([label, k]) => !areEquivalent(points.get(label)!, k, group, 50 * K_TOLERANCE))
}

const planted = (item: Case, points: ReadonlyMap<string, Vec3>, form: Form = {}): Planted => ({
  text: fileOf(item, { digits: 6, ...form, points }),
  isMistake: differs(item, points),
})

const changed = (points: ReadonlyMap<string, Vec3>, change: (k: Vec3) => Vec3): ReadonlyMap<string, Vec3> =>
  new Map([...points].map(([label, k]) => [label, change(k)]))

const pick = <T>(items: readonly T[], random: Random): T => items[Math.floor(random() * items.length)]

const anAxis = (entry: Reference, random: Random) => pick([0, 1, 2].slice(0, entry.dimension), random)

/** Numbers of the points in Å⁻¹, in the orientation of the vectors. */
const inSpace = ({ vectors, points }: Case): ReadonlyMap<string, Vec3> =>
  changed(points, k =>
    combine(
      k,
      mapMatrix(transpose(inverse(vectors)), x => 2 * Math.PI * x),
    ),
  )

const SLIPS: Record<string, Slip> = {
  'two labels swapped': (item, random) => {
    const labels = [...item.points.keys()]
    const [a, b] = [pick(labels, random), pick(labels, random)]
    const points = new Map(item.points)
    points.set(a, item.points.get(b)!)
    points.set(b, item.points.get(a)!)
    return planted(item, points)
  },
  'one axis negated': (item, random) => {
    const axis = anAxis(item.entry, random)
    return planted(
      item,
      changed(item.points, k => k.map((x, i) => (i === axis ? 0 - x : x)) as unknown as Vec3),
    )
  },
  'one axis doubled': (item, random) => {
    const axis = anAxis(item.entry, random)
    return planted(
      item,
      changed(item.points, k => k.map((x, i) => (i === axis ? 2 * x : x)) as unknown as Vec3),
    )
  },
  'two axes exchanged': (item, random) => {
    const [i, j] =
      item.entry.dimension === 2
        ? [0, 1]
        : pick(
            [
              [0, 1],
              [0, 2],
              [1, 2],
            ],
            random,
          )
    const exchange = (k: Vec3) => k.map((x, n) => (n === i ? k[j] : n === j ? k[i] : x)) as unknown as Vec3
    return planted(item, changed(item.points, exchange))
  },
  'Cartesian numbers as fractions': item => ({
    text: fileOf(item, { digits: 5, points: inSpace(item) }),
    isMistake: true,
  }),
  'fractions as Cartesian numbers': item => ({
    text: fileOf(item, { digits: 6, more: 'frames: {points: cartesian}\n' }),
    isMistake: true,
  }),
  'Cartesian numbers without 2π': item => ({
    text: fileOf(item, {
      digits: 6,
      points: changed(inSpace(item), k => k.map(x => x / (2 * Math.PI)) as unknown as Vec3),
      more: 'frames: {points: cartesian}\n',
    }),
    isMistake: true,
  }),
  'points of another cell': (item, random) => {
    const { fractions } = samples(item.entry, 1, random)[0]
    return planted(item, new Map([...item.points.keys()].map(label => [label, fractions.get(label)!])))
  },
  'a third or an eighth cut short': item => {
    const cut = (x: number) =>
      Number.isInteger(x * 24) && !Number.isInteger(x * 4) ? Math.trunc(x * 1000) / 1000 : x
    return planted(
      item,
      changed(item.points, k => k.map(cut) as unknown as Vec3),
      { digits: 3 },
    )
  },
}

/** Conventional cells of the book of Setyawan and Curtarolo, whose primitive vectors are those of the format. */
const CENTRING: Record<string, string> = { cF: 'F', cI: 'I', tI: 'I', oF: 'F', oI: 'I', oC: 'C' }

/** The same crystal by the vectors of its conventional cell, which lie along x, y and z. */
function conventional({
  entry,
  vectors,
  points,
}: Case): { text: string; points: ReadonlyMap<string, Vec3> } | undefined {
  const centring = entry.id.startsWith('setyawan') ? CENTRING[entry.bravais] : undefined
  if (!centring) return undefined
  // a, b, c are twice the largest components, but for c of the C-centred cell, which is the third vector.
  const edges = [0, 1, 2].map(
    i => Math.max(...vectors.map(row => Math.abs(row[i]))) * (centring === 'C' && i === 2 ? 1 : 2),
  )
  const rows = edges.map(
    (edge, i) => `    - [${[0, 1, 2].map(j => (i === j ? number(edge, 9) : 0)).join(', ')}]\n`,
  )
  const numbers = changed(
    inSpace({ entry, vectors, points }),
    k => k.map((x, i) => (x * edges[i]) / (2 * Math.PI)) as unknown as Vec3,
  )
  return { text: `lattice:\n  centring: ${centring}\n  vectors:\n${rows.join('')}`, points: numbers }
}

const pointsText = (points: ReadonlyMap<string, Vec3>) =>
  `points:\n${[...points].map(([label, k]) => `  "${label}": ${vectorText(k, 3, x => coordinate(x, 6))}\n`).join('')}`

const CENTRED_SLIPS: Record<string, Slip> = {
  'conventional fractions as primitive ones': item => {
    const cell = conventional(item)
    return cell && { text: `${cell.text}${pointsText(cell.points)}`, isMistake: true }
  },
  'primitive fractions as conventional ones': item => {
    const cell = conventional(item)
    return (
      cell && {
        text: `${cell.text}frames: {points: conventional}\n${pointsText(item.points)}`,
        isMistake: true,
      }
    )
  },
  'the centring left out': item => {
    const cell = conventional(item)
    return (
      cell && {
        text: `${cell.text.replace(/ {2}centring: .\n/, '')}${pointsText(item.points)}`,
        isMistake: true,
      }
    )
  },
}

/** The rule that names the true cause, and how many findings a file may have for the one mistake on the average. */
const EXPECTED: Record<string, readonly [rule: string, findings: number]> = {
  'two labels swapped': ['point-label-mismatch', 2],
  'one axis negated': ['point-label-mismatch', 1.1],
  'one axis doubled': ['point-label-mismatch', 1.1],
  'two axes exchanged': ['point-label-mismatch', 1.3],
  'Cartesian numbers as fractions': ['point-frame-suspect', 1],
  'fractions as Cartesian numbers': ['point-frame-suspect', 1],
  'conventional fractions as primitive ones': ['point-frame-suspect', 1],
  'primitive fractions as conventional ones': ['point-frame-suspect', 1],
  'the centring left out': ['point-frame-suspect', 1],
  // Here each point needs numbers of its own.
  'Cartesian numbers without 2π': ['point-two-pi', 20],
  'points of another cell': ['point-stale-parameter', 20],
  'a third or an eighth cut short': ['point-rounded', 20],
}

describe('planted mistakes', () => {
  test.each(Object.entries({ ...SLIPS, ...CENTRED_SLIPS }))('%s', (name, slip) => {
    const random = seeded(20260202)
    const [rule, most] = EXPECTED[name]
    const missed: string[] = []
    let files = 0
    let findings = 0
    for (const entry of ENTRIES) {
      for (const sample of samples(entry, DRAWS, random)) {
        const item = scaled(sample, entry)
        const mistake = slip({ ...item, points: inZone(item) }, random)
        if (!mistake?.isMistake) continue
        files++
        const found = findingsOf(mistake.text).filter(
          ({ rule, severity }) => ours(rule) && severity !== 'info',
        )
        findings += found.length
        if (!found.some(finding => finding.rule === rule))
          missed.push(`${entry.id}\n${annotate(mistake.text)}`)
      }
    }
    expect(files).toBeGreaterThan(8)
    expect(missed, missed.join('\n')).toEqual([])
    expect(findings / files).toBeLessThanOrEqual(most)
  })
})
