import { copyFileSync } from 'node:fs';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { chooseLaw } from '../../src/cli/choose_law.js';
import { firstSpec } from '../../src/cli/first_spec.js';
import { vocabulary } from '../../src/cli/vocabulary.js';
import type { Candidate } from '../../src/firmware/index.js';
import { formatSpecError, loadSpec, type Spec } from '../../src/spec/index.js';
import { judgeSpec } from '../../src/verdict/judge_spec.js';
import { Folder } from './in_process.js';
import { Workplace } from './workplace.js';

/** A number in an image. */
function candidate(path: string, value: number | number[]): Candidate {
  const values = [value].flat();
  const shape = Array.isArray(value) ? [values.length] : [];
  return {
    request: { name: path.replaceAll(/\W/g, '_'), at: path },
    kind: 'float',
    coefficient: {
      path,
      elements: values.map((one) => ({ value: one, stored: '0x00000000', address: 0 })),
      shape,
      type: 'float',
      format: { kind: 'float', bits: 32 },
      declaredAt: undefined,
    },
  };
}

function specOf(found: Candidate[]): Spec {
  const loaded = loadSpec(firstSpec('drive', 'drive.elf', found)!, 'drive.pawl.yaml', vocabulary);
  if (loaded.kind === 'errors') throw new Error(loaded.errors.map(formatSpecError).join('\n'));
  return loaded.spec;
}

describe('pawl start', () => {
  it('writes a spec for the demo image that runs and is met as it is', async () => {
    const place = new Workplace();
    const started = await place.pawl('start', 'firmware/azimuth.elf');
    expect(started).toMatchObject({ status: 0, errors: '' });
    expect(started.output).toContain('azimuth.pawl.yaml');
    const spec = place.read('azimuth.pawl.yaml');
    expect(spec).toContain('kd: { at: azimuth.gains.kd, unit: s }');
    expect(spec).toContain('# rate_corner: azimuth.gains.rate_corner');
    place.write('azimuth.pawl.yaml', spec.replace('plants: 100', 'plants: 4\n  search: 4'));
    expect(await place.pawl('check', 'azimuth.pawl.yaml')).toMatchObject({ status: 0, errors: '' });
    place.remove();
  });
});

describe('pawl start on its own', () => {
  let folder: Folder;
  beforeEach(() => {
    folder = new Folder();
    copyFileSync('specs/heliostat/firmware/azimuth.elf', join(folder.path, 'azimuth.elf'));
  });
  afterEach(() => folder.remove());

  it('shows where its reference and the law would stand: without the hashes both work', async () => {
    await folder.run(['start', 'azimuth.elf']);
    const lines = folder.read('azimuth.pawl.yaml').split('\n');
    const merge = lines.findIndex((line) => line.startsWith('# merge:'));
    const quick = lines.map((line, at) =>
      at >= merge ? line.replace(/^# ?/, '') : line.replace('plants: 100', 'plants: 4\n  search: 4'),
    );
    const text = quick.join('\n').replace('# law: [control_step]  ', 'law: [azimuth_step] # ');
    folder.write('azimuth.pawl.yaml', text);
    expect((await folder.run(['check'])).status).toBe(1);
    expect(await folder.run(['latch', '--reason', 'first'])).toMatchObject({
      ...{
        status: 0,
        errors: '',
        output: 'latched 3 requirements and 4 coefficients in latched/azimuth.json\n',
      },
    });
    expect(await folder.run(['check'])).toMatchObject({ status: 0, errors: '' });
  });

  it('writes over nothing', async () => {
    folder.write('azimuth.pawl.yaml', 'mine');
    const { status, errors } = await folder.run(['start', 'azimuth.elf']);
    expect(status).toBe(2);
    expect(errors).toContain('azimuth.pawl.yaml is there already');
    expect(folder.read('azimuth.pawl.yaml')).toBe('mine');
  });

  it('ends with status 2 for what is no image, and for no or two images', async () => {
    folder.write('text.elf', 'not an image');
    for (const words of [
      ['start', 'text.elf'],
      ['start', 'none.elf'],
      ['start'],
      ['start', 'a.elf', 'b.elf'],
    ]) {
      const { status, output, errors } = await folder.run(words);
      expect({ status, output }).toEqual({ status: 2, output: '' });
      expect(errors).not.toBe('');
    }
  });
});

describe('the law of a first spec', () => {
  it('is a PID where there is a proportional gain, with the gains that stand beside it', () => {
    const law = chooseLaw([
      candidate('other.ki', 7),
      candidate('speed.kp', 2),
      candidate('speed.ki', 5),
      candidate('sample_time_us', 500),
    ])!;
    expect(law.block).toBe('{ pid: { kp: kp, ki: ki }, of: error }');
    expect(law.roles.ki!.request.at).toBe('speed.ki');
    expect(law.every).toBe('period');
    expect(law.units).toEqual({ ki: '1/s', period: 'us' });
  });

  it('is a plain factor elsewhere: the first number that is not zero, of a table its element', () => {
    const law = chooseLaw([candidate('nothing', 0), candidate('taps', [0, 0.5])])!;
    expect(law.block).toBe('{ value: factor * error }');
    expect(law.roles.factor!.request.at).toBe('taps[1]');
    expect(law.plant.gain).toBe(2);
  });

  it('is none where every number is zero or not finite', () => {
    expect(
      chooseLaw([candidate('a', 0), candidate('b', [Number.NaN, Number.POSITIVE_INFINITY])]),
    ).toBeUndefined();
  });

  it('takes no period that no controller has', () => {
    expect(chooseLaw([candidate('gain', 1), candidate('period_s', 3600)])!.every).toBe('10 ms');
  });

  // Signs and sizes as firmware has them: scaled integers, negative gains, tiny and huge ones.
  const images: Record<string, Candidate[]> = {
    'a negative gain': [candidate('kp', -0.02)],
    'a huge integer': [candidate('regulator.kp', 27_000), candidate('regulator.ki', 340)],
    'a quick integral': [candidate('kp', 0.5), candidate('ki', 400), candidate('dt_ms', 1)],
    'a strong derivative': [candidate('kp', 1), candidate('kd', 3), candidate('period_us', 100)],
    'one number': [candidate('x', 1e-6)],
    'a name that YAML would read otherwise': [candidate('a::b<c, d>::kp', 3)],
  };
  it.each(Object.entries(images))('gives a spec that loads and is met: %s', async (_, found) => {
    const spec = specOf(found);
    const numbers = new Map(
      spec.firmware!.coefficients.map(({ name, at }) => [
        name,
        found
          .find(({ coefficient }) => coefficient.path === at)!
          .coefficient.elements.map(({ value }) => value),
      ]),
    );
    const quick = { ...spec, perturbation: { ...spec.perturbation, plants: 0, search: 0 } };
    const { requirements } = await judgeSpec(quick, numbers, { workers: 1 });
    expect(requirements.map(({ verdict }) => verdict.kind)).toEqual(['met', 'met', 'met']);
  });
});
