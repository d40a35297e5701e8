import type { Example } from './example.js';

/** A controller that computes each second, with one signal. */
const law = (signal: string): string =>
  `controllers:\n  heating:\n    every: 1 s\n    signals:\n      ${signal}`;
const hidden = 'inputs: { cold: { unit: K } }';
/** The error is 2 K from the instant at 1 s on. */
const when = { cold: '{ step: 2 K, at: 1 s }' };
const power = 'power';
const kW = 'kW';

/** Three-term control, in each of its forms and with each of its rules; a subscript of time is an instant. */
export const pidExamples: readonly Example[] = [
  {
    of: 'pid',
    shows: 'proportional and integral action, parallel form, backward sum',
    shown: law('power: { pid: { kp: 3 kW/K, ki: 0.5 kW/(K*s) }, of: cold, unit: kW }'),
    hidden,
    when,
    outcomes: [
      {
        signal: power,
        at: '1 s',
        unit: kW,
        formula: '3·2 + 0.5·1·2',
        why: 'the present error counts at once',
      },
      { signal: power, at: '4 s', unit: kW, formula: '3·2 + 4·0.5·1·2' },
    ],
  },
  {
    of: 'pid',
    shows: 'the forward sum takes the error of the last instant, the trapezoid the mean of both',
    shown: law(`forward:   { pid: { ki: 0.5 kW/(K*s), sum_by: forward }, of: cold, unit: kW }
      trapezoid: { pid: { ki: 0.5 kW/(K*s), sum_by: trapezoid }, of: cold, unit: kW }`),
    hidden,
    when,
    outcomes: [
      { signal: 'forward', at: '4 s', unit: kW, formula: '3·0.5·1·2' },
      { signal: 'trapezoid', at: '4 s', unit: kW, formula: '3.5·0.5·1·2' },
    ],
  },
  {
    of: 'pid',
    shows: 'derivative action with its filter, by the three rules; ω·T = 0.5',
    shown: law(`plain:     { pid: { kd: 4 kW*s/K }, of: cold, unit: kW }
      backward:  { pid: { kd: 4 kW*s/K, derivative_corner: 0.5 rad/s }, of: cold, unit: kW }
      forward:   { pid: { kd: 4 kW*s/K, derivative_corner: 0.5 rad/s, sum_by: forward }, of: cold, unit: kW }
      trapezoid: { pid: { kd: 4 kW*s/K, derivative_corner: 0.5 rad/s, sum_by: trapezoid }, of: cold, unit: kW }`),
    hidden,
    when,
    outcomes: [
      { signal: 'plain', at: '1 s', unit: kW, formula: '4·2/1', why: 'one kick' },
      { signal: 'backward', at: '2 s', unit: kW, formula: '4·0.5·2/(1 + 0.5)^2' },
      { signal: 'forward', at: '2 s', unit: kW, formula: '4·0.5·2·(1 − 0.5)' },
      { signal: 'trapezoid', at: '2 s', unit: kW, formula: '2·4·0.5·2/(2 + 0.5)·(2 − 0.5)/(2 + 0.5)' },
    ],
  },
  {
    of: 'pid',
    shows: 'the standard form: the gain multiplies all of it',
    shown: law(
      'power: { pid: { form: standard, kp: 3 kW/K, integral_time: 6 s, derivative_time: 2 s }, of: cold, unit: kW }',
    ),
    hidden,
    when,
    outcomes: [
      { signal: power, at: '1 s', unit: kW, formula: '3·(1 + 1/6 + 2/1)·2' },
      { signal: power, at: '2 s', unit: kW, formula: '3·(1 + 2·1/6)·2' },
    ],
  },
  {
    of: 'pid',
    shows: 'the interacting form: the integral also sums the derivative',
    shown: law(
      'power: { pid: { form: interacting, kp: 3 kW/K, integral_time: 6 s, derivative_time: 2 s }, of: cold, unit: kW }',
    ),
    hidden,
    when,
    outcomes: [
      { signal: power, at: '1 s', unit: kW, formula: '3·(1 + 1/6)·(2 + 2·2/1)' },
      { signal: power, at: '2 s', unit: kW, formula: '3·2 + 3·1/6·((2 + 2·2/1) + 2)' },
    ],
  },
  {
    of: 'pid',
    shows:
      'target and measurement apart: a step of the target gives 0.4 of its kick, and none of the derivative',
    shown: law(`power: { pid: { kp: 3 kW/K, ki: 0.5 kW/(K*s), kd: 4 kW*s/K, target_weight: 0.4,
                      derivative_target_weight: 0 }, of: { target: wanted, measurement: water }, unit: kW }`),
    hidden: 'inputs: { wanted: { unit: K }, water: { unit: K } }',
    when: { wanted: '{ step: 2 K, at: 1 s }', water: '{ step: 1 K, at: 2 s }' },
    outcomes: [
      { signal: power, at: '1 s', unit: kW, formula: '3·0.4·2 + 0.5·1·2' },
      { signal: power, at: '2 s', unit: kW, formula: '3·(0.4·2 − 1) + 0.5·1·(2 + 1) + 4·(0 − 1)/1' },
    ],
  },
  {
    of: 'pid',
    shows: 'gains in which the firmware has folded its period of 1 s',
    shown: law('power: { pid: { gains: per_sample, ki: 0.5 kW/K, kd: 4 kW/K }, of: cold, unit: kW }'),
    hidden,
    when,
    outcomes: [{ signal: power, at: '1 s', unit: kW, formula: '0.5·2 + 4·2' }],
  },
  {
    of: 'pid',
    shows: 'firmware that computes with 2 s although its timer calls it each second',
    shown: law('power: { pid: { ki: 0.5 kW/(K*s), kd: 4 kW*s/K, assumed_period: 2 s }, of: cold, unit: kW }'),
    hidden,
    when,
    outcomes: [{ signal: power, at: '1 s', unit: kW, formula: '0.5·2·2 + 4·2/2' }],
  },
  {
    of: 'pid',
    shows: 'three rules against windup, at the end of a range for 5 instants, and then an error of −2 K',
    shown:
      law(`held:    { pid: { ki: 2 kW/(K*s), anti_windup: hold_integral }, of: cold, unit: kW, range: [0 kW, 10 kW] }
      bounded: { pid: { ki: 2 kW/(K*s), anti_windup: bound_integral }, of: cold, unit: kW, range: [0 kW, 10 kW] }
      pulled:  { pid: { ki: 2 kW/(K*s), anti_windup: pull_back, pull_back_time: 2 s }, of: cold, unit: kW, range: [0 kW, 10 kW] }
      none:    { pid: { ki: 2 kW/(K*s) }, of: cold, unit: kW, range: [0 kW, 10 kW] }`),
    hidden,
    when: { cold: '[{ step: 2 K, at: 1 s }, { step: -4 K, at: 6 s }]' },
    outcomes: [
      {
        signal: 'held',
        at: '6 s',
        unit: kW,
        formula: '8 − 2·2',
        why: 'it stayed at 8, since 12 would pass the range',
      },
      { signal: 'bounded', at: '6 s', unit: kW, formula: '10 − 2·2' },
      {
        signal: 'pulled',
        at: '6 s',
        unit: kW,
        formula: '10 + 13/4 − 2·2',
        why: 'what it keeps above 10 is 1, 5/2, 13/4 from 3 s on: half of what it would be',
      },
      { signal: 'none', at: '6 s', unit: kW, formula: '10', why: 'the integral is at 16 kW' },
    ],
  },
  {
    of: 'pid',
    shows: 'power-up without a bump, at the 4 kW that the heater has',
    shown: law('power: { pid: { kp: 3 kW/K, ki: 0.5 kW/(K*s), bumpless_start: 4 kW }, of: cold, unit: kW }'),
    hidden,
    rests: { cold: '2 K' },
    start: 'zero',
    outcomes: [
      { signal: power, at: '0 s', unit: kW, formula: '4', why: 'whatever the error' },
      { signal: power, at: '1 s', unit: kW, formula: '4 + 0.5·1·2' },
    ],
  },
  {
    of: 'pid',
    shows: 'the integral follows the hand while `by_hand` is not 0, and takes over without a bump',
    shown: law(
      `power: { pid: { kp: 3 kW/K, ki: 0.5 kW/(K*s), track: hand, track_when: by_hand }, of: cold, unit: kW }`,
    ),
    hidden: 'inputs: { cold: { unit: K }, hand: { unit: kW }, by_hand: {} }',
    when: {
      cold: '{ step: 2 K, at: 1 s }',
      hand: '{ step: 9 kW, at: 1 s }',
      by_hand: '{ pulse: 1, at: 1 s, for: 2 s }',
    },
    outcomes: [
      { signal: power, at: '2 s', unit: kW, formula: '9' },
      { signal: power, at: '3 s', unit: kW, formula: '9 + 0.5·1·2' },
    ],
  },
];
