import { BRAVAIS } from '../../crystal/bravais.ts'
import { insertKeys } from '../../format/edits.ts'
import type { Check, Context, Finding } from '../check.ts'
import { decodedRule } from './decoded.ts'

const decoded = decodedRule({
  id: 'key-missing',
  summary: 'A key that the file cannot do without is missing.',
  why: 'Without it there is no crystal to compute with.',
  wrong: 'lattice: {bravais: tI, a: 3.78}\n',
  right: 'lattice: {bravais: tI, a: 3.78, c: 9.51}\n',
})

/** What the type of the lattice or the frame of the points needs is known only here. */
export const keyMissing: Check = {
  ...decoded,
  *run(context) {
    yield* decoded.run(context)
    yield* parametersOfType(context)
    yield* parameterOfFrame(context)
  },
}

function* parametersOfType({ document, crystal, text }: Context): Iterable<Finding> {
  const { missing } = crystal.build
  const block = document.lattice
  if (!missing || !block?.bravais) return
  const unreadable = missing.some(name => block.keys.has(name))
  if (unreadable) return // Its value has a finding of its own.
  const type = block.bravais.value
  const names = missing.map(name => `\`${name}\``).join(' and ')
  const keys = missing.map(name => [name, ''] as const)
  yield {
    at: block.bravais.at,
    message: `A lattice of type ${type} (${BRAVAIS[type].words}) needs ${names}, which ${missing.length > 1 ? 'are' : 'is'} not stated.`,
    facts: { missing },
    fixes: [{ title: `Insert ${names}`, safe: false, edits: insertKeys(text, block, keys) }],
  }
}

function* parameterOfFrame({ document, text }: Context): Iterable<Finding> {
  const block = document.lattice
  const frame = document.framesEntry?.points
  if (document.frames.points !== '2pi/a' || !frame || !block || block.keys.has('a')) return
  yield {
    at: frame.at,
    message: 'Points in units of 2π/a need the parameter `a`, which `lattice` does not state.',
    facts: { missing: ['a'] },
    fixes: [{ title: 'Insert `a`', safe: false, edits: insertKeys(text, block, [['a', '']]) }],
  }
}
