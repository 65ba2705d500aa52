/** The key table as a JSON Schema (draft-07) of one document, for editors and programs that know no lattice files. */
import { ELEMENTS } from '../crystal/elements.ts'
import { KEYS, type KeyRow, keyName, keysBelow, type Quantity, type ValueKind } from './keys.ts'

type Schema = Readonly<Record<string, unknown>>

/** A schema of what a document may hold once YAML has been turned into JSON. It knows form only, not meaning. */
export function jsonSchema(): Schema {
  return {
    $schema: 'http://json-schema.org/draft-07/schema#',
    title: 'Lattice file',
    description: 'A crystal, k-points, a path and a mesh through its first Brillouin zone.',
    ...mapping(''),
    definitions: DEFINITIONS,
  }
}

/** Words and signs of an expression in any order: whether they make one, the program says. */
const EXPRESSION = '^(?:[-+*/^().0-9eE\\s\u2212]|alpha|beta|gamma|sqrt|sin|cos|tan|pi|a|b|c)+$'
const EXPRESSION_SCHEMA: Schema = { type: 'string', pattern: EXPRESSION }

const DEFINITIONS: Schema = {
  number: { anyOf: [{ type: 'number' }, EXPRESSION_SCHEMA] },
  positive: { anyOf: [{ type: 'number', exclusiveMinimum: 0 }, EXPRESSION_SCHEMA] },
  count: { anyOf: [{ type: 'integer', minimum: 1 }, EXPRESSION_SCHEMA] },
  label: { type: 'string', pattern: '^[^\\s0-9][^\\s]*$' },
}
const reference = (name: keyof typeof DEFINITIONS): Schema => ({ $ref: `#/definitions/${name}` })
const NUMBER = reference('number')

const list = (items: Schema, fewest: number, most: number): Schema => ({
  type: 'array',
  items,
  minItems: fewest,
  maxItems: most,
})
const vector = ({ length }: KeyRow, items = NUMBER): Schema => list(items, length ?? 1, length ?? 3)

/** An object whose keys are the rows below a path, and no others. */
function mapping(path: string, more: Schema = {}): Schema {
  const rows = keysBelow(path)
  const required = rows.filter(row => row.required).map(keyName)
  return {
    type: 'object',
    properties: Object.fromEntries(rows.map(row => [keyName(row), described(row)])),
    additionalProperties: false,
    ...(required.length > 0 ? { required } : {}),
    ...more,
  }
}

function described(row: KeyRow): Schema {
  const quantity = row.quantity && UNITS[row.quantity]
  const facts = [row.doc, quantity, row.default && `Default: ${row.default}.`].filter(Boolean)
  const description = facts.join(' ').replaceAll('`', '')
  const schema = SCHEMAS[row.kind](row)
  // Beside a reference draft-07 reads nothing else.
  return '$ref' in schema ? { allOf: [schema], description } : { description, ...schema }
}

const UNITS: Readonly<Partial<Record<Quantity, string>>> = {
  length: 'In the unit of the file.',
  'inverse length': 'In the inverse unit of the file, with 2π.',
}

/** YAML's truth values are words of the format and values of JSON. */
const asJson = (word: string): string | boolean =>
  word === 'true' || word === 'false' ? word === 'true' : word

const words = ({ words = [] }: KeyRow): Schema => ({
  anyOf: words.map(({ word, also = [], meaning }) => ({
    enum: [word, ...also].map(asJson),
    description: meaning.replaceAll('`', ''),
  })),
})

const below = (path: string): KeyRow => KEYS.find(row => row.path === `${path}.*`)!

/** Conditions on a mapping that the rows below it do not tell. */
const CONDITIONS: Readonly<Record<string, Schema>> = {
  lattice: { anyOf: [{ required: ['bravais'] }, { required: ['vectors'] }] },
  sampling: { minProperties: 1, maxProperties: 1 },
}
const MESH: Schema = { oneOf: [{ required: ['divisions'] }, { required: ['spacing'] }] }

const SCHEMAS: Readonly<Record<ValueKind, (row: KeyRow) => Schema>> = {
  text: () => ({ type: ['string', 'number', 'boolean'] }),
  word: words,
  number: ({ positive }) => reference(positive ? 'positive' : 'number'),
  count: () => reference('count'),
  vector: row => vector(row),
  counts: row => vector(row, reference('count')),
  rows: row => list(vector(row), 1, 3),
  matrix: row => ({ anyOf: [vector(row), list(vector(row), 1, 3)] }),
  ends: () => list(reference('label'), 2, 2),
  mapping: ({ path }) => mapping(path, CONDITIONS[path]),
  atoms: ({ path }) => ({
    type: 'array',
    items: {
      type: 'object',
      propertyNames: { enum: ELEMENTS.map(({ symbol }) => symbol) },
      additionalProperties: described(below(path)),
      minProperties: 1,
      maxProperties: 1,
    },
  }),
  atom: row => ({ anyOf: [vector(row), mapping(row.path)] }),
  'space-group': () => ({
    anyOf: [
      { type: 'integer', minimum: 1, maximum: 230 },
      { type: 'string', pattern: '^([A-Za-z]|[0-9]+$)' },
    ],
  }),
  points: ({ path }) => ({
    type: 'object',
    propertyNames: reference('label'),
    additionalProperties: described(below(path)),
  }),
  point: row => ({ anyOf: [vector(row), mapping(row.path)] }),
  path: () => ({
    anyOf: [
      { type: 'string', minLength: 1 },
      { type: 'array', items: { type: 'string' }, minItems: 1 },
    ],
  }),
  meshes: ({ path }) => {
    const mesh = mapping(path, MESH)
    const names = { not: { enum: keysBelow(path).map(keyName) } }
    return {
      anyOf: [mesh, { type: 'object', propertyNames: names, additionalProperties: mesh, minProperties: 1 }],
    }
  },
  severities: ({ path }) => ({ type: 'object', additionalProperties: described(below(path)) }),
}
