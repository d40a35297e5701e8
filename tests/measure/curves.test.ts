import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { valueAt } from '../../src/measure/bernstein.js';
import {
  type Curve,
  curveOf,
  isConstant,
  pieceAt,
  pieceOf,
  scaled,
  valueBefore,
} from '../../src/measure/curve.js';
import {
  CurveBuilder,
  constantLike,
  difference,
  earlier,
  largerOf,
  largestSoFar,
  smallerOf,
  sumOf,
} from '../../src/measure/curve_arithmetic.js';
import { largest, smallest } from '../../src/measure/extremes.js';
import { slidingLargest, slidingSmallest } from '../../src/measure/sliding_extremes.js';
import { largestMeanOfSize } from '../../src/measure/sliding_mean.js';
import { turningPoints } from '../../src/measure/turning_points.js';

/** A curve from 0 s to `end` of pieces with random points, jumping between them. */
const curve = (end: number): fc.Arbitrary<Curve> =>
  fc
    .array(
      fc.record({
        length: fc.double({ min: 0.1, max: 1, noNaN: true }),
        points: fc.array(fc.double({ min: -5, max: 5, noNaN: true }), { minLength: 6, maxLength: 6 }),
      }),
      { minLength: 1, maxLength: 6 },
    )
    .map((pieces) => {
      const total = pieces.reduce((sum, { length }) => sum + length, 0);
      const builder = new CurveBuilder();
      let from = 0;
      for (const { length, points } of pieces) {
        builder.add(from, points);
        from += (length * end) / total;
      }
      return builder.build(end);
    });

function at(of: Curve, time: number): number {
  const piece = pieceAt(of, time);
  const [t0, t1] = [of.times[piece], of.times[piece + 1]];
  return valueAt(pieceOf(of, piece), Math.min(1, Math.max(0, (time - t0) / (t1 - t0))));
}

const time = fc.double({ min: 0, max: 3.999, noNaN: true });

describe('curves of records', () => {
  it('reproduce a polynomial of degree five exactly', () => {
    const y = (t: number): number => 1 - 2 * t + 0.5 * t ** 2 + 0.3 * t ** 3 - 0.1 * t ** 4 + 0.02 * t ** 5;
    const rate = (t: number): number => -2 + t + 0.9 * t ** 2 - 0.4 * t ** 3 + 0.1 * t ** 4;
    const bend = (t: number): number => 1 + 1.8 * t - 1.2 * t ** 2 + 0.4 * t ** 3;
    const run = {
      times: Float64Array.of(0, 1.5, 4),
      records: [
        Float64Array.of(y(0), rate(0), y(1.5), rate(1.5), y(1.5), rate(1.5), y(4), rate(4)),
        Float64Array.of(rate(0), bend(0), rate(1.5), bend(1.5), rate(1.5), bend(1.5), rate(4), bend(4)),
      ],
      pieces: 2,
      end: { kind: 'complete' as const },
      lend: (length: number) => new Float64Array(length),
    };
    const found = curveOf(run, 0, 1);
    for (const t of [0, 0.4, 1.4999, 1.5, 2, 3.7]) expect(at(found, t)).toBeCloseTo(y(t), 11);
  });

  it('are straight where a rate is not finite', () => {
    const run = {
      times: Float64Array.of(0, 1),
      records: [Float64Array.of(0, Number.POSITIVE_INFINITY, 1, 0.5), Float64Array.of(0, 0, 0, 0)],
      pieces: 1,
      end: { kind: 'complete' as const },
      lend: (length: number) => new Float64Array(length),
    };
    expect(at(curveOf(run, 0, 1), 0.25)).toBeCloseTo(0.25, 12);
  });

  it('know the value before a jump', () => {
    const builder = new CurveBuilder();
    builder.add(0, new Float64Array(6).fill(1));
    builder.add(2, new Float64Array(6).fill(3));
    const jump = builder.build(4);
    expect([0, 1, 2, 3].map((t) => valueBefore(jump, t))).toEqual([1, 1, 1, 3]);
    expect(isConstant(jump)).toBe(false);
    expect(isConstant(constantLike(jump, 7))).toBe(true);
  });
});

describe('arithmetic of curves', () => {
  it('is that of their values at every time', () => {
    fc.assert(
      fc.property(curve(4), curve(4), time, (a, b, t) => {
        const near = (found: Curve, expected: number): void => {
          expect(Math.abs(at(found, t) - expected)).toBeLessThan(1e-7);
        };
        // Not at a joint of one of them, where a curve has two values.
        fc.pre([a, b].every((one) => [...one.times].every((joint) => Math.abs(joint - t) > 1e-6)));
        near(sumOf(a, b, -2), at(a, t) - 2 * at(b, t));
        near(difference(a, b), at(a, t) - at(b, t));
        near(largerOf(a, b), Math.max(at(a, t), at(b, t)));
        near(smallerOf(a, b), Math.min(at(a, t), at(b, t)));
        near(scaled(a, 3, 1), 3 * at(a, t) + 1);
      }),
    );
  });

  it('looks ahead', () => {
    fc.assert(
      fc.property(curve(4), time, fc.double({ min: 0, max: 3, noNaN: true }), (a, t, by) => {
        const moved = earlier(a, by, 4);
        const from = Math.min(t + by, 4);
        fc.pre([...a.times].every((joint) => Math.abs(joint - from) > 1e-6));
        expect(
          Math.abs(at(moved, t) - (from === 4 ? a.points[a.points.length - 1] : at(a, from))),
        ).toBeLessThan(1e-7);
      }),
    );
  });

  it('keeps a top that a later rise of the same piece has not overtaken yet', () => {
    const points = Float64Array.from([0, 0, 5, 0, 0, 3]);
    const a = { times: Float64Array.from([0, 1]), points, pieces: 1 };
    for (const t of [0.3, 0.6, 0.75, 0.9, 0.97]) {
      expect(at(largestSoFar(a), t)).toBeCloseTo(largest(a, 0, t).value, 9);
    }
  });

  it('keeps the largest so far', () => {
    fc.assert(
      fc.property(curve(4), fc.double({ min: 0.01, max: 3.99, noNaN: true }), (a, t) => {
        fc.pre([...a.times].every((joint) => Math.abs(joint - t) > 1e-6));
        expect(at(largestSoFar(a), t)).toBeCloseTo(largest(a, 0, t).value, 6);
      }),
    );
  });

  it('slides extremes as each window taken alone gives them', () => {
    const inside = fc.double({ min: 0.05, max: 1.5, noNaN: true });
    fc.assert(
      fc.property(
        curve(4),
        inside,
        inside,
        fc.double({ min: 0, max: 2, noNaN: true }),
        (a, from, length, t) => {
          const to = from + length;
          const end = Math.min(t + to, 4);
          fc.pre(t + from < 3.9);
          const joints = [...a.times];
          fc.pre(
            joints.every(
              (joint) => (Math.abs(joint - t - from) > 1e-6 && Math.abs(joint - end) > 1e-6) || joint === 4,
            ),
          );
          expect(at(slidingLargest(a, from, to), t)).toBeCloseTo(largest(a, t + from, end).value, 6);
          expect(at(slidingSmallest(a, from, to), t)).toBeCloseTo(smallest(a, t + from, end).value, 6);
        },
      ),
    );
  });
});

describe('the largest mean over a sliding window', () => {
  it('is no less than any window’s, and some window’s', () => {
    fc.assert(
      fc.property(curve(4), fc.double({ min: 0.2, max: 3.5, noNaN: true }), (a, length) => {
        const found = largestMeanOfSize(a, length, { from: 0, until: 4 });
        const size = (t: number): number => Math.abs(at(a, t));
        let most = 0;
        for (let k = 0; k <= 40; k++) {
          const start = ((4 - length) * k) / 40;
          let sum = 0;
          const n = 400;
          for (let i = 0; i < n; i++) sum += size(start + (length * (i + 0.5)) / n);
          most = Math.max(most, sum / n);
        }
        // The search is coarse, in starts (a tenth of a second, values to 5) and in the sum.
        expect(found).toBeGreaterThan(most - 0.05);
        expect(found).toBeLessThan(most + (10 * (4 - length)) / 40 / length + 0.05);
      }),
      { numRuns: 40 },
    );
  });
});

describe('turning points', () => {
  it('alternate, and each is beyond the ones beside it', () => {
    fc.assert(
      fc.property(curve(4), fc.double({ min: 0, max: 2, noNaN: true }), (a, least) => {
        const points = turningPoints(a, { from: 0, until: 4 }, least);
        for (let i = 1; i < points.length; i++) {
          expect(points[i].kind).not.toBe(points[i - 1].kind);
          const rise = points[i].value - points[i - 1].value;
          expect(points[i].kind === 'maximum' ? rise : -rise).toBeGreaterThan(least);
        }
      }),
    );
  });
});
