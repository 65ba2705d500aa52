import {
  countOrbits,
  isSymmetricMesh,
  keptRotations,
  type Mesh,
  symmetricDivisions,
  symmetricShifts,
  tiedDirections,
} from '../../crystal/mesh.ts'
import type { Mat3, Vec3 } from '../../crystal/vector.ts'
import type { Fix, TextEdit } from '../../format/model.ts'
import { fractions } from '../../meaning/wording.ts'
import type { Check, Context, Finding } from '../check.ts'
import { type CheckedMesh, checkedMeshes, inWords, listVectors, setDivisions, setShift } from './meshes.ts'

interface Facts {
  /** How many rotations of the k-group map the mesh onto itself, of how many. */
  readonly kept: number
  readonly rotations: number
}

export const meshBreaksSymmetry: Check<Facts> = {
  id: 'mesh-breaks-symmetry',
  severity: 'warning',
  needs: ['time-reversal', 'frames.atoms'],
  summary:
    'A mesh that the crystal’s rotations do not map onto itself, by its shift or by unequal divisions.',
  why: 'Equivalent k-points are sampled differently: sums over the mesh are less symmetric than the crystal, fewer points can be left out, and some programs refuse such a mesh or merge points that it does not treat alike.',
  wrong: 'lattice: {bravais: cF, a: 5.43}\nmesh: {divisions: [8, 8, 8], shift: [1/2, 1/2, 1/2]}\n',
  right: 'lattice: {bravais: cF, a: 5.43}\nmesh: {divisions: [8, 8, 8]}\n',
  *run(context) {
    const { kGroup } = context.crystal
    if (!kGroup) return
    for (const item of checkedMeshes(context.crystal)) {
      if (isSymmetricMesh(item.mesh, kGroup)) continue
      const ofDivisions = !isSymmetricMesh({ ...item.mesh, shift: GAMMA }, kGroup)
      const finding = ofDivisions
        ? unequalDivisions(context, item, kGroup)
        : brokenByShift(context, item, kGroup)
      yield {
        ...finding,
        subject: item.subject,
        facts: { kept: keptRotations(item.mesh, kGroup).length, rotations: kGroup.length },
      }
    }
  },
}

const GAMMA: Vec3 = [0, 0, 0]

const keeps = (mesh: Mesh, group: readonly Mat3[]): string =>
  `keeps ${keptRotations(mesh, group).length} of the ${group.length} rotations of k-space`

function brokenByShift(
  { text, crystal }: Context,
  item: CheckedMesh,
  group: readonly Mat3[],
): Finding<Facts> {
  const { mesh, block } = item
  const dimension = crystal.dimension!
  const shifts = symmetricShifts(mesh, group).slice(0, MOST_OFFERS)
  const [nearest] = shifts
  const points = countOrbits(mesh, group)
  const then = countOrbits({ ...mesh, shift: nearest }, group)
  const saved = points && then ? `, with ${then} irreducible points instead of ${points}` : ''
  return {
    at: block.shift!.at,
    message: `A mesh with this shift ${keeps(mesh, group)}: the others carry it into another mesh. ${fractions(nearest, dimension)} keeps all${saved}.`,
    fixes: shifts.map(shift => ({
      title: `Set the shift to ${fractions(shift, dimension)}`,
      safe: false,
      edits: setShift(text, item, shift),
    })),
  }
}

/** The nearest, and one more where a mesh off Γ was meant. */
const MOST_OFFERS = 2

function unequalDivisions(
  { text, crystal }: Context,
  item: CheckedMesh,
  group: readonly Mat3[],
): Finding<Facts> {
  const { mesh, at, subject } = item
  const dimension = crystal.dimension!
  const divisions = symmetricDivisions(mesh.divisions, group)
  const [shift] = symmetricShifts({ divisions, shift: mesh.shift }, group)
  const isShiftKept = shift.every((x, i) => x === mesh.shift[i])
  const words = inWords(divisions, dimension)
  const tied = tiedDirections(group)
    .filter(set => set.some(i => divisions[i] !== mesh.divisions[i]))
    .map(listVectors)
    .join(', and ')
  const edits: TextEdit[] = [
    ...setDivisions(text, item, divisions),
    ...(isShiftKept ? [] : setShift(text, item, shift)),
  ]
  const withShift = isShiftKept ? '' : ` with the shift ${fractions(shift, dimension)}`
  const fixes: Fix[] = [{ title: `Use ${words}${withShift}`, safe: false, edits }]
  return {
    at,
    message: `A mesh of ${inWords(mesh.divisions, dimension)} ${keeps(mesh, group)}: symmetry ties the divisions along ${tied}. ${words}${withShift} keeps all.`,
    fixes,
    hides: ['mesh-uneven', 'mesh-coarse'].map(rule => ({ rule, subject })),
  }
}
