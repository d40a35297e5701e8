import type { Complex } from '../linear/complex.js';

/** A wave of length one over so many samples: (1, e^{jθ}, e^{j2θ}, …)/√count, θ being its angle from one to the next in rad. */
export function waveOver(count: number, angle: number): Complex[] {
  const size = 1 / Math.sqrt(count);
  return Array.from({ length: count }, (_, at) => ({
    real: size * Math.cos(at * angle),
    imaginary: size * Math.sin(at * angle),
  }));
}

/** A matrix times a column. */
export function times(matrix: readonly (readonly Complex[])[], column: readonly Complex[]): Complex[] {
  return matrix.map((row) =>
    row.reduce(
      (sum, { real, imaginary }, j) => ({
        real: sum.real + real * column[j].real - imaginary * column[j].imaginary,
        imaginary: sum.imaginary + real * column[j].imaginary + imaginary * column[j].real,
      }),
      { real: 0, imaginary: 0 },
    ),
  );
}
