import fc from 'fast-check';
import { expect, test } from 'vitest';
import { formatSpecError, loadSpec, type Spec } from '../../src/spec/index.js';
import { heliostat } from './heliostat_example.js';
import { errorsOf, heliostatWith, specOf } from './loading.js';
import { vocabulary } from './vocabulary.js';

/** A spec without its places and without the texts of its units: what it means. */
function meaning(spec: Spec): unknown {
  return JSON.parse(
    JSON.stringify(spec, (key, value) =>
      /place$/i.test(key) || key === 'text' || key === 'scale' ? undefined : value,
    ),
  );
}

/** The same quantity in several units; what is written differs by powers of ten only. */
const alternatives: [from: string, to: string[]][] = [
  ['38 kg*m^2', ['38000 g*m^2', '0.038 t*m^2', '38000 g*mm*km', '38e6 kg*mm^2']],
  ['10 N*m*s/rad', ['10000 mN*m*s', '10 J*s', '0.01 kN*m*s/rad', '1e7 uN*m*s']],
  ['40 ms', ['0.04 s', '40000 us', '4e-2 s', '4e7 ns']],
  ['0.5 mrad/s', ['0.0005 rad/s', '5e-4 1/s', '500 urad/s', '0.5 rad/ks']],
  ['8 ms', ['0.008 s', '8000 us']],
  ['0.1 mrad', ['100 urad', '0.0001 rad', '1e-4']],
  ['400 us', ['0.4 ms', '0.0004 s', '400000 ns']],
  ['50 mrad', ['0.05 rad', '0.05', '5 %']],
  ['12 N*m', ['12 J', '0.012 kN*m', '12000 N*mm', '12 W*s']],
  ['2.5 s', ['2500 ms', '2.5e6 us']],
  ['30 mrad', ['0.03', '3 %', '30000 urad']],
  ['0.5, holds_for', ['50 %, holds_for', '500000 ppm, holds_for']],
];

test('the unit in which a quantity is written changes nothing, to the last bit', () => {
  const expected = meaning(specOf(heliostat));
  const choice = alternatives.map(([from, to]) =>
    fc.constantFrom(from, ...to).map((one): [string, string] => [from, one]),
  );
  fc.assert(
    fc.property(fc.tuple(...choice), (changes) => {
      expect(meaning(specOf(heliostatWith(...changes)))).toEqual(expected);
    }),
    { numRuns: 40 },
  );
});

/** The sections of the example, each from its key to the next. */
function sections(): string[] {
  return heliostat.split(/^(?=[a-z]+:)/m);
}

test('the order of sections changes nothing', () => {
  const expected = meaning(specOf(heliostat));
  const all = sections();
  fc.assert(
    fc.property(fc.shuffledSubarray(all, { minLength: all.length }), (shuffled) => {
      expect(meaning(specOf(shuffled.join('')))).toEqual(expected);
    }),
    { numRuns: 20 },
  );
});

test('a spec without one of its sections loads or says what is missing, and never throws', () => {
  for (const left of sections()) {
    const text = sections()
      .filter((section) => section !== left)
      .join('');
    const optional = /^(perturbation|merge):/.test(left);
    expect(errorsOf(text).length > 0, left).toBe(!optional);
  }
});

test('text that is no spec gives errors inside the text, and never throws', () => {
  fc.assert(
    fc.property(fc.oneof(fc.string({ maxLength: 200 }), fc.json()), (text) => {
      const loaded = loadSpec(text, 'a.pawl.yaml', vocabulary);
      expect(loaded.kind).toBe('errors');
      if (loaded.kind === 'spec') return;
      const lines = text.split(/\r\n|\n|\r/).length;
      expect(loaded.errors.length).toBeGreaterThan(0);
      for (const { place } of loaded.errors) {
        expect(place.line).toBeGreaterThanOrEqual(1);
        expect(place.line).toBeLessThanOrEqual(lines + 1);
        expect(place.column).toBeGreaterThanOrEqual(1);
      }
    }),
    { numRuns: 300 },
  );
});

test('a damaged spec is refused or read, and never throws', () => {
  const damage = fc.tuple(
    fc.nat(heliostat.length - 1),
    fc.nat(12),
    fc.oneof(
      fc.constantFrom(
        '',
        '{',
        '}',
        '[',
        ']',
        ':',
        ' ',
        '\n',
        '"',
        "'",
        '-',
        '*',
        '(',
        ')',
        '%',
        '#',
        '0',
        '\t',
      ),
      fc.string({ maxLength: 3 }),
    ),
  );
  fc.assert(
    fc.property(damage, ([start, length, put]) => {
      const text = heliostat.slice(0, start) + put + heliostat.slice(start + length);
      const errors = errorsOf(text);
      expect(new Set(errors).size).toBe(errors.length);
    }),
    { numRuns: 300 },
  );
});

test('one damaged character gives few lines, since nothing is said that follows from another', () => {
  const counts: number[] = [];
  for (let at = 0; at < heliostat.length; at += 37) {
    counts.push(errorsOf(`${heliostat.slice(0, at)}~${heliostat.slice(at + 1)}`).length);
  }
  expect(Math.max(...counts)).toBeLessThanOrEqual(8);
  const mean = counts.reduce((sum, count) => sum + count, 0) / counts.length;
  expect(mean).toBeLessThan(1.5);
});

test('errors are sorted by place and each place is named once', () => {
  const text = heliostatWith(
    ['unit: rad/s }', 'unit: rod/s }'],
    ['at_most: 25 %', 'at_most: 25 V'],
    ['spread: 20 %', 'spread: 20 V'],
  );
  const loaded = loadSpec(text, 'a.pawl.yaml', vocabulary);
  const lines = loaded.kind === 'errors' ? loaded.errors.map((error) => error.place.line) : [];
  expect(lines).toEqual([16, 28, 57]);
});

test('deep and long texts are refused in bounded time', () => {
  for (const text of [
    '['.repeat(20_000),
    '{a: '.repeat(5_000),
    '- '.repeat(20_000),
    `a: ${'x'.repeat(3_000_000)}`,
    `pawl: 1\nloop: &a [${'*a, '.repeat(10_000)}]`,
  ]) {
    expect(errorsOf(text).length).toBeGreaterThan(0);
  }
});

test('names that every script object has are no names, and do no harm', () => {
  for (const name of ['constructor', 'toString', 'hasOwnProperty', 'valueOf', '__proto__', 'prototype']) {
    const text = heliostatWith([
      '  gust:   { unit: N*m }',
      `  gust:   { unit: N*m }\n  ${name}: { unit: m }`,
    ]);
    expect(errorsOf(text).join('\n'), name).toContain(`\`${name}\``);
    expect(errorsOf(heliostatWith(['gust: { pulse', `${name}: { pulse`])).length, name).toBeGreaterThan(0);
  }
});

test('an error is one line with file, line, column and message', () => {
  const place = { file: 'loops/a.pawl.yaml', line: 3, column: 7 };
  expect(formatSpecError({ place, message: 'so it is' })).toBe('loops/a.pawl.yaml:3:7: so it is');
});
