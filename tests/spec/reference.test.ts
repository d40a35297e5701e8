import { readFileSync } from 'node:fs';
import { expect, test } from 'vitest';
import { z } from 'zod';
import { overflows, roundings } from '../../src/spec/fixed_formats.js';
import {
  controllerRoom,
  plantRoom,
  type Room,
  scenarioRoom,
  settingRoom,
  timingRoom,
} from '../../src/spec/names.js';
import { defaultPerturbation } from '../../src/spec/read_run.js';
import { skeletonsOf } from '../../src/spec/skeleton.js';
import { defaultSearch } from '../../src/verdict/scrutinise.js';
import { headingsOf } from './contents.js';
import { heliostat } from './heliostat_example.js';
import { errorsOf, heliostatWith } from './loading.js';
import { functionTable, mistakes, unitTable } from './reference_tables.js';
import { smallSpec } from './small_spec.js';
import { vocabulary } from './vocabulary.js';
import { written } from './vocabulary_tables.js';

const reference = readFileSync(new URL('../../specs/README.md', import.meta.url), 'utf8');

/** The text of a section, from its heading to the next of its rank or higher. */
function section(heading: string): string {
  const start = reference.indexOf(`\n${heading}\n`);
  expect(start, heading).toBeGreaterThan(0);
  const rank = /^#+/.exec(heading)![0].length;
  const rest = reference.slice(start + heading.length + 2);
  const end = rest.search(new RegExp(`^#{2,${rank}} `, 'm'));
  return end < 0 ? rest : rest.slice(0, end);
}

/** The keys of a mapping, whether it stands by itself, by name, in a list or beside a plain text. */
function keysOf(schema: unknown): string[] {
  if (schema instanceof z.ZodOptional) return keysOf(schema.unwrap());
  if (schema instanceof z.ZodRecord) return keysOf(schema.valueType);
  if (schema instanceof z.ZodArray) return keysOf(schema.element);
  if (schema instanceof z.ZodUnion) return keysOf(schema.options.find((option) => keysOf(option).length > 0));
  return schema instanceof z.ZodObject ? Object.keys(schema.shape) : [];
}

function below(schema: unknown, key: string): unknown {
  if (schema instanceof z.ZodOptional) return below(schema.unwrap(), key);
  if (schema instanceof z.ZodRecord) return below(schema.valueType, key);
  return schema instanceof z.ZodObject ? schema.shape[key] : undefined;
}

const spec = skeletonsOf(vocabulary).spec;
const blocks = vocabulary.blocks.map(({ key }) => key);
const shapes = vocabulary.shapes.map(({ key }) => key);
const measureKeys = vocabulary.measures.flatMap(({ keys }) => keys.map(({ name }) => name));

test('the table of units is that of the code', () => {
  expect(section('## Quantities and units')).toContain(unitTable());
});

test('the table of functions is that of the code', () => {
  expect(section('## Expressions')).toContain(functionTable());
});

test('the example is the one that the tests load', () => {
  expect(section('## An example')).toContain(`\`\`\`yaml\n${heliostat}\`\`\``);
});

test.each([
  ['### firmware', keysOf(below(spec, 'firmware'))],
  ['### firmware', keysOf(below(below(spec, 'firmware'), 'coefficients'))],
  ['### firmware', keysOf(below(below(spec, 'firmware'), 'source'))],
  ['### parameters', keysOf(below(spec, 'parameters'))],
  ['### inputs', keysOf(below(spec, 'inputs'))],
  ['### plant', keysOf(below(spec, 'plant')).filter((key) => !blocks.includes(key))],
  ['### sensors', keysOf(below(spec, 'sensors'))],
  ['### controllers', keysOf(below(spec, 'controllers'))],
  ['### controllers', keysOf(below(below(spec, 'controllers'), 'arithmetic'))],
  ['### actuators', keysOf(below(spec, 'actuators'))],
  ['### scenarios', keysOf(below(spec, 'scenarios'))],
  ['### scenarios', keysOf(below(below(spec, 'scenarios'), 'inputs')).filter((key) => !shapes.includes(key))],
  ['### requirements', keysOf(below(spec, 'requirements')).filter((key) => !measureKeys.includes(key))],
  ['### perturbation', keysOf(below(spec, 'perturbation'))],
  ['### merge', keysOf(below(spec, 'merge'))],
])('%s has a row for each of its keys %j', (heading, keys) => {
  expect(keys.length).toBeGreaterThan(1);
  const rows = section(heading)
    .split('\n')
    .filter((line) => line.startsWith('|'))
    .map((line) => line.split('|')[1]);
  for (const key of keys)
    expect(
      rows.some((cell) => cell.includes(`\`${key}\``)),
      key,
    ).toBe(true);
});

test('the number formats name every word of theirs, and the example of them loads', () => {
  const text = section('#### Number formats');
  for (const word of [...roundings, ...overflows]) expect(text).toContain(`\`${word}\``);
  const [, example] = /```yaml\n(arithmetic: .*)\n```/.exec(text)!;
  expect(errorsOf(smallSpec({ settings: `every: 1 ms\n${example}` }))).toEqual([]);
});

test.each(['### firmware', '### builds'])('the examples of %s load', (heading) => {
  const examples = [...section(heading).matchAll(/```yaml\n(firmware:.*?)```/gs)].map(
    ([, example]) => example,
  );
  expect(examples.length).toBeGreaterThan(0);
  for (const example of examples) {
    const gain = example.includes('taps:') ? 'kp*taps[0]' : 'kp';
    const spec = smallSpec({ signals: `command: { value: "${gain}*(goal - seen)", unit: V }` });
    expect(errorsOf(spec.replace(/firmware:\n.*?\n(?=\w)/s, example))).toEqual([]);
  }
});

test('every section has a heading', () => {
  for (const key of keysOf(spec)) expect(reference).toMatch(new RegExp(`^### .*\\b${key}\\b`, 'm'));
});

test('the keys that an included file may have are those named', () => {
  const text = section('### pawl, loop, include');
  for (const key of keysOf(skeletonsOf(vocabulary).part)) expect(text).toContain(`\`${key}\``);
});

test('the defaults of the perturbation are those of the code', () => {
  const text = section('### perturbation');
  expect(text).toContain(`| \`plants\` | whole number | ${defaultPerturbation.plants} |`);
  expect(text).toContain(`| \`search\` | whole number | ${defaultSearch} |`);
  expect(text).toContain(`| \`seed\` | whole number | ${defaultPerturbation.seed} |`);
  expect(text).toContain(`| \`confidence\` | share | ${defaultPerturbation.confidence * 100} % |`);
});

test.each<[string, Room]>([
  ['the plant, and `of` of a sensor', plantRoom],
  ['a controller', controllerRoom],
  ['`every`, `phase`, `delay` of a controller', timingRoom],
  ['the other settings of sensors and actuators', settingRoom],
  ['amounts and times of a scenario', scenarioRoom],
])('an expression in %s sees what the table says', (where, room) => {
  const row = section('## Names, and who may see what')
    .split('\n')
    .find((line) => line.startsWith(`| ${where} |`));
  const seen = row?.split('|')[2].trim().split(', ').sort();
  expect(seen).toEqual(room.sees.map((kind) => `${kind}s`).sort());
});

test.each(mistakes)('the example with `%s` as `%s` gives what the reference shows', (from, to) => {
  const lines = errorsOf(heliostatWith([from, to]))
    .join('\n')
    .replaceAll('a.pawl.yaml', 'heliostat.pawl.yaml');
  expect(lines).not.toBe('');
  expect(section('## When something is wrong')).toContain(
    `\`${from}\` → \`${to}\`\n\n\`\`\`text\n${lines}\n\`\`\``,
  );
});

test.each(Object.keys(written()))('there is one place for the %s that are written from the code', (name) => {
  expect(reference.split(`<!-- ${name}: written from the code -->`)).toHaveLength(2);
  expect(reference.split(`<!-- end of ${name} -->`)).toHaveLength(2);
});

test('every link inside the page leads to a heading of it', () => {
  const headings = headingsOf(reference).map(({ anchor }) => anchor);
  for (const [, target] of reference.matchAll(/\]\(#([^)]+)\)/g)) expect(headings).toContain(target);
});
