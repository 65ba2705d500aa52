/** The list of refactorings, and how they reach an editor: titles at once, edits when one of them is chosen. */
import type { CodeAction, Range, TextEdit as LspEdit, WorkspaceEdit } from 'vscode-languageserver-types'
import type { Snapshot } from '../../analysis.ts'
import { rangeOf } from '../diagnostics.ts'
import { type EditAbilities, type EditedText, workspaceEdit } from '../workspace-edit.ts'
import { restateCell } from './cell.ts'
import { restateAtoms, restatePoints } from './frames.ts'
import { extractPoint, forgetPoint } from './labels.ts'
import { restateMesh } from './mesh.ts'
import type { Change, Offer, Refactor, Spot } from './refactor.ts'
import { sortAtoms } from './sort-atoms.ts'
import { rewriteForSupercell, supercellOffers } from './supercell.ts'

export const REFACTORS: readonly Refactor[] = [
  rewriteForSupercell,
  restateCell,
  restatePoints,
  restateAtoms,
  sortAtoms,
  extractPoint,
  forgetPoint,
  restateMesh,
]

/** What the client can do with an answer. */
export interface Abilities extends EditAbilities {
  /** It asks for the edit of an action when it is chosen. */
  readonly resolves: boolean
}

export interface RefactorRequest {
  readonly uri: string
  readonly version: number | null
  readonly range: Range
  /** Kinds asked for; all where absent. */
  readonly only?: readonly string[]
}

/** How an action is found again when it is chosen. */
export interface RefactorData {
  readonly uri: string
  readonly version: number | null
  readonly refactor: string
  readonly key: string
  readonly offset: number
}

export function refactorActions(
  snapshot: Snapshot,
  { uri, version, range, only }: RefactorRequest,
  abilities: Abilities,
): CodeAction[] {
  const wanted = REFACTORS.filter(
    ({ kind }) => !only || only.some(asked => kind === asked || kind.startsWith(`${asked}.`)),
  )
  const offset = snapshot.offsetOf(range.start)
  const spot = wanted.length > 0 ? spotAt(snapshot, offset) : undefined
  if (!spot) return []
  return wanted.flatMap(({ id, kind, offers }) =>
    offers(spot).flatMap((offer): CodeAction[] => {
      const { key, title } = offer
      if (abilities.resolves) {
        const data: RefactorData = { uri, version, refactor: id, key, offset }
        return [{ title, kind, data }]
      }
      const change = offer.change()
      return change
        ? [{ title, kind, edit: toWorkspaceEdit(snapshot, { uri, version }, title, change, abilities) }]
        : []
    }),
  )
}

/** The edit of an action that was chosen; undefined where the text does not allow it, or has changed since. */
export function resolveRefactor(
  snapshot: Snapshot,
  { uri, version, refactor, key, offset }: RefactorData,
  abilities: Abilities,
): WorkspaceEdit | undefined {
  if (snapshot.version !== version) return undefined
  const spot = spotAt(snapshot, offset)
  const offer =
    spot &&
    REFACTORS.find(({ id }) => id === refactor)
      ?.offers(spot)
      .find(each => each.key === key)
  const change = offer?.change()
  return change && toWorkspaceEdit(snapshot, { uri, version }, offer!.title, change, abilities)
}

/** The edits that rewrite the document at a place for its supercell, wherever in it the place is. */
export function supercellEdit(snapshot: Snapshot, offset: number): LspEdit[] | undefined {
  const spot = spotAt(snapshot, offset)
  const offer: Offer | undefined = spot && supercellOffers(spot)[0]
  const edits = offer?.change()?.edits
  return edits && inText(snapshot, edits)
}

function spotAt(snapshot: Snapshot, offset: number): Spot | undefined {
  const analysis = snapshot.documentAt(offset)
  return analysis && { snapshot, text: snapshot.text, offset, ...analysis }
}

const inText = (snapshot: Snapshot, edits: Change['edits']): LspEdit[] =>
  edits.map(({ at, text }) => ({ range: rangeOf(snapshot, at), newText: text }))

const toWorkspaceEdit = (
  snapshot: Snapshot,
  text: EditedText,
  title: string,
  { edits, confirm }: Change,
  abilities: Abilities,
): WorkspaceEdit =>
  workspaceEdit(
    text,
    inText(snapshot, edits),
    abilities,
    confirm === undefined ? undefined : { label: title, description: confirm },
  )
