import { BRAVAIS } from '../../crystal/bravais.ts'
import { insertKeys } from '../../format/edits.ts'
import type { Check } from '../check.ts'
import { decodedRule } from './decoded.ts'

const decoded = decodedRule({
  id: 'key-missing',
  summary: 'A key that the file cannot do without is missing.',
  why: 'Without it there is no crystal to compute with.',
  wrong: 'lattice: {bravais: tI, a: 3.78}\n',
  right: 'lattice: {bravais: tI, a: 3.78, c: 9.51}\n',
})

/** Which parameters a Bravais type needs is known only once the type is: those are looked at here. */
export const keyMissing: Check = {
  ...decoded,
  *run(context) {
    yield* decoded.run(context)
    const { document, crystal, text } = context
    const { missing } = crystal.build
    const block = document.lattice
    if (!missing || !block?.bravais) return
    const unreadable = missing.some(name => block.keys.has(name))
    if (unreadable) return // Its value has a finding of its own.
    const type = block.bravais.value
    const names = missing.map(name => `\`${name}\``).join(' and ')
    yield {
      at: block.bravais.at,
      message: `A lattice of type ${type} (${BRAVAIS[type].words}) needs ${names}, which ${missing.length > 1 ? 'are' : 'is'} not stated.`,
      facts: { missing },
      fixes: [
        {
          title: `Insert ${names}`,
          safe: false,
          edits: insertKeys(
            text,
            block,
            missing.map(name => [name, ''] as const),
          ),
        },
      ],
    }
  },
}
