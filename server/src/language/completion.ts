/** Completion: what may be written at a place. The list comes from the text round the cursor; its long words from `resolve`. */
import type { CompletionItem, Position } from 'vscode-languageserver-types'
import type { Snapshot } from '../analysis.ts'
import { keyDocumentation } from '../format/keys.ts'
import { aboutElement, aboutGroup, aboutRule, aboutWord } from './about.ts'
import { type Abilities, type Asked, NO_ABILITIES } from './completion/item.ts'
import { keyItems } from './completion/keys.ts'
import { placeAt } from './completion/place.ts'
import { commentItems } from './completion/rules.ts'
import { valueItems } from './completion/values.ts'

export function completion(
  snapshot: Snapshot,
  position: Position,
  abilities: Abilities = NO_ABILITIES,
  unasked = false,
): CompletionItem[] {
  const offset = snapshot.offsetOf(position)
  const asked: Asked = { snapshot, offset, place: placeAt(snapshot.text, offset), abilities, unasked }
  switch (asked.place.kind) {
    case 'key':
      return keyItems(asked)
    case 'value':
      return valueItems(asked)
    case 'comment':
      return commentItems(asked)
  }
}

/** The item with its documentation. */
export function resolved(item: CompletionItem): CompletionItem {
  const text = typeof item.data === 'string' ? longWords(item.data) : undefined
  return text === undefined ? item : { ...item, documentation: { kind: 'markdown', value: text } }
}

function longWords(data: string): string | undefined {
  const [kind, name, word = ''] = data.split(':')
  switch (kind) {
    case 'key':
      return keyDocumentation(name.split('.'))
    case 'word':
      return aboutWord(name, word)
    case 'book':
      return aboutWord('labels', name)
    case 'element':
      return aboutElement(name)
    case 'rule':
      return aboutRule(name)
    case 'group':
      return aboutGroup(Number(name))
    default:
      return undefined
  }
}
