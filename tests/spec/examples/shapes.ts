import type { Example } from './example.js';

const sun = 'sun';
const unit = 'W/m^2';

/** What an input can do: the sun on a heliostat field, a belt's load, a valve's command. */
export const shapeExamples: readonly Example[] = [
  {
    of: 'step',
    shown: '',
    hidden: 'inputs: { target: { unit: mrad } }\nplant: { seen: { value: target, unit: mrad } }',
    when: { target: '{ step: 50 mrad, at: 0.2 s }' },
    outcomes: [
      { signal: 'target', at: '0.1 s', unit: 'mrad', formula: '0' },
      { signal: 'target', at: '0.2 s', unit: 'mrad', formula: '50' },
    ],
  },
  {
    of: 'pulse',
    shown: '',
    hidden: 'inputs: { sun: { unit: W/m^2 } }\nplant: { seen: { value: sun, unit: W/m^2 } }',
    when: { sun: '{ pulse: -300 W/m^2, at: 10 s, for: 20 s }' },
    outcomes: [
      { signal: sun, at: '29 s', unit, formula: '−300' },
      { signal: sun, at: '30 s', unit, formula: '0' },
    ],
  },
  {
    of: 'ramp',
    shown: '',
    hidden: 'inputs: { load: { unit: kg/s } }\nplant: { seen: { value: load, unit: kg/s } }',
    when: { load: '{ ramp: 0.5 kg/s^2, at: 2 s, for: 4 s }' },
    outcomes: [
      { signal: 'load', at: '5 s', unit: 'kg/s', formula: '0.5·(5 − 2)' },
      { signal: 'load', at: '9 s', unit: 'kg/s', formula: '0.5·4' },
    ],
  },
  {
    of: 'sine',
    shown: '',
    hidden: 'inputs: { gust: { unit: N*m } }\nplant: { seen: { value: gust, unit: N*m } }',
    when: { gust: '{ sine: { amplitude: 12 N*m, frequency: 0.5 Hz, phase: 30 deg }, at: 1 s, for: 6 s }' },
    outcomes: [
      { signal: 'gust', at: '1 s', unit: 'N*m', formula: '12·sin(π/6)' },
      { signal: 'gust', at: '1.5 s', unit: 'N*m', formula: '12·sin(2·π·0.5·0.5 + π/6)' },
      { signal: 'gust', at: '8 s', unit: 'N*m', formula: '0' },
    ],
  },
  {
    of: 'chirp',
    shown: '',
    hidden: 'inputs: { shake: { unit: N } }\nplant: { seen: { value: shake, unit: N } }',
    when: { shake: '{ chirp: { amplitude: 3 N, first: 1 Hz, last: 5 Hz }, at: 0 s, for: 10 s }' },
    halvings: 9,
    outcomes: [
      {
        signal: 'shake',
        at: '2.3 s',
        unit: 'N',
        formula: '3·sin(2·π·(1·2.3 + (5 − 1)/10·2.3^2/2))',
        within: 1e-6,
      },
      { signal: 'shake', at: '10 s', unit: 'N', formula: '0' },
    ],
  },
  {
    of: 'square',
    shown: '',
    hidden: 'inputs: { valve: { unit: V } }\nplant: { seen: { value: valve, unit: V } }',
    when: { valve: '{ square: { amplitude: 2 V, frequency: 4 s }, at: 1 s }' },
    outcomes: [
      { signal: 'valve', at: '2 s', unit: 'V', formula: '2' },
      { signal: 'valve', at: '4 s', unit: 'V', formula: '−2' },
    ],
  },
  {
    of: 'staircase',
    shown: '',
    hidden: 'inputs: { speed: { unit: rpm } }\nplant: { seen: { value: speed, unit: rpm } }',
    when: { speed: '{ staircase: { rise: 300 rpm, every: 2 s, steps: 5 }, at: 1 s }' },
    outcomes: [
      { signal: 'speed', at: '6 s', unit: 'rpm', formula: '3·300' },
      { signal: 'speed', at: '60 s', unit: 'rpm', formula: '5·300' },
    ],
  },
  {
    of: 'noise',
    shown: '',
    hidden: 'inputs: { flow: { unit: L/s } }\nplant: { seen: { value: flow, unit: L/s } }',
    when: { flow: '{ noise: { deviation: 0.2 L/s, every: 50 ms }, at: 1 s, for: 20 s }' },
    outcomes: [
      { signal: 'flow', at: '0.9 s', unit: 'L/s', formula: '0' },
      { signal: 'flow', at: '21 s', unit: 'L/s', formula: '0' },
      {
        requirement:
          '{ name: R, measure: rms_effort, of: flow, in: as_stated, from: 1 s, until: 21 s, at_most: 1 L/s }',
        unit: 'L/s',
        formula: '0.2',
        why: 'as 400 draws can tell: two standard errors σ/√(2·400)',
        within: 0.07,
      },
    ],
  },
  {
    of: 'recorded',
    shown: '',
    hidden: 'inputs: { outdoor: { unit: K } }\nplant: { seen: { value: outdoor, unit: K } }',
    when: { outdoor: '{ recorded: [[0 s, 0 K], [60 s, -6 K], [60 s, -4 K], [90 s, -1 K]], at: 10 s }' },
    outcomes: [
      { signal: 'outdoor', at: '40 s', unit: 'K', formula: '−6·30/60' },
      { signal: 'outdoor', at: '70 s', unit: 'K', formula: '−4', why: 'after the jump' },
      { signal: 'outdoor', at: '200 s', unit: 'K', formula: '−1' },
    ],
  },
];
