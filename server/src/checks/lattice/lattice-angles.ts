import type { AngleMiss, AngleName } from '../../crystal/lattice.ts'
import type { LatticeBlock, Span } from '../../format/model.ts'
import { degrees } from '../../meaning/wording.ts'
import type { Check } from '../check.ts'

interface Facts {
  /** By how many degrees the angles miss making a cell; 0 for a flat one. */
  readonly by: number
}

export const latticeAngles: Check<Facts> = {
  id: 'lattice-angles',
  severity: 'error',
  summary: 'The angles are such that no cell can have them.',
  why: 'Three vectors with these angles do not exist in space: at least one number is wrong.',
  wrong: 'lattice: {bravais: aP, a: 4, b: 5, c: 6, alpha: 40, beta: 50, gamma: 120}\n',
  right: 'lattice: {bravais: aP, a: 4, b: 5, c: 6, alpha: 80, beta: 85, gamma: 110}\n',
  *run({ document, crystal }) {
    const block = document.lattice
    const { fault } = crystal.build
    if (!block || fault?.fault !== 'angles') return
    yield {
      at: placeOf(fault.miss, block),
      message: message(fault.miss, block),
      facts: { by: fault.miss.by },
    }
  },
}

const ANGLES = ['alpha', 'beta', 'gamma'] as const
const SYMBOL: Record<AngleName, string> = { alpha: 'α', beta: 'β', gamma: 'γ' }

/** The angle at fault, else the largest that is stated. */
function placeOf({ name }: AngleMiss, { parameters, bravais, key }: LatticeBlock): Span {
  if (name && parameters[name]) return parameters[name].at
  const stated = ANGLES.flatMap(angle => parameters[angle] ?? [])
  if (stated.length === 0) return bravais?.at ?? key
  return stated.reduce((largest, number) => (number.value > largest.value ? number : largest)).at
}

function message({ reason, name, value, limit, by }: AngleMiss, { bravais }: LatticeBlock): string {
  if (reason === 'sum' && bravais?.value === 'hR')
    return `α = ${degrees(value / 3)}: the three equal angles of rhombohedral axes must be under 120°.`
  if (reason === 'sum')
    return `α + β + γ = ${degrees(value)}: the angles of a cell add up to under 360° (${excess(by)}).`
  const symbol = SYMBOL[name!]
  if (reason === 'range') return `${symbol} = ${degrees(value)}: an angle of a cell lies between 0° and 180°.`
  const others = ANGLES.filter(angle => angle !== name).map(angle => SYMBOL[angle])
  return `${symbol} = ${degrees(value)} must be smaller than ${others.join(' + ')} = ${degrees(limit)} for a cell to exist (${excess(by)}).`
}

/** Equality is a flat cell. */
const excess = (by: number): string => (by > 0 ? `it is ${degrees(by)} too much` : 'the cell is flat')
