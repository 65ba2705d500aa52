/** Inside `[x, y, z]`: which component one is at, what it counts and in which frame. */
import type { Position, SignatureHelp } from 'vscode-languageserver-types'
import type { Snapshot } from '../analysis.ts'
import { INVERSE_SYMBOL, SYMBOL } from '../crystal/units.ts'
import { findKey, type ValueKind } from '../format/keys.ts'
import type { LatticeDocument } from '../format/model.ts'
import { placeAt } from './completion/place.ts'

interface Components {
  readonly names: readonly string[]
  readonly what: string
}

export function signature(snapshot: Snapshot, position: Position): SignatureHelp | null {
  const offset = snapshot.offsetOf(position)
  const { kind, names, lists } = placeAt(snapshot.text, offset)
  const row = kind === 'value' ? findKey(names) : undefined
  const list = lists.at(-1)
  if (!row || !list) return null
  const analysis = snapshot.documentAt(offset)
  if (!analysis) return null
  const { document, crystal } = analysis
  const outer = /^\s*\[/.test(snapshot.text.slice(list.start, offset))
  const isMatrix = row.kind === 'rows' || row.kind === 'matrix'
  if (outer) return null
  // A row of vectors stands in a list of rows, in brackets or with dashes.
  const components = componentsOf(row.kind, row.path, document, crystal.dimension ?? 3)
  if (!components) return null
  const { names: parts, what } = components
  const title = isMatrix && lists.length > 1 ? `row ${lists[lists.length - 2].index + 1}: ` : ''
  let label = `${title}[`
  const parameters = parts.map((name, i) => {
    if (i > 0) label += ', '
    const start = label.length
    label += name
    return { label: [start, label.length] as [number, number], documentation: what }
  })
  return {
    signatures: [{ label: `${label}]`, documentation: what, parameters }],
    activeSignature: 0,
    activeParameter: Math.min(list.index, parts.length - 1),
  }
}

const FRAMES = {
  conventional: 'fractions of the conventional cell a, b, c',
  primitive: 'fractions of the primitive vectors',
}
const K_FRAMES = {
  primitive: 'fractions of the primitive reciprocal vectors b₁, b₂, b₃',
  conventional: 'fractions of the conventional cell’s reciprocal vectors a*, b*, c*',
  '2pi/a': 'Cartesian, in units of 2π/a',
}

function componentsOf(
  kind: ValueKind,
  path: string,
  { unit, frames }: LatticeDocument,
  dimension: number,
): Components | undefined {
  switch (kind) {
    case 'atom':
      return atom(unit, frames.atoms)
    case 'vector':
      if (path === 'mesh.shift')
        return { names: numbered('s', dimension), what: 'in steps of the mesh along each reciprocal vector' }
      return atom(unit, frames.atoms)
    case 'point': {
      const what =
        frames.points === 'cartesian'
          ? `Cartesian, in ${INVERSE_SYMBOL[unit]} with the factor 2π`
          : K_FRAMES[frames.points]
      const isCartesian = frames.points === 'cartesian' || frames.points === '2pi/a'
      return {
        names: isCartesian ? ['kx', 'ky', 'kz'].slice(0, dimension) : numbered('k', dimension),
        what,
      }
    }
    case 'counts':
      return {
        names: numbered('n', dimension),
        what: 'number of points along each primitive reciprocal vector',
      }
    case 'rows':
      return { names: ['x', 'y', 'z'], what: `Cartesian, in ${SYMBOL[unit]}` }
    case 'matrix':
      return { names: numbered('n', dimension), what: 'whole multiples of the primitive vectors' }
    case 'ends':
      return { names: ['from', 'to'], what: 'labels of two points' }
    default:
      return undefined
  }
}

const numbered = (letter: string, dimension: number): string[] =>
  [1, 2, 3].slice(0, dimension).map(i => `${letter}${i}`)

function atom(unit: LatticeDocument['unit'], frame: LatticeDocument['frames']['atoms']): Components {
  const what = frame === 'cartesian' ? `Cartesian, in ${SYMBOL[unit]}` : FRAMES[frame]
  return { names: ['x', 'y', 'z'], what }
}
