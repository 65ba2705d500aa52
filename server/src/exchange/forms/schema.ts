/**
 * The shape of a form's data as JSON Schema: the report's, in which nothing is ever left out but null, and the values
 * beyond it. The reference of variables is made from it, data are completed by it, and it is published.
 */
import reportSchema from '../schema/report.schema.json'

export interface Schema {
  readonly $ref?: string
  readonly type?: string | readonly string[]
  readonly enum?: readonly unknown[]
  readonly description?: string
  readonly properties?: Readonly<Record<string, Schema>>
  readonly additionalProperties?: boolean | Schema
  readonly required?: readonly string[]
  readonly items?: Schema
  readonly minItems?: number
  readonly maxItems?: number
  readonly anyOf?: readonly Schema[]
  readonly minimum?: number
  readonly exclusiveMinimum?: number
  readonly pattern?: string
}

const text = (description: string): Schema => ({ type: 'string', description })
const number = (description: string): Schema => ({ type: 'number', description })
const count = (description: string): Schema => ({ type: 'integer', minimum: 0, description })
const vector = (description: string): Schema => ({
  type: 'array',
  items: { type: 'number' },
  minItems: 3,
  maxItems: 3,
  description,
})
/** As many entries as the crystal has dimensions. */
const fractions = (description: string): Schema => ({ ...vector(description), minItems: 1 })
const rows = (description: string, most = 3): Schema => ({
  type: 'array',
  items: { type: 'array', items: { type: 'number' }, minItems: 3, maxItems: 3 },
  minItems: 1,
  maxItems: most,
  description,
})
const group = (
  description: string,
  properties: Record<string, Schema>,
  optional: readonly string[] = [],
): Schema => ({
  type: 'object',
  description,
  properties,
  required: Object.keys(properties).filter(name => !optional.includes(name)),
})
const list = (description: string, items: Schema): Schema => ({ type: 'array', description, items })

const ELEMENT = {
  element: text('Symbol.'),
  elementName: text('In English.'),
  atomicNumber: count('Of the element.'),
}

const ATOM = group(
  'An atom.',
  {
    ...ELEMENT,
    name: text('What tells it from other atoms of its element.'),
    species: count('Number of its species, from 1.'),
    fraction: vector('Of the primitive vectors; along a direction without a period, a length.'),
    conventional: vector('Of the conventional vectors; along a direction without a period, a length.'),
    cartesian: vector('A length each.'),
    inCell: vector('Fractions of `lattice.cell`.'),
  },
  ['name', 'inCell'],
)

const KPOINTS = (description: string): Schema =>
  list(
    description,
    group('A k-point.', {
      fraction: fractions('Of the primitive reciprocal vectors, in [0, 1).'),
      cartesian: vector('Inverse length.'),
      weight: number('Part of the whole: all add up to 1.'),
      multiplicity: count('Points of the mesh that it stands for.'),
    }),
  )

const SAMPLED = list(
  'The sampled points of the path: joints once, both ends at a break.',
  group(
    'A point.',
    {
      piece: count('Number of the piece, from 1.'),
      index: count('Among all points, from 0.'),
      distance: number('Along the path, unbroken over a break; inverse length.'),
      fraction: fractions('Of the primitive reciprocal vectors.'),
      cartesian: vector('Inverse length.'),
      label: text('At the ends of segments.'),
      direction: vector('Unit vector along the segment.'),
    },
    ['label'],
  ),
)

const SEGMENT: Record<string, Schema> = {
  piece: count('Number of the piece, from 1.'),
  steps: count('One less than `points`.'),
  start: number('Distance along the path at its start; inverse length.'),
  fromFraction: fractions('Of the primitive reciprocal vectors.'),
  toFraction: fractions('Of the primitive reciprocal vectors.'),
  fromCartesian: vector('Inverse length.'),
  toCartesian: vector('Inverse length.'),
}

/** The report's schema with the values beyond it, by way of its own objects. */
function extended(): Schema {
  const report = structuredClone(reportSchema) as unknown as Required<Schema> & {
    definitions: { mesh: Required<Schema> }
  }
  const { properties } = report
  const { lattice, reciprocal, points, path } = properties as Record<string, Required<Schema>>
  const { segments } = path.properties as Record<string, Required<Schema>>
  const mesh = more(report.definitions.mesh, {
    name: text('Where the file names its meshes.'),
    irreduciblePoints: KPOINTS('One of each set of equivalent points.'),
    allPoints: KPOINTS('Every point, each with the same weight.'),
  })
  return group(
    'What a form knows of one crystal. Lengths are in `unit`, k in its inverse with the 2π included. Rows of matrices are vectors. What the file gives no ground for is null.',
    {
      ...properties,
      stem: text("The file's name without its folder and `.lattice.yaml`."),
      lattice: more(lattice, {
        height: number('The stated period of the computing cell along the normal of a plane lattice.'),
        cell: rows(
          'Three vectors that a program can compute in: the primitive ones, and in two dimensions the height along the normal where the file states one.',
        ),
      }),
      reciprocal: more(
        reciprocal,
        { conventional: rows('Reciprocal vectors of the conventional cell.') },
        true,
      ),
      atoms: list('In the order of the file; one copy at each lattice point.', ATOM),
      species: list(
        'Kinds of atoms in the order of the file: one element, one name.',
        group(
          'A species.',
          {
            number: count('From 1.'),
            ...ELEMENT,
            name: text('What tells it from others of its element.'),
            count: count('Its atoms in the primitive cell.'),
          },
          ['name'],
        ),
      ),
      elements: list(
        'Elements in the order of the file.',
        group('An element.', { ...ELEMENT, count: count('Its atoms in the primitive cell.') }),
      ),
      points: {
        ...points,
        items: more(
          points.items as Required<Schema>,
          { conventional: fractions('Of the conventional reciprocal vectors.') },
          true,
        ),
      },
      path: more(
        {
          ...path,
          properties: {
            ...path.properties,
            segments: { ...segments, items: more(segments.items as Required<Schema>, SEGMENT, true) },
          },
        },
        { sampled: SAMPLED },
      ),
      mesh: { ...mesh, description: 'The only mesh, or the one that is asked for by its name.' },
      meshes: list('All meshes of the file.', mesh),
      constants: group('CODATA 2022.', {
        pi: number('π.'),
        bohr: number('Bohr radius in Å.'),
        hartree: number('In eV.'),
        hbar2Over2m: number('ħ²/2mₑ in eV Å².'),
      }),
      version: text('Of Braggline.'),
      date: text('Of the day, YYYY-MM-DD. A form that uses it gives another text tomorrow.'),
    },
    OPTIONAL,
  )
}

/** What a file may give no ground for. */
const OPTIONAL = [
  ...['title', 'lattice', 'reciprocal', 'changes', 'zone', 'symmetry', 'book', 'points', 'path', 'mesh'],
  ...['atoms', 'species', 'elements'],
]

const more = (
  object: Required<Schema>,
  properties: Record<string, Schema>,
  always = false,
): Required<Schema> => ({
  ...object,
  properties: { ...object.properties, ...properties },
  required: [...object.required, ...(always ? Object.keys(properties) : [])],
})

/** Nothing is left out: what was optional is null. */
function strict(schema: Schema): Schema {
  const { properties, items, required = [] } = schema
  if (items) return { ...schema, items: strict(items) }
  if (!properties) return schema
  return {
    ...schema,
    properties: Object.fromEntries(
      Object.entries(properties).map(([name, each]) => [
        name,
        required.includes(name) ? strict(each) : orNull(strict(each)),
      ]),
    ),
    required: Object.keys(properties),
    additionalProperties: false,
  }
}

function orNull(schema: Schema): Schema {
  if (schema.enum) return { ...schema, enum: [...schema.enum, null] }
  return { ...schema, type: [schema.type as string, 'null'] }
}

export const FORM_DATA: Schema = strict(extended())

/** For publication. */
export const formDataSchema = (): object => ({
  $schema: 'http://json-schema.org/draft-07/schema#',
  $id: 'urn:braggline:form-data:1',
  title: 'Data of a form',
  ...FORM_DATA,
})

/** The value with null wherever it leaves a property out. */
export function complete(value: object): Readonly<Record<string, unknown>> {
  return filled(value, FORM_DATA) as Record<string, unknown>
}

function filled(value: unknown, { properties, items }: Schema): unknown {
  if (value === undefined || value === null) return null
  if (properties)
    return Object.fromEntries(
      Object.entries(properties).map(([name, each]) => [name, filled((value as never)[name], each)]),
    )
  if (items && (items.properties || items.items)) return (value as unknown[]).map(item => filled(item, items))
  return value
}
