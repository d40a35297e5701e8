import type { TargetArithmetic } from '../arithmetic.js';
import type { Node } from '../graph.js';
import { LoopError } from '../loop.js';
import type { Block, Workshop } from './block.js';

/** Second-order sections one after another, direct form 1. */
export const biquads: Block = {
  description: {
    key: 'biquads',
    rooms: ['controller'],
    takesInput: true,
    takesGain: false,
    inputLikeOutput: true,
    settings: [
      {
        name: 'biquads',
        kind: 'coefficients',
        optional: false,
        meaning: 'array of b0 b1 b2 a1 a2 for each section, a0 = 1',
      },
    ],
    meaning: 'each section: y = b0·x + b1·x₁ + b2·x₂ − a1·y₁ − a2·y₂, summed from left to right',
  },
  keepsRange: false,
  expand: (use, workshop) => {
    const coefficients = use.coefficients('biquads');
    if (coefficients.length % 5 !== 0) {
      throw new LoopError(
        `biquads of '${use.name}' got ${coefficients.length} coefficients, expected 5 for each section (b0 b1 b2 a1 a2)`,
        use.place,
      );
    }
    let signal = use.input();
    for (let first = 0; first < coefficients.length; first += 5) {
      const name = `${use.name} section ${first / 5 + 1}`;
      signal = section(name, signal, coefficients.slice(first, first + 5), workshop);
    }
    return signal;
  },
};

/** One section; the four kept values are the last two inputs and outputs. */
function section(name: string, input: Node, [b0, b1, b2, a1, a2]: Node[], workshop: Workshop): Node {
  const { arithmetic, addMemory } = workshop;
  const input1 = addMemory(`${name} x1`, () => input);
  const input2 = addMemory(`${name} x2`, () => input1);
  const output1: Node = addMemory(`${name} y1`, () => output);
  const output2 = addMemory(`${name} y2`, () => output1);
  const forward = sumOfProducts(arithmetic, [b0, b1, b2], [input, input1, input2]);
  const once = arithmetic.subtract(forward, arithmetic.multiply(a1, output1));
  const output = arithmetic.subtract(once, arithmetic.multiply(a2, output2));
  return output;
}

function sumOfProducts(arithmetic: TargetArithmetic, factors: Node[], values: Node[]): Node {
  const products = factors.map((factor, at) => arithmetic.multiply(factor, values[at]));
  return products.reduce((sum, product) => arithmetic.add(sum, product));
}
