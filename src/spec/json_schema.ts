import { z } from 'zod';
import { skeletonsOf } from './skeleton.js';
import type { Vocabulary } from './vocabulary.js';

/** A schema as JSON text would hold it. */
export type JsonSchema = { [key: string]: unknown };

/** Which files a schema is for: specs, or the files that they include. */
export type SchemaOf = 'spec' | 'part';

/** YAML editors tell numbers and truth values from text; a spec takes all of them as they are written. */
const writtenAs = ['string', 'number', 'boolean'];

/**
 * The JSON Schema (draft 7, which all editors know) of a spec or of a file that specs include: sections, keys and which
 * of them are needed, with what each takes. What stands in the slots (quantities, units, expressions) it cannot check.
 */
export function jsonSchemaOf(vocabulary: Vocabulary, of: SchemaOf): JsonSchema {
  const schema: JsonSchema = z.toJSONSchema(skeletonsOf(vocabulary)[of], {
    target: 'draft-7',
    override: ({ jsonSchema, path }) => {
      if (jsonSchema.type === 'string' && path.at(-1) !== 'propertyNames')
        Object.assign(jsonSchema, { type: writtenAs });
      if (isMeasureName(path)) Object.assign(jsonSchema, measureNames(vocabulary));
    },
  });
  const properties = schema.properties as Record<string, JsonSchema>;
  const needed = (schema.required ?? []) as string[];
  const title = of === 'spec' ? 'A spec of pawl' : 'A file that specs of pawl include';
  return {
    ...schema,
    title,
    properties: mapped(properties, (one, key) => (needed.includes(key) ? one : orEmpty(one))),
  };
}

function isMeasureName(path: readonly (string | number)[]): boolean {
  return path.at(-1) === 'measure' && path.includes('requirements');
}

/** Editors complete the names and show the definitions. */
function measureNames({ measures }: Vocabulary): JsonSchema {
  const oneOf = measures.map(({ name, meaning }) => ({ const: name, description: meaning }));
  return { type: 'string', oneOf };
}

/** A section whose contents are all commented out counts as left out. */
function orEmpty(section: JsonSchema): JsonSchema {
  const { description, ...shape } = section;
  return { description, anyOf: [shape, { type: 'null' }] };
}

function mapped<T, U>(all: Record<string, T>, change: (one: T, key: string) => U): Record<string, U> {
  return Object.fromEntries(Object.entries(all).map(([key, one]) => [key, change(one, key)]));
}
