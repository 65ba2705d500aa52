/** The meshes of a document as the rules see them, and how the rules write and mend them. */
import { type Mesh, tiedDirections } from '../../crystal/mesh.ts'
import { norm, type Vec3 } from '../../crystal/vector.ts'
import { replaceVector, standsHere } from '../../format/edits.ts'
import type { MeshBlock, Span, TextEdit } from '../../format/model.ts'
import { formatCoordinate } from '../../format/numbers.ts'
import type { Crystal } from '../../meaning/crystal.ts'
import { meshOf } from '../../meaning/sampling.ts'
import { INVERSE_SYMBOL } from '../../crystal/units.ts'
import { plain } from '../../meaning/wording.ts'
import { once } from '../atoms/contacts.ts'
import { isScaleSuspected, suspectedFrame } from '../atoms/suspicions.ts'
import { WIDE_GAP } from '../atoms/vacuum-undeclared.ts'

export interface CheckedMesh {
  readonly block: MeshBlock
  readonly mesh: Mesh
  /** `divisions`, or the `spacing` that they follow from. */
  readonly at: Span
  /** What findings about it are about. */
  readonly subject: string
  /** |bᵢ| of each periodic direction, in the file's inverse unit. */
  readonly lengths: readonly number[]
}

/** The meshes that can be read. One given by a spacing waits for the rotations that its divisions must keep. */
export const checkedMeshes = once((crystal): readonly CheckedMesh[] => {
  const { lattice, document } = crystal
  if (!lattice) return []
  const lengths = lattice.reciprocal.slice(0, lattice.dimension).map(norm)
  return document.meshes.flatMap(block => {
    const mesh = meshOf(crystal, block)
    const at = block.divisions?.at ?? block.spacing?.at
    return mesh && at ? [{ block, mesh, at, subject: `mesh:${at[0]}`, lengths }] : []
  })
})

/** Distances between neighbouring points along the reciprocal vectors. */
export const stepsOf = (lengths: readonly number[], divisions: Vec3): number[] =>
  lengths.map((length, i) => length / divisions[i])

/** Lengths are in doubt: what a step is in Å⁻¹ is not known. */
export const isScaleInDoubt = (crystal: Crystal): boolean =>
  isScaleSuspected(crystal) || suspectedFrame(crystal) !== undefined

/** The gap without atoms across each periodic direction, in the file's unit, where it is a vacuum. */
export const vacuums = once((crystal): readonly (number | undefined)[] => {
  const isKnown = crystal.atoms.length > 0 && crystal.atomsComplete && !isScaleInDoubt(crystal)
  return crystal.emptySlabs.map(gap =>
    isKnown && gap && gap * crystal.angstrom > WIDE_GAP ? gap : undefined,
  )
})

/** In Å⁻¹: a single division along so short a reciprocal vector is fine enough whatever the others are. */
const SHORT = 0.3

/** Steps along two directions that differ more than this are uneven. */
export const UNEVEN = 1.5

/**
 * How many times the longest step is the shortest, among directions of which no two are tied by symmetry.
 * A direction with a vacuum, or one that is fine with a single division, does not count.
 */
export function unevenness(crystal: Crystal, lengths: readonly number[], divisions: Vec3): number {
  const steps = stepsOf(lengths, divisions)
  const counts = steps.map(
    (step, i) =>
      vacuums(crystal)[i] === undefined && !(divisions[i] === 1 && step < SHORT * crystal.angstrom),
  )
  const tied = tiedDirections(crystal.kGroup ?? [])
  let most = 1
  for (let i = 0; i < steps.length; i++)
    for (let j = 0; j < steps.length; j++) {
      if (!counts[i] || !counts[j] || tied.some(set => set.includes(i) && set.includes(j))) continue
      most = Math.max(most, steps[i] / steps[j])
    }
  return most
}

/** `8 × 8 × 6`, as many as there are dimensions. */
export const inWords = (divisions: readonly number[], dimension: number): string =>
  divisions.slice(0, dimension).join(' × ')

/** `0.279, 0.279 and 0.101 Å⁻¹`. */
export const listInverse = (numbers: readonly number[], { unit }: Crystal): string => {
  const written = numbers.map(x => plain(x, 3))
  const list =
    written.length < 2 ? written.join('') : `${written.slice(0, -1).join(', ')} and ${written.at(-1)}`
  return `${list} ${INVERSE_SYMBOL[unit]}`
}

/** `b₁, b₂ and b₃`. */
export const listVectors = (directions: readonly number[]): string => {
  const names = directions.map(i => `b${'₁₂₃'[i]}`)
  return names.length < 2 ? names.join('') : `${names.slice(0, -1).join(', ')} and ${names.at(-1)}`
}

/** Put other divisions into a mesh; they take the place of a spacing. */
export function setDivisions(text: string, { block, lengths }: CheckedMesh, divisions: Vec3): TextEdit[] {
  const written = divisions.slice(0, lengths.length).map(String)
  if (block.divisions)
    return replaceVector(
      text,
      block.divisions,
      block.divisions.items.map((_, i) => String(divisions[i] ?? 1)),
    )
  const entry = block.keys.get('spacing')
  if (!entry || !block.spacing || !standsHere(text, block.spacing.at)) return []
  return [
    { at: entry.key, text: 'divisions' },
    { at: block.spacing.at, text: `[${written.join(', ')}]` },
  ]
}

export function setShift(text: string, { block }: CheckedMesh, shift: Vec3): TextEdit[] {
  if (!block.shift) return []
  return replaceVector(
    text,
    block.shift,
    block.shift.items.map((_, i) => formatCoordinate(shift[i] ?? 0)),
  )
}
