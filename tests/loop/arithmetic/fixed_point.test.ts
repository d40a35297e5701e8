import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { counting, fit, fitQuotient, fitSum } from '../../../src/loop/fixed_point.js';
import { overflows, roundings } from '../../../src/spec/fixed_formats.js';

type Rounding = (typeof roundings)[number];
type Overflow = (typeof overflows)[number];

/** A format of raw integers: its width, its sign, how many bits are shifted out, and its two rules. */
interface Format {
  bits: number;
  signed: boolean;
  fraction: number;
  rounding: Rounding;
  overflow: Overflow;
}

const formats: fc.Arbitrary<Format> = fc
  .record({
    bits: fc.constantFrom(8, 16, 32),
    signed: fc.boolean(),
    fraction: fc.nat(31),
    rounding: fc.constantFrom(...roundings),
    overflow: fc.constantFrom(...overflows),
  })
  .map((format) => ({ ...format, fraction: Math.min(format.fraction, format.bits) }));

const raw = (bits: number): fc.Arbitrary<number> =>
  fc.oneof(
    fc.integer({ min: -(2 ** (bits - 1)), max: 2 ** (bits - 1) - 1 }),
    fc.integer({ min: -3, max: 3 }),
    fc.constantFrom(-(2 ** (bits - 1)), 2 ** (bits - 1) - 1, 2 ** (bits - 2)),
  );

/** Exact integer arithmetic, as the definitions of the rules say it: floor division and remainders. */
function shifted(x: bigint, by: number, rounding: Rounding): bigint {
  const unit = 1n << BigInt(by);
  const rest = ((x % unit) + unit) % unit;
  const floor = (x - rest) / unit;
  switch (rounding) {
    case 'truncate':
      return floor;
    case 'toward_zero':
      return x / unit;
    case 'nearest':
      return (2n * x + unit - ((((2n * x + unit) % (2n * unit)) + 2n * unit) % (2n * unit))) / (2n * unit);
    case 'half_even':
      return 2n * rest > unit || (2n * rest === unit && floor % 2n !== 0n) ? floor + 1n : floor;
  }
}

function kept(x: bigint, bits: number, signed: boolean, overflow: Overflow): bigint {
  if (overflow === 'wrap') return signed ? BigInt.asIntN(bits, x) : BigInt.asUintN(bits, x);
  const [low, high] = signed
    ? [-(1n << BigInt(bits - 1)), (1n << BigInt(bits - 1)) - 1n]
    : [0n, (1n << BigInt(bits)) - 1n];
  return x < low ? low : x > high ? high : x;
}

function ends({ bits, signed, fraction, overflow }: Format): [low: number, size: number, overflow: number] {
  const size = 2 ** (bits - fraction);
  return [signed ? -size / 2 : 0, size, overflows.indexOf(overflow)];
}

const code = (rounding: Rounding): number => roundings.indexOf(rounding);

describe('fit', () => {
  const cases = fc.record({
    format: formats,
    x: fc.bigInt({ min: -(2n ** 52n), max: 2n ** 52n }),
    finer: fc.nat(30),
  });
  const fitted = ({ format, x, finer }: { format: Format; x: bigint; finer: number }): number =>
    fit(
      Number(x) * 2 ** -(format.fraction + finer),
      2 ** -format.fraction,
      code(format.rounding),
      ...ends(format),
    );

  it('shifts, rounds and keeps in range as exact integers do', () => {
    fc.assert(
      fc.property(cases, ({ format, x, finer }) => {
        const expected = kept(
          shifted(x, finer, format.rounding),
          format.bits,
          format.signed,
          format.overflow,
        );
        expect(fitted({ format, x, finer })).toBe(Number(expected) * 2 ** -format.fraction);
      }),
      { numRuns: 2000, seed: 1 },
    );
  });

  it('stays in the format, and is not moved by a second time', () => {
    fc.assert(
      fc.property(cases, (given) => {
        const { format } = given;
        const y = fitted(given);
        const [low, size] = ends(format);
        expect(y).toBeGreaterThanOrEqual(low);
        expect(y).toBeLessThan(low + size);
        expect(Number.isInteger(y * 2 ** format.fraction)).toBe(true);
        expect(fit(y, 2 ** -format.fraction, code(format.rounding), ...ends(format))).toBe(y);
      }),
      { numRuns: 500, seed: 2 },
    );
  });

  it('moves by less than a step, to nearest by at most half of one, inside the format', () => {
    fc.assert(
      fc.property(cases, ({ format, x, finer }) => {
        const wide: Format = { ...format, bits: 32, signed: true, fraction: 0, overflow: 'saturate' };
        const exact = Number(x % 2n ** 30n) * 2 ** -finer;
        const moved = Math.abs(fit(exact, 1, code(format.rounding), ...ends(wide)) - exact);
        const most = format.rounding === 'nearest' || format.rounding === 'half_even' ? 0.5 : 1 - 2 ** -finer;
        expect(moved).toBeLessThanOrEqual(most);
      }),
      { numRuns: 500, seed: 3 },
    );
  });

  it('wraps to a number that differs by whole turns', () => {
    fc.assert(
      fc.property(cases, (given) => {
        const format: Format = { ...given.format, overflow: 'wrap' };
        const exact = Number(shifted(given.x, given.finer, format.rounding));
        const wrapped = fitted({ ...given, format }) * 2 ** format.fraction;
        expect(Math.abs((exact - wrapped) % 2 ** format.bits)).toBe(0);
      }),
      { numRuns: 500, seed: 4 },
    );
  });

  it('counts exactly when the result was changed to fit', () => {
    fc.assert(
      fc.property(cases, ({ format, x, finer }) => {
        const rounded = shifted(x, finer, format.rounding);
        const [low, size, rule] = ends(format);
        const counted = fit(
          Number(x) * 2 ** -(format.fraction + finer),
          2 ** -format.fraction,
          code(format.rounding),
          low,
          size,
          rule + counting,
        );
        expect(counted).toBe(kept(rounded, format.bits, format.signed, 'saturate') === rounded ? 0 : 1);
      }),
      { numRuns: 500, seed: 5 },
    );
  });
});

describe('fitSum', () => {
  const cases = formats.chain((format) =>
    fc.record({
      format: fc.constant({ ...format, signed: true }),
      accumulator: fc.integer({ min: format.bits, max: 64 }),
      /** Fractional bits of the factors. */
      own: fc.nat(31),
      factors: fc.array(fc.tuple(raw(32), raw(format.bits)), { minLength: 1, maxLength: 6 }),
    }),
  );
  type Given = typeof cases extends fc.Arbitrary<infer T> ? T : never;

  function exactly({ format, accumulator, own, factors }: Given): { value: number; passed: number } {
    let [sum, passed] = [0n, 0];
    for (const [a, b] of factors) {
      const next = sum + BigInt(a) * BigInt(b);
      sum = kept(next, accumulator, true, format.overflow);
      if (kept(next, accumulator, true, 'saturate') !== next) passed++;
    }
    const rounded = shifted(sum, own, format.rounding);
    const result = kept(rounded, format.bits, true, format.overflow);
    if (kept(rounded, format.bits, true, 'saturate') !== rounded) passed++;
    return { value: Number(result) * 2 ** -format.fraction, passed };
  }

  function summed({ format, accumulator, own, factors }: Given, extra = 0): number {
    const [low, size, rule] = ends(format);
    const unit = 2 ** -(format.fraction + own);
    const whole = unit * 2 ** accumulator;
    return fitSum(
      2 ** -format.fraction,
      code(format.rounding),
      low,
      size,
      rule + extra,
      unit,
      -whole / 2,
      whole,
      ...factors.flatMap(([a, b]) => [a * 2 ** -own, b * 2 ** -format.fraction]),
    );
  }

  it('is the sum of exact integers of up to 64 bits, whatever the format, accumulator and rules', () => {
    fc.assert(
      fc.property(cases, (given) => {
        expect(summed(given)).toBe(exactly(given).value);
      }),
      { numRuns: 5000, seed: 6 },
    );
  });

  it('counts every overflow of the accumulator and that of the result', () => {
    fc.assert(
      fc.property(cases, (given) => {
        expect(summed(given, counting)).toBe(exactly(given).passed);
      }),
      { numRuns: 2000, seed: 7 },
    );
  });
});

describe('fitQuotient', () => {
  const cases = fc.record({ format: formats, a: raw(32), b: raw(32).filter((divisor) => divisor !== 0) });

  it('is cut toward zero as C’s, also where 64 bits are needed on the way', () => {
    fc.assert(
      fc.property(cases, ({ format, a, b }) => {
        const step = 2 ** -format.fraction;
        const quotient = (BigInt(a) << BigInt(format.fraction)) / BigInt(b);
        const expected = kept(quotient, format.bits, format.signed, format.overflow);
        expect(fitQuotient(a * step, b * step, step, ...ends(format))).toBe(Number(expected) * step);
      }),
      { numRuns: 5000, seed: 8 },
    );
  });

  it('is no number for a divisor of zero', () => {
    expect(fitQuotient(1, 0, 1, -128, 256, 0)).toBeNaN();
    expect(fitQuotient(0, 0, 1, -128, 256, 1)).toBeNaN();
  });
});
