import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { allRootsLeft } from '../../../src/perturb/proof/half_plane.js';
import type { Interval } from '../../../src/perturb/proof/interval.js';
import { onHalfPlane } from '../../../src/perturb/proof/loop_polynomials.js';
import { SlopeField } from '../../../src/perturb/proof/slope.js';

interface Root {
  real: number;
  imaginary: number;
}
const root: fc.Arbitrary<Root> = fc.record({
  real: fc.double({ min: -3, max: 0.7, noNaN: true }).filter((x) => Math.abs(x) > 0.01),
  imaginary: fc.double({ min: -3, max: 3, noNaN: true }),
});

/** Ascending complex coefficients of the polynomial with these roots. */
function withRoots(roots: readonly Root[]): { real: number[]; imaginary: number[] } {
  return roots.reduce(
    ({ real, imaginary }, at) => {
      const n = real.length;
      const shifted = { real: [0, ...real], imaginary: [0, ...imaginary] };
      for (let k = 0; k < n; k++) {
        shifted.real[k] -= at.real * real[k] - at.imaginary * imaginary[k];
        shifted.imaginary[k] -= at.real * imaginary[k] + at.imaginary * real[k];
      }
      return shifted;
    },
    { real: [1], imaginary: [0] },
  );
}

function isLeft({ real, imaginary }: { real: number[]; imaginary: number[] }, half = 0): boolean {
  const field = new SlopeField([]);
  const around = (x: number) => field.between([x - half, x + half] as Interval);
  return allRootsLeft(field, { real: real.map(around), imaginary: imaginary.map(around) });
}

// The roots are known because the polynomials are made from them.
describe('all roots left of the imaginary axis', () => {
  it('is decided rightly for complex polynomials of known roots', () => {
    fc.assert(
      fc.property(fc.array(root, { minLength: 1, maxLength: 6 }), (roots) => {
        expect(isLeft(withRoots(roots))).toBe(roots.every(({ real }) => real < 0));
      }),
      { seed: 101, numRuns: 400 },
    );
  });

  it('is decided rightly for real polynomials of known roots', () => {
    fc.assert(
      fc.property(fc.array(root, { minLength: 1, maxLength: 3 }), (half) => {
        const roots = half.flatMap(({ real, imaginary }) => [
          { real, imaginary },
          { real, imaginary: -imaginary },
        ]);
        const { real } = withRoots(roots);
        const answer = isLeft({ real, imaginary: real.map(() => 0) });
        expect(answer).toBe(roots.every((one) => one.real < 0));
      }),
      { seed: 102, numRuns: 400 },
    );
  });

  it('is never claimed for a family that holds an unstable polynomial', () => {
    fc.assert(
      fc.property(
        fc.array(root, { minLength: 1, maxLength: 4 }),
        fc.double({ min: 0, max: 2, noNaN: true }),
        (roots, half) => {
          const unstable = roots.some(({ real }) => real > 0);
          if (isLeft(withRoots(roots), half)) expect(unstable).toBe(false);
        },
      ),
      { seed: 103, numRuns: 400 },
    );
  });

  it('is not claimed where the highest coefficient may vanish', () => {
    const field = new SlopeField([]);
    const real = [field.constant(1), field.constant(2), field.between([-0.1, 1])];
    expect(allRootsLeft(field, { real, imaginary: real.map(() => field.constant(0)) })).toBe(false);
  });

  it('carries roots inside the unit circle to the left half plane', () => {
    // Real roots in δ = z − 1: inside the circle from −2 to 0, and none next to its edge.
    const inDelta = fc
      .double({ min: -2.3, max: 0.3, noNaN: true })
      .filter((x) => Math.abs(x) > 0.01 && Math.abs(x + 2) > 0.01);
    fc.assert(
      fc.property(fc.array(inDelta, { minLength: 1, maxLength: 5 }), (roots) => {
        const { real } = withRoots(roots.map((x) => ({ real: x, imaginary: 0 })));
        const field = new SlopeField([]);
        const mapped = onHalfPlane(
          field,
          real.map((x) => field.constant(x)),
        );
        const answer = allRootsLeft(field, { real: mapped, imaginary: mapped.map(() => field.constant(0)) });
        expect(answer).toBe(roots.every((x) => x > -2 && x < 0));
      }),
      { seed: 104, numRuns: 300 },
    );
  });
});
