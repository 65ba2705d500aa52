/** Hovers: the few numbers one looks up, as a small table. Never over 15 lines. */
import type { Hover, Position } from 'vscode-languageserver-types'
import type { DocumentAnalysis, Snapshot } from '../analysis.ts'
import { BRAVAIS } from '../crystal/bravais.ts'
import { littleCoGroup } from '../crystal/kspace.ts'
import { INVERSE_SYMBOL, SYMBOL } from '../crystal/units.ts'
import { angle, dot, norm, scale, type Vec3 } from '../crystal/vector.ts'
import { fold, placeInZone, zoneNumber } from '../crystal/zone.ts'
import { keyDocumentation } from '../format/keys.ts'
import type { PathSegment, Span } from '../format/model.ts'
import type { Crystal, PlacedPoint } from '../meaning/crystal.ts'
import { lineOfSegment, nearestBookPoint } from '../meaning/placing.ts'
import { cartesian, content, count, degrees, fractions, inverseContent, inverseLength, length, plain } from '../meaning/wording.ts'
import { rangeOf } from './diagnostics.ts'
import { locate, type Place } from './locate.ts'

export function hover(snapshot: Snapshot, position: Position): Hover | null {
  const offset = snapshot.offsetOf(position)
  const analysis = snapshot.documentAt(offset)
  const place = analysis && locate(analysis.document, offset)
  if (!place) return null
  const value = describe(analysis, place)
  return value ? { contents: { kind: 'markdown', value }, range: rangeOf(snapshot, rangeOfPlace(place)) } : null
}

const rangeOfPlace = (place: Place): Span => (place.kind === 'segment' ? place.segment.separator : place.at)

function describe({ crystal }: DocumentAnalysis, place: Place): string | undefined {
  switch (place.kind) {
    case 'key':
      return place.path.join('.') === 'lattice' ? (lattice(crystal) ?? keyDocumentation(place.path)) : keyDocumentation(place.path)
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
  [head, head.map(() => '---'), ...rows].map(cells => `| ${cells.join(' | ')} |`).join('\n')

const SUBSCRIPT = ['₁', '₂', '₃']
const NAMES = { 1: ['length'], 2: ['area'], 3: ['volume'] } as const

function lattice(crystal: Crystal): string | undefined {
  const { lattice, zone, unit, bravais, symmetry, document } = crystal
  if (!lattice || !zone) return undefined
  const { dimension, reciprocal } = lattice
  const rows = reciprocal.slice(0, dimension)
  const group = document.atoms && symmetry?.spaceGroup
  const head = [bravais && `${BRAVAIS[bravais].words} (${bravais})`, group && `${group.symbol} (${group.number})`]
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
  const pairs = ([[1, 2], [0, 2], [0, 1]] as const).filter(([, j]) => j < dimension)
  if (pairs.length > 0)
    lines.push(`Angles ${pairs.map(([i, j]) => `b${SUBSCRIPT[i]}b${SUBSCRIPT[j]} ${degrees(angle(reciprocal[i], reciprocal[j]))}`).join(', ')}  `)
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
  const { zone, lattice, unit } = crystal
  if (!point || !zone || !lattice) return undefined
  const { dimension } = lattice
  const { place, excess } = placeInZone(zone, point.cartesian)
  const rows = [
    ['fraction', fractions(point.fraction, dimension)],
    ['Cartesian', cartesian(point.cartesian, unit)],
    ['length', inverseLength(norm(point.cartesian), unit)],
    ['place', place === 'outside' ? `outside by ${inverseLength(excess, unit)}, ${ordinal(zoneNumber(zone, point.cartesian))}` : PLACES[place]],
  ]
  if (place === 'outside') {
    const folded = fold(zone, point.fraction)
    rows.push(['folded', `${fractions(folded.fraction, dimension)}, length ${inverseLength(folded.length, unit)}`])
  }
  if (crystal.kGroup) {
    const group = littleCoGroup(point.fraction, crystal.kGroup).length
    rows.push(['little co-group', `${count(group, 'rotation')}; star of ${crystal.kGroup.length / group}`])
  }
  const nearest = point.origin === 'file' ? nearestBookPoint(crystal, point.cartesian) : undefined
  if (nearest)
    rows.push(['nearest book point', nearest.distance < SAME ? `${nearest.label}` : `${nearest.label}, ${inverseLength(nearest.distance, unit)} away`])
  const origin = point.origin === 'file' ? '' : ` · ${crystal.book?.source ?? 'label book'}`
  return `**${point.label}**${origin}\n\n${table(['', ''], rows)}`
}

/** Under this distance, relative to nothing but the digits shown, two points are written as one. */
const SAME = 1e-5

const PLACES = { inside: 'inside the first zone', boundary: 'on the boundary of the first zone' }

function ordinal(zone: number | undefined): string {
  if (zone === undefined) return 'beyond the 100,000th zone'
  const tens = zone % 100
  const suffix = tens > 10 && tens < 20 ? 'th' : (['th', 'st', 'nd', 'rd'][zone % 10] ?? 'th')
  return `in the ${zone}${suffix} zone`
}

function segment(crystal: Crystal, segment: PathSegment): string | undefined {
  const from = crystal.pointOf(segment.from.label)
  const to = crystal.pointOf(segment.to.label)
  if (!from || !to) return undefined
  const { unit } = crystal
  const step: Vec3 = [0, 1, 2].map(i => to.cartesian[i] - from.cartesian[i]) as unknown as Vec3
  const size = norm(step)
  const rows = [['length', inverseLength(size, unit)]]
  if (size > 0) rows.push(['direction', cartesian(scale(step, 1 / size))])
  if (segment.steps) rows.push(['steps', `${segment.steps.value}, ${inverseLength(size / segment.steps.value, unit)} each`])
  const line = lineOfSegment(crystal, from.cartesian, to.cartesian)
  if (line) rows.push(['line', line])
  return `**${from.label} – ${to.label}**\n\n${table(['', ''], rows)}`
}
