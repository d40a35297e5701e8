import { extremesOverBand, type LoopResponse } from '../linear/band_extremes.js';
import type { LoopView } from './loop_view.js';
import { type MeasureResult, measured, unformed } from './measure.js';

/** The largest or smallest size of a response of the loop over the frequencies that a requirement names. */
export function extremeOverRange(
  loop: LoopView,
  response: LoopResponse,
  which: 'largest' | 'smallest',
  quantity: (name: string) => number | undefined,
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
  return measured(extremesOverBand(loop.equations, response, low, Math.min(high, highest))[which].value);
}

function hertz(frequency: number): string {
  return `${Number((frequency / (2 * Math.PI)).toPrecision(4))} Hz`;
}
