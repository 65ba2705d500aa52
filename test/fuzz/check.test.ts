/** Whatever is done to a lattice file, the pipeline gives findings or nothing: 20,000 random edits of the demo files. */
import { readdirSync, readFileSync } from 'node:fs'
import { join } from 'node:path'
import fc from 'fast-check'
import { expect, test } from 'vitest'
import { snapshotOf } from '../unit/checks/harness.ts'

const FILES = ['demo', 'demo/drafts'].flatMap(folder =>
  readdirSync(folder)
    .filter(name => name.endsWith('.lattice.yaml'))
    .map(name => readFileSync(join(folder, name), 'utf8')),
)
const LINES = FILES.flatMap(text => text.split('\n'))
const WORDS = [...new Set(FILES.flatMap(text => text.match(/[\p{L}\d./'²-]+|[^\s\p{L}\d]/gu) ?? []))]

type Edit = (text: string) => string

const place = fc.double({ min: 0, max: 1, noNaN: true })
const at = (text: string, x: number) => Math.floor(x * text.length)

/** Bytes: cut a run out, put something in, double a run. */
const bytes: fc.Arbitrary<Edit> = fc.oneof(
  fc.tuple(place, fc.nat(12)).map(
    ([x, n]): Edit =>
      text =>
        text.slice(0, at(text, x)) + text.slice(at(text, x) + n),
  ),
  fc.tuple(place, fc.string({ unit: 'binary', maxLength: 6 })).map(
    ([x, s]): Edit =>
      text =>
        text.slice(0, at(text, x)) + s + text.slice(at(text, x)),
  ),
  fc
    .tuple(
      place,
      fc.constantFrom(
        '[',
        ']',
        '{',
        '}',
        ':',
        '- ',
        '&a ',
        '*a',
        '|',
        '–',
        '\t',
        '"',
        '#',
        '\u0000',
        '\ud800',
        '---\n',
      ),
    )
    .map(
      ([x, s]): Edit =>
        text =>
          text.slice(0, at(text, x)) + s + text.slice(at(text, x)),
    ),
  fc.tuple(place, fc.nat(40)).map(
    ([x, n]): Edit =>
      text =>
        text.slice(0, at(text, x) + n) + text.slice(at(text, x)),
  ),
)
/** Structure: lines and words moved between files, numbers made absurd. */
const structure: fc.Arbitrary<Edit> = fc.oneof(
  fc.tuple(place, fc.constantFrom(...LINES)).map(
    ([x, line]): Edit =>
      text => {
        const lines = text.split('\n')
        lines.splice(Math.floor(x * lines.length), 0, line)
        return lines.join('\n')
      },
  ),
  fc.tuple(place, fc.nat(3)).map(
    ([x, n]): Edit =>
      text => {
        const lines = text.split('\n')
        lines.splice(Math.floor(x * lines.length), n)
        return lines.join('\n')
      },
  ),
  fc.tuple(place, fc.constantFrom(...WORDS)).map(
    ([x, word]): Edit =>
      text => {
        const words = text.match(/[\p{L}\d./'²-]+|[^\p{L}\d]/gu) ?? []
        words[Math.floor(x * words.length)] = word
        return words.join('')
      },
  ),
  fc
    .tuple(
      place,
      fc.constantFrom(
        '0',
        '-1',
        '1e308',
        '1e-300',
        '1/0',
        '0.3333',
        'sqrt(-1)',
        'a',
        '9007199254740993',
        '1e5',
      ),
    )
    .map(
      ([x, number]): Edit =>
        text => {
          const numbers = [...text.matchAll(/\d[\d./]*/g)]
          const found = numbers[Math.floor(x * numbers.length)]
          return found
            ? text.slice(0, found.index) + number + text.slice(found.index + found[0].length)
            : text
        },
    ),
)

const edited = (edit: fc.Arbitrary<Edit>) =>
  fc
    .tuple(fc.constantFrom(...FILES), fc.array(edit, { minLength: 1, maxLength: 5 }))
    .map(([text, edits]) => edits.reduce((t, e) => e(t), text))

test.each([
  ['bytes', bytes],
  ['structure', structure],
])('random edits of %s never break the checks', (_, edit) => {
  fc.assert(
    fc.property(edited(edit), text => {
      const snapshot = snapshotOf(text)
      for (const { at, rule, message, fixes = [] } of snapshot.findings) {
        expect(rule, message).not.toBe('check-failed')
        expect(message).not.toMatch(/NaN|undefined|Infinity|\[object/)
        for (const [start, end] of [at, ...fixes.flatMap(fix => fix.edits.map(edit => edit.at))]) {
          expect(start).toBeGreaterThanOrEqual(0)
          expect(end).toBeGreaterThanOrEqual(start)
          expect(end).toBeLessThanOrEqual(text.length)
        }
      }
    }),
    { numRuns: 10_000, seed: 20261201 },
  )
})
