import type { Reading } from './reading.js';
import type { Located } from './spec.js';
import { type Tree, textOf } from './tree.js';

/** Reads an address on the target in bytes, in hexadecimal or decimal digits. */
export function readAddress(
  tree: Tree | undefined,
  what: string,
  reading: Reading,
): Located<number> | undefined {
  const text = textOf(tree);
  if (text === undefined) return undefined;
  const value = Number(text.text);
  if (/^(0x[0-9a-fA-F]+|\d+)$/.test(text.text) && Number.isSafeInteger(value))
    return { value, place: text.place };
  reading.problems.add(text.place, `${what} must be an address such as 0x08000000, but is \`${text.text}\``);
  return undefined;
}
