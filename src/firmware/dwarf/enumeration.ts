import { numberAttribute, textAttribute } from './attributes.js';
import { at, tag } from './codes.js';
import type { EnumerationType } from './data_type.js';
import { childrenOf } from './entry.js';

/** The name of an enumeration's value, undefined for a value that has none. */
export function enumeratorName(type: EnumerationType, value: number): string | undefined {
  for (const child of childrenOf(type.entry)) {
    if (child.tag === tag.enumerator && numberAttribute(child, at.constValue) === value)
      return textAttribute(child, at.name);
  }
  return undefined;
}
