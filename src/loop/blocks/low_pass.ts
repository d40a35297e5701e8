import { plainNumber } from '../../spec/dimension.js';
import { LoopError } from '../loop.js';
import type { Block } from './block.js';
import { approach, exactAtSetting, lagRuleSetting, lagSettings, sampledLag } from './first_order.js';

/** A first-order filter of gain one. */
export const lowPass: Block = {
  description: {
    key: 'low_pass',
    main: 'time_constant',
    rooms: ['controller'],
    takesInput: true,
    takesGain: false,
    inputLikeOutput: true,
    settings: [
      {
        name: 'time_constant',
        kind: 'time_constant',
        optional: true,
        meaning: 'time constant τ, or a corner frequency f with τ = 1/(2π f)',
      },
      {
        name: 'weight',
        kind: 'expression',
        optional: true,
        dimension: () => plainNumber,
        meaning: 'c itself, as the firmware has it, in place of a time constant; y = y₁ + c·(x − y₁)',
      },
      lagRuleSetting,
      exactAtSetting,
    ],
    meaning:
      'y = y₁ + c·(x − y₁), c = T/(τ + T) backward; x₁ for x, c = T/τ forward and 1 − e^(−T/τ) exact; (x + x₁)·0.5 for x, c = T/(τ + T/2) trapezoid',
  },
  keepsRange: false,
  expand: (use, workshop) => {
    const [timeConstant, weight] = [use.design('time_constant'), use.setting('weight')];
    if (!timeConstant === !weight) {
      const given = weight ? 'both a time_constant and a weight' : 'neither a time_constant nor a weight';
      throw new LoopError(`low_pass of '${use.name}' has ${given}; expected one of them`, use.place);
    }
    if (weight) return approach(use.name, use.input(), weight, workshop);
    return sampledLag(use.name, use.input(), lagSettings(use, 'time_constant'), workshop);
  },
};
