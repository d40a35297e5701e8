import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { bytesOfU32, Cursor, hex, nextOccurrence, occurrences } from '../../src/firmware/cursor.js';
import { FirmwareError } from '../../src/firmware/failure.js';
import { ByteWriter } from './byte_writer.js';

/** Nothing reads past the end: each read gives what was written, or fails with section, offset, wanted and available. */
const over = (bytes: Uint8Array, littleEndian = true) =>
  new Cursor(bytes, littleEndian, '.debug_info of “a.elf”');

describe('reading', () => {
  test('numbers come back as they were written, in both byte orders', () => {
    fc.assert(
      fc.property(fc.boolean(), fc.bigInt({ min: 0n, max: 2n ** 64n - 1n }), (littleEndian, value) => {
        const bytes = new ByteWriter(littleEndian)
          .u64(value)
          .number(value, 4)
          .number(value, 2)
          .number(value, 1)
          .number(value, 3).result;
        const cursor = over(bytes, littleEndian);
        expect(cursor.u64()).toBe(value);
        expect(cursor.u32()).toBe(Number(BigInt.asUintN(32, value)));
        expect(cursor.u16()).toBe(Number(BigInt.asUintN(16, value)));
        expect(cursor.u8()).toBe(Number(BigInt.asUintN(8, value)));
        expect(cursor.unsigned(3)).toBe(Number(BigInt.asUintN(24, value)));
        expect(cursor.atEnd).toBe(true);
      }),
    );
  });

  test('LEB128 of either sign comes back as it was written', () => {
    fc.assert(
      fc.property(
        fc.bigInt({ min: 0n, max: 2n ** 64n - 1n }),
        fc.bigInt({ min: -(2n ** 63n), max: 2n ** 63n - 1n }),
        (unsigned, signed) => {
          const cursor = over(new ByteWriter().uleb(unsigned).sleb(signed).result);
          expect(cursor.uleb64()).toBe(unsigned);
          expect(cursor.sleb64()).toBe(signed);
        },
      ),
    );
  });

  test.each([
    [[0x02], 2n],
    [[0x7e], -2n],
    [[0xff, 0x00], 127n],
    [[0x81, 0x7f], -127n],
    [[0x80, 0x01], 128n],
    [[0x80, 0x7f], -128n],
  ])('the examples of the DWARF standard, appendix C: %j is %s', (bytes, value) => {
    expect(over(Uint8Array.from(bytes)).sleb64()).toBe(value);
  });

  test('whatever is asked of whatever bytes, the position stays within them', () => {
    const reads: ((cursor: Cursor) => unknown)[] = [
      (c) => c.u8(),
      (c) => c.u16(),
      (c) => c.u32(),
      (c) => c.u64(),
      (c) => c.uleb(),
      (c) => c.sleb64(),
      (c) => c.text(),
      (c) => c.slice(5),
      (c) => c.skipLeb(),
      (c) => c.unsigned(7),
      (c) => c.moveTo(c.position + 3),
    ];
    fc.assert(
      fc.property(
        fc.uint8Array({ maxLength: 40 }),
        fc.array(fc.nat(reads.length - 1), { maxLength: 30 }),
        (bytes, choices) => {
          const cursor = over(bytes);
          for (const choice of choices) {
            try {
              reads[choice](cursor);
            } catch (error) {
              expect(error).toBeInstanceOf(FirmwareError);
            }
            expect(cursor.position).toBeGreaterThanOrEqual(0);
            expect(cursor.position).toBeLessThanOrEqual(bytes.length);
          }
        },
      ),
    );
  });

  test('text ends at its zero byte', () => {
    const cursor = over(Buffer.from('kp\0ki\0rest'));
    expect([cursor.text(), cursor.text()]).toEqual(['kp', 'ki']);
    expect(() => cursor.text()).toThrow(/text without its closing zero byte/);
  });
});

describe('errors', () => {
  test('say the region, the offset, what was wanted and what was there', () => {
    const cursor = over(new Uint8Array(6));
    cursor.skip(4);
    expect(() => cursor.u32()).toThrow(
      '.debug_info of “a.elf” is damaged at offset 0x4: wanted 4 bytes, available 2',
    );
  });

  test('a LEB128 of more than ten bytes is refused, padding within them is not', () => {
    expect(over(Uint8Array.from([0x85, ...Array(8).fill(0x80), 0x00])).uleb()).toBe(5);
    expect(() => over(Uint8Array.from([...Array(11).fill(0x80), 0])).uleb()).toThrow(/longer than 10 bytes/);
    expect(() => over(Uint8Array.from([...Array(11).fill(0x80), 0])).skipLeb()).toThrow(
      /longer than 10 bytes/,
    );
  });

  test('a length that no file can have', () => {
    expect(() => over(new Uint8Array(8).fill(0xff)).length(8)).toThrow(/is absurd/);
    expect(() => over(new Uint8Array(9).fill(0xff)).uleb()).toThrow(FirmwareError);
  });

  test('a region that is shorter than it claims', () => {
    expect(() => new Cursor(new Uint8Array(4), true, 'x', 0, 8)).toThrow(/ends at 0x8, behind its 4 bytes/);
  });

  test('a jump out of the region', () => {
    expect(() => over(new Uint8Array(4)).moveTo(5)).toThrow(/points to offset 0x5, outside/);
    expect(() => over(new Uint8Array(4)).moveTo(-1)).toThrow(/outside/);
    expect(() => over(new Uint8Array(4)).moveTo(Number.NaN)).toThrow(/outside/);
  });
});

test('occurrences finds what a plain search finds, or says that there are too many', () => {
  fc.assert(
    fc.property(
      fc.uint8Array({ maxLength: 60, max: 2 }),
      fc.uint8Array({ minLength: 1, maxLength: 3, max: 2 }),
      (bytes, pattern) => {
        const expected = [...bytes.keys()].filter((start) =>
          pattern.every((byte, i) => bytes[start + i] === byte),
        );
        expect(occurrences(bytes, pattern, 100)).toEqual(expected);
        expect(occurrences(bytes, pattern, 3)).toEqual(expected.length > 3 ? undefined : expected);
      },
    ),
  );
});

test('addresses are written in lower-case hexadecimal', () => {
  expect([hex(0x0801f0ab), hex(2n ** 40n)]).toEqual(['0x801f0ab', '0x10000000000']);
});

test('the next occurrence is the first one that is not before the start', () => {
  fc.assert(
    fc.property(
      fc.uint8Array({ maxLength: 40, max: 1 }),
      fc.uint8Array({ minLength: 1, maxLength: 3, max: 1 }),
      fc.nat(40),
      (bytes, pattern, start) => {
        const all = occurrences(bytes, pattern, 100) ?? [];
        expect(nextOccurrence(bytes, pattern, start)).toBe(all.find((place) => place >= start) ?? -1);
      },
    ),
  );
});

test('a number is sought by its bytes in the order of the image', () => {
  expect([...bytesOfU32(0x01020304, true)]).toEqual([4, 3, 2, 1]);
  expect([...bytesOfU32(0x01020304, false)]).toEqual([1, 2, 3, 4]);
});
