import fc from 'fast-check';
import { expect, it } from 'vitest';
import { stiffStep } from '../../src/kernel/stiff_step.js';

// Protects the coefficients of the step, which are from memory: what they must satisfy does not depend on them.

/** y' = f(y) from a start over a time, in equal steps. */
function followed(
  { rate, slope }: { rate: (y: number) => number; slope: (y: number) => number },
  { start, time, steps }: { start: number; time: number; steps: number },
): number {
  const m = Float64Array.of(start);
  const step = stiffStep(
    {
      rates: (at, rates) => {
        rates[0] = rate(at[0]);
      },
      slopes: (at, slopes) => {
        slopes[0] = slope(at[0]);
      },
    },
    0,
    1,
  );
  for (let k = 0; k < steps; k++) step(m, time / steps, new Float64Array(1));
  return m[0];
}

it('moves exactly at a constant rate, so that an integral does not drift however the step is halved', () => {
  const size = fc.double({ min: 1e-3, max: 1e3, noNaN: true });
  fc.assert(
    fc.property(size, size, fc.integer({ min: 1, max: 64 }), (rate, time, steps) => {
      const moved = followed({ rate: () => rate, slope: () => 0 }, { start: 0, time, steps });
      expect(Math.abs(moved / (rate * time) - 1)).toBeLessThan(1e-13);
    }),
  );
});

it.each([
  // Solutions by separation of variables.
  ['y′ = −y', { rate: (y: number) => -y, slope: () => -1 }, Math.exp(-1)],
  ['y′ = −y²', { rate: (y: number) => -y * y, slope: (y: number) => -2 * y }, 1 / 2],
  [
    'y′ = cos² y',
    { rate: (y: number) => Math.cos(y) ** 2, slope: (y: number) => -Math.sin(2 * y) },
    Math.atan(1 + Math.tan(1)),
  ],
])('is of fourth order on %s: half the step leaves a sixteenth of the error', (_, law, exact) => {
  const error = (steps: number): number => Math.abs(followed(law, { start: 1, time: 1, steps }) - exact);
  for (const steps of [16, 32, 64]) {
    const ratio = error(steps) / error(2 * steps);
    expect(ratio).toBeGreaterThan(13);
    expect(ratio).toBeLessThan(19);
  }
});

it('knows its error: that of a method of third order, a sixteenth for half the step', () => {
  const errorOf = (h: number): number => {
    const error = new Float64Array(1);
    const rates = (m: Float64Array, to: Float64Array): void => {
      to[0] = -m[0] * m[0];
    };
    const slopes = (m: Float64Array, to: Float64Array): void => {
      to[0] = -2 * m[0];
    };
    stiffStep({ rates, slopes }, 0, 1)(Float64Array.of(1), h, error);
    return Math.abs(error[0]);
  };
  for (const h of [0.05, 0.025]) {
    expect(errorOf(h) / errorOf(h / 2)).toBeGreaterThan(13);
    expect(errorOf(h) / errorOf(h / 2)).toBeLessThan(19);
  }
});

it('forgets a motion that is far faster than the step', () => {
  const law = { rate: (y: number) => -1e9 * y, slope: () => -1e9 };
  expect(Math.abs(followed(law, { start: 1, time: 1, steps: 1 }))).toBeLessThan(1e-4);
});
