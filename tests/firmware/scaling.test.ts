import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { type CoefficientRequest, openImage, readCoefficient } from '../../src/firmware/index.js';
import { ByteWriter } from './byte_writer.js';

/** A scale and an offset apply to the stored number, one for all, for each element, or for each row; bits stay as they are. */
const stored = [100, -50, 7, 32767, -32768, 0];
const bytes = stored.reduce((writer, value) => writer.u16(value), new ByteWriter()).result;
const image = openImage(bytes, 'a.bin', { baseAddress: 0 });
const read = (request: Partial<CoefficientRequest>) =>
  readCoefficient(image, {
    name: 'gain',
    at: 'gain',
    address: 0,
    format: 'int16',
    count: stored.length,
    ...request,
  });
const values = (request: Partial<CoefficientRequest>) =>
  read(request).elements.map((element) => element.value);

describe('scale and offset', () => {
  test('one for all elements', () => {
    expect(values({ scale: 0.5, offset: 3 })).toEqual(stored.map((value) => value * 0.5 + 3));
    expect(values({ offset: -1 })).toEqual(stored.map((value) => value - 1));
    expect(values({})).toEqual(stored);
  });

  test('one for each element', () => {
    const scale = [1, 2, 3, 4, 5, 6];
    expect(values({ scale })).toEqual(stored.map((value, i) => value * scale[i]));
    expect(values({ offset: scale })).toEqual(stored.map((value, i) => value + scale[i]));
  });

  test('the stored bits stay, the quantum is scaled, and the scaling is told', () => {
    const { elements, scaling } = read({ scale: -0.25, offset: 1 });
    expect(elements[1]).toEqual({ value: 13.5, stored: '0xffce', address: 2, quantum: 0.25 });
    expect(scaling).toEqual({ scale: Array(6).fill(-0.25), offset: Array(6).fill(1) });
    expect(read({}).scaling).toBeUndefined();
  });

  test('a scale and its inverse give the number again, for powers of two', () => {
    fc.assert(
      fc.property(fc.integer({ min: -20, max: 20 }), (exponent) => {
        expect(values({ scale: 2 ** exponent }).map((value) => value * 2 ** -exponent)).toEqual(stored);
      }),
    );
  });

  test.each([
    [{ scale: 0 }, /scale 0 is not a finite number other than 0/],
    [{ scale: Number.NaN }, /scale NaN is not a finite number/],
    [{ offset: Number.POSITIVE_INFINITY }, /offset Infinity is not a finite number/],
    [{ scale: [1, 2] }, /has 6 elements, but 2 numbers in scale: give one, or as many/],
    [{ offset: [] }, /has 6 elements, but 0 numbers in offset/],
  ])('%j is refused', (request, message) => {
    expect(() => read(request)).toThrow(message);
  });
});

describe('conspicuous bits', () => {
  const oneOf = (bits: number, format: string) => {
    const single = openImage(new ByteWriter().u32(bits).result, 'a.bin', { baseAddress: 0 });
    return readCoefficient(single, { name: 'gain', at: 'gain', address: 0, format }).elements[0];
  };

  // Bit patterns of IEEE 754-2019 binary32.
  test.each([
    [0x7fc00000, 'not_a_number'],
    [0x7f800000, 'infinite'],
    [0xff800000, 'infinite'],
    [0x00000001, 'denormal'],
    [0x807fffff, 'denormal'],
    [0xffffffff, 'erased'],
    [0x00800000, undefined],
    [0x00000000, undefined],
    [0x80000000, undefined],
    [0x3f800000, undefined],
  ])('0x%s as float32 is %s', (bits, remark) => {
    expect(oneOf(bits, 'float32').remark).toBe(remark);
  });

  test('a single −1 among integers is ordinary, a whole table of them is erased flash', () => {
    const some = openImage(new ByteWriter().u16(-1).u16(5).result, 'a.bin', { baseAddress: 0 });
    const all = openImage(new ByteWriter().u16(-1).u16(-1).result, 'a.bin', { baseAddress: 0 });
    const asked = { name: 'gain', at: 'gain', address: 0, format: 'int16', count: 2 };
    expect(readCoefficient(some, asked).elements.map((element) => element.remark)).toEqual([
      undefined,
      undefined,
    ]);
    expect(readCoefficient(all, asked).elements.map((element) => element.remark)).toEqual([
      'erased',
      'erased',
    ]);
  });

  test('what is not finite has no quantum', () => {
    expect(oneOf(0x7f800000, 'float32')).toEqual({
      value: Number.POSITIVE_INFINITY,
      stored: '0x7f800000',
      address: 0,
      remark: 'infinite',
    });
  });
});
