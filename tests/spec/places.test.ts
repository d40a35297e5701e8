import fc from 'fast-check';
import { expect, test } from 'vitest';
import { newProblems } from '../../src/spec/problems.js';
import { readYaml } from '../../src/spec/read_yaml.js';
import { childOf, entryOf, itemsOf, type TextTree, type Tree, textOf } from '../../src/spec/tree.js';
import { heliostat } from './heliostat_example.js';
import { errorsOf, heliostatWith } from './loading.js';
import { smallSpec } from './small_spec.js';

function read(text: string): { tree: Tree | undefined; errors: string[] } {
  const problems = newProblems();
  const tree = readYaml(text, 'f', problems);
  return {
    tree,
    errors: problems.all().map(({ place, message }) => `${place.line}:${place.column}: ${message}`),
  };
}

function textAt(text: string, key: string): TextTree {
  const found = textOf(childOf(read(text).tree, key));
  if (found === undefined) throw new Error(`no text at ${key}`);
  return found;
}

/** Line and column of the first occurrence of a marker, counted by hand from the text. */
function placeOf(text: string, marker: string): { line: number; column: number } {
  const before = text.slice(0, text.indexOf(marker)).split('\n');
  return { line: before.length, column: before.at(-1)!.length + 1 };
}

const styles: [style: string, text: string][] = [
  ['plain', 'a: one + target'],
  ['plain on two lines', 'a: one +\n   target + b'],
  ['single quotes', "a: 'one + target'"],
  ['double quotes', 'a: "one + target"'],
  ['double quotes on two lines', 'a: "one +\n    target"'],
  ['folded', 'a: >-\n  one +\n  target'],
  ['folded with a comment behind its mark', 'a: >- # why\n  one +\n  target'],
  ['literal', 'a: |\n  one +\n    target\n'],
  ['literal with a stated indent', 'a: |2-\n  one +\n  target'],
  ['in a flow mapping', '{ a: one + target, b: c }'],
  ['behind a comment', '# first\na: one + target # last'],
];

test.each(styles)('the place of a word of an expression is its place in the file: %s', (_, text) => {
  const { source, placeAt } = textAt(text, 'a');
  expect(source).toContain('target');
  expect(placeAt(source.indexOf('target'))).toMatchObject(placeOf(text, 'target'));
});

test('escapes move letters, so there every place is that of the start', () => {
  for (const text of ['a: "one \\u002B target"', "a: 'it''s + target'"]) {
    const { source, placeAt } = textAt(text, 'a');
    expect(source).toMatch(/one \+ target|it's \+ target/);
    expect(placeAt(source.indexOf('target'))).toMatchObject({ line: 1, column: 4 });
  }
});

test('lines may end in either way', () => {
  const [error] = errorsOf(heliostatWith(['unit: rad/s }', 'unit: rod/s }']));
  expect(errorsOf(heliostatWith(['unit: rad/s }', 'unit: rod/s }']).replaceAll('\n', '\r\n'))).toEqual([
    error,
  ]);
  expect(errorsOf(heliostat.replaceAll('\n', '\r\n'))).toEqual([]);
});

test('a byte order mark at the start is no part of the first key', () => {
  expect(errorsOf(`\uFEFF${heliostat}`)).toEqual([]);
});

test('letters outside the alphabet count as one column each', () => {
  expect(
    errorsOf(heliostatWith(['Heliostat azimuth drive', 'Größe β: Ω'], ['unit: rad/s }', 'unit: rod/s }'])),
  ).toHaveLength(1);
  const signals = 'command: { value: k*(goal - seen) + (3 µV) + (2 Ω), unit: V }';
  expect(errorsOf(smallSpec({ signals }))).toEqual(['a.pawl.yaml:21:50: cannot add V and ohm']);
});

test('numbers, dates and truth values of YAML stay the text that they are', () => {
  const { tree } = read('a: 0x1F\nb: yes\nc: 2026-01-01\nd: ~\ne: 1e400\nf: null\ng: .inf');
  const texts = ['a', 'b', 'c', 'd', 'e', 'f', 'g'].map((key) => textOf(childOf(tree, key))?.text);
  expect(texts).toEqual(['0x1F', 'yes', '2026-01-01', '~', '1e400', 'null', '.inf']);
});

test('a key without a value is told at the key', () => {
  const { tree } = read('a:\nb: { c: }');
  expect(childOf(tree, 'a')).toEqual({ kind: 'empty', place: { file: 'f', line: 1, column: 1 } });
  expect(childOf(childOf(tree, 'b'), 'c')).toMatchObject({ kind: 'empty', place: { line: 2, column: 6 } });
});

test('of two equal keys the first counts and the second is told', () => {
  const { tree, errors } = read('a: 1\nb: 2\na: 3');
  expect(textOf(childOf(tree, 'a'))?.text).toBe('1');
  expect(errors).toEqual(['3:1: the key `a` stands here a second time; each key stands once']);
});

test('several lists and mappings keep their order and places', () => {
  const { tree, errors } = read('list:\n  - one\n  - { two: 2 }\n  - [three]\n');
  expect(errors).toEqual([]);
  const items = itemsOf(childOf(tree, 'list'));
  expect(items.map(({ kind, place }) => [kind, place.line, place.column])).toEqual([
    ['text', 2, 5],
    ['map', 3, 5],
    ['list', 4, 5],
  ]);
  expect(entryOf(items[1], 'two')?.keyPlace).toMatchObject({ line: 3, column: 7 });
});

test('nesting deeper than any spec is refused, and told once', () => {
  const nested = (depth: number) => `${'{ a: '.repeat(depth)}b${' }'.repeat(depth)}`;
  expect(read(nested(20)).errors).toEqual([]);
  expect(read(nested(30)).errors).toEqual([expect.stringContaining('nested more than 20 deep')]);
});

test('a file of millions of letters is refused unread', () => {
  expect(read('#'.repeat(2_000_001)).errors).toEqual([
    '1:1: the file has more than 2000000 characters; this is no spec',
  ]);
});

test('an empty file, and one of comments, says how a spec starts', () => {
  for (const text of ['', '\n\n', '# nothing\n', '---\n']) {
    expect(read(text).errors, JSON.stringify(text)).toEqual([
      expect.stringContaining('the file is empty; a spec starts with `pawl: 1`'),
    ]);
  }
});

test('a single value or a list is no spec', () => {
  for (const text of ['just words', '- a\n- b', '"quoted"']) {
    expect(errorsOf(text)).toEqual([
      'a.pawl.yaml:1:1: a spec is a mapping of sections: pawl, loop, firmware, plant, controllers, requirements …',
    ]);
  }
});

test('a tab is told where it indents, and let be where it does not', () => {
  expect(read('a:\n\tb: 1\n').errors).toEqual([
    '2:1: a tab indents this line; YAML is indented with spaces only',
  ]);
  expect(read('a:\n  \tb: 1\n  \tc: 1\n').errors[0]).toContain('a tab indents this line');
  expect(read('a: {b: 1,\n\tc: 2}\n').errors).toEqual([
    expect.stringContaining('2:1: a tab indents this line'),
  ]);
  expect(read('a:\tone\nb: "x\ty"\n').errors).toEqual([]);
});

test('a comma that cuts a call is told at the call, however many it has', () => {
  const { tree, errors } = read('{ a: max(b, c, d), e: 1 }');
  expect(errors).toEqual([expect.stringContaining('1:6: `max(b` is cut off at a comma')]);
  expect(childOf(tree, 'a')?.kind).toBe('broken');
  expect(textOf(childOf(tree, 'e'))?.text).toBe('1');
});

test('words in parentheses in plain text are no call that was cut', () => {
  expect(read('{ a: "max(b, c)", reason: so it is (mostly), e: 1 }').errors).toEqual([]);
  expect(read('reason: this (and, well, that)').errors).toEqual([]);
});

const names = fc.stringMatching(/^[a-z]{1,6}$/);

test('every place that the tree gives is where the text is', () => {
  const entries = fc.uniqueArray(fc.tuple(names, names), {
    minLength: 1,
    maxLength: 6,
    selector: ([key]) => key,
  });
  fc.assert(
    fc.property(entries, fc.nat(3), fc.boolean(), (list, blanks, flow) => {
      const gap = ' '.repeat(blanks + 1);
      const pairs = list.map(([key, value]) => `${key}:${gap}${value}`);
      const text = flow ? `{${gap}${pairs.join(`,${gap}`)}${gap}}` : pairs.join('\n');
      const { tree } = read(text);
      const lines = text.split('\n');
      for (const [key, value] of list) {
        const entry = entryOf(tree, key)!;
        expect(lines[entry.keyPlace.line - 1].slice(entry.keyPlace.column - 1).startsWith(`${key}:`)).toBe(
          true,
        );
        const { line, column } = entry.value.place;
        expect(lines[line - 1].slice(column - 1).startsWith(value)).toBe(true);
      }
    }),
  );
});
