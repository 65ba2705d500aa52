/** Who runs the search for symmetry: at once where it is quick, else a worker with a time limit. */
import { findSymmetry, type SymmetryInput } from './crystal/symmetry.ts'
import type { SymmetryJob, SymmetryOutcome, SymmetryService } from './meaning/workshop.ts'

/** Cells of up to this many atoms take a few milliseconds at the worst and need no worker. */
export const QUICK_ATOMS = 64
/** A cell that takes longer than this is given up, with a word about it. */
export const TIME_LIMIT_MS = 20_000

/** Never throws: a failure is an outcome. */
export function searchSymmetry(input: SymmetryInput): SymmetryOutcome {
  try {
    const found = findSymmetry(input)
    return 'failed' in found ? { state: 'failed', reason: found.failed } : { state: 'found', symmetry: found }
  } catch (error) {
    return { state: 'failed', reason: error instanceof Error ? error.message : String(error) }
  }
}

/** Searches at once, whatever it takes. */
export const directSymmetry: SymmetryService = { find: input => ({ outcome: searchSymmetry(input) }) }

/** A worker that answers one search after another; `terminate` ends it in the middle of one. */
export interface SearchWorker {
  postMessage(input: SymmetryInput): void
  terminate(): void
}
export type StartWorker = (
  answer: (outcome: SymmetryOutcome) => void,
  failed: (reason: string) => void,
) => SearchWorker

interface Job extends SymmetryJob {
  outcome: SymmetryOutcome
  dropped: boolean
}

/** More searches than this do not wait: the oldest belong to texts that are gone. */
const MOST_WAITING = 8

/**
 * Small cells at once, large ones in a worker, one after another. A search that was asked for later goes first: the
 * text has moved on. What waits beyond a few is dropped, and begun anew when it is asked for again.
 */
export class WorkerSymmetry implements SymmetryService {
  #worker: SearchWorker | undefined
  #running: Job | undefined
  #timer: ReturnType<typeof setTimeout> | undefined
  readonly #waiting: { job: Job; input: SymmetryInput }[] = []
  readonly #idle: (() => void)[] = []

  constructor(
    private readonly start: StartWorker,
    /** Called after each search that ran in the worker. */
    private readonly done: () => void = () => {},
    private readonly limit = TIME_LIMIT_MS,
  ) {}

  find(input: SymmetryInput): SymmetryJob {
    if (input.positions.length <= QUICK_ATOMS) return { outcome: searchSymmetry(input) }
    const job: Job = { outcome: { state: 'pending' }, dropped: false }
    this.#waiting.push({ job, input })
    if (this.#waiting.length > MOST_WAITING) this.#waiting.shift()!.job.dropped = true
    this.#next()
    return job
  }

  /** Resolves when nothing runs or waits. */
  idle(): Promise<void> {
    if (!this.#running) return Promise.resolve()
    return new Promise(resolve => this.#idle.push(resolve))
  }

  dispose(): void {
    clearTimeout(this.#timer)
    this.#worker?.terminate()
    this.#worker = undefined
    this.#waiting.length = 0
  }

  #next(): void {
    if (this.#running) return
    const next = this.#waiting.pop()
    if (!next) {
      for (const resolve of this.#idle.splice(0)) resolve()
      return
    }
    this.#running = next.job
    this.#worker ??= this.start(
      outcome => this.#end(outcome),
      reason => this.#giveUp(reason),
    )
    this.#timer = setTimeout(
      () => this.#giveUp(`the search took longer than ${this.limit / 1000} s`),
      this.limit,
    )
    this.#worker.postMessage(next.input)
  }

  #end(outcome: SymmetryOutcome): void {
    clearTimeout(this.#timer)
    const job = this.#running
    this.#running = undefined
    if (job) job.outcome = outcome
    this.done()
    this.#next()
  }

  #giveUp(reason: string): void {
    this.#worker?.terminate()
    this.#worker = undefined
    if (this.#running) this.#end({ state: 'failed', reason })
  }
}
