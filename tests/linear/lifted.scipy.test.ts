import { describe, expect, it } from 'vitest';
import { bandwidthOf } from '../../src/linear/bandwidth.js';
import { complementaryOf } from '../../src/linear/closed_loop.js';
import { gainCrossings } from '../../src/linear/crossings.js';
import { largestGain } from '../../src/linear/largest_gain.js';
import { liftedMargins } from '../../src/linear/lifted_margins.js';
import { leastLiftedDamping } from '../../src/linear/lifted_modes.js';
import { liftedSensitivity } from '../../src/linear/lifted_response.js';
import { analyseLoop } from '../../src/linear/loop_analysis.js';
import { toRows } from '../../src/linear/matrix.js';
import { loopSeenAtOneFrequency, sineResponse } from '../../src/linear/sine_response.js';
import type { StateEquations } from '../../src/linear/state_equations.js';
import { askScipy, scipyAvailable } from '../scipy.js';
import { alternating, repeatable } from './loops.js';

interface Reference {
  /** rad a change */
  crossovers: number[];
  bandwidth: number | null;
  sensitivity: number;
  damping: number;
  /** In changes, of all up to three cycles. */
  delay: number | null;
}

const script = new URL('./reference_lifted.py', import.meta.url);

function stableLoops(count: number): StateEquations[] {
  const found: StateEquations[] = [];
  for (let seed = 0; found.length < count; seed++) {
    const loop = alternating(1 + (seed % 4), 2 + (seed % 3), repeatable(seed));
    const { stable, decayRate } = liftedMargins(loop);
    if (stable && decayRate * loop.period! > 1e-4) found.push(loop);
  }
  return found;
}

describe.skipIf(!scipyAvailable)('loops that differ from sample to sample against scipy', () => {
  it('agree to 1e-6 in every measure that looks at frequencies', async () => {
    const loops = stableLoops(30);
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
    let delays = 0;
    references.forEach((reference, k) => {
      const loop = loops[k];
      const spacing = loop.period! / loop.b.columns;
      const sensitivity = liftedSensitivity(loop);
      const seen = loopSeenAtOneFrequency(sensitivity);
      const crossovers = gainCrossings(analyseLoop(seen, 0).sweep);
      expect(crossovers.length, `loop ${k}: crossovers`).toBe(reference.crossovers.length);
      crossovers.forEach(({ frequency }, i) => {
        expectClose(`loop ${k}: crossover ${i}`, frequency * spacing, reference.crossovers[i]);
      });
      const bandwidth = bandwidthOf(complementaryOf(seen)) * spacing;
      expectClose(`loop ${k}: bandwidth`, bandwidth, reference.bandwidth ?? Number.POSITIVE_INFINITY);
      const { value } = largestGain(sineResponse(sensitivity));
      expectClose(`loop ${k}: sensitivity`, value, reference.sensitivity);
      expectClose(`loop ${k}: damping`, leastLiftedDamping(sensitivity), reference.damping);
      const delay = liftedMargins(loop).delayMargin / spacing;
      if (reference.delay === null) {
        expect(delay, `loop ${k}: delay`).toBeGreaterThan(3 * loop.b.columns);
        return;
      }
      expectClose(`loop ${k}: delay`, delay, reference.delay);
      delays++;
    });
    expect(delays).toBeGreaterThan(7);
  });
});

function expectClose(what: string, actual: number, expected: number): void {
  if (actual === expected) return;
  expect(Math.abs(actual - expected), `${what}: ${actual} against ${expected}`).toBeLessThanOrEqual(
    1e-6 * Math.abs(expected),
  );
}
