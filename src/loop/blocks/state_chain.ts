import type { Node } from '../graph.js';
import { LoopError } from '../loop.js';
import type { BlockUse, Workshop } from './block.js';

/**
 * A ratio of polynomials in s as a chain of states (controllable form): z₁′ = z₂, …, zₙ′ = u − a₁·zₙ − … − aₙ·z₁, and
 * y = b₀·u + (b₁ − b₀·a₁)·zₙ + … + (bₙ − b₀·aₙ)·z₁, both polynomials in descending powers and a₀ = 1.
 * @param numerator no longer than the denominator.
 */
export function stateChain(
  name: string,
  numerator: readonly Node[],
  denominator: readonly Node[],
  input: () => Node,
  { arithmetic: a, addState }: Workshop,
): Node {
  const [lead, ...rest] = denominator;
  const n = rest.length;
  const zero = a.number(0);
  const back = rest.map((coefficient) => a.divide(coefficient, lead));
  const padded = [...Array.from({ length: denominator.length - numerator.length }, () => zero), ...numerator];
  const [direct, ...forward] = padded.map((coefficient) => a.divide(coefficient, lead));
  const states: Node[] = [];
  for (let i = 0; i < n; i++) {
    const rate = (): Node => {
      if (i < n - 1) return states[i + 1];
      return back.reduce(
        (sum, coefficient, k) => a.subtract(sum, a.multiply(coefficient, states[n - 1 - k])),
        input(),
      );
    };
    states.push(addState(n === 1 ? name : `${name} state ${i + 1}`, rate, 0));
  }
  const moved = forward.map((coefficient, k) => {
    const own = direct === zero ? coefficient : a.subtract(coefficient, a.multiply(direct, back[k]));
    return a.multiply(own, states[n - 1 - k]);
  });
  const parts = direct === zero ? moved : [a.multiply(direct, input()), ...moved];
  return parts.reduce((sum, part) => a.add(sum, part));
}

/** Refuses a numerator that is longer than its denominator, and a denominator that starts with zero. */
export function checkProper(use: BlockUse, numerator: readonly Node[], denominator: readonly Node[]): void {
  const [lead] = denominator;
  if (lead.kind === 'number' && lead.value === 0) {
    throw new LoopError(
      `transfer_function of '${use.name}' has a denominator that starts with 0; expected its highest power first`,
      use.place,
    );
  }
  if (numerator.length > denominator.length) {
    throw new LoopError(
      `transfer_function of '${use.name}' has ${numerator.length - 1} zeros and only ${denominator.length - 1} poles, and so would be a derivative; expected at most as many zeros as poles`,
      use.place,
    );
  }
}
