import { formatNumber } from '../format_value.js';
import type { AxisMark } from './frame.js';

interface LogScale {
  (value: number): number;
  domain(): number[];
}

/** So few powers of ten leave room for what lies between them. */
const fewDecades = 3;

/** Marks of an axis over the logarithm: powers of ten, and 2 and 5 times these where there are few. */
export function logMarks(scale: LogScale): AxisMark[] {
  const [low, high] = scale.domain();
  const first = Math.floor(Math.log10(low) + 1e-9);
  const count = Math.min(20, Math.max(0, Math.floor(Math.log10(high) + 1e-9) - first + 1));
  const powers = Array.from({ length: count }, (_, at) => 10 ** (first + at));
  const steps = Math.log10(high / low) < fewDecades ? [1, 2, 5] : [1];
  return powers
    .flatMap((power) => steps.map((step) => step * power))
    .filter((at) => at >= low * (1 - 1e-9) && at <= high * (1 + 1e-9))
    .map((at) => ({ at: scale(at), text: formatNumber(at) }));
}

/** An angular frequency in rad/s as people write it, with the same in Hz. */
export function frequencyText(frequency: number): string {
  return `${formatNumber(frequency)} rad/s (${formatNumber(frequency / (2 * Math.PI), 3)} Hz)`;
}

/** 20·log10 of an amplitude ratio. */
export function decibels(ratio: number): number {
  return 20 * Math.log10(ratio);
}

/** The same with its unit: "6.02 dB"; a size of zero has none and is said so. */
export function decibelText(ratio: number): string {
  if (Number.isNaN(ratio)) return 'no number';
  return ratio === 0 ? 'zero' : `${formatNumber(decibels(ratio), 3)} dB`;
}
