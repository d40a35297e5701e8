import type { LoopResponse } from '../linear/loop_response.js';
import { plainNumber } from '../spec/dimension.js';
import { frequencyRangeKeys, loopPointKey } from './keys.js';
import type { LoopView } from './loop_view.js';
import { type LoopContext, type LoopMeasure, type MeasureResult, measured, unformed } from './measure.js';
import { ofStableLoop } from './stable_loop.js';

/** What one measure of the size of a response over a range of frequencies has of its own. */
interface SizeOverRange {
  name: string;
  response: LoopResponse;
  /** The extreme that counts: the largest size is better when lower, the smallest when higher. */
  which: 'largest' | 'smallest';
  meaning: string;
}

/** A measure of the largest or smallest size of a response of the loop over the frequencies that a requirement names. */
export function sizeOverRange({ name, response, which, meaning }: SizeOverRange): LoopMeasure {
  return {
    description: {
      name,
      basis: 'loop',
      keys: [loopPointKey, ...frequencyRangeKeys],
      dimension: () => plainNumber,
      ratio: true,
      better: which === 'largest' ? 'lower' : 'higher',
      least: 0,
      window: undefined,
      meaning,
    },
    // A response of the closed loop has no size where that is unstable; the loop itself has.
    measure: ({ loop, quantity }) => {
      const extreme = () => extremeOverRange(loop, response, which, quantity);
      return response.open ? extreme() : ofStableLoop(loop, Number.POSITIVE_INFINITY, extreme);
    },
  };
}

function extremeOverRange(
  loop: LoopView,
  response: LoopResponse,
  which: SizeOverRange['which'],
  quantity: LoopContext['quantity'],
): MeasureResult {
  const highest = Math.PI / loop.period;
  const single = quantity('frequency');
  const low = single ?? quantity('from_frequency') ?? 0;
  const high = single ?? quantity('to_frequency') ?? highest;
  // One part in 1e9 is left to the rounding of Hz into rad/s.
  if (high > highest * (1 + 1e-9)) {
    return unformed(
      `${hertz(high)} is above half the sampling frequency at the loop point, ${hertz(highest)}: there is nothing to measure`,
    );
  }
  if (low > high) return unformed(`the range begins at ${hertz(low)}, above its end at ${hertz(high)}`);
  const band = { low: Math.min(low, highest), high: Math.min(high, highest) };
  return measured(loop.extremeOverBand(response, which, band).value);
}

function hertz(frequency: number): string {
  return `${Number((frequency / (2 * Math.PI)).toPrecision(4))} Hz`;
}
