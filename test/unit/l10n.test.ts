/** What people read in the editor can be translated. `node scripts/l10n.mjs` gathers it. */
import { readdirSync, readFileSync } from 'node:fs'
import { join } from 'node:path'
import { fileURLToPath } from 'node:url'
import { describe, expect, test } from 'vitest'

const ROOT = fileURLToPath(new URL('../..', import.meta.url))
const read = (name: string) => readFileSync(join(ROOT, name), 'utf8')
const CLIENT = readdirSync(join(ROOT, 'client/src'))
  .filter(name => name.endsWith('.ts'))
  .map(name => ({ name, text: read(`client/src/${name}`).replace(/^\s*(\/\/|\*|\/\*).*$/gm, '') }))

describe('package.json', () => {
  const manifest = read('package.json')
  const words = JSON.parse(read('package.nls.json')) as Record<string, string>
  const used = [...manifest.matchAll(/"%([^%"]+)%"/g)].map(([, key]) => key)

  test('every key that it uses has a text, and every text is used', () => {
    expect([...new Set(used)].sort()).toEqual(Object.keys(words).sort())
    for (const text of Object.values(words)) expect(text).toMatch(/\p{L}{2}/u)
  })

  test('no text stands in it', () => {
    const { contributes, capabilities, description } = JSON.parse(manifest) as Record<string, unknown>
    const names =
      /^(title|shortTitle|category|(markdown)?(d|D)(escription|eprecationMessage)|(markdownE|e)numDescriptions|altText|label)$/
    const plain: unknown[] = []
    const look = (value: unknown, name = ''): void => {
      if (Array.isArray(value)) for (const each of value) look(each, name)
      else if (typeof value === 'object' && value !== null)
        for (const [key, inner] of Object.entries(value)) look(inner, key)
      else if (names.test(name) && !/^%[^%]+%$/.test(String(value))) plain.push({ name, value })
    }
    look({ contributes, capabilities, description })
    expect(plain).toEqual([])
  })
})

describe('the client', () => {
  /** A text as an argument, or in braces under one of these names, is one that somebody reads. */
  const SHOWN =
    /(?:\bset(?:StatusBar)?Message\(|\bshow(?:Information|Warning|Error)Message\(|\bnew Error\(|\b(?:title|placeHolder|prompt|detail|description|label|openLabel|saveLabel|message|text|tooltip):)\s*(?:[^\n,?]*\?\s*)?(['"`])((?:(?!\1)[^\\]|\\.)*)\1/g
  /** Names and marks, not words. */
  const isWords = (text: string) => /\p{L}{3}/u.test(text.replace(/\$\{[^}]*\}|^Braggline\b/g, ''))

  test.each(CLIENT)('$name says nothing that cannot be translated', ({ text }) => {
    const bare = [...text.matchAll(SHOWN)].map(([, , shown]) => shown).filter(isWords)
    expect(bare).toEqual([])
  })

  test('the check would see a bare text', () => {
    for (const code of [
      "window.setStatusBarMessage('No such file', 6)",
      "title: 'Save It',",
      'message: `None left`',
    ])
      expect([...code.matchAll(SHOWN)].map(([, , shown]) => shown).filter(isWords)).toHaveLength(1)
  })

  test('every text that it says is in the bundle, and no other', () => {
    const said = CLIENT.flatMap(({ text }) =>
      [...text.matchAll(/\bl10n\.t\(\s*(?:'((?:[^'\\]|\\.)*)'|"((?:[^"\\]|\\.)*)")/g)].map(
        ([, single, double]) => (single ?? double).replace(/\\(.)/g, '$1'),
      ),
    )
    expect(said.length).toBeGreaterThan(20)
    expect(CLIENT.flatMap(({ text }) => text.match(/\bl10n\.t\(/g) ?? [])).toHaveLength(said.length)
    const bundle = JSON.parse(read('l10n/bundle.l10n.json')) as Record<string, string>
    expect(Object.keys(bundle).sort()).toEqual([...new Set(said)].sort())
    for (const [text, english] of Object.entries(bundle)) expect(english).toBe(text)
  })
})
