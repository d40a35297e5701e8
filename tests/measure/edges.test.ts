import { describe, expect, it } from 'vitest';
import { measureSmall, numberOf, type SmallLoop, smallValues } from '../small_loop.js';

const settling = (band: string): string =>
  `in: run, measure: settling_time, of: y, to: u, band: ${band}, at_most: 1 s`;

/** y follows from inputs alone, over ten seconds. */
function driven(y: string, inputs: string, requirements: string[]): SmallLoop {
  return {
    inputs: 'u: {}\nd: {}',
    plant: `y: { value: ${y} }`,
    scenarios: `run: { lasts: 10 s, inputs: { ${inputs} } }`,
    requirements: requirements.map((text, i) => `{ name: R${i}, ${text} }`),
  };
}

/** A proportional law of ten instants a second on a plant of the first order, y′ = own·y + drive. */
function firstOrder(own: number, k: number, requirements: string[]): SmallLoop {
  return {
    inputs: 'u: {}',
    plant: `y: { integral: (${own} 1/s)*y + drive }`,
    sensors: 'seen: { of: y }',
    controllers: `law:\n  every: 100 ms\n  signals:\n    command: { value: (${k} 1/s)*(u - seen), unit: 1/s }`,
    actuators: 'drive: { of: command, unit: 1/s }',
    scenarios: 'run: { lasts: 10 s, inputs: { u: { step: 1, at: 1 s } } }',
    requirements: requirements.map((text, i) => `{ name: R${i}, ${text} }`),
  };
}

describe('the edge of the band', () => {
  it('belongs to it, however long the response stays there', () => {
    // 1.25 to 3 s, exactly on the edge of 25 %, then 1: it was inside from the start, and outside a smaller band up to 3 s.
    const steps = 'u: { step: 1, at: 1 s }, d: { pulse: 0.25, at: 1 s, for: 2 s }';
    const values = smallValues(driven('u + d', steps, [settling('25 %'), settling('24 %')]));
    expect(values).toEqual([0, 2]);
  });

  it('is left by a response that swings about its target for ever', () => {
    const loop = driven(
      'u + d',
      'u: { step: 1, at: 1 s }, d: { sine: { amplitude: 0.1, frequency: 1 Hz }, at: 0 s }',
      [settling('5 %'), settling('10.1 %')],
    );
    const [outside, inside] = measureSmall({ ...loop, scenarios: loop.scenarios!.replace('10 s', '9.75 s') });
    // The scenario ends three quarters of a turn after a whole second, 0.1 below.
    expect(outside.kind).toBe('never');
    expect(outside.kind === 'never' && outside.left).toBeCloseTo(0.1, 6);
    expect(numberOf(inside)).toBe(0);
  });
});

describe('a signal that moves at sampling instants only', () => {
  it('rises within no time where one jump passes both levels, and settles at an instant', () => {
    // k·T = 0.9 leaves a tenth of the error at each instant: seen is 0, 0.9, 0.99 … after the instant of the step.
    const [rise, delay, settled] = smallValues(
      firstOrder(0, 9, [
        'in: run, measure: rise_time, of: seen, to: u, low: 10 %, high: 80 %, at_most: 1 s',
        'in: run, measure: delay_time, of: seen, to: u, share: 95 %, at_most: 1 s',
        'in: run, measure: settling_time, of: seen, to: u, band: 2 %, at_most: 1 s',
      ]),
    );
    expect(rise).toBe(0);
    expect(delay).toBeCloseTo(0.2, 12);
    expect(settled).toBeCloseTo(0.2, 12);
  });

  it('settles on the last of them, or never', () => {
    const last = (lasts: string) =>
      measureSmall({
        ...firstOrder(0, 9, ['in: run, measure: settling_time, of: seen, to: u, band: 2 %, at_most: 0.1 s']),
        scenarios: `run: { lasts: ${lasts}, inputs: { u: { step: 1, at: 1 s } } }`,
      })[0];
    expect(numberOf(last('1.201 s'))).toBeCloseTo(0.2, 12);
    expect(last('1.199 s')).toMatchObject({ kind: 'never' });
  });
});

describe('a step', () => {
  it('at the start counts from where the target rests before it', () => {
    const overshoot = (at: string): number =>
      smallValues({
        ...firstOrder(0, 15, ['in: run, measure: overshoot, of: y, to: u, at_most: 1']),
        scenarios: `run: { lasts: 10 s, inputs: { u: { step: 1, at: ${at} } } }`,
      })[0];
    // k·T = 1.5: y goes to 1.5, half a step too far.
    expect(overshoot('0 s')).toBeCloseTo(0.5, 9);
    expect(overshoot('1 s')).toBeCloseTo(0.5, 9);
  });

  it('that the response goes away from is never reached, and has no overshoot', () => {
    const [overshoot, wrong, rise] = measureSmall(
      driven('-0.5*u + 0*d', 'u: { step: 2, at: 1 s }', [
        'in: run, measure: overshoot, of: y, to: u, at_most: 1',
        'in: run, measure: inverse_response, of: y, to: u, at_most: 1',
        'in: run, measure: rise_time, of: y, to: u, at_most: 1 s',
      ]),
    );
    expect(numberOf(overshoot)).toBe(0);
    expect(numberOf(wrong)).toBe(0.5);
    // It is at −50 % of the step all the time, and 90 % are asked for.
    expect(rise).toMatchObject({ kind: 'never', left: 1.4 });
  });

  it('that the response is beyond already takes no time to rise', () => {
    const values = smallValues(
      driven('u + d + 1', 'u: { step: 1, at: 1 s }', [
        'in: run, measure: rise_time, of: y, to: u, at_most: 1 s',
        'in: run, measure: delay_time, of: y, to: u, at_most: 1 s',
        'in: run, measure: overshoot, of: y, to: u, at_most: 1',
      ]),
    );
    expect(values).toEqual([0, 0, 1]);
  });
});

describe('a loop', () => {
  const margins = [
    'measure: gain_margin, at: drive, at_least: 2',
    'measure: phase_margin, at: drive, at_least: 30 deg',
    'measure: modulus_margin, at: drive, at_least: 0.5',
  ];

  it('exactly at the edge of stability has no margin', () => {
    // k·T = 2: the closed loop's pole is at −1.
    const results = measureSmall(firstOrder(0, 20, margins));
    expect(results.map(numberOf)).toEqual([1, 0, 0]);
    expect(results[0]).toMatchObject({ note: 'the closed loop is unstable' });
  });

  it('that is unstable without its feedback has the nearer of two gain margins', () => {
    // y′ = y + drive: L(z) = k·(a − 1)/(z − a), a = e^0.1; stable for k from 1 (pole at +1) to (a + 1)/(a − 1) (pole at −1).
    const a = Math.exp(0.1);
    const most = (a + 1) / (a - 1);
    const gainAt = (k: number): number => smallValues(firstOrder(1, k, [margins[0]]))[0];
    expect(gainAt(1.5)).toBeCloseTo(1.5, 9);
    expect(gainAt(15)).toBeCloseTo(most / 15, 9);
  });

  it('with two equal peaks of its sensitivity has that size as its peak', () => {
    // L = 0.5·z^−4: |1 + L| is least, 0.5, where z^4 = −1, at a quarter and at three quarters of half the sampling frequency.
    const loop: SmallLoop = {
      inputs: 'u: {}',
      plant: 'y: { value: drive }',
      sensors: 'seen: { of: y }',
      controllers:
        'law:\n  every: 100 ms\n  signals:\n    one: { value: before(seen) }\n    two: { value: before(one) }\n    three: { value: before(two) }\n    command: { value: u - 0.5*three }',
      actuators: 'drive: { of: command }',
      requirements: ['{ name: P, measure: sensitivity_peak, at: drive, at_most: 3 }'],
    };
    expect(smallValues(loop)[0]).toBeCloseTo(2, 9);
  });
});
