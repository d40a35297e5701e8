import { plainNumber } from '../../spec/dimension.js';
import type { Node } from '../graph.js';
import type { Block, BlockUse, Workshop } from './block.js';
import { filtered, type Structure, structureSetting } from './difference_equation.js';

/**
 * A notch of gain one at zero frequency and at half the rate, its centre, depth and width exact in the sampled filter
 * (Regalia and Mitra, 'Tunable digital frequency response equalization filters', 1987, from memory). The numbers are formed
 * in double precision and rounded once; with β = tan(width·T/2) and γ = cos(frequency·T):
 *
 *     b0 = (1 + depth·β)/(1 + β)   b1 = a1 = −2γ/(1 + β)   b2 = (1 − depth·β)/(1 + β)   a2 = (1 − β)/(1 + β)
 */
export const notch: Block = {
  description: {
    key: 'notch',
    rooms: ['controller'],
    takesInput: true,
    takesGain: false,
    inputLikeOutput: true,
    settings: [
      { name: 'frequency', kind: 'corner', optional: false, meaning: 'centre, where the gain is depth' },
      {
        name: 'width',
        kind: 'corner',
        optional: false,
        meaning: 'distance of the frequencies at which the squared gain is the mean of 1 and depth²',
      },
      {
        name: 'depth',
        kind: 'expression',
        optional: true,
        dimension: () => plainNumber,
        meaning: 'gain at the centre, such as -30 dB; 0 by default',
      },
      structureSetting,
    ],
    meaning:
      'one section with β = tan(width·T/2): (1 + depth·β, −2 cos(frequency·T), 1 − depth·β)/(1 + β) over (1, b1, (1 − β)/(1 + β))',
  },
  keepsRange: false,
  expand: (use, workshop) => {
    const [b0, b1, b2, a2] = section(use, workshop).map((number) => workshop.arithmetic.take(number));
    const structure = (use.word('structure') ?? 'direct_1') as Structure;
    const equation = {
      name: use.name,
      forward: [b0, b1, b2],
      back: [b1, a2],
      structure,
      feedback: 'minus',
    } as const;
    return filtered(equation, use.input(), workshop);
  },
};

/** b0, b1 (and a1), b2, a2. */
function section(use: BlockUse, { arithmetic: { graph }, exactPeriod }: Workshop): Node[] {
  const [one, two] = [graph.number(1), graph.number(2)];
  const angle = graph.apply('multiply', use.design('frequency')!, exactPeriod());
  const spread = graph.apply('multiply', use.design('width')!, exactPeriod());
  const beta = graph.apply('tan', graph.apply('divide', spread, two));
  const deep = graph.apply('multiply', use.design('depth') ?? graph.number(0), beta);
  const whole = graph.apply('add', one, beta);
  const centre = graph.apply('multiply', graph.number(-2), graph.apply('cos', angle));
  const parts = [
    graph.apply('add', one, deep),
    centre,
    graph.apply('subtract', one, deep),
    graph.apply('subtract', one, beta),
  ];
  return parts.map((part) => graph.apply('divide', part, whole));
}
