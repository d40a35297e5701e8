import fc from 'fast-check';
import { describe, expect, it, test } from 'vitest';
import { openedAt } from '../../src/spec/opened_at.js';
import { errorsOf, specOf } from './loading.js';
import { smallSpec } from './small_spec.js';

/** Two axes with a sensor and an actuator each, in different units; the requirement stands in line 34, its list at column 55 for `gain_margin`. */
function axes(at: string, measure = 'gain_margin', limits = { force: '', current: '', seen_y: '' }): string {
  const range = (text: string): string => (text === '' ? '' : `, range: ${text}`);
  const { force, current, seen_y } = limits;
  return smallSpec({
    inputs: 'goal: { unit: m }',
    plant: 'y: { integral: force*(1 m/(N*s)), unit: m }\nz: { integral: current*(1 V/(A*s)), unit: V }',
    sensors: `seen_y: { of: y, unit: mm${range(seen_y)} }\nseen_z: { of: z, unit: V }`,
    signals: [
      'push: { value: k*(1 N/mm)*(goal - seen_y), unit: N }',
      'drive: { value: (-1 A/V)*seen_z, unit: A }',
    ].join('\n'),
    actuators: [
      `force: { of: push, unit: N${range(force)} }`,
      `current: { of: drive, unit: A${range(current)} }`,
    ].join('\n'),
    inputsOfStep: 'goal: { step: 1 m, at: 0.1 s }',
    requirements: `- { name: R, measure: ${measure}, at_least: 2, at: ${at} }`,
  });
}

/** With the line and column of each. */
const faults = (...spec: Parameters<typeof axes>): string[] =>
  errorsOf(axes(...spec)).map((line) => line.replace('a.pawl.yaml:', ''));

describe('`at` with a list', () => {
  it('names the signals at which the loop is opened at once, in the order written', () => {
    const [requirement] = specOf(axes('[force, current]')).requirements;
    expect(requirement).toMatchObject({ signals: {}, atSeveral: ['force', 'current'] });
    expect(openedAt(requirement)).toEqual(['force', 'current']);
  });

  it('of one signal means that signal', () => {
    const [alone] = specOf(axes('force')).requirements;
    const [listed] = specOf(axes('[force]')).requirements;
    expect(listed).toEqual(alone);
    expect(openedAt(listed)).toEqual(['force']);
  });

  it('may stand on lines of its own, and holds the one sensor of a plant signal', () => {
    const [requirement] = specOf(
      axes('\n').replace(
        /- \{ name: R.*\n.*\}/,
        '- name: R\n    measure: gain_margin\n    at_least: 2\n    at:\n      - y\n      - drive',
      ),
    ).requirements;
    expect(openedAt(requirement)).toEqual(['seen_y', 'drive']);
  });

  it('is none where the measure is not of the loop', () => {
    const spec = smallSpec();
    expect(openedAt(specOf(spec).requirements[0])).toEqual([]);
  });

  it('may be of signals of any unit, or of comparable size where all have a range', () => {
    expect(faults('[force, current]')).toEqual([]);
    expect(faults('[push, seen_y, drive]')).toEqual([]);
    const limits = { force: '[-5 N, 5 N]', current: '[-2 A, 2 A]', seen_y: '[0 m, 1 m]' };
    expect(faults('[force, current]', 'modulus_margin', limits)).toEqual([]);
    expect(faults('[current, y, force]', 'modulus_margin', limits)).toEqual([]);
    expect(faults('[force, push]', 'modulus_margin')).toEqual([]);
  });
});

describe('a list that is wrong', () => {
  test.each<[name: string, at: string, measure: string, expected: string[]]>([
    [
      'for a measure of one signal',
      '[force, current]',
      'phase_margin',
      [
        '34:56: `phase_margin` opens the loop at one signal, but `at` lists 2; name one of them. Several at once can have gain_margin, modulus_margin',
      ],
    ],
    [
      'with a name twice',
      '[force, current, force]',
      'gain_margin',
      ['34:72: `force` stands in `at` already; name it once'],
    ],
    [
      'with a signal and the sensor that reads it',
      '[seen_y, y]',
      'gain_margin',
      ['34:64: `y` means the sensor `seen_y`, which stands in `at` already; name it once'],
    ],
    [
      'with a name that is none',
      '[force, curent]',
      'gain_margin',
      ['34:63: unknown signal `curent`; did you mean `current`?'],
    ],
    [
      'with an input',
      '[force, goal]',
      'gain_margin',
      [
        '34:63: `goal` is an input, but `at` names a sensor, controller signal or actuator; valid here: seen_y, seen_z, push, drive, force, current',
      ],
    ],
    [
      'without names',
      '[]',
      'gain_margin',
      [
        '34:55: `at` is an empty list; expected where the loop is opened: a signal, or a list such as [duty_pan, duty_tilt]',
      ],
    ],
    [
      'in a list',
      '[[force], current]',
      'gain_margin',
      ['34:56: item 1 is a list; expected the name of a signal'],
    ],
    [
      'that is a mapping',
      '{ force: current }',
      'gain_margin',
      [
        '34:55: `at` is a mapping; expected where the loop is opened: a signal, or a list such as [duty_pan, duty_tilt]',
      ],
    ],
    [
      'of signals that cannot be compared',
      '[push, force, current]',
      'modulus_margin',
      [
        '34:72: `modulus_margin` compares signals in size, but `current` is in A and `push` is in N; give `push`, `force` and `current` a `range:`, so that every signal counts as a share of its own, or open the loop at signals of one dimension',
      ],
    ],
  ])('%s', (_, at, measure, expected) => {
    expect(faults(at, measure)).toEqual(expected);
  });

  it('tells which signals have no range', () => {
    const limits = { force: '[-5 N, 5 N]', current: '', seen_y: '' };
    expect(faults('[force, current]', 'modulus_margin', limits)).toEqual([
      '34:66: `modulus_margin` compares signals in size, but `current` is in A and `force` is in N; give `current` a `range:`, so that every signal counts as a share of its own, or open the loop at signals of one dimension',
    ]);
  });
});

it('is read alike in any order, but for the order itself', () => {
  const names = ['force', 'current', 'push', 'drive', 'seen_y', 'seen_z'];
  fc.assert(
    fc.property(fc.shuffledSubarray(names, { minLength: 2 }), (list) => {
      const [{ atSeveral, ...rest }] = specOf(axes(`[${list.join(', ')}]`)).requirements;
      expect(atSeveral).toEqual(list);
      const [{ atSeveral: _, ...sorted }] = specOf(axes(`[${list.toSorted().join(', ')}]`)).requirements;
      expect(rest).toEqual(sorted);
    }),
    { numRuns: 20 },
  );
});
