// node scripts/generate.mjs pages    writes the pages of the rules from the rules (docs/rules, kept in git), and that of forms
// node scripts/generate.mjs schemas  writes the JSON Schemas of the lattice file, of a finding, of a report, of a form's data (dist/schema)
import { copyFileSync, mkdirSync, readdirSync, rmSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { fileURLToPath, pathToFileURL } from 'node:url'
import { build } from 'esbuild'

const root = fileURLToPath(new URL('..', import.meta.url))
const bundle = join(root, '.cache', 'generate.mjs')
await build({
  stdin: {
    contents: `export { CHECKS } from './server/src/checks/index.ts'
      export { page, contents } from './server/src/checks/page.ts'
      export { jsonSchema } from './server/src/format/schema.ts'
      export { formsPage } from './server/src/exchange/forms/reference.ts'
      export { formDataSchema } from './server/src/exchange/forms/schema.ts'`,
    resolveDir: root,
    loader: 'ts',
  },
  outfile: bundle,
  bundle: true,
  platform: 'node',
  format: 'esm',
  packages: 'external',
  logLevel: 'warning',
})
const { CHECKS, page, contents, jsonSchema, formsPage, formDataSchema } = await import(
  pathToFileURL(bundle).href
)

if (process.argv[2] === 'pages') writePages()
else writeSchemas()

function writePages() {
  const pages = join(root, 'docs', 'rules')
  mkdirSync(pages, { recursive: true })
  for (const name of readdirSync(pages)) rmSync(join(pages, name))
  for (const check of CHECKS) writeFileSync(join(pages, `${check.id}.md`), page(check))
  writeFileSync(join(pages, 'README.md'), contents(CHECKS))
  writeFileSync(join(root, 'docs', 'forms.md'), formsPage())
}

function writeSchemas() {
  const schemas = join(root, 'dist', 'schema')
  const shapes = join(root, 'server', 'src', 'exchange', 'schema')
  mkdirSync(schemas, { recursive: true })
  writeFileSync(join(schemas, 'lattice-file.schema.json'), `${JSON.stringify(jsonSchema(), undefined, 2)}\n`)
  writeFileSync(join(schemas, 'form-data.schema.json'), `${JSON.stringify(formDataSchema(), undefined, 2)}\n`)
  for (const name of readdirSync(shapes)) copyFileSync(join(shapes, name), join(schemas, name))
}
