/** What `a`, `b`, `c`, `alpha`, `beta`, `gamma` mean in the numbers of a document. */
import { BRAVAIS, type BravaisType } from '../crystal/bravais.ts'
import type { ParameterName } from './model.ts'
import type { Parameters, ParameterValue } from './numbers.ts'

type Implied = Partial<Record<ParameterName, ParameterName | number>>

const RIGHT_ANGLES: Implied = { alpha: 90, beta: 90, gamma: 90 }
const HEXAGONAL: Implied = { b: 'a', alpha: 90, beta: 90, gamma: 120 }

/** What a Bravais type says of the parameters that are not stated: a number, or which other one they equal. */
function implied(type: BravaisType, isStated: (name: ParameterName) => boolean): Implied {
  switch (BRAVAIS[type].system) {
    case 'cubic':
      return { ...RIGHT_ANGLES, b: 'a', c: 'a' }
    case 'tetragonal':
      return { ...RIGHT_ANGLES, b: 'a' }
    case 'orthorhombic':
      return RIGHT_ANGLES
    case 'hexagonal':
      return BRAVAIS[type].dimension === 2 ? { b: 'a', gamma: 120 } : HEXAGONAL
    case 'rhombohedral':
      return isStated('alpha') && !isStated('c')
        ? { b: 'a', c: 'a', beta: 'alpha', gamma: 'alpha' }
        : HEXAGONAL
    case 'monoclinic':
      return RIGHT_ANGLES
    case 'square':
      return { b: 'a', gamma: 90 }
    case 'rectangular':
      return { gamma: 90 }
    default:
      return {}
  }
}

/** The lattice as far as its parameters go. */
export interface ParameterSource {
  /** The type that says what is implied; undefined beside `vectors`, where only what is stated counts. */
  readonly type?: BravaisType
  isStated(name: ParameterName): boolean
  /** Read the stated value; undefined where it cannot be read, which is a finding of its own. */
  read(name: ParameterName, parameters: Parameters): number | undefined
}

/** Parameters are resolved when they are asked for, each once, and may refer to each other. */
export function parameterTable(source: ParameterSource | undefined): Parameters {
  const known = new Map<ParameterName, ParameterValue>()
  const open: ParameterName[] = []

  function resolve(name: ParameterName): ParameterValue {
    if (!source) return { fault: 'has no value: there is no lattice that could state it' }
    if (open.includes(name))
      return { fault: `depends on itself: ${[...open.slice(open.indexOf(name)), name].join(' → ')}` }
    open.push(name)
    const value = source.isStated(name) ? stated(name, source) : ofType(name, source)
    open.pop()
    return value
  }

  function stated(name: ParameterName, { read }: ParameterSource): ParameterValue {
    const value = read(name, parameters)
    return value === undefined ? 'pending' : { value }
  }

  function ofType(name: ParameterName, { type, isStated }: ParameterSource): ParameterValue {
    const rule = type && implied(type, isStated)[name]
    if (rule === undefined) return { fault: 'has no value: `lattice` does not state it' }
    return typeof rule === 'number' ? { value: rule } : parameters(rule)
  }

  function parameters(name: ParameterName): ParameterValue {
    const before = known.get(name)
    if (before) return before
    const value = resolve(name)
    // What failed for a circle may have a value for who comes from outside of it.
    if (open.length === 0 || value === 'pending' || 'value' in value) known.set(name, value)
    return value
  }
  return parameters
}
