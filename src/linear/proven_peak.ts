import { NumericFailure } from './numeric_failure.js';
import type { Peak } from './peak.js';

/** How far above the peak found so far is tested for more, as a share. */
const RESOLUTION = 1e-10;
const MOST_ROUNDS = 40;
/** A gain of this size, or nothing above one over it, is as good as infinite, or zero: its digits are rounding. */
const BEYOND_COUNTING = 1e13;

/** How a response is looked at while its largest gain is sought; frequencies in rad/s. */
export interface GainProbe {
  gainAt(frequency: number): number;
  /** The peak between two frequencies, or undefined when the gain does not rise and fall between them. */
  peakBetween(left: number, right: number): Peak | undefined;
}

/** A range of frequencies, rad/s. */
export interface Band {
  low: number;
  high: number;
}

/**
 * The largest gain over a band of frequencies, to a share of 1e-10, from a first guess: the level just above the best peak so
 * far is tested by the eigenvalues of a Hamiltonian matrix, and between the frequencies they give the response is looked
 * at; no improvement there proves that no peak is higher (Bruinsma and Steinbuch, 1990; Boyd and Balakrishnan, 1990).
 * @param levelFrequencies rad/s, ascending: among them all frequencies at which the gain equals a level.
 * @param start a gain that the response reaches, at least its gain at both ends of the band, of which the upper may be infinite.
 * @throws NumericFailure when the search does not end within its cap.
 */
export function provenPeak(
  levelFrequencies: (level: number) => readonly number[],
  start: Peak,
  probe: GainProbe,
  { low, high }: Band,
): Peak {
  let best = start;
  // Beyond the last level a gain stays on that side on which it is at infinite frequency.
  const ends = Number.isFinite(high) ? [high] : [];
  for (let round = 0; round < MOST_ROUNDS; round++) {
    if (!(best.value < BEYOND_COUNTING)) return best;
    // A response that is zero everywhere has no level to test.
    const level = Math.max(best.value * (1 + RESOLUTION), 1 / BEYOND_COUNTING);
    const inside = levelFrequencies(level).filter((frequency) => frequency > low && frequency < high);
    const improved = highestBetween([low, ...inside, ...ends], level, probe);
    if (improved === undefined) return best;
    best = improved;
  }
  throw new NumericFailure(
    `the largest gain over frequency was not proved in ${MOST_ROUNDS} rounds; the largest found is ${best.value} at ${best.frequency} rad/s`,
  );
}

function highestBetween(frequencies: readonly number[], level: number, probe: GainProbe): Peak | undefined {
  let best: Peak | undefined;
  for (let i = 1; i < frequencies.length; i++) {
    const [left, right] = [frequencies[i - 1], frequencies[i]];
    const frequency = (left + right) / 2;
    const value = probe.gainAt(frequency);
    if (!(value > Math.max(level, best?.value ?? 0))) continue;
    best = { value, frequency };
    const peak = probe.peakBetween(left, right);
    if (peak && peak.value > value) best = peak;
  }
  return best;
}

/** A peak proved to a share of 1e-10 is known to about the root of that in frequency, against its width. */
const POLISHED_OVER = 1e-3;

/** The same peak with its frequency and value to the last digits, where it does not lie at an end of the band. */
export function polished(peak: Peak, { peakBetween }: GainProbe, { low, high }: Band): Peak {
  const { frequency } = peak;
  if (frequency === undefined || !(frequency > low && frequency < high)) return peak;
  const left = Math.max(low, frequency * (1 - POLISHED_OVER));
  const found = peakBetween(left, Math.min(high, frequency * (1 + POLISHED_OVER)));
  return found && found.value >= peak.value ? found : peak;
}
