import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { complexEigenvalues } from '../../src/linear/complex_eigenvalues.js';
import { discMarginOfLoop } from '../../src/linear/disc_margin.js';
import { liftedMargins } from '../../src/linear/lifted_margins.js';
import { marginsOfLoop } from '../../src/linear/margins.js';
import { add, identity } from '../../src/linear/matrix.js';
import { closedLoopDecay } from '../../src/linear/modes.js';
import type { StateEquations } from '../../src/linear/state_equations.js';
import { lifted, loopOf, randomLoop, repeatable, systemOf } from './loops.js';

describe('a loop of one rate seen over a longer cycle', () => {
  // Lifting keeps norms, and the eigenvalues of the lifted response are the responses at the frequencies that fold onto one
  // another (Bittanti and Colaneri 2009): every margin is that of the loop itself.
  it.each([2, 3, 5])('has the margins of the loop itself, over %i samples', (samples) => {
    const random = repeatable(samples);
    let stable = 0;
    for (let k = 0; k < 40; k++) {
      const loop = randomLoop(1 + (k % 5), random);
      const own = marginsOfLoop(loop);
      const found = liftedMargins(lifted(loop, samples));
      expect(found.stable).toBe(own.stable);
      if (!own.stable) {
        expect(found.gainMargin.ratio).toBe(1);
        expect(found.phaseMargin).toBe(0);
        continue;
      }
      stable++;
      expectNear(found.gainMargin.up, own.gainMargin.up);
      expectNear(found.gainMargin.down, own.gainMargin.down);
      expectNear(found.phaseMargin, own.phaseMargin);
      expectNear(found.modulusMargin, own.modulusMargin);
      expectNear(found.complementaryPeak, own.complementaryPeak.value);
      expectNear(found.discMargin, discMarginOfLoop(loop).margin);
      expectNear(found.decayRate, closedLoopDecay(loop).decayRate);
    }
    expect(stable).toBeGreaterThan(10);
  });
});

function expectNear(actual: number, expected: number): void {
  if (actual === expected) return;
  expect(Math.abs(actual - expected) / (1e-6 + Math.abs(expected))).toBeLessThan(1e-6);
}

describe('a loop that differs from sample to sample', () => {
  // x(k+1) = x(k) + g(k)·u(k), returned x, gains g alternating between p and q: over two samples the closed loop with a factor
  // c moves x by (1 − c·p)(1 − c·q), which is at −1 or 1 in size at the edge.
  const alternating = (p: number, q: number): StateEquations =>
    systemOf(
      [[1]],
      [[p, q]],
      [[1], [1]],
      [
        [0, 0],
        [p, 0],
      ],
      2,
    );

  it('has the gain margin of its movement over the cycle', () => {
    fc.assert(
      fc.property(
        fc.double({ min: 0.1, max: 0.9, noNaN: true }),
        fc.double({ min: 0.1, max: 0.9, noNaN: true }),
        (p, q) => {
          const { gainMargin, stable } = liftedMargins(alternating(p, q));
          expect(stable).toBe(true);
          // (1 − cp)(1 − cq) = 1 at c = (p + q)/(pq); = −1 needs (p + q)² ≥ 8pq, at the smaller root of pq·c² − (p + q)c + 2.
          const [sum, product] = [p + q, p * q];
          const discriminant = sum * sum - 8 * product;
          const expected =
            discriminant >= 0 ? (sum - Math.sqrt(discriminant)) / (2 * product) : sum / product;
          expect(Math.abs(gainMargin.up / expected - 1)).toBeLessThan(1e-6);
          expect(gainMargin.down).toBe(0);
        },
      ),
      { numRuns: 40 },
    );
  });

  it('has its phase margin where a turn of every sample alike brings it to the edge', () => {
    const [p, q] = [0.7, 0.3];
    const { phaseMargin } = liftedMargins(alternating(p, q));
    // |(1 − e^{jφ}p)(1 − e^{jφ}q)| = 1 at the margin and less before it.
    const size = (phi: number): number =>
      Math.hypot(1 - p * Math.cos(phi), p * Math.sin(phi)) *
      Math.hypot(1 - q * Math.cos(phi), q * Math.sin(phi));
    expect(size(phaseMargin)).toBeCloseTo(1, 9);
    for (let k = 0; k < 50; k++) expect(size((phaseMargin * k) / 50)).toBeLessThan(1);
  });

  it('is unstable where its movement over the cycle grows, though each sample alone would do', () => {
    const { stable, modulusMargin, gainMargin } = liftedMargins(alternating(2.5, -0.5));
    expect({ stable, modulusMargin, ratio: gainMargin.ratio }).toEqual({
      stable: false,
      modulusMargin: 0,
      ratio: 1,
    });
  });
});

describe('eigenvalues of complex matrices', () => {
  const entry = fc.record({
    real: fc.double({ min: -10, max: 10, noNaN: true }),
    imaginary: fc.double({ min: -10, max: 10, noNaN: true }),
  });
  const square = fc
    .integer({ min: 1, max: 8 })
    .chain((n) => fc.array(fc.array(entry, { minLength: n, maxLength: n }), { minLength: n, maxLength: n }));

  it('add up to the trace, and their squares to the trace of the square', () => {
    fc.assert(
      fc.property(square, (matrix) => {
        const values = complexEigenvalues(matrix);
        let [real, imaginary, squares] = [0, 0, 0];
        matrix.forEach((row, i) => {
          real += row[i].real;
          imaginary += row[i].imaginary;
          row.forEach((a, j) => {
            const b = matrix[j][i];
            squares += a.real * b.real - a.imaginary * b.imaginary;
          });
        });
        const sum = values.reduce((total, value) => total + value.real, 0);
        const sumOfSquares = values.reduce((total, z) => total + z.real ** 2 - z.imaginary ** 2, 0);
        expect(sum).toBeCloseTo(real, 8);
        expect(values.reduce((total, value) => total + value.imaginary, 0)).toBeCloseTo(imaginary, 8);
        expect(sumOfSquares).toBeCloseTo(squares, 6);
      }),
    );
  });

  it('are the diagonal of a triangular matrix, and the roots of one of a cyclic shift', () => {
    const z = (real: number, imaginary = 0) => ({ real, imaginary });
    const triangular = [
      [z(1, 2), z(5), z(-3, 1)],
      [z(0), z(4, -1), z(2)],
      [z(0), z(0), z(-2)],
    ];
    expect(
      complexEigenvalues(triangular)
        .map(({ real }) => real)
        .sort(),
    ).toEqual([-2, 1, 4]);
    const shift = [
      [z(0), z(1), z(0), z(0)],
      [z(0), z(0), z(1), z(0)],
      [z(0), z(0), z(0), z(1)],
      [z(1), z(0), z(0), z(0)],
    ];
    for (const { real, imaginary } of complexEigenvalues(shift)) {
      expect(Math.hypot(real, imaginary)).toBeCloseTo(1, 12);
      expect(Math.cos(4 * Math.atan2(imaginary, real))).toBeCloseTo(1, 12);
    }
  });

  it('are refused for a matrix that is not finite', () => {
    expect(() => complexEigenvalues([[{ real: Number.NaN, imaginary: 0 }]])).toThrow('not finite');
  });
});

describe('a lifted loop without states', () => {
  it('has the margins of its feedthrough', () => {
    // Two changes of gain 0.5 each, independent: c = 2 never reaches −1 with a positive gain, so only the peaks are finite.
    const loop = { ...lifted(loopOf([0.5], [1], 1), 2) };
    const { gainMargin, modulusMargin } = liftedMargins(loop);
    expect(gainMargin.ratio).toBe(Number.POSITIVE_INFINITY);
    expect(modulusMargin).toBeCloseTo(1.5, 12);
    expect(add(loop.d, identity(2)).data[0]).toBe(1.5);
  });
});
