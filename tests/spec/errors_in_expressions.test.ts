import { expect, test } from 'vitest';
import { errorsOf } from './loading.js';
import { type Pieces, smallSpec } from './small_spec.js';

/** What is wrong, the piece of the spec that has it, and every line that is said: nothing more and nothing less. */
const cases: [title: string, pieces: Pieces, errors: string[]][] = [
  [
    'a name nearly right',
    { signals: 'command: { value: k*(gaol - seen), unit: V }' },
    ['21:28: no such name `gaol`; did you mean `goal`?'],
  ],
  [
    'a name of nothing',
    { signals: 'command: { value: k*(goal - whatever), unit: V }' },
    [
      '21:35: no such name `whatever`; a controller expression sees sensors, inputs, coefficients, constants and controller signals',
    ],
  ],
  [
    'a unit without parentheses of its own',
    { signals: 'command: { value: "if(seen > 1 V, goal, 0)*k", unit: V }' },
    [
      '21:38: a quantity inside an expression stands in parentheses of its own, as in (0.5 mrad/s); here `V` follows the number 1',
    ],
  ],
  [
    'a unit where a name belongs',
    { signals: 'command: { value: k*(goal - seen)*mV, unit: V }' },
    ['21:41: no such name `mV`; a quantity stands in parentheses of its own, as in (0.5 mrad/s)'],
  ],
  [
    'the true plant in a controller',
    { signals: 'command: { value: k*(goal - out), unit: V }' },
    [
      '21:35: `out` is a plant signal, and a controller cannot see the true plant: let it read a sensor; a controller expression sees sensors, inputs, coefficients, constants and controller signals',
    ],
  ],
  [
    'a parameter in a controller',
    {
      parameters: 'gain: { nominal: 1 V, spread: 10 % }',
      signals: 'command: { value: k*(goal - seen) + gain, unit: V }',
    },
    [
      '21:43: `gain` is a parameter, which the firmware does not know; a controller expression sees sensors, inputs, coefficients, constants and controller signals',
    ],
  ],
  [
    'an actuator in a controller',
    { signals: 'command: { value: k*(goal - seen) + drive, unit: V }' },
    [
      '21:43: `drive` is an actuator; a controller expression sees sensors, inputs, coefficients, constants and controller signals',
    ],
  ],
  [
    'a coefficient in the plant',
    { plant: 'out: { lag: 10 ms, of: drive*k, unit: V }' },
    [
      '14:32: `k` is a coefficient of the firmware, which the plant does not know; a plant expression sees plant signals, inputs, actuators, parameters and constants',
    ],
  ],
  [
    'a sensor in the plant',
    { plant: 'out: { lag: 10 ms, of: drive + seen, unit: V }' },
    [
      '14:34: `seen` is a sensor; a plant expression sees plant signals, inputs, actuators, parameters and constants',
    ],
  ],
  [
    'a coefficient in a sensor',
    { sensors: 'seen: { of: k*out, unit: V }' },
    [
      '16:15: `k` is a coefficient of the firmware, which the plant does not know; a plant expression sees plant signals, inputs, actuators, parameters and constants',
    ],
  ],
  [
    'before outside controllers',
    { plant: 'out: { lag: 10 ms, of: before(drive), unit: V }' },
    [
      '14:26: before(…) is the value at the previous sampling instant, which only controllers have; this is a plant expression',
    ],
  ],
  [
    'before of two things',
    { signals: 'command: { value: "k*(goal - before(seen, goal))", unit: V }' },
    ['21:36: before takes 1 argument, but 2 are given'],
  ],
  [
    'time',
    { plant: 'out: { lag: 10 ms, of: drive*sin(time), unit: V }' },
    ['14:36: `time` cannot be used in an expression; what changes over time is an input'],
  ],
  [
    'a sum of two dimensions',
    { plant: 'out: { lag: 10 ms, of: drive + (1 A), unit: V }' },
    ['14:32: cannot add V and A'],
  ],
  [
    'a difference where a prefix was meant',
    { plant: 'out: { lag: (10 ms) + (2 m), of: drive, unit: V }' },
    ['14:23: cannot add s and m; was `ms` meant?'],
  ],
  [
    'a comparison of two dimensions',
    { signals: 'command: { value: k*(goal > (1 s))*seen, unit: V }' },
    ['21:33: cannot compare V and s'],
  ],
  [
    'the smallest of two dimensions',
    { signals: 'command: { value: "k*(goal - seen) + min(1, goal)", unit: V }' },
    ['21:44: cannot choose between V and a plain number'],
  ],
  [
    'a choice between two dimensions',
    { signals: 'command: { value: "k*seen + if(1, goal, k)", unit: V }' },
    ['21:35: cannot choose between V and a plain number'],
  ],
  [
    'a condition with a unit',
    { signals: 'command: { value: "k*if(goal, seen, 0)", unit: V }' },
    ['21:31: the condition of if needs a plain number, but this is V'],
  ],
  [
    'an exponent with a unit',
    { signals: 'command: { value: k*goal*2^seen, unit: V }' },
    ['21:34: an exponent must be a plain number, but this is V'],
  ],
  [
    'an exponent that is no number, of a base with a unit',
    { signals: 'command: { value: "k*(goal - seen)^k", unit: V }' },
    ["21:42: the exponent of V must be a number, since the result's unit depends on it"],
  ],
  [
    'a result of the wrong dimension',
    { signals: 'command: { value: k*(goal - seen)^2, unit: V }' },
    ['21:25: `value` must be in V, but this is V^2'],
  ],
  [
    'a function of plain numbers with a unit',
    { signals: 'command: { value: k*goal*sin(seen), unit: V }' },
    ['21:36: sin needs a plain number, but this is V'],
  ],
  [
    'an unknown function',
    { signals: 'command: { value: k*goal - seen + sine(k)*goal, unit: V }' },
    ['21:41: no such function `sine`; did you mean `sin`?'],
  ],
  [
    'a function far from any known',
    { signals: 'command: { value: k*goal - seen + quux(k)*goal, unit: V }' },
    [
      '21:41: no such function `quux`; known: abs, sign, sqrt, exp, ln, sin, cos, tan, asin, acos, atan, sinh, cosh, tanh, min, max, floor, ceil, round, hypot, if',
    ],
  ],
  [
    'a name called like a function',
    { signals: 'command: { value: k(goal) - seen, unit: V }' },
    ['21:25: `k` is a coefficient, not a function; a product is written with *'],
  ],
  [
    'a function without its arguments',
    { signals: 'command: { value: k*(goal - seen)*sin, unit: V }' },
    ['21:41: `sin` is a function: its arguments follow in parentheses'],
  ],
  [
    'too many arguments',
    { signals: 'command: { value: "k*(goal - seen)*sin(1, 2)", unit: V }' },
    ['21:42: sin takes 1 argument, but 2 are given'],
  ],
  [
    'too few arguments',
    { signals: 'command: { value: "k*max(goal) - seen", unit: V }' },
    ['21:28: max takes 2 to 16 arguments, but 1 is given'],
  ],
  [
    'an index on what has none',
    { signals: 'command: { value: "seen[2]*k + goal", unit: V }' },
    ['21:26: only a coefficient has an index; `seen` is a sensor'],
  ],
  [
    'an index that is no whole number',
    { signals: 'command: { value: "k[1.5]*(goal - seen)", unit: V }' },
    ['21:28: an index is a whole number, counted from 0, as in name[3]'],
  ],
  [
    'an index that is not closed',
    { signals: 'command: { value: "k[1*(goal - seen)", unit: V }' },
    ['21:27: this [ is not closed by ]'],
  ],
  [
    'a bracket that needs quotes',
    { signals: 'command: { value: k[2]*(goal - seen), unit: V }' },
    [
      '21:26: a [ in the middle of a value; inside { } an expression with a comma or a [ needs quotes, as in value: "table[2]"',
    ],
  ],
  [
    'a comma that needs quotes',
    { signals: 'command: { value: max(goal, seen)*k, unit: V }' },
    [
      '21:25: `max(goal` is cut off at a comma; inside { } and [ ] an expression with a comma or a [ needs quotes, as in value: "max(a, b)"',
    ],
  ],
  [
    'a comma in a list that needs quotes',
    { signals: 'command: { value: k*(goal - seen), range: [-1 V, max(goal, 1 V)], unit: V }' },
    [
      '21:56: `max(goal` is cut off at a comma; inside { } and [ ] an expression with a comma or a [ needs quotes, as in value: "max(a, b)"',
    ],
  ],
  [
    'a single equals sign',
    { signals: 'command: { value: k*(goal - seen) = 2, unit: V }' },
    ['21:41: unexpected `=` in an expression; equality is written =='],
  ],
  [
    'a parenthesis that stays open',
    { signals: 'command: { value: k*(goal - seen, unit: V }' },
    ['21:27: this ( is not closed by )'],
  ],
  [
    'a parenthesis that was never open',
    { signals: 'command: { value: k*goal - seen), unit: V }' },
    ['21:38: a ) without its ('],
  ],
  [
    'a comparison of a comparison',
    { signals: 'command: { value: k*goal - seen < 1 < 2, unit: V }' },
    ['21:43: a comparison of a comparison; compare twice and multiply, or use if(…)'],
  ],
  [
    'two names without an operator',
    { signals: 'command: { value: k goal - seen, unit: V }' },
    ['21:27: an operator was expected before `goal`'],
  ],
  [
    'an operator without its right side',
    { signals: 'command: { value: k*(goal - seen) +, unit: V }' },
    ['21:42: a number, a name or ( was expected where the expression ends'],
  ],
  [
    'a number too large',
    { signals: 'command: { value: 1e999*seen + k*goal, unit: V }' },
    ['21:25: `1e999` is too large a number'],
  ],
  [
    'an empty quoted expression',
    { signals: 'command: { value: "", unit: V }' },
    ['21:26: an expression was expected here'],
  ],
  [
    'a bare coefficient in a sum with a unit',
    { signals: 'command: { value: goal - seen + k, unit: V }' },
    ['21:37: cannot add V and a plain number'],
  ],
  [
    'a place in a folded expression',
    { signals: 'command:\n  unit: V\n  value: >-\n    k*(goal -\n    sene)' },
    ['25:11: no such name `sene`; did you mean `seen`?'],
  ],
  [
    'a place in a plain expression of two lines',
    { signals: 'command:\n  unit: V\n  value: k*(goal -\n    sene)' },
    ['24:11: no such name `sene`; did you mean `seen`?'],
  ],
  [
    'a place in a quoted expression',
    { signals: "command: { value: 'k*(goal - sene)', unit: V }" },
    ['21:36: no such name `sene`; did you mean `seen`?'],
  ],
  [
    'an unknown unit',
    { signals: 'command: { value: k*(goal - seen) + (3 mVolt), unit: V }' },
    ['21:46: unknown unit `mVolt`'],
  ],
  [
    'a product without its operator',
    { plant: 'out: { lag: 10 ms, of: drive, unit: Nm }' },
    ['14:39: unknown unit `Nm`; did you mean `N*m`?'],
  ],
  [
    'a capital that matters',
    { plant: 'out: { lag: 10 ms, of: drive, unit: v }' },
    ['14:39: unknown unit `v`; did you mean `V`?'],
  ],
  [
    'a prefix without its unit',
    { plant: 'out: { lag: 10 m, of: drive, unit: V }' },
    ['14:15: `lag` must be a time, or a corner in Hz or rad/s, but this is m; was `ms` meant?'],
  ],
  [
    'a unit that can be read in two ways',
    { plant: 'out: { lag: 10 ms, of: drive, unit: V/s*A }' },
    ['14:42: `V/s*A` can be read in two ways; put what is divided by in parentheses, as in J/(kg*K)'],
  ],
  [
    'dB inside a product',
    { plant: 'out: { lag: 10 ms, of: drive, gain: 3 dB/V, unit: V }' },
    ['14:41: dB stands alone: it is a ratio by itself and takes no part in a product'],
  ],
];

test.each(cases)('expressions that cannot be read or do not fit: %s', (_, pieces, errors) => {
  expect(errorsOf(smallSpec(pieces))).toEqual(errors.map((error) => `a.pawl.yaml:${error}`));
});
