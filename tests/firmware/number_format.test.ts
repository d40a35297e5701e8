import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { bitsOf, numberOf, storedText } from '../../src/firmware/decode_number.js';
import { FirmwareError, formatText, type NumberFormat, parseFormat } from '../../src/firmware/index.js';
import { quantumOf } from '../../src/firmware/remark.js';

/** Format texts mean what their names say, and stored bits become exactly the number they mean. */
const widths = [8, 16, 32, 64] as const;
const anyFormat: fc.Arbitrary<NumberFormat> = fc.oneof(
  fc.constantFrom(16, 32, 64).map((bits): NumberFormat => ({ kind: 'float', bits: bits as 16 | 32 | 64 })),
  fc
    .record({ bits: fc.constantFrom(...widths), signed: fc.boolean() })
    .map((r): NumberFormat => ({ kind: 'integer', ...r })),
  fc
    .record({
      bits: fc.constantFrom(...widths),
      signed: fc.boolean(),
      part: fc.double({ min: 0, max: 1, noNaN: true }),
    })
    .map(({ bits, signed, part }): NumberFormat => {
      const fractionalBits = Math.round(part * (bits - (signed ? 1 : 0)));
      return { kind: 'fixed', bits, signed, fractionalBits };
    }),
);

describe('format texts', () => {
  test.each<[string, NumberFormat]>([
    ['float16', { kind: 'float', bits: 16 }],
    ['float64', { kind: 'float', bits: 64 }],
    ['int16', { kind: 'integer', bits: 16, signed: true }],
    ['uint8', { kind: 'integer', bits: 8, signed: false }],
    ['Q2.14', { kind: 'fixed', bits: 16, signed: true, fractionalBits: 14 }],
    ['Q16.16', { kind: 'fixed', bits: 32, signed: true, fractionalBits: 16 }],
    ['UQ8.8', { kind: 'fixed', bits: 16, signed: false, fractionalBits: 8 }],
    ['UQ0.16', { kind: 'fixed', bits: 16, signed: false, fractionalBits: 16 }],
    ['Q15', { kind: 'fixed', bits: 16, signed: true, fractionalBits: 15 }],
    ['Q31', { kind: 'fixed', bits: 32, signed: true, fractionalBits: 31 }],
    ['UQ16', { kind: 'fixed', bits: 16, signed: false, fractionalBits: 16 }],
  ])('%s', (text, format) => {
    expect(parseFormat(text)).toEqual(format);
  });

  test('every format is read back from its text', () => {
    fc.assert(
      fc.property(anyFormat, (format) => {
        expect(parseFormat(formatText(format))).toEqual(format);
      }),
    );
  });

  test.each([
    ['Q2.13', /15 bits wide.*must be 8, 16, 32 or 64: nearest is Q3\.13/],
    ['UQ4.3', /7 bits wide.*nearest is UQ5\.3/],
    ['Q0.16', /m counts the sign, so it is at least 1; did you mean Q1\.15 or UQ0\.16/],
    ['Q40.40', /80 bits wide.*nearest is Q24\.40/],
    ['flaot32', /“flaot32” is not known.*nearest: float32/],
    ['integer16', /is not known; expected float16\/32\/64, int8 to int64/],
    ['', /“” is not known/],
    ['q2.14', /nearest: Q2\.14/],
    ['toString', /is not known/],
    ['Q2.14 ', /is not known/],
  ])('%j is refused with the nearest choice', (text, message) => {
    let error: unknown;
    try {
      parseFormat(text);
    } catch (caught) {
      error = caught;
    }
    expect(error).toBeInstanceOf(FirmwareError);
    expect((error as FirmwareError).code).toBe('bad_format');
    expect((error as FirmwareError).message).toMatch(message);
  });
});

describe('stored bits', () => {
  test('float32 and float64 are what the platform makes of the same bits', () => {
    fc.assert(
      fc.property(fc.bigInt({ min: 0n, max: 2n ** 64n - 1n }), (bits) => {
        const view = new DataView(new ArrayBuffer(8));
        view.setBigUint64(0, bits);
        expect(numberOf(bits, { kind: 'float', bits: 64 })).toBe(view.getFloat64(0));
        expect(numberOf(bits >> 32n, { kind: 'float', bits: 32 })).toBe(view.getFloat32(0));
      }),
    );
  });

  // Values of IEEE 754-2019 binary16: the largest, the smallest normal and subnormal number, one third rounded.
  test.each([
    [0x3c00n, 1],
    [0xc000n, -2],
    [0x7bffn, 65504],
    [0x0400n, 2 ** -14],
    [0x0001n, 2 ** -24],
    [0x03ffn, 1023 * 2 ** -24],
    [0x3555n, 0.333251953125],
    [0x8000n, -0],
    [0x7c00n, Number.POSITIVE_INFINITY],
    [0xfc00n, Number.NEGATIVE_INFINITY],
    [0x7e00n, Number.NaN],
  ])('float16 0x%s', (bits, value) => {
    expect(numberOf(bits, { kind: 'float', bits: 16 })).toBe(value);
  });

  test.each([
    [0x4000n, 'Q2.14', 1],
    [0x8000n, 'Q2.14', -2],
    [0xffffn, 'Q2.14', -(2 ** -14)],
    [0x7fffn, 'Q15', 1 - 2 ** -15],
    [0xffffn, 'UQ8.8', 256 - 2 ** -8],
    [0x80n, 'int8', -128],
    [0x80n, 'uint8', 128],
    [0xffffffffn, 'uint32', 4294967295],
    [0xffe0000000000001n, 'int64', -9007199254740991],
  ])('0x%s as %s is %d', (bits, format, value) => {
    expect(numberOf(bits, parseFormat(format))).toBe(value);
  });

  test('a 64-bit integer beyond 2^53 is refused, never rounded', () => {
    expect(() => numberOf(2n ** 53n, parseFormat('uint64'))).toThrow(/9007199254740992 is beyond 2\^53/);
    expect(() => numberOf(2n ** 63n, parseFormat('int64'))).toThrow(
      expect.objectContaining({
        code: 'not_exact',
        message: expect.stringContaining('-9223372036854775808'),
      }),
    );
    expect(numberOf(2n ** 53n - 1n, parseFormat('uint64'))).toBe(2 ** 53 - 1);
  });

  test('scaling the bits of a fixed-point number by two scales the number', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: -(2 ** 14), max: 2 ** 14 - 1 }),
        fc.integer({ min: 0, max: 15 }),
        (stored, fractionalBits) => {
          const format: NumberFormat = { kind: 'fixed', bits: 16, signed: true, fractionalBits };
          const meant = (integer: number) => numberOf(BigInt.asUintN(16, BigInt(integer)), format);
          expect(meant(2 * stored)).toBe(2 * meant(stored));
          expect(meant(stored) * 2 ** fractionalBits).toBe(stored);
        },
      ),
    );
  });

  test('bytes are put together in the order of the target', () => {
    const bytes = Uint8Array.from([0x12, 0x34, 0x56]);
    expect(bitsOf(bytes, false)).toBe(0x123456n);
    expect(bitsOf(bytes, true)).toBe(0x563412n);
  });

  test('stored text is as wide as the type', () => {
    expect(storedText(5n, 16)).toBe('0x0005');
    expect(storedText(5n, 3)).toBe('0x5');
    expect(storedText(0x1dn, 5)).toBe('0x1d');
  });
});

test('the quantum of a float32 is the distance to the next one up', () => {
  fc.assert(
    fc.property(fc.integer({ min: 0, max: 0x7f7ffffe }), (bits) => {
      const format: NumberFormat = { kind: 'float', bits: 32 };
      const value = numberOf(BigInt(bits), format);
      expect(numberOf(BigInt(bits + 1), format) - value).toBe(quantumOf(value, format));
    }),
  );
  expect(quantumOf(Number.NaN, { kind: 'float', bits: 32 })).toBeUndefined();
  expect(quantumOf(3, parseFormat('Q2.14'))).toBe(2 ** -14);
});
