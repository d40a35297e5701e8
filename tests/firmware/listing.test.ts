import { readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { beforeAll, describe, expect, test } from 'vitest';
import {
  candidates,
  compareImages,
  type FirmwareImage,
  isPattern,
  matchPaths,
  openImage,
  readCoefficient,
} from '../../src/firmware/index.js';
import { fixtures, freshFolder, leaveOut, run } from './toolchain.js';

/** What an image holds is listed completely and once, matched by wildcards, and compared with another build. */
/** What gains.c leaves to the running program. */
const withoutValue = ['cleared', 'command'];

const arm = ['-mcpu=cortex-m4', '-mthumb', '-ffreestanding', '-nostdlib', '-O2', '-g'];

describe.skipIf(leaveOut('arm-none-eabi-gcc', 'arm-none-eabi-g++'))('an image', () => {
  const folder = freshFolder();
  let image: FirmwareImage;
  let classes: FirmwareImage;
  let changed: FirmwareImage;
  let merged: FirmwareImage;

  beforeAll(async () => {
    const open = async (name: string, program: string, ...args: string[]) => {
      await run(program, [...arm, '-o', join(folder, name), ...args]);
      return openImage(readFileSync(join(folder, name)), name);
    };
    const source = readFileSync(join(fixtures, 'gains.c'), 'utf8');
    const edited = source
      .replace('{1.25f, 0.4f,', '{1.25f, 0.5f,')
      .replace('const double ratio = 0.1;', 'const float ratio = 0.1f;')
      .replaceAll('wide_count', 'renamed_count')
      .replace(
        'static const int8_t signs[4] = {-1, 0, 1, -128};',
        'static const int8_t signs[3] = {-1, 0, 1};',
      );
    writeFileSync(join(folder, 'edited.c'), edited);
    image = await open('a.elf', 'arm-none-eabi-gcc', 'gains.c');
    changed = await open('b.elf', 'arm-none-eabi-gcc', join(folder, 'edited.c'));
    classes = await open('c.elf', 'arm-none-eabi-g++', 'filters.cpp');
    merged = await open('d.elf', 'arm-none-eabi-gcc', '-flto', 'gains.c');
  });

  describe('wildcards', () => {
    test.each<[string, string[]]>([
      [
        'azimuth.gains.*',
        ['azimuth.gains.kp', 'azimuth.gains.ki', 'azimuth.gains.kd', 'azimuth.gains.corner'],
      ],
      ['*.gains.k?', []],
      ['**.ki', ['azimuth.gains.ki']],
      ['channels[*].slope', ['channels[0].slope', 'channels[1].slope', 'channels[2].slope']],
      ['azimuth_notch[*]', [0, 1, 2, 3, 4].map((i) => `azimuth_notch[${i}]`)],
      ['grid[1][*]', ['grid[1][0]', 'grid[1][1]', 'grid[1][2]']],
      ['azimuth_*', ['azimuth_notch']],
      ['update::*', ['update::taps']],
      ['azimuth.trim.*', ['azimuth.trim.raw', 'azimuth.trim.real']],
      [
        'azimuth.*',
        [
          'azimuth.period_us',
          'azimuth.low',
          'azimuth.high',
          'azimuth.mode',
          'azimuth.bias',
          'azimuth.wide',
          'azimuth.drive',
          'azimuth.small',
        ],
      ],
    ])('%s', (pattern, paths) => {
      if (paths.length === 0) expect(() => matchPaths(image, pattern)).toThrow(/nothing in “a\.elf” fits/);
      else expect(matchPaths(image, pattern)).toEqual(paths);
    });

    test('everything that is listed can be read, but for what has no value', () => {
      const paths = matchPaths(image, '**');
      expect(paths.length).toBeGreaterThan(35);
      expect(new Set(paths).size).toBe(paths.length);
      for (const path of paths.filter((candidate) => !withoutValue.includes(candidate))) {
        expect(readCoefficient(image, { name: path, at: path }).elements.length, path).toBeGreaterThan(0);
      }
    });

    test('link-time optimisation changes nothing in the list', () => {
      const sorted = (other: FirmwareImage) => matchPaths(other, '**').sort();
      expect(sorted(merged)).toEqual(sorted(image));
    });

    test('a path without a wildcard stays as it is', () => {
      expect(matchPaths(image, 'no.such[3].path')).toEqual(['no.such[3].path']);
      expect([isPattern('a.b'), isPattern('a.*'), isPattern('a[*]')]).toEqual([false, true, true]);
    });

    test('C++ names are written with their scopes', () => {
      expect(matchPaths(classes, '**').sort()).toEqual(
        [
          'Filter<float, 3>::taps',
          'drive::Limits::slope',
          'drive::hidden',
          'drive::limits.high',
          'drive::limits.low',
          'drive::limits.rate',
          'drive::version2::revision',
          'gain_reference',
          'shape',
          'stored_gain',
        ].sort(),
      );
    });
  });

  describe('comparing two builds', () => {
    test('an image is the same as itself', () => {
      const { changed: differing, added, vanished, unchanged } = compareImages(image, image);
      expect([differing, added, vanished]).toEqual([[], [], []]);
      expect(unchanged).toBe(matchPaths(image, '**').length - withoutValue.length);
    });

    test('what changed, was added and has vanished is listed, whatever moved', () => {
      const result = compareImages(image, changed);
      expect(result.changed.map(({ path }) => path).sort()).toEqual(['azimuth.gains.ki', 'ratio', 'signs']);
      const [gain] = result.changed.filter(({ path }) => path === 'azimuth.gains.ki');
      expect([gain.before.elements[0].value, gain.after.elements[0].value]).toEqual([Math.fround(0.4), 0.5]);
      expect(result.added.map(({ path }) => path)).toEqual(['renamed_count']);
      expect(result.vanished.map(({ path }) => path)).toEqual(['wide_count']);
    });

    test('a pattern narrows it', () => {
      expect(compareImages(image, changed, 'azimuth.**').changed).toHaveLength(1);
      expect(compareImages(image, changed, 'grid[*][*]')).toMatchObject({ changed: [], unchanged: 6 });
      expect(compareImages(image, changed, 'renamed_*').added).toHaveLength(1);
    });

    test('the other way round it is mirrored', () => {
      const [there, back] = [compareImages(image, changed), compareImages(changed, image)];
      expect(back.added.map(({ path }) => path)).toEqual(there.vanished.map(({ path }) => path));
      expect(back.changed.map(({ path }) => path).sort()).toEqual(
        there.changed.map(({ path }) => path).sort(),
      );
    });
  });

  describe('candidates for a first spec', () => {
    test('floats come first, and each has a name of its own that a spec can use', () => {
      const found = candidates(image);
      const kinds = found.map(({ kind }) => kind);
      expect(kinds).toEqual(
        [...kinds].sort(
          (a, b) =>
            ['float', 'fixed_point', 'integer'].indexOf(a) - ['float', 'fixed_point', 'integer'].indexOf(b),
        ),
      );
      const names = found.map(({ request }) => request.name);
      expect(new Set(names).size).toBe(names.length);
      for (const name of names) expect(name).toMatch(/^[a-z_][a-z0-9_]*$/);
      expect(found[0]).toMatchObject({
        request: { name: 'kp', at: 'azimuth.gains.kp' },
        kind: 'float',
        coefficient: { type: 'float' },
      });
    });

    test('what has no value, truth values and pointers are left out', () => {
      const paths = candidates(image).map(({ request }) => request.at);
      for (const path of ['cleared', 'enabled', 'active_blend', 'kept']) expect(paths).not.toContain(path);
      expect(paths).toContain('update::taps');
    });

    test('each can be read back by its own request', () => {
      for (const { request, coefficient } of candidates(image))
        expect(readCoefficient(image, request)).toEqual(coefficient);
    });

    test('fixed-point types of signal-processing libraries get their format', async () => {
      const source = `typedef short q15_t; typedef int q31_t;
        struct { q15_t b[3]; q31_t gain; } const filter = {{16384, -8192, 1}, 1073741824};
        const void *volatile kept; void _start(void) { kept = &filter; for (;;) {} }`;
      writeFileSync(join(folder, 'fixed.c'), source);
      await run('arm-none-eabi-gcc', [...arm, '-o', join(folder, 'e.elf'), join(folder, 'fixed.c')]);
      const found = candidates(openImage(readFileSync(join(folder, 'e.elf')), 'e.elf'));
      expect(found.map(({ request, kind }) => [request.at, request.format, kind])).toEqual([
        ['filter.b', 'Q1.15', 'fixed_point'],
        ['filter.gain', 'Q1.31', 'fixed_point'],
      ]);
    });

    test('without debug information nothing can be listed', async () => {
      await run('arm-none-eabi-gcc', [...arm, '-g0', '-o', join(folder, 'f.elf'), 'gains.c']);
      const bare = openImage(readFileSync(join(folder, 'f.elf')), 'f.elf');
      expect(() => candidates(bare)).toThrow(
        /has no debug information, so that its variables cannot be listed: build with -g/,
      );
      expect(() => matchPaths(bare, '**')).toThrow(/cannot be listed/);
    });
  });
});
