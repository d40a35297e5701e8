import { describe, expect, it } from 'vitest';
import { outputs } from './law.js';

/** The text of the error that a law makes, whether the spec reader or the expansion finds it. */
function errorOf(signals: string[], coefficients: Record<string, number[]> = {}): string {
  try {
    outputs({ signals, coefficients }, [0]);
  } catch (error) {
    return (error as Error).message;
  }
  return 'no error';
}

const observer = (settings: string): string[] => [
  'out: { estimate: model }',
  `model: { observer: { states: [out], measured: x, uses: this_sample, ${settings} } }`,
];

describe('the blocks of controllers say what is wrong with', () => {
  const cases: [string, string[], RegExp][] = [
    [
      'a start of an estimate',
      [
        observer('state_matrix: 1, output_matrix: 1, gain: 1')[0].replace(' }', ', start: 2 }'),
        observer('state_matrix: 1, output_matrix: 1, gain: 1')[1],
      ],
      /'start' of 'out' does nothing: 'estimate' has no single value to start; give its observer `starts_at`, one number/,
    ],
    [
      'a start of an observer',
      [
        observer('')[0],
        `${observer('state_matrix: 1, output_matrix: 1, gain: 1')[1].slice(0, -1)}, start: 2 }`,
      ],
      /'start' of 'model' does nothing: 'observer' has no single value to start; give it `starts_at`/,
    ],
    [
      'a start of what keeps nothing',
      ['out: { value: x, start: 2 }'],
      /'start' of 'out' does nothing: 'value' has no single value to start; leave it out, or give it to a signal that keeps a value/,
    ],
    [
      'a feedthrough of nothing',
      observer('state_matrix: 1, output_matrix: 1, feedthrough: 1, gain: 1'),
      /`feedthrough` needs `driven_by`, since it has a number for each of its entries/,
    ],
    [
      'a feedthrough of another size',
      observer(
        'driven_by: x, state_matrix: 1, input_matrix: 1, output_matrix: 1, feedthrough: [1, 2], gain: 1',
      ),
      /`feedthrough` has 1 row of 2; expected 1 row of 1 number/,
    ],
    [
      'a pid without gains',
      ['out: { pid: { anti_windup: hold_integral }, of: x, range: [-1, 1] }'],
      /pid of 'out' has no gain: give at least one of kp, ki, kd/,
    ],
    [
      'a gain of another form',
      ['out: { pid: { form: standard, kp: 1, ki: 2 1/s }, of: x }'],
      /in standard form got 'ki'; expected integral_time and derivative_time, or another 'form'/,
    ],
    [
      'a form without its common gain',
      ['out: { pid: { form: interacting, integral_time: 1 s }, of: x }'],
      /in interacting form needs kp, which multiplies all of it/,
    ],
    [
      'a weight without a target',
      ['out: { pid: { kp: 1, target_weight: 0.5 }, of: x }'],
      /has a target_weight, but 'of' is one signal; expected of: { target: …, measurement: … }/,
    ],
    [
      'pulling back without a time',
      ['out: { pid: { ki: 1 1/s, anti_windup: pull_back }, of: x, range: [-1, 1] }'],
      /needs a pull_back_time/,
    ],
    [
      'a start that nothing can bring about',
      ['out: { pid: { kp: 1, bumpless_start: 0.5 }, of: x }'],
      /has 'bumpless_start', which acts on the integral, but no integral/,
    ],
    [
      'tracking without a condition',
      ['out: { pid: { ki: 1 1/s, track: x }, of: x }'],
      /needs both track and track_when, or neither/,
    ],
    [
      'anti-windup without a range',
      ['out: { pid: { ki: 1 1/s, anti_windup: pull_back, pull_back_time: 1 s }, of: x }'],
      /`anti_windup` without a `range:` of the signal has nothing to act on/,
    ],
    [
      'a pair where one signal is taken',
      ['out: { low_pass: 1 s, of: { target: 1, measurement: x } }'],
      /`low_pass` takes one signal, such as `target - measurement`/,
    ],
    [
      'a denominator that starts with zero',
      ['out: { transfer_function: { numerator: [1], denominator: [0, 1] }, of: x }'],
      /has a denominator that starts with 0; expected its highest power first/,
    ],
    [
      'a filter that would need the future',
      ['out: { transfer_function: { numerator: [1, 0, 0], denominator: [1, 1] }, of: x }'],
      /numerator of degree 2 over a denominator of degree 1, and so would need samples to come/,
    ],
    [
      'sections that do not come out even',
      ['out: { biquads: [1, 2, 3, 4], of: x }'],
      /biquads of 'out' got 4 coefficients, expected 5 for each section/,
    ],
    [
      'a low_pass with two time constants',
      ['out: { low_pass: { time_constant: 1 s, weight: 0.5 }, of: x }'],
      /has both a time_constant and a weight; expected one of them/,
    ],
    [
      'a low_pass with none',
      ['out: { low_pass: { sum_by: forward }, of: x }'],
      /has neither a time_constant nor a weight/,
    ],
    [
      'a frequency that a rule cannot keep',
      ['out: { low_pass: { time_constant: 1 s, exact_at: 1 Hz }, of: x }'],
      /has exact_at with sum_by: backward; it bends the trapezoid rule alone/,
    ],
    [
      'a mean of no whole number of samples',
      ['out: { moving_average: 2.5, of: x }'],
      /has a length of 2.5; expected a whole number from 1 to 1000/,
    ],
    [
      'a mean of a changing number of samples',
      ['out: { moving_average: x, of: x }'],
      /has a length of something that changes; expected a whole number/,
    ],
    [
      'gains that do not match the states',
      ['out: { state_feedback: { states: [x, 2*x], gains: [1, 2, 3] } }'],
      /`gains` has 1 row of 3; expected rows of 2 numbers/,
    ],
    [
      'points that do not ascend',
      ['out: { table: { points: [0, 1, 1], values: [1, 2, 3] }, of: x }'],
      /the points of table 'out' must be ascending numbers, but number 3 is 1 after 1/,
    ],
    [
      'a value too few',
      ['out: { table: { points: [0, 1, 2], values: [1, 2] }, of: x }'],
      /table of 'out' has 2 values for 3 points; expected one for each/,
    ],
    [
      'a second signal without points',
      ['out: { table: { points: [0, 1], values: [1, 2], second: x }, of: x }'],
      /has a second signal and needs second_points/,
    ],
    [
      'an entry of another dimension',
      ['out: { state_feedback: { states: [x], gains: [2 s] } }'],
      /an entry of `gains` .*s/,
    ],
    [
      'an observer without a gain',
      observer('state_matrix: 1, output_matrix: 1'),
      /needs a gain, or process_covariance and measurement_covariance/,
    ],
    [
      'an observer with two gains',
      observer('state_matrix: 1, output_matrix: 1, gain: 1, process_covariance: 1'),
      /has both a gain and covariances; expected one of them/,
    ],
    [
      'an observer of what cannot be seen',
      observer('state_matrix: 2, output_matrix: 0, process_covariance: 1, measurement_covariance: 1'),
      /has no steady gain: the variance did not settle in 60 doublings/,
    ],
    [
      'a measurement without noise',
      observer('state_matrix: 1, output_matrix: 1, process_covariance: 1, measurement_covariance: 0'),
      /has no steady gain: the measurement_covariance cannot be inverted/,
    ],
    [
      'a negative variance',
      observer('state_matrix: 1, output_matrix: 1, process_covariance: -1, measurement_covariance: 1'),
      /the process_covariance has the variance -1 in row 1; expected at least 0/,
    ],
    [
      'a model that changes',
      observer('state_matrix: x, output_matrix: 1, process_covariance: 1, measurement_covariance: 1'),
      /has a state_matrix that changes while it runs/,
    ],
    [
      'an estimate of no observer',
      ['out: { estimate: other }', 'other: { value: x }'],
      /'other' estimates no 'out'; it is no observer/,
    ],
    [
      'an estimate that its observer does not name',
      [...observer('state_matrix: 1, output_matrix: 1, gain: 1'), 'more: { estimate: model }'],
      /'model' estimates no 'more'; its states are 'out'/,
    ],
    [
      'an estimate of two observers',
      [
        'out: { estimate: [model, x_again] }',
        'x_again: { value: x }',
        'model: { observer: { states: [out], measured: x, state_matrix: 1, output_matrix: 1, gain: 1, uses: this_sample } }',
      ],
      /estimate of 'out' names 2 observers; expected one/,
    ],
    [
      'a start that changes',
      observer('state_matrix: 1, output_matrix: 1, gain: 1, starts_at: x'),
      /has a starts_at that is no list of 1; expected one number for each state/,
    ],
    [
      'covariances that are not symmetric',
      [
        'out: { estimate: model }',
        'more: { estimate: model }',
        'model: { observer: { states: [out, more], measured: x, uses: this_sample, state_matrix: [[1, 0], [0, 1]], output_matrix: [1, 0], process_covariance: [[1, 0.5], [0, 1]], measurement_covariance: 1 } }',
      ],
      /the process_covariance is not symmetric/,
    ],
    [
      'an observer that is driven and has no input_matrix',
      observer('state_matrix: 1, output_matrix: 1, gain: 1, driven_by: x'),
      /has driven_by and needs an input_matrix/,
    ],
    ['a table without points', ['out: { table: { values: [1, 2] }, of: x }'], /`points` is missing/],
    [
      'targets of the wrong number',
      ['out: { state_feedback: { states: [x, 2*x], gains: [1, 2], targets: [1] } }'],
      /`targets` has 1 row of 1; expected 2 rows/,
    ],
    [
      'a matrix of uneven rows',
      observer('state_matrix: [[1, 2], [3]], output_matrix: 1, gain: 1'),
      /`state_matrix` has 2 rows of 2 or 1; expected 1 row of 1 number/,
    ],
    [
      'a cycle that an observer does not break',
      [
        'out: { state_feedback: { states: [s], gains: [1] } }',
        's: { estimate: model }',
        'model: { observer: { states: [s], measured: out, state_matrix: 1, output_matrix: 1, gain: 1, uses: this_sample } }',
      ],
      /each needs the next at the same sampling instant/,
    ],
    [
      'a mean of a length in seconds',
      ['out: { moving_average: 2 s, of: x }'],
      /`length` must be a plain number/,
    ],
    [
      'a state that is no signal',
      [
        'out: { observer: { states: [a], measured: x, state_matrix: 1, output_matrix: 1, gain: 1, uses: this_sample } }',
      ],
      /`a` is no signal of this controller/,
    ],
  ];
  for (const [what, signals, expected] of cases) {
    it(what, () => {
      expect(errorOf(signals)).toMatch(expected);
    });
  }

  it('a coefficient array of the wrong length', () => {
    const signals = [
      'out: { estimate: model }',
      'more: { estimate: model }',
      'model: { observer: { states: [out, more], measured: x, state_matrix: a, output_matrix: [1, 0], gain: [1, 1], uses: this_sample } }',
    ];
    expect(errorOf(signals, { a: [1, 2, 3] })).toMatch(
      /'state_matrix' got 3 coefficients, expected whole rows of 2/,
    );
    expect(errorOf(signals, { a: [1, 2] })).toMatch(/has a state_matrix of 1 × 2; expected 2 × 2/);
  });
});
