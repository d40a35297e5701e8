import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  difference,
  down,
  everything,
  type Interval,
  product,
  quotient,
  sum,
  up,
} from '../../../src/perturb/proof/interval.js';

/** A number as an exact fraction of integers: what floating-point results are compared with. */
class Exact {
  constructor(
    readonly top: bigint,
    readonly bottom: bigint,
  ) {}

  static of(x: number): Exact {
    let bottom = 1n;
    let value = x;
    while (!Number.isInteger(value)) {
      value *= 2;
      bottom *= 2n;
    }
    return new Exact(BigInt(value), bottom);
  }

  isAtMost(other: Exact): boolean {
    return this.top * other.bottom <= other.top * this.bottom;
  }

  plus(o: Exact): Exact {
    return new Exact(this.top * o.bottom + o.top * this.bottom, this.bottom * o.bottom);
  }

  times(o: Exact): Exact {
    return new Exact(this.top * o.top, this.bottom * o.bottom);
  }

  over(o: Exact): Exact {
    const sign = o.top < 0n ? -1n : 1n;
    return new Exact(this.top * o.bottom * sign, this.bottom * o.top * sign);
  }
}

function expectHolds([low, high]: Interval, exact: Exact): void {
  if (Number.isFinite(low)) expect(Exact.of(low).isAtMost(exact)).toBe(true);
  if (Number.isFinite(high)) expect(exact.isAtMost(Exact.of(high))).toBe(true);
}

const finite = fc.double({ min: -1e6, max: 1e6, noNaN: true });
const interval = fc.tuple(finite, finite).map(([a, b]): Interval => [Math.min(a, b), Math.max(a, b)]);
/** An interval, and a number in it. */
const inside = fc
  .tuple(interval, fc.double({ min: 0, max: 1, noNaN: true }))
  .map(([of, share]): [Interval, number] => [
    of,
    Math.min(of[1], Math.max(of[0], of[0] + share * (of[1] - of[0]))),
  ]);

// Moore 1966: the result of interval arithmetic holds the result of every choice of its operands; here against exact fractions.
describe('validated interval arithmetic', () => {
  it('holds the exact result for every number in the operands', () => {
    fc.assert(
      fc.property(inside, inside, ([a, x], [b, y]) => {
        const [ex, ey] = [Exact.of(x), Exact.of(y)];
        expectHolds(sum(a, b), ex.plus(ey));
        expectHolds(difference(a, b), ex.plus(Exact.of(-y)));
        expectHolds(product(a, b), ex.times(ey));
        if (b[0] > 0 || b[1] < 0) expectHolds(quotient(a, b), ex.over(ey));
      }),
      { seed: 71, numRuns: 2000 },
    );
  });

  it('rounds outward by at least one unit in the last place, also next to zero', () => {
    for (const x of [1, -1, 1e300, 1e-300, 5e-324, 0, 0.1]) {
      expect(down(x)).toBeLessThan(x === 0 ? 0 : x);
      expect(up(x)).toBeGreaterThan(x);
      expect(down(x)).toBeGreaterThanOrEqual(x - Math.abs(x) * 2 ** -50 - 1e-320);
    }
  });

  it('knows nothing of a quotient by an interval with zero in it', () => {
    expect(quotient([1, 2], [-1, 1])).toEqual(everything);
    expect(quotient([1, 2], [0, 1])).toEqual(everything);
  });

  it('keeps an exact zero an exact zero', () => {
    expect(product([0, 0], [-3, 5])).toEqual([0, 0]);
    expect(sum([0, 0], [1, 2])).toEqual([1, 2]);
  });
});
