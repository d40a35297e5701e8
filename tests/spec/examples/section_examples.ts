import type { Example } from './example.js';

/** A controller that reads a sensor or an input each 100 ms. */
const reader = (of: string, unit: string): string =>
  `controllers: { reader: { every: 100 ms, signals: { taken: { value: ${of}, unit: ${unit} } } } }`;

const statistical = 'two standard errors of the mean';

/** What the keys of a signal of the plant do. */
export const signalExamples: readonly Example[] = [
  {
    of: 'plant',
    shows:
      'a gate that moves no faster than 0.1 m/s, a ram that ends at 0.5 m, and a tank that is half full at the start',
    shown: `plant:
  gate: { lag: 0.1 s, of: wish, slew: 0.1 m/s, unit: m }
  ram:  { lag: 2 s, of: wish, gain: 0.8, range: [0 m, 0.5 m], unit: m }
  tank: { integral: wish/(50 s), start: 1.5 m, unit: m }`,
    hidden: 'inputs: { wish: { unit: m } }',
    when: { wish: '{ step: 1 m, at: 0 s }' },
    outcomes: [
      { signal: 'gate', at: '3 s', unit: 'm', formula: '0.1·3' },
      { signal: 'ram', at: '1 s', unit: 'm', formula: '0.8·(1 − e^(−1/2))', within: 1e-6 },
      { signal: 'ram', at: '20 s', unit: 'm', formula: '0.5' },
      { signal: 'tank', at: '5 s', unit: 'm', formula: '1.5 + 1/50·5' },
    ],
  },
];

/** What the keys of a sensor do. */
export const sensorExamples: readonly Example[] = [
  {
    of: 'sensors',
    shows: 'a level gauge behind a converter',
    shown:
      'sensors:\n  gauge: { of: level, gain: 2 V/m, offset: 1 V, range: [0 V, 5 V], quantum: 0.25 V, unit: V }',
    hidden: `inputs: { level: { unit: m } }\n${reader('gauge', 'V')}`,
    when: { level: '[{ step: 0.7 m, at: 0 s }, { step: 3 m, at: 2 s }]' },
    outcomes: [
      {
        signal: 'gauge',
        at: '1 s',
        unit: 'V',
        formula: '10·0.25',
        why: '1 + 2·0.7 = 2.4 is nearest to ten steps',
      },
      { signal: 'gauge', at: '3 s', unit: 'V', formula: '5' },
    ],
  },
  {
    of: 'sensors',
    shows: 'a slow probe in a pipe, and a scale that drifts',
    shown: `sensors:
  probe: { of: water, filter: 8 s, dead_time: 2 s, unit: K }
  scale: { of: water, drift: 10 mK/s, unit: K }`,
    hidden: `inputs: { water: { unit: K } }\n${reader('probe + scale', 'K')}`,
    when: { water: '{ step: 5 K, at: 0 s }' },
    outcomes: [
      { signal: 'probe', at: '10 s', unit: 'K', formula: '5·(1 − e^(−(10 − 2)/8))' },
      { signal: 'scale', at: '10 s', unit: 'K', formula: '5 + 0.01·10' },
    ],
  },
  {
    of: 'sensors',
    shows: 'one that sticks from 3 s to 5 s',
    shown: 'sensors:\n  encoder: { of: angle, stuck: { from: 3 s, to: 5 s }, unit: rad }',
    hidden: `inputs: { angle: { unit: rad } }\n${reader('encoder', 'rad')}`,
    when: { angle: '{ ramp: 1 rad/s, at: 0 s }' },
    outcomes: [
      { signal: 'encoder', at: '4.95 s', unit: 'rad', formula: '2.9', why: 'the last sample before 3 s' },
      { signal: 'encoder', at: '5.05 s', unit: 'rad', formula: '5' },
    ],
  },
  {
    of: 'sensors',
    shows:
      'noise, and a fifth of the samples lost; a reading of a ramp is late by half a period and by p/(1 − p) periods',
    shown: `sensors:
  strain:  { of: force, noise: 0.3 N, unit: N }
  hum:     { of: force, noise: { deviation: 0.3 N, corner: 2 Hz }, unit: N }
  encoder: { of: angle, drops: 20 %, unit: mrad }
scenarios:
  run: { lasts: 200 s, inputs: { angle: { ramp: 1 mrad/s, at: 0 s } } }`,
    hidden: `inputs: { angle: { unit: mrad }, force: { unit: N } }
controllers: { reader: { every: 100 ms, signals: { taken: { value: strain + hum, unit: N }, turned: { value: encoder, unit: mrad } } } }`,
    outcomes: [
      {
        requirement: '{ name: noise, measure: activity, of: strain, in: run, at_most: 1 N }',
        unit: 'N',
        formula: '0.3',
        why: 'two standard errors of 2000 samples',
        within: 0.032,
      },
      {
        requirement: '{ name: coloured, measure: activity, of: hum, in: run, at_most: 1 N }',
        unit: 'N',
        formula: '0.3',
        why: 'its deviation is that of the whole, whatever the corner',
        within: 0.07,
      },
      {
        requirement:
          '{ name: late, measure: steady_state_error, of: encoder, to: angle, over: 190 s, in: run, at_most: 1 mrad }',
        unit: 'mrad',
        formula: '0.1·(0.5 + 0.2/(1 − 0.2))',
        why: statistical,
        within: 0.05,
      },
    ],
  },
];

const asked = (delay = '0 ms'): string =>
  `inputs: { ask: {} }
controllers: { law: { every: 100 ms, delay: ${delay}, signals: { wish: { value: ask } } } }`;

/** What the keys of an actuator do. */
export const actuatorExamples: readonly Example[] = [
  {
    of: 'actuators',
    shows: 'a worn valve, behind a converter of 5 % a step',
    shown:
      'actuators:\n  valve: { of: wish, resolution: 0.05, dead_band: 0.1, range: [-1, 1], effect: 80 % }',
    hidden: `plant: { felt: { value: valve } }\n${asked()}`,
    when: { ask: '[{ step: 0.52, at: 0 s }, { step: 2, at: 1 s }]' },
    outcomes: [
      { signal: 'valve', at: '0.5 s', unit: '', formula: '0.8·(0.5 − 0.1)' },
      { signal: 'valve', at: '1.5 s', unit: '', formula: '0.8·1' },
    ],
  },
  {
    of: 'actuators',
    shows: 'a motor valve of 2 s from shut to open, asked every 100 ms',
    shown: 'actuators:\n  valve: { of: wish, slew: 0.5 1/s }',
    hidden: `plant: { felt: { value: valve } }\n${asked()}`,
    when: { ask: '{ step: 1, at: 0 s }' },
    outcomes: [{ signal: 'valve', at: '450 ms', unit: '', formula: '5·0.5·0.1', why: 'five instants' }],
  },
  {
    of: 'actuators',
    shows:
      'a result of the instant at 200 ms that is ready after 30 ms, taken in the middle of a period and at its start',
    shown: `actuators:
  early: { of: wish, update: middle }
  late:  { of: wish, update: start }`,
    hidden: `plant: { felt: { value: early + late } }\n${asked('30 ms')}`,
    when: { ask: '{ step: 1, at: 150 ms }' },
    outcomes: [
      { signal: 'early', at: '249 ms', unit: '', formula: '0' },
      { signal: 'early', at: '250 ms', unit: '', formula: '1' },
      { signal: 'late', at: '299 ms', unit: '', formula: '0' },
      { signal: 'late', at: '300 ms', unit: '', formula: '1' },
    ],
  },
  {
    of: 'actuators',
    shows: 'a switched output, as its mean and with its ripple',
    shown: `actuators:
  mean:  { of: wish, range: [0, 24], pwm: mean }
  coil:  { of: wish, range: [0, 24], pwm: ripple }
plant:
  felt:  { value: coil }`,
    hidden: `plant: { other: { value: mean } }\n${asked()}`,
    when: { ask: '{ step: 6, at: 0 s }' },
    outcomes: [
      { signal: 'mean', at: '110 ms', unit: '', formula: '6' },
      { signal: 'felt', at: '110 ms', unit: '', formula: '24', why: 'for 6/24 of each 100 ms' },
      { signal: 'felt', at: '130 ms', unit: '', formula: '0' },
    ],
  },
];

/** What the keys of a controller do. */
export const controllerExamples: readonly Example[] = [
  {
    of: 'controllers',
    shows: 'a ramp of 1 a second, read at 30 ms, 130 ms, …, and put out 20 ms later',
    shown: `controllers:
  law: { every: 100 ms, phase: 30 ms, delay: 20 ms, signals: { wish: { value: ask } } }
actuators:
  valve: { of: wish }`,
    hidden: 'inputs: { ask: {} }\nplant: { felt: { value: valve } }',
    when: { ask: '{ ramp: 1 1/s, at: 0 s }' },
    outcomes: [
      { signal: 'wish', at: '140 ms', unit: '', formula: '0.13' },
      { signal: 'valve', at: '140 ms', unit: '', formula: '0.03' },
      { signal: 'valve', at: '150 ms', unit: '', formula: '0.13' },
    ],
  },
  {
    of: 'controllers',
    shows: 'instants that come late by up to J = 60 ms; a reading is old by the mean of gap²/(2·gap)',
    shown: `controllers:
  law: { every: 100 ms, jitter: 60 ms, signals: { read: { value: clock, unit: ms } } }
scenarios:
  run: { lasts: 200 s, inputs: { clock: { ramp: 1, at: 0 s } } }`,
    hidden: 'inputs: { clock: { unit: ms } }',
    outcomes: [
      {
        requirement:
          '{ name: age, measure: steady_state_error, of: read, to: clock, over: 190 s, in: run, at_most: 1 s }',
        unit: 'ms',
        formula: '100/2 + 60^2/(12·100)',
        why: statistical,
        within: 0.025,
      },
    ],
  },
];

/** What the keys of a scenario do. */
export const scenarioExamples: readonly Example[] = [
  {
    of: 'scenarios',
    shows:
      'a wheel that coasts from 3 rad/s, and a tank that is filled from empty after a power-up, though it rests half full',
    shown: `plant:
  speed: { integral: -speed/(2 s), unit: rad/s }
  level: { lag: 2 s, of: inflow, unit: m }
scenarios:
  coast:    { lasts: 4 s, start: { speed: 3 rad/s } }
  power_up: { lasts: 4 s, start: zero }`,
    hidden: 'inputs: { inflow: { unit: m } }',
    rests: { inflow: '1.5 m' },
    outcomes: [
      {
        requirement:
          '{ name: slow, measure: smallest_value, of: speed, in: coast, at_least: 0 rad/s, scale: 1 rad/s }',
        unit: 'rad/s',
        formula: '3·e^(−2)',
      },
      {
        requirement: '{ name: level, measure: largest_value, of: level, in: power_up, at_most: 2 m }',
        unit: 'm',
        formula: '1.5·(1 − e^(−2))',
      },
      {
        requirement: '{ name: rest, measure: smallest_value, of: level, in: coast, at_least: 1 m }',
        unit: 'm',
        formula: '1.5',
        why: 'from rest but for the speed',
      },
    ],
  },
];

const numbers = (arithmetic: string, ...signals: string[]): string =>
  `controllers:
  law:
    every: 1 ms
    arithmetic: ${arithmetic}
    signals:
${signals.map((line) => `      ${line}`).join('\n')}`;

/** What number formats do. */
export const arithmeticExamples: readonly Example[] = [
  {
    of: 'arithmetic',
    shows: 'a counter that float32 cannot move, since 2^24 + 1 has 25 bits',
    shown: numbers('float32', 'count: { value: ask + 1 }'),
    hidden: 'inputs: { ask: {} }',
    when: { ask: '{ step: 16777216, at: 0 s }' },
    outcomes: [{ signal: 'count', at: '1 ms', unit: '', formula: '2^24' }],
  },
  {
    of: 'arithmetic',
    shows: 'a product and a sum in Q1.15, in which 0.3 is 9830 and 0.7 is 22938',
    shown: numbers(
      '{ format: Q1.15, rounding: nearest, overflow: saturate }',
      'product: { value: low*high }',
      'sum:     { value: high + high - high }',
    ),
    hidden: 'inputs: { low: {}, high: {} }',
    when: { low: '{ step: 0.3, at: 0 s }', high: '{ step: 0.7, at: 0 s }' },
    outcomes: [
      { signal: 'product', at: '1 ms', unit: '', formula: '6881/2^15', why: '9830·22938/2^15 = 6881.1' },
      {
        signal: 'sum',
        at: '1 ms',
        unit: '',
        formula: '(32767 − 22938)/2^15',
        why: 'the first sum saturates',
      },
    ],
  },
  {
    of: 'arithmetic',
    shows: 'the same with the sum kept in 32 bits, and cut off instead of rounded',
    shown: numbers(
      '{ format: Q1.15, rounding: truncate, overflow: wrap, accumulator: 32 bit }',
      'sum:   { value: high + high - high }',
      'twice: { value: high + high }',
      'below: { value: -low*high }',
    ),
    hidden: 'inputs: { low: {}, high: {} }',
    when: { low: '{ step: 0.3, at: 0 s }', high: '{ step: 0.7, at: 0 s }' },
    outcomes: [
      { signal: 'sum', at: '1 ms', unit: '', formula: '22938/2^15' },
      { signal: 'twice', at: '1 ms', unit: '', formula: '2·22938/2^15 − 2', why: 'it wraps' },
      { signal: 'below', at: '1 ms', unit: '', formula: '−6882/2^15', why: '−6881.1 goes down' },
    ],
  },
];
