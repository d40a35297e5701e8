import { levelFrequencies } from './level_frequencies.js';
import { NumericFailure } from './numeric_failure.js';
import type { Peak } from './peak.js';
import type { StateEquations } from './state_equations.js';

/** How far above the peak found so far is tested for more, as a share. */
const RESOLUTION = 1e-10;
const MOST_ROUNDS = 40;

/** How a response is looked at while its largest gain is sought; frequencies in rad/s. */
export interface GainProbe {
  gainAt(frequency: number): number;
  /** The peak between two frequencies, or undefined when the gain does not rise and fall between them. */
  peakBetween(left: number, right: number): Peak | undefined;
}

/**
 * The largest gain over all frequencies, to a share of 1e-10, from a first guess: the level just above the best peak so
 * far is tested by the eigenvalues of a Hamiltonian matrix, and between the frequencies they give the response is looked
 * at; no improvement there proves that no peak is higher (Bruinsma and Steinbuch, 1990; Boyd and Balakrishnan, 1990).
 * @param image the response in continuous form: stable, of the same gains.
 * @param start a gain that the response reaches, at least its gain at zero and at infinite image frequency.
 * @param frequencyOf rad/s that belong to a frequency of the image.
 * @throws NumericFailure when the search does not end within its cap.
 */
export function provenPeak(
  image: StateEquations,
  start: Peak,
  probe: GainProbe,
  frequencyOf: (imageFrequency: number) => number,
): Peak {
  let best = start;
  if (image.a.rows === 0) return best;
  for (let round = 0; round < MOST_ROUNDS; round++) {
    // A response that is zero everywhere has no level to test.
    const level = Math.max(best.value * (1 + RESOLUTION), Number.MIN_VALUE ** 0.25);
    const improved = highestBetween([0, ...levelFrequencies(image, level)], level, probe, frequencyOf);
    if (improved === undefined) return best;
    best = improved;
  }
  throw new NumericFailure(
    `the largest gain over frequency was not proved in ${MOST_ROUNDS} rounds; the largest found is ${best.value} at ${best.frequency} rad/s`,
  );
}

function highestBetween(
  imageFrequencies: readonly number[],
  level: number,
  probe: GainProbe,
  frequencyOf: (imageFrequency: number) => number,
): Peak | undefined {
  let best: Peak | undefined;
  for (let i = 1; i < imageFrequencies.length; i++) {
    const frequency = frequencyOf((imageFrequencies[i - 1] + imageFrequencies[i]) / 2);
    const value = probe.gainAt(frequency);
    if (!(value > Math.max(level, best?.value ?? 0))) continue;
    best = { value, frequency };
    const peak = probe.peakBetween(frequencyOf(imageFrequencies[i - 1]), frequencyOf(imageFrequencies[i]));
    if (peak && peak.value > value) best = peak;
  }
  return best;
}
