import type { FixedFormat, overflows, roundings } from './fixed_formats.js';

/** Floating point: `float32` rounds every operation, `float32_fused` takes x·y + z in one. */
export type FloatArithmetic = 'float64' | 'float32' | 'float32_fused';

/** Fixed point, or integers where there are no fractional bits. */
export interface FixedArithmetic extends FixedFormat {
  /** As written, such as Q1.15 or int32. */
  format: string;
  rounding: (typeof roundings)[number];
  overflow: (typeof overflows)[number];
  /** Width of the sums of products in bits; without it every product is rounded into the format by itself. */
  accumulator?: number;
}

/** How the target computes. */
export type Arithmetic = FloatArithmetic | FixedArithmetic;
