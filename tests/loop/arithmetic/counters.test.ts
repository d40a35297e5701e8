import { describe, expect, it } from 'vitest';
import { statements } from '../../../src/kernel/source.js';
import { countOf } from '../../../src/loop/counters.js';
import { Evaluation } from '../../../src/loop/evaluate.js';
import { type Law, loopOf, outputsOfLaw, uniform } from './against_c.js';

const step = 2 ** -15;
const law: Law = {
  arithmetic: '{ format: Q1.15, rounding: truncate, overflow: saturate }',
  reads: ['a', 'b'],
  signals: `sum: { value: a + b }
command: { value: sum, range: [-0.5, 0.5] }`,
};

function rows(): Float64Array {
  const next = uniform(31);
  return Float64Array.from({ length: 2000 }, () => Math.floor((next() - 0.5) * 65536) * step);
}

/** How many pairs of the rows do something, up to each of them. */
function running(happens: (a: number, b: number) => boolean): number[] {
  const given = rows();
  let count = 0;
  return Array.from({ length: given.length / 2 }, (_, i) => {
    if (happens(given[2 * i], given[2 * i + 1])) count++;
    return count;
  });
}

describe('the counts of a controller', () => {
  it('tell how many sums have left the format since the start', () => {
    const counts = [...outputsOfLaw(law, rows(), countOf('overflows', 'law'))];
    expect(counts).toEqual(running((a, b) => a + b < -1 || a + b >= 1));
    expect(counts.at(-1)).toBeGreaterThan(100);
  });

  it('are the same where the result wraps, although it does not show', () => {
    const wrapping = { ...law, arithmetic: '{ format: Q1.15, rounding: truncate, overflow: wrap }' };
    expect(outputsOfLaw(wrapping, rows(), countOf('overflows', 'law'))).toEqual(
      outputsOfLaw(law, rows(), countOf('overflows', 'law')),
    );
  });

  it('tell how often a range has acted', () => {
    const counts = [...outputsOfLaw(law, rows(), countOf('limit hits', 'law'))];
    expect(counts).toEqual(running((a, b) => a + b < -0.5 || a + b > 0.5));
  });

  it('count a sum that its accumulator cannot hold, and its result that the format cannot', () => {
    const wide = {
      ...law,
      arithmetic: '{ format: Q1.15, rounding: truncate, overflow: wrap, accumulator: 32 bit }',
      signals: 'command: { value: a*b + a*b + a*b - b*a }',
    };
    // Each product of -1 and -1 is 2^30 in a signed sum of 32 bits: the second makes it wrap to -2^31, which the others only
    // move within it. It ends at -2^31, that is -2, which the format cannot hold.
    expect([...outputsOfLaw(wide, [-1, -1, 0.5, 0.5], countOf('overflows', 'law'))]).toEqual([2, 2]);
  });

  it('stay zero in a controller that fits, and where nothing can overflow', () => {
    const floating = { ...law, arithmetic: 'float32' };
    expect(new Set(outputsOfLaw(floating, rows(), countOf('overflows', 'law')))).toEqual(new Set([0]));
    const small = rows().map((x) => Math.trunc(x / step / 4) * step);
    expect(new Set(outputsOfLaw(law, small, countOf('overflows', 'law')))).toEqual(new Set([0]));
  });

  it('take no part in the equations: nothing computes them unless they are asked for', () => {
    const loop = loopOf(law);
    const roots = [...loop.held.map(({ value }) => value), ...loop.memories.map(({ next }) => next)];
    const { lines } = statements(roots, ({ leaf, index }) => `${leaf}${index}`, 'v');
    expect(lines.join('\n')).not.toContain('counter');
  });

  it('are zero at the point of rest, where rounding is left out', () => {
    const { signals } = loopOf(law);
    const atRest = new Evaluation({ reading: [0.9, 0.9] }, 'off');
    expect(atRest.of(signals.get(countOf('overflows', 'law'))!.value)).toBe(0);
  });
});
