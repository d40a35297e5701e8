import type { Example } from './example.js';

/** A controller that computes every 10 ms. */
const law = (...signals: string[]): string =>
  `controllers:\n  law:\n    every: 10 ms\n    signals:\n${signals.map((line) => `      ${line}`).join('\n')}`;
const seen = { hidden: 'inputs: { seen: {} }', when: { seen: '{ step: 1, at: 10 ms }' } };

/** The same in a loop that returns what the law gives: L has the size of its response. */
const ring = (signal: string): string => `plant: { back: { value: held } }
sensors: { seen: { of: back } }
${law(signal)}
actuators: { held: { of: ${signal.split(':')[0]} } }`;

const gain = (frequency: string): string =>
  `{ name: gain at ${frequency}, measure: largest_loop_gain, at: held, frequency: ${frequency}, at_most: 2 }`;

/** Blocks of controllers, but pid; a step of `seen` comes at the second instant. */
export const controllerBlocks: readonly Example[] = [
  {
    of: 'value',
    room: 'controller',
    shown: law('rate: { value: (seen - before(seen))/(10 ms), unit: rad/s }'),
    hidden: 'inputs: { seen: { unit: rad } }',
    when: { seen: '{ ramp: 0.3 rad/s, at: 0 s }' },
    outcomes: [{ signal: 'rate', at: '50 ms', unit: 'rad/s', formula: '(0.3·0.05 − 0.3·0.04)/0.01' }],
  },
  {
    of: 'dead_band',
    room: 'controller',
    shown: law('ignored: { dead_band: 0.2 V, of: seen, unit: V }'),
    hidden: 'inputs: { seen: { unit: V } }',
    when: { seen: '[{ step: 1 V, at: 0 s }, { step: -0.9 V, at: 20 ms }]' },
    outcomes: [
      { signal: 'ignored', at: '15 ms', unit: 'V', formula: '1 − 0.2' },
      { signal: 'ignored', at: '25 ms', unit: 'V', formula: '0' },
    ],
  },
  {
    of: 'hysteresis',
    room: 'controller',
    shown: law('fan: { hysteresis: { on_above: 60 K, off_below: 50 K, on: 1, off: 0 }, of: seen }'),
    hidden: 'inputs: { seen: { unit: K } }',
    when: { seen: '[{ step: 65 K, at: 10 ms }, { step: -10 K, at: 20 ms }, { step: -10 K, at: 30 ms }]' },
    outcomes: [
      { signal: 'fan', at: '25 ms', unit: '', formula: '1', why: '55 K, but it was on' },
      { signal: 'fan', at: '35 ms', unit: '', formula: '0' },
    ],
  },
  {
    of: 'biquads',
    shown: law('shaped: { biquads: { sections: [[0.2, 0.3, 0.1, -0.5, 0.1]] }, of: seen }'),
    ...seen,
    outcomes: [
      { signal: 'shaped', at: '10 ms', unit: '', formula: '0.2' },
      { signal: 'shaped', at: '20 ms', unit: '', formula: '0.2 + 0.3 + 0.5·0.2' },
      { signal: 'shaped', at: '1 s', unit: '', formula: '(0.2 + 0.3 + 0.1)/(1 − 0.5 + 0.1)', why: 'at rest' },
    ],
  },
  {
    of: 'biquads',
    shows: 'the same filter as a library stores it, with a1 and a2 negated, in transposed form',
    shown: law(
      'shaped: { biquads: { sections: [[0.2, 0.3, 0.1, 0.5, -0.1]], feedback_sign: plus, structure: transposed_2 }, of: seen }',
    ),
    ...seen,
    outcomes: [{ signal: 'shaped', at: '20 ms', unit: '', formula: '0.2 + 0.3 + 0.5·0.2' }],
  },
  {
    of: 'transfer_function',
    room: 'controller',
    shown: law(
      'led: { transfer_function: { numerator: [3, -2.4], denominator: [1, -0.4], structure: direct_2 }, of: seen }',
    ),
    ...seen,
    outcomes: [
      { signal: 'led', at: '10 ms', unit: '', formula: '3' },
      { signal: 'led', at: '20 ms', unit: '', formula: '3 − 2.4 + 0.4·3' },
      { signal: 'led', at: '1 s', unit: '', formula: '(3 − 2.4)/(1 − 0.4)', why: 'at rest, z = 1' },
    ],
  },
  {
    of: 'low_pass',
    shown: law('calm: { low_pass: 40 ms, of: seen }'),
    ...seen,
    outcomes: [
      { signal: 'calm', at: '10 ms', unit: '', formula: '10/(40 + 10)' },
      { signal: 'calm', at: '20 ms', unit: '', formula: '1 − (1 − 10/50)^2' },
    ],
  },
  {
    of: 'low_pass',
    shows: 'with the weight that the firmware holds, and by other rules',
    shown: law(
      'weighted:  { low_pass: { weight: 0.25 }, of: seen }',
      'exact:     { low_pass: { time_constant: 40 ms, sum_by: exact }, of: seen }',
      'trapezoid: { low_pass: { time_constant: 40 ms, sum_by: trapezoid }, of: seen }',
    ),
    ...seen,
    outcomes: [
      { signal: 'weighted', at: '20 ms', unit: '', formula: '1 − (1 − 0.25)^2' },
      {
        signal: 'exact',
        at: '30 ms',
        unit: '',
        formula: '1 − e^(−20/40)',
        why: 'the continuous lag, 20 ms after the step',
      },
      { signal: 'trapezoid', at: '10 ms', unit: '', formula: '10/(40 + 5)·0.5' },
    ],
  },
  {
    of: 'low_pass',
    shows: 'the trapezoid rule made exact at its corner of 20 Hz',
    shown: ring('calm: { low_pass: { time_constant: 20 Hz, sum_by: trapezoid, exact_at: 20 Hz }, of: seen }'),
    outcomes: [
      {
        requirement: gain('20 Hz'),
        unit: '',
        formula: '1/√(2)',
        why: 'that of the continuous lag at its corner',
      },
    ],
  },
  {
    of: 'lead_lag',
    room: 'controller',
    shown: law('led: { lead_lag: { lead: 60 ms, lag: 20 ms, sum_by: exact }, of: seen, gain: 2 }'),
    ...seen,
    outcomes: [
      { signal: 'led', at: '10 ms', unit: '', formula: '2·60/20' },
      {
        signal: 'led',
        at: '30 ms',
        unit: '',
        formula: '2·(1 + (60/20 − 1)·e^(−1))',
        why: '20 ms after the step',
      },
    ],
  },
  {
    of: 'lead_lag',
    room: 'controller',
    shows: 'the trapezoid rule, exact at 10 Hz',
    shown: ring(
      'led: { lead_lag: { lead: 10 Hz, lag: 30 Hz, sum_by: trapezoid, exact_at: 10 Hz }, of: seen }',
    ),
    outcomes: [
      {
        requirement: gain('10 Hz'),
        unit: '',
        formula: '√(1 + 1)/√(1 + (10/30)^2)',
        why: 'that of (1 + T₁ s)/(1 + T₂ s)',
      },
    ],
  },
  {
    of: 'moving_average',
    shown: law('mean: { moving_average: 5, of: seen }'),
    ...seen,
    outcomes: [{ signal: 'mean', at: '30 ms', unit: '', formula: '3/5' }],
  },
  {
    of: 'notch',
    shown: ring('clear: { notch: { frequency: 12 Hz, width: 4 Hz, depth: -20 dB }, of: seen }'),
    outcomes: [
      { requirement: gain('12 Hz'), unit: 'dB', formula: '−20' },
      { requirement: gain('0.0001 Hz'), unit: '', formula: '1', within: 1e-8 },
    ],
  },
  {
    of: 'notch',
    shows: 'depth 0 in another structure',
    shown: law('clear: { notch: { frequency: 25 Hz, width: 25 Hz, structure: transposed_2 }, of: seen }'),
    ...seen,
    outcomes: [
      {
        signal: 'clear',
        at: '10 ms',
        unit: '',
        formula: '1/(1 + tan(π/4))',
        why: 'width·T/2 = 2π·25 Hz·10 ms/2 = π/4',
      },
    ],
  },
  {
    of: 'feed_forward',
    shown: law('push: { feed_forward: { lead: 50 ms, lag: 15 ms }, of: seen, gain: 2 }'),
    ...seen,
    outcomes: [
      {
        signal: 'push',
        at: '10 ms',
        unit: '',
        formula: '2·(1 + 50/10)·10/(15 + 10)',
        why: 'the change led by T₁/T, behind a low_pass',
      },
    ],
  },
  {
    of: 'feed_forward',
    shows: 'by the exact rule, without a filter',
    shown: law('push: { feed_forward: { lead: 50 ms, sum_by: exact }, of: seen }'),
    ...seen,
    outcomes: [{ signal: 'push', at: '10 ms', unit: '', formula: '1 + 1/(e^(10/50) − 1)' }],
  },
  {
    of: 'state_feedback',
    shown: law(
      'torque: { state_feedback: { states: [angle, speed], gains: [20 N*m/rad, 3 N*m*s/rad], targets: [goal, 0 rad/s] }, unit: N*m }',
    ),
    hidden: 'inputs: { angle: { unit: rad }, speed: { unit: rad/s }, goal: { unit: rad } }',
    when: {
      goal: '{ step: 0.5 rad, at: 0 s }',
      angle: '{ step: 0.1 rad, at: 0 s }',
      speed: '{ step: 2 rad/s, at: 0 s }',
    },
    outcomes: [{ signal: 'torque', at: '5 ms', unit: 'N*m', formula: '20·(0.5 − 0.1) + 3·(0 − 2)' }],
  },
  {
    of: 'observer',
    shows:
      'the temperature of a wall, of which each instant keeps 0.9, and which the heater warms by 0.2 K per kW',
    shown: law(
      'surprise: { observer: { states: [wall], measured: seen, driven_by: heat, state_matrix: [[0.9]],',
      '                        input_matrix: [0.2 K/kW], output_matrix: [1], gain: [0.5], starts_at: [1 K],',
      '                        uses: this_sample }, unit: K }',
      'wall:     { estimate: surprise, unit: K }',
    ),
    hidden: 'inputs: { seen: { unit: K }, heat: { unit: kW } }',
    rests: { seen: '3 K', heat: '2 kW' },
    start: 'zero',
    outcomes: [
      { signal: 'surprise', at: '0 s', unit: 'K', formula: '3 − 1' },
      { signal: 'wall', at: '0 s', unit: 'K', formula: '1 + 0.5·2' },
      {
        signal: 'wall',
        at: '10 ms',
        unit: 'K',
        formula: '2.2 + 0.5·(3 − 2.2)',
        why: 'expected: 0.9·2 + 0.2·2 = 2.2',
      },
    ],
  },
  {
    of: 'observer',
    shows: 'a sensor that feels 0.1 K per kW of the heater at once',
    shown: law(
      'surprise: { observer: { states: [wall], measured: seen, driven_by: heat, state_matrix: [[0.9]],',
      '                        input_matrix: [0.2 K/kW], output_matrix: [1], feedthrough: [0.1 K/kW], gain: [0.5],',
      '                        uses: last_sample }, unit: K }',
      'wall:     { estimate: surprise, unit: K }',
    ),
    hidden: 'inputs: { seen: { unit: K }, heat: { unit: kW } }',
    rests: { seen: '3 K', heat: '2 kW' },
    start: 'zero',
    outcomes: [
      { signal: 'surprise', at: '0 s', unit: 'K', formula: '3', why: 'nothing has driven it yet' },
      { signal: 'wall', at: '10 ms', unit: 'K', formula: '0.2·2 + 0.5·3' },
      { signal: 'surprise', at: '10 ms', unit: 'K', formula: '3 − 1.9 − 0.1·2' },
    ],
  },
  {
    of: 'observer',
    shows: 'its steady gain worked out from the noise',
    shown: law(
      'surprise: { observer: { states: [wall], measured: seen, state_matrix: [[1]], output_matrix: [1],',
      '                        process_covariance: [[1 K^2]], measurement_covariance: [[2 K^2]], uses: last_sample }, unit: K }',
      'wall:     { estimate: surprise, unit: K }',
    ),
    hidden: 'inputs: { seen: { unit: K } }',
    rests: { seen: '3 K' },
    start: 'zero',
    outcomes: [
      {
        signal: 'wall',
        at: '0 s',
        unit: 'K',
        formula: '0',
        why: 'the present sample counts at the next instant',
      },
      {
        signal: 'wall',
        at: '10 ms',
        unit: 'K',
        formula: '3·2/(2 + 2)',
        why: 'p² = p + 2 of the Riccati equation gives p = 2, and the gain is p/(p + 2)',
      },
    ],
  },
  {
    of: 'estimate',
    shows: 'two states of a belt, position and speed, from its position alone',
    shown: law(
      'surprise: { observer: { states: [place, speed], measured: seen, state_matrix: [[1, 10 ms], [0, 1]],',
      '                        output_matrix: [1, 0], gain: [0.6, 8 1/s], uses: this_sample }, unit: m }',
      'place:    { estimate: surprise, unit: m }',
      'speed:    { estimate: surprise, unit: m/s }',
    ),
    hidden: 'inputs: { seen: { unit: m } }',
    when: { seen: '{ step: 0.5 m, at: 10 ms }' },
    outcomes: [
      { signal: 'place', at: '10 ms', unit: 'm', formula: '0.6·0.5' },
      { signal: 'speed', at: '10 ms', unit: 'm/s', formula: '8·0.5' },
    ],
  },
  {
    of: 'switch',
    shows: 'full power far from the target, and the fine law near it',
    shown: law('fine:  { value: 0.5*seen }', 'power: { switch: { between: [fine, 1], by: seen > 4 } }'),
    hidden: 'inputs: { seen: {} }',
    when: { seen: '[{ step: 6, at: 10 ms }, { step: -3, at: 20 ms }]' },
    outcomes: [
      { signal: 'power', at: '10 ms', unit: '', formula: '1' },
      { signal: 'power', at: '20 ms', unit: '', formula: '0.5·3' },
    ],
  },
  {
    of: 'switch',
    shows: 'without a bump: the jump from 8 to 2 fades with 40 ms',
    shown: law('power: { switch: { between: [8, 2], by: seen, bumpless: 40 ms } }'),
    ...seen,
    outcomes: [
      { signal: 'power', at: '10 ms', unit: '', formula: '2 + 6' },
      { signal: 'power', at: '20 ms', unit: '', formula: '2 + 6·40/(40 + 10)' },
    ],
  },
  {
    of: 'table',
    room: 'controller',
    shows: 'a gain schedule against the speed',
    shown: law(
      'kp:      { table: { points: [100 rpm, 500 rpm], values: [4 A/rad, 1 A/rad] }, of: speed, unit: A/rad }',
      'current: { pid: { kp: kp }, of: seen, unit: A }',
    ),
    hidden: 'inputs: { speed: { unit: rpm }, seen: { unit: rad } }',
    when: { speed: '{ step: 300 rpm, at: 0 s }', seen: '{ step: 0.2 rad, at: 0 s }' },
    outcomes: [
      { signal: 'current', at: '5 ms', unit: 'A', formula: '(4 + (1 − 4)·(300 − 100)/(500 − 100))·0.2' },
    ],
  },
];
