/**
 * Outputs as people see them. The files under golden/ are rewritten by `npx vitest run test/unit/exchange/golden.test.ts -u`
 * and read in review, number by number.
 */
import pc from 'picocolors'
import { describe, expect, test } from 'vitest'
import { tally } from '../../../server/src/exchange/findings-json.ts'
import { closingLine, findingsText } from '../../../server/src/exchange/findings-text.ts'
import { reportMarkdown } from '../../../server/src/exchange/report-markdown.ts'
import { reportText } from '../../../server/src/exchange/report-text.ts'
import { checked, fixture, NAMES, reports } from './support.ts'

const plain = pc.createColors(false)

describe.each(NAMES)('%s', name => {
  const file = `${name}.lattice.yaml`
  test('findings', async () => {
    const found = checked(fixture(name), file)
    const text = findingsText(found, plain) + closingLine(tally(found.findings), 1, plain)
    await expect(`${text}\n`).toMatchFileSnapshot(`golden/${name}.findings.txt`)
  })
  test('report', async () => {
    const texts = reports(fixture(name), file).map(report => reportText(report, plain))
    await expect(texts.join('\n\n')).toMatchFileSnapshot(`golden/${name}.report.txt`)
  })
  test('report in Markdown', async () => {
    await expect(reports(fixture(name), file).map(reportMarkdown).join('\n')).toMatchFileSnapshot(
      `golden/${name}.report.md`,
    )
  })
})
