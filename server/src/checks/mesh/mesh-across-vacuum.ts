import type { Vec3 } from '../../crystal/vector.ts'
import type { Span } from '../../format/model.ts'
import { length } from '../../meaning/wording.ts'
import type { Check } from '../check.ts'
import { checkedMeshes, inWords, listVectors, setDivisions, vacuums } from './meshes.ts'

interface Facts {
  /** Directions, from 0. */
  readonly directions: readonly number[]
}

export const meshAcrossVacuum: Check<Facts> = {
  id: 'mesh-across-vacuum',
  severity: 'warning',
  needs: ['unit', 'frames.atoms'],
  summary:
    'A mesh has divisions other than 1 along a direction without period, or across a vacuum of over 8 Å.',
  why: 'Nothing moves across a vacuum: bands are flat there, and each further division multiplies the cost and gives nothing.',
  wrong:
    'lattice: {bravais: hp, a: 2.46, height: 20}\natoms:\n  - C: [1/3, 2/3, 1/2]\n  - C: [2/3, 1/3, 1/2]\nmesh: {divisions: [12, 12, 2]}\n',
  right:
    'lattice: {bravais: hp, a: 2.46, height: 20}\natoms:\n  - C: [1/3, 2/3, 1/2]\n  - C: [2/3, 1/3, 1/2]\nmesh: {divisions: [12, 12, 1]}\n',
  *run({ text, crystal }) {
    const { dimension, unit } = crystal
    if (!dimension) return
    for (const item of checkedMeshes(crystal)) {
      const { block, mesh, at, subject } = item
      const gaps = vacuums(crystal)
      const directions = [0, 1, 2].filter(
        i => mesh.divisions[i] !== 1 && (i >= dimension || gaps[i] !== undefined),
      )
      if (directions.length === 0) continue
      const divisions = mesh.divisions.map((n, i) => (directions.includes(i) ? 1 : n)) as unknown as Vec3
      const number: Span | undefined =
        directions.length === 1 ? block.divisions?.items[directions[0]]?.at : undefined
      const words = inWords(divisions, Math.max(dimension, block.divisions?.items.length ?? 0))
      const numbers = directions.map(i => mesh.divisions[i]).join(' and ')
      const stated = block.divisions
        ? `${numbers} ${numbers === '1' ? 'division' : 'divisions'} along ${listVectors(directions)}`
        : `The spacing gives ${inWords(mesh.divisions, dimension)}`
      const reason =
        directions[0] >= dimension
          ? 'where the crystal has no period'
          : `across ${directions.map(i => length(gaps[i] ?? 0, unit, 2)).join(' and ')} without atoms, where bands are flat`
      yield {
        at: number ?? at,
        message: `${stated}${block.divisions ? '' : `: ${numbers} along ${listVectors(directions)}`}, ${reason}: each beyond the first costs and gives nothing. It takes ${words}.`,
        facts: { directions },
        subject,
        fixes: [{ title: `Use ${words}`, safe: false, edits: setDivisions(text, item, divisions) }],
      }
    }
  },
}
