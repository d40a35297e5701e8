import { expect, test } from 'vitest';
import { errorsOf } from './loading.js';
import { type Pieces, smallSpec } from './small_spec.js';

/** What is wrong, the piece of the spec that has it, and every line that is said: nothing more and nothing less. */
const cases: [title: string, pieces: Pieces, errors: string[]][] = [
  [
    'a spread of nothing',
    {
      parameters: 'gain: { nominal: 0 V, spread: 20 % }',
      plant: 'out: { lag: 10 ms, of: drive + gain, unit: V }',
    },
    ['10:33: a spread in % of a nominal 0 is nothing; give from and to'],
  ],
  [
    'a negative spread',
    {
      parameters: 'gain: { nominal: 1 V, spread: -20 % }',
      plant: 'out: { lag: 10 ms, of: drive + gain, unit: V }',
    },
    ['10:33: a spread is a size and cannot be negative'],
  ],
  [
    'a spread in another unit',
    {
      parameters: 'gain: { nominal: 1 V, spread: 2 A }',
      plant: 'out: { lag: 10 ms, of: drive + gain, unit: V }',
    },
    ['10:33: a spread is a share in %, or in V like the nominal value, but this is A'],
  ],
  [
    'a spread and a bound',
    {
      parameters: 'gain: { nominal: 1 V, spread: 2 %, to: 3 V }',
      plant: 'out: { lag: 10 ms, of: drive + gain, unit: V }',
    },
    [
      '10:3: parameter `gain` has `spread` and `to`; expected either spread, or from and to (a fixed quantity belongs in constants)',
    ],
  ],
  [
    'one bound',
    {
      parameters: 'gain: { nominal: 1 V, to: 3 V }',
      plant: 'out: { lag: 10 ms, of: drive + gain, unit: V }',
    },
    [
      '10:3: parameter `gain` has `to`; expected either spread, or from and to (a fixed quantity belongs in constants)',
    ],
  ],
  [
    'no bounds',
    { parameters: 'gain: { nominal: 1 V }', plant: 'out: { lag: 10 ms, of: drive + gain, unit: V }' },
    [
      '10:3: parameter `gain` has no bounds; expected either spread, or from and to (a fixed quantity belongs in constants)',
    ],
  ],
  [
    'a bound in another unit',
    {
      parameters: 'gain: { nominal: 1 V, from: 2 A, to: 3 V }',
      plant: 'out: { lag: 10 ms, of: drive + gain, unit: V }',
    },
    ['10:31: `from` must be in V, but this is A'],
  ],
  [
    'bounds the wrong way round',
    {
      parameters: 'gain: { nominal: 2 V, from: 3 V, to: 1 V }',
      plant: 'out: { lag: 10 ms, of: drive + gain, unit: V }',
    },
    ['10:31: the bounds of `gain` are the wrong way round; expected from ≤ nominal ≤ to'],
  ],
  [
    'bounds beside the nominal value',
    {
      parameters: 'gain: { nominal: 1 V, from: 2 V, to: 3 V }',
      plant: 'out: { lag: 10 ms, of: drive + gain, unit: V }',
    },
    ['10:31: the bounds of `gain` do not contain the nominal value; expected from ≤ nominal ≤ to'],
  ],
  [
    'a mistyped spread',
    {
      parameters: 'gain: { nominal: 1 V, spred: 3 % }',
      plant: 'out: { lag: 10 ms, of: drive + gain, unit: V }',
    },
    ['10:25: unknown key `spred` in `gain`; did you mean `spread`?'],
  ],
  [
    'a parameter without a mapping',
    { parameters: 'gain: 3 V', plant: 'out: { lag: 10 ms, of: drive + gain, unit: V }' },
    ['10:9: `gain` is `3 V`; expected { nominal: …, spread: … } or { nominal: …, from: …, to: … }'],
  ],
  [
    'a name defined twice',
    { parameters: 'k: { nominal: 1 V, spread: 10 % }' },
    ['8:5: the name `k` is already taken by the parameter at line 10; every name is defined once'],
  ],
  [
    'a key that stands twice',
    { inputs: 'goal: { unit: V }\ngoal: { unit: A }' },
    ['13:3: the key `goal` stands here a second time; each key stands once'],
  ],
  [
    'the name of a function',
    {
      inputs: 'goal: { unit: V }\nsin: { unit: V }',
      plant: 'out: { lag: 10 ms, of: drive + goal, unit: V }',
    },
    ['13:3: `sin` is the name of a function and cannot be given to anything else'],
  ],
  [
    'a reserved word',
    { inputs: 'goal: { unit: V }\nbefore: { unit: V }' },
    ['13:3: `before` is a reserved word and cannot be given to anything else'],
  ],
  [
    'what is no name',
    { parameters: '2gain: { nominal: 1 V, spread: 10 % }' },
    ['10:3: `2gain` cannot be a name; a name is a letter followed by letters, digits and _'],
  ],
  [
    'unused things',
    {
      coefficients: 'k: k\nspare: u',
      parameters: 'gain: { nominal: 1, spread: 10 % }',
      inputs: 'goal: { unit: V }\nload: { unit: V }',
      sensors: 'seen: { of: out, unit: V }\nother: { of: out, unit: V }',
      actuators: 'drive: { of: command, unit: V }\nspare_drive: { of: command, unit: V }',
    },
    [
      '9:5: the coefficient `spare` is defined, but no controller or requirement uses it; use it or leave it out',
      '11:3: the parameter `gain` is defined, but nothing uses it; use it or leave it out',
      '14:3: the input `load` is defined, but nothing uses it; use it or leave it out',
      '19:3: the sensor `other` is defined, but no controller reads it; use it or leave it out',
      '27:3: the actuator `spare_drive` is defined, but no plant equation uses it; use it or leave it out',
    ],
  ],
  [
    'a constant that is an expression',
    { constants: 'c: 3 V\nd: c*2' },
    ['5:7: expected a number with its unit, or the name of a constant'],
  ],
  [
    'an input at rest in another unit',
    { inputs: 'goal: { unit: V, rest: 2 A }' },
    ['12:26: `rest` must be in V, but this is A'],
  ],
  [
    'a step and a pulse in one',
    { inputsOfStep: 'goal: { step: 1 V, pulse: 2 V, at: 0.1 s }' },
    [
      '28:13: this event has `step` and `pulse`; expected one of step, pulse, ramp, sine, chirp, square, staircase, noise, recorded',
    ],
  ],
  [
    'neither a step nor a pulse',
    { inputsOfStep: 'goal: { at: 0.1 s}' },
    [
      '28:13: this event has no shape; expected one of step, pulse, ramp, sine, chirp, square, staircase, noise, recorded',
    ],
  ],
  [
    'a pulse without its length',
    { inputsOfStep: 'goal: { pulse: 2 V, at: 0.1 s }' },
    ['28:13: a pulse needs `for:`, its length in time'],
  ],
  [
    'a pulse of no length',
    { inputsOfStep: 'goal: { pulse: 2 V, at: 0.1 s, for: 0 s }' },
    ['28:43: a pulse must be longer than 0 s'],
  ],
  [
    'a pulse that outlasts the scenario',
    { inputsOfStep: 'goal: { pulse: 2 V, at: 0.1 s, for: 1 s }' },
    ['28:43: this pulse ends at 1.1 s, after the scenario, which lasts 1 s'],
  ],
  [
    'a step with a length',
    { inputsOfStep: 'goal: { step: 2 V, at: 0.1 s, for: 1 s }' },
    ['28:37: a step has no `for:`; a change that ends is a pulse'],
  ],
  [
    'an event after the end',
    { inputsOfStep: 'goal: { step: 2 V, at: 5 s }' },
    ['28:30: this event at 5 s lies outside the scenario, which runs from 0 s to 1 s'],
  ],
  [
    'an event at the very end',
    { inputsOfStep: 'goal: { step: 2 V, at: 1 s }' },
    ['28:30: this event at 1 s lies outside the scenario, which runs from 0 s to 1 s'],
  ],
  [
    'an event before the start',
    { inputsOfStep: 'goal: { step: 2 V, at: -1 s }' },
    ['28:30: this event at -1 s lies outside the scenario, which runs from 0 s to 1 s'],
  ],
  [
    'an event without its time',
    { inputsOfStep: 'goal: { step: 2 V }' },
    ['28:7: `at` is missing; expected a time such as 0.2 s'],
  ],
  [
    'events in wrong units',
    { inputsOfStep: 'goal: [{ step: 2 V, at: 0.1 s}, { step: 2 A, at: 0.2 }]' },
    ['28:47: `step` must be in V, but this is A', '28:56: `at` must be in s, but this is a plain number'],
  ],
  [
    'an event that is a value',
    { inputsOfStep: 'goal: 3 V' },
    ['28:13: `goal` is `3 V`; expected an event such as { step: 1 V, at: 0.2 s }, or a list'],
  ],
  [
    'events of what is no input',
    {
      inputsOfStep:
        'goal: { step: 2 V, at: 0.1 s}\nout: { step: 2 V, at: 0.1 s}\ngaol: { step: 2 V, at: 0.1 s}',
    },
    [
      '29:7: `out` is a plant signal, not an input; valid here: goal',
      '30:7: unknown input `gaol`; did you mean `goal`?',
    ],
  ],
  [
    'a scenario without events',
    { inputsOfStep: '' },
    [
      '27:5: `inputs` is empty; expected a mapping of events by name',
      '30:13: `overshoot` needs a step of `goal`, but scenario `step` does not change `goal`',
    ],
  ],
  [
    'an unknown measure',
    { requirements: '- { name: R, measure: overshot, of: out, to: goal, in: step, at_most: 10 % }' },
    ['30:25: unknown measure `overshot`; did you mean `overshoot`?'],
  ],
  [
    'an unknown scenario',
    { requirements: '- { name: R, measure: overshoot, of: out, to: goal, in: stop, at_most: 10 % }' },
    ['30:59: unknown scenario `stop`; did you mean `step`?'],
  ],
  [
    'an unknown signal',
    { requirements: '- { name: R, measure: overshoot, of: uot, to: goal, in: step, at_most: 10 % }' },
    ['30:40: unknown signal `uot`; valid here: goal, out, seen, command, drive'],
  ],
  [
    'a measure of what is no signal',
    { requirements: '- { name: R, measure: overshoot, of: k, to: goal, in: step, at_most: 5 % }' },
    [
      '30:40: `k` is a coefficient, but `of` names a plant signal, controller signal, sensor, actuator or input; valid here: goal, out, seen, command, drive',
    ],
  ],
  [
    'a missing key of a measure',
    { requirements: '- { name: R, measure: overshoot, of: out, in: step, at_most: 5 % }' },
    ['30:25: `overshoot` needs `to:` (the target)'],
  ],
  [
    'a key of another measure',
    {
      requirements: '- { name: R, measure: overshoot, of: out, to: goal, band: 5 %, in: step, at_most: 5 % }',
    },
    ['30:55: `overshoot` has no key `band`; its own keys: of, to'],
  ],
  [
    'a mistyped key',
    { requirements: '- { name: R, measure: overshoot, of: out, to: goal, in: step, at_mots: 5 % }' },
    ['30:65: unknown key `at_mots` in item 1; did you mean `at_most`?'],
  ],
  [
    'no scenario',
    { requirements: '- { name: R, measure: overshoot, of: out, to: goal, at_most: 5 % }' },
    ['30:25: `overshoot` needs `in:`, a scenario: one of step'],
  ],
  [
    'a scenario for a measure of the loop',
    { requirements: '- { name: R, measure: phase_margin, at: out, in: step, at_least: 10 deg }' },
    ['30:48: `phase_margin` is a measure of the loop and needs no scenario'],
  ],
  [
    'a target that makes no step',
    { requirements: '- { name: R, measure: overshoot, of: out, to: seen, in: step, at_most: 10 % }' },
    [
      '30:13: `overshoot` needs a `to:` that makes a step, which only an input does; `seen` is none; valid here: goal',
    ],
  ],
  [
    'a target that stays',
    {
      inputs: 'goal: { unit: V }\nload: { unit: V }',
      plant: 'out: { lag: 10 ms, of: drive + load, unit: V }',
      inputsOfStep: 'load: { step: 1 V, at: 0.1 s }',
    },
    ['31:13: `overshoot` needs a step of `goal`, but scenario `step` does not change `goal`'],
  ],
  [
    'a target in another unit',
    {
      inputs: 'goal: { unit: V }\nload: { unit: A }',
      plant: 'out: { lag: 10 ms, of: drive + load*(1 ohm), unit: V }',
      requirements: '- { name: R, measure: peak_deviation, of: out, to: load, in: step, at_most: 1 V }',
    },
    ['31:54: what `out` is compared with must be in V, but this is A'],
  ],
  [
    'a scenario too short for the limit',
    {
      requirements:
        '- { name: R, measure: settling_time, of: out, to: goal, band: 5 %, in: step, at_most: 0.7 s }',
    },
    [
      '30:89: scenario `step` ends 0.9 s after the step, but a limit of 0.7 s needs at least 1.05 s: half as long again',
    ],
  ],
  [
    'a next change too soon for the limit',
    {
      inputsOfStep: 'goal: { pulse: 1 V, at: 0.1 s, for: 0.2 s }',
      requirements:
        '- { name: R, measure: settling_time, of: out, to: goal, band: 5 %, in: step, at_most: 0.5 s }',
    },
    [
      '30:89: the next change comes 0.2 s after the step, but a limit of 0.5 s needs at least 0.75 s: half as long again',
    ],
  ],
  [
    'a loop opened at an input',
    { requirements: '- { name: R, measure: phase_margin, at: goal, at_least: 10 deg }' },
    [
      '30:43: `goal` is an input, but `at` names a sensor, controller signal or actuator; valid here: seen, command, drive',
    ],
  ],
  [
    'a loop opened at a plant signal with two sensors',
    {
      sensors: 'seen: { of: out, unit: V }\nother: { of: out, unit: V }',
      signals: 'command: { value: k*(goal - seen - other), unit: V }',
      requirements: '- { name: R, measure: phase_margin, at: out, at_least: 10 deg }',
    },
    [
      '31:43: the loop cannot be opened at the plant signal `out`, since 2 sensors read it; name a sensor, controller signal or actuator',
    ],
  ],
  [
    'around with a measure of a trace',
    {
      requirements:
        '- { name: R, measure: overshoot, of: out, to: goal, around: {out: 1 V}, in: step, at_most: 10 % }',
    },
    ['30:55: `overshoot` is a measure of a trace and has no `around:`; it starts where its scenario starts'],
  ],
  [
    'around what is no signal, and in another unit',
    {
      requirements:
        '- { name: R, measure: phase_margin, at: seen, around: {k: 3, out: 1 A, outt: 1 V}, at_least: 10 deg }',
    },
    [
      '30:58: `k` is a coefficient, not a signal; valid here: goal, out, seen, command, drive',
      '30:69: `out` must be in V, but this is A',
      '30:74: unknown signal `outt`; did you mean `out`?',
    ],
  ],
  [
    'no limit',
    { requirements: '- { name: R, measure: overshoot, of: out, to: goal, in: step }' },
    ['30:13: this requirement has no limit; expected one of at_most, at_least, between'],
  ],
  [
    'a limit without a number',
    { requirements: '- { name: R, measure: overshoot, of: out, to: goal, in: step, at_most: }' },
    ['30:65: `at_most` is empty; expected a limit: a number with its unit'],
  ],
  [
    'two limits',
    {
      requirements:
        '- { name: R, measure: overshoot, of: out, to: goal, in: step, at_most: 10 %, at_least: 1 % }',
    },
    [
      '30:80: this requirement has `at_most` and `at_least`; expected one limit: write two requirements, or between',
    ],
  ],
  [
    'limits the wrong way round',
    { requirements: '- { name: R, measure: overshoot, of: out, to: goal, in: step, between: [10 %, 5 %] }' },
    ['30:75: the lower limit comes first and must be below the upper one'],
  ],
  [
    'two equal limits',
    { requirements: '- { name: R, measure: overshoot, of: out, to: goal, in: step, between: [5 %, 0.05] }' },
    ['30:75: the lower limit comes first and must be below the upper one'],
  ],
  [
    'a zero in another unit',
    { requirements: '- { name: R, measure: peak_deviation, of: out, in: step, at_most: 0 A }' },
    ['30:69: the limit of `peak_deviation` must be in V, but this is A'],
  ],
  [
    'between of one limit',
    { requirements: '- { name: R, measure: overshoot, of: out, to: goal, in: step, between: 5 % }' },
    ['30:74: `between` is `5 %`; expected two limits in brackets, such as [1 V, 2 V]'],
  ],
  [
    'a limit in another unit',
    { requirements: '- { name: R, measure: peak_deviation, of: out, in: step, at_most: 5 mA, scale: -1 V }' },
    ['30:69: the limit of `peak_deviation` must be in V, but this is A', '30:82: `scale` must be above 0'],
  ],
  [
    'a limit that is a word',
    { requirements: '- { name: R, measure: peak_deviation, of: out, in: step, at_most: some }' },
    ['30:69: expected a number with its unit, or the name of a constant'],
  ],
  [
    'a limit in dB of what is no ratio',
    { requirements: '- { name: R, measure: phase_margin, at: seen, at_least: 10 dB }' },
    ['30:59: `phase_margin` is no ratio of amplitudes, so its limit cannot be in dB'],
  ],
  [
    'a share of all or more',
    {
      requirements:
        '- { name: R, measure: overshoot, of: out, to: goal, in: step, at_most: 10 %, holds_for: 100 % }',
    },
    ['30:91: `holds_for` is a share above 0 % and below 100 %; for every plant write all'],
  ],
  [
    'a share that is a word',
    {
      requirements:
        '- { name: R, measure: overshoot, of: out, to: goal, in: step, at_most: 10 %, holds_for: most }',
    },
    ['30:91: `holds_for` cannot be `most`; valid here: nominal, all, 99 %'],
  ],
  [
    'a band of nothing',
    {
      requirements:
        '- { name: R, measure: settling_time, of: out, to: goal, band: 0, in: step, at_most: 0.1 s }',
    },
    ['30:65: `band` must be above 0'],
  ],
  [
    'a requirement twice',
    {
      requirements:
        '- { name: R, measure: overshoot, of: out, to: goal, in: step, at_most: 10 % }\n- { name: R, measure: phase_margin, at: seen, at_least: 10 deg }',
    },
    ['31:13: the requirement `R` is already at line 30; every requirement has a name of its own'],
  ],
  [
    'requirements by name',
    { requirements: 'R: { measure: peak_deviation, of: out, in: step, at_most: some }' },
    ['30:3: `requirements` is a mapping; expected a list of at least one requirement'],
  ],
  [
    'a requirement that is a word',
    { requirements: '- peak' },
    ['30:5: item 1 is `peak`; expected { name: …, measure: …, at_most: … }'],
  ],
  [
    'no requirements',
    { requirements: '[]' },
    ['30:3: `requirements` is an empty list; expected a list of at least one requirement'],
  ],
  [
    'an empty section of requirements',
    { requirements: '' },
    ['29:1: `requirements` is empty; expected a list of at least one requirement'],
  ],
  [
    'a merge section without its slip',
    { rest: 'merge: { reference: a }' },
    ['31:1: `may_slip` is missing; expected a share such as 5 %'],
  ],
  [
    'a slip of five times',
    { rest: 'merge: { reference: a, may_slip: 5 }' },
    ['31:34: `may_slip` is a share of headroom from 0 % to 100 %'],
  ],
  [
    'a perturbation out of its bounds',
    { rest: 'perturbation: { plants: -1, seed: 1.5, confidence: 1 }' },
    [
      '31:25: `plants` must be a whole number from 0 to 10000000, but is `-1`',
      '31:35: `seed` must be a whole number from 0 to 4294967295, but is `1.5`',
      '31:52: `confidence` is a share above 0 % and below 100 %, such as 95 %',
    ],
  ],
  [
    'a perturbation that is a list',
    { rest: 'perturbation: [1]' },
    ['31:15: `perturbation` is a list; expected { plants: …, seed: …, confidence: … }'],
  ],
];

test.each(cases)('parameters, inputs, scenarios, requirements and the run: %s', (_, pieces, errors) => {
  expect(errorsOf(smallSpec(pieces))).toEqual(errors.map((error) => `a.pawl.yaml:${error}`));
});
