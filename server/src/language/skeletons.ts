// biome-ignore-all lint/suspicious/noTemplateCurlyInString: the skeletons are in the snippet syntax of the LSP.
/**
 * Skeletons of lattices and of whole files, in the snippet syntax of the LSP: completion and the command for a new file
 * offer the same ones. With their defaults they check clean.
 */
import {
  BRAVAIS,
  BRAVAIS_TYPES,
  type BravaisType,
  CENTRING_TABLES,
  type LatticeSystem,
} from '../crystal/bravais.ts'
import { IN_ANGSTROM, type Unit } from '../crystal/units.ts'
import type { ParameterName } from '../format/model.ts'

type Values = Partial<Record<ParameterName, number>>

/**
 * Parameters to begin with, in Å and degrees: such that one atom at each lattice point has neighbours at an ordinary
 * distance, and away from the special ratios and angles at which a lattice has a higher symmetry than its type. The
 * lengths are those of a primitive cell, but for the rhombohedral ones.
 */
const VALUES: Record<LatticeSystem, Values> = {
  cubic: { a: 3.2 },
  tetragonal: { a: 3.2, c: 4.2 },
  orthorhombic: { a: 3.1, b: 3.6, c: 4.3 },
  hexagonal: { a: 3.2, c: 4.6 },
  rhombohedral: { a: 3.8, c: 10.5 },
  monoclinic: { a: 3.3, b: 3.7, c: 4.4, alpha: 99, beta: 99, gamma: 99 },
  triclinic: { a: 3.2, b: 3.8, c: 4.5, alpha: 98, beta: 95, gamma: 104 },
  square: { a: 3.2 },
  rectangular: { a: 3.2, b: 3.9 },
  oblique: { a: 3.2, b: 3.9, gamma: 104 },
}
const RHOMBOHEDRAL_AXES: Values = { a: 4.1, alpha: 55 }
/** Enough to begin with. */
const DIGITS = 2

/** A lattice type with one of the sets of parameters that define it. */
export interface Setting {
  /** `tI`, `hR-alpha`: the type, and the angle that tells one set from the usual one. */
  readonly id: string
  readonly type: BravaisType
  readonly free: readonly ParameterName[]
  /** What tells it from the type's other settings; empty where there is one only. */
  readonly note: string
}

const AXES: Partial<Record<ParameterName, string>> = { alpha: 'a', beta: 'b', gamma: 'c' }

function noteOf(type: BravaisType, free: readonly ParameterName[]): string {
  const { system } = BRAVAIS[type]
  if (system === 'rhombohedral') return free.includes('alpha') ? 'rhombohedral axes' : 'hexagonal axes'
  return system === 'monoclinic' ? `unique axis ${AXES[free[3]]}` : ''
}

export const SETTINGS: readonly Setting[] = BRAVAIS_TYPES.flatMap(type =>
  BRAVAIS[type].free.map((free, i) => ({
    id: i === 0 ? type : `${type}-${free.at(-1)}`,
    type,
    free,
    note: noteOf(type, free),
  })),
)

/** A value to begin with, in a file's unit. */
export function startValue({ type, free }: Setting, name: ParameterName, unit: Unit = 'angstrom'): string {
  const { system } = BRAVAIS[type]
  const values = system === 'rhombohedral' && free.includes('alpha') ? RHOMBOHEDRAL_AXES : VALUES[system]
  const value = values[name] ?? 0
  if (name !== 'a' && name !== 'b' && name !== 'c') return String(value)
  const points = system === 'rhombohedral' ? 1 : CENTRING_TABLES[BRAVAIS[type].centring].points
  return String(Number(((value * Math.cbrt(points)) / IN_ANGSTROM[unit]).toPrecision(DIGITS)))
}

/** `a: ${1:3.9}` for each parameter, stops numbered from `first`. */
export const parameterLines = (
  setting: Setting,
  names: readonly ParameterName[] = setting.free,
  { unit = 'angstrom' as Unit, first = 1 } = {},
): string[] => names.map((name, i) => `${name}: \${${first + i}:${startValue(setting, name, unit)}}`)

/** The mapping of a lattice by its type, a line each. */
export const latticeLines = (setting: Setting, options?: { unit?: Unit; first?: number }): string[] => [
  `bravais: ${setting.type}`,
  ...parameterLines(setting, setting.free, options),
]

export interface Skeleton {
  readonly id: string
  /** What it is a file of. */
  readonly name: string
  /** Crystal system. */
  readonly system: string
  /** What it asks for. */
  readonly asks: string
  readonly group: 'in space' | 'in the plane' | 'by vectors'
  /** Names that people type for it. */
  readonly words: string
  readonly text: string
}

const indented = (lines: readonly string[]): string[] => lines.map(line => `  ${line}`)
const capital = (text: string): string => text[0].toUpperCase() + text.slice(1)

/** With the lattice parameter offered, even divisions: L, where a face-centred crystal often has its band edge, is on the mesh. */
const EVEN = { spacing: 0.18 }

/** Stops from 2 on are the lattice's, those from 20 on what follows it. */
function fileOf(
  lattice: readonly string[],
  dimension: number,
  { atoms, spacing = 0.2 }: { atoms?: readonly string[]; spacing?: number } = {},
): string {
  return `${[
    'title: ${1:Name of the crystal}',
    'unit: angstrom',
    'lattice:',
    ...indented(lattice),
    ...(dimension > 1 ? ['atoms:', ...indented(atoms ?? ['- ${20:Si}: [${21:0}, ${22:0}, ${23:0}]'])] : []),
    'path: ${24:recommended}',
    'sampling:',
    '  spacing: ${25:0.02}',
    'mesh:',
    `  spacing: \${26:${spacing}}`,
  ].join('\n')}\n$0`
}

const byType = (setting: Setting): Skeleton => {
  const { type, free, note, id } = setting
  const { words, system, dimension } = BRAVAIS[type]
  return {
    id,
    name: capital(words) + (note ? `, ${note}` : ''),
    system,
    asks: free.join(', '),
    group: dimension === 2 ? 'in the plane' : 'in space',
    words: `${type} ${words} ${note}`,
    text: fileOf(latticeLines(setting, { first: 2 }), dimension, type === 'cF' ? EVEN : {}),
  }
}

/** The rows of vectors in a lattice block, as skeletons of it alone offer them too. */
export const VECTOR_BLOCKS = {
  primitive: [
    'a: ${2:5.1}',
    'vectors:',
    '  - [${3:0, a/2, a/2}]',
    '  - [${4:a/2, 0, a/2}]',
    '  - [${5:a/2, a/2, 0}]',
  ],
  centred: [
    'vectors:',
    '  - [${2:3.9, 0, 0}]',
    '  - [${3:0, 4.5, 0}]',
    '  - [${4:0, 0, 5.4}]',
    'centring: ${5|I,F,A,B,C,R,P|}',
  ],
  plane: ['a: ${2:3.2}', 'vectors:', '  - [${3:a, 0}]', '  - [${4:-a/2, sqrt(3)*a/2}]'],
  chain: ['vectors:', '  - [${2:2.5}]'],
} as const satisfies Record<string, readonly string[]>

export const SHEET_LATTICE = ['bravais: hp', 'a: ${2:2.46}'] as const

export const SKELETONS: readonly Skeleton[] = [
  ...SETTINGS.map(byType),
  {
    id: 'sheet',
    name: 'Honeycomb sheet',
    system: 'hexagonal',
    asks: 'a',
    group: 'in the plane',
    words: 'honeycomb sheet layer graphene hp',
    text: fileOf(SHEET_LATTICE, 2, {
      atoms: ['- ${20:C}: [1/3, 2/3, ${21:0}]', '- ${22:C}: [2/3, 1/3, ${23:0}]'],
    }),
  },
  {
    id: 'vectors',
    name: 'Three primitive vectors',
    system: 'any',
    asks: 'vectors',
    group: 'by vectors',
    words: 'vectors primitive',
    text: fileOf(VECTOR_BLOCKS.primitive, 3, EVEN),
  },
  {
    id: 'vectors-centring',
    name: 'Three conventional vectors and their centring',
    system: 'any',
    asks: 'vectors, centring',
    group: 'by vectors',
    words: 'vectors conventional centring',
    text: fileOf(VECTOR_BLOCKS.centred, 3),
  },
  {
    id: 'vectors-plane',
    name: 'Two vectors of a plane lattice',
    system: 'any',
    asks: 'vectors',
    group: 'by vectors',
    words: 'vectors plane two-dimensional',
    text: fileOf(VECTOR_BLOCKS.plane, 2),
  },
  {
    id: 'vectors-chain',
    name: 'One vector of a chain',
    system: 'chain',
    asks: 'vectors',
    group: 'by vectors',
    words: 'vectors chain one-dimensional',
    text: fileOf(VECTOR_BLOCKS.chain, 1),
  },
]

/** What a snippet writes where every stop keeps its default. */
export const filledIn = (snippet: string): string =>
  snippet
    .replace(/\$\{\d+\|([^,|]*)[^|]*\|\}/g, '$1')
    .replace(/\$\{\d+:([^}]*)\}/g, '$1')
    .replace(/\$\d+/g, '')
    .replace(/\\([$}\\])/g, '$1')
