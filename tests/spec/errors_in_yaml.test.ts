import { expect, test } from 'vitest';
import { errorsOf } from './loading.js';
import { type Pieces, smallSpec } from './small_spec.js';

/** What is wrong, the piece of the spec that has it, and every line that is said: nothing more and nothing less. */
const cases: [title: string, pieces: Pieces, errors: string[]][] = [
  [
    'a tab that indents',
    { rest: '	x: 1' },
    ['31:1: a tab indents this line; YAML is indented with spaces only'],
  ],
  [
    'tabs that indent',
    { plant: '	out: 1', rest: '	x: 1' },
    ['14:3: a tab indents this line, and 1 more; YAML is indented with spaces only'],
  ],
  [
    'a second document',
    { rest: '---\nb: 2' },
    ['31:1: a second YAML document starts here; one file is one spec'],
  ],
  [
    'an anchor',
    { rest: 'merge: &a { reference: a, may_slip: 5 % }' },
    ['31:11: `&a` is a YAML anchor; a spec has none, so leave it out'],
  ],
  [
    'an alias',
    { rest: 'merge: { reference: *a, may_slip: 5 % }' },
    ['31:21: `*a` is a YAML alias; a spec says everything where it stands, so write it out'],
  ],
  [
    'a tag',
    { rest: 'merge: { reference: !path a, may_slip: 5 % }' },
    ['31:27: `!path` is a YAML tag; a spec has none, so leave it out'],
  ],
  ['a key that is a list', { rest: '? [a]\n: 3' }, ['31:3: a key must be a plain word']],
  [
    'a quote that stays open',
    { rest: 'merge: { reference: "a, may_slip: 5 % }' },
    ['31:40: this is not YAML: missing closing "quote'],
  ],
  [
    'a brace that stays open',
    { rest: 'merge: { reference: a, may_slip: 5 %' },
    ['31:37: this is not YAML: flow map in block collection must be sufficiently indented and end with a }'],
  ],
  [
    'a colon in a value',
    { rest: 'merge: a: b' },
    ['31:8: this is not YAML: a key with a colon was expected, or a value needs quotes'],
  ],
  [
    'an unknown section',
    { rest: 'mrge: { reference: a, may_slip: 5 % }' },
    ['31:1: unknown key `mrge` in the spec; did you mean `merge`?'],
  ],
];

test.each(cases)('texts that are no YAML, or YAML that a spec does not use: %s', (_, pieces, errors) => {
  expect(errorsOf(smallSpec(pieces))).toEqual(errors.map((error) => `a.pawl.yaml:${error}`));
});
