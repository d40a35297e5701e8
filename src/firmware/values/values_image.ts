import type { NamedValue } from './value_tree.js';

/** Values without an image: of a source file, or printed by a program. */
export interface ValuesImage {
  kind: 'source' | 'command';
  name: string;
  /** The text that they came from. */
  bytes: Uint8Array;
  values: ReadonlyMap<string, NamedValue>;
}
