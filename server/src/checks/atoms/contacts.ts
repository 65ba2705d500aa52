/** What several rules ask of the atoms' distances; computed once for each crystal. */
import { covalentRadius } from '../../crystal/elements.ts'
import type { Dimension } from '../../crystal/lattice.ts'
import { forEachPair, tightestContact } from '../../crystal/neighbours.ts'
import { combine, inverse, type Mat3, type Vec3 } from '../../crystal/vector.ts'
import type { Crystal, PlacedAtom } from '../../meaning/crystal.ts'
import { LARGEST_SHIFT } from '../../meaning/rounding.ts'

/** Compute something once for each crystal. */
export function once<T>(compute: (crystal: Crystal) => T): (crystal: Crystal) => T {
  const known = new WeakMap<Crystal, { readonly value: T }>()
  return crystal => {
    const kept = known.get(crystal)
    if (kept) return kept.value
    const value = compute(crystal)
    known.set(crystal, { value })
    return value
  }
}

/** More pairs at one place than this only say the same again. */
const MOST_PAIRS = 200_000

/**
 * Groups of two or more atoms at one place, lattice translations counted; the first of each group first. Atoms as near
 * as a rounding are at one place: no two nuclei are that close.
 */
export const coincidences = once((crystal): readonly (readonly PlacedAtom[])[] => {
  const { lattice, atoms } = crystal
  if (!lattice || atoms.length === 0) return []
  const reach = LARGEST_SHIFT / crystal.angstrom
  const firstOf = atoms.map((_, i) => i)
  const root = (i: number): number => {
    let at = i
    while (firstOf[at] !== at) at = firstOf[at]
    return at
  }
  let pairs = 0
  const { primitive: basis, dimension } = lattice
  forEachPair({ basis, dimension, positions: atoms.map(atom => atom.fraction) }, reach, (first, second) => {
    const [u, v] = [root(first), root(second)]
    firstOf[Math.max(u, v)] = Math.min(u, v)
    return ++pairs < MOST_PAIRS
  })
  const groups = new Map<number, PlacedAtom[]>()
  firstOf.forEach((_, i) => {
    const first = root(i)
    if (first === i) return
    const group = groups.get(first) ?? groups.set(first, [atoms[first]]).get(first)!
    group.push(atoms[i])
  })
  return [...groups.values()]
})

/** The atoms without those that stand where another one does. */
export const distinctAtoms = once((crystal): readonly PlacedAtom[] => {
  const surplus = new Set(coincidences(crystal).flatMap(group => group.slice(1)))
  return surplus.size === 0 ? crystal.atoms : crystal.atoms.filter(atom => !surplus.has(atom))
})

export interface Tightest {
  readonly first: PlacedAtom
  readonly second: PlacedAtom
  /** In the file's unit. */
  readonly distance: number
  /** Distance over the sum of covalent radii. */
  readonly ratio: number
}

/** The two atoms that are closest for their size; atoms without a known radius play no part. */
export const tightest = once((crystal): Tightest | undefined =>
  tightestAmong(crystal, distinctAtoms(crystal)),
)

export function tightestAmong(
  crystal: Crystal,
  atoms: readonly PlacedAtom[],
  positions: readonly Vec3[] = atoms.map(a => a.fraction),
): Tightest | undefined {
  const { lattice, angstrom } = crystal
  if (!lattice) return undefined
  const sized = atoms.flatMap((atom, i) => {
    const radius = covalentRadius(atom.element)
    return radius ? [{ atom, position: positions[i], radius: radius / angstrom }] : []
  })
  const sites = {
    basis: lattice.primitive,
    dimension: lattice.dimension as Dimension,
    positions: sized.map(s => s.position),
  }
  const found = tightestContact(
    sites,
    sized.map(s => s.radius),
  )
  if (!found) return undefined
  return { ...found, first: sized[found.first].atom, second: sized[found.second].atom }
}

/** The atoms' fractions of the primitive vectors if their numbers were meant on these axes (rows). */
export function readOn(crystal: Crystal, atoms: readonly PlacedAtom[], axes: Mat3): Vec3[] {
  const toPrimitive = inverse(crystal.lattice!.primitive)
  return atoms.map(({ stated }) => combine(combine(stated, axes), toPrimitive))
}

/** `Si`, or `Fe_up` where atoms have names of their own; the second of several as `the 3rd atom, O`. */
export const nameOf = ({ entry, element, index }: PlacedAtom): string =>
  `${entry.name?.value ?? element} (atom ${index + 1})`
