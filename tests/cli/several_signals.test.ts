import { readFileSync } from 'node:fs';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { type Ended, Workplace } from './workplace.js';

const reference = readFileSync('specs/README.md', 'utf8');
const [, section] = reference.split('#### Opening a loop at several signals\n');
const [, example] = /```yaml\n(.*?)```/s.exec(section)!;

// The whole way of a requirement with a list: reader, plants, search, proof, reports.
describe('the example of a loop that is opened at several signals', () => {
  let place: Workplace;
  let ended: Ended;
  beforeAll(async () => {
    const alone = '  - { name: ALONE, measure: modulus_margin, at: duty_pan, at_least: 0.45 }\n';
    place = new Workplace(() => `${example}${alone}perturbation: { plants: 20, search: 8 }\n`);
    ended = await place.pawl('check', place.spec, '--out', 'reports');
  });
  afterAll(() => place.remove());

  const unwrapped = (text: string): string => text.replaceAll(/\s+/g, ' ');
  const named = (name: string) =>
    JSON.parse(place.read('reports/run.json')).specs[0].requirements.find(
      (one: { name: string }) => one.name === name,
    );

  it('is met on every plant, by what the reference says', () => {
    expect(ended).toMatchObject({ status: 0, errors: '' });
    expect(named('PT-1')).toMatchObject({ verdict: 'met', plant: { cross: 4 } });
    expect(named('PT-2')).toMatchObject({ verdict: 'met', plant: { cross: 4 } });
  });

  it('has less margin at once than one signal alone has', () => {
    expect(named('PT-1').worst).toBeLessThan(0.9 * named('ALONE').worst);
  });

  it('names all its signals in the reports', () => {
    expect(named('PT-1').signals).toEqual({ at: ['duty_pan', 'duty_tilt'] });
    expect(named('ALONE').signals).toEqual({ at: 'duty_pan' });
    for (const report of ['reports/summary.md', 'reports/report.html', 'reports/junit.xml'])
      expect(place.read(report).replaceAll('&#95;', '_'), report).toContain(
        'modulus margin at duty_pan and duty_tilt',
      );
  });

  it('says that no proof was tried, and why', () => {
    expect(unwrapped(ended.output)).toContain(
      'proof: PT-1 and PT-2 not tried: the loop is opened at several signals at once (duty_pan, duty_tilt)',
    );
  });

  it('can be latched, and then tells of other signals', async () => {
    const merge = 'merge: { reference: latched.json, may_slip: 5 % }\n';
    const text = place.read(place.spec) + merge;
    place.write(place.spec, text);
    expect((await place.here('latch', place.spec, '--reason', 'first')).errors).toBe('');
    const same = text.replace(
      'PT-2, measure: gain_margin,    at: [duty_pan, duty_tilt]',
      'PT-2, measure: gain_margin, at: [duty_tilt, duty_pan]',
    );
    expect(same).not.toBe(text);
    place.write(place.spec, same);
    expect(unwrapped((await place.here('check', place.spec)).output)).not.toContain('what it measures');
    place.write(place.spec, same.replace('[duty_tilt, duty_pan]', '[duty_tilt, seen_pan]'));
    expect(unwrapped((await place.here('check', place.spec)).output)).toContain('PT-2 (what it measures)');
  });
});
