import type { Node } from '../graph.js';
import { LoopError } from '../loop.js';
import type { Block, BlockUse, Workshop } from './block.js';
import { filtered, type Structure, structureSetting } from './difference_equation.js';

/** A ratio of polynomials in z, in descending powers. */
export const pulseTransfer: Block = {
  description: {
    key: 'transfer_function',
    rooms: ['controller'],
    takesInput: true,
    takesGain: false,
    settings: [
      {
        name: 'numerator',
        kind: 'matrix',
        rows: 'output',
        columns: 'input',
        entry: 'ratio',
        optional: false,
        meaning: 'coefficients in descending powers of z: a list, or an array of the build',
      },
      {
        name: 'denominator',
        kind: 'matrix',
        rows: 'plain',
        columns: 'plain',
        entry: 'ratio',
        optional: false,
        meaning:
          'coefficients in descending powers of z; all are divided by the first, in double precision, where it is not 1',
      },
      structureSetting,
    ],
    meaning: 'a0·y = b0·x + b1·x₁ + … − a1·y₁ − …, summed from left to right',
  },
  keepsRange: false,
  expand: (use, workshop) => {
    const [numerator, denominator] = polynomials(use);
    const divided = (of: Node): Node => monic(of, denominator[0], workshop);
    const late: undefined[] = Array.from({ length: denominator.length - numerator.length }, () => undefined);
    const equation = {
      name: use.name,
      forward: [...late, ...numerator.map(divided)],
      back: denominator.slice(1).map(divided),
      structure: (use.word('structure') ?? 'direct_1') as Structure,
      feedback: 'minus',
    } as const;
    return filtered(equation, use.input(), workshop);
  },
};

function monic(of: Node, lead: Node, { arithmetic }: Workshop): Node {
  if (lead.kind === 'number' && lead.value === 1) return of;
  return arithmetic.take(arithmetic.graph.apply('divide', of, lead));
}

function polynomials(use: BlockUse): [Node[], Node[]] {
  const [numerator, denominator] = ['numerator', 'denominator'].map((name) => use.matrix(name)!.flat());
  const lead = denominator[0];
  if (lead.kind === 'number' && lead.value === 0) {
    throw new LoopError(
      `transfer_function of '${use.name}' has a denominator that starts with 0; expected its highest power first`,
      use.place,
    );
  }
  if (numerator.length > denominator.length) {
    throw new LoopError(
      `transfer_function of '${use.name}' has a numerator of degree ${numerator.length - 1} over a denominator of degree ${denominator.length - 1}, and so would need samples to come; expected at most the same degree`,
      use.place,
    );
  }
  return [numerator, denominator];
}
