import type { MeasureGroup } from './example.js';

/** Formula of a requirement on one of the loops below, in the scenario that it shows. */
const of = (name: string, text: string, unit: string, formula: string, more = {}) => ({
  requirement: `{ name: ${name}, measure: ${text} }`,
  unit,
  formula,
  ...more,
});

/** A mirror that follows its target with damping ratio 1/2 at 2 rad/s, so that it swings at √3 rad/s. */
const mirror: MeasureGroup = {
  title: 'a mirror that swings in',
  shows: 'a mirror that swings in; ζ = 1/2, ω√(1 − ζ²) = √3 rad/s, and half a swing leaves e^(−π/√3) of it',
  shown: `plant:
  angle: { second_order_lag: { corner: 2 rad/s, damping: 0.5 }, of: target, unit: mrad }
scenarios:
  slew: { lasts: 31 s, inputs: { target: { step: 50 mrad, at: 1 s } } }`,
  hidden: 'inputs: { target: { unit: mrad } }',
  outcomes: [
    of('A-1', 'overshoot, of: angle, to: target, in: slew, at_most: 25 %', '%', '100·e^(−π/√(3))'),
    of('A-2', 'decay_ratio, of: angle, to: target, in: slew, at_most: 25 %', '%', '100·e^(−2·π/√(3))', {
      why: 'the second peak against the first',
      within: 1e-8,
    }),
    of('A-3', 'largest_value, of: angle, in: slew, at_most: 60 mrad', 'mrad', '50·(1 + e^(−π/√(3)))'),
    of(
      'A-4',
      'smallest_value, of: angle, in: slew, from: 4 s, at_least: 45 mrad',
      'mrad',
      '50·(1 − e^(−2·π/√(3)))',
    ),
    of('A-5', 'time_of_largest_value, of: angle, in: slew, at_most: 2 s', 's', 'π/√(3)', {
      why: 'half a swing',
      within: 1e-7,
    }),
    of(
      'A-6',
      'delay_time, of: angle, to: target, in: slew, share: 100 %, at_most: 2 s',
      's',
      '(π − acos(0.5))/√(3)',
      {
        why: 'first passage through the target',
        within: 1e-8,
      },
    ),
    of(
      'A-7',
      'travel, of: angle, in: slew, at_most: 100 mrad',
      'mrad',
      '50·(1 + e^(−π/√(3)))/(1 − e^(−π/√(3)))',
      {
        why: 'the sum of all swings',
        within: 1e-8,
      },
    ),
    of(
      'A-8',
      'squared_deviation_integral, of: angle, to: target, in: slew, at_most: 2000 mrad^2*s',
      'mrad^2*s',
      '50^2·(0.5 + 1/(4·0.5))/2',
      {
        why: '(ζ + 1/(4ζ))/ω of a unit step',
      },
    ),
  ],
};

/** Pipe water that follows its target with a time constant of a minute. */
const water: MeasureGroup = {
  title: 'water with a lag',
  shows:
    'the water of a root-zone heating, which follows its target with a lag of 60 s; 5·e^(−t/60) K is missing after t seconds',
  shown: `plant:
  water: { lag: 60 s, of: wanted, unit: K }
scenarios:
  warm_up: { lasts: 600 s, inputs: { wanted: { step: 5 K, at: 0 s } } }`,
  hidden: 'inputs: { wanted: { unit: K } }',
  outcomes: [
    of('W-1', 'rise_time, of: water, to: wanted, in: warm_up, at_most: 150 s', 's', '60·ln(9)', {
      why: 'from 10 to 90 %',
      within: 1e-8,
    }),
    of(
      'W-14',
      'rise_time, of: water, to: wanted, low: 20 %, high: 80 %, in: warm_up, at_most: 90 s',
      's',
      '60·ln(4)',
      { within: 1e-8 },
    ),
    of('W-2', 'delay_time, of: water, to: wanted, in: warm_up, at_most: 60 s', 's', '60·ln(2)', {
      why: 'to 50 %',
      within: 1e-8,
    }),
    of(
      'W-3',
      'delay_time, of: water, to: wanted, share: 90 %, in: warm_up, at_most: 3 min',
      's',
      '60·ln(10)',
      { within: 1e-8 },
    ),
    of(
      'W-4',
      'settling_time, of: water, to: wanted, band: 5 %, in: warm_up, at_most: 200 s',
      's',
      '60·ln(20)',
      { within: 1e-8 },
    ),
    of(
      'W-5',
      'peak_deviation, of: water, to: wanted, in: warm_up, from: 2 min, at_most: 1 K',
      'K',
      '5·e^(−2)',
    ),
    of(
      'W-6',
      'recovery_time, of: water, to: wanted, band: 0.5 K, in: warm_up, at_most: 3 min',
      's',
      '60·ln(10)',
      { within: 1e-8 },
    ),
    of(
      'W-7',
      'steady_state_error, of: water, to: wanted, over: 1 min, until: 3 min, in: warm_up, at_most: 1 K',
      'K',
      '5·(e^(−2) − e^(−3))',
      {
        why: 'the mean of the last minute',
      },
    ),
    of(
      'W-8',
      'rms_deviation, of: water, to: wanted, in: warm_up, at_most: 2 K',
      'K',
      '√(5^2·30·(1 − e^(−20))/600)',
    ),
    of(
      'W-9',
      'absolute_deviation_integral, of: water, to: wanted, in: warm_up, at_most: 400 K*s',
      'K*s',
      '5·60·(1 − e^(−10))',
    ),
    of(
      'W-10',
      'squared_deviation_integral, of: water, to: wanted, in: warm_up, at_most: 1000 K^2*s',
      'K^2*s',
      '5^2·30·(1 − e^(−20))',
    ),
    of(
      'W-11',
      'late_deviation_integral, of: water, to: wanted, in: warm_up, at_most: 20000 K*s^2',
      'K*s^2',
      '5·60^2·(1 − 11·e^(−10))',
      {
        why: 'by parts',
      },
    ),
    of(
      'W-12',
      'corridor_clearance, of: water, lower: [[2 min, 4 K], [10 min, 4 K]], upper: [[0 s, 6 K], [10 min, 6 K]], in: warm_up, at_least: 0 K, scale: 1 K',
      'K',
      '5·(1 − e^(−2)) − 4',
      {
        why: 'at the first corner of the lower bound',
      },
    ),
    of(
      'W-13',
      'over_time, holds: { throughout: water > 4 K, from: 2 min, scale: 1 K }, in: warm_up, at_least: 0, scale: 1',
      '',
      '5·(1 − e^(−2)) − 4',
      {
        why: 'in units of `scale`',
      },
    ),
  ],
};

/** A response that goes the wrong way first: the level in a boiler drum when cold water is fed. */
const drum: MeasureGroup = {
  title: 'a level that shrinks before it swells',
  shows:
    'the level of a boiler drum, which shrinks before it swells: 1 − (1 + 3t)·e^(−t) of the step, lowest at t = 2/3 s',
  shown: `plant:
  level: { transfer_function: { numerator: [-2, 1], denominator: [1, 2, 1] }, of: feed, unit: mm }
scenarios:
  more: { lasts: 20 s, inputs: { feed: { step: 40 mm, at: 1 s } } }`,
  hidden: 'inputs: { feed: { unit: mm } }',
  outcomes: [
    of('D-1', 'inverse_response, of: level, to: feed, in: more, at_most: 60 %', '%', '100·(3·e^(−2/3) − 1)'),
    of('D-2', 'smallest_value, of: level, in: more, at_least: -25 mm', 'mm', '40·(1 − 3·e^(−2/3))'),
    of('D-3', 'time_of_smallest_value, of: level, in: more, at_most: 1 s', 's', '2/3', { within: 1e-7 }),
  ],
};

/** Measures of responses. */
export const stepMeasures: readonly MeasureGroup[] = [mirror, water, drum];
