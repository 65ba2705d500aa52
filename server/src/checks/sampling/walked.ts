/** The path as it is sampled, segment by segment, for the rules. */
import { type StepRule, segmentSteps } from '../../crystal/path.ts'
import type { Span } from '../../format/model.ts'
import { displayLabel } from '../../format/path.ts'
import type { Crystal } from '../../meaning/crystal.ts'
import { stepRule, walkedPath } from '../../meaning/sampling.ts'
import { once } from '../atoms/contacts.ts'
import { isScaleSuspected, suspectedFrame } from '../atoms/suspicions.ts'
import { diagnose, isInDoubt } from '../points/diagnosis.ts'

export interface Sampled {
  /** `Γ–X` */
  readonly name: string
  /** In the file's inverse unit; over 0. */
  readonly length: number
  readonly steps: number
  /** Where the segment stands in a path that is written out. */
  readonly at?: Span
  /** Its own number of steps. */
  readonly own?: Span
}

export interface SampledPath {
  readonly rule: StepRule
  readonly segments: readonly Sampled[]
}

/** undefined where a length is not known, or is in doubt. */
export const sampledPath = once((crystal): SampledPath | undefined => {
  if (!crystal.lattice || isScaleSuspected(crystal) || suspectedFrame(crystal)) return undefined
  const walked = walkedPath(crystal)
  const segments = walked.flatMap(piece => piece.segments)
  const diagnosis = diagnose(crystal)
  const isKnown = segments.every(({ from, to }) =>
    [from, to].every(point => point && !isInDoubt(diagnosis, point.label)),
  )
  if (!isKnown || segments.length === 0) return undefined
  const rule = stepRule(crystal)
  const steps = segmentSteps(
    segments.map(({ length, steps }) => ({ length: length!, own: steps })),
    rule,
  )
  const written = writtenSegments(crystal)
  const sampled = segments.map(({ from, to, length }, i): Sampled => {
    const segment = written[i]
    const name = `${displayLabel(from!.label)}–${displayLabel(to!.label)}`
    return { name, length: length!, steps: steps[i], at: segment?.at, own: segment?.steps?.at }
  })
  return { rule, segments: sampled.filter(({ length }) => length > 0) }
})

const writtenSegments = ({ document }: Crystal) =>
  document.path?.recommended ? [] : (document.path?.pieces ?? []).flatMap(({ segments }) => segments)

export const stepOf = ({ length, steps }: Sampled): number => length / steps
