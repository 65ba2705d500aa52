import { readFileSync } from 'node:fs'
import { join } from 'node:path'
import { Ajv } from 'ajv'
import pc from 'picocolors'
import { describe, expect, test } from 'vitest'
import { CHECKS } from '../../../server/src/checks/index.ts'
import { page } from '../../../server/src/checks/page.ts'
import { type CheckedFile, checkJson, findingsJson } from '../../../server/src/exchange/findings-json.ts'
import { closingLine, findingsText } from '../../../server/src/exchange/findings-text.ts'
import { Positions } from '../../../server/src/exchange/positions.ts'
import { sarifLog, sarifPart } from '../../../server/src/exchange/sarif.ts'
import { closed } from './closed.ts'
import { checked, fixture, NAMES } from './support.ts'

const plain = pc.createColors(false)

describe('positions', () => {
  test('columns count characters, also beyond the first plane, and lines end with \\r\\n too', () => {
    const { snapshot } = checked('title: 😀é\r\nx: 1\r\n')
    const positions = new Positions(snapshot)
    const at = (piece: string) => positions.at(snapshot.text.indexOf(piece))
    expect(at('é')).toEqual({ line: 1, column: 9 })
    expect(at('x')).toEqual({ line: 2, column: 1 })
    expect(positions.region([0, 5])).toEqual({ line: 1, column: 1, endLine: 1, endColumn: 6 })
  })
  test('of findings far along one long line are right in any order', () => {
    const { snapshot } = checked(`a: ${'😀x'.repeat(500)}\nb: 😀y\n`)
    const positions = new Positions(snapshot)
    const column = (offset: number) => [...snapshot.text.split('\n')[0].slice(0, offset)].length + 1
    for (const offset of [3, 900, 903, 6, 1503, 1502])
      expect(positions.at(offset)).toEqual({ line: 1, column: column(offset) })
    expect(positions.at(snapshot.text.indexOf('y'))).toEqual({ line: 2, column: 5 })
    expect(positions.at(900)).toEqual({ line: 1, column: column(900) })
  })
})

describe('JSON', () => {
  test('says where and what, by the contract’s names', () => {
    const [finding] = findingsJson(
      checked('title: 😀\nlattice: {bravais: cF, a: 5.43}\n😀: 1\nmeesh: 1\n'),
    ).filter(({ line }) => line === 4)
    expect(finding).toMatchObject({
      file: 'a.lattice.yaml',
      document: 1,
      rule: 'key-unknown',
      severity: 'error',
      line: 4,
      column: 1,
      endLine: 4,
      endColumn: 6,
    })
    expect(Object.keys(finding).sort()).toEqual(
      [
        'column',
        'document',
        'endColumn',
        'endLine',
        'file',
        'fixes',
        'line',
        'message',
        'related',
        'rule',
        'severity',
      ].sort(),
    )
    expect(finding.fixes.length).toBeGreaterThan(0)
  })
  test('counts what it lists', () => {
    const json = checkJson(
      ['draft', 'silicon'].flatMap(name => findingsJson(checked(fixture(name)))),
      2,
    )
    expect(json.files).toBe(2)
    expect(json.errors + json.warnings + json.infos).toBe(json.findings.length)
    expect(json.errors).toBeGreaterThan(0)
  })
  test.each(NAMES)('%s: every finding fits the published schema, which allows nothing else', name => {
    const schema = JSON.parse(
      readFileSync(
        join(import.meta.dirname, '../../../server/src/exchange/schema/finding.schema.json'),
        'utf8',
      ),
    )
    const validate = new Ajv({ strict: true }).compile(closed(schema))
    for (const finding of findingsJson(checked(fixture(name))))
      expect(validate(finding), JSON.stringify(validate.errors)).toBe(true)
  })
})

describe('SARIF', () => {
  const rules = CHECKS.map(rule => ({ ...rule, page: page(rule) }))
  const log = (file: CheckedFile) =>
    sarifLog([sarifPart(file, 0, rules)], { version: '1.0.0', rules, failures: [] })
  // OASIS, SARIF 2.1.0, JSON Schema rtm.5 (draft 4: `id` is left out, nothing else differs from draft 7 in it).
  const {
    id: _,
    $schema: __,
    ...official
  } = JSON.parse(readFileSync(join(import.meta.dirname, '../../reference/sarif-2.1.0.schema.json'), 'utf8'))
  const validate = new Ajv({ strict: false, validateFormats: false, unicodeRegExp: false }).compile(official)

  test.each(NAMES)('%s fits the standard’s own schema', name => {
    expect(validate(log(checked(fixture(name)))), JSON.stringify(validate.errors)).toBe(true)
  })
  test('the schema of the test refuses what is wrong', () => {
    const bad = JSON.parse(JSON.stringify(log(checked(fixture('draft')))))
    bad.runs[0].results[0].level = 'info'
    expect(validate(bad)).toBe(false)
  })
  test('rules are found by their index, artifacts too, and fixes delete what they say', () => {
    const file = checked(fixture('draft'), 'new runs/dräft#1.lattice.yaml')
    const [run] = log(file).runs
    expect(run.artifacts![0].location!.uri).toBe('new%20runs/dr%C3%A4ft%231.lattice.yaml')
    for (const result of run.results!)
      expect(run.tool.driver.rules![result.ruleIndex!].id).toBe(result.ruleId)
    const lines = file.snapshot.text.split('\n')
    const fixed = run.results!.find(({ ruleId }) => ruleId === 'key-unknown')!
    const { deletedRegion: at } = fixed.fixes![0].artifactChanges[0].replacements[0]
    expect(lines[at.startLine! - 1].slice(at.startColumn! - 1, at.endColumn! - 1)).toBe('meesh')
  })
  test.each([
    ['-', 'stdin'],
    ['/runs/a b.yaml', 'file:///runs/a%20b.yaml'],
    ['runs\\a.yaml', 'runs/a.yaml'],
    ['C:\\runs\\a.yaml', 'file:///C:/runs/a.yaml'],
  ])('the file %s is %s', (file, uri) => {
    expect(log(checked('', file)).runs[0].artifacts![0].location!.uri).toBe(uri)
  })
  test('what could not be read is told, and the run was no success', () => {
    const [run] = sarifLog([], { version: '1.0.0', rules, failures: ['a: permission denied'] }).runs
    expect(run.invocations![0]).toMatchObject({
      executionSuccessful: false,
      toolExecutionNotifications: [{ message: { text: 'a: permission denied' } }],
    })
  })
})

describe('text', () => {
  test('the marks stand under what is marked, whatever its width', () => {
    const text = findingsText(checked('title: x\n"鉛鉛": 1\nlattice: {bravais: cP, a: 4}\n'), plain)
    const lines = text.split('\n')
    const at = lines.findIndex(line => line.includes('鉛鉛') && line.startsWith('    '))
    expect(lines[at + 1]).toMatch(/^ {4}~+$/)
  })
  test('a long line is cut around what is marked', () => {
    const text = findingsText(
      checked(
        `lattice: {bravais: cP, a: 4}\npoints: {${' '.repeat(300)}X: [1/2, 0, oops], ${'Y: [0, 0, 0],'.repeat(100)}}\n`,
      ),
      plain,
    )
    expect(text).toContain('oops')
    for (const line of text.split('\n')) if (line.startsWith('    ')) expect(line.length).toBeLessThan(130)
  })
  test('the closing line', () => {
    expect(closingLine({ errors: 1, warnings: 2, infos: 1 }, 3, plain)).toBe(
      '4 findings in 3 files: 1 error, 2 warnings, 1 for information.',
    )
    expect(closingLine({ errors: 0, warnings: 0, infos: 1 }, 1, plain)).toBe(
      '1 finding in 1 file: 1 for information.',
    )
    expect(closingLine({ errors: 0, warnings: 0, infos: 0 }, 2, plain)).toBe('No findings in 2 files.')
  })
})
