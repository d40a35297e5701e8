import { describe, expect, it } from 'vitest';
import { runJson } from '../../src/report/run_json.js';
import { harmful, hostileNames } from './hostile.js';
import { hostileRun } from './hostile_run.js';
import { kp, requirement, sampleRun, specRun, units } from './sample_run.js';

const parsed = (run = sampleRun(), root?: string) => JSON.parse(runJson(run, root)).specs[0];
const named = (name: string) => parsed().requirements.find((one: { name: string }) => one.name === name);

describe('runJson', () => {
  it('has the shape that is promised to readers', () => {
    expect(parsed()).toMatchObject({
      file: 'specs/heliostat/azimuth.pawl.yaml',
      loop: 'Heliostat azimuth drive',
      seed: 11,
    });
    expect(named('AZ-1')).toMatchObject({
      name: 'AZ-1',
      measure: 'overshoot',
      verdict: 'met',
      unit: '1',
      written_unit: '%',
      limit: { at_most: 0.25 },
      nominal: 0.121,
      worst: 0.196,
      headroom: 0.216,
      plant: { friction: 10, drive: 191.34, drive_lag: 0.04 },
    });
  });

  it('gives null and a reason for what has no number', () => {
    expect(named('AZ-4')).toMatchObject({
      verdict: 'unjudged',
      nominal: null,
      worst: null,
      headroom: null,
      why: 'the signal has no range',
    });
    expect(named('AZ-2')).toMatchObject({
      verdict: 'broken',
      worst: null,
      headroom: null,
      why: 'a plant within the bounds breaks it',
      worst_why: 'longer than 3.8 s: never stays in the band',
    });
  });

  it('gives an infinite margin as a word, a margin in dB as a ratio, and an angle in rad', () => {
    expect(named('AZ-6')).toMatchObject({ nominal: 'infinite', worst: 2.5, unit: '1', written_unit: 'dB' });
    expect(named('AZ-7')).toMatchObject({
      unit: 'rad',
      limit: { between: [expect.closeTo(0.6981, 4), expect.any(Number)] },
    });
  });

  it('gives the signals of a loop that is opened at several as a list', () => {
    const several = requirement({ measure: 'gain_margin', signals: {}, atSeveral: ['pan', 'tilt'] });
    const [first] = parsed(sampleRun({ requirements: [several] })).requirements;
    expect(first.signals).toEqual({ at: ['pan', 'tilt'] });
    expect(named('AZ-6').signals).toEqual({ at: 'duty' });
  });

  it('gives a coefficient with its stored bits and place, a scalar as a value and an array as values', () => {
    const [scalar, array] = parsed().coefficients;
    expect(scalar).toMatchObject({ value: kp.elements[0].value, stored: '0x3e99999a', type: 'float' });
    expect(scalar.declared_at).toEqual({ file: 'firmware/azimuth.c', line: 41 });
    expect(array).toMatchObject({ values: [1.25, -0.5], stored: ['0x5000', '0xe000'], shape: [2] });
  });

  it('sorts the keys of every object', () => {
    const check = (value: unknown): void => {
      if (value === null || typeof value !== 'object') return;
      if (!Array.isArray(value)) expect(Object.keys(value)).toEqual(Object.keys(value).sort());
      for (const one of Object.values(value)) check(one);
    };
    check(JSON.parse(runJson(sampleRun())));
  });

  it('says nothing of times, durations and build output', () => {
    const other = sampleRun();
    other.specs[0].seconds = 99;
    other.specs[0].provenance!.build = { ...other.specs[0].provenance!.build!, seconds: 77, output: 'else' };
    expect(runJson(other)).toBe(runJson(sampleRun()));
  });

  it('writes absolute paths relative to the root, or as a name alone where they lie elsewhere', () => {
    const there = { ...kp, declaredAt: { file: '/home/me/repo/firmware/azimuth.c', line: 41 } };
    const elsewhere = { ...kp, declaredAt: { file: '/usr/include/gains.h', line: 2 } };
    const place = { file: '/home/me/repo/specs/a.pawl.yaml', line: 1, column: 1 };
    const run = sampleRun({
      file: place.file,
      provenance: { ...specRun().provenance!, image: 'C:\\build\\azimuth.elf' },
      coefficients: [there, elsewhere].map((coefficient) => ({
        name: 'kp',
        place,
        unit: undefined,
        coefficient,
      })),
      requirements: [requirement({ place })],
    });
    const text = runJson(run, '/home/me/repo');
    expect(text).not.toContain('/home');
    expect(text).not.toContain('/usr');
    const spec = parsed(run, '/home/me/repo');
    expect(spec.file).toBe('specs/a.pawl.yaml');
    expect(spec.coefficients[0].declared_at.file).toBe('firmware/azimuth.c');
    expect(spec.coefficients[1].declared_at.file).toBe('gains.h');
    expect(spec.provenance.image).toBe('azimuth.elf');
    expect(parsed(run).file).toBe('a.pawl.yaml');
  });

  it('writes a coefficient that is no finite number as a word', () => {
    const odd = { ...kp, elements: [{ value: Number.NaN, stored: '0xffffffff', address: undefined }] };
    const run = sampleRun({
      coefficients: [{ name: 'kp', place: requirement().place, unit: units.second, coefficient: odd }],
    });
    expect(parsed(run).coefficients[0]).toMatchObject({ value: 'not a number', unit: 's' });
  });

  it.each(Object.entries(hostileNames))('carries a hostile name unchanged and harmless: %s', (_, name) => {
    const text = runJson(hostileRun(name));
    expect(text).not.toMatch(harmful);
    const spec = JSON.parse(text).specs[0];
    expect(spec.loop).toBe(name);
    expect(Object.keys(spec.requirements[1].plant)).toEqual([name]);
  });
});
