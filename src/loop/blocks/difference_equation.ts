import type { SettingDescription } from '../../spec/vocabulary.js';
import type { Node } from '../graph.js';
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
  const output = feedBack(equation, sumOfProducts(forward, [input, ...inputs], workshop), outputs, workshop);
  return output;
}

function directTwo(equation: DifferenceEquation, input: Node, workshop: Workshop): Node {
  const { name, forward, back } = equation;
  const depth = Math.max(forward.length - 1, back.length);
  const line: Node[] = past(`${name} w`, () => newest, depth, workshop);
  const newest = feedBack(equation, input, line, workshop);
  return sumOfProducts(forward, [newest, ...line], workshop);
}

function transposedTwo(equation: DifferenceEquation, input: Node, workshop: Workshop): Node {
  const { name, forward, back, feedback } = equation;
  const { arithmetic, addMemory } = workshop;
  const depth = Math.max(forward.length - 1, back.length);
  const sums: Node[] = [];
  for (let k = 1; k <= depth; k++) sums.push(addMemory(`${name} s${k}`, () => next(k)));
  const direct = forward[0] && arithmetic.multiply(forward[0], input);
  const output = direct && sums[0] ? arithmetic.add(direct, sums[0]) : (direct ?? sums[0]);
  return output;

  function next(k: number): Node {
    const ahead = forward[k] && arithmetic.multiply(forward[k], input);
    const behind = back[k - 1] && arithmetic.multiply(back[k - 1], output);
    const signed = behind && joined(ahead, behind, feedback, workshop);
    const own = signed ?? ahead ?? arithmetic.number(0);
    return k < depth ? arithmetic.add(own, sums[k]) : own;
  }
}

function joined(
  sum: Node | undefined,
  part: Node,
  feedback: DifferenceEquation['feedback'],
  { arithmetic }: Workshop,
): Node {
  if (feedback === 'plus') return sum ? arithmetic.add(sum, part) : part;
  return sum ? arithmetic.subtract(sum, part) : arithmetic.apply('negate', part);
}

function feedBack(
  { back, feedback }: DifferenceEquation,
  from: Node,
  line: Node[],
  workshop: Workshop,
): Node {
  return back.reduce(
    (sum, factor, at) => joined(sum, workshop.arithmetic.multiply(factor, line[at]), feedback, workshop),
    from,
  );
}

function sumOfProducts(
  factors: readonly (Node | undefined)[],
  values: readonly Node[],
  { arithmetic }: Workshop,
): Node {
  return factors
    .flatMap((factor, at) => (factor ? [arithmetic.multiply(factor, values[at])] : []))
    .reduce((sum, product) => arithmetic.add(sum, product));
}
