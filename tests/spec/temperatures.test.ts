import { expect, test } from 'vitest';
import { parseUnit, siValue } from '../../src/spec/units.js';
import { errorsOf, specOf } from './loading.js';
import { type Pieces, smallSpec } from './small_spec.js';

// ITS-90 (1990): t/°C = T/K − 273.15, so that a difference is the same in both.
const water: Pieces = {
  parameters: 'ambient: { nominal: 20 degC, from: -5 °C, to: 308.15 K }',
  inputs: 'goal: { unit: K, rest: 18 degC }',
  plant: 'out: { lag: 60 s, of: drive + ambient, unit: K, start: 21.5 degC }',
  sensors: 'seen: { of: out, unit: K, offset: -273.15 K, quantum: 0.1 K }',
  signals: 'command: { value: k*(goal - seen), unit: K }',
  actuators: 'drive: { of: command, unit: K, range: [0, 40 K] }',
  inputsOfStep: 'goal: { step: 5 K, at: 0.1 s }',
};

test('a temperature in degC is counted from 273.15 K', () => {
  const unit = parseUnit('degC');
  expect(unit.kind === 'unit' && siValue('20', unit)).toBe(293.15);
  expect(unit.kind === 'unit' && siValue('-273.15', unit)).toBe(0);
});

test('where a temperature is meant, degC and K may be mixed', () => {
  const spec = specOf(smallSpec(water));
  expect(spec.parameters[0]).toMatchObject({ nominal: 293.15, low: 268.15, high: 308.15 });
  expect(spec.inputs[0].rest).toBe(291.15);
  expect(spec.plant[0].start).toBe(294.65);
});

test('what was written in degC is in K from then on, so that no report shows kelvins as degrees', () => {
  const { unit } = specOf(smallSpec(water)).parameters[0];
  expect(unit).toMatchObject({ text: 'K', scale: 1 });
});

test('an expression takes a temperature as a number in K', () => {
  const plant = 'out: { lag: 60 s, of: drive + ambient - (10 degC) + (300 K), unit: K }';
  expect(JSON.stringify(specOf(smallSpec({ ...water, plant })).plant[0].of)).toContain('"value":283.15');
});

test('around and constants are points too', () => {
  const spec = specOf(
    smallSpec({
      ...water,
      constants: 'frost: 0 degC',
      plant: 'out: { lag: 60 s, of: drive + ambient - frost + frost, unit: K }',
      requirements:
        '- { name: R, measure: phase_margin, at: seen, around: { out: 25 degC }, at_least: 10 deg }',
    }),
  );
  expect(spec.requirements[0].around[0].value).toBe(298.15);
  expect(JSON.stringify(spec.plant[0].of)).toContain('"value":273.15');
});

const differences: [what: string, pieces: Pieces, error: string][] = [
  [
    'a spread',
    { parameters: 'ambient: { nominal: 20 degC, spread: 5 degC }' },
    '10:40: `spread` is a difference of temperatures, which is in K; degC is a temperature',
  ],
  [
    'a step',
    { inputsOfStep: 'goal: { step: 5 degC, at: 0.1 s }' },
    '28:21: `step` is a difference of temperatures, which is in K; degC is a temperature',
  ],
  [
    'a quantum',
    { sensors: 'seen: { of: out, unit: K, offset: -273.15 K, quantum: 1 degC }' },
    '16:57: `quantum` is a difference of temperatures, which is in K; degC is a temperature',
  ],
  [
    'an offset',
    { sensors: 'seen: { of: out, unit: K, offset: 1 degC }' },
    '16:37: `offset` is a difference of temperatures, which is in K; degC is a temperature',
  ],
  [
    'a limit of a deviation',
    { requirements: '- { name: R, measure: peak_deviation, of: out, in: step, at_most: 2 degC }' },
    '30:69: the limit of `peak_deviation` is a difference of temperatures, which is in K; degC is a temperature',
  ],
  [
    'a declared unit',
    { plant: 'out: { lag: 60 s, of: drive + ambient, unit: degC }' },
    '14:48: a signal cannot be in degC: only a number can, as in 20 degC; use K',
  ],
  [
    'a factor',
    { plant: 'out: { lag: 60 s, of: drive + ambient, unit: K }\nheat: { value: drive*(3 W/degC), unit: W }' },
    '15:29: degC stands alone; in a product a difference of temperatures is in K',
  ],
  [
    'a time',
    { plant: 'out: { lag: 60 degC, of: drive + ambient, unit: K }' },
    '14:15: `lag` must be a time, or a corner in Hz or rad/s, but this is K',
  ],
];

test.each(differences)('degC is refused where no temperature is meant: %s', (_, pieces, error) => {
  expect(errorsOf(smallSpec({ ...water, ...pieces }))).toEqual([`a.pawl.yaml:${error}`]);
});

test('a constant in degC is a temperature wherever its name stands', () => {
  const pieces = {
    ...water,
    constants: 'warm: 40 degC',
    actuators: 'drive: { of: command, unit: K, range: [0, warm] }',
  };
  expect(specOf(smallSpec(pieces)).actuators[0].range?.high).toMatchObject({ kind: 'number', value: 313.15 });
});
