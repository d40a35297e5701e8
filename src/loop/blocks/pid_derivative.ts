import type { Node } from '../graph.js';
import type { BlockUse, Workshop } from './block.js';
import type { DerivativeGain } from './pid_gains.js';
import type { PidInputs } from './pid_inputs.js';

/** The derivative action of `pid`; its equations stand there. */
export function derivativeAction(
  use: BlockUse,
  workshop: Workshop,
  { gain, filter, period }: DerivativeGain,
  inputs: PidInputs,
): Node {
  const { arithmetic } = workshop;
  const change = arithmetic.subtract(inputs.derivative, inputs.last(inputs.derivative));
  if (!filter) return arithmetic.multiply(gain, period ? arithmetic.divide(change, period) : change);
  const { drive, corner, period: filterPeriod } = filter;
  const last: Node = workshop.addMemory(`${use.name} derivative`, () => derivative, 0);
  const derivative = filtered();
  return derivative;

  function filtered(): Node {
    const two = arithmetic.number(2);
    const turned = (from: Node, minus: boolean): Node =>
      arithmetic.sum([{ value: from }, { factor: corner, value: filterPeriod, minus }]);
    switch (use.word('sum_by')) {
      case 'forward':
        return arithmetic.sumOfProducts([turned(arithmetic.number(1), true), drive], [last, change]);
      case 'trapezoid':
        return arithmetic.divide(
          arithmetic.sumOfProducts([turned(two, true), arithmetic.multiply(two, drive)], [last, change]),
          turned(two, false),
        );
      default:
        return arithmetic.divide(
          arithmetic.sumOfProducts([drive], [change], last),
          turned(arithmetic.number(1), false),
        );
    }
  }
}
