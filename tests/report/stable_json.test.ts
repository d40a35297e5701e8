import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { type Json, jsonNumber, stableJson } from '../../src/report/stable_json.js';
import { harmful } from './hostile.js';

describe('stableJson', () => {
  it('is read back as the same value', () => {
    fc.assert(
      fc.property(fc.jsonValue(), (value) => {
        // JSON has no negative zero in this project's files.
        const plain = JSON.parse(JSON.stringify(value, (_, one) => (one === 0 ? 0 : one)));
        expect(JSON.parse(stableJson(plain as Json))).toEqual(plain);
      }),
      { seed: 81, numRuns: 300 },
    );
  });

  it('does not depend on the order in which keys were set', () => {
    const entries = fc.uniqueArray(fc.tuple(fc.string(), fc.integer()), { selector: ([key]) => key });
    fc.assert(
      fc.property(entries, (pairs) => {
        const backwards = Object.fromEntries([...pairs].reverse());
        expect(stableJson(Object.fromEntries(pairs))).toBe(stableJson(backwards));
      }),
      { seed: 82, numRuns: 200 },
    );
  });

  it('keeps a key that every object has by nature, and the order of lists', () => {
    expect(stableJson(Object.fromEntries([['__proto__', 1]]))).toBe('{\n  "__proto__": 1\n}\n');
    expect(stableJson([3, 1, 2])).toBe('[\n  3,\n  1,\n  2\n]\n');
  });

  it('escapes what acts unseen, so that an editor shows what there is', () => {
    expect(stableJson('a\u202eb\u009b')).toBe('"a\\u202eb\\u009b"\n');
    fc.assert(
      fc.property(fc.string({ unit: 'binary' }), (text) => !harmful.test(stableJson(text))),
      { seed: 83, numRuns: 500 },
    );
  });
});

describe('jsonNumber', () => {
  it('gives what JSON has no number for as a word', () => {
    expect(jsonNumber(Number.POSITIVE_INFINITY)).toBe('infinite');
    expect(jsonNumber(Number.NEGATIVE_INFINITY)).toBe('minus infinite');
    expect(jsonNumber(Number.NaN)).toBe('not a number');
    expect(Object.is(jsonNumber(-0), 0)).toBe(true);
    expect(jsonNumber(0.1)).toBe(0.1);
  });
});
