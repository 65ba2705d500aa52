import { expect, test } from 'vitest'
import { Snapshot } from '../../../server/src/analysis.ts'
import { fullReport } from '../../../server/src/exchange/report-full.ts'
import { reportMarkdown } from '../../../server/src/exchange/report-markdown.ts'
import { statusOf } from '../../../server/src/language/status.ts'
import { type SymmetryOutcome, Workshop } from '../../../server/src/meaning/workshop.ts'

const snapshotOf = (text: string, outcome: SymmetryOutcome) =>
  new Snapshot(text, new Workshop({ find: () => ({ outcome }) }))
const GIVEN_UP: SymmetryOutcome = { state: 'failed', reason: 'it took longer than 20 s' }
const TEXT = 'lattice: {bravais: cP, a: 4}\natoms:\n  - Po: [0, 0, 0]\n'

test('a search that was given up is a limit, in the status and in the report', () => {
  const snapshot = snapshotOf(TEXT, GIVEN_UP)
  const told = 'nothing that needs the symmetry was checked: it took longer than 20 s'
  expect(statusOf(snapshot, 'a')).toMatchObject({ pending: false, limits: [told] })
  expect(reportMarkdown([fullReport('a', snapshot, snapshot.documents[0])])).toContain(`- limit: ${told}`)
})

test('of several crystals it is said which', () =>
  expect(statusOf(snapshotOf(`${TEXT}---\n${TEXT}`, GIVEN_UP), 'a').limits).toEqual([
    expect.stringMatching(/^document 1: /),
    expect.stringMatching(/^document 2: /),
  ]))

test('no limit while a search runs, nor where an error says what is wrong', () => {
  expect(statusOf(snapshotOf(TEXT, { state: 'pending' }), 'a')).toMatchObject({ pending: true, limits: [] })
  const wrong = `${TEXT}  - Po: [0, 0, 0]\n`
  expect(statusOf(snapshotOf(wrong, GIVEN_UP), 'a')).toMatchObject({ errors: 1, limits: [] })
})
