import type { Names } from './names.js';
import type { Problems } from './problems.js';
import type { Expression, Place } from './spec.js';
import type { Tree } from './tree.js';
import type { Vocabulary } from './vocabulary.js';

/** What every section's reader is handed. */
export interface Reading {
  vocabulary: Vocabulary;
  names: Names;
  problems: Problems;
  /** Mappings with a key that is unknown, and reported: what they seem to lack may stand there mistyped. */
  strange: ReadonlySet<Tree>;
}

/** Stands where an expression is wrong and has been reported; a spec with problems is never handed out. */
export function missing(place: Place): Expression {
  return { kind: 'number', value: Number.NaN, place };
}

/** Whether an expression is, or has in it, one that was wrong. */
export function isWhole(expression: Expression): boolean {
  switch (expression.kind) {
    case 'number':
      return !Number.isNaN(expression.value);
    case 'name':
      return true;
    case 'negate':
    case 'before':
      return isWhole(expression.of);
    case 'operation':
      return isWhole(expression.left) && isWhole(expression.right);
    case 'call':
      return expression.arguments.every(isWhole);
  }
}
