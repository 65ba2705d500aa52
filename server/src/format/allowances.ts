/** Comments `# braggline: allow RULE[, RULE…]`. */
import { nearest } from './nearest.ts'
import type { Allowance, Problem, Sourced, Span } from './model.ts'
import { LineCounter, lineStart } from './text.ts'
import type { Comment } from './yaml.ts'

const INSTRUCTION = /^#+[ \t]*braggline[ \t]*:[ \t]*/i
const ALLOW = 'allow'
const RULE = /[^\s,]+/g

export interface Allowances {
  readonly allowances: readonly Allowance[]
  readonly problems: readonly Problem[]
}

/**
 * Which rules are silenced on which lines. A comment at the end of a line speaks of that line; one that stands alone
 * speaks of the next line that is no comment. Where a text over several lines begins or ends on that line, all of its
 * lines are covered, since none of them can hold a comment.
 */
export function readAllowances(
  text: string,
  comments: readonly Comment[],
  multiline: readonly Span[],
): Allowances {
  const allowances: Allowance[] = []
  const problems: Problem[] = []
  if (!comments.some(comment => INSTRUCTION.test(comment.text))) return { allowances, problems }
  const targets = targetLines(text, comments)
  const stretches = stretchesOf(text, multiline)
  for (const [i, comment] of comments.entries()) {
    const head = INSTRUCTION.exec(comment.text)
    const rules = head && readInstruction(text, comment, head[0].length, problems)
    if (!rules) continue
    const [from, to] = stretches.get(targets[i]) ?? [targets[i], targets[i]]
    for (let line = from; line <= to; line++) allowances.push({ line, rules })
  }
  return { allowances, problems }
}

/** The line that each comment speaks of. */
function targetLines(text: string, comments: readonly Comment[]): number[] {
  const lines = new LineCounter(text)
  const own = comments.map(({ at }) => lines.lineOf(at[0]))
  const alone = comments.map(({ at }) => /^\s*$/.test(text.slice(lineStart(text, at[0]), at[0])))
  const targets = [...own]
  for (let i = comments.length - 1; i >= 0; i--) {
    if (!alone[i]) continue
    const followed = i + 1 < comments.length && alone[i + 1] && own[i + 1] === own[i] + 1
    targets[i] = followed ? targets[i + 1] : own[i] + 1
  }
  return targets
}

/** Texts over several lines by their first and by their last line. */
function stretchesOf(
  text: string,
  spans: readonly Span[],
): Map<number, readonly [first: number, last: number]> {
  const lines = new LineCounter(text)
  const stretches = new Map<number, readonly [number, number]>()
  for (const [start, end] of spans) {
    const stretch = [lines.lineOf(start), lines.lineOf(end)] as const
    for (const line of stretch) stretches.set(line, stretch)
  }
  return stretches
}

function readInstruction(
  whole: string,
  { at }: Comment,
  start: number,
  problems: Problem[],
): Sourced<string>[] | undefined {
  const text = whole.slice(...at)
  const word = /^[^\s,:]*/.exec(text.slice(start))![0]
  const place: Span = [at[0] + start, at[0] + start + word.length]
  if (word !== ALLOW) {
    const near = nearest(word, [ALLOW])
    const what = word === '' ? 'here is nothing' : `\`${word}\` is no instruction`
    const message = `A comment can say \`braggline: allow RULE\`; ${what}.`
    const fixes = near
      ? [{ title: `Replace by \`${near}\``, safe: true, edits: [{ at: place, text: near }] }]
      : []
    problems.push({ rule: 'key-unknown', at: word === '' ? at : place, message, fixes })
    return undefined
  }
  const from = start + word.length
  const rules = [...text.slice(from).matchAll(RULE)].map(({ 0: value, index }) => {
    const offset = at[0] + from + index
    return { value, at: [offset, offset + value.length] as const }
  })
  if (rules.length > 0) return rules
  problems.push({
    rule: 'value-type',
    at: place,
    message: 'The rule that is allowed is missing: `# braggline: allow RULE`.',
  })
  return undefined
}
