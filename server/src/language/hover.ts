/** Hovers: the few numbers one looks up, as a small table. Never over 15 lines. */
import type { Hover, Position } from 'vscode-languageserver-types'
import type { DocumentAnalysis, Snapshot } from '../analysis.ts'
import { BRAVAIS } from '../crystal/bravais.ts'
import { INVERSE_SYMBOL, SYMBOL } from '../crystal/units.ts'
import { angle, dot, norm } from '../crystal/vector.ts'
import { keyDocumentation } from '../format/keys.ts'
import type { PathSegment, Span } from '../format/model.ts'
import { displayLabel } from '../format/path.ts'
import type { Crystal, PlacedPoint } from '../meaning/crystal.ts'
import { pointFacts, segmentFacts } from '../meaning/facts.ts'
import {
  cartesian,
  content,
  degrees,
  fractions,
  inverseContent,
  inverseLength,
  length,
  plain,
} from '../meaning/wording.ts'
import { rangeOf } from './diagnostics.ts'
import { locate, type Place } from './locate.ts'

export function hover(snapshot: Snapshot, position: Position, _options = { links: false }): Hover | null {
  const offset = snapshot.offsetOf(position)
  const analysis = snapshot.documentAt(offset)
  const place = analysis && locate(analysis.document, offset)
  if (!place) return null
  const value = describe(analysis, place)
  return value
    ? { contents: { kind: 'markdown', value }, range: rangeOf(snapshot, rangeOfPlace(place)) }
    : null
}

const rangeOfPlace = (place: Place): Span => (place.kind === 'segment' ? place.segment.separator : place.at)

function describe({ crystal }: DocumentAnalysis, place: Place): string | undefined {
  switch (place.kind) {
    case 'key':
      return place.path.join('.') === 'lattice'
        ? (lattice(crystal) ?? keyDocumentation(place.path))
        : keyDocumentation(place.path)
    case 'lattice-value':
      return lattice(crystal) ?? keyDocumentation(['lattice', place.name])
    case 'row':
      return row(crystal, place.index)
    case 'atom':
      return atom(crystal, place.index)
    case 'point':
      return point(crystal, crystal.points.get(place.entry.label))
    case 'label':
      return point(crystal, crystal.pointOf(place.label.label))
    case 'segment':
      return segment(crystal, place.segment)
  }
}

const table = (head: readonly string[], rows: readonly (readonly string[])[]): string =>
  [head, head.map((_, i) => (i > 0 && head.length > 2 ? '---:' : '---')), ...rows]
    .map(cells => `| ${cells.join(' | ')} |`)
    .join('\n')

const SUBSCRIPT = ['₁', '₂', '₃']
const NAMES = { 1: ['length'], 2: ['area'], 3: ['volume'] } as const

function lattice(crystal: Crystal): string | undefined {
  const { lattice, zone, unit, bravais, symmetry, document } = crystal
  if (!lattice || !zone) return undefined
  const { dimension, reciprocal } = lattice
  const rows = reciprocal.slice(0, dimension)
  const group = document.atoms && symmetry?.spaceGroup
  const head = [
    bravais && `${BRAVAIS[bravais].words} (${bravais})`,
    group && `${group.symbol} (${group.number})`,
  ]
  const name = NAMES[dimension][0]
  const lines = [
    `**Reciprocal vectors** (with 2π) · ${head.filter(Boolean).join(' · ')}`,
    '',
    table(
      [INVERSE_SYMBOL[unit], 'x', 'y', 'z', 'length'],
      rows.map((b, i) => [`b${SUBSCRIPT[i]}`, ...b.map(x => plain(x)), plain(norm(b))]),
    ),
    '',
  ]
  const pairs = (
    [
      [1, 2],
      [0, 2],
      [0, 1],
    ] as const
  ).filter(([, j]) => j < dimension)
  if (pairs.length > 0)
    lines.push(
      `Angles ${pairs.map(([i, j]) => `b${SUBSCRIPT[i]}b${SUBSCRIPT[j]} ${degrees(angle(reciprocal[i], reciprocal[j]))}`).join(', ')}  `,
    )
  lines.push(`Primitive cell: ${name} ${content(lattice.volume, dimension, unit)}  `)
  lines.push(`First zone: ${zone.solid}, ${name} ${inverseContent(zone.volume, dimension, unit)}`)
  return lines.join('\n')
}

function row(crystal: Crystal, index: number): string | undefined {
  const { lattice: built, unit } = crystal
  if (!built) return lattice(crystal)
  const a = built.conventional[index]
  const stated = crystal.document.lattice?.centring && built.centring !== 'P' ? 'conventional' : 'primitive'
  const b = (stated === 'conventional' ? built.conventionalReciprocal : built.reciprocal)[index]
  return [
    `**a${SUBSCRIPT[index]}** (${stated}): length ${length(norm(a), unit)}  `,
    `b${SUBSCRIPT[index]} = ${cartesian(b, unit)}, length ${inverseLength(norm(b), unit)}, a·b = ${plain(dot(a, b) / Math.PI)}π`,
    '',
    lattice(crystal) ?? '',
  ].join('\n')
}

function atom(crystal: Crystal, index: number): string | undefined {
  const order = crystal.atoms.findIndex(atom => atom.index === index)
  if (order < 0) return undefined
  const atom = crystal.atoms[order]
  const rows = [
    ['primitive fraction', fractions(atom.fraction)],
    ['Cartesian', `${cartesian(atom.cartesian)} ${SYMBOL[crystal.unit]}`],
  ]
  const { symmetry } = crystal
  const site = symmetry?.siteSymmetry[order]
  if (site) rows.push(['site symmetry', site])
  const alike = symmetry?.equivalentAtoms.filter(other => other === symmetry.equivalentAtoms[order]).length
  if (alike) rows.push(['equivalent atoms', `${alike} a primitive cell`])
  return `**${atom.element}** atom ${index + 1}\n\n${table(['', ''], rows)}`
}

function point(crystal: Crystal, point: PlacedPoint | undefined): string | undefined {
  if (!point || !crystal.zone) return undefined
  const origin = point.origin === 'file' ? '' : ` · ${crystal.book?.source ?? 'label book'}`
  return `**${displayLabel(point.label)}**${origin}\n\n${table(['', ''], pointFacts(crystal, point))}`
}

function segment(crystal: Crystal, { from, to, steps }: PathSegment): string | undefined {
  const [start, end] = [crystal.pointOf(from.label), crystal.pointOf(to.label)]
  if (!start || !end) return undefined
  const facts = segmentFacts(crystal, start, end, steps?.value)
  return `**${displayLabel(from.label)} – ${displayLabel(to.label)}**\n\n${table(['', ''], facts)}`
}
