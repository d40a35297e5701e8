import type { Node } from '../graph.js';
import type { Block, Workshop } from './block.js';
import { halfTangent, type LagRule, lagSettings, sampledLag } from './first_order.js';

/**
 * A signal ahead of its time by a lead: the inverse of a lag. Without a filter it is the exact inverse of a `low_pass` with
 * the same time constant and rule; that of the exact rule comes one instant late, since the future is not known.
 */
export const feedForward: Block = {
  description: {
    key: 'feed_forward',
    main: 'lead',
    rooms: ['controller'],
    takesInput: true,
    takesGain: true,
    settings: [
      {
        name: 'lead',
        kind: 'time_constant',
        optional: false,
        meaning: 'time constant T₁ of the lag that is undone; 0 s for a gain alone',
      },
      { name: 'lag', kind: 'time_constant', optional: true, meaning: 'time constant of a filter behind it' },
      {
        name: 'sum_by',
        kind: 'word',
        words: ['backward', 'exact'],
        optional: true,
        meaning: 'the rule by which the lag is undone and the filter is sampled; backward by default',
      },
    ],
    meaning:
      'v = gain·of; y = v + k·(v − v₁), k = T₁/T backward and 1/(e^(T/T₁) − 1) exact; then a low_pass of lag by the same rule',
  },
  keepsRange: false,
  expand: (use, workshop) => {
    const { arithmetic, addMemory } = workshop;
    const drive = arithmetic.multiply(use.gain(), use.input());
    const lead = use.design('lead')!;
    const rule = (use.word('sum_by') ?? 'backward') as LagRule;
    const ahead = arithmetic.take(leadFactor(lead, rule, workshop));
    const last = addMemory(`${use.name} last input`, () => drive);
    const output = arithmetic.sumOfProducts([ahead], [arithmetic.subtract(drive, last)], drive);
    const lag = use.design('lag');
    return lag ? sampledLag(use.name, output, lagSettings(use, 'lag'), workshop) : output;
  },
};

function leadFactor(lead: Node, rule: LagRule, { arithmetic: { graph }, exactPeriod }: Workshop): Node {
  if (rule === 'backward') return graph.apply('divide', lead, exactPeriod());
  const t = halfTangent(lead, exactPeriod(), graph);
  const twice = graph.apply('multiply', graph.number(2), t);
  return graph.apply('divide', graph.apply('subtract', graph.number(1), t), twice);
}
