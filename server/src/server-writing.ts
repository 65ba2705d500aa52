/** Wires what helps to write a file and to look things up in it: completion, signatures, hovers, skeletons. */
import type { ClientCapabilities, Connection, ServerCapabilities } from 'vscode-languageserver'
import { completion, resolved } from './language/completion.ts'
import type { Abilities } from './language/completion/item.ts'
import { hover } from './language/hover.ts'
import { signature } from './language/signature.ts'
import { SKELETONS } from './language/skeletons.ts'
import { SKELETON_LIST, type SkeletonsResult } from './protocol.ts'
import type { About } from './server-answers.ts'

export interface Surroundings {
  readonly connection: Connection
  readonly about: About
  readonly capabilities: () => ClientCapabilities
  /** The client has commands that a hover may link to. */
  readonly hasCommands: () => boolean
}

export const WRITING: ServerCapabilities = {
  hoverProvider: true,
  completionProvider: { triggerCharacters: [' ', '–', '-', '→', '|', ':', '['], resolveProvider: true },
  signatureHelpProvider: { triggerCharacters: ['['], retriggerCharacters: [',', '[', ']'] },
}

export function serveWriting({ connection, about, capabilities, hasCommands }: Surroundings): void {
  connection.onHover(
    about('hover', null, (snapshot, { position }) => hover(snapshot, position, { links: hasCommands() })),
  )
  connection.onCompletion(
    about('completion', [], (snapshot, { position, context }) =>
      completion(
        snapshot,
        position,
        abilitiesOf(capabilities(), hasCommands()),
        context?.triggerCharacter !== undefined,
      ),
    ),
  )
  connection.onCompletionResolve(resolved)
  connection.onSignatureHelp(
    about('signature', null, (snapshot, { position }) => signature(snapshot, position)),
  )
  connection.onRequest(
    SKELETON_LIST,
    (): SkeletonsResult => ({
      skeletons: SKELETONS.map(({ id, name, system, asks, group, text }) => ({
        id,
        name,
        system,
        asks,
        group,
        text,
      })),
    }),
  )
}

/** A client that has the extension's commands is the extension, in an editor whose own commands are known. */
function abilitiesOf({ textDocument }: ClientCapabilities, hasCommands: boolean): Abilities {
  const item = textDocument?.completion?.completionItem
  return {
    snippets: item?.snippetSupport === true,
    insertReplace: item?.insertReplaceSupport === true,
    labelDetails: item?.labelDetailsSupport === true,
    indents: item?.insertTextModeSupport !== undefined,
    asksAgain: hasCommands,
  }
}
