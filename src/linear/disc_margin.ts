import { analyseLoop } from './loop_analysis.js';
import { peakOfLoop } from './loop_peaks.js';
import { BALANCED } from './loop_response.js';
import type { StateEquations } from './state_equations.js';

/** By how much gain and phase may change at the same time. */
export interface DiscMargin {
  /** The balanced disc margin α = 1/max|S − 1/2| with S = 1/(1 + L); zero for an unstable loop. */
  margin: number;
  /** Where it is smallest, in rad/s; undefined for an unstable loop. */
  frequency: number | undefined;
  /** The gain may change by any factor between these two. */
  gainRange: { down: number; up: number };
  /** The phase may change by this angle either way, in rad. */
  phaseMargin: number;
}

/**
 * The balanced disc margin of a loop transfer L (Blight, Dailey and Gangsaas, 1994; Seiler, Packard and Gahinet, 2020):
 * every factor (1 + αδ/2)/(1 − αδ/2) with |δ| < 1 leaves the loop stable. The gain range is (2 − α)/(2 + α) to
 * (2 + α)/(2 − α), the phase margin 2·atan(α/2).
 * @param deadTime pure delay in s of a continuous loop.
 * @throws as `marginsOfLoop`.
 */
export function discMarginOfLoop(loop: StateEquations, deadTime = 0): DiscMargin {
  const analysis = analyseLoop(loop, deadTime);
  if (!analysis.stable) {
    return { margin: 0, frequency: undefined, gainRange: { down: 1, up: 1 }, phaseMargin: 0 };
  }
  const { value, frequency } = peakOfLoop(analysis, BALANCED);
  const margin = 1 / value;
  return {
    margin,
    frequency,
    gainRange: {
      down: Math.max(0, (2 - margin) / (2 + margin)),
      up: margin < 2 ? (2 + margin) / (2 - margin) : Number.POSITIVE_INFINITY,
    },
    phaseMargin: 2 * Math.atan(margin / 2),
  };
}
