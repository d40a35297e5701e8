import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { type SmallLoop, smallValues } from '../small_loop.js';

/**
 * Traces of linear plants against closed solutions. A value at a time is read as the largest value over a window in which
 * the signal stays, or as its mean over a narrow one.
 */

const at = (time: number): string => `from: ${time} s, until: ${time + 1e-9} s`;
const valuesAt = (signal: string, times: number[]): string[] =>
  times.map(
    (time, i) => `{ name: V${i}, in: run, measure: largest_value, of: ${signal}, ${at(time)}, at_most: 1 }`,
  );

function expectValues(loop: SmallLoop, expected: number[], digits = 8): void {
  const values = smallValues(loop);
  values.forEach((value, i) => {
    expect(value, loop.requirements[i]).toBeCloseTo(expected[i], digits);
  });
}

describe('a plant without a controller', () => {
  it('of a defective matrix moves as t²/2·e^{−t}', () => {
    // Three equal lags in a row after a step: 1 − (1 + t + t²/2)e^{−t}.
    const times = [1.5, 2, 4.25, 7];
    expectValues(
      {
        inputs: 'u: {}',
        plant: 'a: { lag: 1 s, of: u }\nb: { lag: 1 s, of: a }\ny: { lag: 1 s, of: b }',
        scenarios: 'run: { lasts: 9 s, inputs: { u: { step: 1, at: 1 s } } }',
        requirements: valuesAt('y', times),
      },
      times.map((time) => {
        const t = time - 1;
        return 1 - (1 + t + t ** 2 / 2) * Math.exp(-t);
      }),
      6,
    );
  });

  it('that is unstable grows as it should', () => {
    expectValues(
      {
        inputs: 'u: {}',
        plant: 'y: { integral: (2 1/s)*y + (1 1/s)*u }',
        scenarios: 'run: { lasts: 6 s, inputs: { u: { step: 1, at: 1 s } } }',
        requirements: valuesAt('y', [2, 5]),
      },
      [(Math.exp(2) - 1) / 2, (Math.exp(8) - 1) / 2],
      4,
    );
  });

  it('meets a stiff pair of lags, a million apart', () => {
    // Fast lag then slow: 1 − (e^{−t}·1 − 1e−6·e^{−1e6·t})/(1 − 1e−6).
    const slow = (t: number): number => 1 - (Math.exp(-t) - 1e-6 * Math.exp(-1e6 * t)) / (1 - 1e-6);
    expectValues(
      {
        inputs: 'u: {}',
        plant: 'a: { lag: 1 us, of: u }\ny: { lag: 1 s, of: a }',
        scenarios: 'run: { lasts: 5 s, inputs: { u: { step: 1, at: 1 s } } }',
        requirements: [
          ...valuesAt('y', [1.5, 3]),
          ...valuesAt('a', [1.5]).map((text) => text.replace('V0', 'A')),
        ],
      },
      [slow(0.5), slow(2), 1],
      7,
    );
  });
});

/** A sampled integrator: y' = drive, drive = k·(u − seen) taken every T, in effect after the delay. */
function sampledIntegrator(k: number, T: number, delay: number, requirements: string[]): SmallLoop {
  return {
    inputs: 'u: {}',
    plant: 'y: { integral: drive }',
    sensors: 'seen: { of: y }',
    controllers: `law:\n  every: ${T} s\n  delay: ${delay} s\n  signals:\n    command: { value: (${k} 1/s)*(u - seen), unit: 1/s }`,
    actuators: 'drive: { of: command, unit: 1/s }',
    scenarios: `run: { lasts: ${20 * T} s, inputs: { u: { step: 1, at: 0 s } }}`,
    requirements,
  };
}

/** The same by hand: which sample's effort is under way at any time follows from the delay alone. */
function sampledIntegratorAt(k: number, T: number, delay: number, time: number): number {
  const efforts: number[] = [];
  const sampled: number[] = [];
  const stateAt = (t: number): number => {
    let y = 0;
    efforts.forEach((effort, n) => {
      const [from, to] = [n * T + delay, (n + 1) * T + delay];
      y += effort * Math.max(0, Math.min(t, to) - from);
    });
    return y;
  };
  for (let n = 0; n * T <= time; n++) {
    sampled.push(stateAt(n * T));
    efforts.push(k * (1 - sampled[n]));
  }
  return stateAt(time);
}

describe('delays from the sampling instant to the effect', () => {
  it.each([
    ['none', 0],
    ['a part of a period', 0.03],
    ['nearly a period', 0.0999],
    ['exactly a period', 0.1],
    ['one period and a half', 0.15],
    ['a queue of three and a part', 0.34],
  ])('%s', (_name, delay) => {
    const times = [0.05, 0.2, 0.47, 0.8, 1.33, 1.9];
    expectValues(
      sampledIntegrator(2, 0.1, delay, valuesAt('y', times)),
      times.map((time) => sampledIntegratorAt(2, 0.1, delay, time)),
    );
  });

  it('of any length, at any time', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 0, max: 400 }),
        fc.double({ min: 0.01, max: 1.9, noNaN: true }),
        (delay, time) => {
          const [value] = smallValues(sampledIntegrator(1.5, 0.1, delay / 1000, valuesAt('y', [time])));
          expect(value).toBeCloseTo(sampledIntegratorAt(1.5, 0.1, delay / 1000, time), 8);
        },
      ),
      { numRuns: 25 },
    );
  });
});

describe('the order of things at one instant', () => {
  it('an input that changes at a sampling instant is seen at once', () => {
    const values = smallValues({
      ...sampledIntegrator(1, 0.1, 0, [
        `{ name: A, in: run, measure: largest_value, of: drive, ${at(0.5)}, at_most: 1 1/s }`,
      ]),
      scenarios: 'run: { lasts: 1 s, inputs: { u: { step: 3, at: 0.5 s } } }',
    });
    expect(values[0]).toBe(3);
  });

  it('a sensor sees the plant before what is computed at the same instant acts', () => {
    // A static path from the actuator: seen is the value just before, so that command alternates 1, 0, 1 …
    const values = smallValues({
      inputs: 'u: {}',
      plant: 'y: { value: drive }',
      sensors: 'seen: { of: y }',
      controllers: 'law:\n  every: 0.1 s\n  signals:\n    command: { value: u - seen }',
      actuators: 'drive: { of: command }',
      scenarios: 'run: { lasts: 1 s, inputs: { u: { step: 1, at: 0.2 s } } }',
      requirements: valuesAt('drive', [0.25, 0.35, 0.45, 0.55]),
    });
    expect(values).toEqual([1, 0, 1, 0]);
  });
});

describe('controllers of several rates', () => {
  it('hand their signals on with their own delays', () => {
    // outer counts every 0.2 s, in effect after 0.05 s; inner takes what has arrived every 0.1 s.
    const values = smallValues({
      inputs: 'u: {}',
      plant: 'y: { lag: 1 s, of: drive }',
      sensors: 'seen: { of: y }',
      controllers: [
        'outer:\n  every: 0.2 s\n  delay: 0.05 s\n  signals:\n    count: { value: before(count) + u + 0*seen }',
        'inner:\n  every: 0.1 s\n  signals:\n    command: { value: count + 0*seen }',
      ].join('\n'),
      actuators: 'drive: { of: command }',
      scenarios: 'run: { lasts: 2 s, inputs: { u: { step: 1, at: 0.15 s } } }',
      requirements: valuesAt('drive', [0.2, 0.25, 0.3, 0.4, 0.45, 0.5, 0.6]),
    });
    // Counted at 0.2, 0.4, 0.6 …, arrived at 0.25, 0.45, 0.65 …, taken at 0.3, 0.5, 0.7 …
    expect(values).toEqual([0, 0, 1, 1, 1, 2, 2]);
  });
});
