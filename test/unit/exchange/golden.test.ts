/**
 * Outputs as people see them. The files under golden/ are rewritten by `npx vitest run test/unit/exchange/golden.test.ts -u`
 * and read in review, number by number.
 */
import pc from 'picocolors'
import { describe, expect, test } from 'vitest'
import type { DocumentFinding } from '../../../server/src/analysis.ts'
import { tally } from '../../../server/src/exchange/findings-json.ts'
import { closingLine, findingsText } from '../../../server/src/exchange/findings-text.ts'
import { reportMarkdown } from '../../../server/src/exchange/report-markdown.ts'
import { reportText } from '../../../server/src/exchange/report-text.ts'
import { checked, fixture, fullReports, NAMES, reports } from './support.ts'

const plain = pc.createColors(false)

describe.each(NAMES)('%s', name => {
  const file = `${name}.lattice.yaml`
  test('report', async () => {
    const texts = reports(fixture(name), file).map(report => reportText(report, plain))
    await expect(texts.join('\n\n')).toMatchFileSnapshot(`golden/${name}.report.txt`)
  })
  test('report in Markdown', async () => {
    // The figure has tests of its own.
    const text = reportMarkdown(fullReports(fixture(name), file)).replace(/(?<=;base64,).*/g, '…')
    await expect(text).toMatchFileSnapshot(`golden/${name}.report.markdown.txt`)
  })
})

test('findings', async () => {
  const { snapshot } = checked(fixture('draft'))
  const span = (piece: string): [number, number] => {
    const at = snapshot.text.indexOf(piece)
    return [at, at + piece.length]
  }
  // Made for this test: the sentences of real rules may be reworded on any day.
  const findings: DocumentFinding[] = [
    {
      document: 1,
      rule: 'a-rule',
      severity: 'error',
      at: span('[0.75, 0, 0]'),
      message: 'What is wrong, by how much, and what would be right.',
      related: [{ at: span('Pb'), message: 'What else it is about.' }],
      fixes: [
        { title: 'Replace it by something', safe: true, edits: [] },
        { title: 'Remove it', safe: false, edits: [] },
      ],
    },
    {
      document: 1,
      rule: 'another-rule',
      severity: 'warning',
      at: span('atoms:\n  - Pb'),
      message: 'A finding over two lines.',
    },
    {
      document: 1,
      rule: 'a-third-rule',
      severity: 'info',
      at: [snapshot.text.length, snapshot.text.length],
      message: 'At the end.',
    },
  ]
  const text = findingsText({ file: 'draft.lattice.yaml', snapshot, findings }, plain)
  await expect(`${text}${closingLine(tally(findings), 1, plain)}\n`).toMatchFileSnapshot(
    'golden/findings.txt',
  )
})
