/** Hovers: the few numbers one looks up, as a small table. Never over 15 lines. */
import type { Hover, Position } from 'vscode-languageserver-types'
import { covers, type DocumentAnalysis, type Snapshot } from '../analysis.ts'
import { BRAVAIS } from '../crystal/bravais.ts'
import { listedPoints, segmentSteps } from '../crystal/path.ts'
import { namedSpaceGroup } from '../crystal/space-group.ts'
import { nearestImageOf, supercellOf } from '../crystal/supercell.ts'
import { INVERSE_SYMBOL, SYMBOL } from '../crystal/units.ts'
import { angle, dot, norm } from '../crystal/vector.ts'
import { findKey, keyDocumentation, keyName } from '../format/keys.ts'
import type { MeshBlock, NumberValue, PathSegment, Span } from '../format/model.ts'
import { displayLabel } from '../format/path.ts'
import type { Crystal, PlacedPoint } from '../meaning/crystal.ts'
import { pointFacts, segmentFacts } from '../meaning/facts.ts'
import { recommendedPath } from '../meaning/recommended.ts'
import { meshOf, stepRule, walkedPath } from '../meaning/sampling.ts'
import {
  cartesian,
  content,
  count,
  degrees,
  fractions,
  inverseContent,
  inverseLength,
  length,
  plain,
} from '../meaning/wording.ts'
import { aboutElement, aboutGroup, aboutRule, aboutWord, table } from './about.ts'
import { placeAt } from './completion/place.ts'
import { rangeOf } from './diagnostics.ts'
import { locate, numberAt, type Place } from './locate.ts'
import { meshCounts, product, wholeNumber } from './mesh-words.ts'

/** What the editor can do with a hover. */
export interface HoverOptions {
  /** It has the command that opens the lattice report. */
  readonly links: boolean
}

const REPORT = '\n\n[Lattice report](command:braggline.openReport)'

export function hover(
  snapshot: Snapshot,
  position: Position,
  { links }: HoverOptions = { links: false },
): Hover | null {
  const offset = snapshot.offsetOf(position)
  const analysis = snapshot.documentAt(offset)
  if (!analysis) return null
  const found =
    allowed(snapshot, offset) ?? keyUnder(snapshot.text, offset) ?? locate(analysis.document, offset)
  const number = numberAt(analysis.document, offset)
  const expression = number && wordsOfNumber(number)
  const facts = found && describe(snapshot, analysis, found)
  const value = [expression, facts].filter(Boolean).join('  \n')
  if (value === '') return null
  const at = found ? rangeOfPlace(found) : number!.at
  const hasReport = links && found !== undefined && HAS_MORE.has(found.kind) && facts !== undefined
  return {
    contents: { kind: 'markdown', value: hasReport ? value + REPORT : value },
    range: rangeOf(snapshot, at),
  }
}

/** Places of which the report says more. */
const HAS_MORE = new Set<Place['kind']>([
  'lattice-value',
  'row',
  'atom',
  'point',
  'label',
  'segment',
  'space-group',
  'mesh',
  'recommended',
  'sampling',
  'supercell',
])

const rangeOfPlace = (place: Place): Span => (place.kind === 'segment' ? place.segment.separator : place.at)

/** A rule that a comment allows. */
function allowed({ decoded }: Snapshot, offset: number): Place | undefined {
  const rule = decoded.allowances.flatMap(({ rules }) => rules).find(({ at }) => covers(at, offset))
  return rule && { kind: 'rule', at: rule.at, id: rule.value }
}

/** A key of the format, as far as the text round it tells. */
function keyUnder(text: string, offset: number): Place | undefined {
  const before = /[a-z-]*$/.exec(text.slice(Math.max(0, offset - LONGEST_KEY), offset))![0].length
  const start = offset - before
  const word = /^[a-z][a-z-]*(?=["']?[ \t]*:(?:\s|$))/.exec(text.slice(start, start + LONGEST_KEY))?.[0]
  if (word === undefined) return undefined
  const place = placeAt(text, start)
  const path = [...place.names, word]
  const row = place.kind === 'key' ? findKey(path) : undefined
  return row && keyName(row) === word ? { kind: 'key', at: [start, start + word.length], path } : undefined
}
const LONGEST_KEY = 40

const DIGITS_OF_EXPRESSION = 6

/** What an expression comes to; nothing of a number that stands there in full. */
function wordsOfNumber({ text, value, decimals }: NumberValue): string | undefined {
  if (decimals !== undefined || /^[\d.]+\(\d+\)$/.test(text)) return undefined
  return `\`${text}\` = ${plain(value, DIGITS_OF_EXPRESSION)}`
}

function describe(snapshot: Snapshot, { crystal }: DocumentAnalysis, place: Place): string | undefined {
  switch (place.kind) {
    case 'key':
      return place.path.join('.') === 'lattice'
        ? (lattice(crystal) ?? keyDocumentation(place.path))
        : keyDocumentation(place.path)
    case 'lattice-value':
      return lattice(crystal) ?? keyDocumentation(['lattice', place.name])
    case 'row':
      return row(crystal, place.index)
    case 'element':
      return aboutElement(place.symbol)
    case 'rule':
      return aboutRule(place.id)
    case 'word':
      return word(crystal, place.path, snapshot.text.slice(...place.at))
    case 'space-group':
      return spaceGroup(crystal)
    case 'mesh':
      return mesh(crystal, place.block)
    case 'recommended':
      return recommended(crystal)
    case 'sampling':
      return sampling(crystal)
    case 'supercell':
      return supercell(crystal)
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

function word(crystal: Crystal, path: readonly string[], written: string): string | undefined {
  const plainWord = written.replace(/^(['"])(.*)\1$/, '$2')
  const row = findKey(path)
  if (!row) return undefined
  const stated = path.join('.') === 'lattice.bravais' ? crystal.document.lattice?.bravais?.value : undefined
  return aboutWord(row.path, stated ?? plainWord)
}

function spaceGroup(crystal: Crystal): string | undefined {
  const { document, symmetry, symmetryOutcome } = crystal
  const claim = document.spaceGroup!
  const about = aboutGroup(claim.value)
  if (!about) return undefined
  const found = document.atoms && symmetry?.spaceGroup
  const number = namedSpaceGroup(claim.value)?.number
  const verdict = !document.atoms
    ? 'Without atoms it is taken as claimed.'
    : found
      ? found.number === number
        ? 'Found in lattice and atoms too.'
        : `Lattice and atoms have ${found.symbol} (${found.number}).`
      : symmetryOutcome.state === 'pending'
        ? 'The symmetry of lattice and atoms is still being looked for.'
        : ''
  return verdict ? `${about}\n\n${verdict}` : about
}

function mesh(crystal: Crystal, block: MeshBlock): string | undefined {
  const made = meshOf(crystal, block)
  const { lattice, unit } = crystal
  if (!made || !lattice) return undefined
  const { divisions, full, irreducible } = meshCounts(crystal, made)
  const steps = divisions.map((n, i) => plain(norm(lattice.reciprocal[i]) / n))
  const rows = [
    ['divisions', product(divisions)],
    ['points', wholeNumber(full)],
    ...(irreducible === undefined ? [] : [['irreducible', wholeNumber(irreducible)]]),
    ['spacing along b', `${steps.join(', ')} ${INVERSE_SYMBOL[unit]}`],
    ...(made.shift.some(x => x !== 0)
      ? [['shift', `${fractions(made.shift, lattice.dimension)} steps`]]
      : [['shift', 'none: Γ is a point of the mesh']]),
  ]
  return `**Mesh**${block.name ? ` ${block.name}` : ''}\n\n${table(['', ''], rows)}`
}

function recommended(crystal: Crystal): string | undefined {
  const path = recommendedPath(crystal)
  return path && `**${path.text}**\n\nThe path of ${crystal.book!.source}.`
}

function sampling(crystal: Crystal): string | undefined {
  const pieces = walkedPath(crystal)
  const segments = pieces.flatMap(piece => piece.segments)
  if (segments.length === 0 || segments.some(({ length }) => length === undefined)) return undefined
  const lengths = segments.map(({ length, steps }) => ({ length: length!, steps }))
  const steps = segmentSteps(lengths, stepRule(crystal))
  const total = lengths.reduce((sum, { length }) => sum + length, 0)
  const widest = Math.max(...lengths.map(({ length }, i) => length / steps[i]))
  let next = 0
  const points = listedPoints(pieces.map(piece => steps.slice(next, (next += piece.segments.length))))
  return `**Sampling**\n\n${table(
    ['', ''],
    [
      ['path', `${count(segments.length, 'segment')}, ${inverseLength(total, crystal.unit)} long`],
      ['steps', String(steps.reduce((sum, n) => sum + n, 0))],
      ['points', String(points)],
      ['widest step', inverseLength(widest, crystal.unit)],
    ],
  )}`
}

function supercell({ lattice, supercell: matrix, unit }: Crystal): string | undefined {
  const made = lattice && matrix && supercellOf(lattice, matrix)
  if (!made) return undefined
  const { dimension, primitive, volume } = made.lattice
  return `**Supercell** of ${count(made.fold, 'primitive cell')}\n\n${table(
    ['', ''],
    [
      [
        'vectors',
        primitive
          .slice(0, dimension)
          .map(v => length(norm(v), unit))
          .join(', '),
      ],
      [NAMES[dimension][0], content(volume, dimension, unit)],
      ['nearest image', length(nearestImageOf(made.lattice).distance, unit)],
    ],
  )}`
}

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
