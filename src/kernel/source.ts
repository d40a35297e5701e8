import { fit, fitQuotient, fitSum } from '../loop/fixed_point.js';
import { fusedMultiplyAdd } from '../loop/fused.js';
import { inOrder, type Node, type OperationName, roundHalfAway } from '../loop/graph.js';
import type { Layout } from './layout.js';

/** Functions that the written text calls by these names. */
export const helpers = { round: roundHalfAway, fusedMultiplyAdd, fit, fitSum, fitQuotient };

/** Each operation as source text; the same meaning as `operations` in the graph. */
const asText: Partial<Record<OperationName, (...x: string[]) => string>> = {
  add: (a, b) => `${a} + ${b}`,
  subtract: (a, b) => `${a} - ${b}`,
  multiply: (a, b) => `${a} * ${b}`,
  divide: (a, b) => `${a} / ${b}`,
  power: (a, b) => `${a} ** ${b}`,
  negate: (a) => `-${a}`,
  less: (a, b) => `${a} < ${b} ? 1 : 0`,
  less_or_equal: (a, b) => `${a} <= ${b} ? 1 : 0`,
  equal: (a, b) => `${a} === ${b} ? 1 : 0`,
  unequal: (a, b) => `${a} !== ${b} ? 1 : 0`,
  choose: (condition, then, otherwise) => `${condition} !== 0 ? ${then} : ${otherwise}`,
  limit: (x, low, high) => `${x} < ${low} ? ${low} : ${x} > ${high} ? ${high} : ${x}`,
  quantise: (x, step) => `round(${x} / ${step}) * ${step}`,
  single: (x) => `Math.fround(${x})`,
  fused_multiply_add: (...x) => `fusedMultiplyAdd(${x})`,
  fit: (...x) => `fit(${x})`,
  fit_sum: (...x) => `fitSum(${x})`,
  fit_quotient: (...x) => `fitQuotient(${x})`,
  round: (x) => `round(${x})`,
  ln: (x) => `Math.log(${x})`,
};

/** Names given to values which replace leaves, such as the stages of an integration step. */
export type LeafText = (leaf: Extract<Node, { kind: 'leaf' }>) => string;

/** Leaves as they lie in the array `m`. */
export function inArray(layout: Layout): LeafText {
  return ({ leaf, index }) => {
    if (leaf === 'injected') throw new Error('an opened loop has no trace');
    return `m[${layout[leaf] + index}]`;
  };
}

/**
 * Writes statements that compute the roots, each shared value once, and returns them with the roots' names.
 * The text comes from the checked graph alone: numbers, operations and array places.
 */
export function statements(
  roots: readonly Node[],
  leafText: LeafText,
  prefix: string,
): { lines: string[]; results: string[] } {
  const lines: string[] = [];
  const text = new Map<Node, string>();
  for (const node of inOrder(roots)) {
    if (node.kind === 'number') {
      text.set(node, numberText(node.value));
    } else {
      const name = `${prefix}${node.id}`;
      const value =
        node.kind === 'leaf'
          ? leafText(node)
          : operationText(
              node.name,
              node.of.map((of) => text.get(of)!),
            );
      lines.push(`const ${name} = ${value};`);
      text.set(node, name);
    }
  }
  return { lines, results: roots.map((root) => text.get(root)!) };
}

function operationText(name: OperationName, of: string[]): string {
  const write = asText[name];
  return write ? write(...of) : `Math.${name}(${of.join(', ')})`;
}

function numberText(value: number): string {
  if (Object.is(value, -0)) return '(-0)';
  return value < 0 ? `(${value})` : `${value}`;
}
