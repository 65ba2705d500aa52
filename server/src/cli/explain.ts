import type { Check } from '../checks/check.ts'
import { CHECKS } from '../checks/index.ts'
import { inColumns, wrap } from '../exchange/layout.ts'
import { nearest } from '../format/nearest.ts'
import { Refusal } from './io.ts'
import { type Call, CLEAN, type Verb } from './verb.ts'

const WIDTH = 92

export const explain: Verb = {
  name: 'explain',
  operands: '[RULE…]',
  summary: 'what a rule finds and why it matters; without a rule, the list of all',
  about: ['A rule is named by the id that stands in brackets after a finding.'],
  options: [],
  examples: ['braggline explain', 'braggline explain point-outside-zone'],

  async run({ given, io }: Call): Promise<number> {
    const { operands } = given
    if (operands.length === 0) io.out.write(list())
    else io.out.write(operands.map(id => pageOf(ruleOf(id))).join('\n\n'))
    return CLEAN
  },
}

function ruleOf(id: string): Check {
  const rule = CHECKS.find(check => check.id === id)
  if (rule) return rule
  const near = nearest(
    id,
    CHECKS.map(check => check.id),
  )
  throw new Refusal(
    `no rule ${id}${near ? `; did you mean ${near}?` : ''} (\`braggline explain\` lists them)`,
  )
}

const list = (): string => {
  const rows = CHECKS.map(({ id, severity, summary }) => [id, severity, summary])
  return `${inColumns(rows, ['left', 'left', 'left']).join('\n')}\n`
}

function pageOf({ id, severity, summary, why, wrong, right }: Check): string {
  const file = (text: string) =>
    text
      .trimEnd()
      .split('\n')
      .map(line => `    ${line}`.trimEnd())
  const lines = [
    `${id} (${severity})`,
    '',
    ...wrap(summary, WIDTH),
    '',
    ...wrap(why, WIDTH),
    '',
    'Wrong:',
    '',
    ...file(wrong),
    '',
    'Right:',
    '',
    ...file(right),
  ]
  return `${lines.join('\n')}\n`
}
