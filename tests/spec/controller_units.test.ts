import { expect, test } from 'vitest';
import type { Expression, SignalDefinition } from '../../src/spec/spec.js';
import { errorsOf, specOf } from './loading.js';
import { type Pieces, smallSpec } from './small_spec.js';

/** An expression as text; every number and operation that the reader inserted shows. */
function shown(expression: Expression | undefined): string {
  switch (expression?.kind) {
    case undefined:
      return 'none';
    case 'number':
      return String(Number(expression.value.toPrecision(12)));
    case 'name':
      return expression.index === undefined ? expression.name : `${expression.name}[${expression.index}]`;
    case 'negate':
      return `-${shown(expression.of)}`;
    case 'before':
      return `before(${shown(expression.of)})`;
    case 'operation':
      return `(${shown(expression.left)} ${expression.operator} ${shown(expression.right)})`;
    case 'call':
      return `${expression.name}(${expression.arguments.map(shown).join(', ')})`;
  }
}

function signal(signals: string, arithmetic = 'float64', coefficients = 'k: k'): SignalDefinition {
  const settings = `every: 1 ms\narithmetic: ${arithmetic}`;
  return specOf(smallSpec(pieces(signals, settings, coefficients))).controllers[0].signals[0];
}

function setting(of: SignalDefinition, name: string): string {
  const found = of.settings[name];
  return found?.kind === 'expression' ? shown(found.expression) : 'none';
}

function value(expression: string, unit: string, arithmetic = 'float64', coefficients = 'k: k'): string {
  return setting(
    signal(`command: { value: "${expression}", unit: ${unit} }`, arithmetic, coefficients),
    'value',
  );
}

function refusal(expression: string, unit: string, coefficients = 'k: k'): string[] {
  const signals = `command: { value: "${expression}", unit: ${unit} }`;
  const settings = 'every: 1 ms\narithmetic: float32';
  return errorsOf(smallSpec(pieces(signals, settings, coefficients)));
}

// The input `goal` is in V, the sensor `seen` in mV: what a controller sees are these very numbers.
const sensorsInMillivolts = 'seen: { of: out, unit: mV }';

/** The signal to be looked at comes first; the others keep the sensor read and the actuator fed. */
function pieces(signals: string, settings: string, coefficients: string): Pieces {
  return {
    settings,
    coefficients,
    signals: `${signals}\nkept: { value: seen, unit: mV }\nfed: { value: goal, unit: V }`,
    sensors: sensorsInMillivolts,
    actuators: 'drive: { of: fed, unit: V }',
  };
}

test('under float64 a term in another unit is multiplied, and the result is brought to the declared unit', () => {
  expect(value('k*(goal - seen)', 'V')).toBe('(k * (goal - (seen * 0.001)))');
  expect(value('k*(seen - goal)', 'mV')).toBe('(k * (seen - (goal * 1000)))');
  expect(value('k*(seen - goal)', 'V')).toBe('((k * (seen - (goal * 1000))) * 0.001)');
});

test('under float32 that would be an operation which the firmware does not do', () => {
  expect(refusal('k*(goal - seen)', 'V')).toEqual([
    "a.pawl.yaml:22:36: this would be multiplied by 0.001 to fit its unit, which the controller's arithmetic does not do by itself; declare both in one unit, or write the factor that the firmware has",
  ]);
  expect(refusal('k*seen + 0*goal*(1 1/V)*seen', 'V')).toEqual([
    expect.stringContaining('22:33: this would be multiplied by 0.001'),
  ]);
});

test('a literal is converted when the spec is read, also under float32', () => {
  expect(value('k*seen + (3 V) + 0*goal*(1 mV/V)', 'mV', 'float32')).toBe(
    '(((k * seen) + 3000) + ((0 * goal) * 1))',
  );
  expect(value('(2 V) - k*seen', 'mV', 'float32')).toBe('(2000 - (k * seen))');
  expect(value('k*seen*(seen > (0.5 V))', 'mV', 'float32')).toBe('((k * seen) * (seen > 500))');
  expect(value('k*max(seen, (1 V), (20 mV) + (1 V))', 'mV', 'float32')).toBe(
    '(k * max(seen, 1000, (20 + 1000)))',
  );
  expect(value('-(1 V) + k*seen', 'mV', 'float32')).toBe('(-1000 + (k * seen))');
});

test('a factor written with a unit takes the conversion upon itself, a bare number does not', () => {
  expect(value('k*goal*(3 mV/V)', 'V', 'float32', 'k: k')).toBe('((k * goal) * 0.003)');
  expect(value('k*goal*(3 mV/V)', 'mV', 'float32')).toBe('((k * goal) * 3)');
  expect(value('k*goal/(3 V/mV)', 'V', 'float32')).toBe('((k * goal) / 3000)');
  expect(value('k*goal/(3 mA)', 'ohm', 'float32')).toBe('((k * goal) / 0.003)');
  expect(value('k*goal/(3 mA)', 'kohm', 'float32')).toBe('((k * goal) / 3)');
  expect(value('2*k*goal', 'mV')).toBe('(((2 * k) * goal) * 1000)');
  expect(refusal('2*k*goal', 'mV')).toEqual([expect.stringContaining('this would be multiplied by 1000')]);
});

test('a ratio in % is a ratio, and 0 fits every unit', () => {
  expect(value('k*goal*(5 %)', 'V', 'float32')).toBe('((k * goal) * 0.05)');
  expect(value('k*goal*(20 dB)', 'V', 'float32')).toBe('((k * goal) * 10)');
  expect(value('k*max(0, goal)', 'V', 'float32')).toBe('(k * max(0, goal))');
  expect(value('if(goal > 0, k*goal, 0)', 'V', 'float32')).toBe('if((goal > 0), (k * goal), 0)');
  expect(value('k*goal + 0', 'V', 'float32')).toBe('((k * goal) + 0)');
});

test('powers and roots carry the scale with them', () => {
  expect(value('k*sqrt(seen^2)', 'mV', 'float32')).toBe('(k * sqrt((seen ^ 2)))');
  expect(value('k*seen^2/goal', 'V')).toBe('(((k * (seen ^ 2)) / goal) * 0.000001)');
  expect(value('k*goal*sin(seen/goal)', 'V')).toBe('((k * goal) * sin(((seen / goal) * 0.001)))');
  expect(value('k*abs(seen)*sign(seen)', 'mV', 'float32')).toBe('((k * abs(seen)) * sign(seen))');
  expect(value('k*goal*2^(seen/goal)', 'V')).toBe('((k * goal) * (2 ^ ((seen / goal) * 0.001)))');
  expect(value('k*hypot(goal, seen)', 'V')).toBe('(k * hypot(goal, (seen * 0.001)))');
});

test('the previous value is in the unit of its signal', () => {
  expect(value('k*(before(seen) - seen)', 'mV', 'float32')).toBe('(k * (before(seen) - seen))');
  expect(value('k*before(goal - seen)', 'V')).toBe('(k * before((goal - (seen * 0.001))))');
});

test('constants are numbers by then', () => {
  const spec = specOf(
    smallSpec({
      constants: 'bias: 250 mV',
      signals: 'command: { value: k*(goal - bias), unit: V }',
      sensors: '',
      coefficients: 'k: k',
    }),
  );
  expect(setting(spec.controllers[0].signals[0], 'value')).toBe('(k * (goal - 0.25))');
});

test('a coefficient without a unit takes the unit of its slot, at no cost', () => {
  const kp = (unit: string) =>
    setting(signal(`command: { pid: { kp: k }, of: seen, unit: ${unit} }`, 'float32'), 'kp');
  expect(kp('mV')).toBe('k');
  expect(kp('V')).toBe('k');
  expect(kp('A')).toBe('k');
});

test('a coefficient with a unit is brought to the scale of its slot', () => {
  const definition = 'command: { pid: { kp: k }, of: seen, unit: V }';
  // kp is output/input: V/mV here, so a gain stored as V/V is a thousandth of it.
  expect(setting(signal(definition, 'float64', 'k: { at: k, unit: V/V }'), 'kp')).toBe('(k * 0.001)');
  expect(setting(signal(definition, 'float32', 'k: { at: k, unit: V/mV }'), 'kp')).toBe('k');
  const settings = 'every: 1 ms\narithmetic: float32';
  const coefficients = 'k: { at: k, unit: V/V }';
  expect(errorsOf(smallSpec(pieces(definition, settings, coefficients)))).toEqual([
    expect.stringContaining('22:29: this would be multiplied by 0.001'),
  ]);
});

test('literals in a slot are in the unit of the slot', () => {
  const command = signal(
    'command: { pid: { kp: 2 A/V, ki: 3 A/(V*s) }, of: k*seen, unit: A, range: [-5 mA, 1 A] }',
  );
  expect(setting(command, 'kp')).toBe('0.002');
  expect(setting(command, 'ki')).toBe('0.003');
  expect(shown(command.range?.low)).toBe('-0.005');
  expect(shown(command.range?.high)).toBe('1');
});

test('range, slew and start are in the declared unit of a controller signal', () => {
  const command = signal(
    'command: { value: k*seen, unit: mV, range: [-1 V, 1 V], slew: 2 V/s, start: 0.5 V }',
  );
  expect(shown(command.range?.low)).toBe('-1000');
  expect(shown(command.range?.high)).toBe('1000');
  expect(shown(command.slew)).toBe('2000');
  expect(command.start).toBe(500);
});

test('what a filter takes is brought to the unit of its signal', () => {
  const coefficients = 'k: k\nq: q';
  const filtered = (unit: string, arithmetic: string) =>
    signal(`command: { biquads: q, of: k*seen, unit: ${unit} }`, arithmetic, coefficients).of;
  expect(shown(filtered('mV', 'float32'))).toBe('(k * seen)');
  expect(shown(filtered('V', 'float64'))).toBe('((k * seen) * 0.001)');
});

test.each([
  ['derivative_corner', 'corner: { at: c, unit: rad/s }', 'corner'],
  ['derivative_corner', 'corner: { at: c, unit: Hz }', '(corner * 6.28318530718)'],
  ['derivative_corner', 'corner: { at: c, unit: kHz }', '(corner * 6283.18530718)'],
  ['derivative_corner', 'corner: c', 'corner'],
])('%s from %s, also under float32: the block turns it once', (name, corner, expected) => {
  const definition = `command: { pid: { kp: k, ${name}: corner }, of: seen, unit: mV }`;
  expect(setting(signal(definition, 'float32', `k: k\n${corner}`), name)).toBe(expected);
});

test.each([
  ['20 Hz', '125.663706144'],
  ['20 rad/s', '20'],
  ['2 kHz', '12566.3706144'],
])('a corner of %s is %s rad/s', (corner, expected) => {
  const definition = `command: { pid: { kp: k, derivative_corner: ${corner} }, of: seen, unit: mV }`;
  expect(setting(signal(definition), 'derivative_corner')).toBe(expected);
});

test.each([
  ['10 ms', '0.01'],
  ['50 Hz', '0.00318309886184'],
  ['50 rad/s', '0.02'],
  ['tau', 'tau'],
  ['corner', '(1 / (corner * 6.28318530718))'],
  ['speed', '(1 / speed)'],
  ['2*tau', '(2 * tau)'],
])('a lag of %s has the time constant %s s', (lag, expected) => {
  const spec = specOf(
    smallSpec({
      parameters:
        'tau: { nominal: 10 ms, spread: 1 % }\ncorner: { nominal: 2 kHz, spread: 1 % }\nspeed: { nominal: 60 rpm, spread: 1 % }',
      plant: `out: { lag: ${lag}, of: drive, unit: V }\nuses: { value: tau*corner*speed*(1 s/cycle), unit: rad }`,
    }),
  );
  expect(setting(spec.plant[0], 'lag')).toBe(expected);
});

test.each([
  ['every: 400 us', '0.0004'],
  ['every: 2 kHz', '0.0005'],
  ['every: period', '(period * 0.000001)'],
  ['every: rate', '(1 / (rate * 1000))'],
  ['every: bare', 'bare'],
  ['every: 2*period', '((2 * period) * 0.000001)'],
])('%s is a period of %s s', (every, expected) => {
  const coefficients = 'k: k\nperiod: { at: p, unit: us }\nrate: { at: r, unit: kHz }\nbare: b';
  const used = 'command: { value: k*seen*period*rate*(1 1/cycle)*bare, unit: mV }';
  const spec = specOf(
    smallSpec({ settings: every, coefficients, signals: used, sensors: sensorsInMillivolts }),
  );
  expect(shown(spec.controllers[0].every)).toBe(expected);
});

test('delay and phase are times', () => {
  const settings = 'every: 1 ms\ndelay: 400 us\nphase: half';
  const coefficients = 'k: k\nhalf: { at: h, unit: ms }';
  const [controller] = specOf(smallSpec({ settings, coefficients })).controllers;
  expect(shown(controller.delay)).toBe('0.0004');
  expect(shown(controller.phase)).toBe('(half * 0.001)');
});

test('the plant, sensors and actuators compute in SI whatever the declared units are', () => {
  const spec = specOf(
    smallSpec({
      plant: 'out: { lag: 10 ms, of: drive + (20 mV), unit: mV, start: 3 mV, range: [-5 mV, 5 V] }',
      sensors:
        'seen: { of: out, unit: mV, quantum: 0.1 mV, noise: 1 mV, filter: 50 Hz, range: [-4 mV, 4 mV], offset: 1 mV }',
      actuators: 'drive: { of: command, unit: mV, resolution: 2 mV, range: [-1 V, 1 V] }',
      signals: 'command: { value: k*seen, unit: V }',
    }),
  );
  const [out] = spec.plant;
  const [seen] = spec.sensors;
  const [drive] = spec.actuators;
  expect(shown(out.of)).toBe('(drive + 0.02)');
  expect(out.start).toBe(0.003);
  expect([shown(out.range?.low), shown(out.range?.high)]).toEqual(['-0.005', '5']);
  expect([shown(seen.quantum), shown(seen.noise), shown(seen.offset)]).toEqual(['0.0001', '0.001', '0.001']);
  expect(shown(seen.filter)).toBe('0.00318309886184');
  expect([shown(seen.range?.low), shown(seen.range?.high)]).toEqual(['-0.004', '0.004']);
  expect([shown(drive.resolution), shown(drive.range?.low)]).toEqual(['0.002', '-1']);
});
