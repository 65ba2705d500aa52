/** Layout changes no value and no comment, and twice is once, whatever the text. */
import fc from 'fast-check'
import { readdirSync, readFileSync } from 'node:fs'
import { join } from 'node:path'
import { expect, test } from 'vitest'
import { decode } from '../../server/src/format/decode.ts'
import { applyEdits } from '../../server/src/format/edits.ts'
import { layoutEdits } from '../../server/src/format/layout.ts'
import type { LatticeDocument, Span } from '../../server/src/format/model.ts'
import { SyntaxTree } from '../../server/src/format/tree.ts'
import { readYaml } from '../../server/src/format/yaml.ts'
import { SAMPLES, shuffled, spiced, spoiled } from './format-samples.ts'
import { styled } from './format-styles.ts'

const RUNS = Number(process.env.FUZZ_RUNS ?? 300)

const DEMO = ['demo', 'demo/drafts'].flatMap(folder =>
  readdirSync(folder)
    .filter(name => name.endsWith('.lattice.yaml'))
    .map(name => readFileSync(join(folder, name), 'utf8')),
)

/** Everything that a document says, without places: the keys that hold places are left out. */
const PLACES = new Set(['at', 'key', 'item', 'contents', 'edits', 'problems', 'related', 'separator'])
function said(value: unknown): unknown {
  if (value instanceof Map) return [...value].map(([name, each]) => [name, said(each)])
  if (Array.isArray(value)) return value.map(said)
  if (typeof value !== 'object' || value === null) return value
  return Object.fromEntries(
    Object.entries(value)
      .filter(([name]) => !PLACES.has(name))
      .map(([name, each]) => [name, said(each)]),
  )
}
/** With the texts of all scalars, so that values which cannot be read are compared too. */
const saidOf = (text: string) => {
  const { documents, problems, allowances } = decode(text)
  const rules = (all: LatticeDocument['problems']) => all.map(({ rule, message }) => [rule, message])
  return {
    documents: said(documents),
    allowances: said(allowances),
    problems: [rules(problems), documents.map(d => rules(d.problems))],
  }
}
const commentsOf = (text: string) => readYaml(text).comments.map(comment => comment.text.trimEnd())
const isSound = (text: string) => {
  const { documents, problems } = decode(text)
  return ![...problems, ...documents.flatMap(d => d.problems)].some(({ rule }) => rule === 'yaml-syntax')
}

const options = fc.record({
  indent: fc.constantFrom(1, 2, 4),
  columns: fc.boolean(),
  enDash: fc.boolean(),
})
const layout = (text: string, chosen: { indent: number; columns: boolean; enDash: boolean }, lines?: Span) =>
  applyEdits(text, layoutEdits(SyntaxTree.of(text)!, decode(text).documents, chosen, lines))

/** Texts in blocks with comments and blank lines about them. */
const blocks = fc
  .array(
    fc.tuple(
      fc.constantFrom('', '  ', '    ', '      '),
      fc.constantFrom(
        'path: |',
        '- >-',
        'Γ – X',
        '– W',
        '# c',
        '',
        '   ',
        'title: |+',
        'x: "a',
        ' b"',
        'points:',
      ),
    ),
    { maxLength: 8 },
  )
  .map(lines => `lattice:\n   bravais: cF\n${lines.map(([blank, line]) => blank + line).join('\n')}`)

/** Blanks that are put in and taken out anywhere. */
const blanked = fc
  .tuple(
    fc.constantFrom(...DEMO, ...SAMPLES),
    fc.array(fc.tuple(fc.nat(), fc.constantFrom(' ', '  ', '   ', '\t', '\n', '\r\n', ' # c\n', '')), {
      maxLength: 12,
    }),
  )
  .map(([text, blanks]) =>
    blanks.reduce((changed, [place, blank]) => {
      const at = place % (changed.length + 1)
      return blank === ''
        ? changed.slice(0, at) + changed.slice(at).replace(/^[ \n]/, '')
        : changed.slice(0, at) + blank + changed.slice(at)
    }, text),
  )

/** Whole blocks further in. */
const indented = fc
  .tuple(fc.constantFrom(...DEMO, ...SAMPLES), fc.integer({ min: 1, max: 4 }), fc.constantFrom('\n', '\r\n'))
  .map(([text, by, feed]) =>
    text
      .split(/\r?\n/)
      .map(line => (/^ /.test(line) ? ' '.repeat(by) + line : line))
      .join(feed),
  )

function holds(
  text: string,
  chosen: { indent: number; columns: boolean; enDash: boolean },
  lines: Span,
): void {
  if (!SyntaxTree.of(text) || !isSound(text)) return
  const after = layout(text, chosen)
  const meant = saidOf(text)
  expect(saidOf(after)).toEqual(meant)
  expect(commentsOf(after)).toEqual(commentsOf(text))
  expect(layout(after, chosen)).toBe(after)
  const lineCount = (each: string) => each.trimEnd().split('\n').length
  expect(lineCount(after)).toBe(lineCount(text))
  const part = layout(text, chosen, lines)
  expect(saidOf(part)).toEqual(meant)
  expect(commentsOf(part)).toEqual(commentsOf(text))
}

const lines = fc.tuple(fc.nat(30), fc.nat(10)).map(([first, more]): Span => [first, first + more])

test.each([
  ['files of the demo and samples as they are', fc.constantFrom(...DEMO, ...SAMPLES)],
  ['with blanks anywhere', blanked],
  ['further in', indented],
  ['with texts in blocks', blocks],
  ['in every style', styled],
  ['spoiled', spoiled],
  ['shuffled', shuffled],
  ['spiced', spiced],
])('%s', (_, texts) => fc.assert(fc.property(texts, options, lines, holds), { numRuns: RUNS }))
