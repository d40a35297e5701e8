import type { MeasureGroup } from './example.js';

const of = (name: string, text: string, unit: string, formula: string, more = {}) => ({
  requirement: `{ name: ${name}, measure: ${text} }`,
  unit,
  formula,
  ...more,
});

/** A valve whose command is twice what it can do. */
const valve: MeasureGroup = {
  title: 'a valve at its limits',
  shows: 'a valve whose command 2·sin(2πt) goes beyond its range for two thirds of the time: sin(π/6) = 1/2',
  shown: `plant:
  valve: { value: command, range: [-1, 1] }
scenarios:
  sway: { lasts: 5 s, inputs: { command: { sine: { amplitude: 2, frequency: 1 Hz }, at: 0 s } } }`,
  hidden: 'inputs: { command: {} }',
  halvings: 9,
  outcomes: [
    of('V-1', 'peak_effort, of: valve, in: sway, at_most: 1', '', '1'),
    of('V-2', 'saturated_share, of: valve, in: sway, at_most: 80 %', '%', '100·2/3', { within: 1e-6 }),
    of('V-3', 'longest_time_at_limit, of: valve, in: sway, at_most: 0.5 s', 's', '0.5·2/3', { within: 1e-6 }),
    of(
      'V-4',
      'duty, of: valve, over: 0.5 s, in: sway, at_most: 90 %',
      '%',
      '100·(2/3 + 4/π·(1 − cos(π/6)))',
      { within: 1e-6 },
    ),
    of('V-5', 'rms_effort, of: valve, in: sway, at_most: 0.95', '', '√(2/3 + 4/π·(π/6 − sin(π/3)/2))', {
      within: 1e-6,
    }),
    of('V-6', 'activity, of: valve, in: sway, at_most: 0.95', '', '√(2/3 + 4/π·(π/6 − sin(π/3)/2))', {
      why: 'its mean is 0',
      within: 1e-6,
    }),
    of('V-7', 'travel, of: valve, in: sway, at_most: 25', '', '5·4', { within: 1e-6 }),
    of('V-8', 'reversals_per_second, of: valve, in: sway, beyond: 0.1, at_most: 5 1/s', '1/s', '2'),
    of('V-9', 'slew_rate, of: valve, in: sway, at_most: 15 1/s', '1/s', '2·2·π', { within: 1e-6 }),
    of('V-10', 'oscillation_amplitude, of: valve, in: sway, at_most: 1', '', '(1 + 1)/2'),
    of('V-11', 'oscillation_frequency, of: valve, in: sway, at_most: 2 Hz', 'Hz', '1', { within: 1e-6 }),
  ],
};

/** A fixed-point law that doubles what it reads. */
const fixed: MeasureGroup = {
  title: 'a fixed-point law',
  shows: 'a Q1.15 law that doubles what it reads: 0.1 for ten instants, then 0.2, and so on to 0.8',
  shown: `controllers:
  axis:
    every: 10 ms
    arithmetic: { format: Q1.15, rounding: nearest, overflow: saturate }
    signals: { twice: { value: way + way, range: [-0.75, 0.75] } }
scenarios:
  climb: { lasts: 1 s, inputs: { way: { staircase: { rise: 0.1, every: 0.1 s, steps: 8 }, at: 0 s } } }`,
  hidden: 'inputs: { way: {} }',
  outcomes: [
    of('F-1', 'overflow_count, of: axis, in: climb, at_most: 0, scale: 1', '', '60', {
      why: '2·0.5 does not fit, so every instant from 0.4 s on',
    }),
    of('F-2', 'limit_hit_count, of: axis, in: climb, at_most: 0, scale: 1', '', '70', {
      why: '2·0.4 is beyond the range, so every instant from 0.3 s on',
    }),
  ],
};

/** Measures of actuators and of number formats. */
export const actuatorMeasures: readonly MeasureGroup[] = [valve, fixed];
