import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { referenceJson } from '../../../src/report/index.js';
import { latchedValues, type Reference, readReference } from '../../../src/verdict/latched/reference.js';

// Protects the file that a merge is judged by: it reads back as it was written, and nothing else is taken for one.

const number = fc.oneof(
  fc.double({ noNaN: true, noDefaultInfinity: true }).map((value) => value + 0),
  fc.constantFrom(Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY),
);
const name = fc.string({ minLength: 1, maxLength: 12 }).filter((text) => text !== '__proto__');
const result = fc.record({ value: fc.option(number), headroom: fc.option(number) });
const reference: fc.Arbitrary<Reference> = fc.record({
  format: fc.constant(1 as const),
  pawl: name,
  loop: fc.string(),
  reason: fc.string(),
  image: fc.option(fc.record({ sha256: fc.string(), compilers: fc.array(fc.string(), { maxLength: 3 }) })),
  plants: fc.dictionary(name, fc.nat(), { maxKeys: 3 }),
  seed: fc.nat(),
  coefficients: fc.dictionary(
    name,
    fc.record({
      at: fc.string(),
      type: fc.string(),
      unit: fc.option(fc.string()),
      format: fc.option(fc.string()),
      fractional_bits: fc.option(fc.nat(63)),
      shape: fc.array(fc.integer({ min: 1, max: 9 }), { maxLength: 2 }),
      values: fc.array(number, { minLength: 1, maxLength: 5 }),
      stored: fc.array(fc.string(), { minLength: 1, maxLength: 5 }),
    }),
    { maxKeys: 4 },
  ),
  parameters: fc.dictionary(
    name,
    fc.record({ nominal: number, low: number, high: number, unit: fc.string() }),
    {
      maxKeys: 3,
    },
  ),
  parts: fc.dictionary(name, fc.string(), { maxKeys: 3 }),
  law: fc.dictionary(name, fc.record({ size: fc.nat(), digest: fc.string() }), { maxKeys: 3 }),
  requirements: fc.dictionary(
    name,
    fc.record({
      measure: fc.string(),
      asked: fc.string(),
      limit: fc.oneof(
        fc.record({ at_most: number }),
        fc.record({ at_least: number }),
        fc.record({ between: fc.tuple(number, number) }),
      ),
      unit: fc.string(),
      holds_for: fc.oneof(
        fc.constantFrom('nominal' as const, 'all' as const),
        fc.double({ min: 0.1, max: 0.9, noNaN: true }),
      ),
      verdict: fc.constantFrom('met' as const, 'broken' as const, 'unjudged' as const),
      nominal: result,
      worst: result,
      plant: fc.dictionary(name, number, { maxKeys: 3 }),
    }),
    { maxKeys: 3 },
  ),
});
const small = fc.sample(reference, { numRuns: 1, seed: 3 })[0];

describe('a latched reference', () => {
  it('reads back as it was written, whatever names and numbers it holds', () => {
    fc.assert(
      fc.property(reference, (written) => {
        const read = readReference(referenceJson(written));
        expect(read).toEqual({ kind: 'reference', reference: written });
      }),
      { numRuns: 60 },
    );
  });

  it('has one value a line and sorted keys, so that a diff shows what changed', () => {
    const text = referenceJson({
      ...small,
      law: { b: { size: 2, digest: 'x' }, a: { size: 1, digest: 'y' } },
    });
    const keys = [...text.matchAll(/^ {2}"(\w+)":/gm)].map(([, key]) => key);
    expect(keys).toEqual([...keys].sort());
    expect(text).toMatch(/"law": \{\n {4}"a": \{\n {6}"digest": "y",\n {6}"size": 1\n {4}\},\n {4}"b"/);
    const other = referenceJson({
      ...small,
      law: { b: { size: 2, digest: 'x' }, a: { size: 3, digest: 'y' } },
    });
    const differing = text.split('\n').filter((line, at) => line !== other.split('\n')[at]);
    expect(differing).toEqual(['      "size": 1']);
  });

  it('gives the numbers back as a loop takes them: with their format where they have one', () => {
    const one = { at: 'a', type: 'float', unit: null, shape: [], stored: ['0x0'] };
    const values = latchedValues({
      ...small,
      coefficients: {
        gain: { ...one, format: 'float32', fractional_bits: null, values: [1.5] },
        scaled: { ...one, format: null, fractional_bits: null, values: [3] },
        taps: { ...one, format: 'Q2.14', fractional_bits: 14, values: [1, -1] },
      },
    });
    expect(Object.fromEntries(values)).toEqual({
      gain: { values: [1.5], format: 'float32', fractionalBits: undefined },
      scaled: [3],
      taps: { values: [1, -1], format: 'Q2.14', fractionalBits: 14 },
    });
  });

  it.each([
    ['', /^it is not JSON: /],
    ['{"format": 1', /^it is not JSON: /],
    ['null', /^at its top: /],
    ['{"format": 2}', /^it has format 2, and this version of pawl reads format 1$/],
    ['{"format": 1}', /^at \w+: /],
    [referenceJson(small).replace('"seed":', '"sead":'), /^at seed: |^at its top: /],
    [referenceJson({ ...small, seed: 0.5 }), /^at seed: /],
  ])('is refused where it is %j', (text, message) => {
    const read = readReference(text);
    expect(read.kind).toBe('fault');
    expect(read.kind === 'fault' && read.message).toMatch(message);
  });
});
