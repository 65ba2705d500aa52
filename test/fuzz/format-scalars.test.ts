/** Values of scalars and the places of their characters, against the YAML library's own reading. */
import fc from 'fast-check'
import { expect, test } from 'vitest'
import { CST, Parser } from 'yaml'
import { readScalar } from '../../server/src/format/scalar.ts'

type ScalarToken = CST.FlowScalar | CST.BlockScalar

/** The first scalar under the key `k` of a text. */
function scalarOf(text: string): ScalarToken | undefined {
  const [document] = new Parser().parse(text)
  if (document?.type !== 'document' || document.value?.type !== 'block-map') return undefined
  const { value } = document.value.items[0]
  return CST.isScalar(value) ? value : undefined
}

const piece = fc.constantFrom(
  'Γ',
  'X',
  ' – ',
  ' ',
  '  ',
  '\t',
  '\n',
  '\n\n',
  '\r\n',
  "''",
  '|',
  '\\n',
  '\\u0393',
  '\\\n',
  'a',
  '1/2',
  '\\x41',
  '\\"',
  '\\\\',
  ' #',
  '.',
  '"',
  "'",
)
const content = fc.array(piece, { maxLength: 14 }).map(pieces => pieces.join(''))
/** Continuation lines are indented, by one blank more than needed here and there. */
const indented = (text: string, by: string) => text.replace(/\n/g, `\n${by}`)

const styles: readonly ((text: string) => string)[] = [
  text => `k: ${indented(text, '  ')}\n`,
  text => `k: '${indented(text, '  ')}'\n`,
  text => `k: "${indented(text, '   ')}"\n`,
  text => `k: |\n  ${indented(text, '  ')}\nl: 1\n`,
  text => `k: >\n  ${indented(text, '  ')}\nl: 1\n`,
  text => `k: >-\n   ${indented(text, '   ')}\n`,
  text => `k: |+\n  ${indented(text, '  ')}\n\n\nl: 1\n`,
  text => `k: >2-\n  ${indented(text, '  ')}\nl: 1\n`,
  text => `k: | # note\n\n  ${indented(text, '  ')}`,
]

test('every character has a place, and a character that stands in the source stands there', () => {
  let traced = 0
  fc.assert(
    fc.property(content, fc.constantFrom(...styles), (text, style) => {
      const source = style(text)
      const token = scalarOf(source)
      if (!token) return
      const { value, place } = readScalar(token)
      expect(value).toBe(CST.resolveAsScalar(token, false, () => {})!.value)
      let before = token.offset
      for (let i = 0; i < value.length; i++) {
        const [start, end] = place(i, i + 1)
        expect(start).toBeGreaterThanOrEqual(before)
        expect(end).toBeLessThanOrEqual(source.length)
        expect(end).toBeGreaterThanOrEqual(start)
        before = start
        if (/[ΓX–|a12.]/.test(value[i]) && end - start === 1) {
          expect(source.slice(start, end)).toBe(value[i])
          traced++
        }
      }
    }),
    { numRuns: 5000 },
  )
  expect(traced).toBeGreaterThan(5000)
})

test('the place is exact: our reading agrees with the library wherever the library has no complaint', () => {
  fc.assert(
    fc.property(content, fc.constantFrom(...styles), (text, style) => {
      const source = style(text)
      const token = scalarOf(source)
      if (!token) return
      let faults = 0
      const value = CST.resolveAsScalar(token, false, () => faults++)!.value
      if (faults > 0 || value.trim().length < 2) return
      const { place } = readScalar(token)
      const [first, last] = [place(0, 1), place(value.length - 1, value.length)]
      expect(first[0], JSON.stringify([source, value])).not.toBe(last[0])
    }),
    { numRuns: 5000 },
  )
})
