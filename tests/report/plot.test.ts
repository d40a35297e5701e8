import { scaleLinear } from 'd3-scale';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { extent, extentAround, spread } from '../../src/report/plot/frame.js';
import { limitStrip } from '../../src/report/plot/limit_strip.js';
import { locusDrawing } from '../../src/report/plot/locus_plot.js';
import { openLoopDrawing } from '../../src/report/plot/open_loop_plot.js';
import { planeDrawing } from '../../src/report/plot/plane_plot.js';
import { bracketPath, fencePath, pathThrough, thinned } from '../../src/report/plot/shape.js';
import { sampled, traceDrawing } from '../../src/report/plot/trace_plot.js';
import { openLoopPlot, plane, tracePlot } from './sample_plots.js';
import { plant, requirement, requirements, value } from './sample_run.js';

/** The numbers of an attribute of the first element of a class. */
function attribute(drawing: string, className: string, name: string): string {
  const element = drawing.match(new RegExp(`<[a-z]+ class="${className}"[^>]*>`))?.[0] ?? '';
  return element.match(new RegExp(` ${name}="([^"]*)"`))?.[1] ?? '';
}

const numbers = (text: string): number[] => (text.match(/-?[\d.]+/g) ?? []).map(Number);

describe('thinned', () => {
  const series = fc.array(fc.double({ noNaN: true, min: -1e6, max: 1e6 }), { minLength: 1, maxLength: 300 });

  it('keeps the ends and the extremes, in order, and little more than asked for', () => {
    fc.assert(
      fc.property(series, fc.integer({ min: 4, max: 60 }), (values, most) => {
        const kept = thinned(values, most);
        expect(kept[0]).toBe(0);
        expect(kept.at(-1)).toBe(values.length - 1);
        expect(kept).toEqual([...kept].sort((a, b) => a - b));
        expect(kept.length).toBeLessThanOrEqual(most + 2);
        const left = kept.map((at) => values[at]);
        expect(Math.max(...left)).toBe(Math.max(...values));
        expect(Math.min(...left)).toBe(Math.min(...values));
      }),
      { seed: 51, numRuns: 300 },
    );
  });
});

describe('extent', () => {
  it('holds all finite values with room at both ends, and is never empty', () => {
    fc.assert(
      fc.property(fc.array(fc.double({ min: -1e9, max: 1e9 })), (values) => {
        const [low, high] = extent(values);
        expect(low).toBeLessThan(high);
        for (const one of values.filter(Number.isFinite)) expect(one > low && one < high).toBe(true);
      }),
      { seed: 52, numRuns: 300 },
    );
    expect(extent([Number.POSITIVE_INFINITY])).toEqual([0, 1]);
  });

  it('can be marked, however near or far the values are', () => {
    fc.assert(
      fc.property(fc.array(fc.double({ noNaN: true }), { maxLength: 4 }), (values) => {
        const [low, high] = extent(values);
        const ticks = scaleLinear([low, high], [0, 1]).ticks(5);
        expect(ticks.length).toBeGreaterThan(0);
        expect(ticks.length).toBeLessThan(20);
      }),
      { seed: 53, numRuns: 500 },
    );
  });

  it('is not blown up by a plant that runs away, but grows for one that goes a little further', () => {
    expect(extentAround([0, 1], [1e9])[1]).toBeLessThan(4);
    expect(extentAround([0, 1], [1.5, -0.5])).toEqual(extent([extent([0, 1])[0], 1.5, -0.5]));
    expect(extentAround([], [])).toEqual(extent([0, 1]));
  });
});

describe('spread', () => {
  it('moves labels down until none stands on another, and keeps their order', () => {
    expect(spread([10, 12, 50], 14)).toEqual([10, 24, 50]);
    expect(spread([12, 10], 14)).toEqual([24, 10]);
  });
});

describe('sampled', () => {
  it('takes evenly spread places with both ends', () => {
    expect(sampled(101, 3)).toEqual([0, 50, 100]);
    expect(sampled(2, 10)).toEqual([0, 1]);
    expect(sampled(1, 10)).toEqual([0]);
    expect(sampled(0, 10)).toEqual([]);
  });
});

describe('paths', () => {
  it('break where a value is not finite instead of drawing it', () => {
    expect(
      pathThrough([
        [0, 0],
        [1, 1],
        [Number.NaN, 2],
        [3, 3],
        [4, 4],
      ]),
    ).toBe('M0,0L1,1M3,3L4,4');
  });

  it('of a fence carry ticks on one side only', () => {
    const path = fencePath([0, 50], [90, 50], [0, -1]);
    expect(path.startsWith('M0 50L90 50')).toBe(true);
    expect(path.match(/l0 -4/g)).toHaveLength(10);
  });

  it('of a bracket end at both heights', () => {
    expect(bracketPath(10, 20, 60)).toBe('M6 20h8m-4 0V60m-4 0h8');
  });
});

describe('limitStrip', () => {
  const drawn = (changes: Parameters<typeof requirement>[0]) => limitStrip(requirement(changes), 'id').text;
  const fenceX = (text: string) => numbers(attribute(text, 'fence', 'd'))[0];
  const nominalX = (text: string) => Number(attribute(text, 'nominal-point', 'cx'));
  const worstX = (text: string) => numbers(attribute(text, 'worst-point', 'd'))[0];

  it('puts the values on the side of the limit on which they are', () => {
    const met = drawn({});
    expect(nominalX(met)).toBeLessThan(worstX(met));
    expect(worstX(met)).toBeLessThan(fenceX(met));
    const broken = drawn({ worst: plant(value(0.4), -0.6, true) });
    expect(worstX(broken)).toBeGreaterThan(fenceX(broken));
    const atLeast = drawn({ limit: { at_least: 0.15 } });
    expect(nominalX(atLeast)).toBeLessThan(fenceX(atLeast));
    expect(worstX(atLeast)).toBeGreaterThan(fenceX(atLeast));
  });

  it('puts what never happens at the broken end, an infinite margin at the good end, each with a word', () => {
    const never = limitStrip(requirements[1], 'id').text;
    expect(worstX(never)).toBeGreaterThan(fenceX(never));
    expect(never).toContain('>never</text>');
    const infinite = limitStrip(requirements[4], 'id').text;
    expect(nominalX(infinite)).toBeGreaterThan(fenceX(infinite));
    expect(infinite).toContain('>infinite</text>');
  });

  it('draws no point where there is no number', () => {
    expect(limitStrip(requirements[3], 'id').text).not.toMatch(/-point/);
  });

  it('draws both limits of a requirement that has two', () => {
    const text = limitStrip(requirements[5], 'id').text;
    expect(text).toContain('>at least 40 deg</text>');
    expect(text).toContain('>at most 80 deg</text>');
  });
});

describe('traceDrawing', () => {
  const text = traceDrawing(tracePlot, 'id').text;

  it('draws the band, the nominal and the worst plant, the target, and each fence with its name once', () => {
    for (const name of ['band', 'nominal', 'worst', 'target'])
      expect(attribute(text, name, 'd').length).toBeGreaterThan(10);
    expect(text.match(/class="fence"/g)).toHaveLength(3);
    expect(text.match(/class="fence-name"/g)).toHaveLength(2);
  });

  it('says the peak for those who do not see it: 50 mrad · (1 + e^(−πζ/√(1−ζ²))), the overshoot of a second-order step', () => {
    const peak = 50 * (1 + Math.exp((-Math.PI * 0.25) / Math.sqrt(1 - 0.25 ** 2)));
    const [, said] = text.match(/the worst plant&#39;s largest value is ([\d.]+) mrad/)!;
    expect(Math.abs(Number(said) - peak)).toBeLessThan(0.02);
  });

  it('survives an empty trace and one that overflows', () => {
    const none = {
      ...tracePlot,
      times: [],
      low: [],
      high: [],
      nominal: [],
      worst: [],
      target: undefined,
      fences: [],
    };
    expect(traceDrawing(none, 'id').text).not.toContain('NaN');
    const blown = {
      ...tracePlot,
      worst: tracePlot.worst.map((one, at) => (at > 400 ? Number.POSITIVE_INFINITY : one)),
    };
    expect(traceDrawing(blown, 'id').text).not.toMatch(/d="[^"]*(NaN|Infinity)/);
  });
});

describe('openLoopDrawing', () => {
  it('brackets each margin from the curve to the edge, its text in place', () => {
    const text = openLoopDrawing(openLoopPlot, 'id').text;
    expect(text).toContain('AZ-6: 8.74 dB, headroom 25\u00a0%</text>');
    expect(text.match(/class="bracket /g)).toHaveLength(2);
    expect(text).not.toContain('NaN');
    const level = numbers(attribute(text, 'level', 'd'))[1];
    const [end] = numbers(attribute(text, 'bracket worst-bracket', 'd').match(/V[\d.]+/)![0]);
    expect(end).toBe(level);
  });

  it('ends a phase bracket at the nearest odd multiple of 180 degrees', () => {
    const margins = [{ ...openLoopPlot.margins[1], start: (-500 * Math.PI) / 180 }];
    const text = openLoopDrawing(
      {
        ...openLoopPlot,
        margins,
        nominal: {
          ...openLoopPlot.nominal,
          phase: openLoopPlot.nominal.phase.map((one) => one - 2 * Math.PI),
        },
      },
      'id',
    ).text;
    const lines = attribute(text, 'level', 'd')
      .match(/M52 [\d.]+/g)!
      .map((part) => Number(part.slice(4)));
    const [end] = numbers(attribute(text, 'bracket nominal-bracket', 'd').match(/V[\d.]+/)![0]);
    expect(lines).toContain(end);
  });
});

describe('locusDrawing', () => {
  const text = locusDrawing(openLoopPlot, 'id').text;

  it('draws the circle of the limit about −1 on the scale of the unit circle', () => {
    const unit = Number(attribute(text, 'level', 'r'));
    expect(Number(attribute(text, 'fence', 'r'))).toBeCloseTo(0.5 * unit, 0);
    expect(Number(attribute(text, 'level', 'cx')) - Number(attribute(text, 'fence', 'cx'))).toBeCloseTo(
      unit,
      0,
    );
  });

  it('does without a circle where no requirement asks for one', () => {
    const none = locusDrawing({ ...openLoopPlot, modulus: undefined }, 'id').text;
    expect(none).not.toContain('class="fence"');
    expect(none).toContain('No requirement on the modulus margin.');
  });
});

describe('planeDrawing', () => {
  const text = planeDrawing(plane, 'id').text;

  it('draws every cell once, by headroom, broken, or without a number', () => {
    const cells = [...text.matchAll(/<path (?:class="(?:no-)?cell"|class="cell" [^>]*) ?[^>]*d="([^"]*)"/g)];
    expect(cells.flatMap(([, d]) => d.match(/z/g) ?? [])).toHaveLength(24 * 24);
    expect(text).toContain('<title>broken</title>');
    expect(text).toContain('<title>no number</title>');
  });

  it('says how much of the plane is broken', () => {
    const broken = plane.headroom.flat().filter((share) => share < 0).length;
    const judged = plane.headroom.flat().filter((share) => !Number.isNaN(share)).length;
    expect(text).toContain(`${broken} of ${judged} plants in this plane break the limit`);
  });
});
