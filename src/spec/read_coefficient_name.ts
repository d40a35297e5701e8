import { suggestion } from './nearest.js';
import type { Reading } from './reading.js';
import type { Setting } from './spec.js';
import { type Tree, textOf } from './tree.js';

/** Reads the name of a coefficient; anything else is reported. */
export function readCoefficientName(
  tree: Tree,
  what: string,
  reading: Reading,
): Extract<Setting, { kind: 'coefficients' }> | undefined {
  const text = textOf(tree);
  if (text === undefined) return undefined;
  reading.names.used.add(text.text);
  if (reading.names.entries.get(text.text)?.kind === 'coefficient') {
    return { kind: 'coefficients', name: text.text, place: text.place };
  }
  const known = [...reading.names.entries.values()].filter(({ kind }) => kind === 'coefficient');
  const near = suggestion(
    text.text,
    known.map(({ name }) => name),
  );
  reading.names.incomplete = true;
  reading.problems.add(
    text.place,
    `${what} must be the name of a coefficient, but is \`${text.text}\`${near}`,
  );
  return undefined;
}
