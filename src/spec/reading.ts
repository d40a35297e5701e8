import type { Names } from './names.js';
import type { Problems } from './problems.js';
import type { Expression, Place } from './spec.js';
import type { Vocabulary } from './vocabulary.js';

/** What every section's reader is handed. */
export interface Reading {
  vocabulary: Vocabulary;
  names: Names;
  problems: Problems;
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
