import { shapes } from '../../src/loop/inputs/index.js';
import {
  plainNumber,
  productOf,
  quotientOf,
  rateDimension,
  timeDimension,
} from '../../src/spec/dimension.js';
import type {
  BlockDescription,
  MeasureDescription,
  MeasureKey,
  Vocabulary,
} from '../../src/spec/vocabulary.js';

const meaning = 'for tests';

const blocks: BlockDescription[] = [
  {
    key: 'lag',
    rooms: ['plant'],
    takesInput: true,
    takesGain: true,
    outputIsState: true,
    settings: [{ name: 'lag', kind: 'time_constant', optional: false, meaning }],
    meaning,
  },
  {
    key: 'integral',
    rooms: ['plant'],
    takesInput: false,
    takesGain: false,
    outputIsState: true,
    settings: [
      {
        name: 'integral',
        kind: 'expression',
        optional: false,
        dimension: ({ output }) => productOf(output, rateDimension),
        meaning,
      },
    ],
    meaning,
  },
  {
    key: 'value',
    rooms: ['plant', 'controller'],
    takesInput: false,
    takesGain: false,
    settings: [
      { name: 'value', kind: 'expression', optional: false, dimension: ({ output }) => output, meaning },
    ],
    meaning,
  },
  {
    key: 'pid',
    rooms: ['controller'],
    takesInput: true,
    takesGain: false,
    settings: [
      {
        name: 'kp',
        kind: 'expression',
        optional: false,
        dimension: ({ output, input }) => quotientOf(output, input),
        meaning,
      },
      {
        name: 'ki',
        kind: 'expression',
        optional: true,
        dimension: ({ output, input }) => quotientOf(output, productOf(input, timeDimension)),
        meaning,
      },
      {
        name: 'kd',
        kind: 'expression',
        optional: true,
        dimension: ({ output, input }) => quotientOf(productOf(output, timeDimension), input),
        meaning,
      },
      { name: 'derivative_corner', kind: 'corner', optional: true, meaning },
      { name: 'sum_by', kind: 'word', words: ['backward', 'forward', 'trapezoid'], optional: true, meaning },
      {
        name: 'anti_windup',
        kind: 'word',
        words: ['hold_integral', 'bound_integral'],
        optional: true,
        meaning,
      },
    ],
    meaning,
  },
  {
    key: 'biquads',
    rooms: ['controller'],
    takesInput: true,
    takesGain: false,
    inputLikeOutput: true,
    settings: [{ name: 'biquads', kind: 'coefficients', optional: false, meaning }],
    meaning,
  },
];

const of: MeasureKey = { name: 'of', kind: 'signal', optional: false, meaning: 'the response' };
const to: MeasureKey = { name: 'to', kind: 'target', optional: false, meaning: 'the target' };
const at: MeasureKey = { name: 'at', kind: 'loop_point', optional: false, meaning: 'where it is opened' };
const several: MeasureKey = { ...at, several: 'of_any_unit' };
const compared: MeasureKey = { ...at, several: 'of_comparable_size' };
const band: MeasureKey = { name: 'band', kind: 'share', optional: false, meaning: 'a share of the step' };

function measure(
  name: string,
  basis: 'trace' | 'loop',
  keys: MeasureKey[],
  more: Partial<MeasureDescription> = {},
): MeasureDescription {
  return {
    name,
    basis,
    keys,
    dimension: () => plainNumber,
    ratio: false,
    better: 'lower',
    window: undefined,
    meaning,
    ...more,
  };
}

/** Blocks and measures enough for the example and for every rule of the reader. */
export const vocabulary: Vocabulary = {
  blocks,
  shapes: shapes.map(({ description }) => description),
  measures: [
    measure('overshoot', 'trace', [of, to], { window: 'single_step' }),
    measure('settling_time', 'trace', [of, to, band], {
      window: 'single_step_outlasting_limit',
      dimension: () => timeDimension,
    }),
    measure('peak_deviation', 'trace', [of, { ...to, optional: true }], {
      window: 'from_first_event',
      dimension: (dimension) => dimension,
    }),
    measure('saturated_share', 'trace', [of], { window: 'from_first_event' }),
    measure('phase_margin', 'loop', [at], { better: 'higher' }),
    measure('gain_margin', 'loop', [several], { better: 'higher', ratio: true }),
    measure('modulus_margin', 'loop', [compared], { better: 'higher' }),
  ],
};
