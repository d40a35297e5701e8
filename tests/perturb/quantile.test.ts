import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { quantile } from '../../src/perturb/quantile.js';
import type { ParameterDefinition } from '../../src/spec/spec.js';
import { spread } from './parameters.js';

const cases: [string, ParameterDefinition][] = [
  ['uniform', spread(2, 6, { kind: 'uniform' })],
  ['triangular', spread(2, 6, { kind: 'triangular' }, 3)],
  ['triangular, peak at a bound', spread(2, 6, { kind: 'triangular' }, 2)],
  ['log_uniform', spread(0.01, 10, { kind: 'log_uniform' }, 1)],
  ['normal', spread(2, 6, { kind: 'normal', deviation: 0.7 }, 4.5)],
  ['normal, far wider than its bounds', spread(2, 6, { kind: 'normal', deviation: 1e3 }, 4)],
  ['values', spread(1, 4, { kind: 'values', values: [1, 2, 4] }, 2)],
];
const share = fc.double({ min: 0, max: 1, noNaN: true, maxExcluded: true });

/** The mean of a function of the parameter, by the midpoint rule on the shares. */
function mean(parameter: ParameterDefinition, of: (x: number) => number): number {
  const steps = 20_000;
  let sum = 0;
  for (let k = 0; k < steps; k++) sum += of(quantile(parameter, (k + 0.5) / steps));
  return sum / steps;
}

describe('drawing a parameter from its distribution', () => {
  it.each(cases)('%s: stays within the bounds and never falls as the share rises', (_, parameter) => {
    fc.assert(
      fc.property(share, share, (a, b) => {
        const [x, y] = [Math.min(a, b), Math.max(a, b)].map((u) => quantile(parameter, u));
        expect(x).toBeGreaterThanOrEqual(parameter.low);
        expect(y).toBeLessThanOrEqual(parameter.high);
        expect(x).toBeLessThanOrEqual(y);
      }),
      { seed: 21 },
    );
  });

  // Closed forms of the moments: textbook means and variances of the distributions.
  it('uniform: mean and variance', () => {
    const parameter = cases[0][1];
    expect(mean(parameter, (x) => x)).toBeCloseTo(4, 9);
    expect(mean(parameter, (x) => (x - 4) ** 2)).toBeCloseTo(16 / 12, 6);
  });

  it('triangular: mean (a + b + c)/3 and variance', () => {
    const parameter = cases[1][1];
    const [a, b, c] = [2, 6, 3];
    expect(mean(parameter, (x) => x)).toBeCloseTo((a + b + c) / 3, 6);
    const variance = (a * a + b * b + c * c - a * b - a * c - b * c) / 18;
    expect(mean(parameter, (x) => (x - (a + b + c) / 3) ** 2)).toBeCloseTo(variance, 5);
  });

  it('log_uniform: mean (b - a)/ln(b/a)', () => {
    expect(mean(cases[3][1], (x) => x)).toBeCloseTo((10 - 0.01) / Math.log(10 / 0.01), 5);
  });

  // Johnson, Kotz and Balakrishnan 1994: the mean of a normal distribution cut at both ends; the densities and shares at
  // the cuts are from the closed form.
  it('normal: the mean of the part between the bounds', () => {
    const [mu, sigma, low, high] = [4.5, 0.7, 2, 6];
    const density = (x: number): number => Math.exp((-x * x) / 2) / Math.sqrt(2 * Math.PI);
    const [alpha, beta] = [(low - mu) / sigma, (high - mu) / sigma];
    const inside = 0.98369 - 0.000178; // Φ(2.142857) − Φ(−3.571429), tables
    const expected = mu + (sigma * (density(alpha) - density(beta))) / inside;
    expect(mean(cases[4][1], (x) => x)).toBeCloseTo(expected, 3);
  });

  it('normal: next to uniform when far wider than its bounds', () => {
    expect(quantile(cases[5][1], 0.25)).toBeCloseTo(3, 5);
  });

  it('values: each as likely', () => {
    const parameter = cases[6][1];
    for (const value of [1, 2, 4]) {
      expect(mean(parameter, (x) => (x === value ? 1 : 0))).toBeCloseTo(1 / 3, 3);
    }
  });
});
