import { readdirSync, readFileSync } from 'node:fs';
import { Ajv, type ValidateFunction } from 'ajv';
import fc from 'fast-check';
import { beforeAll, describe, expect, it } from 'vitest';
import { parse } from 'yaml';
import { vocabulary } from '../../src/cli/vocabulary.js';
import { Workplace } from './workplace.js';

const demos = readdirSync('specs', { recursive: true, encoding: 'utf8' })
  .filter((path) => path.endsWith('.pawl.yaml'))
  .map((path) => `specs/${path}`);
const demo = readFileSync('specs/heliostat/heliostat.pawl.yaml', 'utf8');

/** The printed schema as ajv reads it, strictly; ajv and the YAML reader know nothing of pawl. */
describe('pawl schema', () => {
  let text: string;
  let validate: ValidateFunction;
  beforeAll(async () => {
    const place = new Workplace();
    const ended = await place.pawl('schema');
    expect(ended).toMatchObject({ status: 0, errors: '' });
    text = ended.output;
    validate = new Ajv({ strict: true, allowUnionTypes: true, allErrors: true }).compile(JSON.parse(text));
    place.remove();
  });

  /** Where the schema finds fault, and with what. */
  const faults = (spec: string): string[] => {
    validate(parse(spec));
    return (validate.errors ?? []).map(({ instancePath, keyword, params }) =>
      [instancePath, keyword, params.additionalProperty ?? params.missingProperty ?? ''].join(' ').trim(),
    );
  };

  it.each(demos)('takes the demo spec %s', (path) => {
    expect(faults(readFileSync(path, 'utf8'))).toEqual([]);
  });

  it('takes the example of the reference', () => {
    const [, example] = /```yaml\n(pawl: 1.*?)```/s.exec(readFileSync('specs/README.md', 'utf8'))!;
    expect(faults(example)).toEqual([]);
  });

  it('takes a loop that is opened at one signal or at several', () => {
    for (const at of ['duty', '[duty]', '[duty, encoder]'])
      expect(faults(demo.replaceAll('at: duty,', `at: ${at},`))).toEqual([]);
  });

  const broken: [name: string, change: (spec: string) => string, fault: string][] = [
    ['a misspelt section', (spec) => spec.replace('inputs:', 'input:'), 'additionalProperties input'],
    [
      'a misspelt key',
      (spec) => spec.replace('spread: 20 %', 'spred: 20 %'),
      '/parameters/inertia additionalProperties spred',
    ],
    ['no requirements', (spec) => spec.replace('requirements:', 'scenario:'), 'required requirements'],
    [
      'an unknown measure',
      (spec) => spec.replace('measure: overshoot', 'measure: overshot'),
      '/requirements/0/measure oneOf',
    ],
    ['no name', (spec) => spec.replace('{ name: AZ-1, ', '{ '), '/requirements/0 required name'],
    [
      'a list for a text',
      (spec) => spec.replace('nominal: 38 kg*m^2', 'nominal: [38]'),
      '/parameters/inertia/nominal type',
    ],
    [
      'one bound for a range',
      (spec) => spec.replace('range: [-1, 1] }\n\nscen', 'range: [-1] }\n\nscen'),
      '/actuators/duty/range minItems',
    ],
    [
      'an empty list of signals',
      (spec) => spec.replace('at: duty,', 'at: [],'),
      '/requirements/4/at minItems',
    ],
    [
      'a mapping of signals',
      (spec) => spec.replace('at: duty,', 'at: { first: duty },'),
      '/requirements/4/at type',
    ],
    [
      'a build that is no list',
      (spec) => spec.replace('build: [make, -s, -C, firmware]', 'build: make'),
      '/firmware/build type',
    ],
  ];
  it.each(broken)('finds %s', (_, change, fault) => {
    const changed = change(demo);
    expect(changed).not.toBe(demo);
    expect(faults(changed).join('\n')).toContain(fault);
  });

  it('takes numbers and truth values wherever a spec has text, as a spec is written without quotes', () => {
    fc.assert(
      fc.property(
        fc.oneof(fc.integer(), fc.boolean(), fc.double({ noNaN: true, noDefaultInfinity: true })),
        (value) => {
          const spec = parse(demo);
          spec.loop = value;
          spec.perturbation.plants = value;
          spec.actuators.duty.range = [value, value];
          expect(validate(spec)).toBe(true);
        },
      ),
      { numRuns: 50 },
    );
  });

  it('takes a section whose contents are commented out, as a spec does', () => {
    expect(faults(demo.replace(/merge:\n.*\n.*/, 'merge:'))).toEqual([]);
  });

  it('names every measure with its definition, every block and every shape, for completion', () => {
    for (const { name, meaning } of vocabulary.measures) {
      expect(text).toContain(`"const": ${JSON.stringify(name)}`);
      expect(text).toContain(JSON.stringify(meaning));
    }
    for (const { key } of [...vocabulary.blocks, ...vocabulary.shapes]) expect(text).toContain(`"${key}": {`);
  });

  it('of included files takes shared sections and nothing else', async () => {
    const place = new Workplace();
    const { output } = await place.pawl('schema', '--included');
    const ofPart = new Ajv({ strict: true, allowUnionTypes: true }).compile(JSON.parse(output));
    expect(ofPart({ parameters: { mass: { nominal: '1 kg', spread: '5 %' } } })).toBe(true);
    expect(ofPart({ requirements: [] })).toBe(false);
    place.remove();
  });
});
