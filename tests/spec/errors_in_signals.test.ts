import { expect, test } from 'vitest';
import { errorsOf } from './loading.js';
import { type Pieces, smallSpec } from './small_spec.js';

/** What is wrong, the piece of the spec that has it, and every line that is said: nothing more and nothing less. */
const cases: [title: string, pieces: Pieces, errors: string[]][] = [
  [
    'a gain in a wrong unit, which says where its unit comes from',
    { plant: 'out: { lag: 1 s, of: drive, gain: 3 A, unit: V }' },
    [
      '14:37: `gain` must be a plain number, but this is A; it is in the unit of the signal over that of `of`: V over V',
    ],
  ],
  [
    'signs that make no sense in the plant',
    { plant: 'out: { lag: -1 s, of: drive, slew: -2 V/s, unit: V }' },
    ['14:15: `lag` must be 0 or more, but is -1 s', '14:38: `slew` must be above 0, but is -2 V/s'],
  ],
  [
    'signs that make no sense in a sensor',
    {
      sensors:
        'seen: { of: out, noise: -3 V, quantum: -1 V, filter: -3 ms, dead_time: -1 ms, stuck: { from: 2 s, to: 1 s }, unit: V }',
    },
    [
      '16:27: `noise` must be 0 or more, but is -3 V',
      '16:42: `quantum` must be 0 or more, but is -1 V',
      '16:56: `filter` must be 0 or more, but is -3 ms',
      '16:74: `dead_time` must be 0 or more, but is -1 ms',
      '16:88: `stuck` ends before it begins: `to` must be later than `from`',
    ],
  ],
  [
    'signs that make no sense in an actuator',
    {
      actuators:
        'drive: { of: command, resolution: -1 V, dead_band: -1 V, slew: 0 V/s, effect: -50 %, unit: V }',
    },
    [
      '23:37: `resolution` must be 0 or more, but is -1 V',
      '23:54: `dead_band` must be 0 or more, but is -1 V',
      '23:66: `slew` must be above 0, but is 0 V/s',
      '23:81: `effect` must be 0 or more, but is -50 %',
    ],
  ],
  [
    'no defining key',
    { signals: 'command: { unit: V }' },
    ['21:7: signal `command` has no defining key; expected one of value, pid, biquads'],
  ],
  [
    'two defining keys',
    { signals: 'command: { value: k*(goal - seen), biquads: k, of: seen, unit: V }' },
    ['21:7: signal `command` is defined by `value` and `biquads`; expected exactly one'],
  ],
  [
    'a block of the other room',
    { plant: 'out: { pid: { kp: 1 }, of: drive, unit: V }' },
    ['14:10: `pid` cannot be in the plant: it is a block of a controller'],
  ],
  [
    'a mistyped block',
    { signals: 'command: { valu: k*(goal - seen), unit: V }' },
    ['21:18: unknown key `valu` in `command`; did you mean `value`?'],
  ],
  [
    'a block without the input it takes',
    { signals: 'command: { biquads: k, unit: V }' },
    ['21:7: `biquads` needs `of:`, the signal that it takes'],
  ],
  [
    'an input that the block does not take',
    { signals: 'command: { value: k*(goal - seen), of: seen, unit: V }' },
    ['21:42: `value` takes no `of:`; what it depends on stands in its expression'],
  ],
  [
    'a gain that the block does not take',
    { signals: 'command: { value: k*(goal - seen), gain: 2, unit: V }' },
    ['21:42: `value` takes no `gain:` beside it'],
  ],
  [
    'a coefficient slot with an unknown name',
    { signals: 'command: { biquads: q, of: goal - seen, unit: V }' },
    ['21:27: `biquads` must be the name of a coefficient, but is `q`; valid here: k'],
  ],
  [
    'a coefficient slot with an input',
    { signals: 'command: { biquads: goal, of: k*(goal - seen), unit: V }' },
    ['21:27: `biquads` must be the name of a coefficient, but is `goal`; valid here: k'],
  ],
  [
    'anti-windup without a range',
    { signals: 'command: { pid: { kp: k, anti_windup: hold_integral }, of: goal - seen, unit: V }' },
    ['21:32: `anti_windup` without a `range:` of the signal has nothing to act on'],
  ],
  [
    'a setting with an unknown word',
    { signals: 'command: { pid: { kp: k, sum_by: backwards }, of: goal - seen, unit: V }' },
    ['21:40: `sum_by` cannot be `backwards`; did you mean `backward`?'],
  ],
  [
    'a missing setting',
    { signals: 'command: { pid: { ki: k }, of: goal - seen, unit: V }' },
    ['21:18: `kp` is missing; expected for tests'],
  ],
  [
    'a mistyped setting',
    { signals: 'command: { pid: { kp: k, kii: k }, of: goal - seen, unit: V }' },
    ['21:32: unknown key `kii` in `pid`; did you mean `ki`?'],
  ],
  [
    'one value where a mapping of settings belongs',
    { signals: 'command: { pid: k, of: goal - seen, unit: V }' },
    ['21:23: `pid` is `k`; expected a mapping of its settings, such as { kp: … }'],
  ],
  [
    'an empty setting',
    { signals: 'command: { value: , unit: V }' },
    ['21:18: `value` is empty; expected for tests'],
  ],
  [
    'a range the wrong way round',
    { signals: 'command: { value: k*(goal - seen), unit: V, range: [1 V, -1 V] }' },
    ['21:58: the lower bound comes first and must be below the upper one'],
  ],
  [
    'a range of one bound',
    { signals: 'command: { value: k*(goal - seen), unit: V, range: [-1 V] }' },
    ['21:58: `range` is a list; expected two bounds in brackets, such as [-1, 1]'],
  ],
  [
    'a range that is no list',
    { signals: 'command: { value: k*(goal - seen), unit: V, range: -1 V }' },
    ['21:58: `range` is `-1 V`; expected two bounds in brackets, such as [-1, 1]'],
  ],
  [
    'a range in the wrong unit',
    { signals: 'command: { value: k*(goal - seen), unit: V, range: [-1 V, 1 A] }' },
    ['21:65: `range` must be in V, but this is A'],
  ],
  [
    'start and slew in the wrong unit',
    { signals: 'command: { value: k*(goal - seen), unit: V, start: 2 A, slew: 3 V }' },
    ['21:58: `start` must be in V, but this is A', '21:69: `slew` must be in V/s, but this is V'],
  ],
  [
    'a signal in dB',
    { signals: 'command: { value: k*(goal - seen), unit: dB }' },
    ['21:48: a signal cannot be in dB: only a number can, as in 6 dB; use a plain ratio'],
  ],
  [
    'plant signals that need each other at once',
    { plant: 'out: { value: out2 + drive, unit: V }\nout2: { value: -out, unit: V }' },
    [
      '14:3: `out` ← `out2` ← `out`: each needs the next at the same time: nothing between them, such as an integral or a lag, holds a value',
    ],
  ],
  [
    'a range that needs its own signal',
    { plant: 'out: { lag: 10 ms, of: drive, unit: V, range: [-1 V, lim] }\nlim: { value: 2*out, unit: V }' },
    [
      '14:3: `out` ← `lim` ← `out`: each needs the next at the same time: nothing between them, such as an integral or a lag, holds a value',
    ],
  ],
  [
    'controller signals that need each other at one instant',
    { signals: 'command: { value: k*(goal - seen) + other, unit: V }\nother: { value: command/2, unit: V }' },
    [
      '21:7: `command` ← `other` ← `command`: each needs the next at the same sampling instant: let one of them use before(…), or give a controller a delay',
    ],
  ],
  [
    'a signal that needs itself',
    { signals: 'command: { value: k*(goal - seen) + command, unit: V }' },
    [
      '21:7: `command` ← `command`: each needs the next at the same sampling instant: let one of them use before(…), or give a controller a delay',
    ],
  ],
  ['a period of zero', { settings: 'every: 0 s' }, ['19:12: a sampling period must be above 0']],
  ['a negative period', { settings: 'every: -1 ms' }, ['19:12: a sampling period must be above 0']],
  [
    'a period that is a length',
    { settings: 'every: 8 m' },
    ['19:12: `every` must be a time, or a rate in Hz, but this is m; was `ms` meant?'],
  ],
  [
    'a delay that is a frequency, a phase that is measured',
    { settings: 'every: 2 kHz\ndelay: 3 Hz\nphase: seen' },
    [
      '20:12: `delay` must be in s, but this is Hz',
      '21:12: `seen` is a sensor; the timing of a controller sees coefficients, parameters and constants',
    ],
  ],
  [
    'a mistyped period',
    { settings: 'evry: 2 kHz' },
    ['19:5: unknown key `evry` in `law`; did you mean `every`?'],
  ],
  [
    'no period',
    { settings: 'delay: 2 ms' },
    ['18:3: `every` is missing; expected the sampling period, such as 1 ms or 1 kHz'],
  ],
  [
    'an arithmetic that is not known',
    { settings: 'every: 1 ms\narithmetic: float16' },
    ['20:17: unknown arithmetic `float16`; did you mean `float64`?'],
  ],
  [
    'a controller that hears nothing',
    {
      signals: 'command: { value: k*(1 V), unit: V }',
      sensors: '',
      inputsOfStep: 'goal: { step: 1 V, at: 0.1 s }',
    },
    [
      '18:3: controller `law` never gets a signal: none of its signals depends on a sensor, an input or another controller',
    ],
  ],
  [
    'a sensor in another unit than what it measures',
    {
      sensors: 'seen: { of: out, unit: A }',
      signals: 'command: { value: k*goal + 0*seen/(1 ohm^-1), unit: V }',
    },
    ['16:15: what sensor `seen` measures (without a gain) must be in A, but this is V'],
  ],
  [
    'a sensor whose settings are in wrong units',
    {
      sensors:
        'seen: { of: out, gain: 2 A, offset: 1 A, noise: 3 A, quantum: 1 A, filter: 3 V, range: [0, 3 A], unit: V }',
    },
    [
      '16:26: `gain` must be a plain number, but this is A',
      '16:39: `offset` must be in V, but this is A',
      '16:51: `noise` must be in V, but this is A',
      '16:65: `quantum` must be in V, but this is A',
      '16:78: `filter` must be a time, or a corner in Hz or rad/s, but this is V',
      '16:94: `range` must be in V, but this is A',
    ],
  ],
  [
    'an actuator that takes a sensor',
    { actuators: 'drive: { of: seen, unit: V }' },
    ['23:16: an actuator takes a controller signal, but `seen` is a sensor; valid here: command'],
  ],
  [
    'an actuator that takes nothing known',
    { actuators: 'drive: { of: comand, unit: V }' },
    ['23:16: an actuator takes a controller signal, but `comand` is not defined; did you mean `command`?'],
  ],
  [
    'an actuator in another unit than what it takes',
    {
      actuators: 'drive: { of: command, unit: A }',
      plant: 'out: { lag: 10 ms, of: drive, gain: 1 V/A, unit: V }',
    },
    ['23:16: what actuator `drive` takes must be in A, but this is V'],
  ],
  [
    'an actuator whose bounds lack their unit',
    { actuators: 'drive: { of: command, unit: V, range: [-2, 2], resolution: 1 }' },
    [
      '23:42: `range` must be in V, but this is a plain number',
      '23:46: `range` must be in V, but this is a plain number',
      '23:62: `resolution` must be in V, but this is a plain number',
    ],
  ],
];

test.each(cases)('signals that are defined wrongly: %s', (_, pieces, errors) => {
  expect(errorsOf(smallSpec(pieces))).toEqual(errors.map((error) => `a.pawl.yaml:${error}`));
});
