import { nearest } from '../../format/nearest.ts'
import type { Check, Finding } from '../check.ts'
import type { Sourced } from '../../format/model.ts'
import { decodedRule } from './decoded.ts'

const decoded = decodedRule({
  id: 'key-unknown',
  summary: 'A key is none of the format, or the name of a rule is none of the rules.',
  why: 'What stands under it is not read: a misspelled key leaves its default in force.',
  wrong: 'lattice: {bravais: cF, a: 5.43}\npaths: Γ – X\n',
  right: 'lattice: {bravais: cF, a: 5.43}\npath: Γ – X\n',
})

/** Keys are known to the decoder, the names of rules only here. */
export const keyUnknown: Check = {
  ...decoded,
  *run(context) {
    yield* decoded.run(context)
    const { document, file, ruleIds } = context
    for (const [value, { key }] of document.checks)
      if (!ruleIds.has(value)) yield unknownRule({ value, at: key }, ruleIds)
    for (const { rules } of file.allowances) {
      for (const rule of rules) {
        const here = rule.at[0] >= document.at[0] && rule.at[1] <= document.at[1]
        if (here && !ruleIds.has(rule.value)) yield { ...unknownRule(rule, ruleIds), severity: 'warning' }
      }
    }
  },
}

function unknownRule({ value, at }: Sourced<string>, ruleIds: ReadonlySet<string>): Finding {
  const near = nearest(value, ruleIds)
  return {
    at,
    message: `No rule is called \`${value}\`${near ? `; did you mean \`${near}\`?` : '.'}`,
    fixes: near ? [{ title: `Replace by \`${near}\``, safe: true, edits: [{ at, text: near }] }] : [],
  }
}
