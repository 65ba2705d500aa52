/** What the threads of a verb over many files say to each other. */

/** What a verb does with one file, in words that can go from thread to thread. */
export interface FileResult<T> {
  /** undefined where the work could not be done. */
  readonly value?: T
  /** What is to be told, in order. */
  readonly said: readonly { readonly to: 'result' | 'note' | 'fail'; readonly text: string }[]
}
export type FileWork<T> = (name: string) => Promise<FileResult<T>>

/** What a thread does with the names that it is given: one after another, however long each takes. */
export function inTurn(work: (name: string) => Promise<void>): (name: string) => void {
  let last = Promise.resolve()
  return name => {
    last = last.then(() => work(name))
  }
}

/** Which verb a thread works for, and how. */
export interface FileTask {
  readonly verb: 'check' | 'report'
  readonly how: unknown
}

/** A thread that works on one file after another, and answers in the order in which it was given them. */
export interface FileWorker {
  post(name: string): void
  terminate(): void
}
export type StartFileWorker = (
  task: FileTask,
  answer: (result: FileResult<unknown>) => void,
  /** The thread is gone, once. */
  failed: (reason: string) => void,
) => FileWorker
