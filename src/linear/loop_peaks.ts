import type { FrequencySweep } from './frequency_sweep.js';
import type { LoopAnalysis } from './loop_analysis.js';
import { prepareLoopLevels } from './loop_levels.js';
import type { ClosedLoopRatio } from './loop_response.js';
import type { Peak } from './peak.js';
import { provenPeak } from './proven_peak.js';
import { rootBetween } from './root_finding.js';

/**
 * The largest size of a closed-loop response of a stable loop: the best of the sweep, then proved to be the largest.
 * With a dead time the sweep alone stands, because the proof needs a rational response.
 */
export function peakOfLoop({ sweep, atInfinity, sensitivity }: LoopAnalysis, ratio: ClosedLoopRatio): Peak {
  const start = sweptPeak(sweep, ratio, atInfinity);
  if (sensitivity === undefined) return start;
  const parts = new Float64Array(4);
  const probe = {
    gainAt: (frequency: number): number => {
      sweep.transfer.evaluate(frequency, parts);
      return sizeAt(parts, 0, ratio);
    },
    peakBetween: (left: number, right: number) => refinedPeak(sweep, ratio, left, right),
  };
  const high = sweep.period === undefined ? Number.POSITIVE_INFINITY : Math.PI / sweep.period;
  return provenPeak(prepareLoopLevels(sensitivity, ratio), start, probe, { low: 0, high });
}

/** Grid values down to this share of the largest one are refined: between two points a peak rises by a few per cent only. */
const WORTH_REFINING = 0.7;

/**
 * The largest peak that the sweep of a loop transfer L shows, each candidate refined by a zero of the exact slope.
 * @param atInfinity L at infinite frequency (continuous systems), or undefined for a sampled system.
 */
function sweptPeak(sweep: FrequencySweep, ratio: ClosedLoopRatio, atInfinity: number | undefined): Peak {
  const { frequencies, parts } = sweep;
  const sizes = Float64Array.from(frequencies, (_, i) => sizeAt(parts, 4 * i, ratio));
  let best: Peak = { value: 0, frequency: 0 };
  for (let i = 0; i < sizes.length; i++) {
    if (sizes[i] > best.value) best = { value: sizes[i], frequency: frequencies[i] };
  }
  const bar = WORTH_REFINING * best.value;
  for (let i = 0; i < sizes.length; i++) {
    const before = i > 0 ? sizes[i - 1] : 0;
    const after = i + 1 < sizes.length ? sizes[i + 1] : 0;
    if (sizes[i] < bar || sizes[i] < before || sizes[i] < after) continue;
    const left = frequencies[Math.max(i - 1, 0)];
    const right = frequencies[Math.min(i + 1, sizes.length - 1)];
    const peak = refinedPeak(sweep, ratio, left, right);
    if (peak && peak.value >= best.value) best = peak;
  }
  if (atInfinity === undefined) return best;
  const limit = Math.abs(ratio.loopWeight * atInfinity + ratio.unitWeight) / Math.abs(1 + atInfinity);
  return limit > best.value ? { value: limit, frequency: Number.POSITIVE_INFINITY } : best;
}

/** The peak where the slope changes from rising to falling between two frequencies; undefined where it does not. */
function refinedPeak(
  sweep: FrequencySweep,
  ratio: ClosedLoopRatio,
  left: number,
  right: number,
): Peak | undefined {
  const parts = new Float64Array(8);
  const slope = (frequency: number): number => {
    sweep.transfer.evaluateWithSlope(frequency, parts);
    return logarithmicSlope(parts, ratio);
  };
  if (!(slope(left) > 0 && slope(right) < 0)) return undefined;
  const frequency = rootBetween(slope, left, right);
  sweep.transfer.evaluate(frequency, parts);
  return { value: sizeAt(parts, 0, ratio), frequency };
}

function sizeAt(p: Float64Array, at: number, { loopWeight, unitWeight }: ClosedLoopRatio): number {
  const real = loopWeight * p[at + 2] + unitWeight * p[at];
  const imaginary = loopWeight * p[at + 3] + unitWeight * p[at + 1];
  const belowReal = p[at] + p[at + 2];
  const belowImaginary = p[at + 1] + p[at + 3];
  return Math.sqrt(
    (real * real + imaginary * imaginary) / (belowReal * belowReal + belowImaginary * belowImaginary),
  );
}

/** Half the derivative of ln(size²) by frequency: Re(top′/top − bottom′/bottom). */
function logarithmicSlope(p: Float64Array, { loopWeight, unitWeight }: ClosedLoopRatio): number {
  const top = quotientReal(
    loopWeight * p[6] + unitWeight * p[4],
    loopWeight * p[7] + unitWeight * p[5],
    loopWeight * p[2] + unitWeight * p[0],
    loopWeight * p[3] + unitWeight * p[1],
  );
  return top - quotientReal(p[4] + p[6], p[5] + p[7], p[0] + p[2], p[1] + p[3]);
}

/** Re((a + jb)/(c + jd)). */
function quotientReal(a: number, b: number, c: number, d: number): number {
  return (a * c + b * d) / (c * c + d * d);
}
