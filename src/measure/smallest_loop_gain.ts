import { LOOP_GAIN } from '../linear/loop_response.js';
import { sizeOverRange } from './frequency_range.js';

/** The smallest loop gain over a range of frequencies, as rejection of slow disturbances asks for. */
export const smallestLoopGain = sizeOverRange({
  name: 'smallest_loop_gain',
  response: LOOP_GAIN,
  which: 'smallest',
  meaning:
    'min |L| from `from_frequency` to `to_frequency`, or at `frequency` (of several rates: L as for `crossover`); a ratio or dB',
});
