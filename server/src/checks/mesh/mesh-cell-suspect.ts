import { divisionsForSpacing, isSymmetricMesh } from '../../crystal/mesh.ts'
import { type Mat3, norm, type Vec3 } from '../../crystal/vector.ts'
import type { Crystal } from '../../meaning/crystal.ts'
import type { Check } from '../check.ts'
import {
  type CheckedMesh,
  checkedMeshes,
  inWords,
  listInverse,
  setDivisions,
  stepsOf,
  UNEVEN,
  vacuums,
} from './meshes.ts'

interface Facts {
  readonly meant: readonly number[]
}

/** Lengths within this of each other are no reason for an order. */
const LONGER = 1.1
/** Divisions fit a cell whose steps they make as even as rounding to whole numbers lets them be. */
const FITTING = 1.25

export const meshCellSuspect: Check<Facts> = {
  id: 'mesh-cell-suspect',
  severity: 'warning',
  needs: ['unit', 'frames.atoms'],
  summary:
    'Divisions stand in the order of other axes, or fit the conventional cell and not the primitive one.',
  why: 'Divisions belong to the primitive reciprocal vectors: a long cell vector has a short reciprocal one and takes fewer of them. The wrong way round the mesh is far too coarse along one direction and wasteful along another.',
  wrong: 'lattice: {bravais: tP, a: 4, c: 8}\nmesh: {divisions: [4, 8, 8]}\n',
  right: 'lattice: {bravais: tP, a: 4, c: 8}\nmesh: {divisions: [8, 8, 4]}\n',
  *run({ text, crystal }) {
    const { kGroup, dimension } = crystal
    if (!kGroup || !dimension) return
    for (const item of checkedMeshes(crystal)) {
      const { block, mesh, lengths, at, subject } = item
      if (!block.divisions) continue
      const said = otherOrder(crystal, item, kGroup) ?? otherCell(crystal, item, kGroup)
      if (!said) continue
      const words = inWords(said.divisions, dimension)
      yield {
        at,
        message: `${said.message(inWords(mesh.divisions, dimension))} ${words} would make the steps ${listInverse(stepsOf(lengths, said.divisions), crystal)}.`,
        facts: { meant: said.divisions.slice(0, dimension) },
        subject,
        fixes: [{ title: `Use ${words}`, safe: false, edits: setDivisions(text, item, said.divisions) }],
        hides: [
          'mesh-breaks-symmetry',
          'mesh-uneven',
          'mesh-coarse',
          'mesh-across-vacuum',
          'mesh-misses-point',
        ].map(rule => ({
          rule,
          subject,
        })),
      }
    }
  },
}

interface Suspicion {
  readonly divisions: Vec3
  readonly message: (stated: string) => string
}

/** Is there a longer reciprocal vector with fewer divisions than a shorter one? */
const runsAgainst = (lengths: readonly number[], divisions: readonly number[]): boolean =>
  lengths.some((x, i) => lengths.some((y, j) => x > LONGER * y && divisions[i] < divisions[j]))

function otherOrder(
  crystal: Crystal,
  { mesh, lengths }: CheckedMesh,
  group: readonly Mat3[],
): Suspicion | undefined {
  const { divisions, shift } = mesh
  if (!runsAgainst(lengths, divisions) || spread(crystal, lengths, divisions) <= UNEVEN) return undefined
  const fitting = rearranged(divisions, lengths.length)
    .filter(
      other =>
        !runsAgainst(lengths, other) &&
        vacuums(crystal).every(
          (gap, i) => gap === undefined || other[i] === 1 || divisions[i] === other[i],
        ) &&
        isSymmetricMesh({ divisions: other, shift }, group),
    )
    .map(other => ({ other, uneven: spread(crystal, lengths, other) }))
    .filter(({ uneven }) => uneven <= UNEVEN)
    .sort((a, b) => a.uneven - b.uneven)
  if (fitting.length === 0) return undefined
  return {
    divisions: fitting[0].other,
    message: stated =>
      `${stated} runs against the lengths of the reciprocal vectors, ${listInverse(lengths, crystal)}: the steps are ${listInverse(stepsOf(lengths, divisions), crystal)}.`,
  }
}

/** How uneven the steps are, tied by symmetry or not. */
function spread(crystal: Crystal, lengths: readonly number[], divisions: Vec3): number {
  const steps = stepsOf(lengths, divisions).filter((_, i) => vacuums(crystal)[i] === undefined)
  return steps.length === 0 ? 1 : Math.max(...steps) / Math.min(...steps)
}

const ORDERS = [
  [0, 1, 2],
  [0, 2, 1],
  [1, 0, 2],
  [1, 2, 0],
  [2, 0, 1],
  [2, 1, 0],
] as const

/** The divisions in every other order, and with their two values exchanged. */
function rearranged(divisions: Vec3, dimension: number): Vec3[] {
  const orders = ORDERS.filter(order => order.every((k, i) => i < dimension || k === i))
  const found = orders.map(order => order.map(k => divisions[k]) as unknown as Vec3)
  const values = [...new Set(divisions.slice(0, dimension))]
  if (values.length === 2)
    found.push(divisions.map((n, i) => (i < dimension ? values[0] + values[1] - n : n)) as unknown as Vec3)
  return found
}

/** Divisions proportional to the conventional reciprocal vectors, which the primitive ones of a centred cell are not. */
function otherCell(
  crystal: Crystal,
  { mesh, lengths }: CheckedMesh,
  group: readonly Mat3[],
): Suspicion | undefined {
  const { lattice } = crystal
  const { divisions } = mesh
  if (!lattice || lattice.centring === 'P' || lattice.dimension !== 3) return undefined
  if (isSymmetricMesh({ divisions, shift: [0, 0, 0] }, group)) return undefined
  const conventional = lattice.conventionalReciprocal.map(norm)
  const steps = stepsOf(conventional, divisions)
  const coarsest = Math.max(...steps)
  if (coarsest > FITTING * Math.min(...steps)) return undefined
  return {
    divisions: divisionsForSpacing(lattice.reciprocal, 3, coarsest, group),
    message: stated =>
      `${stated} fits the conventional reciprocal vectors, ${listInverse(conventional, crystal)}; divisions belong to the primitive ones, ${listInverse(lengths, crystal)}.`,
  }
}
