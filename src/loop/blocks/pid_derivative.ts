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
  const { drive, turn } = filter;
  const last: Node = workshop.addMemory(`${use.name} derivative`, () => derivative, 0);
  const derivative = filtered();
  return derivative;

  function filtered(): Node {
    const [one, two] = [arithmetic.number(1), arithmetic.number(2)];
    switch (use.word('sum_by')) {
      case 'forward':
        return arithmetic.add(
          arithmetic.multiply(arithmetic.subtract(one, turn), last),
          arithmetic.multiply(drive, change),
        );
      case 'trapezoid':
        return arithmetic.divide(
          arithmetic.add(
            arithmetic.multiply(arithmetic.subtract(two, turn), last),
            arithmetic.multiply(arithmetic.multiply(two, drive), change),
          ),
          arithmetic.add(two, turn),
        );
      default:
        return arithmetic.divide(
          arithmetic.add(last, arithmetic.multiply(drive, change)),
          arithmetic.add(one, turn),
        );
    }
  }
}
