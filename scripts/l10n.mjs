// node scripts/l10n.mjs : gathers the texts that people read, so that they can be translated.
//   package.json's own go to package.nls.json, each under the name of its place; plain ones that have come in are moved there.
//   Those of client/src (every l10n.t) go to l10n/bundle.l10n.json.
import { mkdirSync, readdirSync, readFileSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { fileURLToPath } from 'node:url'

const root = fileURLToPath(new URL('..', import.meta.url))
const json = value => `${JSON.stringify(value, null, 2)}\n`

/** Properties of the manifest whose values people read. */
const TEXTS = new Set([
  'title',
  'shortTitle',
  'category',
  'description',
  'markdownDescription',
  'enumDescriptions',
  'markdownEnumDescriptions',
  'deprecationMessage',
  'markdownDeprecationMessage',
  'altText',
  'label',
])

const manifestPath = join(root, 'package.json')
const nlsPath = join(root, 'package.nls.json')
const manifest = JSON.parse(readFileSync(manifestPath, 'utf8'))
const known = readKnown()
const texts = {}

function readKnown() {
  try {
    return JSON.parse(readFileSync(nlsPath, 'utf8'))
  } catch {
    return {}
  }
}

/** `%key%` in place of a text; the text is kept under the key. */
function moved(value, path) {
  const [, old] = /^%(.+)%$/.exec(value) ?? []
  const key = path.at(-1) === 'category' ? 'category' : path.join('.')
  texts[key] = old === undefined ? value : known[old]
  if (texts[key] === undefined) throw new Error(`${value} is in no package.nls.json`)
  return `%${key}%`
}

const nameIn = (element, i) =>
  (element.command ?? element.id ?? element.language ?? String(i)).replace(/^braggline\./, '')

function walk(value, path) {
  if (Array.isArray(value))
    return value.map((element, i) =>
      element !== null && typeof element === 'object'
        ? walk(element, [...path, nameIn(element, i)])
        : element,
    )
  if (value === null || typeof value !== 'object') return value
  return Object.fromEntries(
    Object.entries(value).map(([name, inner]) => {
      const here = [...path, name.replace(/^braggline\./, '')].filter(part => part !== 'properties')
      if (TEXTS.has(name) && typeof inner === 'string') return [name, moved(inner, here)]
      if (TEXTS.has(name) && Array.isArray(inner))
        return [name, inner.map((text, i) => moved(text, [...here, String(value.enum?.[i] ?? i)]))]
      return [name, walk(inner, here)]
    }),
  )
}

const { contributes, capabilities } = manifest
manifest.contributes = { ...contributes, ...walk(contributes, []) }
manifest.capabilities = walk(capabilities, ['capabilities'])
manifest.description = moved(manifest.description, ['description'])
manifest.l10n = './l10n'
writeFileSync(manifestPath, json(manifest))
writeFileSync(nlsPath, json(Object.fromEntries(Object.entries(texts).sort(([a], [b]) => (a < b ? -1 : 1)))))

const client = join(root, 'client', 'src')
const said = readdirSync(client)
  .filter(name => name.endsWith('.ts'))
  .flatMap(name => [
    ...readFileSync(join(client, name), 'utf8').matchAll(
      /\bl10n\.t\(\s*(?:'((?:[^'\\]|\\.)*)'|"((?:[^"\\]|\\.)*)")/g,
    ),
  ])
  .map(([, single, double]) => (single ?? double).replace(/\\(.)/g, '$1'))
mkdirSync(join(root, 'l10n'), { recursive: true })
writeFileSync(
  join(root, 'l10n', 'bundle.l10n.json'),
  json(Object.fromEntries([...new Set(said)].sort().map(text => [text, text]))),
)
