/** The lattice report in words, before it is laid out: as plain text in report-text.ts, as Markdown in report-markdown.ts. */
import { BRAVAIS, type BravaisType } from '../crystal/bravais.ts'
import { INVERSE_SYMBOL, SYMBOL } from '../crystal/units.ts'
import { displayLabel, formatPath } from '../format/path.ts'
import {
  content,
  count,
  degrees,
  fraction,
  fractions,
  inverseContent,
  inverseLength,
  length,
  plain,
} from '../meaning/wording.ts'
import type { FindingJson } from './findings-json.ts'
import { tallyInWords } from './findings-text.ts'
import type { Alignment } from './layout.ts'
import type { MeshReport, PointReport, Report } from './report.ts'

export interface Table {
  readonly head: readonly string[]
  readonly rows: readonly (readonly string[])[]
  readonly alignments: readonly Alignment[]
}

export interface Section {
  readonly title: string
  /** Name and value. */
  readonly facts: readonly (readonly [string, string])[]
  readonly tables: readonly Table[]
}

export interface ReportInWords {
  readonly title: string
  /** Where it comes from. */
  readonly origin: string
  readonly sections: readonly Section[]
  readonly care: string
}

export const CARE =
  "Conventions differ between programs: confirm the cell and the frame in your program's own output before launching."

/** More digits than a message has: numbers of a report are compared with those of other programs. */
const DIGITS = 6

/**
 * @param found  each finding, for outputs that list them; else they are counted only.
 * @param limits what could not be looked at, and why.
 */
export function reportInWords(
  report: Report,
  found: readonly FindingJson[] = [],
  limits: readonly string[] = [],
): ReportInWords {
  const { file, document, title } = report
  const origin = `${file}, document ${document}`
  return {
    title: title ?? 'Lattice report',
    origin,
    sections: [
      ...[lattice, reciprocal, zone, symmetry, points, path, meshes].flatMap(part => part(report) ?? []),
      findings(report, found, limits),
    ],
    care: CARE,
  }
}

/** What stands below the figure of the zone. */
export function figureCaption({ zone, path, lattice }: Report): string {
  const of = lattice?.bravais ? ` of the ${BRAVAIS[lattice.bravais as BravaisType].words} lattice` : ''
  const along = path ? `, with the path ${formatPath(path.pieces, displayLabel)}` : ''
  return `First Brillouin zone${of}: ${zone?.solid ?? ''}${along}`
}

const SUBSCRIPTS = ['₁', '₂', '₃']
const NAME_OF_VOLUME = ['', 'length', 'area', 'volume']

/** Below this a number is the noise of a double and stands as 0, with as many digits as the others of its column. */
const ROUNDING = 1e-12

const decimal = (x: number): string => {
  const size = Math.abs(x)
  if (size >= 1e6 || (size >= ROUNDING && size < 10 ** -DIGITS / 2)) return plain(x, DIGITS)
  const text = x.toFixed(DIGITS)
  return (Number(text) === 0 ? text.replace('-', '') : text).replace('-', '−')
}

const vectorTable = (name: string, unit: string, rows: readonly (readonly number[])[]): Table => ({
  head: [unit, 'x', 'y', 'z'],
  rows: rows.map((row, i) => [`${name}${SUBSCRIPTS[i]}`, ...row.map(decimal)]),
  alignments: ['left', 'right', 'right', 'right'],
})

function lattice({ lattice, unit, tolerance, changes }: Report): Section {
  const facts: [string, string][] = []
  const tables: Table[] = []
  if (lattice) {
    const { bravais, dimension, parameters, vectors, volume } = lattice
    if (bravais) facts.push(['Bravais type', `${bravais}, ${BRAVAIS[bravais as BravaisType].words}`])
    facts.push(['conventional cell', cell(parameters, unit)])
    if (changes && !isIdentity(changes.conventionalFromPrimitive))
      facts.push(['conventional vectors', combinations(changes.conventionalFromPrimitive)])
    facts.push([
      `${NAME_OF_VOLUME[dimension]} of the primitive cell`,
      content(volume, dimension, unit, DIGITS),
    ])
    tables.push(vectorTable('a', SYMBOL[unit], vectors))
  }
  facts.push([
    'tolerance',
    `${length(tolerance, unit, DIGITS)}: what is nearer to symmetric than this counts as symmetric`,
  ])
  return { title: 'Lattice', facts, tables }
}

const GREEK: Record<string, string> = { alpha: 'α', beta: 'β', gamma: 'γ' }

const cell = (parameters: Readonly<Record<string, number>>, unit: Report['unit']): string =>
  Object.entries(parameters)
    .map(([name, value]) =>
      name in GREEK ? `${GREEK[name]} = ${degrees(value)}` : `${name} = ${length(value, unit, DIGITS)}`,
    )
    .join(', ')

/** Rows of whole numbers as `a = a₂ + a₃ − a₁, …`. */
const combinations = (rows: readonly (readonly number[])[], left = ['a', 'b', 'c'], right = 'a'): string =>
  rows.map((row, i) => `${left[i]} = ${combination(row, right)}`).join(', ')

const isIdentity = (rows: readonly (readonly number[])[]): boolean =>
  rows.every((row, i) => row.every((n, j) => n === (i === j ? 1 : 0)))

const bookVectors = (rows: readonly (readonly number[])[]): string =>
  isIdentity(rows)
    ? 'those of the file'
    : combinations(
        rows,
        SUBSCRIPTS.map(i => `a${i}′`),
      )

function combination(row: readonly number[], name: string): string {
  const terms = row.flatMap((n, i) => {
    if (n === 0) return []
    const size = Math.abs(n) === 1 ? '' : plain(Math.abs(n))
    return [{ sign: n < 0 ? '−' : '+', term: `${size}${name}${SUBSCRIPTS[i]}` }]
  })
  return (
    terms
      .map(({ sign, term }, i) => (i === 0 ? (sign === '−' ? `−${term}` : term) : ` ${sign} ${term}`))
      .join('') || '0'
  )
}

function reciprocal({ reciprocal, unit }: Report): Section | undefined {
  if (!reciprocal) return undefined
  const { vectors, lengths, angles } = reciprocal
  const names = angles.length === 3 ? ['b₂b₃', 'b₁b₃', 'b₁b₂'] : ['b₁b₂']
  const facts: [string, string][] = [['convention', 'bᵢ·aⱼ = 2π δᵢⱼ, Cartesian k with the 2π']]
  if (angles.length > 0) facts.push(['angles', angles.map((x, i) => `${names[i]} ${degrees(x)}`).join(', ')])
  const table = vectorTable('b', INVERSE_SYMBOL[unit], vectors)
  return {
    title: 'Reciprocal lattice',
    facts,
    tables: [
      {
        head: [...table.head, 'length'],
        rows: table.rows.map((row, i) => [...row, decimal(lengths[i])]),
        alignments: [...table.alignments, 'right'],
      },
    ],
  }
}

function zone({ zone, lattice, unit }: Report): Section | undefined {
  if (!zone || !lattice) return undefined
  const { solid, faces, edges, vertices, volume, inradius, circumradius } = zone
  const counts = [
    ...(faces === undefined ? [] : [count(faces, 'face')]),
    count(edges, 'edge'),
    count(vertices, 'vertex', 'vertices'),
  ]
  return {
    title: 'First Brillouin zone',
    facts: [
      [lattice.dimension === 3 ? 'solid' : 'shape', `${solid}: ${counts.join(', ')}`],
      [NAME_OF_VOLUME[lattice.dimension], inverseContent(volume, lattice.dimension, unit, DIGITS)],
      [
        'nearest and farthest point of its boundary',
        `${inverseLength(inradius, unit, DIGITS)} and ${inverseLength(circumradius, unit, DIGITS)} from Γ`,
      ],
    ],
    tables: [],
  }
}

function symmetry({ symmetry, lattice }: Report): Section | undefined {
  if (!symmetry) return undefined
  const { spaceGroup, pointGroup, rotations, timeReversal, kRotations } = symmetry
  return {
    title: 'Symmetry',
    facts: [
      ...(spaceGroup ? [['space group', `${spaceGroup.symbol} (${spaceGroup.number})`] as const] : []),
      // The rotations about a chain that are found are those of the cell it is computed in.
      ...(lattice?.dimension === 1
        ? []
        : [['point group', [pointGroup, count(rotations, 'rotation')].filter(Boolean).join(', ')] as const]),
      [
        'on k',
        `${count(kRotations, 'rotation')}; time reversal ${timeReversal ? 'holds: k and −k are equivalent' : 'does not hold'}`,
      ],
    ],
    tables: [],
  }
}

function points({ points, unit, book, changes, lattice }: Report): Section | undefined {
  if (!points?.length) return undefined
  const grouped = points.some(({ littleCoGroup }) => littleCoGroup !== undefined)
  const row = (point: PointReport): string[] => [
    displayLabel(point.label),
    point.origin,
    fractions(point.fraction, lattice?.dimension),
    ...point.cartesian.map(decimal),
    decimal(point.length),
    place(point, lattice?.dimension),
    ...(grouped ? [String(point.littleCoGroup ?? ''), String(point.star ?? '')] : []),
  ]
  return {
    title: 'Points',
    facts: [
      ...(book ? [['label book', book.source] as const] : []),
      ...(book?.doubts ?? []).map(doubt => ['doubt', doubt] as const),
      ...(changes?.bookFromPrimitive
        ? [["the book's primitive vectors", bookVectors(changes.bookFromPrimitive)] as const]
        : []),
    ],
    tables: [
      {
        head: [
          'label',
          'from',
          'fraction',
          `kx (${INVERSE_SYMBOL[unit]})`,
          'ky',
          'kz',
          '|k|',
          'place',
          ...(grouped ? ['little co-group', 'star'] : []),
        ],
        rows: points.map(row),
        alignments: [
          'left',
          'left',
          'left',
          'right',
          'right',
          'right',
          'right',
          'left',
          ...(grouped ? (['right', 'right'] as const) : []),
        ],
      },
    ],
  }
}

function place({ place, zone, folded }: PointReport, dimension: number | undefined): string {
  if (place !== 'outside') return place
  const where = zone === null ? 'beyond zone 100,000' : `zone ${zone}`
  return `outside (${where}), folded ${fractions(folded, dimension)}`
}

function path({ path, unit }: Report): Section | undefined {
  if (!path) return undefined
  const facts: [string, string][] = [['path', formatPath(path.pieces, displayLabel)]]
  if (path.length !== undefined) facts.push(['length', inverseLength(path.length, unit, DIGITS)])
  if (path.points !== undefined) facts.push(['points', `${path.points}, joints listed once`])
  const lines = path.segments.some(({ line }) => line)
  return {
    title: 'Path',
    facts,
    tables: [
      {
        head: [
          'segment',
          `length (${INVERSE_SYMBOL[unit]})`,
          'points',
          `step (${INVERSE_SYMBOL[unit]})`,
          ...(lines ? ['line'] : []),
        ],
        rows: path.segments.map(({ from, to, length, points, line }) => [
          formatPath([[from, to]], displayLabel),
          decimal(length),
          String(points),
          decimal(length / (points - 1)),
          ...(lines ? [line ?? ''] : []),
        ]),
        alignments: ['left', 'right', 'right', 'right', ...(lines ? (['left'] as const) : [])],
      },
    ],
  }
}

function meshes({ mesh, unit, symmetry }: Report): Section[] {
  if (!mesh) return []
  if (isMesh(mesh)) return [meshSection('Mesh', mesh, unit, symmetry)]
  return Object.entries(mesh).map(([name, one]) => meshSection(`Mesh: ${name}`, one, unit, symmetry))
}

export const isMesh = (mesh: NonNullable<Report['mesh']>): mesh is MeshReport => Array.isArray(mesh.divisions)

function meshSection(
  title: string,
  mesh: MeshReport,
  unit: Report['unit'],
  symmetry: Report['symmetry'],
): Section {
  const { divisions, shift, points, irreducible, spacing, symmetric } = mesh
  const facts: [string, string][] = [
    ['divisions', divisions.join(' × ')],
    [
      'shift',
      shift.every(x => x === 0)
        ? 'none: Γ is on the mesh'
        : `${shift.map(fraction).join(', ')} in mesh steps`,
    ],
    ['points', `${points}${irreducible === undefined ? '' : `, ${irreducible} irreducible`}`],
    ['steps', `${spacing.map(x => plain(x, DIGITS)).join(', ')} ${INVERSE_SYMBOL[unit]}`],
  ]
  if (symmetric !== undefined && symmetry)
    facts.push([
      'symmetry',
      symmetric
        ? `kept: all ${symmetry.kRotations} rotations map the mesh onto itself`
        : 'broken: not all rotations map the mesh onto itself',
    ])
  return { title, facts, tables: [] }
}

const findings = (
  { findings }: Report,
  found: readonly FindingJson[],
  limits: readonly string[],
): Section => ({
  title: 'Findings',
  facts: [['findings', tallyInWords(findings) || 'none'], ...limits.map(limit => ['limit', limit] as const)],
  tables:
    found.length === 0
      ? []
      : [
          {
            head: ['line', 'severity', 'finding', 'rule'],
            rows: found.map(({ line, severity, message, rule }) => [String(line), severity, message, rule]),
            alignments: ['right', 'left', 'left', 'left'],
          },
        ],
})
