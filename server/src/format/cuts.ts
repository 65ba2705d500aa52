/** A text with stretches cut out, and the way back from an offset in it to the whole text. */
import type { Span } from './model.ts'

export class Cuts {
  /** What is left. */
  readonly text: string
  /** Where the cuts are in it, and how much has been left out up to there. */
  private readonly places: number[] = []
  private readonly shifts: number[] = []

  /** @param cuts stretches of `whole`, in order. */
  constructor(whole: string, cuts: readonly Span[]) {
    const kept: string[] = []
    let from = 0
    let removed = 0
    for (const [start, end] of cuts) {
      kept.push(whole.slice(from, start))
      this.places.push(start - removed)
      removed += end - start
      this.shifts.push(removed)
      from = end
    }
    kept.push(whole.slice(from))
    this.text = kept.join('')
  }

  /** Where a character stands in the whole text. */
  back(offset: number): number {
    const { places, shifts } = this
    let low = 0
    let high = places.length
    while (low < high) {
      const middle = (low + high) >> 1
      if (places[middle] <= offset) low = middle + 1
      else high = middle
    }
    return low === 0 ? offset : offset + shifts[low - 1]
  }

  /** An end belongs to the character before it: a cut that follows is outside. */
  readonly span = (start: number, end: number): Span =>
    end > start ? [this.back(start), this.back(end - 1) + 1] : [this.back(start), this.back(start)]
}
