import { readdirSync, readFileSync } from 'node:fs'
import { expect, test } from 'vitest'
import { CHECKS } from '../../../server/src/checks/index.ts'
import { contents, page } from '../../../server/src/checks/page.ts'

const read = (name: string) => readFileSync(`docs/rules/${name}`, 'utf8')

test.each(CHECKS)('the page of $id is up to date (npm run generate)', check => {
  expect(read(`${check.id}.md`)).toBe(page(check))
})

test('the list is up to date, and no page is left of a rule that is gone', () => {
  expect(read('README.md')).toBe(contents(CHECKS))
  expect(readdirSync('docs/rules').sort()).toEqual(
    [...CHECKS.map(({ id }) => `${id}.md`), 'README.md'].sort(),
  )
})
