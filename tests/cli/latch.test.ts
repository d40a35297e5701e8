import { cpSync, mkdirSync, readdirSync, readFileSync } from 'node:fs';
import { join, resolve } from 'node:path';
import { execa } from 'execa';
import { afterAll, afterEach, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { initialiserLine } from '../../src/cli/locate_sources.js';
import { firmwareFolder, float, imageWith, quickText } from '../verdict/latched/demo_changes.js';
import { Folder } from './in_process.js';

// Protects the reference that later merges are held against: what is written, when nothing is, and what a check makes of it.

const built = resolve('dist/cli/main.js');

/** A lag under a proportional law, without parameters and images: judged at once. */
const axis = (limit = '0.7', waivers = '') => `pawl: 1
loop: A small axis
inputs: { target: {} }
plant:
  speed: { lag: 1 s, of: drive }
sensors: { seen: { of: speed } }
controllers:
  law: { every: 50 ms, signals: { output: { value: 2 * (target - seen) } } }
actuators: { drive: { of: output } }
scenarios:
  step: { lasts: 4 s, inputs: { target: { step: 1, at: 0.5 s } } }
requirements:
  - { name: R1, measure: overshoot, of: speed, to: target, in: step, at_most: 20 % }
  - { name: R2, measure: largest_value, of: speed, in: step, at_most: ${limit} }
merge:
  reference: latched/axis.json
  may_slip: 5 %
${waivers}`;
const waiver = (until: string) =>
  `  waivers: [{ requirement: R2, reason: the new motor comes in March, until: ${until} }]\n`;

describe('pawl latch', () => {
  let folder: Folder;
  beforeEach(() => {
    folder = new Folder();
    folder.write('axis.pawl.yaml', axis());
  });
  afterEach(() => folder.remove());
  const latch = (...words: string[]) => folder.run(['latch', '--reason', 'first', ...words]);
  const kept = () => JSON.parse(folder.read('latched/axis.json'));
  const isLatched = () => readdirSync(folder.path).includes('latched');

  it('writes limits, results, worst plants and versions, and says what it wrote', async () => {
    expect(await latch('axis.pawl.yaml')).toEqual({
      ...{
        status: 0,
        errors: '',
        output: 'latched 2 requirements and 0 coefficients in latched/axis.json\n',
      },
    });
    const { requirements, ...rest } = kept();
    expect(rest).toMatchObject({ format: 1, loop: 'A small axis', reason: 'first', image: null, law: {} });
    // A proportional law with gain k = 2 around a lag of gain one: speed rests at k / (1 + k).
    expect(requirements.R2).toMatchObject({ limit: { at_most: 0.7 }, verdict: 'met', plant: {} });
    expect(requirements.R2.worst.value).toBeCloseTo(2 / 3, 2);
    expect(requirements.R2.worst.headroom).toBeCloseTo((0.7 - requirements.R2.worst.value) / 0.7, 12);
  });

  it('leaves no part of a file behind, and writes the same bytes again', async () => {
    await latch();
    const first = folder.read('latched/axis.json');
    await latch();
    expect(folder.read('latched/axis.json')).toBe(first);
    expect(readdirSync(join(folder.path, 'latched'))).toEqual(['axis.json']);
  });

  it('needs a reason', async () => {
    for (const words of [['latch'], ['latch', '--reason', '  ']]) {
      const ended = await folder.run(words);
      expect(ended).toMatchObject({ status: 2, errors: /^pawl latch needs a reason/ });
    }
    expect(isLatched()).toBe(false);
  });

  it('needs a merge section', async () => {
    folder.write('axis.pawl.yaml', axis().split('merge:')[0]);
    expect(await latch()).toMatchObject({ status: 2, errors: /axis\.pawl\.yaml: has no merge section/ });
  });

  it('refuses what is broken, but for a waiver in force, which it keeps', async () => {
    folder.write('axis.pawl.yaml', axis('0.5'));
    const refused = await latch();
    expect(refused).toMatchObject({ status: 1, output: '' });
    expect(refused.errors).toBe(
      "nothing was latched:\naxis.pawl.yaml:15:1: R2 is broken, and no waiver in the spec's merge section names it\n",
    );
    expect(isLatched()).toBe(false);
    folder.write('axis.pawl.yaml', axis('0.5', waiver('2026-11-30')));
    expect((await latch()).errors).toContain('R2 is broken, and its waiver expired on 2026-11-30');
    folder.write('axis.pawl.yaml', axis('0.5', waiver('2026-12-01')));
    expect((await latch()).status).toBe(0);
    expect(kept().requirements.R2).toMatchObject({
      ...{ verdict: 'broken', waiver: { reason: 'the new motor comes in March', until: '2026-12-01' } },
    });
  });

  it('refuses what is unjudged, unless told otherwise', async () => {
    // Undamped and too fast for its step, so that no number stands.
    const unjudged = axis().replace(
      'of: speed, in: step, at_most: 0.7',
      'of: speed, in: step, from: 9 s, at_most: 0.7',
    );
    folder.write('axis.pawl.yaml', unjudged.replace('largest_value', 'largest_value, until: 10 s'));
    const refused = await latch();
    expect(refused).toMatchObject({ status: 1, errors: /R2 is unjudged: .*; --with-unjudged latches it so/ });
    expect((await latch('--with-unjudged')).status).toBe(0);
    expect(kept().requirements.R2).toMatchObject({
      verdict: 'unjudged',
      worst: { value: null, headroom: null },
    });
  });

  it('writes nothing at all where one of several specs may not be latched', async () => {
    folder.write('broken.pawl.yaml', axis('0.5').replace('latched/axis', 'latched/broken'));
    expect((await latch()).status).toBe(1);
    expect(isLatched()).toBe(false);
    folder.write('broken.pawl.yaml', axis());
    expect(await latch()).toMatchObject({ status: 2, errors: /every spec has a reference of its own/ });
    expect(isLatched()).toBe(false);
  });

  it('says where it cannot write', async () => {
    folder.write('latched', 'a file where a folder should be');
    expect(await latch()).toMatchObject({ status: 2, errors: /the latched reference cannot be written: / });
  });
});

describe('pawl check against a reference', () => {
  let folder: Folder;
  beforeEach(async () => {
    folder = new Folder();
    folder.write('axis.pawl.yaml', axis());
  });
  afterEach(() => folder.remove());
  const check = (today = '2026-12-01') => folder.run(['check', '--out', 'out'], { today });

  it('passes without one, and says that nothing is compared', async () => {
    const ended = await check();
    expect(ended.status).toBe(0);
    expect(ended.output.replace(/\s+/g, ' ')).toContain(
      'there is no latched reference latched/axis.json yet, so nothing is compared',
    );
  });

  it.each([
    [
      '{',
      /axis\.pawl\.yaml:15:1: the latched reference latched\/axis\.json cannot be read: it is not JSON: /,
    ],
    ['{"format": 9}', /it has format 9, and this version of pawl reads format 1/],
    ['{"format": 1, "loop": 3}', /cannot be read: at \w+: /],
  ])('ends with status 2 where it is %s', async (text, message) => {
    mkdirSync(join(folder.path, 'latched'));
    folder.write('latched/axis.json', text);
    const ended = await check();
    expect(ended).toMatchObject({ status: 2, output: '' });
    expect(ended.errors).toMatch(message);
    expect(folder.read('out/junit.xml')).toMatch(/<error /);
  });

  it('ends with status 2 where it is a folder', async () => {
    mkdirSync(join(folder.path, 'latched/axis.json'), { recursive: true });
    expect(await check()).toMatchObject({
      ...{
        status: 2,
        errors: /the latched reference latched\/axis\.json cannot be read: it is a folder; take it/,
      },
    });
  });

  it('tells a tightened limit, and lets a waiver through for its time only', async () => {
    folder.write('axis.pawl.yaml', axis('0.5', waiver('2027-03-01')));
    await folder.run(['latch', '--reason', 'known']);
    const open = await check('2027-03-01');
    expect(open.status).toBe(0);
    expect(open.output).toContain('waived until 2027-03-01: the new motor comes in March');
    expect(open.output).toContain('merge may go through: 1 requirement met, 1 broken but waived');
    const expired = await check('2027-03-02');
    expect(expired.status).toBe(1);
    expect(expired.output.replace(/\s+/g, ' ')).toContain(
      'a waiver does not count, since it expired on 2027-03-01',
    );
  });

  it('does not let a waiver through for what was never latched as broken', async () => {
    await folder.run(['latch', '--reason', 'all met']);
    folder.write('axis.pawl.yaml', axis('0.5', waiver('2027-03-01')));
    const ended = await check();
    expect(ended.status).toBe(1);
    expect(ended.output.replace(/\s+/g, ' ')).toContain('the latched reference does not hold it as broken');
    expect(ended.output).toContain('its limit');
  });
});

describe('the demo firmware, latched and changed', () => {
  const folder = new Folder();
  const spec = (law = '') =>
    quickText()
      .replace('../../reference/latched/heliostat.json', 'latched/axis.json')
      .replace('  coefficients:', `${law}  coefficients:`);
  const words = ['axis.pawl.yaml', '--skip-build'];
  /** As a user runs it: with the built command, whose workers are built too. */
  const pawl = async (command: string, ...more: string[]) => {
    const env = { GITHUB_ACTIONS: 'true', GITHUB_WORKSPACE: folder.path, GITHUB_STEP_SUMMARY: '' };
    const options = { cwd: folder.path, reject: false, env } as const;
    const { exitCode, stdout, stderr } = await execa('node', [built, command, ...words, ...more], options);
    return { status: exitCode, output: stdout, errors: stderr };
  };

  beforeAll(async () => {
    cpSync(firmwareFolder, join(folder.path, 'firmware'), { recursive: true });
    folder.write('axis.pawl.yaml', spec('  law: [azimuth_init, azimuth_step]\n'));
    await pawl('latch', '--reason', 'first release');
  });
  afterAll(() => folder.remove());

  it('keeps stored bits, places, units and digests of the law', () => {
    const reference = JSON.parse(folder.read('latched/axis.json'));
    expect(reference.coefficients.ki).toEqual({
      ...{
        at: 'azimuth.gains.ki',
        type: 'float',
        unit: '1/s',
        format: 'float32',
        fractional_bits: null,
        shape: [],
      },
      ...{ stored: ['0x3eae147b'], values: [Math.fround(0.34)] },
    });
    expect(reference.coefficients.notch).toMatchObject({ format: 'Q2.14', fractional_bits: 14, shape: [5] });
    // readelf -s of the image in git: 64 and 368 bytes.
    expect(reference.law).toMatchObject({ azimuth_init: { size: 64 }, azimuth_step: { size: 368 } });
    expect(reference.image.compilers[0]).toMatch(/^GNU C11/);
    expect(folder.read('latched/axis.json')).not.toContain(folder.path);
  });

  it('are shown by pawl read of the spec', async () => {
    const { law } = JSON.parse(folder.read('latched/axis.json'));
    const ended = await pawl('read');
    expect(ended.output).toMatch(new RegExp(`^azimuth_step +368 +${law.azimuth_step.digest}$`, 'm'));
  });

  it('shows in the terminal, in annotations and in files who did it, at the line of the initialiser', async () => {
    const image = imageWith({ 'azimuth.gains.kp': float(1.5) });
    cpSync(image, join(folder.path, 'firmware/azimuth.elf'));
    const ended = await pawl('check', '--out', 'out');
    expect(ended.status).toBe(1);
    expect(ended.output).toContain(
      'kp 2.7 → 1.5 (firmware/azimuth_settings.c:12) accounts for 100 % of the loss',
    );
    const source = readFileSync(join(firmwareFolder, 'azimuth_settings.c'), 'utf8').split('\n');
    expect(source[12 - 1]).toContain('.kp = 2.7f');
    expect(ended.output).toMatch(
      /^::error file=firmware\/azimuth_settings\.c,line=12,title=kp 2\.7 → 1\.5::/m,
    );
    const { requirements } = JSON.parse(folder.read('out/run.json')).specs[0];
    expect(requirements.map(({ verdict }: { verdict: string }) => verdict)).toEqual([
      'met',
      'slipped',
      'met',
      'met',
      'met',
    ]);
    expect(folder.read('out/report.html')).toContain('share of the loss');
  });

  it('names a function that is not there at its place in the spec', async () => {
    const law = '  law: [azimuth_init, azimuth_stepp]\n';
    folder.write('axis.pawl.yaml', spec(law));
    const ended = await pawl('check');
    const line =
      spec(law)
        .split('\n')
        .findIndex((text) => text.includes('stepp')) + 1;
    expect(ended.status).toBe(2);
    expect(ended.errors).toMatch(
      new RegExp(
        `^axis\\.pawl\\.yaml:${line}:23: “firmware/azimuth\\.elf” has no function “azimuth_stepp”; nearest: “azimuth_step”`,
      ),
    );
  });
});

describe('the line of an initialiser', () => {
  const lines = [
    'int a;',
    'const struct s x = {',
    '  .g = {',
    '    .kp = 1,',
    '    .ki = 2,',
    '  },',
    '};',
    'const struct s y = { .kp = 3 };',
  ];

  it('is that of the member in the definition that begins at the declared line', () => {
    expect(initialiserLine(lines, 2, 'x.g.kp')).toBe(4);
    expect(initialiserLine(lines, 2, 'x.g.ki')).toBe(5);
    expect(initialiserLine(lines, 8, 'y.kp')).toBe(8);
  });

  it('is the declared one where there is no member, none like it, or several', () => {
    expect(initialiserLine(lines, 1, 'a')).toBe(1);
    expect(initialiserLine(lines, 2, 'x.g.kd')).toBe(2);
    expect(initialiserLine(['x = {', '.k = 1,', '.k = 2,', '}'], 1, 'x.k')).toBe(1);
    expect(initialiserLine([], 7, 'x.k')).toBe(7);
  });
});
