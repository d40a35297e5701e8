import { describe, expect, it } from 'vitest';
import { plantsInWords, plantsTried } from '../../src/report/plants_in_words.js';
import { painter } from '../../src/report/terminal_colour.js';
import {
  blockingFirst,
  countVerdicts,
  mayMerge,
  runInWords,
  verdictSigns,
} from '../../src/report/verdict_words.js';
import { metRun, requirement, sampleRun, specRun } from './sample_run.js';

const nothing = { version: '1', specs: [] };

describe('the verdict on a run', () => {
  it('lets a merge through only where there is something and all of it is met', () => {
    expect(mayMerge(metRun())).toBe(true);
    expect(mayMerge(sampleRun())).toBe(false);
    expect(mayMerge(nothing)).toBe(false);
    expect(mayMerge(sampleRun({ requirements: [] }))).toBe(false);
    expect(mayMerge(metRun(), 1)).toBe(false);
    const unjudged = requirement({ verdict: { kind: 'unjudged', why: 'x' } });
    expect(mayMerge(sampleRun({ requirements: [requirement(), unjudged] }))).toBe(false);
  });

  it('says so in words, what blocks first', () => {
    expect(runInWords(metRun())).toBe('merge may go through: 3 requirements met');
    expect(runInWords(sampleRun())).toBe('merge blocked: 2 broken, 1 unjudged, 3 met');
    expect(runInWords(nothing)).toBe('merge blocked: there are no requirements');
    expect(runInWords(metRun(), 2)).toBe('merge blocked: 2 specs could not be run, 3 met');
  });

  it('counts over all specs', () => {
    expect(countVerdicts({ version: '1', specs: [specRun(), specRun()] })).toEqual({
      met: 6,
      slipped: 0,
      broken: 4,
      unjudged: 2,
    });
  });

  it('puts what blocks first and else keeps the order of the spec', () => {
    const names = blockingFirst(specRun().requirements).map(({ name }) => name);
    expect(names).toEqual(['AZ-2', 'AZ-3', 'AZ-4', 'AZ-1', 'AZ-6', 'AZ-7']);
  });

  it('has a sign of its own for each verdict, of the same width', () => {
    const signs = Object.values(verdictSigns);
    expect(new Set(signs).size).toBe(signs.length);
    expect(new Set(signs.map((sign) => [...sign].length)).size).toBe(1);
  });
});

describe('plants in words', () => {
  it('are told by why they were tried, and summed', () => {
    const { plants } = specRun();
    expect(plantsInWords(plants)).toBe(
      '1 nominal, 11 with one parameter at a bound, 32 corners, 1,000 independent, 64 near edges',
    );
    expect(plantsTried({ plants })).toBe(1108);
    expect(plantsInWords({ ...plants, corner: 0 })).not.toContain('corner');
    expect(plantsInWords({ some_new_reason: 2 } as unknown as typeof plants)).toBe('2 some new reason');
  });
});

describe('the painter', () => {
  it('leaves texts as they are where there is no colour', () => {
    expect(painter(false)('broken', 'x')).toBe('x');
  });

  it('ends every colour that it begins', () => {
    const paint = painter(true);
    for (const tone of ['met', 'broken', 'unjudged'] as const) {
      expect(paint(tone, 'x').startsWith('\u001b[38;2;255;255;255;48;2;')).toBe(true);
      expect(paint(tone, 'x').endsWith('x\u001b[0m')).toBe(true);
    }
    expect(paint('strong', 'x')).toBe('\u001b[1mx\u001b[22m');
    expect(paint('quiet', 'x')).toBe('\u001b[2mx\u001b[22m');
  });
});
