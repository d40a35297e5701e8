import { jsonSchemaOf, type SchemaOf } from '../spec/json_schema.js';
import type { ExitStatus, Surroundings } from './surroundings.js';
import { vocabulary } from './vocabulary.js';

/** Prints the JSON Schema by which editors complete and check specs, or the files that specs include. */
export async function schema(of: SchemaOf, around: Surroundings): Promise<ExitStatus> {
  around.print(`${JSON.stringify(jsonSchemaOf(vocabulary, of), undefined, 2)}\n`);
  return 0;
}
