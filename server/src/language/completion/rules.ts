/** Rules and their severities, under `checks` and in `# braggline: allow …`. */
import { type CompletionItem, CompletionItemKind } from 'vscode-languageserver-types'
import { RULES } from '../../analysis.ts'
import { type Asked, both, items, type Offer } from './item.ts'

export function ruleOffers({ place }: Asked): Offer[] {
  return RULES.filter(({ id }) => !place.present.has(id)).map(({ id, summary, severity }) => ({
    label: id,
    kind: CompletionItemKind.EnumMember,
    detail: `${severity}: ${summary}`,
    description: severity,
    about: `rule:${id}`,
    ...(place.hasColon ? { text: id } : both(`${id}: \${1|off,info,warning,error|}`)),
  }))
}

const ALLOW = /^#+[ \t]*braggline[ \t]*:[ \t]*allow[ \t]+(?:[^\s,]+[\s,]+)*([^\s,]*)$/i
/** The beginning of the instruction, as far as its first letter at least. */
const BEGUN = /^#+[ \t]*(b[a-z]*(?:[ \t]*:[ \t]*[a-z]*)?)$/i

/** In a comment nothing is offered but the instruction to allow a rule, and its rules. */
export function commentItems(asked: Asked): CompletionItem[] {
  const { written } = asked.place
  const allow = ALLOW.exec(written)
  if (allow) {
    const stated = new Set(written.split(/[\s,]+/))
    const rules = ruleOffers(asked).filter(({ label }) => label === allow[1] || !stated.has(label))
    return items(
      asked,
      rules.map(({ label, ...rest }) => ({ ...rest, label, text: label, snippet: undefined })),
      allow[1].length,
      /^[\w-]*/,
    )
  }
  const begun = BEGUN.exec(written)
  const text = 'braggline: allow '
  if (!begun || !text.startsWith(begun[1].toLowerCase())) return []
  const offer = {
    label: 'braggline: allow',
    kind: CompletionItemKind.Keyword,
    text,
    detail: 'silence a rule here',
  }
  return items(asked, [offer], begun[1].length, /^[\w-]*/)
}
