import type { Evaluation } from './evaluate.js';
import type { Node } from './graph.js';
import type { Parts } from './parts.js';

/** Nothing at rest and in linear analysis; from the start of a scenario on the value given. */
export function running(name: string, value: (plant: Evaluation) => number, parts: Parts): Node {
  const input = parts.addInput(name, 0);
  parts.program.push({
    kind: 'input',
    index: input.index,
    how: 'set',
    common: false,
    changes: (plant) => [{ time: 0, value: value(plant) }],
  });
  return input;
}

/** One from the start of a scenario on, nothing at rest and in linear analysis. */
export function isRunning(name: string, parts: Parts): Node {
  const one = running(name, () => 1, parts);
  return parts.graph.apply('unequal', one, parts.graph.number(0));
}
