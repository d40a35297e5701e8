import type { Complex } from './complex.js';
import { NumericFailure } from './numeric_failure.js';

const mostRounds = 60;

/**
 * The eigenvalues of a small complex matrix, each as often as its multiplicity: QR with the shift of Wilkinson (1965) on
 * the leading block of its Hessenberg form, which shrinks by one whenever its last row has settled. For matrices of up to a few dozen rows.
 * @throws NumericFailure when an entry is not finite or a row does not settle within its cap.
 */
export function complexEigenvalues(matrix: readonly (readonly Complex[])[]): Complex[] {
  const a = matrix.map((row) => row.map((entry) => ({ ...entry })));
  if (!a.flat().every(({ real, imaginary }) => Number.isFinite(real) && Number.isFinite(imaginary))) {
    throw new NumericFailure('the eigenvalues of a matrix with an entry that is not finite were asked for');
  }
  bringToHessenbergForm(a);
  const found: Complex[] = [];
  for (let size = a.length; size > 0; ) {
    let round = 0;
    while (!lastRowSettled(a, size)) {
      if (++round > mostRounds) {
        throw new NumericFailure(
          `an eigenvalue of a complex matrix of ${matrix.length} rows was not found in ${mostRounds} rounds`,
        );
      }
      qrStep(a, size, round % 11 === 10 ? largestEntry(a, size) : wilkinsonShift(a, size));
    }
    found.push(a[size - 1][size - 1]);
    size--;
  }
  return found;
}

function lastRowSettled(a: Complex[][], size: number): boolean {
  const row = a[size - 1];
  let beside = 0;
  for (let j = 0; j < size - 1; j++) beside += Math.hypot(row[j].real, row[j].imaginary);
  if (beside < negligible) return true;
  const last = a[size - 1][size - 1];
  const above = a[size - 2][size - 2];
  const scale = Math.hypot(last.real, last.imaginary) + Math.hypot(above.real, above.imaginary);
  return beside <= Number.EPSILON * scale;
}

/** The eigenvalue of the last two rows and columns that is nearer to the last entry. */
function wilkinsonShift(a: Complex[][], size: number): Complex {
  const [p, q, r, s] = [
    a[size - 2][size - 2],
    a[size - 2][size - 1],
    a[size - 1][size - 2],
    a[size - 1][size - 1],
  ];
  const half = { real: (p.real - s.real) / 2, imaginary: (p.imaginary - s.imaginary) / 2 };
  const root = squareRoot(plus(times(half, half), times(q, r)));
  const sum = plus(half, root);
  const rest = { real: half.real - root.real, imaginary: half.imaginary - root.imaginary };
  const nearer = sizeOf(sum) < sizeOf(rest) ? sum : rest;
  return plus(s, nearer);
}

/** Breaks a cycle in which the usual shift does not settle. */
function largestEntry(a: Complex[][], size: number): Complex {
  let most = 0;
  for (let i = 0; i < size; i++) for (let j = 0; j < size; j++) most = Math.max(most, sizeOf(a[i][j]));
  return { real: most, imaginary: 0 };
}

/** A plane rotation of two neighbouring rows or columns, the first of them at `at`. */
interface Turn {
  at: number;
  c: number;
  s: Complex;
}

/** Makes what lies below the first subdiagonal zero by plane rotations, column after column. */
function bringToHessenbergForm(a: Complex[][]): void {
  for (let j = 0; j < a.length - 2; j++) {
    for (let i = a.length - 1; i > j + 1; i--) {
      const turn = turnRows(a, i - 1, j, a.length);
      if (turn) turnColumns(a, turn, a.length);
    }
  }
}

/** Leading block − shift = Q·R by plane rotations, then R·Q + shift; the block keeps its Hessenberg form. */
function qrStep(a: Complex[][], size: number, shift: Complex): void {
  for (let i = 0; i < size; i++) a[i][i] = plus(a[i][i], { real: -shift.real, imaginary: -shift.imaginary });
  const turns: Turn[] = [];
  for (let j = 0; j < size - 1; j++) {
    const turn = turnRows(a, j, j, size);
    if (turn) turns.push(turn);
  }
  // Row by row from the left only the rows down to the rotation's own have entries yet.
  for (const turn of turns) turnColumns(a, turn, turn.at + 2);
  for (let i = 0; i < size; i++) a[i][i] = plus(a[i][i], shift);
}

/** Turns rows `at` and `at + 1` from a column on so that the lower one is zero in that column; nothing where it is. */
function turnRows(a: Complex[][], at: number, column: number, size: number): Turn | undefined {
  const [upper, lower] = [a[at], a[at + 1]];
  const turn = rotationFor(upper[column], lower[column]);
  if (!turn) return undefined;
  for (let k = column; k < size; k++) [upper[k], lower[k]] = turned(upper[k], lower[k], turn.c, turn.s);
  lower[column] = { real: 0, imaginary: 0 };
  return { at, ...turn };
}

/** The same rotation, reversed, of the columns, down to a row. */
function turnColumns(a: Complex[][], { at, c, s }: Turn, rows: number): void {
  const conjugate = { real: s.real, imaginary: -s.imaginary };
  for (let k = 0; k < rows; k++) [a[k][at], a[k][at + 1]] = turned(a[k][at], a[k][at + 1], c, conjugate);
}

/** Below this an entry counts as zero: its digits would be lost in the sizes of a rotation. */
const negligible = 1e-200;

/** Cosine and sine that turn (x, y) into (r, 0); undefined where y is zero already. */
function rotationFor(x: Complex, y: Complex): { c: number; s: Complex } | undefined {
  const [below, above] = [sizeOf(y), sizeOf(x)];
  if (below < negligible) return undefined;
  if (above < negligible) return { c: 0, s: { real: y.real / below, imaginary: -y.imaginary / below } };
  const length = Math.hypot(above, below);
  const unit = { real: x.real / above, imaginary: x.imaginary / above };
  const s = times(unit, { real: y.real / length, imaginary: -y.imaginary / length });
  return { c: above / length, s };
}

/** (c·x + s·y, −s̄·x + c·y). */
function turned(x: Complex, y: Complex, c: number, s: Complex): [Complex, Complex] {
  return [
    {
      real: c * x.real + s.real * y.real - s.imaginary * y.imaginary,
      imaginary: c * x.imaginary + s.real * y.imaginary + s.imaginary * y.real,
    },
    {
      real: c * y.real - (s.real * x.real + s.imaginary * x.imaginary),
      imaginary: c * y.imaginary - (s.real * x.imaginary - s.imaginary * x.real),
    },
  ];
}

function sizeOf({ real, imaginary }: Complex): number {
  return Math.hypot(real, imaginary);
}

function plus(a: Complex, b: Complex): Complex {
  return { real: a.real + b.real, imaginary: a.imaginary + b.imaginary };
}

function times(a: Complex, b: Complex): Complex {
  return {
    real: a.real * b.real - a.imaginary * b.imaginary,
    imaginary: a.real * b.imaginary + a.imaginary * b.real,
  };
}

function squareRoot({ real, imaginary }: Complex): Complex {
  const size = Math.hypot(real, imaginary);
  const root = Math.sqrt((size + Math.abs(real)) / 2);
  if (root === 0) return { real: 0, imaginary: 0 };
  const other = imaginary / (2 * root);
  return real >= 0
    ? { real: root, imaginary: other }
    : { real: Math.abs(other), imaginary: imaginary < 0 ? -root : root };
}
