import { describe, expect, it } from 'vitest';
import {
  annotationsOf,
  htmlReport,
  junitOf,
  markdownSummary,
  runJson,
  terminalReport,
} from '../../src/report/index.js';
import {
  attributionInWords,
  changeInWords,
  comparisonInWords,
  improvementsInWords,
  mergeInWords,
  waiverInWords,
} from '../../src/report/since_latched.js';
import type { ComparedResult } from '../../src/verdict/run.js';
import { requirement, units, value } from './sample_run.js';
import { coefficients, degrees, finished, margin, run } from './sample_since_latched.js';

// Protects what people read of a change: the numbers in the unit of the requirement, who did it, and what is waived.

describe('a requirement against the reference', () => {
  it('tells the firmware’s part from that of the spec, in its own unit', () => {
    expect(comparisonInWords(margin())).toBe(
      'phase margin 52 deg → 44 deg: -9 deg from the firmware, +1 deg from the bounds of friction',
    );
  });

  it('says so where a part changed nothing, and is silent where nothing moved', () => {
    const same = comparisonInWords(margin({ latched: degrees(53, 0.325), fromSpec: [] }));
    expect(same).toBe('phase margin 53 deg → 44 deg: -9 deg from the firmware, nothing from the spec');
    const still = { latched: degrees(44, 0.1), rerun: degrees(44, 0.1), lost: 0 };
    expect(comparisonInWords(margin(still, 'met'))).toBeUndefined();
    expect(comparisonInWords(margin({ ...still, fromSpec: [] }))).toBe('phase margin as it was latched');
    expect(comparisonInWords(margin({ ...still, fromSpec: ['its limit'] }))).toBe(
      'phase margin as it was latched; what changed is its limit',
    );
    expect(comparisonInWords(requirement())).toBeUndefined();
  });

  it('does not hold a limit responsible for what was measured', () => {
    const both = margin({ fromSpec: ['its limit', 'the bounds of friction'] });
    expect(comparisonInWords(both)).toMatch(/\+1 deg from the bounds of friction$/);
    expect(comparisonInWords(margin({ fromSpec: ['its limit'] }))).toMatch(
      /\+1 deg from plants found since$/,
    );
  });

  it('calls the difference of two shares what it is', () => {
    const share = (of: number): ComparedResult => ({ result: value(of), headroom: 1 - of });
    const changes = { latched: share(0.02), rerun: share(0.02), today: share(0.3), lost: 0.28 };
    const words = comparisonInWords({
      ...margin({ ...changes, fromSpec: [] }),
      ...{ measure: 'overshoot', unit: units.percent, limit: { at_most: 1 } },
    });
    expect(words).toBe(
      'overshoot 2 % → 30 %: +28 percentage points from the firmware, nothing from the spec',
    );
  });

  it('is silent of a change that no printed digit shows', () => {
    const changes = { latched: degrees(44, 1), rerun: degrees(44, 1), today: degrees(44.000001, 1), lost: 0 };
    expect(comparisonInWords(margin(changes, 'met'))).toBeUndefined();
    expect(comparisonInWords(margin(changes, 'slipped'))).toBeDefined();
  });

  it('subtracts decibels as decibels', () => {
    const gain = (ratio: number): ComparedResult => ({ result: value(ratio), headroom: 0.5 - ratio / 100 });
    const words = comparisonInWords({
      ...margin({ latched: gain(10), rerun: gain(10), today: gain(5) }),
      ...{ measure: 'gain_margin', unit: units.decibel, inDecibels: true, limit: { at_least: 2 } },
    });
    // 20·log10(10) and 20·log10(5).
    expect(words).toBe('gain margin 20 dB → 13.98 dB: -6.02 dB from the firmware, nothing from the spec');
  });

  it('has words for results without a number, and for infinite ones', () => {
    const never: ComparedResult = {
      result: { kind: 'never', why: 'longer than 3.8 s', left: 1 },
      headroom: undefined,
    };
    expect(comparisonInWords(margin({ today: never, lost: undefined }))).toMatch(
      /53 deg → never from the firmware/,
    );
    const infinite: ComparedResult = { result: value(Number.POSITIVE_INFINITY), headroom: 1 };
    expect(comparisonInWords(margin({ rerun: infinite }))).toMatch(/infinite → 44 deg from the firmware/);
  });

  it('names at most three causes in the spec, and one where there is none', () => {
    const fromSpec = ['a', 'b', 'c', 'd', 'e'];
    expect(comparisonInWords(margin({ fromSpec }))).toContain('+1 deg from a and b and c and 2 more');
    expect(comparisonInWords(margin({ fromSpec: [] }))).toContain('+1 deg from plants found since');
  });

  it('is new, or cannot be run', () => {
    expect(comparisonInWords(margin({ latched: undefined }))).toBe(
      'phase margin: new since the latched reference',
    );
    expect(comparisonInWords(margin({ rerun: undefined, why: 'a format does not fit' }))).toBe(
      'phase margin: latched 52 deg; a format does not fit',
    );
  });
});

describe('who lost the headroom', () => {
  it('is named with old and new number and the line in the source; small shares are left out', () => {
    expect(attributionInWords(margin(), run())).toEqual([
      'kd 0.3 → 0.21 s (firmware/azimuth.c:41) accounts for 92 % of the loss',
      'notch[1] -0.25 → -0.5 (firmware/azimuth.c:47) accounts for 11 % of the loss',
    ]);
  });

  it('is said to be sampled, and to make up for a part', () => {
    const attribution = [
      { name: 'kd', share: 1.4, lost: 0.3 },
      { name: 'kp', share: -0.4, lost: -0.1 },
    ];
    expect(attributionInWords(margin({ attribution, sampledOrders: 64 }), run())).toEqual([
      'kd 0.3 → 0.21 s (firmware/azimuth.c:41) accounts for about 140 % of the loss',
      'kp 2 → 2.5 (firmware/azimuth.c:41) makes up for about 40 % of the loss',
    ]);
  });

  it('is nobody where nothing was lost', () => {
    expect(attributionInWords(margin({ attribution: [] }), run())).toEqual([]);
  });
});

describe('a changed coefficient', () => {
  it('is shown in full where the latched numbers mean nothing today', () => {
    const change = { name: 'young', latched: undefined, today: [7], elements: [], unlike: 'it is new' };
    expect(changeInWords(change, coefficients)).toBe('young nothing → 7 (it is new)');
  });

  it('counts what it does not list', () => {
    const [latched, today] = [new Array(7).fill(0), new Array(7).fill(1)];
    expect(changeInWords({ name: 'table', latched, today, elements: [...today.keys()] }, [])).toBe(
      'table[0] 0 → 1, table[1] 0 → 1, table[2] 0 → 1, table[3] 0 → 1 and 3 more',
    );
  });

  it('may be one of its format alone', () => {
    const change = { name: 'notch', latched: [1, 2], today: [1, 2], elements: [] };
    expect(changeInWords(change, coefficients)).toBe('notch in another number format');
  });
});

describe('the merge section', () => {
  it('says what was compared, and what changed', () => {
    expect(mergeInWords(run())).toBe(
      'compared with the latched reference reference/latched/heliostat.json (the first release); changed since: kd 0.3 → 0.21 s; notch[1] -0.25 → -0.5; kp 2 → 2.5; the bounds of friction',
    );
    const nothing = { ...run().sinceLatched!, coefficients: [], spec: [] };
    expect(mergeInWords({ ...run(), sinceLatched: nothing })).toMatch(
      /\(the first release\); nothing changed$/,
    );
  });

  it('points out a waiver of what is met, so that it is taken away', () => {
    const waiver = { reason: 'r', until: '2027-03-01', letsThrough: false, why: 'it is met' };
    const requirements = [requirement({ name: 'AZ-2', waiver }), requirement()];
    expect(mergeInWords({ ...run(), requirements })).toMatch(/; no longer needed: the waiver of AZ-2$/);
  });

  it('says that there is no reference, and that a law needs one', () => {
    const none = { ...run().sinceLatched!, reference: undefined, coefficients: [], spec: [] };
    expect(mergeInWords({ ...run(), sinceLatched: none })).toMatch(
      /^there is no latched reference reference\/latched\/heliostat\.json yet, so nothing is compared: pawl latch/,
    );
    expect(mergeInWords({ ...run(), sinceLatched: { ...none, law: ['x'] } })).toContain(
      'the control law needs one',
    );
  });

  it('points out what was gained', () => {
    const gained = margin({ lost: -0.12, attribution: [] }, 'met');
    expect(improvementsInWords({ requirements: [gained] })).toBe(
      'AZ-5 gained 12 points of headroom: pawl latch keeps what was gained',
    );
    expect(improvementsInWords({ requirements: [margin({ lost: -0.05 }, 'met')] })).toBeUndefined();
    expect(improvementsInWords({ requirements: [gained, margin()] })).toContain('AZ-5 gained');
    for (const verdict of [
      { kind: 'broken', headroom: -0.1, why: 'w' },
      { kind: 'unjudged', why: 'w' },
    ] as const) {
      // Nothing can be latched, so that nothing is to be kept.
      expect(improvementsInWords({ requirements: [gained, requirement({ verdict })] })).toBeUndefined();
    }
  });
});

describe('a waiver', () => {
  const waiver = { reason: 'new motor in March', until: '2027-03-01', letsThrough: true };
  const waived = requirement({
    verdict: { kind: 'broken', headroom: -0.1, why: 'a plant breaks it' },
    waiver,
  });

  it('is told with its reason and its last day, or why it does not count', () => {
    expect(waiverInWords(waived)).toBe('waived until 2027-03-01: new motor in March');
    expect(
      waiverInWords({ waiver: { ...waiver, letsThrough: false, why: 'it expired on 2027-03-01' } }),
    ).toBe('a waiver does not count, since it expired on 2027-03-01 (until 2027-03-01: new motor in March)');
  });

  it('stands in every report, and the merge goes through', () => {
    const all = finished({ requirements: [waived, requirement()] });
    const texts = {
      terminal: terminalReport(all, { colour: false, width: 100 }),
      html: htmlReport(all),
      markdown: markdownSummary(all),
      junit: junitOf(all),
    };
    for (const [name, text] of Object.entries(texts))
      expect(text, name).toMatch(
        /waived until 2027-03-01:? new motor|waived until 2027-03-01&#58; new motor/,
      );
    expect(JSON.parse(runJson(all)).specs[0].requirements[0].waiver).toEqual({
      ...{ lets_through: true, reason: waiver.reason, until: waiver.until },
    });
    expect(texts.terminal).toContain('merge may go through: 1 requirement met, 1 broken but waived');
    expect(texts.junit).toContain('<skipped');
    expect(texts.junit).not.toMatch(/<failure|<error/);
    expect(annotationsOf(all)).toMatchObject([{ level: 'warning', message: /waived until 2027-03-01/ }]);
  });

  it('that does not count blocks like any other broken requirement', () => {
    const expired = { ...waived, waiver: { ...waiver, letsThrough: false, why: 'it expired' } };
    const all = finished({ requirements: [expired, waived] });
    expect(terminalReport(all, { colour: false, width: 100 })).toContain(
      'merge blocked: 2 broken (1 waived)',
    );
    expect(junitOf(all).match(/<failure/g)).toHaveLength(1);
  });
});

describe('the reports of a change', () => {
  it('are an error on the requirement’s line in the spec and one on the coefficient’s line in the source', () => {
    expect(annotationsOf(finished())).toMatchObject([
      { file: 'specs/heliostat/azimuth.pawl.yaml', line: 58, title: 'AZ-5 slipped', level: 'error' },
      { file: 'firmware/azimuth.c', line: 41, title: 'kd 0.3 → 0.21 s', level: 'error' },
      { file: 'firmware/azimuth.c', line: 47, title: 'notch[1] -0.25 → -0.5', level: 'error' },
    ]);
  });

  it('hold the comparison in JSON: SI, shares of the limit, no times', () => {
    const { specs } = JSON.parse(runJson(finished()));
    expect(specs[0].since_latched).toMatchObject({
      path: 'reference/latched/heliostat.json',
      spec: ['the bounds of friction'],
    });
    const { since_latched: since } = specs[0].requirements[0];
    expect(since).toMatchObject({ lost: 0.225, may_slip: 0.05, today: { headroom: 0.1 } });
    expect(since.rerun.value).toBeCloseTo((53 * Math.PI) / 180, 12);
    expect(since.attribution[0]).toEqual({ name: 'kd', share: 0.92, lost: 0.207 });
    expect(specs[0].coefficients[0].source).toEqual({ file: 'firmware/azimuth.c', line: 41 });
  });

  it('draw one bar for each share, and list old and new numbers', () => {
    const page = htmlReport(finished());
    expect(page.match(/<svg class="share"/g)).toHaveLength(3);
    expect(page).toContain('share of the loss');
    expect(page).toContain('Coefficients changed since the latched reference');
    expect(page).toMatch(/kd 0\.3 → 0\.21 s \(firmware\/azimuth\.c:41\)/);
    expect(page).toContain('class="requirement slipped-side"');
  });

  it('tell slipped apart by word and shape', () => {
    const all = finished({ requirements: [margin(), requirement()] });
    expect(terminalReport(all, { colour: false, width: 100 })).toMatch(/┣▁┫ slipped +AZ-5/);
    expect(markdownSummary(all)).toContain('merge blocked: 1 slipped, 1 met');
    expect(junitOf(all)).toMatch(/<failure [^>]*type="slipped"/);
  });
});
