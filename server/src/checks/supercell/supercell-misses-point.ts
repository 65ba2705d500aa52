import { fixedDimensions, K_TOLERANCE, littleCoGroup, star } from '../../crystal/kspace.ts'
import { integerDeterminant, supercellFraction } from '../../crystal/supercell.ts'
import { type Mat3, norm, subtract, type Vec3 } from '../../crystal/vector.ts'
import { replaceVector } from '../../format/edits.ts'
import type { SupercellBlock } from '../../format/model.ts'
import type { Crystal, PlacedPoint } from '../../meaning/crystal.ts'
import { latticeGroup } from '../../meaning/placing.ts'
import { walkedPath } from '../../meaning/sampling.ts'
import { fractions } from '../../meaning/wording.ts'
import type { Check, Context } from '../check.ts'
import { diagnose, isInDoubt } from '../points/diagnosis.ts'
import { listLabels, offer } from '../points/numbers.ts'

interface Facts {
  readonly missed: readonly string[]
}

export const supercellMissesPoint: Check<Facts> = {
  id: 'supercell-misses-point',
  severity: 'info',
  needs: ['labels', 'frames.points'],
  summary: 'A symmetry point of the path that does not fold onto Γ of the supercell.',
  why: 'Phonons from displacements in a supercell are exact at the points that fold onto its Γ; a soft mode at another is interpolated, and may be missed.',
  wrong: 'lattice: {bravais: hp, a: 2.46}\npath: Γ – M – K – Γ\nsupercell: [4, 4]\n',
  right: 'lattice: {bravais: hp, a: 2.46}\npath: Γ – M – K – Γ\nsupercell: [6, 6]\n',
  *run(context) {
    const { crystal, document } = context
    const { supercell, kGroup, dimension } = crystal
    const block = document.supercell
    if (!block || !supercell || !kGroup || !dimension || integerDeterminant(supercell) === 0n) return
    const wanted = symmetryPointsOf(crystal)
    const missed = wanted.filter(
      point => !star(point.fraction, kGroup).some(k => isWhole(supercellFraction(supercell, k))),
    )
    if (missed.length === 0) return
    const labels = missed.map(({ label }) => label)
    const places = missed.map(({ fraction }) => fractions(fraction, dimension)).join(', ')
    const needed = ([0, 1, 2] as const).map(i => multiple(wanted, kGroup, i))
    const larger = needed.map((n, i) => Math.ceil(block.diagonal ? Math.abs(supercell[i][i]) / n : 1) * n)
    const written = `[${larger.slice(0, dimension).join(', ')}]`
    const all = wanted.length === missed.length ? '' : ', with the other symmetry points of the path'
    yield {
      at: block.at,
      message: `${listLabels(labels)} (${places}) ${missed.length === 1 ? 'does' : 'do'} not fold onto Γ of this supercell: its rows times k are no whole numbers. ${written} is the smallest diagonal supercell ${block.diagonal ? 'from this size on ' : ''}that holds ${missed.length === 1 ? 'it' : 'them'}${all}.`,
      facts: { missed: labels },
      fixes: block.diagonal ? offer(`Use ${written}`, diagonalEdits(context, block, larger)) : [],
    }
  },
}

/** The symmetry points of the path but Γ, each star once: where lines leave the zone, such as K and U of cF, nothing folds exactly. */
function symmetryPointsOf(crystal: Crystal): PlacedPoint[] {
  const group = latticeGroup(crystal)
  const { kGroup, dimension } = crystal
  if (!group || !kGroup || !dimension) return []
  const diagnosis = diagnose(crystal)
  const found: PlacedPoint[] = []
  for (const label of new Set(walkedPath(crystal).flatMap(({ labels }) => labels))) {
    const point = crystal.pointOf(label)
    if (!point || norm(point.cartesian) === 0 || isInDoubt(diagnosis, label)) continue
    if (fixedDimensions(littleCoGroup(point.fraction, group), dimension) > 0) continue
    const isKnown = found.some(other =>
      star(other.fraction, kGroup).some(k => isWhole(subtract(k, point.fraction))),
    )
    if (!isKnown) found.push(point)
  }
  return found
}

/** Rows of supercells have entries of some tens at most. */
const SAME = 50 * K_TOLERANCE
const isWhole = (v: Vec3): boolean => v.every(x => Math.abs(x - Math.round(x)) <= SAME)

/** Denominators of symmetry points divide 12. */
const LARGEST_DENOMINATOR = 12

/** The least whole number that makes component i of all equivalents whole. */
function multiple(points: readonly PlacedPoint[], group: readonly Mat3[], i: number): number {
  const images = points.flatMap(({ fraction }) => star(fraction, group))
  for (let n = 1; n < LARGEST_DENOMINATOR; n++)
    if (images.every(k => Math.abs(k[i] * n - Math.round(k[i] * n)) <= SAME)) return n
  return LARGEST_DENOMINATOR
}

const diagonalEdits = ({ text }: Context, { rows }: SupercellBlock, larger: readonly number[]) =>
  replaceVector(
    text,
    rows[0]!,
    rows[0]!.items.map((_, i) => String(larger[i])),
  )
