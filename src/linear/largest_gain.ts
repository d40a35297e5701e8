import type { Complex } from './complex.js';
import { prepareLevelFrequencies } from './level_frequencies.js';
import type { Peak } from './peak.js';
import { areStable, frequencyNear, polesOf } from './poles.js';
import { type Band, type GainProbe, polished, provenPeak } from './proven_peak.js';
import { rootBetween } from './root_finding.js';
import { largestSingularValue } from './singular_value.js';
import type { StateEquations } from './state_equations.js';
import { prepareTransfer, type Transfer } from './transfer.js';

/**
 * The largest gain over frequency, from any direction of the inputs to the outputs (the largest singular value of the
 * response), proved to a share of 1e-10. Inputs and outputs count in the units they have.
 * @param within rad/s, both ends included; all frequencies unless given.
 * @returns Infinity for a system that is not stable.
 * @throws NumericFailure when an entry is not finite or a search meets its cap.
 */
export function largestGain(system: StateEquations, within?: Band): Peak {
  const { period } = system;
  const poles = polesOf(system.a, period);
  if (!areStable(poles, period)) return { value: Number.POSITIVE_INFINITY, frequency: undefined };
  const highest = period === undefined ? Number.POSITIVE_INFINITY : Math.PI / period;
  const band = within ?? { low: 0, high: highest };
  const probe = gainProbe(system);
  const near = poles.flatMap((pole) => frequenciesNear(pole, period));
  const inside = near.filter((frequency) => frequency > band.low && frequency < band.high);
  const start = [band.low, ...inside, band.high]
    .map((frequency) => ({
      value: frequency === Number.POSITIVE_INFINITY ? feedthroughGain(system) : probe.gainAt(frequency),
      frequency,
    }))
    .reduce((best, peak) => (peak.value > best.value ? peak : best));
  if (band.low === band.high) return start;
  return polished(provenPeak(prepareLevelFrequencies(system), start, probe, band), probe, band);
}

function frequenciesNear(pole: Complex, period: number | undefined): number[] {
  const near = frequencyNear(pole, period);
  return period === undefined ? [near, Math.hypot(pole.real, pole.imaginary)] : [near];
}

function feedthroughGain({ d }: StateEquations): number {
  const rows = Array.from({ length: d.rows }, (_, i) =>
    Array.from({ length: d.columns }, (_, j) => ({ real: d.data[i * d.columns + j], imaginary: 0 })),
  );
  return largestSingularValue(rows).value;
}

function gainProbe(system: StateEquations): GainProbe {
  const transfers = Array.from({ length: system.b.columns }, (_, input) => prepareTransfer(system, input));
  const gainAt = (frequency: number): number =>
    largestSingularValue(responseAndSlope(transfers, frequency).response).value;
  const slopeAt = (frequency: number): number => {
    const { response, slope } = responseAndSlope(transfers, frequency);
    const { input, output } = largestSingularValue(response);
    return realForm(output, slope, input);
  };
  return {
    gainAt,
    peakBetween(left, right) {
      if (!(slopeAt(left) > 0 && slopeAt(right) < 0)) return undefined;
      const frequency = rootBetween(slopeAt, left, right);
      return { value: gainAt(frequency), frequency };
    },
  };
}

/** The response, one row for each output, and its derivative by frequency. */
function responseAndSlope(
  transfers: readonly Transfer[],
  frequency: number,
): { response: Complex[][]; slope: Complex[][] } {
  const outputs = transfers[0].outputs;
  const size = 2 + 2 * outputs;
  const parts = new Float64Array(2 * size);
  const response: Complex[][] = Array.from({ length: outputs }, () => []);
  const slope: Complex[][] = Array.from({ length: outputs }, () => []);
  for (const transfer of transfers) {
    transfer.evaluateWithSlope(frequency, parts);
    for (let k = 0; k < outputs; k++) {
      const at = 2 + 2 * k;
      const value = divide(parts[at], parts[at + 1], parts[0], parts[1]);
      response[k].push(value);
      // (N/D)′ = (N′ − (N/D)·D′)/D
      const real = parts[size + at] - value.real * parts[size] + value.imaginary * parts[size + 1];
      const imaginary = parts[size + at + 1] - value.real * parts[size + 1] - value.imaginary * parts[size];
      slope[k].push(divide(real, imaginary, parts[0], parts[1]));
    }
  }
  return { response, slope };
}

function divide(real: number, imaginary: number, byReal: number, byImaginary: number): Complex {
  const square = byReal * byReal + byImaginary * byImaginary;
  return {
    real: (real * byReal + imaginary * byImaginary) / square,
    imaginary: (imaginary * byReal - real * byImaginary) / square,
  };
}

/** Re(uᴴ·m·v) */
function realForm(u: readonly Complex[], m: readonly (readonly Complex[])[], v: readonly Complex[]): number {
  let sum = 0;
  for (let i = 0; i < u.length; i++) {
    for (let j = 0; j < v.length; j++) {
      const real = m[i][j].real * v[j].real - m[i][j].imaginary * v[j].imaginary;
      const imaginary = m[i][j].real * v[j].imaginary + m[i][j].imaginary * v[j].real;
      sum += u[i].real * real + u[i].imaginary * imaginary;
    }
  }
  return sum;
}
