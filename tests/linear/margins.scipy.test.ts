import { describe, expect, it } from 'vitest';
import { marginsOfLoop } from '../../src/linear/margins.js';
import { toRows } from '../../src/linear/matrix.js';
import { askScipy, scipyAvailable } from '../scipy.js';
import { randomLoop, repeatable } from './loops.js';

interface Reference {
  stable: boolean;
  up: number | null;
  down: number;
  phase: number | null;
  delay: number | null;
  crossovers: number[];
  sensitivity: number;
  complementary: number;
}

const script = new URL('./reference_margins.py', import.meta.url);

describe.skipIf(!scipyAvailable)('margins against scipy (Virtanen and others, 2020)', () => {
  it('agree to 1e-6 over 300 random stable and unstable sampled loops of order 1 to 12', async () => {
    const random = repeatable(22);
    const loops = Array.from({ length: 300 }, (_, k) => randomLoop(1 + (k % 12), random));
    const references = await askScipy<Reference[]>(
      script,
      loops.map(({ a, b, c, d, period }) => ({
        a: toRows(a),
        b: toRows(b),
        c: toRows(c),
        d: toRows(d),
        period,
      })),
    );
    expect(references.length).toBe(300);
    const stableCount = references.filter(({ stable }) => stable).length;
    expect(stableCount).toBeGreaterThan(100);
    expect(stableCount).toBeLessThan(220);
    references.forEach((reference, k) => {
      compare(`loop ${k}`, reference, marginsOfLoop(loops[k]));
    });
  });
});

function compare(name: string, reference: Reference, margins: ReturnType<typeof marginsOfLoop>): void {
  expect(margins.stable, `${name}: stable`).toBe(reference.stable);
  if (!reference.stable) {
    const all = [
      margins.phaseMargin,
      margins.delayMargin,
      margins.modulusMargin,
      margins.gainMargin.ratio - 1,
    ];
    expect(all, name).toEqual([0, 0, 0, 0]);
    return;
  }
  expectClose(`${name}: upward gain margin`, margins.gainMargin.up, reference.up ?? Number.POSITIVE_INFINITY);
  expectClose(`${name}: downward gain margin`, margins.gainMargin.down, reference.down);
  expectClose(`${name}: phase margin`, margins.phaseMargin, reference.phase ?? Number.POSITIVE_INFINITY);
  expectClose(`${name}: delay margin`, margins.delayMargin, reference.delay ?? Number.POSITIVE_INFINITY);
  expectClose(`${name}: sensitivity peak`, margins.sensitivityPeak.value, reference.sensitivity);
  expectClose(`${name}: modulus margin`, margins.modulusMargin, 1 / reference.sensitivity);
  expectClose(`${name}: complementary peak`, margins.complementaryPeak.value, reference.complementary);
  expect(margins.gainCrossings.length, `${name}: number of crossovers`).toBe(reference.crossovers.length);
  margins.gainCrossings.forEach(({ frequency }, i) => {
    expectClose(`${name}: crossover ${i}`, frequency, reference.crossovers[i]);
  });
}

function expectClose(what: string, actual: number, expected: number): void {
  if (actual === expected) return;
  expect(Math.abs(actual - expected), `${what}: ${actual} against ${expected}`).toBeLessThanOrEqual(
    1e-6 * Math.abs(expected),
  );
}
