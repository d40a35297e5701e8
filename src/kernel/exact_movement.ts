import { discretise } from '../linear/exponential.js';
import { type Matrix, zeros } from '../linear/matrix.js';
import type { AffineForm } from '../loop/affine.js';
import { Evaluation } from '../loop/evaluate.js';
import type { CompiledLoop } from './compile.js';

/** Tables that are kept at a time. */
const mostTables = 1024;
const mostPieces = 64;

/** A linear system x' = rates·x + input·(sources, 1), as it is between two jumps, with the movement of each length of step. */
interface Piece {
  rates: Matrix;
  input: Matrix;
  tables: Map<number, Float64Array>;
}

/**
 * Movement of one plant that is linear between two jumps, by the matrix exponential: for each choice that its switches make,
 * and each length of step, a table.
 */
export class ExactMovement {
  private readonly values: Float64Array;
  private readonly moved: Float64Array;
  private readonly switched: Float64Array;
  private readonly pieces = new Map<string, Piece>();
  private current: Piece | undefined;

  constructor(
    private readonly compiled: CompiledLoop,
    private readonly form: AffineForm,
  ) {
    this.values = new Float64Array(form.sources.length + form.switches.length);
    this.switched = new Float64Array(form.switches.length);
    this.moved = new Float64Array(compiled.loop.states.length);
  }

  /** Rates of the states in the states (1/s) as the switches are in `m`. */
  rates(m: Float64Array): Matrix {
    this.compiled.readSources(m, this.values);
    return this.pieceAt(m).rates;
  }

  /** Moves the states by a share of h (s): a sum of halves, quarters … of the step, whose tables serve every jump in it. */
  move(m: Float64Array, h: number, share: number): number {
    this.compiled.readSources(m, this.values);
    const piece = this.pieceAt(m);
    for (let left = share, part = 1; left > 0; part /= 2) {
      if (left < part) continue;
      this.moveBy(m, tableOf(piece, h * part));
      left -= part;
    }
    return share;
  }

  private moveBy(m: Float64Array, table: Float64Array): void {
    const { moved, values } = this;
    const { state } = this.compiled.layout;
    const sources = this.form.sources.length;
    let at = 0;
    for (let i = 0; i < moved.length; i++) {
      let sum = 0;
      for (let j = 0; j < moved.length; j++) sum += table[at++] * m[state + j];
      for (let j = 0; j < sources; j++) sum += table[at++] * values[j];
      moved[i] = sum + table[at++];
    }
    m.set(moved, state);
  }

  private pieceAt(m: Float64Array): Piece {
    const { values, switched } = this;
    const first = values.length - switched.length;
    if (this.current && switched.every((value, i) => value === values[first + i])) return this.current;
    switched.set(values.subarray(first));
    const key = switched.join();
    const piece = this.pieces.get(key) ?? this.makePiece(m);
    if (this.pieces.size < mostPieces) this.pieces.set(key, piece);
    this.current = piece;
    return piece;
  }

  private makePiece(m: Float64Array): Piece {
    const { loop, layout } = this.compiled;
    const part = (from: number, { length }: { length: number }): Float64Array => m.slice(from, from + length);
    const evaluation = new Evaluation({
      parameter: part(layout.parameter, loop.parameters),
      input: part(layout.input, loop.inputs),
      mode: part(layout.mode, loop.modes),
      held: part(layout.held, loop.held),
    });
    const n = loop.states.length;
    const rates = zeros(n, n);
    const input = zeros(n, this.form.sources.length + 1);
    this.form.terms(
      (node) => evaluation.of(node),
      (row, of, factor) => {
        if (of === 'constant') input.data[(row + 1) * input.columns - 1] += factor;
        else if (of.kind === 'leaf' && of.leaf === 'state') rates.data[row * n + of.index] += factor;
        else input.data[row * input.columns + this.form.sources.indexOf(of)] += factor;
      },
    );
    return { rates, input, tables: new Map() };
  }
}

function tableOf({ rates, input, tables }: Piece, duration: number): Float64Array {
  const known = tables.get(duration);
  if (known) return known;
  const { phi, gamma } = discretise(rates, input, duration);
  const [n, k] = [phi.columns, gamma.columns];
  const table = new Float64Array(n * (n + k));
  for (let i = 0; i < n; i++) {
    table.set(phi.data.subarray(i * n, (i + 1) * n), i * (n + k));
    table.set(gamma.data.subarray(i * k, (i + 1) * k), i * (n + k) + n);
  }
  if (tables.size < mostTables) tables.set(duration, table);
  return table;
}
