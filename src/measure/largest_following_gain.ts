import { COMPLEMENTARY } from '../linear/loop_response.js';
import { sizeOverRange } from './frequency_range.js';

/** The largest gain around the closed loop over a range of frequencies. */
export const largestFollowingGain = sizeOverRange({
  name: 'largest_following_gain',
  response: COMPLEMENTARY,
  which: 'largest',
  meaning:
    'max |L/(1 + L)| from `from_frequency` to `to_frequency`, or at `frequency` (of several rates: root-mean-square of all that returns of a sine added to the signal, at whatever frequencies, over that of the sine); a ratio or dB; infinite when the closed loop is unstable',
});
