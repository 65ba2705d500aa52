// What the package holds, seen where the editor has installed it.
import assert from 'node:assert'
import { existsSync, readdirSync, readFileSync, statSync } from 'node:fs'
import { join, relative } from 'node:path'

const LIMIT_BYTES = 3e6
const { BRAGGLINE_VSIX: vsix, BRAGGLINE_INSTALLED: installed } = process.env
const files = readdirSync(installed, { recursive: true, withFileTypes: true })
  .filter(entry => entry.isFile())
  .map(entry => relative(installed, join(entry.parentPath, entry.name)))
const manifest = JSON.parse(readFileSync(join(installed, 'package.json'), 'utf8'))

describe('the package', () => {
  it('is under 3 MB', () => assert.ok(statSync(vsix).size < LIMIT_BYTES, `${statSync(vsix).size} bytes`))

  it('holds nothing but what is needed at run time', () => {
    const expected =
      /^(package(\.nls(\.[a-z-]+)?)?\.json|docs\/forms\.md|LICENSE\.txt|readme\.md|changelog\.md|\.vsixmanifest|(dist|docs\/rules|l10n|media|syntaxes)\/.*)$/i
    assert.deepStrictEqual(
      files.filter(file => !expected.test(file) || /node_modules|\.ts$|\.map$/.test(file)),
      [],
    )
  })

  it('holds all that the manifest names', () => {
    const { contributes, main, browser, icon } = manifest
    const named = [
      main,
      browser,
      icon,
      ...contributes.languages.flatMap(({ configuration, icon }) => [configuration, icon.light, icon.dark]),
      ...contributes.grammars.map(({ path }) => path),
      ...contributes.walkthroughs.flatMap(({ steps }) => steps.map(({ media }) => media.svg)),
      'package.nls.json',
      'l10n/bundle.l10n.json',
    ]
    assert.deepStrictEqual(
      named.filter(file => !existsSync(join(installed, file))),
      [],
    )
  })

  it('holds the servers, their library and the licences of what is inside', () => {
    const needed = [
      'dist/server.js',
      'dist/server-browser.js',
      'dist/symmetry-worker.js',
      'dist/form-worker.js',
      'docs/forms.md',
      'dist/moyo_wasm_bg.wasm',
      'dist/THIRD-PARTY-NOTICES.txt',
      'LICENSE.txt',
    ]
    assert.deepStrictEqual(
      needed.filter(file => !files.includes(file)),
      [],
    )
  })

  it('holds a page for each rule that has a setting', () => {
    const rules = Object.keys(manifest.contributes.configuration.properties['braggline.checks'].properties)
    const pages = files.filter(file => /^docs\/rules\/[a-z-]+\.md$/.test(file))
    assert.deepStrictEqual(pages.sort(), rules.map(rule => `docs/rules/${rule}.md`).sort())
  })
})
