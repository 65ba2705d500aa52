import { stepsAtSpacing } from '../../crystal/path.ts'
import { replaceValue } from '../../format/edits.ts'
import type { Fix, SamplingBlock, TextEdit } from '../../format/model.ts'
import { formatNumber } from '../../format/numbers.ts'
import { type Crystal, DEFAULT_SPACING } from '../../meaning/crystal.ts'
import { count, inverseLength } from '../../meaning/wording.ts'
import type { Check } from '../check.ts'
import { type Sampled, sampledPath, stepOf } from './walked.ts'

interface Facts {
  /** The longest, in the file's inverse unit. */
  readonly step: number
}

/** In Å⁻¹: a fiftieth to a tenth of a usual zone's width. Crossings are lost between points so far apart. */
const COARSE = 0.1
/** A segment of few points shows no curvature unless they are as close as this, in Å⁻¹. */
const COARSE_IF_FEW = 0.05
const FEW_POINTS = 5

export const samplingCoarse: Check<Facts> = {
  id: 'sampling-coarse',
  severity: 'warning',
  needs: ['unit', 'labels', 'frames.points'],
  summary: 'Points of the path are over 0.1 Å⁻¹ apart, or over 0.05 Å⁻¹ in a segment of under five points.',
  why: 'Bands drawn through so few points cross and bend where they do not, and an extremum between two points is missed.',
  wrong: 'lattice: {bravais: cP, a: 3.9}\npath: Γ – X – M – Γ – R\nsampling: {spacing: 0.2}\n',
  right: 'lattice: {bravais: cP, a: 3.9}\npath: Γ – X – M – Γ – R\nsampling: {spacing: 0.02}\n',
  *run({ text, crystal, document }) {
    const path = sampledPath(crystal)
    if (!path) return
    const coarse = path.segments.filter(segment => isCoarse(segment, crystal))
    for (const segment of coarse) {
      if (!segment.own) continue
      const steps = String(stepsAtSpacing(segment.length, DEFAULT_SPACING * crystal.angstrom))
      const edits: TextEdit[] = [{ at: segment.own, text: steps }]
      yield {
        at: segment.own,
        message: `${describe(segment, crystal)}. ${usual(crystal)}: ${count(Number(steps), 'step')} here.`,
        facts: { step: stepOf(segment) },
        hides: HIDDEN,
        fixes: [{ title: `Give it ${steps} steps`, safe: false, edits }],
      }
    }
    const others = coarse.filter(({ own }) => !own)
    const block = document.sampling
    if (others.length === 0 || !block) return
    const worst = others.reduce((a, b) => (stepOf(b) > stepOf(a) ? b : a))
    const more =
      others.length > 1
        ? ` ${count(others.length - 1, 'other segment is', 'other segments are')} too coarse as well.`
        : ''
    yield {
      at: (block.spacing ?? block.steps ?? block.total)!.at,
      message: `${describe(worst, crystal)}.${more} ${usual(crystal)}.`,
      facts: { step: stepOf(worst) },
      hides: HIDDEN,
      related: others.flatMap(segment =>
        segment.at ? [{ at: segment.at, message: describe(segment, crystal) }] : [],
      ),
      fixes: spacingInstead(text, block, crystal),
    }
  },
}

/** Too few points in some segments are uneven as well: one mistake, one finding. */
const HIDDEN = [{ rule: 'sampling-uneven', subject: 'sampling' }]

function isCoarse(segment: Sampled, { angstrom }: Crystal): boolean {
  const step = stepOf(segment) / angstrom
  return (
    step > COARSE * (1 + ROUNDING) ||
    (segment.steps + 1 < FEW_POINTS && step > COARSE_IF_FEW * (1 + ROUNDING))
  )
}
const ROUNDING = 1e-9

const describe = (segment: Sampled, { unit }: Crystal): string =>
  `${segment.name} gets ${count(segment.steps + 1, 'point')}, ${inverseLength(stepOf(segment), unit, 3)} apart`

/** In the file's unit, two digits of it. */
const usualSpacing = ({ angstrom }: Crystal): number => Number((DEFAULT_SPACING * angstrom).toPrecision(2))

const usual = (crystal: Crystal): string =>
  `Bands take ${inverseLength(usualSpacing(crystal), crystal.unit)} or so`

function spacingInstead(text: string, block: SamplingBlock, crystal: Crystal): Fix[] {
  const name = ['spacing', 'steps', 'total'].find(key => block.keys.has(key))
  const entry = name && block.keys.get(name)
  if (!entry) return []
  const spacing = formatNumber(usualSpacing(crystal))
  const renamed: TextEdit[] = name === 'spacing' ? [] : [{ at: entry.key, text: 'spacing' }]
  return [
    {
      title: `Use a spacing of ${spacing}`,
      safe: false,
      edits: [...renamed, replaceValue(text, entry, spacing)],
    },
  ]
}
