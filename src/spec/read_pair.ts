import { type Free, readFree, type Surroundings } from './read_expression.js';
import type { Reading } from './reading.js';
import { toOneScale } from './scales.js';
import type { Expression } from './spec.js';
import { childOf, type Tree } from './tree.js';

/** A wanted and a measured value in one unit, and their difference. */
export interface Pair {
  target: Expression;
  measurement: Expression;
  difference: Free;
}

/** Reads `{ target: …, measurement: … }`; undefined where that is not written, or is wrong and reported. */
export function readPair(tree: Tree | undefined, around: Surroundings, reading: Reading): Pair | undefined {
  if (tree?.kind !== 'map') return undefined;
  const target = readFree(childOf(tree, 'target'), around, reading);
  const measurement = readFree(childOf(tree, 'measurement'), around, reading);
  if (target === undefined || measurement === undefined) return undefined;
  const { place } = measurement.expression;
  const [a, b] = toOneScale(target, measurement, '-', place, measurement.context);
  const [left, right] = [a.expression, b.expression];
  return {
    target: left,
    measurement: right,
    difference: {
      expression: { kind: 'operation', operator: '-', left, right, place },
      dimension: a.zero ? b.dimension : a.dimension,
      scale: a.scale,
      literal: false,
      adapts: false,
      celsius: false,
      text: measurement.text,
      context: measurement.context,
    },
  };
}
