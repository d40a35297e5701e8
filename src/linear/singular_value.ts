import type { Complex } from './complex.js';
import { NumericFailure } from './numeric_failure.js';

/** The largest singular value of a complex matrix with its directions: matrix·input = value·output, both of length one. */
export interface LargestSingularValue {
  value: number;
  input: Complex[];
  output: Complex[];
}

const MOST_ROUNDS = 60;

/**
 * The largest singular value, by plane rotations that make the columns orthogonal (Hestenes, 1958).
 * @param matrix one row for each output; not empty. It is not changed.
 * @throws NumericFailure when an entry is not finite or the rotations do not settle within their cap.
 */
export function largestSingularValue(matrix: readonly (readonly Complex[])[]): LargestSingularValue {
  const inputs = matrix[0].length;
  const columns = Array.from({ length: inputs }, (_, j) => matrix.map((row) => ({ ...row[j] })));
  const turns = Array.from({ length: inputs }, (_, j) =>
    Array.from({ length: inputs }, (_, i) => ({ real: i === j ? 1 : 0, imaginary: 0 })),
  );
  let round = 0;
  while (makeOrthogonal(columns, turns)) {
    if (++round > MOST_ROUNDS) {
      throw new NumericFailure(
        `the singular values of a ${matrix.length} x ${inputs} response were not found in ${MOST_ROUNDS} rounds`,
      );
    }
  }
  const lengths = columns.map((column) => Math.sqrt(dot(column, column).real));
  if (!lengths.every(Number.isFinite)) {
    throw new NumericFailure(
      `a ${matrix.length} x ${inputs} response is not finite, so that it has no singular values`,
    );
  }
  const largest = lengths.indexOf(Math.max(...lengths));
  const value = lengths[largest];
  const output = columns[largest].map(({ real, imaginary }) =>
    value > 0 ? { real: real / value, imaginary: imaginary / value } : { real: 0, imaginary: 0 },
  );
  return { value, input: turns[largest], output };
}

/** One round over all pairs of columns; says whether any was turned. */
function makeOrthogonal(columns: Complex[][], turns: Complex[][]): boolean {
  let turned = false;
  for (let p = 0; p < columns.length; p++) {
    for (let q = p + 1; q < columns.length; q++) {
      const first = dot(columns[p], columns[p]).real;
      const second = dot(columns[q], columns[q]).real;
      const across = dot(columns[p], columns[q]);
      const size = Math.hypot(across.real, across.imaginary);
      // Orthogonal to rounding, or too weakly coupled to matter to the larger of the two.
      if (!(size > 4 * Number.EPSILON * Math.sqrt(first * second))) continue;
      if (!(size > 1e-3 * Number.EPSILON * Math.max(first, second))) continue;
      turned = true;
      const ratio = (second - first) / (2 * size);
      const tangent = Math.sign(ratio || 1) / (Math.abs(ratio) + Math.sqrt(1 + ratio * ratio));
      const cosine = 1 / Math.sqrt(1 + tangent * tangent);
      const unit = { real: across.real / size, imaginary: across.imaginary / size };
      rotate(columns[p], columns[q], cosine, tangent * cosine, unit);
      rotate(turns[p], turns[q], cosine, tangent * cosine, unit);
    }
  }
  return turned;
}

/** p ← cosine·p − sine·q·ū, q ← sine·p·u + cosine·q, where u has the angle of pᴴ·q. */
function rotate(p: Complex[], q: Complex[], cosine: number, sine: number, u: Complex): void {
  for (let i = 0; i < p.length; i++) {
    const a = p[i];
    const b = q[i];
    p[i] = {
      real: cosine * a.real - sine * (b.real * u.real + b.imaginary * u.imaginary),
      imaginary: cosine * a.imaginary - sine * (b.imaginary * u.real - b.real * u.imaginary),
    };
    q[i] = {
      real: sine * (a.real * u.real - a.imaginary * u.imaginary) + cosine * b.real,
      imaginary: sine * (a.real * u.imaginary + a.imaginary * u.real) + cosine * b.imaginary,
    };
  }
}

/** xᴴ·y */
function dot(x: readonly Complex[], y: readonly Complex[]): Complex {
  let real = 0;
  let imaginary = 0;
  for (let i = 0; i < x.length; i++) {
    real += x[i].real * y[i].real + x[i].imaginary * y[i].imaginary;
    imaginary += x[i].real * y[i].imaginary - x[i].imaginary * y[i].real;
  }
  return { real, imaginary };
}
