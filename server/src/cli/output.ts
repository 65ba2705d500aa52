/** Files that are written whole or not at all. */
import { chmodSync, existsSync, realpathSync, renameSync, rmSync, statSync, writeFileSync } from 'node:fs'
import { basename, dirname, join, resolve } from 'node:path'
import { harmless } from '../exchange/layout.ts'
import { coloured } from './colour.ts'
import { reason } from './files.ts'
import { type Io, Refusal } from './io.ts'
import { Progress } from './progress.ts'

/**
 * Write beside the target, then rename: a reader sees the old content or the new one. A link stays a link and the
 * permissions stay. An interrupt that comes in the middle is obeyed after the rename.
 * @throws Refusal saying why it could not be written; nothing is left behind then.
 */
export async function replaceFile(path: string, content: string, shown: string): Promise<void> {
  let interrupted = false
  const onInterrupt = () => {
    interrupted = true
  }
  process.on('SIGINT', onInterrupt)
  process.on('SIGTERM', onInterrupt)
  let temporary: string | undefined
  try {
    const exists = existsSync(path)
    const target = exists ? realpathSync(path) : path
    if (exists && !statSync(target).isFile())
      throw new Refusal(`${shown}: is no file that could be written over`)
    temporary = join(dirname(target), `.${basename(target)}.${crypto.randomUUID()}.tmp`)
    writeFileSync(temporary, content, { flag: 'wx' })
    if (exists) chmodSync(temporary, statSync(target).mode & 0o7777)
    renameSync(temporary, target)
  } catch (error) {
    if (temporary) rmSync(temporary, { force: true })
    throw error instanceof Refusal ? error : new Refusal(`${shown}: cannot be written: ${reason(error)}`)
  } finally {
    await new Promise(resolve => setImmediate(resolve))
    process.off('SIGINT', onInterrupt)
    process.off('SIGTERM', onInterrupt)
  }
  if (interrupted) process.exit(INTERRUPTED)
}
/** 128 + the number of SIGINT, as shells tell it. */
const INTERRUPTED = 130

/**
 * Where a verb's words go: results to standard output as they come, or to a file in one piece at the end; all else to
 * standard error. The progress line gives way to either.
 */
export class Desk {
  readonly failures: string[] = []
  readonly #kept: string[] = []
  readonly #progress: Progress

  /**
   * @param output the file that was asked for.
   * @throws Refusal, before any work, where it is there and may not be replaced.
   */
  constructor(
    private readonly io: Io,
    private readonly output: string | undefined,
    overwrite: boolean,
  ) {
    if (output !== undefined && !overwrite && existsSync(resolve(io.cwd, output)))
      throw new Refusal(`${output} is there already: give --overwrite to replace it`)
    this.#progress = new Progress(io)
  }

  /** Colour goes to a terminal only. */
  get coloured(): boolean {
    return this.output === undefined && coloured(this.io)
  }

  progress(text: string): void {
    this.#progress.show(text)
  }

  result(text: string): void {
    this.#progress.clear()
    if (this.output === undefined) this.io.out.write(text)
    else this.#kept.push(text)
  }

  note(text: string): void {
    this.#progress.clear()
    this.io.err.write(text)
  }

  /** Something that could not be done; the rest is done all the same. */
  fail(failure: string): void {
    this.failures.push(failure)
    this.note(`braggline: ${harmless(failure)}\n`)
  }

  async close(): Promise<void> {
    this.#progress.clear()
    if (this.output !== undefined && this.#kept.length > 0)
      await replaceFile(resolve(this.io.cwd, this.output), this.#kept.join(''), this.output)
  }
}
