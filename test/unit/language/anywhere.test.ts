/** Nothing that anyone types makes a feature throw or answer with places outside the text. */
import fc from 'fast-check'
import { expect, test } from 'vitest'
import type { Range } from 'vscode-languageserver-types'
import type { Snapshot } from '../../../server/src/analysis.ts'
import { formatting, formattingOnType } from '../../../server/src/language/formatting.ts'
import { codeLenses, resolveLens } from '../../../server/src/language/code-lens.ts'
import { type HintData, inlayHints, resolveHint } from '../../../server/src/language/inlay-hints.ts'
import { foldingRanges } from '../../../server/src/language/folding.ts'
import { documentLinks } from '../../../server/src/language/links.ts'
import { definition, highlights, references } from '../../../server/src/language/references.ts'
import { prepareRename, rename } from '../../../server/src/language/rename.ts'
import { selectionRanges } from '../../../server/src/language/selection.ts'
import { semanticTokens } from '../../../server/src/language/semantic-tokens.ts'
import { symbols } from '../../../server/src/language/symbols.ts'
import { SAMPLES, spoiled } from '../../fuzz/format-samples.ts'
import { snapshotOf } from '../checks/harness.ts'
import { DEMO_FILES } from './marks.ts'

const RUNS = Number(process.env.FUZZ_RUNS ?? 150)
const HINTS = { pathLengths: true, zoneNumbers: true, meshCounts: true, volume: true }
const FORMATTING = { tabSize: 2, columns: true, enDash: true }
const KNOWN = new Set(['path-misses', 'point-rounded'])

function holds(snapshot: Snapshot, { start, end }: Range): void {
  const [from, to] = [snapshot.offsetOf(start), snapshot.offsetOf(end)]
  expect(from).toBeGreaterThanOrEqual(0)
  expect(to).toBeGreaterThanOrEqual(from)
  expect(to).toBeLessThanOrEqual(snapshot.text.length)
}

function askOfText(snapshot: Snapshot): void {
  for (const lineFoldingOnly of [true, false])
    for (const { startLine, endLine } of foldingRanges(snapshot, { lineFoldingOnly })) {
      expect(endLine).toBeGreaterThan(startLine)
      expect(endLine).toBeLessThanOrEqual(snapshot.lineOf(snapshot.text.length))
    }
  for (const { range } of documentLinks(snapshot, 'file:///rules', KNOWN)) holds(snapshot, range)
  for (const { range } of symbols(snapshot)) holds(snapshot, range)
  const whole = { start: snapshot.positionOf(0), end: snapshot.positionOf(snapshot.text.length) }
  for (const hint of inlayHints(snapshot, 'file:///x', whole, HINTS)) {
    expect(String(hint.label).length).toBeLessThanOrEqual(24)
    const { tooltip } = resolveHint(snapshot, hint, hint.data as HintData, HINTS)
    expect(tooltip).not.toMatch(/NaN|undefined|Infinity|\[object/)
  }
  for (const lens of codeLenses(snapshot, 'file:///x', true)) {
    holds(snapshot, lens.range)
    const { command } = lens.command ? lens : resolveLens(snapshot, lens, lens.data, true)
    expect(command!.title).not.toMatch(/NaN|undefined|Infinity|\[object/)
    expect(command!.title).not.toBe('')
  }
  for (const { range } of formatting(snapshot, FORMATTING)) holds(snapshot, range)
  const data = semanticTokens(snapshot)
  for (let i = 0; i < data.length; i += 5) {
    expect(data[i] > 0 || data[i + 1] > 0 || i === 0).toBe(true)
    expect(data[i + 2]).toBeGreaterThan(0)
  }
}

function askAt(snapshot: Snapshot, offset: number): void {
  for (const { range } of definition(snapshot, 'file:///x', offset)) holds(snapshot, range)
  for (const { range } of references(snapshot, 'file:///x', offset, true)) holds(snapshot, range)
  for (const { range } of highlights(snapshot, offset)) holds(snapshot, range)
  const position = snapshot.positionOf(offset)
  for (const typed of ['\n', '-'])
    for (const { range } of formattingOnType(snapshot, position, typed, FORMATTING)) holds(snapshot, range)
  const prepared = prepareRename(snapshot, offset)
  if (prepared && 'range' in prepared) holds(snapshot, prepared.range)
  const edits = rename(snapshot, offset, 'N')
  if (Array.isArray(edits)) for (const { range } of edits) holds(snapshot, range)
  const [selection] = selectionRanges(snapshot, [position])
  for (let step = selection; step; step = step.parent!) {
    holds(snapshot, step.range)
    if (!step.parent) break
    const [inner, outer] = [step.range, step.parent.range]
    expect(snapshot.offsetOf(outer.start)).toBeLessThanOrEqual(snapshot.offsetOf(inner.start))
    expect(snapshot.offsetOf(outer.end)).toBeGreaterThanOrEqual(snapshot.offsetOf(inner.end))
  }
}

test.each([...DEMO_FILES, ...SAMPLES.map((text, i) => [`sample ${i}`, text] as const)])(
  'at every place of %s',
  (_, text) => {
    const snapshot = snapshotOf(text)
    askOfText(snapshot)
    for (let offset = 0; offset <= text.length; offset++) askAt(snapshot, offset)
  },
)

const TEXTS = [...DEMO_FILES.map(([, text]) => text), ...SAMPLES]
const truncated = fc
  .tuple(fc.constantFrom(...TEXTS), fc.nat(), fc.nat())
  .map(
    ([text, at, length]) =>
      text.slice(0, at % (text.length + 1)) + text.slice((at % (text.length + 1)) + (length % 40)),
  )

test.each([
  ['cut short or with a gap', truncated],
  ['spoiled', spoiled],
])('in a text that is %s', (_, texts) =>
  fc.assert(
    fc.property(texts, fc.nat(), (text, place) => {
      const snapshot = snapshotOf(text)
      askOfText(snapshot)
      for (const offset of [0, place % (text.length + 1), text.length]) askAt(snapshot, offset)
    }),
    { numRuns: RUNS },
  ),
)
