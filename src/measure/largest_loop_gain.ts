import { LOOP_GAIN } from '../linear/loop_response.js';
import { sizeOverRange } from './frequency_range.js';

/** The largest loop gain over a range of frequencies, as roll-off asks for. */
export const largestLoopGain = sizeOverRange({
  name: 'largest_loop_gain',
  response: LOOP_GAIN,
  which: 'largest',
  meaning:
    'max |L| from `from_frequency` to `to_frequency`, or at `frequency` (of several rates: L as for `crossover`); a ratio or dB',
});
