/** How many points a path gets. Paths are lengths here: labels and places are not known. */

/** How the steps of a path are chosen: one distance for all, one number for all, or a sum to be shared out. */
export type StepRule =
  /** The largest distance between neighbours, in the unit of the lengths. */
  | { readonly kind: 'spacing'; readonly spacing: number }
  /** The same number of steps in every segment. */
  | { readonly kind: 'steps'; readonly steps: number }
  /** The number of steps of the whole path, shared out by length. */
  | { readonly kind: 'total'; readonly total: number }

export interface SegmentLength {
  /** In the unit of a `spacing`; 0 or more. */
  readonly length: number
  /** The number of steps that this segment itself asks for; it wins over the rule. */
  readonly own?: number
}

/** A length that is a whole number of spacings up to rounding must not get a step more. Relative. */
const ROUNDING = 1e-9

/**
 * The number of steps of each segment of a path, 1 at least: n steps give n + 1 points.
 *
 * A `total` counts the steps of the whole path, those that segments ask for themselves included. What is left is shared
 * out in proportion to length by largest remainders (the first segment wins a tie), so that the sum is the total unless
 * there are more segments than steps.
 */
export function segmentSteps(segments: readonly SegmentLength[], rule: StepRule): number[] {
  if (rule.kind === 'total') return shareOut(segments, rule.total)
  return segments.map(
    ({ length, own }) => own ?? (rule.kind === 'steps' ? rule.steps : stepsAtSpacing(length, rule.spacing)),
  )
}

/** max(1, ⌈length / spacing⌉). */
export const stepsAtSpacing = (length: number, spacing: number): number =>
  Math.max(1, Math.ceil((length / spacing) * (1 - ROUNDING)))

function shareOut(segments: readonly SegmentLength[], total: number): number[] {
  const steps = segments.map(({ own }) => own ?? 1)
  let open = segments.flatMap(({ own }, i) => (own === undefined ? [i] : []))
  let left = total - segments.reduce((sum, { own }) => sum + (own ?? 0), 0)
  for (;;) {
    const length = open.reduce((sum, i) => sum + segments[i].length, 0)
    const quota = (i: number) => (left * segments[i].length) / length
    // A segment whose share is under one step has one all the same: the others share what is left.
    const long = length > 0 ? open.filter(i => quota(i) >= 1) : []
    if (long.length === open.length) {
      largestRemainders(open, quota, left, steps)
      return steps
    }
    left -= open.length - long.length
    open = long
  }
}

function largestRemainders(
  open: readonly number[],
  quota: (i: number) => number,
  left: number,
  steps: number[],
): void {
  for (const i of open) steps[i] = Math.floor(quota(i) * (1 + ROUNDING))
  const remainder = (i: number) => quota(i) - steps[i]
  const rest = left - open.reduce((sum, i) => sum + steps[i], 0)
  const byRemainder = [...open].sort((i, j) =>
    Math.abs(remainder(j) - remainder(i)) > ROUNDING ? remainder(j) - remainder(i) : i - j,
  )
  for (const i of byRemainder.slice(0, Math.max(0, rest))) steps[i]++
}

/** How many points are listed: joints of a piece once, both ends at a break. One list of steps a piece. */
export const listedPoints = (pieces: readonly (readonly number[])[]): number =>
  pieces.reduce((sum, steps) => sum + 1 + steps.reduce((a, b) => a + b, 0), 0)
