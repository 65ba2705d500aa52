import type { AnySchemaObject } from 'ajv'

/** A schema in which no object has a property that is not named: readers may meet more, we write none. */
export const closed = (schema: AnySchemaObject): AnySchemaObject =>
  JSON.parse(JSON.stringify(schema), (_, value) =>
    value?.properties && value.additionalProperties === undefined
      ? { ...value, additionalProperties: false }
      : value,
  )
