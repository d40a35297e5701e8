import { type Matrix, zeros } from './matrix.js';
import type { StateEquations } from './state_equations.js';

/**
 * The loops that a loop transfer with several signals falls into: signals stay together where each acts on the other, also by
 * way of others. Where one acts on another but nothing comes back, L is block triangular, so that its eigenvalues are those
 * of the blocks on its diagonal, whatever is on the other side.
 * @param loop L; its inputs and outputs are the changes of the signals, one signal after the other, again and again.
 * @returns one transfer for each group of signals, with the states that take part in it.
 */
export function separateLoops(loop: StateEquations, signals: number): StateEquations[] {
  const all = Array.from({ length: signals }, (_, signal) => signal);
  const actsOn = all.map((from) => {
    const { rows } = reached(loop, loop.b.columns, (column) => column % signals === from);
    return new Set(rows.map((row) => row % signals));
  });
  const further = actsOn.map((direct) => spread(direct, (signal) => actsOn[signal]));
  const groups: number[][] = [];
  for (const signal of all) {
    const group = groups.find(([first]) => further[first].has(signal) && further[signal].has(first));
    if (group) group.push(signal);
    else groups.push([signal]);
  }
  return groups.length === 1 ? [loop] : groups.map((group) => partOf(loop, signals, group));
}

function partOf(loop: StateEquations, signals: number, group: readonly number[]): StateEquations {
  const { a, b, c, d, period } = loop;
  const isInside = (at: number): boolean => group.includes(at % signals);
  const ends = Array.from({ length: b.columns }, (_, at) => at).filter(isInside);
  const moved = reached(loop, b.columns, isInside).states;
  const moving = statesSeen(loop, ends);
  const states = [...moved].filter((state) => moving.has(state)).sort((i, j) => i - j);
  return {
    a: picked(a, states, states),
    b: picked(b, states, ends),
    c: picked(c, ends, states),
    d: picked(d, ends, ends),
    period,
  };
}

/** States and outputs that some of the inputs act on. */
function reached(
  { a, b, c, d }: StateEquations,
  inputs: number,
  isInput: (column: number) => boolean,
): { states: Set<number>; rows: number[] } {
  const columns = Array.from({ length: inputs }, (_, column) => column).filter(isInput);
  const first = new Set(columns.flatMap((column) => rowsUnder(b, column)));
  const states = spread(first, (state) => rowsUnder(a, state));
  return {
    states,
    rows: [
      ...columns.flatMap((column) => rowsUnder(d, column)),
      ...[...states].flatMap((state) => rowsUnder(c, state)),
    ],
  };
}

/** States that act on some of the outputs. */
function statesSeen({ a, c }: StateEquations, rows: readonly number[]): Set<number> {
  return spread(new Set(rows.flatMap((row) => columnsIn(c, row))), (state) => columnsIn(a, state));
}

function rowsUnder({ rows, columns, data }: Matrix, column: number): number[] {
  return Array.from({ length: rows }, (_, row) => row).filter((row) => data[row * columns + column] !== 0);
}

function columnsIn({ columns, data }: Matrix, row: number): number[] {
  return Array.from({ length: columns }, (_, column) => column).filter(
    (column) => data[row * columns + column] !== 0,
  );
}

function spread(first: Iterable<number>, next: (one: number) => Iterable<number>): Set<number> {
  const found = new Set(first);
  for (const one of found) for (const following of next(one)) found.add(following);
  return found;
}

function picked(matrix: Matrix, rows: readonly number[], columns: readonly number[]): Matrix {
  const result = zeros(rows.length, columns.length);
  rows.forEach((row, i) => {
    columns.forEach((column, j) => {
      result.data[i * columns.length + j] = matrix.data[row * matrix.columns + column];
    });
  });
  return result;
}
