import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { LoopMargins } from '../../../src/linear/margins.js';
import type { Interval } from '../../../src/perturb/proof/interval.js';
import type { LoopClaim } from '../../../src/perturb/proof/margin_statement.js';
import { type PolynomialFamily, proveClaim } from '../../../src/perturb/proof/prove_claim.js';
import type { Slope, SlopeField } from '../../../src/perturb/proof/slope.js';
import { marginsOf } from './families.js';

/**
 * L = k·(δ + c)/((δ + a)(δ + b)) with k, a and b between bounds; where it is late, also by `samples` and a part of a sample
 * that lies between bounds: times ((1 − part)·z + part)/z^(samples + 1) with z = δ + 1, as of an integrator behind a hold.
 */
interface RandomLoop {
  gain: Interval;
  a: Interval;
  b: Interval;
  zero: number;
  late?: { samples: number; part: Interval } | undefined;
  claim: LoopClaim;
}

function familyOf({ gain, a, b, zero, late }: RandomLoop): PolynomialFamily {
  return {
    box: late ? [gain, a, b, late.part] : [gain, a, b],
    polynomials: (field: SlopeField) => {
      const [k, p, q] = [0, 1, 2].map((i) => field.variable(i));
      const one = field.constant(1);
      const numerator = [field.multiply(k, field.constant(zero)), k];
      const denominator = [field.multiply(p, q), field.add(p, q), one];
      const times = (x: Slope[], y: Slope[]): Slope[] =>
        x.reduce(
          (sum, left, i) => {
            y.forEach((right, j) => {
              sum[i + j] = field.add(sum[i + j], field.multiply(left, right));
            });
            return sum;
          },
          new Array<Slope>(x.length + y.length - 1).fill(field.constant(0)),
        );
      const lower = late
        ? times(
            denominator,
            powers(late.samples + 1).map((x) => field.constant(x)),
          )
        : denominator;
      const upper = late ? times(numerator, [one, field.subtract(one, field.variable(3))]) : numerator;
      const padded = lower.map((_, i) => upper[i] ?? field.constant(0));
      return [{ numerator: padded, denominator: lower }];
    },
  };
}

/** Ascending coefficients of (1 + δ)ⁿ. */
function powers(n: number): number[] {
  return n === 0 ? [1] : convolved(powers(n - 1), [1, 1]);
}

function convolved(x: number[], y: number[]): number[] {
  const result = new Array<number>(x.length + y.length - 1).fill(0);
  x.forEach((left, i) => {
    y.forEach((right, j) => {
      result[i + j] += left * right;
    });
  });
  return result;
}

function marginAt({ zero, late }: RandomLoop, [k, p, q, part]: readonly number[]): LoopMargins {
  const denominator = convolved([p * q, p + q, 1], late ? powers(late.samples + 1) : [1]);
  const numerator = convolved([k * zero, k], late ? [1, 1 - part] : [1]);
  return marginsOf([...numerator, ...new Array(denominator.length - numerator.length).fill(0)], denominator);
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

/** Evenly between two numbers; floating-point draws would crowd at the ends. */
const number = (min: number, max: number) =>
  fc.integer({ min: 0, max: 1_000_000 }).map((share) => min + ((max - min) * share) / 1_000_000);
const around = (least: number, most: number) =>
  fc
    .tuple(number(least, most), number(0, 0.3))
    .map(([middle, half]): Interval => [middle * (1 - half), middle * (1 + half)]);
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
  late: fc.option(
    fc.record({
      samples: fc.nat(2),
      part: fc.tuple(number(0, 1), number(0, 1)).map(([x, y]): Interval => [Math.min(x, y), Math.max(x, y)]),
    }),
    { nil: undefined, freq: 1 },
  ),
  claim: claims,
});

/** All corners and some plants between them, the same every time. */
function dense({ gain, a, b, late }: RandomLoop): number[][] {
  const parts = late ? [late.part[0], (late.part[0] + late.part[1]) / 2, late.part[1]] : [0];
  const shares = [0, 0.5, 1];
  const at = ([low, high]: Interval, share: number): number => low + share * (high - low);
  return parts.flatMap((part) =>
    shares.flatMap((s) => shares.flatMap((t) => shares.map((u) => [at(gain, s), at(a, t), at(b, u), part]))),
  );
}

describe('proofs of stability and margins', () => {
  it('never contradict dense search, on 500 random loops', () => {
    const counts = { proved: 0, refuted: 0, open: 0 };
    fc.assert(
      fc.property(loops, (loop) => {
        const failsAt = (point: readonly number[]): boolean => fails(loop.claim, marginAt(loop, point));
        const result = proveClaim(familyOf(loop), loop.claim, failsAt, loop.late ? 60 : 120);
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
    expect(counts.open).toBeLessThan(50);
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
