/** Files that are written whole or not at all. */
import { chmodSync, existsSync, realpathSync, renameSync, rmSync, statSync, writeFileSync } from 'node:fs'
import { basename, dirname, join, resolve } from 'node:path'
import { randomBytes } from 'node:crypto'
import { reason } from './files.ts'
import { type Io, Refusal } from './io.ts'

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
    temporary = join(dirname(target), `.${basename(target)}.${randomBytes(6).toString('hex')}.tmp`)
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

/** Refuse early, before any work, to write over a file that is there. */
export function checkTarget(output: string | undefined, overwrite: boolean, { cwd }: Io): void {
  if (output !== undefined && !overwrite && existsSync(resolve(cwd, output)))
    throw new Refusal(`${output} is there already: give --overwrite to replace it`)
}

/** Results go to the file that was asked for, else to standard output. */
export async function deliver(content: string, output: string | undefined, io: Io): Promise<void> {
  if (output === undefined) io.out.write(content)
  else await replaceFile(resolve(io.cwd, output), content, output)
}
