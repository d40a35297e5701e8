import { SENSITIVITY } from '../linear/loop_response.js';
import { sizeOverRange } from './frequency_range.js';

/** The largest gain of disturbances over a range of frequencies. */
export const largestSensitivity = sizeOverRange({
  name: 'largest_sensitivity',
  response: SENSITIVITY,
  which: 'largest',
  meaning:
    'max |1/(1 + L)| from `from_frequency` to `to_frequency`, or at `frequency` (of several rates: root-mean-square of all that the signal has of a sine added to it, at whatever frequencies, over that of the sine); a ratio or dB; infinite when the closed loop is unstable',
});
