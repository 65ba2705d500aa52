import { symmetricDivisions } from '../../crystal/mesh.ts'
import type { Vec3 } from '../../crystal/vector.ts'
import { formatNumber } from '../../format/numbers.ts'
import type { Fix, Span } from '../../format/model.ts'
import { inverseLength } from '../../meaning/wording.ts'
import type { Check, Context } from '../check.ts'
import {
  type CheckedMesh,
  checkedMeshes,
  inWords,
  isScaleInDoubt,
  listVectors,
  setDivisions,
  stepsOf,
  vacuums,
} from './meshes.ts'

interface Facts {
  /** The longest, in the file's inverse unit. */
  readonly step: number
}

/** In Å⁻¹. Total energies of insulators are converged at 0.2 to 0.5, of metals below (common practice). */
const COARSE = 0.7
const USUAL = 0.5
/** Of the zone's width: a step below it resolves the bands however wide the zone is. */
const FINE_SHARE = 1 / 10

export const meshCoarse: Check<Facts> = {
  id: 'mesh-coarse',
  severity: 'info',
  needs: ['unit'],
  summary: 'A step of a mesh is over 0.7 Å⁻¹.',
  why: 'Sums over so few points are seldom converged: 0.2 to 0.5 Å⁻¹ is usual for insulators, less for metals.',
  wrong: 'lattice: {bravais: cF, a: 5.43}\nmesh: {divisions: [2, 2, 2]}\n',
  right: 'lattice: {bravais: cF, a: 5.43}\nmesh: {divisions: [6, 6, 6]}\n',
  *run(context) {
    const { crystal } = context
    if (!crystal.kGroup || isScaleInDoubt(crystal)) return
    for (const item of checkedMeshes(crystal)) {
      const { block, mesh, lengths, at, subject } = item
      const steps = stepsOf(lengths, mesh.divisions)
      const coarse = steps.flatMap((step, i) =>
        vacuums(crystal)[i] === undefined && isCoarse(step / crystal.angstrom, mesh.divisions[i]) ? [i] : [],
      )
      if (coarse.length === 0) continue
      const step = Math.max(...coarse.map(i => steps[i]))
      const usual = `Up to ${inverseLength(USUAL * crystal.angstrom, crystal.unit)} is usual`
      const number: Span | undefined = coarse.length === 1 ? block.divisions?.items[coarse[0]]?.at : undefined
      const { fixes, words } = finer(context, item, coarse)
      yield {
        at: number ?? at,
        message: `The step along ${listVectors(coarse)} is ${inverseLength(step, crystal.unit, 3)}. ${usual}: ${words}.`,
        facts: { step },
        subject,
        fixes,
      }
    }
  },
}

const isCoarse = (step: number, divisions: number): boolean => step > COARSE && 1 / divisions > FINE_SHARE

function finer(
  { text, crystal }: Context,
  item: CheckedMesh,
  coarse: readonly number[],
): { fixes: Fix[]; words: string } {
  const { block, mesh, lengths } = item
  const usual = USUAL * crystal.angstrom
  if (block.spacing) {
    const spacing = formatNumber(Number(usual.toPrecision(2)))
    const edits = [{ at: block.spacing.at, text: spacing }]
    return {
      fixes: [{ title: `Set the spacing to ${spacing}`, safe: false, edits }],
      words: `a spacing of ${spacing}`,
    }
  }
  const least = mesh.divisions.map((n, i) => (coarse.includes(i) ? Math.ceil(lengths[i] / usual) : n))
  const divisions = symmetricDivisions(least as unknown as Vec3, crystal.kGroup!)
  const words = inWords(divisions, lengths.length)
  return {
    fixes: [{ title: `Use ${words}`, safe: false, edits: setDivisions(text, item, divisions) }],
    words,
  }
}
