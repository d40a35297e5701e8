import { describe, expect, it } from 'vitest';
import { TargetArithmetic } from '../../../src/loop/arithmetic.js';
import { Evaluation } from '../../../src/loop/evaluate.js';
import { fit } from '../../../src/loop/fixed_point.js';
import { Graph, operations } from '../../../src/loop/graph.js';
import type { FixedArithmetic } from '../../../src/spec/arithmetic.js';
import { overflows, parseFixedFormat, roundings } from '../../../src/spec/fixed_formats.js';
import { expectPublished, publishedCase } from '../../published.js';

/** reference/published/, group I: two's complement fixed point (common practice) and IEEE Std 754, 2019. */
const formatNames: Record<string, string> = { I01: 'Q1.15', I02: 'Q1.31', I03: 'Q2.14' };

function fixed(
  format: string,
  rounding: FixedArithmetic['rounding'],
  overflow: FixedArithmetic['overflow'],
): FixedArithmetic {
  const parsed = parseFixedFormat(format);
  if (parsed === undefined || 'fault' in parsed) throw new Error(`${format} is no format`);
  return { format, ...parsed, rounding, overflow };
}

/** A decimal text of up to 20 digits as the nearest float64; its error is far below half a step of the formats. */
const numbers = (id: string): number[] => publishedCase(id).given.values.map(Number);

describe('fixed-point codes', () => {
  for (const [id, format] of Object.entries(formatNames)) {
    it(`${publishedCase(id).title} (${id})`, () => {
      const { bits, fractionalBits } = fixed(format, 'half_even', 'saturate');
      expect([bits, fractionalBits]).toEqual([
        publishedCase(id).given.bits,
        publishedCase(id).given.fractional_bits,
      ]);
      const step = 2 ** -fractionalBits;
      const size = step * 2 ** bits;
      const codes = numbers(id).map(
        (x) =>
          fit(x, step, roundings.indexOf('half_even'), -size / 2, size, overflows.indexOf('saturate')) / step,
      );
      expectPublished(id, 'codes', codes);
      expectPublished(id, 'resolution', step);
      const pattern = (code: number): string =>
        `0x${BigInt.asUintN(bits, BigInt(code))
          .toString(16)
          .toUpperCase()
          .padStart(bits / 4, '0')}`;
      expectPublished(id, 'patterns', codes.map(pattern));
    });
  }
});

describe('float32', () => {
  it(`${publishedCase('I05').title} (I05)`, () => {
    expectPublished('I05', 'stored_values', numbers('I05').map(operations.single));
    // The least numbers and the spacing show in what is not rounded away.
    const { least_subnormal, spacing_at_one } = publishedCase('I05').expect;
    const [least, spacing] = [least_subnormal.value as number, spacing_at_one.value as number];
    expect(operations.single(0.51 * least)).toBe(least);
    expect(operations.single(0.49 * least)).toBe(0);
    expect(operations.single(1 + 0.51 * spacing)).toBe(1 + spacing);
    expect(operations.single(1 + 0.49 * spacing)).toBe(1);
  });
});

describe('rounding', () => {
  it(`${publishedCase('I06').title} (I06)`, () => {
    const rounded = (rule: (typeof roundings)[number]): number[] =>
      numbers('I06').map((x) => fit(x, 1, roundings.indexOf(rule), -128, 256, 0));
    expectPublished('I06', 'nearest_ties_to_even', rounded('half_even'));
    expectPublished('I06', 'add_half_and_floor', rounded('nearest'));
    expectPublished('I06', 'toward_zero', rounded('toward_zero'));
    expectPublished(
      'I06',
      'nearest_ties_away',
      numbers('I06').map((x) => operations.round(x) + 0),
    );
  });
});

describe('Q15 products', () => {
  const products = (
    rounding: FixedArithmetic['rounding'],
    overflow: FixedArithmetic['overflow'],
  ): number[] => {
    const graph = new Graph();
    const arithmetic = new TargetArithmetic(graph, fixed('Q1.15', rounding, overflow));
    const product = arithmetic.multiply(graph.leaf('reading', 0), graph.leaf('reading', 1));
    return publishedCase('I07').given.factors.map(
      (factors: number[]) =>
        new Evaluation({ reading: factors.map((raw) => raw / 32768) }).of(product) * 32768,
    );
  };

  it(`${publishedCase('I07').title} (I07)`, () => {
    expectPublished('I07', 'shifted_down_saturated', products('truncate', 'saturate'));
    expectPublished('I07', 'half_added_shifted_saturated', products('nearest', 'saturate'));
    expectPublished('I07', 'shifted_down_wrapped', products('truncate', 'wrap'));
  });
});
