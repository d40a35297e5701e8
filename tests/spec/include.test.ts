import { expect, test } from 'vitest';
import { formatSpecError, type Includes, type LoadedSpec, loadSpec } from '../../src/spec/index.js';
import { smallSpec } from './small_spec.js';
import { vocabulary } from './vocabulary.js';

const file = 'specs/motor/a.pawl.yaml';

function load(text: string, files: Record<string, string>, within?: string): LoadedSpec {
  const includes: Includes = {
    read: (path) => (Object.hasOwn(files, path) ? files[path] : undefined),
    within,
  };
  return loadSpec(text, file, vocabulary, includes);
}

function errors(loaded: LoadedSpec): string[] {
  return loaded.kind === 'spec' ? [] : loaded.errors.map(formatSpecError);
}

/** The small spec on a plant that comes from elsewhere. */
function including(paths: string, plant = 'out: { lag: tau, of: drive, unit: V }'): string {
  return smallSpec({ plant, rest: `include: ${paths}` });
}

const drive =
  'parameters:\n  tau: { nominal: 10 ms, spread: 20 % }\n  spare: { nominal: 1 V, spread: 5 % }\n';

test('parameters of an included file can be used, and need not all be', () => {
  const loaded = load(including('[drive.yaml]'), { 'specs/motor/drive.yaml': drive });
  expect(errors(loaded)).toEqual([]);
  if (loaded.kind === 'errors') return;
  expect(loaded.spec.parameters.map(({ name }) => name)).toEqual(['tau', 'spare']);
  expect(loaded.spec.parameters[0].place).toEqual({ file: 'specs/motor/drive.yaml', line: 2, column: 3 });
});

test('a whole plant can be included, with constants, inputs, sensors and actuators', () => {
  const text = smallSpec({
    inputs: '',
    plant: '',
    sensors: '',
    actuators: '',
    rest: 'include: [parts/all.yaml]',
  });
  const part = [
    'constants: { lift: 2 V }',
    'inputs: { goal: { unit: V } }',
    'plant: { out: { lag: 1 ms, of: drive + lift, unit: V } }',
    'sensors: { seen: { of: out, unit: V } }',
    'actuators: { drive: { of: command, unit: V } }',
  ].join('\n');
  expect(errors(load(text, { 'specs/motor/parts/all.yaml': part }))).toEqual([]);
});

test('what a part includes comes before it, what the spec defines comes last, and each file is read once', () => {
  const files = {
    'specs/motor/a.yaml': 'include: [deep/c.yaml]\nplant: { a: { value: drive, unit: V } }',
    'specs/motor/b.yaml': 'include: [deep/c.yaml]\nplant: { b: { value: drive, unit: V } }',
    'specs/motor/deep/c.yaml': 'include: [../d.yaml]\nplant: { c: { value: drive, unit: V } }',
    'specs/motor/d.yaml': 'plant: { d: { value: drive, unit: V } }',
  };
  const loaded = load(including('[a.yaml, b.yaml]', 'out: { lag: 1 ms, of: drive, unit: V }'), files);
  expect(errors(loaded)).toEqual([]);
  if (loaded.kind === 'spec')
    expect(loaded.spec.plant.map(({ name }) => name)).toEqual(['d', 'c', 'a', 'b', 'out']);
});

test('an error in an included file has its place there', () => {
  const part = 'parameters:\n  tau: { nominal: 10 ms, spred: 20 % }\nplants: {}\n';
  expect(errors(load(including('[drive.yaml]'), { 'specs/motor/drive.yaml': part }))).toEqual([
    'specs/motor/drive.yaml:2:26: unknown key `spred` in `tau`; did you mean `spread`?',
    'specs/motor/drive.yaml:3:1: unknown key `plants` in the spec; did you mean `plant`?',
  ]);
});

test('a name of an included file cannot be defined again', () => {
  const text = smallSpec({
    parameters: 'tau: { nominal: 1 ms, spread: 1 % }',
    plant: 'out: { lag: tau, of: drive, unit: V }',
    rest: 'include: [drive.yaml]',
  });
  expect(errors(load(text, { 'specs/motor/drive.yaml': drive }))).toEqual([
    `${file}:10:3: the name \`tau\` is already taken by the parameter at specs/motor/drive.yaml:2; every name is defined once`,
  ]);
});

test('a cycle is refused where it closes', () => {
  const files = {
    'specs/motor/a.yaml': 'include: [b.yaml]',
    'specs/motor/b.yaml': 'constants: {}\ninclude: [a.yaml]',
  };
  expect(errors(load(including('[a.yaml]', 'out: { lag: 1 ms, of: drive, unit: V }'), files))).toEqual([
    'specs/motor/b.yaml:2:11: `a.yaml` is included in a cycle: specs/motor/a.yaml → specs/motor/b.yaml → specs/motor/a.yaml',
  ]);
  expect(errors(load(including('[a.pawl.yaml]', 'out: { lag: 1 ms, of: drive, unit: V }'), {}))).toEqual([
    `${file}:31:11: \`a.pawl.yaml\` is included in a cycle: ${file} → ${file}`,
  ]);
});

test.each([
  '../other/drive.yaml',
  '/etc/drive.yaml',
  'C:/drive.yaml',
  'a\\b.yaml',
  '..',
  '.',
  'x/../../y.yaml',
])('the path %s leads outside', (path) => {
  const found = errors(load(including(`['${path}']`, 'out: { lag: 1 ms, of: drive, unit: V }'), {}));
  expect(found).toEqual([
    `${file}:31:11: \`${path}\` leads outside \`specs/motor\`; an included file lies in that folder`,
  ]);
});

test('the caller may open a wider folder, and nothing beyond it', () => {
  const files = { 'specs/shared/drive.yaml': drive, 'drive.yaml': drive };
  expect(errors(load(including('[../shared/drive.yaml]'), files, 'specs'))).toEqual([]);
  expect(errors(load(including('[../../drive.yaml]'), files, 'specs'))[0]).toContain('leads outside `specs`');
});

test('a file that is not there, or is no mapping, or no YAML', () => {
  const plain = 'out: { lag: 1 ms, of: drive, unit: V }';
  expect(errors(load(including('[drive.yaml]', plain), {}))).toEqual([
    `${file}:31:11: \`drive.yaml\` cannot be read: there is no file \`specs/motor/drive.yaml\``,
  ]);
  expect(errors(loadSpec(including('[drive.yaml]', plain), file, vocabulary) as LoadedSpec)).toEqual([
    `${file}:31:11: \`drive.yaml\` cannot be read: there is no file \`specs/motor/drive.yaml\``,
  ]);
  expect(errors(load(including('[drive.yaml]', plain), { 'specs/motor/drive.yaml': '- a' }))).toEqual([
    'specs/motor/drive.yaml:1:1: an included file is a mapping of sections, such as parameters and plant',
  ]);
  expect(errors(load(including('[drive.yaml]', plain), { 'specs/motor/drive.yaml': 'a: [' }))[0]).toContain(
    'specs/motor/drive.yaml:1:5: this is not YAML',
  );
  expect(errors(load(including('drive.yaml', plain), {}))).toEqual([
    `${file}:31:10: \`include\` is \`drive.yaml\`; expected a list of paths, such as [shared/motor.yaml]`,
  ]);
});

test('requirements, controllers and firmware belong to the spec itself', () => {
  const part = 'requirements: []\nfirmware: {}\ncontrollers: {}';
  const found = errors(
    load(including('[a.yaml]', 'out: { lag: 1 ms, of: drive, unit: V }'), { 'specs/motor/a.yaml': part }),
  );
  expect(found).toHaveLength(3);
  for (const line of found) expect(line).toContain('unknown key');
});

test('endless chains of files are refused', () => {
  const read = (path: string) => `include: [${Number(/\d+/.exec(path)?.[0] ?? 0) + 1}.yaml]`;
  const loaded = loadSpec(including('[0.yaml]', 'out: { lag: 1 ms, of: drive, unit: V }'), file, vocabulary, {
    read,
  });
  expect(errors(loaded)).toEqual([expect.stringContaining('more than 50 files are included')]);
});
