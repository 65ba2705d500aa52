/** Elements, as items of the list of atoms. */
import { CompletionItemKind } from 'vscode-languageserver-types'
import { ELEMENTS } from '../../crystal/elements.ts'
import { type Asked, both, type Offer } from './item.ts'

/** Elements that the file has already come first: the next atom is often another one of them. */
export function elementOffers({ snapshot: { text }, place }: Asked): Offer[] {
  const used = new Set([...text.matchAll(/(?:- |[[,]\s*)([A-Z][a-z]?):/g)].map(([, symbol]) => symbol))
  const dash = place.style === 'block' && !place.inItem ? '- ' : ''
  return ELEMENTS.map(({ symbol, name, number }) => ({
    label: symbol,
    kind: CompletionItemKind.EnumMember,
    detail: `${name}, ${number}`,
    filter: `${dash}${symbol} ${name}`,
    rank: used.has(symbol) ? 2 : 5,
    about: `element:${symbol}`,
    ...(place.hasColon ? { text: symbol } : both(`${dash}${symbol}: [\${1:0}, \${2:0}, \${3:0}]`)),
  }))
}
