import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { expandLoop } from '../../src/loop/expand.js';
import { asFraction, leastCommonMultiple } from '../../src/loop/fraction.js';
import { instantsBetween, queueLength, scheduleOf } from '../../src/loop/schedule.js';
import { specOf } from './spec_of.js';

describe('times as ratios', () => {
  it('find the simplest ratio that a decimal or a division meant', () => {
    expect(asFraction(0.0004)).toEqual({ numerator: 1n, denominator: 2500n });
    expect(asFraction(1 / 30000)).toEqual({ numerator: 1n, denominator: 30000n });
    expect(asFraction(2000 * 1e-6)).toEqual({ numerator: 1n, denominator: 500n });
    expect(asFraction(0)).toEqual({ numerator: 0n, denominator: 1n });
  });

  it('are within four rounding errors of the number', () => {
    fc.assert(
      fc.property(fc.double({ min: 1e-9, max: 1e6, noNaN: true }), (x) => {
        const { numerator, denominator } = asFraction(x);
        expect(Math.abs(Number(numerator) / Number(denominator) - x)).toBeLessThanOrEqual(
          4 * Number.EPSILON * x,
        );
      }),
    );
  });

  it('return every ratio of small integers', () => {
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 5000 }), fc.integer({ min: 1, max: 5000 }), (p, q) => {
        const { numerator, denominator } = asFraction(p / q);
        expect(numerator * BigInt(q)).toBe(denominator * BigInt(p));
      }),
    );
  });

  it('refuse what is no time', () => {
    expect(() => asFraction(-1)).toThrow('-1 is no time');
    expect(() => asFraction(Number.NaN)).toThrow('NaN is no time');
  });

  it('have a least common multiple', () => {
    expect(leastCommonMultiple([4n, 6n, 10n])).toBe(60n);
  });
});

/** Two controllers in a cascade: the outer one every `outer`, the inner one every `inner`. */
function cascade(outer: string, inner: string, delay = '0 s'): ReturnType<typeof expandLoop> {
  const spec = specOf(`
inputs: { target: { unit: rad } }
plant:
  speed: { integral: drive, unit: rad/s }
  angle: { integral: speed, unit: rad }
sensors:
  encoder: { of: angle, unit: rad }
  rate: { of: speed, unit: rad/s }
controllers:
  slow: { every: ${outer}, delay: ${delay}, signals: { wanted: { value: "(3 1/s)*(target - encoder)", unit: rad/s } } }
  fast: { every: ${inner}, signals: { force: { value: "(20 1/s)*(wanted - rate)", unit: rad/s^2 } } }
actuators: { drive: { of: force, unit: rad/s^2 } }
scenarios: { jump: { lasts: 2 s, inputs: { target: { step: 1 rad, at: 0 s } } } }
requirements: [{ name: R, measure: overshoot, of: angle, to: target, in: jump, at_most: 50 % }]
`);
  return expandLoop(spec, new Map());
}

describe('the schedule', () => {
  it('repeats after the least common multiple of the periods, in whole ticks', () => {
    const schedule = scheduleOf(cascade('1 ms', '0.4 ms'), []);
    expect(schedule.cycle / schedule.ticksPerSecond).toBeCloseTo(0.002, 15);
    expect(schedule.period.map((ticks) => ticks / schedule.ticksPerSecond)).toEqual([0.001, 0.0004]);
  });

  it('puts who is read without delay first at a common instant', () => {
    const loop = cascade('1 ms', '0.5 ms');
    expect(loop.tasks.map(({ name }) => name)).toEqual(['slow', 'fast']);
    const instants = instantsBetween(scheduleOf(loop, []), 0, 4);
    expect(instants.map(({ compute }) => compute)).toEqual([[0, 1], [1], [0, 1], [1]]);
  });

  it('delivers after the delay, also one longer than a period', () => {
    const schedule = scheduleOf(cascade('1 ms', '1 ms', '2.5 ms'), []);
    const slow = schedule.channels.findIndex(({ task }) => task === 0);
    expect(queueLength(schedule, slow)).toBe(3);
    const delivered = instantsBetween(schedule, 0, 8).filter(({ deliver }) => deliver.includes(slow));
    expect(delivered.map(({ tick }) => tick)).toEqual([5, 7]);
  });

  it('refuses a period from the build that is not above zero, at its controller', () => {
    const spec = specOf(`
firmware: { image: a.elf, coefficients: { period: { at: period_us, unit: us } } }
inputs: { target: { unit: rad } }
plant: { angle: { integral: drive, unit: rad } }
sensors: { encoder: { of: angle, unit: rad } }
controllers: { axis: { every: period, signals: { rate: { value: "(3 1/s)*(target - encoder)", unit: rad/s } } } }
actuators: { drive: { of: rate, unit: rad/s } }
scenarios: { jump: { lasts: 2 s, inputs: { target: { step: 1 rad, at: 0 s } } } }
requirements: [{ name: R, measure: overshoot, of: angle, to: target, in: jump, at_most: 50 % }]
`);
    const loop = expandLoop(spec, new Map([['period', [0]]]));
    expect(() => scheduleOf(loop, [])).toThrow(
      "controller 'axis' has a sampling period of 0 s, expected one above 0",
    );
  });
});
