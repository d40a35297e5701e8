import fc from 'fast-check';
import { expect, it } from 'vitest';
import { exactJson, fromExactJson } from '../../src/cli/exact_json.js';

it('gives every number back to the last bit, also those that JSON cannot hold', () => {
  const numbers = fc.oneof(
    fc.double(),
    fc.constantFrom(-0, Number.NaN, Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY),
  );
  fc.assert(
    fc.property(
      fc.array(fc.record({ value: numbers, list: fc.array(numbers), text: fc.string() })),
      (value) => {
        // toEqual tells −0 from 0 and takes not-a-number for itself.
        expect(fromExactJson(exactJson(value))).toEqual(value);
      },
    ),
  );
});

it('refuses what is no JSON', () => {
  expect(() => fromExactJson('{')).toThrow(SyntaxError);
});
