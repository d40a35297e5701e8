import { describe, expect, it } from 'vitest';
import {
  claimsInWords,
  evidenceInWords,
  findingOnOneLine,
  holdsForInWords,
  limitInWords,
  measureInWords,
  measureWithSignal,
} from '../../src/report/requirement_in_words.js';
import { harmful, hostileNames } from './hostile.js';
import { hostileRun } from './hostile_run.js';
import { plant, requirement, requirements, specRun, units, value } from './sample_run.js';

describe('a limit in words', () => {
  const percent = { unit: units.percent, inDecibels: false };

  it('has the unit in which it was written', () => {
    expect(limitInWords({ at_most: 0.25 }, percent)).toBe('at most 25 %');
    expect(limitInWords({ at_least: Math.PI / 4 }, { unit: units.degree, inDecibels: false })).toBe(
      'at least 45 deg',
    );
    expect(limitInWords({ at_least: 10 ** (6 / 20) }, { unit: units.decibel, inDecibels: true })).toBe(
      'at least 6 dB',
    );
    expect(limitInWords({ between: [0.1, 0.2] }, percent)).toBe('between 10 and 20 %');
    expect(limitInWords({ between: [1, 2] }, { unit: units.plain, inDecibels: false })).toBe(
      'between 1 and 2',
    );
  });

  it('has all digits that a person wrote', () => {
    expect(limitInWords({ at_most: 0.123456789 }, percent)).toBe('at most 12.3456789 %');
    expect(limitInWords({ at_most: 0.1 + 0.2 }, { unit: units.second, inDecibels: false })).toBe(
      'at most 0.3 s',
    );
  });
});

describe('a measure in words', () => {
  it('names every signal and the scenario, or just the one it is taken from', () => {
    expect(measureInWords(requirement())).toBe('overshoot of angle to target in slew');
    expect(measureInWords(requirements[5])).toBe('phase margin at duty');
    expect(measureWithSignal(requirement())).toBe('overshoot of angle');
    expect(measureWithSignal(requirements[5])).toBe('phase margin at duty');
    expect(measureWithSignal({ measure: 'cost', signals: {} })).toBe('cost');
  });

  it('names all signals at which the loop is opened at once', () => {
    const two = { measure: 'gain_margin', signals: {}, atSeveral: ['pan', 'tilt'], scenario: undefined };
    expect(measureInWords(two)).toBe('gain margin at pan and tilt');
    expect(measureWithSignal({ ...two, atSeveral: ['pan', 'tilt', 'focus'] })).toBe(
      'gain margin at pan, tilt and focus',
    );
  });

  it('says for which plants it must hold', () => {
    expect(holdsForInWords({ holdsFor: 'all' })).toBe('for all plants');
    expect(holdsForInWords({ holdsFor: 'nominal' })).toBe('at the nominal plant');
    expect(holdsForInWords({ holdsFor: 0.995 })).toBe('for 99.5 % of plants');
  });
});

describe('evidence in words', () => {
  it('says on how many plants, and on how many it is broken or has no number', () => {
    expect(evidenceInWords(requirement())).toBe('tried 1,108 plants');
    expect(evidenceInWords(requirements[1])).toBe('tried 1,108 plants: broken on 12 (1.08 %)');
    expect(evidenceInWords(requirements[3])).toBe('tried 1,108 plants: no number on 1,108');
    expect(evidenceInWords(requirements[5])).toBe('nominal only');
    const both = requirement({
      counts: { tried: 200, broken: 1, unjudged: 2 },
      evidence: { kind: 'tried', plants: 200 },
    });
    expect(evidenceInWords(both)).toBe('tried 200 plants: broken on 1 (0.5 %), no number on 2');
  });
});

describe('a finding on one line', () => {
  it('says requirement, measured value, limit, headroom and plant', () => {
    const one = requirement({
      verdict: { kind: 'broken', headroom: -0.256, why: 'a plant within the bounds breaks it' },
      worst: plant(value(0.314), -0.256, true),
    });
    expect(findingOnOneLine(one)).toBe(
      'AZ-1 is broken: overshoot of angle to target in slew: 31.4 %; limit at most 25 %; headroom -25.6 %; plant: friction at its lower bound (10 N*m*s/rad), drive 63 % of the way to its upper bound (191.3 N*m); nothing else moved',
    );
  });

  it('says why nothing can be said, once', () => {
    expect(findingOnOneLine(requirements[3]).match(/the signal has no range/g)).toHaveLength(1);
    const few = requirement({
      verdict: { kind: 'unjudged', why: '20 independent plants are too few for 99 %' },
    });
    expect(findingOnOneLine(few)).toMatch(
      /^AZ-1 is unjudged: .*: 19\.6 %; 20 independent plants are too few for 99 %; limit/,
    );
  });

  it.each(Object.entries(hostileNames))('is one line for a hostile name: %s', (_, name) => {
    for (const one of hostileRun(name).specs[0].requirements) {
      expect(findingOnOneLine(one)).not.toMatch(harmful);
      expect(findingOnOneLine(one)).not.toContain('\n');
    }
  });
});

describe('claims in words', () => {
  it('gives each statement once with all that it is made for', () => {
    expect(claimsInWords(specRun())).toEqual([
      {
        names: ['AZ-1', 'AZ-3', 'AZ-6'],
        claim: 'in 1,000 independent plants none failed: with 95 % confidence fewer than 0.3 % do',
      },
      {
        names: ['AZ-2'],
        claim: '9 of 1,000 independent plants failed: with 95 % confidence fewer than 1.6 % do',
      },
    ]);
  });
});
