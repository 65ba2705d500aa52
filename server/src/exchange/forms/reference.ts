/** The page about forms: how to write one, and every variable, filter and tag that there is. Made from the code. */
import { TAGS } from './engine.ts'
import { LIQUID_FILTERS, OWN_FILTERS } from './filters.ts'
import { FORM_LIMITS, LONGEST_FORM, PREVIEW_LIMITS } from './form.ts'
import { MOST_LISTED } from './data.ts'
import { FORM_DATA, type Schema } from './schema.ts'

/** Filled from the demo's lead telluride it gives `EXAMPLE_TEXT`: a test does so. */
export const EXAMPLE_FORM = `# {{ title }}
{% for v in lattice.vectors %}
a{{ forloop.index }} = {{ v | unit: "bohr" | fixed: 4 | width: 9 | join: "" }}
{% endfor %}
{% for s in path.segments limit: 2 %}
{{ s.from | ascii | width: 5, "left" }} {{ s.fromFraction | fraction | join: " " }} in {{ s.steps }} steps
{% endfor %}
{% if mesh %}
mesh = {{ mesh.divisions | join: " x " }}, {{ mesh.irreducible }} irreducible
{% endif %}
`
export const EXAMPLE_TEXT = `# Lead telluride, rock salt
a1 =    0.0000   6.1038   6.1038
a2 =    6.1038   0.0000   6.1038
a3 =    6.1038   6.1038   0.0000
Gamma 0 0 0 in 49 steps
X     1/2 0 1/2 in 25 steps
mesh = 12 x 12 x 12, 72 irreducible
`

const indented = (text: string): string => text.replace(/^(?=.)/gm, '    ')

export const formsPage = (): string => `# Forms

A form is a text with places to be filled in from a lattice file: any program's input, in your own layout. It is written in
[Liquid](https://liquidjs.com): \`{{ … }}\` writes a value, \`{% … %}\` repeats or chooses. This form

${indented(EXAMPLE_FORM)}
filled by \`braggline fill example.liquid lead-telluride.lattice.yaml\` gives

${indented(EXAMPLE_TEXT)}
- **Editor:** *Braggline: Fill a Form…* shows the filled text beside the file; it follows edits of both. Forms are found beside
  the file and in folders named \`forms\`.
- **Units:** lengths are in the file's unit, k in its inverse with the 2π. \`unit\` and \`per_unit\` convert.
- **Lists** of numbers go through a filter number by number: \`{{ v | fixed: 6 | width: 12 | join: "" }}\`.
- **Lines:** one that holds nothing but tags leaves no line behind, unless they write (\`render\` and its like). The last line break of
  a partial does not count.
- **Strict:** a misspelled name, a number that is none, a word wider than its columns is an error with its place. What the
  file gives no ground for has no value: writing it is an error, \`{% if mesh %}\` and \`| default: "none"\` ask first.
- **Partials:** \`{% render "_row.liquid", v: v %}\` fills in a text of the form's folder. It sees the variables below and what it
  is given; \`include\` sees the form's own as well. A name with an underscore in front is not offered as a form.
- **Safe:** no code runs, nothing outside the form's folder is read. A form has ${LONGEST_FORM.toLocaleString('en')} characters at most, its
  text ${FORM_LIMITS.characters.toLocaleString('en')}, a list of k-points ${MOST_LISTED.toLocaleString('en')}; it is given ${FORM_LIMITS.milliseconds / 1000} s,
  in the editor ${PREVIEW_LIMITS.milliseconds / 1000} s.

Conventions differ between programs: confirm the cell and the frame in your program's own output before you launch.

## Variables

Names are those of \`braggline report --format json\`, with more beside them. *or none*: has no value where the file gives no ground
for it. Rows of matrices are vectors; lists count from 0. The same as JSON Schema: \`dist/schema/form-data.schema.json\`.

| variable | is | |
| --- | --- | --- |
${variables(FORM_DATA, '').join('\n')}

In a loop \`forloop.index\` counts from 1, \`forloop.index0\` from 0; \`forloop.first\` and \`forloop.last\` tell its ends. \`size\` is how many entries a list has.

## Filters

| filter | does | example | gives |
| --- | --- | --- | --- |
${OWN_FILTERS.map(({ name, args, help, example: [form, gives] }) => row([`\`${name}${args}\``, help, `\`${form}\``, `\`${gives}\``])).join('\n')}

Of Liquid's own there are also ${LIQUID_FILTERS.map(name => `\`${name}\``).join(', ')}.

## Tags

${TAGS.map(name => `\`${name}\``).join(', ')}. \`{% raw %}\` writes braces as they are.
`

const row = (cells: readonly string[]): string =>
  `| ${cells.map(cell => cell.replaceAll('|', '\\|')).join(' | ')} |`

function variables({ properties = {} }: Schema, before: string): string[] {
  return Object.entries(properties).flatMap(([name, schema]) => {
    // All meshes are alike: `mesh` tells what is in one.
    const items = name === 'meshes' ? undefined : schema.items
    return [
      row([`\`${before}${name}\``, kindOf(schema), schema.description ?? '']),
      ...variables(schema, `${before}${name}.`),
      ...(items?.properties ? variables(items, `${before}${name}[…].`) : []),
    ]
  })
}

function kindOf(schema: Schema): string {
  const { type, enum: values } = schema
  if (values)
    return orNone(
      values
        .filter(each => each !== null)
        .map(each => `\`${each}\``)
        .join(', '),
      values,
    )
  const types = [type ?? []].flat()
  const [kind] = types
  return orNone(
    kind === 'array' ? listOf(schema) : (KINDS[kind] ?? kind),
    types.includes('null') ? [null] : [],
  )
}

const orNone = (kind: string, values: readonly unknown[]): string =>
  values.includes(null) ? `${kind}, or none` : kind

const KINDS: Readonly<Record<string, string>> = {
  string: 'word',
  number: 'number',
  integer: 'whole number',
  boolean: 'yes or no',
  object: 'group',
}

function listOf({ items, minItems, maxItems }: Schema): string {
  if (items?.type === 'array') return items.items?.type === 'string' ? 'lists of words' : 'rows'
  if (items?.properties) return 'list of groups'
  const kind = items?.type === 'string' ? 'words' : items?.type === 'integer' ? 'whole numbers' : 'numbers'
  if (maxItems === undefined) return `list of ${kind}`
  return minItems === maxItems ? `${maxItems} ${kind}` : `${kind}, one a dimension`
}
