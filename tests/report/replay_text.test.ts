import { describe, expect, it } from 'vitest';
import { replayText, tracesInCsv } from '../../src/report/replay_text.js';
import { requirementOf } from '../verdict/judgements.js';
import { movedParameters, units, value } from './sample_run.js';

const signals = [
  { name: 'angle', unit: units.milliradian, values: [0, 0.05], nominal: [0, 0.04] },
  { name: 'target', unit: units.milliradian, values: [0, 0.04], nominal: [0, 0.04] },
];
const requirement = requirementOf({
  name: 'AZ-1',
  signals: { of: 'angle', to: 'target' },
  in: 'slew',
  limit: { at_most: 0.25 },
  unit: units.percent,
});
const replayed = {
  requirement,
  kind: 'broken' as const,
  result: value(0.314),
  parameters: movedParameters,
  isShrunk: true,
  isSameImage: true,
  traces: { times: [0, 1], signals },
  files: { csv: 'replay-AZ-1.csv', kept: undefined },
};

describe('a replay in words', () => {
  it('says the finding, the plant, the table, the plot and where the traces are', () => {
    const text = replayText(replayed, { width: 80 });
    expect(text).toContain('AZ-1 broken: overshoot of angle to target in slew: 31.4 %; limit at most 25 %');
    expect(text).toContain('the counterexample nearest to nominal: friction at its lower bound');
    expect(text).toMatch(/friction +10 +N\*m\*s\/rad/);
    expect(text).toContain('mrad   - target   · nominal   * angle');
    expect(text).toContain('traces: replay-AZ-1.csv');
    expect(text).not.toContain('not the one of the report');
  });

  it('says when the image is another, when the plant is kept, and when there is no trace', () => {
    const text = replayText(
      {
        ...replayed,
        isSameImage: false,
        isShrunk: false,
        traces: undefined,
        files: { csv: undefined, kept: 'a.json' },
      },
      { width: 80 },
    );
    expect(text).toContain('the worst plant: ');
    expect(text).toContain('the image is not the one of the report');
    expect(text).toContain('kept in a.json: every later check tries this plant first');
    expect(text).toContain('no trace: the requirement is about the loop');
  });
});

describe('traces as comma-separated values', () => {
  it('have a head with SI units, a row for each time, and an empty cell for what is not a number', () => {
    const withGap = [{ ...signals[0], values: [0, Number.NaN] }];
    expect(tracesInCsv([0, 1], withGap)).toBe(
      'time (s),angle (rad),angle nominal (rad)\r\n0,0,0\r\n1,,0.04\r\n',
    );
  });
});
