import { describe, expect, it } from 'vitest';
import { Linearisation } from '../../src/linear/linearise.js';
import { openedLoop } from '../../src/linear/opened_loop.js';
import { pointOfRest } from '../../src/linear/point_of_rest.js';
import { responseAt } from '../../src/linear/response.js';
import { expandLoop } from '../../src/loop/expand.js';
import { scheduleOf } from '../../src/loop/schedule.js';
import { PlantEvaluator } from '../../src/measure/evaluate_plant.js';
import { specOf } from '../loop/spec_of.js';
import { expectPublished, publishedCase } from '../published.js';

const step = 'scenarios: { jump: { lasts: 2 s, inputs: { target: { step: 1 rad, at: 0 s } } } }';

/** An integrator under a proportional controller: L = −k·T/((z − 1) z^d) of the signal returned. */
function integratorMargins(gain: number, period: number, delay: number): Record<string, number> {
  const spec = specOf(`
inputs: { target: { unit: rad } }
plant: { angle: { integral: drive, unit: rad } }
sensors: { encoder: { of: angle, unit: rad } }
controllers:
  axis:
    every: ${period} s
    delay: ${delay} s
    signals: { rate: { value: "(${gain} 1/s)*(target - encoder)", unit: rad/s } }
actuators: { drive: { of: rate, unit: rad/s } }
${step}
requirements:
  - { name: gain, measure: gain_margin, at: drive, at_least: 1.1 }
  - { name: phase, measure: phase_margin, at: drive, at_least: 1 deg }
  - { name: delay, measure: delay_margin, at: drive, at_least: 1 us }
  - { name: modulus, measure: modulus_margin, at: drive, at_least: 0.1 }
  - { name: gain at the sensor, measure: gain_margin, at: encoder, at_least: 1.1 }
  - { name: gain at the controller, measure: gain_margin, at: rate, at_least: 1.1 }
`);
  const results = new PlantEvaluator(spec, new Map()).evaluate(new Float64Array(0), 0);
  return Object.fromEntries(
    spec.requirements.map(({ name }, i) => [name, (results[i] as { value: number }).value]),
  );
}

describe('margins of a loop written as a spec', () => {
  // E. I. Jury, 1964; K. J. Astrom and B. Wittenmark, 1997: closed forms.
  for (const [id, delaySamples] of [
    ['D09', 0],
    ['D10', 1],
  ] as const) {
    it(`are those of the sampled integrator with ${delaySamples} samples of delay (${id})`, () => {
      const { given } = publishedCase(id);
      const period = given.sampling_period_s;
      const margins = integratorMargins(given.gain_times_period / period, period, delaySamples * period);
      expectPublished(id, 'gain_margin', margins.gain);
      expectPublished(id, 'phase_margin', (margins.phase * 180) / Math.PI);
      expectPublished(id, 'delay_margin', margins.delay);
      expectPublished(id, 'modulus_margin', margins.modulus);
    });
  }

  it('are the same wherever a loop of one signal is opened', () => {
    const margins = integratorMargins(150, 0.002, 0.0007);
    expect(margins['gain at the sensor']).toBeCloseTo(margins.gain, 10);
    expect(margins['gain at the controller']).toBeCloseTo(margins.gain, 10);
  });

  it('give the stability limit with 0, 1 and 2 samples of delay (C05)', () => {
    const period = publishedCase('C05').given.sampling_period_s;
    const limits = [0, 1, 2].map((samples) => 20 * integratorMargins(20, period, samples * period).gain);
    expectPublished('C05', 'ultimate_gain', limits);
  });

  it('give the gain limit that comes from the hold alone (C06)', () => {
    const spec = specOf(`
inputs: { target: { unit: rad } }
plant:
  speed: { integral: (drive - speed)/(1 s), unit: rad/s }
  angle: { integral: speed, unit: rad }
sensors: { encoder: { of: angle, unit: rad } }
controllers: { axis: { every: 1 s, signals: { rate: { value: "(1 1/s)*(target - encoder)", unit: rad/s } } } }
actuators: { drive: { of: rate, unit: rad/s } }
${step}
requirements: [{ name: gain, measure: gain_margin, at: drive, at_least: 1.1 }]
`);
    const [result] = new PlantEvaluator(spec, new Map()).evaluate(new Float64Array(0), 0);
    expectPublished('C06', 'gain_limit', (result as { value: number }).value);
  });
});

describe('the opened loop of a plant behind a hold and a delay', () => {
  const plants = {
    B04: 'speed: { integral: drive - (2 1/s)*speed, unit: rad/s }',
    B05: 'speed: { integral: (144 1/s^2)*(drive*(1 s^2) - angle) - (4.8 1/s)*speed, unit: rad/s }',
  };
  // Astrom and Wittenmark, 1997: zero-order-hold equivalents, input delays of 0, 0.3 and 2.4 periods.
  const names = ['no_delay', 'delayed', 'delayed_2'];
  for (const [id, plant] of Object.entries(plants)) {
    it(`has the response of the published zero-order-hold equivalent (${id})`, () => {
      const { given, expect: expected } = publishedCase(id);
      given.input_delays_s.forEach((delay: number, i: number) => {
        const spec = specOf(`
inputs: { target: { unit: rad } }
plant:
  ${plant}
  angle: { integral: speed, unit: rad }
sensors: { encoder: { of: angle, unit: rad } }
controllers:
  axis: { every: 0.1 s, delay: ${delay} s, signals: { push: { value: "(1 1/s^2)*(target - encoder)", unit: rad/s^2 } } }
actuators: { drive: { of: push, unit: rad/s^2 } }
${step}
requirements: [{ name: gain, measure: gain_margin, at: drive, at_least: 1.1 }]
`);
        const loop = expandLoop(spec, new Map(), { openAt: ['drive'] });
        const linearisation = new Linearisation(loop);
        const opened = openedLoop(linearisation, scheduleOf(loop, []), { input: [0] });
        const numerator = expected[`numerator_${names[i]}`].value as number[];
        const denominator = expected[`denominator_${names[i]}`].value as number[];
        for (const angle of [0.01, 0.3, 1, 2, 3.1]) {
          const response = responseAt(opened, angle / 0.1);
          const [re, im] = ratioAt(numerator, denominator, angle);
          // L = +G here: the controller subtracts the encoder, and L is minus what returns.
          expect(Math.hypot(response.real - re, response.imaginary - im)).toBeLessThan(
            1e-11 * (1 + Math.hypot(re, im)),
          );
        }
      });
    });
  }
});

/** A ratio of polynomials (descending powers of z) at z = e^{jθ}. */
function ratioAt(numerator: number[], denominator: number[], angle: number): [number, number] {
  const at = (polynomial: number[]): [number, number] =>
    polynomial.reduce<[number, number]>(
      ([re, im], coefficient) => [
        re * Math.cos(angle) - im * Math.sin(angle) + coefficient,
        re * Math.sin(angle) + im * Math.cos(angle),
      ],
      [0, 0],
    );
  const [a, b] = at(numerator);
  const [c, d] = at(denominator);
  const size = c * c + d * d;
  return [(a * c + b * d) / size, (b * c - a * d) / size];
}

describe('margins and traces come from the same loop', () => {
  /** A cascade of two rates with delays longer than the inner period, a lag and a sensor filter. */
  function cascade(gain: number): PlantEvaluator {
    return new PlantEvaluator(
      specOf(`
inputs: { target: { unit: rad } }
plant:
  torque: { lag: 3 ms, of: duty, gain: 40 N*m, unit: N*m }
  speed: { integral: (torque - (2 N*m*s/rad)*speed)/(0.5 kg*m^2), unit: rad/s }
  angle: { integral: speed, unit: rad }
sensors:
  encoder: { of: angle, filter: 2 ms, unit: rad }
  rate: { of: speed, filter: 1 ms, unit: rad/s }
controllers:
  outer: { every: 4 ms, delay: 1.5 ms, signals: { wanted: { value: "(${gain} 1/s)*(target - encoder)", unit: rad/s } } }
  inner: { every: 1 ms, delay: 1.3 ms, signals: { share: { pid: { kp: 0.4 s, ki: 4 }, of: wanted - rate } } }
actuators: { duty: { of: share } }
scenarios: { jump: { lasts: 20 s, inputs: { target: { step: 1 rad, at: 0 s } } } }
requirements:
  - { name: margin, measure: gain_margin, at: wanted, at_least: 1.1 }
  - { name: left, measure: settling_time, of: angle, to: target, in: jump, band: 5 %, at_most: 10 s }
`),
      new Map(),
    );
  }
  const nominal = new Float64Array(0);

  it('so a trace dies out just inside the gain margin and grows just outside', () => {
    const [margin] = cascade(8).evaluate(nominal, 0);
    const limit = 8 * (margin as { value: number }).value;
    expect(limit).toBeGreaterThan(8);
    expect(cascade(0.9 * limit).evaluate(nominal, 0)[1].kind).toBe('value');
    expect(cascade(1.1 * limit).evaluate(nominal, 0)[1].kind).not.toBe('value');
    expect(cascade(1.1 * limit).evaluate(nominal, 0)[0]).toMatchObject({
      value: 1,
      note: 'the closed loop is unstable',
    });
  });
});

describe('the point of rest', () => {
  it('holds a constant load with an integral, and leaves a free integrator where it starts', () => {
    const spec = specOf(`
inputs: { target: { unit: rad, rest: 0.3 rad }, load: { unit: N*m, rest: 5 N*m } }
plant:
  speed: { integral: (duty*(20 N*m) - load - (1 N*m)*tanh(speed*(1 s)))/(2 kg*m^2), unit: rad/s }
  angle: { integral: speed, unit: rad }
  way: { integral: angle, unit: rad*s }
sensors: { encoder: { of: angle, unit: rad } }
controllers: { axis: { every: 10 ms, signals: { share: { pid: { kp: 2, ki: 1 1/s }, of: target - encoder } } } }
actuators: { duty: { of: share } }
scenarios: { jump: { lasts: 2 s, inputs: { target: { step: 1 rad, at: 0 s } } } }
requirements: [{ name: R, measure: peak_deviation, of: angle, to: target, in: jump, at_most: 5 rad }]
`);
    const withoutWay = { ...spec, plant: spec.plant.filter(({ name }) => name !== 'way') };
    const loop = expandLoop(withoutWay, new Map());
    const rest = pointOfRest(new Linearisation(loop), [], loop.inputRest);
    expect(rest.kind).toBe('rest');
    if (rest.kind !== 'rest') return;
    expect(rest.point.state[0]).toBeCloseTo(0, 12);
    expect(rest.point.state[1]).toBeCloseTo(0.3, 12);
    expect(rest.point.held[0]).toBeCloseTo(0.25, 12);
    const integral = loop.memories.findIndex(({ name }) => name === 'share integral');
    expect(rest.point.memory[integral]).toBeCloseTo(0.25, 12);
  });

  it('is none, with the reason, where a load cannot be held', () => {
    const spec = specOf(`
inputs: { target: { unit: rad }, load: { unit: N*m, rest: 50 N*m } }
plant:
  speed: { integral: (duty*(20 N*m) - load)/(2 kg*m^2), unit: rad/s }
  angle: { integral: speed, unit: rad }
sensors: { encoder: { of: angle, unit: rad } }
controllers: { axis: { every: 10 ms, signals: { share: { value: 2*(target - encoder), range: [-1, 1] } } } }
actuators: { duty: { of: share } }
scenarios: { jump: { lasts: 2 s, inputs: { target: { step: 1 rad, at: 0 s } } } }
requirements: [{ name: R, measure: peak_deviation, of: angle, to: target, in: jump, at_most: 5 rad }]
`);
    const [result] = new PlantEvaluator(spec, new Map()).evaluate(nominalOf(spec), 0);
    expect(result).toMatchObject({ kind: 'unformed' });
    expect((result as { why: string }).why).toMatch(
      /^no point of rest was found in \d+ rounds: .* still changes by /,
    );
  });
});

function nominalOf({ parameters }: { parameters: { nominal: number }[] }): Float64Array {
  return Float64Array.from(parameters, ({ nominal }) => nominal);
}
