import type { SamplingBlock, Span } from '../../format/model.ts'
import { formatNumber } from '../../format/numbers.ts'
import { replaceValue } from '../../format/edits.ts'
import type { Crystal } from '../../meaning/crystal.ts'
import { inverseLength, plain } from '../../meaning/wording.ts'
import type { Check, Context, Related } from '../check.ts'
import { type Sampled, type SampledPath, sampledPath, stepOf } from './walked.ts'

interface Facts {
  /** How many times the longest step is the shortest. */
  readonly ratio: number
}

export const samplingUneven: Check<Facts> = {
  id: 'sampling-uneven',
  severity: 'info',
  needs: ['labels', 'frames.points'],
  summary: 'The densities of points differ more than threefold between segments of the path.',
  why: 'The short segments cost as much as the long ones, and a crossing or an extremum in the long ones is easily missed.',
  wrong:
    'lattice: {bravais: tP, a: 3.9, c: 16}\npath: Γ – X – M – Γ – Z – R – A – Z | X – R | M – A\nsampling: {steps: 40}\n',
  right:
    'lattice: {bravais: tP, a: 3.9, c: 16}\npath: Γ – X – M – Γ – Z – R – A – Z | X – R | M – A\nsampling: {spacing: 0.02}\n',
  *run(context) {
    const { crystal, document } = context
    const path = sampledPath(crystal)
    const pair = path && extremes(path)
    if (!path || !pair || !document.path) return
    const { dense, sparse } = pair
    const ratio = stepOf(sparse) / stepOf(dense)
    if (ratio <= MOST * (1 + ROUNDING)) return
    const { unit } = crystal
    const block = document.sampling
    const stated = block?.steps ?? block?.total
    const at: Span = sparse.own ?? dense.own ?? stated?.at ?? block?.at ?? document.path.key
    yield {
      at,
      message: `The steps differ ${plain(ratio, 1)}-fold: ${inverseLength(stepOf(sparse), unit, 3)} in ${sparse.name}, ${inverseLength(stepOf(dense), unit, 3)} in ${dense.name}.`,
      facts: { ratio },
      subject: 'sampling',
      related: related([sparse, dense], crystal),
      fixes: sparse.own || dense.own ? [] : oneSpacing(context, path, block),
    }
  },
}

/** Three steps for one is what equal numbers make of the book's own path of a face-centred cubic lattice. */
const MOST = 3
const ROUNDING = 1e-9

/** The longest and the shortest step. One step is the least that a short segment can have, so it is not dense by choice. */
function extremes({ segments }: SampledPath): { dense: Sampled; sparse: Sampled } | undefined {
  // Where a segment asks for more points than the others, that is what was wanted.
  const [dense, sparse] = [segments.filter(({ steps, own }) => steps > 1 && !own), segments]
  const allOwn = segments.filter(({ steps, own }) => steps > 1 && own)
  const [shortest] = byStep(dense)
  const [shortestOwn] = byStep(allOwn)
  const longest = byStep(sparse).at(-1)
  const longestOwn = byStep(allOwn).at(-1)
  if (shortest && longest && ratio(longest, shortest) > MOST) return { dense: shortest, sparse: longest }
  if (shortestOwn && longestOwn) return { dense: shortestOwn, sparse: longestOwn }
  return shortest && longest ? { dense: shortest, sparse: longest } : undefined
}

const ratio = (sparse: Sampled, dense: Sampled): number => stepOf(sparse) / stepOf(dense)
const byStep = (segments: readonly Sampled[]): Sampled[] =>
  [...segments].sort((a, b) => stepOf(a) - stepOf(b))

const related = (segments: readonly Sampled[], { unit }: Crystal): Related[] =>
  segments.flatMap(segment =>
    segment.at
      ? [
          {
            at: segment.at,
            message: `${segment.name}: ${segment.steps} steps of ${inverseLength(stepOf(segment), unit, 3)}`,
          },
        ]
      : [],
  )

/** The spacing that gives about as many points. */
function oneSpacing({ text }: Context, { segments }: SampledPath, block: SamplingBlock | undefined) {
  const entry = block?.keys.get(block.steps ? 'steps' : 'total')
  if (!entry) return []
  const [length, steps] = [sum(segments.map(s => s.length)), sum(segments.map(s => s.steps))]
  const spacing = formatNumber(Number((length / steps).toPrecision(2)))
  const edits = [{ at: entry.key, text: 'spacing' }, replaceValue(text, entry, spacing)]
  return [{ title: `Use one spacing of ${spacing}`, safe: false, edits }]
}

const sum = (numbers: readonly number[]): number => numbers.reduce((a, b) => a + b, 0)
