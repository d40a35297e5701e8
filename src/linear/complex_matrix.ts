import type { Complex } from './complex.js';
import { type Matrix, zeros } from './matrix.js';

/** A complex matrix, row by row. */
export type ComplexMatrix = readonly (readonly Complex[])[];

/** a + b */
export function sum(a: Complex, b: Complex): Complex {
  return { real: a.real + b.real, imaginary: a.imaginary + b.imaginary };
}

/** a·b */
export function product(a: Complex, b: Complex): Complex {
  return {
    real: a.real * b.real - a.imaginary * b.imaginary,
    imaginary: a.real * b.imaginary + a.imaginary * b.real,
  };
}

/** factor·z */
export function scaled({ real, imaginary }: Complex, factor: number): Complex {
  return { real: factor * real, imaginary: factor * imaginary };
}

/** e^{j·angle} */
export function wave(angle: number): Complex {
  return { real: Math.cos(angle), imaginary: Math.sin(angle) };
}

/** m·y */
export function applied(m: ComplexMatrix, y: readonly Complex[]): Complex[] {
  return m.map((row) =>
    row.reduce<Complex>((total, entry, j) => sum(total, product(entry, y[j])), { real: 0, imaginary: 0 }),
  );
}

/** (I − s)·x, square matrices. */
export function oneLess(s: ComplexMatrix, x: ComplexMatrix): Complex[][] {
  return s.map((row, i) =>
    x[0].map((_, k) =>
      row.reduce<Complex>((total, entry, j) => sum(total, scaled(product(entry, x[j][k]), -1)), x[i][k]),
    ),
  );
}

/** The same map on real and imaginary parts beside each other: a real matrix of twice the size. */
export function realForm(m: ComplexMatrix): Matrix {
  const result = zeros(2 * m.length, 2 * m[0].length);
  m.forEach((row, i) => {
    row.forEach(({ real, imaginary }, j) => {
      const at = 2 * i * result.columns + 2 * j;
      result.data[at] = real;
      result.data[at + 1] = -imaginary;
      result.data[at + result.columns] = imaginary;
      result.data[at + result.columns + 1] = real;
    });
  });
  return result;
}
