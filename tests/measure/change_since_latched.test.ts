import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { changeSinceLatched } from '../../src/measure/change_since_latched.js';
import { PlantEvaluator } from '../../src/measure/evaluate_plant.js';
import { asLatched, latchedNumbers } from '../../src/verdict/latched/coefficient_changes.js';
import { readReference } from '../../src/verdict/latched/reference.js';
import { numberOf, smallSpecOf } from '../small_loop.js';

// Protects the bound on what one change may move a coefficient: never a pass where there is nothing to compare with.

const of = (values: readonly number[], latched: readonly number[] | string) =>
  changeSinceLatched.measure({ name: 'kp', values, latched, si: (value) => value, stored: undefined });

describe('the change of a coefficient', () => {
  it('is the largest share of any of its numbers, whichever way, and the note says which', () => {
    // 0.1/2, 0.3/1 and 0.5/10.
    expect(of([2.1, -1.3, 9.5], [2, -1, 10])).toEqual({
      ...{ kind: 'value', note: "'kp[1]' -1 → -1.3" },
      value: expect.closeTo(0.3, 12),
    });
    expect(of([3], [2])).toEqual({ kind: 'value', value: 0.5, note: "'kp' 2 → 3" });
    expect(of([1], [2])).toEqual({ kind: 'value', value: 0.5, note: "'kp' 2 → 1" });
  });

  it('is more than the whole where the sign turned', () => {
    expect(of([-2], [2])).toMatchObject({ value: 2 });
  });

  it('is nothing where nothing changed, also of zeros and infinite numbers', () => {
    expect(of([0, -0, Number.POSITIVE_INFINITY], [0, 0, Number.POSITIVE_INFINITY])).toEqual({
      ...{ kind: 'value', value: 0 },
    });
  });

  it('is infinite where a number was zero and no longer is: no share of zero says how much it is', () => {
    expect(of([1e-9, 1], [0, 1])).toMatchObject({ kind: 'value', value: Number.POSITIVE_INFINITY });
  });

  it('cannot be formed of what is no number, nor without latched numbers', () => {
    expect(of([Number.NaN], [1])).toMatchObject({ kind: 'unformed' });
    expect(of([1, 1], [1, Number.NaN])).toMatchObject({ kind: 'unformed' });
    expect(of([1], 'there is none')).toEqual({ kind: 'unformed', why: 'there is none' });
  });

  it('does not depend on the unit, and is the same for both signs', () => {
    const pairs = fc.array(fc.tuple(fc.integer({ min: 1, max: 999 }), fc.integer({ min: -999, max: 999 })), {
      minLength: 1,
      maxLength: 6,
    });
    fc.assert(
      fc.property(pairs, fc.constantFrom(-1, 2, -8, 1024), (all, scale) => {
        const [latched, today] = [all.map(([then]) => then), all.map(([, now]) => now)];
        const plain = numberOf(of(today, latched));
        // Powers of two and signs change no digit.
        const scaled = of(
          today.map((value) => value * scale),
          latched.map((value) => value * scale),
        );
        expect(numberOf(scaled)).toBe(plain);
        expect(plain === 0).toBe(all.every(([then, now]) => then === now));
      }),
    );
  });
});

describe('without a reference', () => {
  it('a program that judges by itself is told why nothing is compared', () => {
    const spec = smallSpecOf({
      inputs: 'u: {}',
      plant: 'y: { integral: drive*(1 1/s) }',
      sensors: 'seen: { of: y }',
      controllers: 'law: { every: 100 ms, signals: { command: { value: kp*(u - seen) } } }',
      actuators: 'drive: { of: command }',
      coefficients: 'kp: drive.kp',
      requirements: ['{ name: R, measure: change_since_latched, of: kp, at_most: 10 % }'],
    });
    const evaluate = (latched?: ReadonlyMap<string, readonly number[]>) =>
      new PlantEvaluator(spec, new Map([['kp', [1.1]]]), latched).evaluate(new Float64Array(0), 0)[0];
    expect(evaluate()).toEqual({ kind: 'unformed', why: 'there is no latched reference to compare with' });
    expect(evaluate(new Map([['kp', [1]]]))).toMatchObject({ kind: 'value' });
    expect(evaluate(asLatched(new Map([['kp', [1.1]]])))).toEqual({ kind: 'value', value: 0 });
  });
});

describe('the latched numbers', () => {
  const numbers = (values: number[], unit: string | null) => ({
    ...{ at: 'x', type: 'float', unit, format: 'float32', fractional_bits: null },
    ...{ shape: values.length === 1 ? [] : [values.length], values, stored: values.map(() => '0x0') },
  });
  const read = readReference(
    JSON.stringify({
      ...{ format: 1, pawl: '0', loop: 'l', reason: 'r', image: null, plants: {}, seed: 1 },
      ...{ parameters: {}, parts: {}, law: {}, requirements: {} },
      coefficients: { kp: numbers([2], null), corner: numbers([20], 'Hz'), taps: numbers([1, 2], null) },
    }),
  );
  const reference = read.kind === 'reference' ? read.reference : expect.fail(read.message);

  it('are given where they mean the same today, else the reason why they do not', () => {
    const today = new Map([
      ['kp', [3]],
      ['corner', [20]],
      ['taps', [1, 2, 3]],
      ['kd', [1]],
    ]);
    const units = new Map([['corner', 'rad/s']]);
    const found = latchedNumbers(reference, today, units);
    expect(found.get('kp')).toEqual([2]);
    expect(found.get('corner')).toMatch(
      /'corner' with: its unit was Hz and is rad\/s; accept it with pawl latch$/,
    );
    expect(found.get('taps')).toMatch(/it had 2 numbers and has 3/);
    expect(found.get('kd')).toMatch(/it is new/);
  });
});
