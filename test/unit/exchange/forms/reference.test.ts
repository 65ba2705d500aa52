/** The page, the published schema and the filters say what is so. */
import { readFileSync } from 'node:fs'
import Ajv from 'ajv'
import { describe, expect, test } from 'vitest'
import { FILTER_NAMES, OWN_FILTERS } from '../../../../server/src/exchange/forms/filters.ts'
import { EXAMPLE_FORM, EXAMPLE_TEXT, formsPage } from '../../../../server/src/exchange/forms/reference.ts'
import { formDataSchema } from '../../../../server/src/exchange/forms/schema.ts'
import { demo, fill, known } from './support.ts'

test('the page is up to date: npm run generate', () => {
  expect(readFileSync(new URL('../../../../docs/forms.md', import.meta.url), 'utf8')).toBe(formsPage())
})

test('the example of the page gives what stands below it', () => {
  expect(fill(EXAMPLE_FORM)).toBe(EXAMPLE_TEXT)
})

test.each(OWN_FILTERS)('| $name: its example', ({ example: [form, gives] }) => {
  expect(fill(form)).toBe(gives)
})

test('no filter stands twice', () => expect(new Set(FILTER_NAMES).size).toBe(FILTER_NAMES.length))

describe('the data of every demo file have the published shape, nothing missing and nothing more', () => {
  const valid = new Ajv({ strict: true, allowUnionTypes: true }).compile(formDataSchema())
  const LISTS = ['irreduciblePoints allPoints sampled']
  test.each([
    ...[
      'lead-telluride',
      'layered-telluride',
      'hexagonal-oxide',
      'orthorhombic-selenide',
      'monoclinic-oxide',
    ],
    ...['sheet', 'triclinic-candidate', 'survey'],
  ])('%s', name => {
    for (const texts of [[], LISTS]) {
      const { data } = known(demo(`${name}.lattice.yaml`), texts) as { data: object }
      expect(valid(data), JSON.stringify(valid.errors)).toBe(true)
    }
  })
  test.each([
    ['a chain', 'lattice: {vectors: [[3, 0, 0]]}\npath: recommended\nmesh: {divisions: [8]}\n'],
    [
      'a sheet without height',
      'lattice: {bravais: tp, a: 3}\natoms: [{B: [0, 0, 0]}]\nmesh: {divisions: [4, 4]}\n',
    ],
    ['nothing but a lattice', 'lattice: {bravais: cP, a: 4}\n'],
    ['no lattice', 'title: nothing yet\n'],
    [
      'a flat one',
      'lattice: {vectors: [[1, 0, 0], [0, 1, 0], [1, 1, 0]]}\npath: Γ – X\nmesh: {divisions: [2, 2, 2]}\n',
    ],
  ])('%s', (_, text) => {
    const { data } = known(text, LISTS) as { data: object }
    expect(valid(data), JSON.stringify(valid.errors)).toBe(true)
  })
})
