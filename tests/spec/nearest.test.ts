import fc from 'fast-check';
import { expect, test } from 'vitest';
import { nearestName, suggestion } from '../../src/spec/nearest.js';

const names = ['torque', 'speed', 'angle', 'inertia', 'drive_lag', 'kp', 'a', 'V'];

test.each([
  ['torqe', 'torque'],
  ['toruqe', 'torque'],
  ['Speed', 'speed'],
  ['driveLag', 'drive_lag'],
  ['drive-lag', 'drive_lag'],
  ['angel', 'angle'],
  ['ki', 'kp'],
  ['v', 'V'],
  ['b', undefined],
  ['current', undefined],
  ['', undefined],
])('"%s" is near to %s', (mistyped, expected) => {
  expect(nearestName(mistyped, names)).toBe(expected);
});

test('a name itself is nearest to itself', () => {
  fc.assert(
    fc.property(fc.constantFrom(...names), (name) => {
      expect(nearestName(name, names)).toBe(name);
    }),
  );
});

test('one wrong letter in a name of four or more is always forgiven, if no other name is as near', () => {
  const letter = fc.constantFrom(...'abcdefghijklmnopqrstuvwxyz');
  fc.assert(
    fc.property(
      fc.constantFrom('torque', 'speed', 'angle', 'inertia'),
      fc.nat(3),
      letter,
      (name, at, other) => {
        expect(nearestName(name.slice(0, at) + other + name.slice(at + 1), names)).toBe(name);
      },
    ),
  );
});

test('junk is not compared, however long', () => {
  expect(nearestName('x'.repeat(100_000), ['y'.repeat(100_000)])).toBeUndefined();
});

test('where nothing is near a short list is shown, and a long one is not', () => {
  expect(suggestion('torqe', names)).toBe('; did you mean `torque`?');
  expect(suggestion('current', ['speed', 'angle'])).toBe('; valid here: speed, angle');
  expect(suggestion('current', [])).toBe('');
  expect(
    suggestion(
      'zzzzzzz',
      Array.from({ length: 20 }, (_, at) => `n${at}`),
    ),
  ).toBe('');
});
