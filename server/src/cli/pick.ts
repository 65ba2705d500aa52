import type { Snapshot } from '../analysis.ts'
import type { Crystal } from '../meaning/crystal.ts'
import { count } from '../meaning/wording.ts'
import { documentsOf, type Engine } from './engine.ts'
import { findFiles, readText } from './files.ts'
import { type Io, Refusal } from './io.ts'
import { type Given, ordinal } from './options.ts'

/** The one crystal that a verb is about, with a lattice. @throws Refusal where it is not one, or cannot be built. */
export const oneCrystal = async (given: Given, io: Io, engine: () => Engine): Promise<Crystal> =>
  (await onePick(given, io, engine)).crystal

export interface Pick {
  readonly crystal: Crystal
  readonly snapshot: Snapshot
  /** Among the documents of the snapshot, from 0. */
  readonly ordinal: number
  /** Of the file, as it was asked for. */
  readonly name: string
}

/** The same, with the text that it stands in. */
export async function onePick(given: Given, io: Io, engine: () => Engine): Promise<Pick> {
  const { names, failures } = await findFiles(given.operands, io)
  if (failures.length > 0) throw new Refusal(failures[0])
  if (names.length > 1) throw new Refusal(`one file is taken; these are ${names.length}`)
  const { name, text } = await readText(names[0], io)
  const snapshot = await engine().check(text)
  const documents = documentsOf(snapshot, name, ordinal(given, 'document'))
  if (documents.length > 1)
    throw new Refusal(`${name} holds ${count(documents.length, 'crystal')}: pick one with --document N`)
  const crystal = documents[0]?.crystal
  if (!crystal?.lattice)
    throw new Refusal(`${name} has no lattice that could be built; \`braggline check\` says why`)
  return { crystal, snapshot, ordinal: snapshot.documents.indexOf(documents[0]), name }
}
