import { plainNumber } from '../../spec/dimension.js';
import type { Node } from '../graph.js';
import { LoopError } from '../loop.js';
import type { Block } from './block.js';

const longest = 1000;

/** The mean of the last samples. */
export const movingAverage: Block = {
  description: {
    key: 'moving_average',
    main: 'length',
    rooms: ['controller'],
    takesInput: true,
    takesGain: false,
    inputLikeOutput: true,
    settings: [
      {
        name: 'length',
        kind: 'expression',
        optional: false,
        dimension: () => plainNumber,
        meaning: `number n of samples, from 1 to ${longest}`,
      },
    ],
    meaning:
      'y = (x + x₁ + … + xₙ₋₁)/n, summed from left to right; where n is a power of two x·(1/n) + x₁·(1/n) + …, which leaves a fixed-point sum in its range',
  },
  keepsRange: false,
  expand: (use, { arithmetic, addMemory }) => {
    const length = use.design('length')!;
    const count = length.kind === 'number' ? length.value : Number.NaN;
    if (!Number.isInteger(count) || count < 1 || count > longest) {
      const found = length.kind === 'number' ? `${count}` : 'something that changes';
      throw new LoopError(
        `moving_average of '${use.name}' has a length of ${found}; expected a whole number from 1 to ${longest}`,
        use.place,
      );
    }
    let sample = use.input();
    const samples = [sample];
    for (let k = 1; k < count; k++) {
      const newer: Node = sample;
      sample = addMemory(`${use.name} x${k}`, () => newer);
      samples.push(sample);
    }
    if (Number.isInteger(Math.log2(count))) {
      const share = arithmetic.number(1 / count);
      return arithmetic.sumOfProducts(
        samples.map(() => share),
        samples,
      );
    }
    const sum = arithmetic.sum(samples.map((value) => ({ value })));
    return arithmetic.divide(sum, arithmetic.number(count));
  },
};
