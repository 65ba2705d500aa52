/** One item of a list: what it writes, in place of which word. */
import {
  type CompletionItem,
  type CompletionItemKind,
  InsertTextFormat,
  InsertTextMode,
} from 'vscode-languageserver-types'
import type { Snapshot } from '../../analysis.ts'
import { filledIn } from '../skeletons.ts'
import type { Place } from './place.ts'

/** What an editor can do with an item. */
export interface Abilities {
  readonly snippets: boolean
  /** It distinguishes inserting before the rest of a word and overwriting it. */
  readonly insertReplace: boolean
  /** It shows a few words beside each label. */
  readonly labelDetails: boolean
  /** It indents further lines of an item as it is told. */
  readonly indents: boolean
  /** It can be told to open its list again, which it does by the command `AGAIN`. */
  readonly asksAgain: boolean
}
const AGAIN = 'editor.action.triggerSuggest'

export const NO_ABILITIES: Abilities = {
  snippets: false,
  insertReplace: false,
  labelDetails: false,
  indents: false,
  asksAgain: false,
}

export interface Asked {
  readonly snapshot: Snapshot
  readonly offset: number
  readonly place: Place
  readonly abilities: Abilities
  /** The list opened by itself, at a character: Enter is then as likely meant for a new line. */
  readonly unasked: boolean
}

export interface Offer {
  readonly label: string
  readonly kind: CompletionItemKind
  readonly text: string
  /** In the snippet syntax; where the editor has none its defaults are written, or `text` where that is given too. */
  readonly snippet?: string
  readonly detail?: string
  /** Beside the label in the list; the detail where it is left out. */
  readonly description?: string
  /** What the list is in the order of, before the order of the offers. */
  readonly rank?: number
  /** What is typed to find it, where that is not its label. */
  readonly filter?: string
  readonly preselect?: boolean
  /** What follows is again a word from a list. */
  readonly again?: boolean
  /** What `resolve` makes the documentation from. */
  readonly about?: string
}

/** The offers as items, in their order, in place of the word that ends at the cursor and is `length` long. */
export function items(
  asked: Asked,
  offers: readonly Offer[],
  length: number,
  rest: RegExp,
): CompletionItem[] {
  const { snapshot, offset, place, abilities } = asked
  const start = snapshot.positionOf(offset - length)
  const end = snapshot.positionOf(offset)
  const beyond = /^[^\n]*/.exec(snapshot.text.slice(offset, offset + LONGEST_WORD))![0]
  const replaced = snapshot.positionOf(offset + (rest.exec(beyond)?.[0].length ?? 0))
  const lead = place.afterColon && length === offset - place.start ? ' ' : ''
  return offers.map((offer, i) => {
    const snippet = abilities.snippets && offer.snippet !== undefined
    const written = snippet ? offer.snippet! : offer.text
    const newText = /^\s/.test(written) ? written : lead + written
    const { detail, description = detail } = offer
    // The documentation begins with the same words; where they stand beside the label too, twice is enough.
    const isTold = offer.about !== undefined && abilities.labelDetails
    return {
      label: offer.label,
      kind: offer.kind,
      ...(detail && !isTold ? { detail } : {}),
      ...(description && abilities.labelDetails ? { labelDetails: { description } } : {}),
      sortText: `${offer.rank ?? 5}${String(i).padStart(3, '0')}`,
      ...(offer.filter ? { filterText: offer.filter } : {}),
      ...(offer.preselect ? { preselect: true } : {}),
      ...(offer.about ? { data: offer.about } : {}),
      ...(offer.again && abilities.asksAgain ? { command: { title: 'Suggest', command: AGAIN } } : {}),
      insertTextFormat: snippet ? InsertTextFormat.Snippet : InsertTextFormat.PlainText,
      ...(abilities.indents && newText.includes('\n')
        ? { insertTextMode: InsertTextMode.adjustIndentation }
        : {}),
      textEdit: abilities.insertReplace
        ? { newText, insert: { start, end }, replace: { start, end: replaced } }
        : { newText, range: { start, end } },
    }
  })
}
const LONGEST_WORD = 80

/** What a snippet writes for an editor that has none. */
export const both = (snippet: string): { snippet: string; text: string } => ({
  snippet,
  text: filledIn(snippet),
})
