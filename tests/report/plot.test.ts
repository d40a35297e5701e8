import { scaleLinear, scaleLog } from 'd3-scale';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { fenceLines } from '../../src/report/plot/fence_lines.js';
import { extent, extentAround } from '../../src/report/plot/frame.js';
import { gainDrawing } from '../../src/report/plot/gain_plot.js';
import { limitStrip } from '../../src/report/plot/limit_strip.js';
import { locusDrawing } from '../../src/report/plot/locus_plot.js';
import { logMarks } from '../../src/report/plot/log_axis.js';
import { openLoopDrawing } from '../../src/report/plot/open_loop_plot.js';
import { planeDrawing } from '../../src/report/plot/plane_plot.js';
import { bandBetween, bracketPath, fencePath, pathThrough, simplified } from '../../src/report/plot/shape.js';
import { sampled, traceDrawing } from '../../src/report/plot/trace_plot.js';
import { gainPlot, openLoopPlot, plane, tracePlot } from './sample_plots.js';
import { plant, requirement, requirements, value } from './sample_run.js';

/** The numbers of an attribute of the first element of a class. */
function attribute(drawing: string, className: string, name: string): string {
  const element = drawing.match(new RegExp(`<[a-z]+ class="${className}"[^>]*>`))?.[0] ?? '';
  return element.match(new RegExp(` ${name}="([^"]*)"`))?.[1] ?? '';
}

const numbers = (text: string): number[] => (text.match(/-?[\d.]+/g) ?? []).map(Number);

describe('simplified', () => {
  const point = fc.tuple(
    fc.double({ min: 0, max: 400, noNaN: true }),
    fc.double({ min: 0, max: 300, noNaN: true }),
  );

  it('keeps both ends, in order, and no point is farther from what is left than a screen shows', () => {
    fc.assert(
      fc.property(fc.array(point, { minLength: 1, maxLength: 80 }), (points) => {
        const left = simplified(points);
        expect([left[0], left.at(-1)]).toEqual([points[0], points.at(-1)]);
        expect(left.map((one) => points.indexOf(one))).toEqual(
          left.map((one) => points.indexOf(one)).sort((a, b) => a - b),
        );
        for (const one of points) {
          const distances = left.map((start, at) => apart(one, start, left[at + 1] ?? start));
          expect(Math.min(...distances)).toBeLessThanOrEqual(0.12 + 1e-9);
        }
      }),
      { seed: 51, numRuns: 200 },
    );
  });

  it('leaves of a straight stretch its ends', () => {
    expect(simplified(Array.from({ length: 50 }, (_, at): [number, number] => [at, 2 * at]))).toEqual([
      [0, 0],
      [49, 98],
    ]);
  });

  /** Distance of a point from a stretch, by trying many points of it. */
  function apart(
    [x, y]: readonly number[],
    [x1, y1]: readonly number[],
    [x2, y2]: readonly number[],
  ): number {
    const steps = 4000;
    let least = Number.POSITIVE_INFINITY;
    for (let at = 0; at <= steps; at++) {
      const share = at / steps;
      least = Math.min(least, Math.hypot(x - x1 - share * (x2 - x1), y - y1 - share * (y2 - y1)));
    }
    // Between two of the points tried lies at most an eighth of a px.
    return least - Math.hypot(x2 - x1, y2 - y1) / (2 * steps);
  }
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

  it('of a band go up one side and down the other, broken where either is not finite', () => {
    const upper: [number, number][] = [0, 1, 2, 3].map((x) => [x, x === 2 ? Number.NaN : 5 + x * x]);
    const lower: [number, number][] = [0, 1, 2, 3].map((x) => [x, -x * x]);
    expect(bandBetween(upper, lower)).toBe('M0,5L1,6L1,-1L0,0ZM3,14L3,-9Z');
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

describe('gainDrawing', () => {
  const text = gainDrawing(gainPlot, 'id').text;
  const described = (drawing: string): string => drawing.match(/<desc[^>]*>(.*?)<\/desc>/)![1];

  it('draws the band, every curve and each limit with its name, over the frequencies that it is for', () => {
    for (const name of ['band', 'nominal', 'latched', 'worst', 'worst worst-2'])
      expect(attribute(text, name, 'd').length).toBeGreaterThan(10);
    const fences = [...text.matchAll(/class="fence" d="M([\d.]+) ([\d.]+)L([\d.]+) ([\d.]+)/g)].map((found) =>
      found.slice(1).map(Number),
    );
    expect(fences).toHaveLength(2);
    const [[left, top, right], [oneLeft, lower, oneRight]] = fences;
    expect([left, right]).toEqual([52, 462]);
    // A third of the way from 0.1 to 100 rad/s over the logarithm, drawn a little wide.
    expect((oneLeft + oneRight) / 2).toBeCloseTo(52 + 410 / 3, 0);
    expect(oneRight - oneLeft).toBeLessThan(20);
    expect(lower).toBeGreaterThan(top);
    expect([...text.matchAll(/class="fence-name"[^>]*>([^<]*)</g)].map(([, name]) => name)).toEqual([
      'AZ-7',
      'AZ-6',
    ]);
  });

  it('puts the ring of the tightest place on the worst curve, on the broken side only where it breaks', () => {
    const fence = Number(text.match(/class="fence" d="M[\d.]+ ([\d.]+)L/)![1]);
    const ring = Number(attribute(text, 'bracket-end worst-end', 'cy'));
    const [{ value }] = gainPlot.tightest;
    expect(ring < fence).toBe(value > 2);
  });

  it('says limits, worst places and peaks in numbers for those who do not see it', () => {
    expect(described(text)).toContain('AZ-7: not above 6.02 dB up to 100 rad/s (15.9 Hz)');
    expect(described(text)).toContain('AZ-6: not above -6.02 dB at 1 rad/s (0.159 Hz)');
    expect(described(text)).toContain('AZ-7: worst 5.1 dB, headroom 7\u00a0%, which is');
    expect(described(text)).toMatch(/nominal plant [\d.]+ dB at [\d.]+ rad\/s/);
  });

  it('survives curves that are nowhere, and a size of zero', () => {
    const none = gainPlot.frequencies.map(() => Number.NaN);
    const empty = {
      ...gainPlot,
      plants: 0,
      low: none,
      high: none,
      nominal: none,
      worst: [],
      latched: undefined,
    };
    expect(gainDrawing(empty, 'id').text).not.toMatch(/d="[^"]*(NaN|Infinity)/);
    const zero = { ...gainPlot, nominal: gainPlot.nominal.map((size, at) => (at === 10 ? 0 : size)) };
    expect(gainDrawing(zero, 'id').text).not.toMatch(/d="[^"]*(NaN|Infinity)/);
  });
});

describe('fenceLines', () => {
  const box = { left: 0, right: 400, top: 0, bottom: 300 };
  const names = (lines: { from: [number, number]; to: [number, number] }[]) =>
    fenceLines(
      lines.map((line, at) => ({ requirement: `R${at}`, ...line, forbidden: 'above' })),
      box,
    ).map(({ text }) => {
      const [, anchor, x, y] = text.match(
        /<text class="fence-name" text-anchor="(\w+)" x="([-\d.]+)" y="([-\d.]+)"/,
      )!;
      return { anchor, x: Number(x), foot: Number(y) };
    });
  const across = (height: number): { from: [number, number]; to: [number, number] } => ({
    from: [0, height],
    to: [400, height],
  });

  it('name each line at its end on its broken side', () => {
    expect(names([across(100)])).toEqual([{ anchor: 'end', x: 400, foot: 92 }]);
  });

  it('name a line at its start where its end is crowded', () => {
    const crowded = [across(100), { from: [150, 106], to: [400, 106] }, { from: [300, 112], to: [400, 112] }];
    const [, between] = names(crowded as ReturnType<typeof across>[]);
    expect(between).toEqual({ anchor: 'start', x: 154, foot: 120 });
  });

  it('never put a name over another name or line', () => {
    fc.assert(
      fc.property(fc.array(fc.integer({ min: 20, max: 200 }), { minLength: 1, maxLength: 4 }), (heights) => {
        const all = names(heights.map(across));
        all.forEach(({ anchor, foot }, at) => {
          for (const [i, other] of all.entries()) {
            if (i !== at && other.anchor === anchor) expect(Math.abs(other.foot - foot)).toBeGreaterThan(12);
          }
          const lines = heights.filter((_, i) => i !== at);
          for (const line of lines) expect(line <= foot - 11 || line >= foot + 4).toBe(true);
        });
      }),
      { seed: 54, numRuns: 200 },
    );
  });
});

describe('logMarks', () => {
  it('marks powers of ten, and 2 and 5 between where there are few', () => {
    const marks = (low: number, high: number): string[] =>
      logMarks(scaleLog([low, high], [0, 1])).map(({ text }) => text);
    expect(marks(0.1, 1000)).toEqual(['0.1', '1', '10', '100', '1000']);
    expect(marks(3, 40)).toEqual(['5', '10', '20']);
  });
});

describe('a lifted loop', () => {
  const circle = Array.from({ length: 50 }, (_, at) => ({
    real: -0.5 + 0.3 * Math.cos(at),
    imaginary: 0.3 * Math.sin(at),
  }));
  const lifted = {
    changes: 2,
    nominal: [circle, circle.map(({ real, imaginary }) => ({ real: real + 0.2, imaginary }))],
    worst: [circle],
    marks: [
      {
        requirement: 'AZ-6',
        kind: 'gain' as const,
        curve: 'worst' as const,
        at: { real: -0.8, imaginary: 0 },
        text: 'worst 1.9 dB, headroom 3 %',
      },
    ],
  };
  const text = locusDrawing({ ...openLoopPlot, modulus: undefined, lifted }, 'id').text;

  it('has a way for each eigenvalue, and brackets its margins from −1', () => {
    expect(attribute(text, 'nominal', 'd').match(/M/g)).toHaveLength(2);
    expect(attribute(text, 'worst', 'd').match(/M/g)).toHaveLength(1);
    const [, fromX, , toX] = attribute(text, 'bracket worst-bracket', 'd')
      .match(/M([\d.]+) ([\d.]+)L([\d.]+)/)!
      .map(Number);
    const unit = Number(attribute(text, 'level', 'r'));
    expect((toX - fromX) / unit).toBeCloseTo(0.2, 2);
  });

  it('is told as loci of so many eigenvalues', () => {
    expect(text).toContain('The loci of the 2 eigenvalues of the lifted loop.');
    expect(text).toContain(
      'AZ-6, gain margin of the worst plant: worst 1.9 dB, headroom 3\u00a0%, read at -0.8 + 0j',
    );
  });
});
