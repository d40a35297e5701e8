/** A complex number. */
export interface Complex {
  real: number;
  imaginary: number;
}

/** The absolute value, without overflow on the way. */
export function magnitude(z: Complex): number {
  return Math.hypot(z.real, z.imaginary);
}
