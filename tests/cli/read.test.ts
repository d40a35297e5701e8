import { copyFileSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { Folder } from './in_process.js';

/** What the sources of the demo firmware say (azimuth_settings.c): its numbers, written there as literals. */
const settings = { kp: 2.7, ki: 0.34, kd: 1.2, rate_corner: 20 };

let folder: Folder;
beforeAll(() => {
  folder = new Folder();
  for (const name of ['azimuth.elf', 'azimuth-regressed.elf']) {
    copyFileSync(join('specs/heliostat/firmware', name), join(folder.path, name));
  }
});
afterAll(() => folder.remove());

describe('pawl read IMAGE', () => {
  it('shows everything that it holds where no path is given', async () => {
    const { status, output, errors } = await folder.run(['read', 'azimuth.elf']);
    expect({ status, errors }).toEqual({ status: 0, errors: '' });
    expect(output).toMatch(/^where in the build +value +type +stored bits +address +declared at/);
    for (const [name, value] of Object.entries(settings)) {
      expect(output).toMatch(new RegExp(`azimuth\\.gains\\.${name} +${value} +float`));
    }
    expect(output).toMatch(/azimuth_notch\[4\] +13133/);
  });

  it('shows the paths that are given, and with wildcards all that fit, each once', async () => {
    const { output } = await folder.run(['read', 'azimuth.elf', 'azimuth.gains.kd', 'azimuth.gains.*']);
    const paths = output
      .split('\n')
      .slice(1, -1)
      .map((line) => line.split(' ')[0]);
    expect(paths).toEqual(['kd', 'kp', 'ki', 'rate_corner'].map((name) => `azimuth.gains.${name}`));
  });

  it('gives one entry for each number with --json', async () => {
    const { output } = await folder.run([
      'read',
      'azimuth.elf',
      'azimuth.period_us',
      'azimuth_notch',
      '--json',
    ]);
    const entries = JSON.parse(output);
    expect(entries).toHaveLength(6);
    expect(entries[0]).toEqual({
      path: 'azimuth.period_us',
      value: 2000,
      stored: '0x000007d0',
      type: 'uint32_t',
      address: expect.stringMatching(/^0x0800[0-9a-f]{4}$/),
      file: 'azimuth_settings.c',
      line: 10,
    });
    expect(entries[2]).toMatchObject({ path: 'azimuth_notch[1]', value: -28283, stored: '0x9185' });
  });

  it('ends with status 2 and nothing on standard output where one path is wrong, and names every wrong one', async () => {
    const { status, output, errors } = await folder.run([
      'read',
      'azimuth.elf',
      'azimuth.gains.kp',
      'azimuth.gains.kpp',
      'nothing.*',
      '--json',
    ]);
    expect({ status, output }).toEqual({ status: 2, output: '' });
    expect(errors.split('\n')).toHaveLength(2);
    expect(errors).toMatch(/kpp.*kp/);
    expect(errors).toMatch(/nothing in .*azimuth\.elf.* fits .*nothing\.\*/);
  });

  it('ends with status 2 for no image, no source, and options that mean nothing', async () => {
    const failing = [
      { words: ['read'], line: /takes a spec or an image/ },
      { words: ['read', 'none.elf'], line: /none\.elf.*no such file/ },
      { words: ['read', 'azimuth.elf', '--skip-build'], line: /read as an image/ },
      { words: ['read', 'azimuth.elf', '--against', 'none.elf'], line: /none\.elf/ },
      { words: ['read', 'axis.pawl.yaml', 'azimuth.gains.kp'], line: /'azimuth\.gains\.kp' means nothing/ },
    ];
    for (const { words, line } of failing) {
      const { status, output, errors } = await folder.run(words);
      expect({ status, output }).toEqual({ status: 2, output: '' });
      expect(errors).toMatch(line);
    }
  });
});

describe('pawl read --against', () => {
  it('tells the one number that differs, as the regression was made', async () => {
    const { status, output } = await folder.run([
      'read',
      'azimuth-regressed.elf',
      '--against',
      'azimuth.elf',
    ]);
    expect(status).toBe(0);
    const rows = output.split('\n').filter((line) => /^(changed|added|vanished)/.test(line));
    expect(rows).toHaveLength(1);
    expect(rows[0]).toMatch(
      /^changed +azimuth\.gains\.ki +0\.34 +3\.4 +0x3eae147b +0x4059999a +azimuth_settings\.c:10$/,
    );
    expect(output).toMatch(/\n\d+ coefficients unchanged\n$/);
  });

  it('gives the same as JSON, and nothing but a count where nothing differs', async () => {
    const { output } = await folder.run([
      'read',
      'azimuth-regressed.elf',
      '--against',
      'azimuth.elf',
      '--json',
    ]);
    const { changed, added, vanished, unchanged } = JSON.parse(output);
    expect(changed).toHaveLength(1);
    expect(changed[0]).toMatchObject({
      path: 'azimuth.gains.ki',
      before: { stored: '0x3eae147b' },
      after: { stored: '0x4059999a' },
    });
    expect([added, vanished]).toEqual([[], []]);
    const same = await folder.run([
      'read',
      'azimuth.elf',
      'azimuth.**',
      'azimuth_notch',
      '--against',
      'azimuth.elf',
    ]);
    expect(same.output).toBe('6 coefficients unchanged\n');
    expect(unchanged).toBeGreaterThanOrEqual(6);
  });
});
