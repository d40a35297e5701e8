import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { LoopMargins } from '../../../src/linear/margins.js';
import type { Interval } from '../../../src/perturb/proof/interval.js';
import type { LoopClaim } from '../../../src/perturb/proof/margin_statement.js';
import { type PolynomialFamily, proveClaim } from '../../../src/perturb/proof/prove_claim.js';
import type { Slope, SlopeField } from '../../../src/perturb/proof/slope.js';
import { marginsOf } from './families.js';

/** L = k·(δ + c)/((δ + a)(δ + b)) with k, a and b between bounds. */
interface RandomLoop {
  gain: Interval;
  a: Interval;
  b: Interval;
  zero: number;
  claim: LoopClaim;
}

function familyOf({ gain, a, b, zero }: RandomLoop): PolynomialFamily {
  return {
    box: [gain, a, b],
    polynomials: (field: SlopeField) => {
      const [k, p, q] = [0, 1, 2].map((i) => field.variable(i));
      const none: Slope = field.constant(0);
      return {
        numerator: [field.multiply(k, field.constant(zero)), k, none],
        denominator: [field.multiply(p, q), field.add(p, q), field.constant(1)],
      };
    },
  };
}

function marginAt({ zero }: RandomLoop, [k, p, q]: readonly number[]): LoopMargins {
  return marginsOf([k * zero, k, 0], [p * q, p + q, 1]);
}

function fails(claim: LoopClaim, margins: LoopMargins): boolean {
  if (!margins.stable) return true;
  switch (claim.kind) {
    case 'stable':
      return false;
    case 'gain_margin':
      return margins.gainMargin.ratio < claim.atLeast;
    case 'phase_margin':
      return margins.phaseMargin < claim.atLeast;
    case 'modulus_margin':
      return margins.modulusMargin < claim.atLeast;
  }
}

const around = (least: number, most: number) =>
  fc
    .tuple(fc.double({ min: least, max: most, noNaN: true }), fc.double({ min: 0, max: 0.3, noNaN: true }))
    .map(([middle, half]): Interval => [middle * (1 - half), middle * (1 + half)]);
const number = (min: number, max: number) => fc.double({ min, max, noNaN: true });
const claims: fc.Arbitrary<LoopClaim> = fc.oneof(
  fc.constant<LoopClaim>({ kind: 'stable' }),
  number(1.05, 4).map((atLeast): LoopClaim => ({ kind: 'gain_margin', atLeast })),
  number(0.05, 1.2).map((atLeast): LoopClaim => ({ kind: 'phase_margin', atLeast })),
  number(0.1, 0.9).map((atLeast): LoopClaim => ({ kind: 'modulus_margin', atLeast })),
);
const loops: fc.Arbitrary<RandomLoop> = fc.record({
  gain: around(0.05, 1.5),
  a: around(0.01, 0.6),
  b: around(0.05, 1.4),
  zero: number(0.05, 1.2),
  claim: claims,
});

/** All corners and some plants between them, the same every time. */
function dense({ gain, a, b }: RandomLoop): number[][] {
  const shares = [0, 0.5, 1];
  const at = ([low, high]: Interval, share: number): number => low + share * (high - low);
  return shares.flatMap((s) => shares.flatMap((t) => shares.map((u) => [at(gain, s), at(a, t), at(b, u)])));
}

describe('proofs of stability and margins', () => {
  it('never contradict dense search, on 500 random loops', () => {
    const counts = { proved: 0, refuted: 0, open: 0 };
    fc.assert(
      fc.property(loops, (loop) => {
        const failsAt = (point: readonly number[]): boolean => fails(loop.claim, marginAt(loop, point));
        const result = proveClaim(familyOf(loop), loop.claim, failsAt, 120);
        counts[result.kind]++;
        if (result.kind === 'proved') {
          for (const point of dense(loop)) expect(failsAt(point), `${point}`).toBe(false);
        }
        if (result.kind === 'refuted') {
          expect(failsAt(result.at)).toBe(true);
          familyOf(loop).box.forEach(([low, high], i) => {
            expect(result.at[i] >= low && result.at[i] <= high).toBe(true);
          });
        }
        if (result.kind === 'open') {
          expect(result.openShare).toBeGreaterThan(0);
          expect(result.openShare).toBeLessThanOrEqual(1);
        }
      }),
      { seed: 81, numRuns: 500 },
    );
    // The property would hold for a method that never decides: most are decided.
    expect(counts.proved).toBeGreaterThan(100);
    expect(counts.refuted).toBeGreaterThan(50);
    expect(counts.open).toBeLessThan(100);
  }, 120_000);

  it('decide either side of the true worst margin', () => {
    const loop: RandomLoop = {
      gain: [0.3, 0.4],
      a: [0.1, 0.12],
      b: [0.9, 1],
      zero: 0.4,
      claim: { kind: 'stable' },
    };
    const worst = Math.min(...dense(loop).map((point) => marginAt(loop, point).modulusMargin));
    const prove = (atLeast: number) => {
      const claim: LoopClaim = { kind: 'modulus_margin', atLeast };
      return proveClaim(familyOf(loop), claim, (p) => fails(claim, marginAt(loop, p)), 4000).kind;
    };
    expect(prove(0.97 * worst)).toBe('proved');
    expect(prove(1.05 * worst)).toBe('refuted');
  });
});
