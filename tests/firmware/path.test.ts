import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { nearestNames } from '../../src/firmware/nearest.js';
import { parsePath } from '../../src/firmware/path.js';

/** A path says which variable, and the way into it; anything else is refused where it stops to make sense. */
describe('paths', () => {
  test.each([
    ['kp', { file: undefined, scopes: [], name: 'kp', steps: [] }],
    [
      'azimuth.gains.kp',
      {
        file: undefined,
        scopes: [],
        name: 'azimuth',
        steps: [
          { kind: 'member', name: 'gains' },
          { kind: 'member', name: 'kp' },
        ],
      },
    ],
    [
      'grid[2][0x10]',
      {
        file: undefined,
        scopes: [],
        name: 'grid',
        steps: [
          { kind: 'index', index: 2 },
          { kind: 'index', index: 16 },
        ],
      },
    ],
    ['drive.c:limit', { file: 'drive.c', scopes: [], name: 'limit', steps: [] }],
    ['src/drive.c:ns::limit', { file: 'src/drive.c', scopes: ['ns'], name: 'limit', steps: [] }],
    ['ns::Type::member', { file: undefined, scopes: ['ns', 'Type'], name: 'member', steps: [] }],
    ['::global', { file: undefined, scopes: [], name: 'global', steps: [] }],
    [
      'Filter<a::b, 3>::taps[1]',
      { file: undefined, scopes: ['Filter<a::b, 3>'], name: 'taps', steps: [{ kind: 'index', index: 1 }] },
    ],
    ['active->kp', { file: undefined, scopes: [], name: 'active', steps: [{ kind: 'follow', name: 'kp' }] }],
    ['taps.0', { file: undefined, scopes: [], name: 'taps.0', steps: [] }],
    [
      'a . b [ 1 ]',
      {
        file: undefined,
        scopes: [],
        name: 'a',
        steps: [
          { kind: 'member', name: 'b' },
          { kind: 'index', index: 1 },
        ],
      },
    ],
  ])('%s', (text, expected) => {
    expect(parsePath(text)).toMatchObject(expected);
  });

  test.each(['', '.kp', 'a.', 'a..b', 'a[', 'a[x]', 'a[-1]', 'a->', 'a b', 'a.b!', '::', 'a::', 'file.c:'])(
    '%j is refused',
    (text) => {
      expect(() => parsePath(text)).toThrow(/is no path to a coefficient/);
    },
  );

  test('the root is the text before the first step', () => {
    expect(parsePath('drive.c:ns::axis.gain[2]').root).toBe('drive.c:ns::axis');
  });

  test('a path made of names and indices is taken apart into the same', () => {
    const name = fc.stringMatching(/^[A-Za-z_][A-Za-z0-9_]{0,6}$/);
    const step = fc.oneof(
      name.map((n) => ({ kind: 'member' as const, name: n })),
      fc.nat(9999).map((index) => ({ kind: 'index' as const, index })),
    );
    fc.assert(
      fc.property(
        fc.array(name, { maxLength: 3 }),
        name,
        fc.array(step, { maxLength: 6 }),
        (scopes, root, steps) => {
          const text =
            [...scopes, root].join('::') +
            steps.map((s) => (s.kind === 'index' ? `[${s.index}]` : `.${s.name}`)).join('');
          expect(parsePath(text)).toMatchObject({ scopes, name: root, steps });
        },
      ),
    );
  });

  test('no text makes it fail in another way', () => {
    fc.assert(
      fc.property(fc.string({ maxLength: 30 }), (text) => {
        try {
          parsePath(text);
        } catch (error) {
          expect((error as Error).name).toBe('FirmwareError');
        }
      }),
    );
  });
});

describe('nearest names', () => {
  test('few letters apart, nearest first', () => {
    expect(nearestNames('azimut', ['elevation', 'azimuth_notch', 'azimuth', 'az'])).toEqual([
      'azimuth',
      'azimuth_notch',
    ]);
    expect(nearestNames('kq', ['kp', 'ki', 'kd', 'rate_corner'])).toEqual(['kd', 'ki', 'kp']);
  });

  test('never more than three, each once, and none that is far', () => {
    expect(nearestNames('gain', ['gain1', 'gain2', 'gain3', 'gain4', 'gain1'])).toHaveLength(3);
    expect(nearestNames('gain', ['elevation_period'])).toEqual([]);
  });
});
