import { expect, it } from 'vitest';
import { numberOf } from '../../src/firmware/decode_number.js';
import { expectPublished, publishedCase } from '../published.js';

const half = { kind: 'float', bits: 16 } as const;
const decoded = (pattern: number): number => numberOf(BigInt(pattern), half);

/** The size of a pattern's number; infinity as the number that would follow the largest (IEEE 754-2019, 4.3.1). */
const sizeOf = (pattern: number): number =>
  (pattern & 0x7fff) === 0x7c00 ? 65536 : Math.abs(decoded(pattern));

/** The published patterns are those of the nearest numbers, ties to even, among all that the reader decodes (IEEE 754-2019). */
it('half-precision numbers are read as the published patterns say (I04)', () => {
  const { given, expect: expected } = publishedCase('I04');
  const patterns = (expected.patterns.value as string[]).map(Number);
  patterns.forEach((pattern, i) => {
    const exact = Math.abs(Number(given.values[i]));
    const distance = (other: number): number => Math.abs(sizeOf(other) - exact);
    for (const other of [pattern - 1, pattern + 1]) {
      if ((other & 0x7fff) > 0x7c00 || other < 0) continue;
      const isTie = distance(other) === distance(pattern);
      expect(isTie ? pattern % 2 === 0 : distance(pattern) < distance(other), given.values[i]).toBe(true);
    }
  });
  expect(decoded(0x7c00)).toBe(Number.POSITIVE_INFINITY);
  expect(decoded(0xc000)).toBe(-2);
  expectPublished('I04', 'largest', decoded(0x7bff));
  expectPublished('I04', 'least_normal', decoded(0x0400));
  expectPublished('I04', 'least_subnormal', decoded(0x0001));
});
