/** From what the user names to texts: files, folders, globs, standard input. */
import { readFileSync, statSync } from 'node:fs'
import { isAbsolute, join, relative, resolve } from 'node:path'
import { glob, isDynamicPattern } from 'tinyglobby'
import { type Io, Refusal } from './io.ts'

export const STANDARD_INPUT = '-'
const LATTICE_FILES = '**/*.lattice.{yaml,yml}'
const NEVER_SEARCHED = ['**/node_modules/**', '**/.git/**']

/** Where names of files are looked up, and what - stands for. */
export type Place = Pick<Io, 'cwd' | 'readInput'>

export interface LatticeText {
  /** As it was asked for. */
  readonly name: string
  /** undefined for standard input. */
  readonly path?: string
  readonly text: string
  /** The file began with a byte order mark, which is no part of `text`. */
  readonly mark: boolean
}

/**
 * The names behind the operands, each once, in the order of the operands.
 * @returns what was named and is not there, a sentence each, beside the names.
 */
export async function findFiles(
  operands: readonly string[],
  { cwd }: Io,
): Promise<{ names: string[]; failures: string[] }> {
  if (operands.length === 0)
    throw new Refusal(
      `no file is named: give a file, a folder, a glob or ${STANDARD_INPUT} for standard input`,
    )
  const found = new Map<string, string>()
  const failures: string[] = []
  for (const operand of operands) {
    const { names, failure } = await named(operand, cwd)
    for (const name of names) {
      const key = name === STANDARD_INPUT ? name : resolve(cwd, name)
      if (!found.has(key)) found.set(key, name)
    }
    if (failure) failures.push(failure)
  }
  return { names: [...found.values()], failures }
}

async function named(operand: string, cwd: string): Promise<{ names: string[]; failure?: string }> {
  if (operand === STANDARD_INPUT) return { names: [operand] }
  const kind = kindOf(resolve(cwd, operand))
  if (kind === 'file') return { names: [operand] }
  if (kind === 'folder') {
    const names = (await search(LATTICE_FILES, resolve(cwd, operand))).map(name => join(operand, name))
    return names.length > 0 ? { names } : { names, failure: `${operand}: no *.lattice.yaml in this folder` }
  }
  if (!isDynamicPattern(operand)) return { names: [], failure: `${operand}: ${kind}` }
  const names = await search(operand.replaceAll('\\', '/'), cwd)
  return names.length > 0 ? { names } : { names, failure: `${operand}: no file fits` }
}

async function search(pattern: string, cwd: string): Promise<string[]> {
  const names = await glob(pattern, {
    cwd,
    ignore: NEVER_SEARCHED,
    onlyFiles: true,
    absolute: isAbsolute(pattern),
  })
  return names.map(name => (isAbsolute(pattern) ? name : relative(cwd, resolve(cwd, name)))).sort()
}

/** `file`, `folder`, or why it is neither. */
function kindOf(path: string): string {
  try {
    return statSync(path).isDirectory() ? 'folder' : 'file'
  } catch (error) {
    return reason(error)
  }
}

/** What the system said, as people say it. */
export function reason(error: unknown): string {
  const code = (error as NodeJS.ErrnoException).code ?? ''
  return REASONS[code] ?? (error instanceof Error ? error.message : String(error)).split('\n')[0]
}
const REASONS: Record<string, string> = {
  ENOENT: 'no such file or folder',
  ENOTDIR: 'no such file or folder',
  EACCES: 'permission denied',
  EPERM: 'permission denied',
  EROFS: 'the file system is read-only',
  EISDIR: 'is a folder',
  ELOOP: 'links lead in a circle',
  ENAMETOOLONG: 'the name is too long',
  ENOSPC: 'no space left on the device',
  EMFILE: 'too many open files',
}

/** @throws Refusal saying why the file could not be read as text. */
export async function readText(name: string, io: Place, what = 'lattice file'): Promise<LatticeText> {
  if (name === STANDARD_INPUT) return decoded(name, undefined, await io.readInput(), what)
  const path = resolve(io.cwd, name)
  return decoded(name, path, bytesOf(path, name), what)
}

function bytesOf(path: string, name: string): Uint8Array {
  try {
    return readFileSync(path)
  } catch (error) {
    throw new Refusal(`${name}: ${reason(error)}`)
  }
}

function decoded(name: string, path: string | undefined, bytes: Uint8Array, what: string): LatticeText {
  if (bytes.includes(0))
    throw new Refusal(
      `${name}: ${startsUtf16(bytes) ? 'UTF-16 text: save it as UTF-8' : `a binary file, no ${what}`}`,
    )
  try {
    const text = new TextDecoder('utf-8', { fatal: true, ignoreBOM: true }).decode(bytes)
    const mark = text.startsWith(BYTE_ORDER_MARK)
    return { name, path, text: mark ? text.slice(1) : text, mark }
  } catch {
    throw new Refusal(`${name}: not UTF-8 text`)
  }
}
const BYTE_ORDER_MARK = '\ufeff'

const startsUtf16 = (bytes: Uint8Array): boolean =>
  (bytes[0] === 0xff && bytes[1] === 0xfe) || (bytes[0] === 0xfe && bytes[1] === 0xff)

/** The text as it goes back into its file. */
export const encoded = (text: string, { mark }: LatticeText): string => (mark ? BYTE_ORDER_MARK + text : text)
