import type { PointEntry } from '../../format/model.ts'
import { displayLabel } from '../../format/path.ts'
import { count } from '../../meaning/wording.ts'
import type { Check, Finding } from '../check.ts'

interface Facts {
  readonly label: string
  readonly dimension: number
}

export const pointDimension: Check<Facts> = {
  id: 'point-dimension',
  severity: 'error',
  summary:
    'A k-point has another number of components than the crystal has dimensions, or one along a direction without period.',
  why: 'A component too few or too many leaves open which point is meant; across a sheet there is no k at all.',
  wrong: 'lattice: {bravais: cP, a: 3.9}\npoints: {Q: [1/4, 1/8]}\n',
  right: 'lattice: {bravais: cP, a: 3.9}\npoints: {Q: [1/4, 1/8, 0]}\n',
  *run({ crystal, document }) {
    const { dimension } = crystal
    if (!dimension) return
    for (const entry of document.points?.items ?? []) {
      const finding = look(entry, dimension)
      if (finding) yield { ...finding, facts: { label: entry.label, dimension } }
    }
  },
}

function look({ label, coordinates }: PointEntry, dimension: number): Finding<Facts> | undefined {
  if (!coordinates) return undefined
  const { items, at } = coordinates
  const name = displayLabel(label)
  if (items.length < dimension || items.length > 3)
    return {
      at,
      message: `${name} has ${count(items.length, 'component')}; ${CRYSTALS[dimension]} needs ${dimension}.`,
    }
  const beyond = items.find((item, i) => i >= dimension && item && item.value !== 0)
  if (!beyond) return undefined
  return {
    at: beyond.at,
    message: `${name} has a component ${beyond.text.trim()} along a direction without period; it must be 0 or left out.`,
    fixes: [{ title: 'Replace by 0', safe: false, edits: [{ at: beyond.at, text: '0' }] }],
  }
}

const CRYSTALS = ['', 'a chain', 'a sheet', 'a three-dimensional crystal']
