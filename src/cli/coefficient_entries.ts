import type { Coefficient, ImageComparison } from '../firmware/index.js';
import { indexText } from '../report/coefficient_table.js';
import { type Json, jsonNumber } from '../report/stable_json.js';

/** One stored number for programs: an array gives one entry for each element. Addresses are in hexadecimal. */
export function coefficientEntries({ path, elements, shape, type, declaredAt }: Coefficient): Json[] {
  return elements.map(({ value, stored, address }, at) => ({
    path: path + indexText(at, shape),
    value: jsonNumber(value),
    stored,
    type,
    address: address === undefined ? null : `0x${address.toString(16).padStart(8, '0')}`,
    file: declaredAt?.file ?? null,
    line: declaredAt?.line ?? null,
  }));
}

/** What differs between two builds, for programs. */
export function comparisonEntries({ changed, added, vanished, unchanged }: ImageComparison): Json {
  return {
    changed: changed.flatMap(({ path, before, after }) =>
      before.elements.length === after.elements.length
        ? changedElements(path, before, after)
        : [{ path, before: coefficientEntries(before), after: coefficientEntries(after) }],
    ),
    added: added.flatMap(coefficientEntries),
    vanished: vanished.flatMap(coefficientEntries),
    unchanged,
  };
}

function changedElements(path: string, before: Coefficient, after: Coefficient): Json[] {
  const [old, fresh] = [coefficientEntries(before), coefficientEntries(after)];
  return before.elements.flatMap(({ stored }, at) =>
    stored === after.elements[at].stored && before.type === after.type
      ? []
      : [{ path: path + indexText(at, after.shape), before: old[at], after: fresh[at] }],
  );
}
