import type { SettingDescription } from '../../spec/vocabulary.js';
import type { Node } from '../graph.js';
import type { Term } from '../number_rules.js';
import type { Workshop } from './block.js';

/** In which values a difference equation keeps its past. */
export type Structure = 'direct_1' | 'direct_2' | 'transposed_2';

/** The setting that chooses a structure. */
export const structureSetting: SettingDescription = {
  name: 'structure',
  kind: 'word',
  words: ['direct_1', 'direct_2', 'transposed_2'],
  optional: true,
  meaning:
    'direct_1 keeps past inputs and outputs, direct_2 one shared line, transposed_2 partial sums; direct_1 by default',
};

/** A linear difference equation. Index k stands for a delay of k sampling instants. */
export interface DifferenceEquation {
  name: string;
  /** b, from 0 on; nothing where the input has no share at that delay. */
  forward: readonly (Node | undefined)[];
  /** a, from 1 on. */
  back: readonly Node[];
  structure: Structure;
  /** `minus`: a·y is taken off, as in a denominator; `plus`: it is added, for stored negated a. */
  feedback: 'minus' | 'plus';
}

/**
 * The output of a difference equation (Oppenheim and Schafer, 'Discrete-Time Signal Processing', 1989, from memory). Sums go
 * from left to right, each operation as the target rounds; with `plus` a sum stands for each difference:
 *
 *     direct_1       y = b0·x + b1·x₁ + … − a1·y₁ − a2·y₂ …
 *     direct_2       w = x − a1·w₁ − a2·w₂ …,  y = b0·w + b1·w₁ + …
 *     transposed_2   y = b0·x + s¹₁,  sᵏ = (bₖ·x − aₖ·y) + sᵏ⁺¹₁, the last without a further sum
 */
export function filtered(equation: DifferenceEquation, input: Node, workshop: Workshop): Node {
  switch (equation.structure) {
    case 'direct_1':
      return directOne(equation, input, workshop);
    case 'direct_2':
      return directTwo(equation, input, workshop);
    case 'transposed_2':
      return transposedTwo(equation, input, workshop);
  }
}

/** A signal and its past values: entry k is k instants old. */
function past(name: string, newest: () => Node, count: number, { addMemory }: Workshop): Node[] {
  const line: Node[] = [];
  for (let k = 1; k <= count; k++) {
    const newer = k === 1 ? newest : () => line[k - 2];
    line.push(addMemory(`${name}${k}`, () => newer()));
  }
  return line;
}

function directOne(equation: DifferenceEquation, input: Node, workshop: Workshop): Node {
  const { name, forward, back } = equation;
  const inputs = past(`${name} x`, () => input, forward.length - 1, workshop);
  const outputs: Node[] = past(`${name} y`, () => output, back.length, workshop);
  const output = workshop.arithmetic.sum([
    ...ahead(forward, [input, ...inputs]),
    ...behind(equation, back, outputs),
  ]);
  return output;
}

function directTwo(equation: DifferenceEquation, input: Node, workshop: Workshop): Node {
  const { name, forward, back } = equation;
  const depth = Math.max(forward.length - 1, back.length);
  const line: Node[] = past(`${name} w`, () => newest, depth, workshop);
  const newest = workshop.arithmetic.sum([{ value: input }, ...behind(equation, back, line)]);
  return workshop.arithmetic.sum(ahead(forward, [newest, ...line]));
}

function transposedTwo(equation: DifferenceEquation, input: Node, workshop: Workshop): Node {
  const { name, forward, back } = equation;
  const { arithmetic, addMemory } = workshop;
  const depth = Math.max(forward.length - 1, back.length);
  const sums: Node[] = [];
  for (let k = 1; k <= depth; k++) sums.push(addMemory(`${name} s${k}`, () => next(k)));
  const output = arithmetic.sum([...ahead(forward.slice(0, 1), [input]), ...kept(0)]);
  return output;

  function kept(k: number): Term[] {
    return k < depth ? [{ value: sums[k] }] : [];
  }

  function next(k: number): Node {
    const own = [
      ...ahead(forward.slice(k, k + 1), [input]),
      ...behind(equation, back.slice(k - 1, k), [output]),
      ...kept(k),
    ];
    return own.length > 0 ? arithmetic.sum(own) : arithmetic.number(0);
  }
}

function ahead(factors: readonly (Node | undefined)[], values: readonly Node[]): Term[] {
  return factors.flatMap((factor, at) => (factor ? [{ factor, value: values[at] }] : []));
}

function behind({ feedback }: DifferenceEquation, factors: readonly Node[], values: readonly Node[]): Term[] {
  return factors.map((factor, at) => ({ factor, value: values[at], minus: feedback === 'minus' }));
}
