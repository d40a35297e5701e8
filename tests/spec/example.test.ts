import { expect, test } from 'vitest';
import type { Place } from '../../src/spec/spec.js';
import { heliostat } from './heliostat_example.js';
import { errorsOf, heliostatWith, specOf } from './loading.js';

const spec = specOf(heliostat);

function at(line: number, column: number): Place {
  return { file: 'a.pawl.yaml', line, column };
}

test('the example of the format loads as it stands', () => {
  expect(errorsOf(heliostat)).toEqual([]);
  expect(spec.loop).toBe('Heliostat azimuth drive');
});

test('firmware: every coefficient with where it is in the build, its unit and its place', () => {
  expect(spec.firmware).toMatchObject({
    build: ['make', '-s', '-C', 'firmware'],
    numbers: { kind: 'image', path: 'firmware/azimuth.elf', place: at(6, 10) },
  });
  expect(
    spec.firmware?.coefficients.map(({ name, at, format, unit }) => [name, at, format, unit?.text]),
  ).toEqual([
    ['kp', 'azimuth.gains.kp', undefined, undefined],
    ['ki', 'azimuth.gains.ki', undefined, '1/s'],
    ['kd', 'azimuth.gains.kd', undefined, 's'],
    ['rate_corner', 'azimuth.gains.rate_corner', undefined, 'Hz'],
    ['period', 'azimuth.period_us', undefined, 'us'],
    ['notch', 'azimuth_notch', 'Q2.14', undefined],
  ]);
  expect(spec.firmware?.coefficients[1]).toMatchObject({ place: at(9, 5), atPlace: at(9, 24) });
});

test('parameters: bounds from a spread and from two ends, in SI', () => {
  const bounds = spec.parameters.map(({ name, low, nominal, high }) => [name, low, nominal, high]);
  expect(bounds).toEqual([
    ['inertia', 30.4, 38, 45.6],
    ['friction', 10, 30, 90],
    ['stiction', 0, 0.6, 1.5],
    ['drive', 162, 180, 198],
    ['drive_lag', 0.03, 0.04, 0.05],
  ]);
});

test('the plant: each signal with its block, its gain and what it takes', () => {
  const [torque, speed, angle] = spec.plant;
  expect(torque).toMatchObject({
    block: 'lag',
    of: { kind: 'name', role: 'actuator', name: 'duty' },
    gain: { kind: 'name', role: 'parameter', name: 'drive' },
    settings: { lag: { kind: 'expression', expression: { kind: 'name', name: 'drive_lag' } } },
    place: at(27, 3),
  });
  expect(speed).toMatchObject({ block: 'integral', of: undefined, gain: undefined });
  expect(angle.unit).toMatchObject({ text: 'rad', scale: 1 });
});

test('a quantity in an expression is a number in SI at its place', () => {
  const integral = spec.plant[1].settings.integral;
  const found = JSON.stringify(integral).match(/\{"kind":"number","value":([^,]+),"place":(\{[^}]+\})/);
  expect(found?.[1]).toBe('0.0005');
  expect(JSON.parse(found![2])).toEqual(at(28, 78));
});

test('the sensor has its filter as a time constant and its settings in SI', () => {
  expect(spec.sensors[0]).toMatchObject({
    of: { role: 'signal', name: 'angle' },
    filter: { value: 0.008 },
    quantum: { value: 0.0001 },
    noise: { value: 0.00003 },
  });
});

test('the controller: timing, arithmetic and its blocks', () => {
  const [controller] = spec.controllers;
  expect(controller).toMatchObject({
    name: 'azimuth',
    arithmetic: 'float32',
    every: { kind: 'operation', operator: '*', left: { name: 'period' }, right: { value: 1e-6 } },
    delay: { value: 0.0004 },
    phase: undefined,
  });
  const [, shaped, command] = controller.signals;
  expect(shaped.settings.biquads).toEqual({ kind: 'coefficients', name: 'notch', place: at(41, 27) });
  expect(command.settings).toMatchObject({
    kp: { expression: { name: 'kp', role: 'coefficient' } },
    derivative_corner: {
      expression: { operator: '*', left: { name: 'rate_corner' }, right: { value: 2 * Math.PI } },
    },
    sum_by: { kind: 'word', word: 'backward' },
    anti_windup: { kind: 'word', word: 'hold_integral' },
  });
  expect(command.range).toMatchObject({ low: { kind: 'negate', of: { value: 1 } }, high: { value: 1 } });
});

test('the actuator takes a controller signal', () => {
  expect(spec.actuators).toMatchObject([
    { name: 'duty', of: 'command', ofPlace: at(46, 15), resolution: { value: 0.001 } },
  ]);
});

test('scenarios: events of inputs in SI', () => {
  expect(spec.scenarios).toMatchObject([
    {
      name: 'slew',
      lasts: 4,
      start: 'rest',
      inputs: { target: [{ shape: 'step', settings: { step: { value: 0.05 } } }] },
    },
    { name: 'squall', inputs: { gust: [{ shape: 'pulse', at: { value: 0.5 }, lasts: { value: 0.6 } }] } },
  ]);
});

test('requirements: signals, quantities and limits in SI, the unit as written', () => {
  const told = spec.requirements.map(({ name, measure, limit, unit }) => [name, measure, limit, unit.text]);
  expect(told).toEqual([
    ['AZ-1', 'overshoot', { at_most: 0.25 }, '%'],
    ['AZ-2', 'settling_time', { at_most: 2.5 }, 's'],
    ['AZ-3', 'peak_deviation', { at_most: 0.03 }, 'mrad'],
    ['AZ-4', 'saturated_share', { at_most: 0.15 }, '%'],
    ['AZ-5', 'phase_margin', { at_least: (40 * Math.PI) / 180 }, 'deg'],
    ['AZ-6', 'gain_margin', { at_least: 10 ** (6 / 20) }, 'dB'],
    ['AZ-7', 'modulus_margin', { at_least: 0.5 }, ''],
  ]);
  expect(spec.requirements[0]).toMatchObject({
    signals: { of: 'angle', to: 'target' },
    in: 'slew',
    holdsFor: 'all',
    reason: 'The image must stay inside the receiver aperture while slewing.',
    place: at(57, 13),
    limitPlace: at(57, 86),
  });
  expect(spec.requirements[1].quantities).toEqual({ band: 0.05 });
  expect(spec.requirements[5]).toMatchObject({
    inDecibels: true,
    in: undefined,
    around: [{ name: 'speed', value: 0.005, place: at(63, 64) }],
  });
});

test('the run and the merge', () => {
  expect(spec.perturbation).toMatchObject({ plants: 1000, seed: 11, confidence: 0.95 });
  expect(spec.merge).toMatchObject({ reference: '../../reference/latched/heliostat.json', maySlip: 0.05 });
});

test('what may be left out is left out', () => {
  const text = heliostatWith(
    [heliostat.slice(heliostat.indexOf('perturbation:')), ''],
    ['arithmetic: float32', 'phase: 1 ms'],
    [', holds_for: all', ', holds_for: 99 %'],
  );
  const short = specOf(text);
  expect(short.perturbation).toMatchObject({ plants: 200, seed: 1, confidence: 0.95 });
  expect(short.merge).toBeUndefined();
  expect(short.controllers[0].arithmetic).toBe('float64');
  expect(short.requirements[6].holdsFor).toBe(0.99);
});

test('a loop without firmware needs no firmware section', () => {
  const text = [
    'pawl: 1',
    'loop: a lag',
    'inputs: { push: { unit: N } }',
    'plant: { moved: { lag: 1 s, of: push, gain: 2 m/N, unit: m } }',
    'scenarios: { shove: { lasts: 5 s, inputs: { push: { step: 1 N, at: 1 s } }, start: zero } }',
    'requirements: [{ name: A, measure: peak_deviation, of: moved, in: shove, between: [1 m, 3 m] }]',
  ].join('\n');
  const loaded = specOf(text);
  expect(loaded.firmware).toBeUndefined();
  expect(loaded.scenarios[0].start).toBe('zero');
  expect(loaded.requirements[0].limit).toEqual({ between: [1, 3] });
});

test('a loop opened at a plant signal is opened at the one sensor that reads it', () => {
  const text = heliostatWith([
    'at: duty, around: { speed: 5 mrad/s }, at_least: 40',
    'at: angle, at_least: 40',
  ]);
  expect(specOf(text).requirements[4].signals).toEqual({ at: 'encoder' });
});
