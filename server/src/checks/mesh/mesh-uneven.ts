import { symmetricDivisions } from '../../crystal/mesh.ts'
import type { Mat3, Vec3 } from '../../crystal/vector.ts'
import type { Fix } from '../../format/model.ts'
import type { Crystal } from '../../meaning/crystal.ts'
import { plain } from '../../meaning/wording.ts'
import type { Check } from '../check.ts'
import {
  type CheckedMesh,
  checkedMeshes,
  inWords,
  listInverse,
  setDivisions,
  stepsOf,
  UNEVEN,
  unevenness,
  vacuums,
} from './meshes.ts'

interface Facts {
  /** Along the primitive reciprocal vectors, in the file's inverse unit. */
  readonly steps: readonly number[]
  readonly balanced: readonly number[]
}

export const meshUneven: Check<Facts> = {
  id: 'mesh-uneven',
  severity: 'info',
  needs: ['unit', 'frames.atoms'],
  summary: 'The steps of a mesh along the reciprocal vectors differ more than 1.5-fold.',
  why: 'The coarsest direction decides how good the sum is: the points along the others cost time and give nothing.',
  wrong: 'lattice: {bravais: oP, a: 4, b: 6, c: 12}\nmesh: {divisions: [8, 8, 8]}\n',
  right: 'lattice: {bravais: oP, a: 4, b: 6, c: 12}\nmesh: {divisions: [12, 8, 4]}\n',
  *run({ text, crystal }) {
    const { kGroup, dimension } = crystal
    if (!kGroup || !dimension) return
    for (const item of checkedMeshes(crystal)) {
      const { block, mesh, lengths, at, subject } = item
      if (!block.divisions) continue // With a spacing the program has chosen them.
      const uneven = unevenness(crystal, lengths, mesh.divisions)
      if (uneven <= UNEVEN * (1 + ROUNDING)) continue
      const balanced = balance(crystal, item, kGroup)
      if (!balanced) continue
      const words = inWords(balanced, dimension)
      const steps = stepsOf(lengths, mesh.divisions)
      const fixes: Fix[] = [{ title: `Use ${words}`, safe: false, edits: setDivisions(text, item, balanced) }]
      yield {
        at,
        message: `The steps along the reciprocal vectors are ${listInverse(steps, crystal)}: they differ ${plain(uneven, 1)}-fold. ${words} would make them ${listInverse(stepsOf(lengths, balanced), crystal)}.`,
        facts: { steps, balanced: balanced.slice(0, dimension) },
        subject,
        fixes,
        hides: [{ rule: 'mesh-coarse', subject }],
      }
    }
  },
}

/** A quotient of 3/2 is not over it. */
const ROUNDING = 1e-9

/** How far the number of points may move, in parts of a factor of 2 for each direction, and how finely it is tried. */
const TRIES = 40
const FACTOR = 2 ** (1 / TRIES)

/** Symmetric divisions of even steps, with about as many points; undefined where none are more even. */
function balance(crystal: Crystal, { mesh, lengths }: CheckedMesh, group: readonly Mat3[]): Vec3 | undefined {
  const empty = vacuums(crystal)
  const used = lengths.map((_, i) => i).filter(i => empty[i] === undefined)
  const steps = stepsOf(lengths, mesh.divisions)
  const mean = used.reduce((product, i) => product * steps[i], 1) ** (1 / used.length)
  for (let turn = 0; turn <= 2 * TRIES; turn++) {
    const step = mean * FACTOR ** (turn % 2 ? (turn + 1) / 2 : -turn / 2)
    const rounded = mesh.divisions.map((n, i) =>
      used.includes(i) ? Math.max(1, Math.round(lengths[i] / step)) : n,
    ) as unknown as Vec3
    const divisions = symmetricDivisions(rounded, group)
    if (unevenness(crystal, lengths, divisions) <= UNEVEN) return divisions
  }
  return undefined
}
