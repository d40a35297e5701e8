import { execFileSync } from 'node:child_process';
import { cpSync, mkdtempSync, readFileSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { beforeAll, describe, expect, it } from 'vitest';
import {
  type Annotation,
  annotationsOf,
  junitOf,
  markdownSummary,
  terminalReport,
} from '../../../src/report/index.js';
import type { Spec } from '../../../src/spec/spec.js';
import type { Reference } from '../../../src/verdict/latched/reference.js';
import { allMet, type SpecRun } from '../../../src/verdict/run.js';
import { leaveOut } from '../../firmware/toolchain.js';
import {
  firmwareFolder,
  float,
  imageWith,
  latchedReference,
  named,
  pullRequest,
  quickSpec,
  shippedImage,
  verdictsOf,
} from './demo_changes.js';

// Protects what a reviewer sees of ten pull requests against the demo: whether they may merge, what is said of each
// requirement, which change did it, and where the remarks stand.

let spec: Spec;
let reference: Reference;
beforeAll(async () => {
  spec = quickSpec();
  reference = await latchedReference(spec);
});

const finished = (run: SpecRun) => ({ version: '0.1.0', specs: [run] });
const terminal = (run: SpecRun): string =>
  terminalReport(finished(run), { colour: false, width: 100 }).replace(/\n +/g, ' ');
const remarks = (run: SpecRun): Annotation[] => annotationsOf(finished(run));
const onSource = (run: SpecRun): Annotation[] => remarks(run).filter(({ file }) => file.endsWith('.c'));
const shares = (run: SpecRun, name: string) =>
  named(run, name).comparison!.attribution.map((row) => [row.name, Number(row.share.toFixed(6))]);
const allBut = (met: Record<string, string>) => ({
  ...{ 'AZ-1': 'met', 'AZ-3': 'met', 'AZ-5': 'met', 'AZ-6': 'met', 'AZ-7': 'met' },
  ...met,
});

describe('nothing changed', () => {
  it('merges: all met, nothing said to have moved, no remarks', async () => {
    const run = await pullRequest(spec, shippedImage, reference);
    expect(allMet(finished(run))).toBe(true);
    expect(verdictsOf(run)).toEqual(allBut({}));
    for (const { comparison } of run.requirements) {
      expect(comparison).toMatchObject({ lost: 0, fromSpec: [], attribution: [] });
      expect(comparison!.rerun).toEqual(comparison!.today);
    }
    expect(terminal(run)).toContain('(first release); nothing changed');
    expect(remarks(run)).toEqual([]);
  });
});

describe('a gain cut', () => {
  it('slips where the gust is held less stiffly, by that gain alone; what it gains is pointed out', async () => {
    const run = await pullRequest(spec, imageWith({ 'azimuth.gains.kp': float(1.5) }), reference);
    expect(allMet(finished(run))).toBe(false);
    expect(verdictsOf(run)).toEqual(allBut({ 'AZ-3': 'slipped' }));
    const { comparison, verdict } = named(run, 'AZ-3');
    // Headroom by its definition, from the values alone: (limit - value) / limit.
    const [before, after] = [comparison!.rerun!.result, comparison!.today.result].map((result) =>
      result.kind === 'value' ? (0.03 - result.value) / 0.03 : Number.NaN,
    );
    expect(comparison!.lost).toBeCloseTo(before - after, 12);
    expect(verdict).toMatchObject({ kind: 'slipped', headroom: after });
    expect(shares(run, 'AZ-3')).toEqual([['kp', 1]]);
    const said = terminal(run);
    expect(said).toMatch(/┣▁┫ slipped +AZ-3/);
    expect(said).toMatch(
      /lost 11\.\d points of headroom against the latched reference; a change may cost 5 points/,
    );
    expect(said).toMatch(
      /peak deviation 19\.\d+ mrad → 23\.\d+ mrad: \+3\.\d+ mrad from the firmware, nothing from the spec/,
    );
    expect(said).toContain('kp 2.7 → 1.5 (azimuth_settings.c:10) accounts for 100 % of the loss');
    expect(said).toMatch(/AZ-5 gained 23\.\d points of headroom.*pawl latch keeps what was gained/);
    expect(remarks(run)).toMatchObject([
      { level: 'error', file: spec.file, line: 59, title: 'AZ-3 slipped' },
      { level: 'error', file: 'azimuth_settings.c', line: 10, title: 'kp 2.7 → 1.5' },
    ]);
    expect(onSource(run)[0].message).toContain('accounts for 100 % of the loss of AZ-3, which is slipped');
    expect(junitOf(finished(run))).toMatch(/<failure message="AZ-3 is slipped[^>]*type="slipped"/);
    expect(markdownSummary(finished(run))).toContain('┣▁┫ **slipped**');
  });
});

describe('a filter moved', () => {
  it('breaks and slips, all of it by the corner of the filter', async () => {
    const run = await pullRequest(spec, imageWith({ 'azimuth.gains.rate_corner': float(5) }), reference);
    expect(verdictsOf(run)).toEqual(allBut({ 'AZ-1': 'broken', 'AZ-5': 'slipped', 'AZ-7': 'slipped' }));
    for (const name of ['AZ-1', 'AZ-5', 'AZ-7']) expect(shares(run, name)).toEqual([['rate_corner', 1]]);
    expect(onSource(run)).toMatchObject([{ line: 10, title: 'rate_corner 20 → 5 Hz' }]);
    expect(onSource(run)[0].message).toMatch(
      /AZ-1, which is broken.*AZ-5, which is slipped.*AZ-7, which is slipped/,
    );
  });
});

describe('a sign flipped', () => {
  it('breaks every margin: an unstable loop has none, and the share is that of the whole loss', async () => {
    const run = await pullRequest(spec, imageWith({ 'azimuth.gains.kp': float(-2.7) }), reference);
    expect(verdictsOf(run)).toMatchObject({
      'AZ-3': 'broken',
      'AZ-5': 'broken',
      'AZ-6': 'broken',
      'AZ-7': 'broken',
    });
    expect(named(run, 'AZ-5').comparison!.today.result).toMatchObject({ kind: 'value', value: 0 });
    expect(shares(run, 'AZ-5')).toEqual([['kp', 1]]);
    expect(onSource(run)).toMatchObject([{ title: 'kp 2.7 → -2.7' }]);
  });
});

describe('a Q shift wrong', () => {
  it('is one change of the array, with the elements told', async () => {
    const halved = (at: DataView) => at.setInt16(0, at.getInt16(0, true) >> 1, true);
    const run = await pullRequest(spec, imageWith({ azimuth_notch: halved }), reference);
    expect(allMet(finished(run))).toBe(false);
    expect(run.sinceLatched!.coefficients).toMatchObject([{ name: 'notch', elements: [0, 1, 2, 3, 4] }]);
    expect(verdictsOf(run)).toMatchObject({ 'AZ-3': 'broken', 'AZ-5': 'broken', 'AZ-7': 'broken' });
    expect(shares(run, 'AZ-7')).toEqual([['notch', 1]]);
    expect(onSource(run)).toMatchObject([{ line: 21, file: 'azimuth_settings.c' }]);
  });
});

describe('the period changed', () => {
  it('blames the period', async () => {
    const slower = (at: DataView) => at.setUint32(0, 10000, true);
    const run = await pullRequest(spec, imageWith({ 'azimuth.period_us': slower }), reference);
    expect(verdictsOf(run)).toMatchObject({ 'AZ-5': 'broken', 'AZ-6': 'slipped' });
    expect(shares(run, 'AZ-5')).toEqual([['period', 1]]);
    expect(terminal(run)).toContain('period 2000 → 10000 us (azimuth_settings.c:10) accounts for 100 %');
  });
});

describe('a tap swapped', () => {
  it('says which elements changed', async () => {
    const taps = [14903, -28401, 14497, -28283, 13133];
    const swapped = (at: DataView, index: number) => at.setInt16(0, taps[index], true);
    const run = await pullRequest(spec, imageWith({ azimuth_notch: swapped }), reference);
    expect(verdictsOf(run)).toEqual(allBut({ 'AZ-1': 'slipped', 'AZ-3': 'slipped' }));
    expect(run.sinceLatched!.coefficients).toMatchObject([{ name: 'notch', elements: [1, 3] }]);
    expect(terminal(run)).toContain(
      'notch[1] -1.72625732421875 → -1.73345947265625, notch[3] -1.73345947265625 → -1.72625732421875 (azimuth_settings.c:21)',
    );
  });
});

describe('two gains at once', () => {
  it('shares the loss out: the shares add up to it, and what one gained makes up for the other', async () => {
    const image = imageWith({ 'azimuth.gains.kp': float(1.5), 'azimuth.gains.kd': float(0.6) });
    const run = await pullRequest(spec, image, reference);
    for (const { comparison } of run.requirements.filter(
      ({ comparison }) => comparison!.attribution.length > 0,
    )) {
      const sum = comparison!.attribution.reduce((total, { lost }) => total + lost, 0);
      expect(sum).toBeCloseTo(comparison!.lost!, 3);
      expect(comparison!.attribution.map(({ name }) => name).sort()).toEqual(['kd', 'kp']);
    }
    expect(terminal(run)).toMatch(/kp 2\.7 → 1\.5 .* makes up for 2\d\d % of the loss/);
    expect(named(run, 'AZ-3').comparison!.attribution[0].name).toBe('kd');
  });
});

describe('friction bounds widened', () => {
  it('tells the plant’s part from the firmware’s: nothing slipped, and no coefficient is blamed', async () => {
    const wider = quickSpec((text) => text.replace('from: 10 N*m*s/rad', 'from: 6 N*m*s/rad'));
    const run = await pullRequest(wider, shippedImage, reference);
    expect(verdictsOf(run)).toEqual(allBut({}));
    const { comparison } = named(run, 'AZ-5');
    expect(comparison).toMatchObject({ lost: 0, fromSpec: ['the bounds of friction'], attribution: [] });
    expect(terminal(run)).toMatch(
      /phase margin 47\.\d+ deg → 4\d\.\d+ deg: nothing from the firmware, -\d+\.\d+ deg from the bounds of friction/,
    );
    expect(onSource(run)).toEqual([]);
  });

  it('keeps the two apart when the firmware changed too', async () => {
    const wider = quickSpec((text) => text.replace('from: 10 N*m*s/rad', 'from: 6 N*m*s/rad'));
    const run = await pullRequest(wider, imageWith({ 'azimuth.gains.rate_corner': float(14) }), reference);
    const { latched, rerun, today, lost } = named(run, 'AZ-5').comparison!;
    const value = (of: typeof today | undefined): number =>
      of?.result.kind === 'value' ? of.result.value : Number.NaN;
    expect(value(latched)).toBeGreaterThan(value(rerun));
    expect(value(rerun)).toBeGreaterThan(value(today));
    // Headroom of a lower limit: (value - limit) / limit, with 40 degrees.
    expect(lost).toBeCloseTo((value(rerun) - value(today)) / ((40 * Math.PI) / 180), 12);
  });
});

describe('a requirement tightened', () => {
  it('breaks by its limit, and says so', async () => {
    const tighter = quickSpec((text) => text.replace('at_least: 40 deg', 'at_least: 50 deg'));
    const run = await pullRequest(tighter, shippedImage, reference);
    expect(verdictsOf(run)).toEqual(allBut({ 'AZ-5': 'broken' }));
    expect(named(run, 'AZ-5').comparison).toMatchObject({
      lost: 0,
      fromSpec: ['its limit'],
      attribution: [],
    });
    expect(named(run, 'AZ-7').comparison!.fromSpec).toEqual([]);
    expect(remarks(run)).toMatchObject([{ title: 'AZ-5 broken', line: 60 }]);
  });
});

describe('compiler flags changed', () => {
  it.skipIf(leaveOut('arm-none-eabi-gcc', 'make'))(
    'is unjudged: the law’s machine code is another',
    async () => {
      const withLaw = quickSpec((text) =>
        text.replace('  coefficients:', '  law: [azimuth_init, azimuth_step]\n  coefficients:'),
      );
      const latched = await latchedReference(withLaw);
      const folder = mkdtempSync(join(tmpdir(), 'pawl-flags-'));
      cpSync(firmwareFolder, folder, { recursive: true });
      const makefile = readFileSync(join(folder, 'Makefile'), 'utf8');
      writeFileSync(join(folder, 'Makefile'), makefile.replace('-Os', '-O1'));
      execFileSync('make', ['-s', '-B', '-C', folder]);
      const run = await pullRequest(withLaw, join(folder, 'azimuth.elf'), latched);
      expect(new Set(Object.values(verdictsOf(run)))).toEqual(new Set(['unjudged']));
      const { verdict } = named(run, 'AZ-1');
      const why = verdict.kind === 'unjudged' ? verdict.why : '';
      expect(why).toMatch(/the machine code of azimuth_step is not the latched one \(368 → \d+ bytes\)/);
      expect(why).toMatch(/are gone .*-Os.*, new .*-O1/);
      expect(why).toContain('pawl latch');
      expect(run.sinceLatched!.coefficients).toEqual([]);
      // The same law again, with its gain changed, is judged.
      const same = await pullRequest(withLaw, imageWith({ 'azimuth.gains.ki': float(0.36) }), latched);
      expect(verdictsOf(same)).toEqual(allBut({}));
    },
  );
});
