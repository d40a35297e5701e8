import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { terminalPlot } from '../../src/report/terminal_plot.js';

const line = (values: number[]) => ({ mark: '*', name: 'speed', values });

describe('a plot in text', () => {
  it('rises from the lower left to the upper right, with its ends named', () => {
    const rows = terminalPlot([0, 1, 2], [line([0, 5, 10])], 'rad/s', 60).split('\n');
    expect(rows[0]).toContain('rad/s');
    expect(rows[0]).toContain('* speed');
    expect(rows[1]).toMatch(/10 │ +\*$/);
    expect(rows[8]).toMatch(/5 │ +\* *$/);
    expect(rows[15]).toMatch(/0 │\*$/);
    expect(rows[17]).toMatch(/^ +0 +2 s$/);
  });

  it('draws later lines on top of earlier ones', () => {
    const lines = [
      { mark: '-', name: 'goal', values: [1, 1] },
      { mark: '*', name: 'speed', values: [1, 0] },
    ];
    expect(terminalPlot([0, 1], lines, '', 60).split('\n')[1]).toMatch(/│\*.*-$/);
  });

  it('leaves out what is not a number, and says when there is nothing', () => {
    expect(terminalPlot([0, 1, 2], [line([1, Number.NaN, 3])], 'V', 60)).not.toContain('NaN');
    expect(terminalPlot([0], [line([Number.NaN])], 'V', 60)).toContain('nothing to draw');
    expect(terminalPlot([], [], 'V', 60)).toContain('nothing to draw');
  });

  it('never writes beyond its width, whatever the values', () => {
    const value = fc.double({ min: -1e300, max: 1e300 });
    fc.assert(
      fc.property(
        fc.array(value, { minLength: 1, maxLength: 40 }),
        fc.integer({ min: 60, max: 120 }),
        (values, width) => {
          const times = values.map((_, i) => i * 0.1);
          for (const row of terminalPlot(times, [line(values)], 'V', width)
            .split('\n')
            .slice(1, 16)) {
            expect([...row.slice(row.indexOf('│') + 1)].length).toBeLessThanOrEqual(width - 10);
          }
        },
      ),
      { seed: 111 },
    );
  });
});
