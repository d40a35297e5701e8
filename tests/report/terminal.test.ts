import { stripVTControlCharacters } from 'node:util';
import { describe, expect, it } from 'vitest';
import { caution } from '../../src/report/caution.js';
import { columnsOf } from '../../src/report/plain_text.js';
import { terminalReport } from '../../src/report/terminal.js';
import { harmful, hostileNames } from './hostile.js';
import { hostileRun } from './hostile_run.js';
import { metRun, plant, requirement, sampleRun } from './sample_run.js';

const look = { colour: false, width: 100 };
const lineOf = (text: string, name: string) => text.split('\n').find((line) => line.includes(` ${name} `))!;

describe('terminalReport', () => {
  it('tells the verdict of each requirement by sign and word, with its numbers', () => {
    const text = terminalReport(sampleRun(), look);
    expect(lineOf(text, 'AZ-1').split(/ {2,}/)).toEqual([
      '┣━┫ met',
      'AZ-1',
      'overshoot of angle',
      'at most 25 %',
      '12.1 %',
      '19.6 %',
      '21.6 %',
    ]);
    expect(lineOf(text, 'AZ-2')).toMatch(
      /^┣╱┫ broken .*settling time of angle .*at most 2.5 s .*1.73 s .*never .*none$/,
    );
    expect(lineOf(text, 'AZ-4')).toMatch(/^┣\?┫ unjudged .*no value/);
    expect(lineOf(text, 'AZ-6')).toMatch(/at least 6 dB .*infinite .*7.959 dB/);
  });

  it('puts what blocks first, with reason, plant and place beneath', () => {
    const text = terminalReport(sampleRun(), { colour: false, width: 400 });
    const order = ['AZ-2', 'AZ-3', 'AZ-4', 'AZ-1'].map((name) => text.indexOf(` ${name} `));
    expect(order).toEqual([...order].sort((a, b) => a - b));
    expect(text).toContain('longer than 3.8 s: never stays in the band');
    expect(text.replace(/\n\s+/g, ' ')).toContain(
      'plant: friction at its lower bound (10 N*m*s/rad), drive 63 % of the way to its upper bound (191.3 N*m); nothing else moved',
    );
    expect(text).toContain('specs/heliostat/azimuth.pawl.yaml:60:5');
    expect(text).toContain('broken on 12 (1.08 %)');
  });

  it('says where the numbers come from and what may be claimed', () => {
    const text = terminalReport(sampleRun(), look);
    expect(text).toContain('SHA-256 9f3c2a17b04e)');
    expect(text).toContain('2 coefficients, 1,108 plants tried in 2 scenarios, seed 11');
    expect(text).toContain('AZ-1, AZ-3, AZ-6: in 1,000 independent plants none failed');
    expect(text).toContain('merge: latched reference');
    expect(text).toContain('judged in 1.21 s');
  });

  it('ends with the verdict on the whole and the caution', () => {
    const flat = (text: string) => text.replaceAll('\n', ' ');
    expect(terminalReport(sampleRun(), look)).toContain('┣╱┫ merge blocked: 2 broken, 1 unjudged, 3 met');
    expect(terminalReport(metRun(), look)).toContain('┣━┫ merge may go through: 3 requirements met');
    expect(terminalReport({ version: '1', specs: [] }, look)).toContain('merge blocked');
    expect(flat(terminalReport(metRun(), look))).toContain(caution);
  });

  it.each([80, 90, 100, 200])('fits a terminal of %i columns, and never takes more than 100', (width) => {
    for (const run of [sampleRun(), metRun(), ...Object.values(hostileNames).map(hostileRun)]) {
      for (const line of terminalReport(run, { colour: false, width }).split('\n')) {
        expect(columnsOf(line)).toBeLessThanOrEqual(Math.min(width, 100));
      }
    }
  });

  it('lets nothing through while a spec could not be run', () => {
    const text = terminalReport(metRun(), look, [{ specFile: 'b.pawl.yaml', messages: ['x'] }]);
    expect(text).toContain('┣╱┫ merge blocked: 1 spec could not be run, 3 met');
  });

  it('says for which plants a requirement must hold where that is not every one', () => {
    const share = requirement({
      holdsFor: 0.99,
      verdict: { kind: 'unjudged', why: '20 plants are too few' },
    });
    const text = terminalReport(sampleRun({ requirements: [share] }), look);
    expect(text).toContain('tried 1,108 plants; must hold for 99 % of plants');
    expect(text).toContain('20 plants are too few');
    expect(text).toContain('reason: The image must stay inside the receiver aperture while slewing.');
  });

  it('tells what a reader should know of the number, and that the build was skipped', () => {
    const noted = requirement({
      verdict: { kind: 'broken', headroom: -1, why: 'a plant within the bounds breaks it' },
      worst: plant({ kind: 'value', value: 0, note: 'the closed loop is unstable' }, -1, true),
    });
    const provenance = { ...sampleRun().specs[0].provenance!, buildSkipped: true };
    const text = terminalReport(sampleRun({ requirements: [noted], provenance }), look);
    expect(text).toContain('    the closed loop is unstable\n');
    expect(text).toContain('taken as it is: the build was skipped');
    expect(terminalReport(sampleRun({ provenance: undefined }), look)).toContain('no image');
  });

  it('makes one statement for all requirements where they share it', () => {
    const shared = sampleRun({ requirements: [requirement(), requirement({ name: 'AZ-9' })] });
    expect(terminalReport(shared, look)).toContain(
      'each requirement: in 1,000 independent plants none failed',
    );
  });

  it('says the same with and without colour', () => {
    const coloured = terminalReport(sampleRun(), { colour: true, width: 100 });
    expect(coloured).toContain('\u001b[38;2;255;255;255;48;2;164;69;44m┣╱┫ broken');
    expect(stripVTControlCharacters(coloured)).toBe(terminalReport(sampleRun(), look));
  });

  it.each(Object.entries(hostileNames))('is not harmed by a hostile name: %s', (_, name) => {
    const text = terminalReport(hostileRun(name), look);
    expect(text).not.toMatch(harmful);
    expect(text.split('\n').filter((line) => line.startsWith('┣'))).toHaveLength(5);
  });
});
