import type { Operator } from './spec.js';
import type { ParsedUnit } from './units.js';

/**
 * An expression as written, before its names are looked up. `at` is the index in the text of what an error about
 * the node should point to.
 */
export type Syntax =
  | { kind: 'number'; value: number; at: number }
  | { kind: 'quantity'; digits: string; value: number; unit: ParsedUnit; at: number }
  | { kind: 'name'; name: string; index: number | undefined; at: number }
  | { kind: 'negate'; of: Syntax; at: number }
  | { kind: 'operation'; operator: Operator; left: Syntax; right: Syntax; at: number }
  | { kind: 'call'; name: string; arguments: Syntax[]; at: number };
