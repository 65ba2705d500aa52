/** Work on many files, spread over threads where that pays; results come in the order of the files. */
import { harmless } from '../exchange/layout.ts'
import { STANDARD_INPUT } from './files.ts'
import { type Io, Refusal } from './io.ts'
import { type Given, type OptionSpec, ordinal } from './options.ts'
import type { Desk } from './output.ts'
import type { FileResult, FileTask, FileWork, FileWorker } from './threads.ts'

export const JOBS: OptionSpec = {
  name: 'jobs',
  value: 'N',
  help: 'How many threads; by default one for a few files and one a core for many.',
}
export const SHARD: OptionSpec = {
  name: 'shard',
  value: 'I/N',
  help: 'Take the Ith of N parts of the files, for array jobs: every Nth file.',
}

/** The part of the files that `--shard` asks for. */
export function sharded(names: readonly string[], given: Given): readonly string[] {
  const text = given.value('shard')
  if (text === undefined) return names
  const [, part, parts] = /^(\d{1,6})\/(\d{1,6})$/.exec(text) ?? []
  if (!part || Number(part) < 1 || Number(part) > Number(parts))
    throw new Refusal(`--shard ${text}: a part and the number of parts are wanted, as in 1/4`)
  return names.filter((_, i) => i % Number(parts) === Number(part) - 1)
}

/**
 * A thread takes as long to start as some hundred ordinary files take to check (`npm run bench jobs`): for fewer files a
 * second one costs more than it saves.
 */
const WORTH_A_THREAD = 200
/** Beyond this the thread that writes the results is the slowest. */
const MOST_BY_DEFAULT = 8
/** More threads than this are a slip. */
const MOST_JOBS = 256

export function jobsFor(given: Given, files: number, { cores = 1 }: Io): number {
  const asked = ordinal(given, 'jobs')
  if (asked !== undefined && asked > MOST_JOBS)
    throw new Refusal(`--jobs ${asked} is too many: at most ${MOST_JOBS}`)
  const worth = Math.floor(files / WORTH_A_THREAD)
  return Math.max(1, Math.min(files, asked ?? Math.min(cores, worth, MOST_BY_DEFAULT)))
}

/** How far the threads may be ahead of what is written, in files: what is kept in memory. */
const AHEAD = 64

/** A thread has its next files before it is done, so that it never waits for the one that writes. */
const AT_HAND = 4

interface Hand {
  worker: FileWorker
  /** The ordinals of the files that it has, in order: it works on the first. */
  files: number[]
}

/**
 * @param local the work itself, for one thread and for standard input, which other threads cannot read.
 * @returns results in the order of the names. A thread that dies costs the file that it worked on.
 */
export async function* inOrder<T>(
  names: readonly string[],
  jobs: number,
  { startFileWorker }: Io,
  task: FileTask,
  local: FileWork<T>,
): AsyncGenerator<FileResult<T>> {
  if (jobs <= 1 || !startFileWorker) {
    for (const name of names) yield await local(name)
    return
  }
  const done = new Map<number, FileResult<T>>()
  const hands: Hand[] = []
  let next = 0
  let told = 0
  let wake = () => {}
  const give = (hand: Hand) => {
    while (hand.files.length < AT_HAND) {
      while (names[next] === STANDARD_INPUT) next++
      if (next >= names.length || next >= told + AHEAD) return
      hand.files.push(next)
      hand.worker.post(names[next++])
    }
  }
  const started = (hand: Hand): FileWorker =>
    startFileWorker(
      task,
      result => {
        done.set(hand.files.shift()!, result as FileResult<T>)
        give(hand)
        wake()
      },
      reason => {
        const at = hand.files.shift()
        if (at !== undefined)
          done.set(at, {
            said: [{ to: 'fail', text: `${names[at]}: the thread that worked on it ended: ${reason}` }],
          })
        if (hand.files.length > 0 || next < names.length) {
          hand.worker = started(hand)
          for (const file of hand.files) hand.worker.post(names[file])
          give(hand)
        }
        wake()
      },
    )
  try {
    for (let i = 0; i < jobs; i++) {
      const hand = { files: [] as number[] } as Hand
      hand.worker = started(hand)
      hands.push(hand)
      give(hand)
    }
    for (const [i, name] of names.entries()) {
      if (name === STANDARD_INPUT) yield await local(name)
      else {
        while (!done.has(i))
          await new Promise<void>(resolve => {
            wake = resolve
          })
        const result = done.get(i)!
        done.delete(i)
        yield result
      }
      told = i + 1
      for (const hand of hands) give(hand)
    }
  } finally {
    for (const { worker } of hands) worker.terminate()
  }
}

/** Tells what was said of a file. @returns its value. */
export function toldOf<T>({ value, said }: FileResult<T>, desk: Desk): T | undefined {
  for (const { to, text } of said) {
    if (to === 'result') desk.result(text)
    else if (to === 'note') desk.note(text)
    else desk.fail(text)
  }
  return value
}

/** A refusal costs a file, nothing more. */
export async function attempted<T>(work: (say: Say) => Promise<T>): Promise<FileResult<T>> {
  const said: { to: 'result' | 'note' | 'fail'; text: string }[] = []
  const say: Say = (to, text) => void said.push({ to, text })
  try {
    return { value: await work(say), said }
  } catch (error) {
    if (!(error instanceof Refusal)) throw error
    say('fail', error.message)
    return { said }
  }
}
export type Say = (to: 'result' | 'note' | 'fail', text: string) => void

export const progressOf = (doing: string, i: number, names: readonly string[]): string =>
  `${doing} file ${i + 1} of ${names.length}: ${harmless(names[i])}`
