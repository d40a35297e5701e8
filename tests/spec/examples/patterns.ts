import type { Example } from './example.js';

/** What is often needed and takes several lines: `shows` is the heading. */
export const patterns: readonly Example[] = [
  {
    of: 'patterns',
    shows: 'Two actuators against each other',
    intro:
      'Two coils pull a ram in opposite ways around an idle current: the command is added to one and taken from the other, each with a gain and a lag of its own. Where the loop rests is found, not assumed: the pulling coil is the stronger one, so it rests below idle, and margins are those at that point.',
    shown: `constants: { idle: 2 A }
plant:
  pull: { lag: 2 ms, of: (idle + push)^2, gain: 5 N/A^2, unit: N }
  draw: { lag: 3 ms, of: (idle - push)^2, gain: 4 N/A^2, unit: N }
  ram:  { integral: (pull - draw)*(2 mm/(N*s)), unit: mm }
sensors:
  gauge: { of: ram, unit: mm }
controllers:
  law: { every: 1 ms, signals: { command: { value: (50 mA/mm)*(goal - gauge), unit: mA } } }
actuators:
  push: { of: command, range: [-2 A, 2 A], unit: A }`,
    hidden: 'inputs: { goal: { unit: mm } }',
    when: { goal: '{ step: 1 mm, at: 0.1 s }' },
    outcomes: [
      {
        signal: 'push',
        at: '0 s',
        unit: 'A',
        formula: '2·(√(4) − √(5))/(√(4) + √(5))',
        why: '5·(2 + p)^2 = 4·(2 − p)^2',
      },
      {
        signal: 'ram',
        at: '10 s',
        unit: 'mm',
        formula: '1 − p/0.05',
        where: { p: '2·(√(4) − √(5))/(√(4) + √(5))' },
        why: 'where the command is again p',
      },
      {
        requirement:
          '{ name: gain, measure: largest_loop_gain, at: push, frequency: 0.001 Hz, at_most: 100 dB }',
        unit: 'dB',
        formula: '20·log10(0.05·2·2·(5·(2 + p) + 4·(2 − p))/(2·π·0.001))',
        where: { p: '2·(√(4) − √(5))/(√(4) + √(5))' },
        why: 'the slope of both coils there',
      },
    ],
  },
  {
    of: 'patterns',
    shows: 'A cascade at two rates',
    intro:
      'The speed law runs every millisecond and asks the current law, which runs ten times as often, for a current. `at: voltage` opens the inner loop with the outer one closed, `at: wanted` the outer one with the inner one closed.',
    shown: `plant:
  current: { integral: (voltage - (0.5 ohm)*current)/(2 mH), unit: A }
  speed:   { integral: ((0.1 N*m/A)*current - load)/(0.4 g*m^2), unit: rad/s }
sensors:
  shunt: { of: current, unit: A }
  tacho: { of: speed, unit: rad/s }
controllers:
  outer: { every: 1 ms,   signals: { wanted:  { value: (0.2 A*s/rad)*(target - tacho), unit: A, range: [-20 A, 20 A] } } }
  inner: { every: 100 us, signals: { command: { value: (4 V/A)*(wanted - shunt), unit: V } } }
actuators:
  voltage: { of: command, range: [-24 V, 24 V], unit: V }`,
    hidden: 'inputs: { target: { unit: rad/s }, load: { unit: N*m } }',
    when: { load: '{ step: 0.02 N*m, at: 0.1 s }', target: '{ step: 50 rad/s, at: 0.1 s }' },
    outcomes: [
      {
        signal: 'speed',
        at: '2 s',
        unit: 'rad/s',
        formula: '50 − 0.2·(1 + 0.5/4)/0.2',
        why: 'the load takes 0.02/0.1 = 0.2 A, and 0.5·0.2 V through 4 V/A ask for 0.5/4 of it more',
      },
    ],
  },
  {
    of: 'patterns',
    shows: 'Parameters that belong together',
    intro:
      'What follows from other parameters has a `value`. `only_where` leaves out plants that cannot be, and `correlations` says which parameters rise together in random plants.',
    shown: `parameters:
  mass:    { nominal: 6 kg,    spread: 20 % }
  radius:  { nominal: 0.5 m,   from: 0.45 m, to: 0.6 m }
  inertia: { value: mass*radius^2/2, unit: kg*m^2 }           # of a drum
  drag:    { nominal: 0.1 N*m, from: 0 N*m, to: 0.3 N*m, distribution: triangular }
  motor:   { nominal: 2 N*m,   spread: 10 %, distribution: normal, deviation: 4 % }
  gearing: { nominal: 1,       values: [0.8, 1, 1.25] }       # one of three wheels
plant:
  speed:   { integral: (gearing*motor*duty - drag)/inertia, unit: rad/s }
perturbation:
  only_where: mass*radius < (3.4 kg*m)                        # what the crane can lift
  correlations: [{ of: mass, with: radius, coefficient: 0.7 }]`,
    hidden: 'inputs: { duty: {} }',
    when: { duty: '{ step: 0.8, at: 0 s }' },
    rests: { duty: '0.05' },
    outcomes: [
      {
        signal: 'speed',
        at: '3 s',
        unit: 'rad/s',
        formula: '2·0.8/(6·0.5^2/2)·3',
        why: 'of the nominal plant: at rest 0.05·2 N*m meet the drag',
      },
    ],
  },
  {
    of: 'patterns',
    shows: 'A plant that several specs share',
    intro: 'What one file defines, each spec that includes it can use, and need not use whole.',
    files: {
      'parts/drum.yaml': `parameters:
  inertia: { nominal: 0.75 kg*m^2, spread: 20 % }
inputs:
  load: { unit: N*m }
plant:
  speed: { integral: (torque - load)/inertia, unit: rad/s }`,
    },
    shown: `include: [parts/drum.yaml]
plant:
  torque: { lag: 40 ms, of: duty, gain: 6 N*m, unit: N*m }`,
    hidden: 'inputs: { duty: {} }',
    when: { duty: '{ step: 0.5, at: 0 s }', load: '{ step: 3 N*m, at: 1 s }' },
    outcomes: [
      {
        signal: 'speed',
        at: '2 s',
        unit: 'rad/s',
        formula: '6·0.5/0.75·(1 − 0.04)',
        why: 'the lag costs 40 ms of the second before the load',
        within: 1e-9,
      },
    ],
  },
  {
    of: 'patterns',
    shows: 'Curves and logs from files',
    intro:
      'A table, a recorded input and the bounds of a corridor may be columns of a CSV file beside the spec; its numbers are in the units stated.',
    files: {
      'fan.csv': 'duty,flow\n0,0\n40,12\n100,60',
      'night.csv': 'minute,outside\n0,0\n30,-6\n60,-3',
    },
    shown: `plant:
  flow: { table: { points: { file: fan.csv, column: duty, unit: "%" }, values: { file: fan.csv, column: flow, unit: L/s } }, of: duty, unit: L/s }
  air:  { value: outside, unit: K }
scenarios:
  night:
    lasts: 1 h
    inputs: { outside: { recorded: { file: night.csv, columns: [minute, outside], units: [min, K] }, at: 0 s }, duty: { step: 70 %, at: 0 s } }`,
    hidden: 'inputs: { outside: { unit: K }, duty: {} }',
    outcomes: [
      {
        requirement: '{ name: flow, measure: largest_value, of: flow, in: night, at_most: 60 L/s }',
        unit: 'L/s',
        formula: '12 + (60 − 12)·(70 − 40)/(100 − 40)',
      },
      {
        requirement: '{ name: cold, measure: time_of_smallest_value, of: air, in: night, at_most: 1 h }',
        unit: 'min',
        formula: '30',
      },
    ],
  },
];
